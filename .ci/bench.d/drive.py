"""Measures all sides in turn and writes what came out.

usage: drive.py FOLDER ROUNDS JSON

FOLDER holds the programs ours, peer and levelsum. One round asks every side for
every workload once, so that a change of the machine's load meets all of them."""
import json
import math
import os
import platform
import re
import statistics
import subprocess
import sys
import time

from kernels import measure
from page import TITLES, section

folder, rounds, out = sys.argv[1], int(sys.argv[2]), sys.argv[3]
here = os.path.dirname(os.path.abspath(__file__))

# What the sides' results may differ by, relatively: rounding where nothing is
# said, drawn numbers, other quadratures of the same table, other rules for the
# end of a fit. f is one state of a lattice, whose energy varies by 1 per cent.
AGREE = {"a": 1e-10, "c": 1e-8, "cb": None, "d": 1e-8, "e": 1e-8, "f": 0.08, "g": 1e-6, "h": 0.02, "j": None}

# OpenBLAS chooses its kernel for this processor, one thread.
plain = {k: v for k, v in os.environ.items() if not k.startswith("OPENBLAS_")}
plain["OPENBLAS_NUM_THREADS"] = "1"


class Side:
    def __init__(self, command, **environment):
        self.command, self.environment = command, plain | environment
        self.process = subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True, env=self.environment)

    def list(self):
        return subprocess.run(self.command + ["list"], capture_output=True, text=True, check=True, env=self.environment).stdout.splitlines()

    def ask(self, name):
        self.process.stdin.write(name + "\n")
        self.process.stdin.flush()
        return json.loads(self.process.stdout.readline())


def notebook():
    """The text that is timed as a program, as cells."""
    work = open(f"{here}/ours/work.go").read().split("package main\n", 1)[1]
    cells = [work] + [f'fmt.Println(timed("{w}"))' for w in TITLES]
    return {"nbformat": 4, "nbformat_minor": 5,
            "metadata": {"kernelspec": {"display_name": "Levelsum (Go)", "language": "go", "name": "levelsum"}},
            "cells": [{"cell_type": "code", "id": f"c{i}", "metadata": {}, "execution_count": None, "outputs": [], "source": s}
                      for i, s in enumerate(cells)]}


def run_cells():
    with open(f"{folder}/cells.ipynb", "w") as f:
        json.dump(notebook(), f)
    r = subprocess.run([f"{folder}/levelsum", "run", "-keep-going", "-o", f"{folder}/cells-out.ipynb", f"{folder}/cells.ipynb"],
                       capture_output=True, text=True, env=plain)
    if r.returncode:
        print(r.stdout + r.stderr, file=sys.stderr)
    with open(f"{folder}/cells-out.ipynb") as f:
        text = "".join("".join(o.get("text", "")) for c in json.load(f)["cells"] for o in c.get("outputs", []))
    return [json.loads(line) for line in text.splitlines() if line.startswith("{")]


def accuracy(side):
    """Sums over a few arguments against the same sums with 30 digits."""
    import mpmath as mp
    mp.mp.dps = 30

    def debye(x):
        x = mp.mpf(x)
        cuts = [0] + [c for c in (5, 20, 60, 100) if c < x] + [x]
        return 3 / x**3 * mp.quad(lambda t: t**4 * mp.exp(t) / mp.expm1(t)**2 if t else mp.mpf(0), cuts)

    def fermi(eta):
        edge = mp.sqrt(max(eta, 0))
        return 4 / mp.sqrt(mp.pi) * mp.quad(lambda u: u * u / (mp.exp(u * u - eta) + 1), [0, edge / 2, edge, edge + 2, edge + 5, edge + 10])

    def inverse(F):
        start = mp.log(F) + F / mp.sqrt(8) if F < 1.5 else (3 * mp.sqrt(mp.pi) * F / 4)**(mp.mpf(2) / 3)
        return mp.findroot(lambda eta: fermi(eta) - F, (start, start + 0.01), tol=1e-22)

    want = {
        "a/20000": 3 * mp.mpf("8.31446261815324") * mp.fsum(debye(343 / mp.mpf(1 + 999e-6 * 20000 * i)) for i in range(50)),
        "i1/2000": mp.fsum(fermi(-10 + 60 * ((i + 0.5) / 50)) for i in range(50)),
        "i3/2000": mp.fsum(mp.polylog(1.5, (i + 0.5) / 50) for i in range(50)),
        "i2/2000": mp.fsum(inverse(mp.e**(-8 + 14 * (i + mp.mpf(1) / 2) / 50)) for i in range(50)),
    }
    return {k.split("/")[0]: float(abs(side.ask(k)["value"] / v - 1)) for k, v in want.items()}


def version(*names):
    from importlib.metadata import version
    return ", ".join(f"{n} {version(n)}" for n in names)


def said(*command):
    """The first line that a program prints, "" if there is none."""
    try:
        return subprocess.run(command, capture_output=True, text=True).stdout.splitlines()[0]
    except (OSError, IndexError):
        return ""


def machine():
    cpu, memory = open("/proc/cpuinfo").read(), open("/proc/meminfo").read()

    def field(name):
        found = re.search(name + r"\s*: (.*)", cpu)
        return found.group(1) if found else "?"
    gsl = said("pkg-config", "--modversion", "gsl")
    return {"date": time.strftime("%d %B %Y").lstrip("0"), "processor": f"{field('model name')} (family {field('cpu family')}, model {field('model')})", "cores": os.cpu_count(),
            "memory": f"{int(re.search(r'MemTotal: *([0-9]+)', memory).group(1)) / 2**20:.0f} GiB", "system": f"{platform.system()} {platform.release()}",
            "go": said("go", "env", "GOVERSION"), "cc": said("cc", "--version"), "python": platform.python_version(),
            "peers": version("numpy", "scipy", "mpmath", "matplotlib", "ipykernel"), "gsl": "GSL " + gsl if gsl else "no GSL"}


def main():
    load, begun = [os.getloadavg()], time.monotonic()
    one, two = Side([f"{folder}/ours"], GOMAXPROCS="1"), Side([f"{folder}/ours"], GOMAXPROCS="2")
    peers = [Side([sys.executable, f"{here}/peer.py"]), Side([f"{folder}/peer"])]
    offered = [(side, *name.split(" ", 1)) for side in peers for name in side.list()]
    samples = {}  # by workload and side

    def note(workload, side, sample):
        samples.setdefault(workload, {}).setdefault(side, []).append(sample)

    for n in range(rounds):
        for w in TITLES:
            note(w, "Go, 1 processor", one.ask(w))
            note(w, "Go, 2 processors", two.ask(w))
            for side, workload, name in offered:
                if workload == w:
                    note(w, name, side.ask(f"{w} {name}"))
            for part in 4, 16:
                note(f"{w}/{part}", "Go, 1 processor", one.ask(f"{w}/{part}"))
        for sample in run_cells():
            note(sample["name"], "cell", sample)
        print(f"round {n + 1} of {rounds} done after {time.monotonic() - begun:.0f} s", file=sys.stderr)
    run = {"machine": machine(), "rounds": rounds, "load_before": load[0], "accuracy": accuracy(one), "ising": one.ask("fz")["value"], "samples": samples}
    for side in (one, two, *peers):
        side.process.stdin.close()
        side.process.wait()
    run["kernels"] = measure(rounds)
    run["load_after"] = os.getloadavg()
    # Clock and processor time of what has one thread differ where others run.
    stolen = [s["wall"] / s["cpu"] for w in ("f", "k2", "k3") for s in samples[w]["Go, 1 processor"]]
    run["busy"] = statistics.median(stolen) > 1.1

    run["growth"], wrong = {}, []
    for w in TITLES:
        amounts, times = [], []
        for part in w, w + "/4", w + "/16":
            list_ = samples[part]["Go, 1 processor"]
            amounts.append(list_[0]["amount"])
            times.append(statistics.median(s["cpu"] for s in list_))
        x, y = [math.log(a) for a in amounts], [math.log(t) for t in times]
        run["growth"][w] = {"amounts": amounts, "cpu": times, "exponent": statistics.linear_regression(x, y).slope}
        tol, want = AGREE.get(w, 1e-9), samples[w]["Go, 1 processor"][0]["value"]
        for side, list_ in samples[w].items():
            if tol is not None and not abs(list_[0]["value"] - want) <= tol * abs(want):
                wrong.append(f"{w}: {side} gives {list_[0]['value']!r}, Go {want!r}")
    run["medians"] = {w: {side: {k: statistics.median(s[k] for s in list_) for k in ("wall", "cpu", "bytes") if k in list_[0]}
                          for side, list_ in sides.items()} for w, sides in samples.items()}
    if not abs(run["ising"]) <= 3:
        wrong.append(f"f: the energy is {run['ising']:.1f} standard uncertainties from the exact one")
    run["disagreements"] = wrong
    with open(out, "w") as f:
        json.dump(run, f, indent=1)
    print(section(run))
    print(f"{time.monotonic() - begun:.0f} s", file=sys.stderr)
    return 1 if wrong else 0


sys.exit(main())
