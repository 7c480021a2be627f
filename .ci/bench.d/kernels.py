"""Measures two kernels with one client: starting, cells that do nothing or
little, a cell with a function, much output."""
import os
import statistics
import time

from jupyter_client.manager import start_new_kernel

KERNELS = ("levelsum", "python3")

# The work of a cell in both languages. %d makes functions new, also to what was
# compiled in an earlier run.
CELLS = {
    "an empty cell (a comment)": ("// nothing", "# nothing"),
    "a trivial cell, `2.5 * 3`": ("2.5 * 3", "2.5 * 3"),
    "a cell with a function": ("func twice%d(x float64) float64 { return 2 * x }\ntwice%d(%d)", "def twice%d(x): return 2 * x\ntwice%d(%d)"),
}
# Declared before the output is measured: what compiling takes is in the row above.
PRINT = ('func lines(n int) {\n\tline := strings.Repeat("x", 99)\n\tfor range n {\n\t\tfmt.Println(line)\n\t}\n}',
         'def lines(n):\n    line = "x" * 99\n    for _ in range(n):\n        print(line)')
OUTPUT = {"0.5 MB of output in lines of 100": 5_000, "1 MB of output": 10_000, "100 MB of output": 1_000_000}


class Kernel:
    def __init__(self, name):
        start = time.perf_counter()
        self.manager, self.client = start_new_kernel(kernel_name=name, startup_timeout=120)
        self.started = time.perf_counter() - start

    def run(self, code):
        """Seconds until the kernel is idle again, and the bytes it printed."""
        printed = 0

        def hook(message):
            nonlocal printed
            if message["msg_type"] == "stream":
                printed += len(message["content"]["text"])
        start = time.perf_counter()
        reply = self.client.execute_interactive(code, timeout=300, output_hook=hook)
        seconds = time.perf_counter() - start
        if reply["content"]["status"] != "ok":
            raise RuntimeError(f"{code}: {reply['content']}")
        return seconds, printed

    def stop(self):
        self.client.stop_channels()
        self.manager.shutdown_kernel(now=True)


def measure(rounds):
    """Rows of what was measured, with the samples of each kernel."""
    found, printed = {}, {}

    def note(what, name, seconds):
        found.setdefault(what, {}).setdefault(name, []).append(seconds)
    for n in range(rounds):
        for side, name in enumerate(KERNELS):
            k = Kernel(name)
            note("start until the kernel answers", name, k.started)
            first = k.run("2.5 * 3")[0]
            note("the first cell after it", name, first)
            note("start to the first result", name, k.started + first)
            for what, both in CELLS.items():
                code, repeats = both[side], 10 if "%d" in both[side] else 100
                fresh = 1000 * os.getpid() + 20 * n
                note(what, name, statistics.median(
                    k.run(code % (3 * (fresh + i,)) if "%d" in code else code)[0] for i in range(repeats)))
            k.run(PRINT[side])
            for what, lines in OUTPUT.items():
                if n >= 2 and lines > 100_000:
                    continue  # takes seconds, twice is enough
                seconds, size = k.run(f"lines({lines})")
                note(what, name, seconds)
                printed[what, name] = min(size, printed.get((what, name), size))
            k.stop()
    return [{"what": what, "medians": {k: statistics.median(v) for k, v in sides.items()}, "samples": sides,
             "bytes": {k: printed[what, k] for k in sides if (what, k) in printed},
             "wanted": OUTPUT.get(what, 0) * 100} for what, sides in found.items()]
