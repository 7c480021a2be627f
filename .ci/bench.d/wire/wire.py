"""Measures the sockets of a kernel beside libzmq, in turn within one run.

usage: wire.py ECHO [ROUNDS]

ECHO is the program made of echo.go. The peer is a process of this script with
pyzmq, hence libzmq below a Python loop. One client, pyzmq too, talks to both.
Prints for each workload the median of each side and the median of the ratios
of the rounds, ours to libzmq's: below 1 is better for times.
"""

import statistics
import subprocess
import sys
import time

import zmq


def serve():
    context = zmq.Context()

    def bind(kind):
        s = context.socket(kind)
        s.sndhwm = 0
        s.bind("tcp://127.0.0.1:0")
        print(s.last_endpoint.decode(), flush=True)
        return s

    shell, beats, iopub = bind(zmq.ROUTER), bind(zmq.REP), bind(zmq.XPUB)
    poller = zmq.Poller()
    poller.register(shell, zmq.POLLIN)
    poller.register(beats, zmq.POLLIN)
    while True:
        for s, _ in poller.poll():
            m = s.recv_multipart()
            if s is beats:
                s.send_multipart(m)
            elif m[1].startswith(b"publish "):
                body = bytes(int(m[2]))
                frames = [b"stream", b"<IDS|MSG>", b"signature", b"header", b"parent", b"{}", body]
                for _ in range(int(m[1].split()[1])):
                    iopub.send_multipart(frames)
            else:
                s.send_multipart(m)


class Side:
    def __init__(self, command):
        self.process = subprocess.Popen(command, stdout=subprocess.PIPE, text=True)
        ends = [self.process.stdout.readline().strip() for _ in range(3)]
        context = zmq.Context.instance()
        self.shell, self.beats, self.iopub = (context.socket(k) for k in (zmq.DEALER, zmq.REQ, zmq.SUB))
        self.iopub.rcvhwm = 0
        self.iopub.subscribe(b"")
        for s, e in zip((self.shell, self.beats, self.iopub), ends):
            s.connect(e)
        time.sleep(0.5)

    def round_trip(self, s, frames, n=300):
        times = []
        for _ in range(n):
            t = time.perf_counter()
            s.send_multipart(frames)
            s.recv_multipart()
            times.append(time.perf_counter() - t)
        return statistics.median(times) * 1e6

    def heartbeat(self):
        return self.round_trip(self.beats, [b"ping"])

    def echo(self):
        body = bytes(200)
        return self.round_trip(self.shell, [b"<IDS|MSG>", b"0" * 64, body, body, b"{}", body])

    def publish(self, n, size):
        t = time.perf_counter()
        self.shell.send_multipart([b"publish %d" % n, b"%d" % size])
        for _ in range(n):
            self.iopub.recv_multipart()
        return (time.perf_counter() - t) / n * 1e6


def main():
    rounds = int(sys.argv[2]) if len(sys.argv) > 2 else 9
    sides = {"ours": Side([sys.argv[1]]), "libzmq": Side([sys.executable, __file__, "serve"])}
    works = {
        "heartbeat, us": Side.heartbeat,
        "shell echo of 6 frames, us": Side.echo,
        "iopub, 100k messages of 100 B, us each": lambda s: s.publish(100_000, 100),
        "iopub, 1000 messages of 100 kB, us each": lambda s: s.publish(1000, 100_000),
    }
    found = {w: {s: [] for s in sides} for w in works}
    for k in range(rounds):
        for w, f in works.items():
            order = list(sides.items())
            if k % 2:
                order.reverse()
            for name, side in order:
                found[w][name].append(f(side))
    for side in sides.values():
        side.process.kill()
    for w, by in found.items():
        ratio = statistics.median(a / b for a, b in zip(by["ours"], by["libzmq"]))
        print(f"{w:42} ours {statistics.median(by['ours']):8.1f}  libzmq {statistics.median(by['libzmq']):8.1f}  ratio {ratio:.2f}")


if __name__ == "__main__":
    if sys.argv[1:] == ["serve"]:
        serve()
    else:
        main()
