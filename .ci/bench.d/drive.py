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

folder, rounds, out = sys.argv[1], int(sys.argv[2]), sys.argv[3]
here = os.path.dirname(os.path.abspath(__file__))

TITLES = {
    "a": "Debye C_V at 1e6 temperatures", "b": "1e7 levels at 100 temperatures", "c": "fit, 500 points, 5 parameters",
    "cb": "1000 bootstrap refits", "d": "asymmetric top, J to 60", "e": "internal rotation, 401 plane waves",
    "g": "20,000-point density of states at 500 temperatures", "h": "Monte Carlo, 1e6 draws of 11 inputs",
    "i1": "F_1/2, 1e5 values", "i2": "inverse of F_1/2, 1e5 values", "i3": "Li_3/2, 1e5 values",
    "j": "SVG of 2,000 points with bars and a line", "k1": "fib(27)", "k2": "loop over 401 J and 500 T",
    "k3": "an integrand called 1e6 times",
}
# What the sides' results may differ by, relatively: rounding where nothing is
# said, drawn numbers, other quadratures of the same table.
AGREE = {"a": 1e-10, "c": 1e-9, "cb": None, "d": 1e-8, "e": 1e-8, "g": 1e-6, "h": 0.02, "j": None}

# Workloads that are measured at 1/4 and 1/16 of their size too.
GROW = ["a", "b", "c", "g", "h", "i1", "i2", "i3", "j"]

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


def kernels():
    """Cold start to the end of the first cell, and a trivial cell, with one
    client for both kernels."""
    from jupyter_client.manager import start_new_kernel
    found = {}
    for _ in range(rounds):
        for name, cell in (("python3", "2.5 * 3"), ("levelsum", "2.5 * 3")):
            start = time.perf_counter()
            manager, client = start_new_kernel(kernel_name=name, startup_timeout=120)
            client.execute_interactive(cell, timeout=120, output_hook=lambda m: None)
            first = time.perf_counter() - start
            trivial = []
            for _ in range(100):
                start = time.perf_counter()
                client.execute_interactive(cell, timeout=60, output_hook=lambda m: None)
                trivial.append(time.perf_counter() - start)
            client.stop_channels()
            manager.shutdown_kernel(now=True)
            found.setdefault((name, "start to first result"), []).append(first)
            found.setdefault((name, "trivial cell"), []).append(statistics.median(trivial))
    return [{"kernel": k, "what": w, "wall": statistics.median(v), "samples": v} for (k, w), v in found.items()]


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

    want = {
        "a/20000": 3 * mp.mpf("8.31446261815324") * mp.fsum(debye(343 / mp.mpf(1 + 999e-6 * 20000 * i)) for i in range(50)),
        "i1/2000": mp.fsum(fermi(-10 + 60 * ((i + 0.5) / 50)) for i in range(50)),
        "i3/2000": mp.fsum(mp.polylog(1.5, (i + 0.5) / 50) for i in range(50)),
    }
    return {k.split("/")[0]: float(abs(side.ask(k)["value"] / v - 1)) for k, v in want.items()}


def version(*names):
    from importlib.metadata import version
    return ", ".join(f"{n} {version(n)}" for n in names)


def main():
    load = [os.getloadavg()]
    model = re.search(r"model name\s*: (.*)", open("/proc/cpuinfo").read())
    machine = {"processor": model and model.group(1), "cores": os.cpu_count(), "system": platform.system(),
               "go": subprocess.run(["go", "env", "GOVERSION"], capture_output=True, text=True).stdout.strip(),
               "python": platform.python_version(), "peers": version("numpy", "scipy", "mpmath", "matplotlib", "ipykernel")}
    one, two = Side([f"{folder}/ours"], GOMAXPROCS="1"), Side([f"{folder}/ours"], GOMAXPROCS="2")
    peers = [Side([sys.executable, f"{here}/peer.py"]), Side([f"{folder}/peer"])]
    offered = [(side, name) for side in peers for name in side.list()]
    samples = {}  # (workload, side) to samples

    def note(workload, side, sample):
        samples.setdefault((workload, side), []).append(sample)

    for n in range(rounds):
        for w in TITLES:
            note(w, "Go, 1 processor", one.ask(w))
            note(w, "Go, 2 processors", two.ask(w))
            for side, name in offered:
                got = samples.get((w, name.split(" ", 1)[1]))
                if name.split(" ", 1)[0] != w or got and got[0]["wall"] > 60:
                    continue  # what takes so long is measured once
                note(w, name.split(" ", 1)[1], side.ask(name))
        for w in GROW:
            for part in 4, 16:
                note(f"{w}/{part}", "growth", one.ask(f"{w}/{part}"))
        for sample in run_cells():
            note(sample["name"], "cell", sample)
        print(f"round {n + 1} of {rounds} done", file=sys.stderr)
    started = kernels()
    load.append(os.getloadavg())
    exact = accuracy(one)

    rows, wrong, growth = [], [], {}
    for w in GROW:
        t = [statistics.median(s["cpu"] for s in samples[k]) for k in ((w, "Go, 1 processor"), (w + "/4", "growth"), (w + "/16", "growth"))]
        # The least-squares slope of ln t over ln n: three points, evenly spaced.
        growth[w] = math.log(t[0] / t[2]) / math.log(16)
    for (w, side), list_ in samples.items():
        if side == "growth":
            continue
        base = samples[w, "Go, 1 processor"]
        mid = lambda l, k: statistics.median(s[k] for s in l)
        size = f"{mid(list_, 'bytes') / 1e6:.3g}" if "bytes" in list_[0] else ""
        row = {"bytes": size, "workload": w, "side": side, "samples": list_, "wall": mid(list_, "wall"), "cpu": mid(list_, "cpu"),
               "wall_over_ours": mid(list_, "wall") / mid(base, "wall"), "cpu_over_ours": mid(list_, "cpu") / mid(base, "cpu")}
        rows.append(row)
        tol, want = AGREE.get(w, 1e-9), base[0]["value"]
        if tol is not None and abs(list_[0]["value"] - want) > tol * abs(want):
            wrong.append(f"{w}: {side} gives {list_[0]['value']!r}, Go {want!r}")
    with open(out, "w") as f:
        json.dump({"machine": machine, "load_before": load[0], "load_after": load[1], "rounds": rounds, "rows": rows,
                   "growth": growth, "accuracy": exact, "kernels": started, "disagreements": wrong}, f, indent=1)

    m = machine
    print(f"{m['processor']}, {m['cores']} cores; {m['go']}; Python {m['python']}, {m['peers']}; {rounds} rounds in turn, medians.")
    print(f"Load average {load[0][0]:.1f} before, {load[1][0]:.1f} after.", end=" ")
    if max(load[0][0], load[1][0]) > 0.5 * m["cores"]:
        print("**Under load**: other programs shared the processors, times of the clock say little, compare the processor's.")
    print("\n\n| workload | side | clock / ms | processor / ms | clock, ratio | processor, ratio | allocated / MB |\n|---|---|---:|---:|---:|---:|---:|")
    rows.sort(key=lambda r: list(TITLES).index(r["workload"]))
    last = None
    for r in rows:
        title = f"{r['workload']}. {TITLES[r['workload']]}" if r["workload"] != last else ""
        last = r["workload"]
        print(f"| {title} | {r['side']} | {1e3 * r['wall']:.3g} | {1e3 * r['cpu']:.3g} | {r['wall_over_ours']:.2f} | {r['cpu_over_ours']:.2f} | {r['bytes']} |")
    print("\nRatios are to ours in Go on one processor: above 1, ours is faster. f: not measured, there is no lattice package.\n")
    print("Time grows with the size to the power (from the size, a quarter and a sixteenth of it): " + ", ".join(f"{w} {g:.2f}" for w, g in growth.items()) + ".\n")
    print("Sums over 50 arguments against mpmath, relative difference: " + ", ".join(f"{w} {d:.1e}" for w, d in exact.items()) + ".\n")
    print("| kernel | what | clock / ms |\n|---|---|---:|")
    for k in started:
        print(f"| {k['kernel']} | {k['what']} | {1e3 * k['wall']:.3g} |")
    for line in wrong:
        print(f"\nThe sides disagree: {line}")
    return 1 if wrong else 0


sys.exit(main())
