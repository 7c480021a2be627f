"""Writes exp_integral.csv. mpmath 1.4.1, 45 working digits, 30 printed; exact binary arguments."""
import random
import mpmath as mp

mp.mp.dps = 45
random.seed(20261204)
assert mp.__version__ == "1.4.1"


def s(v):
    return mp.nstr(v, 30, strip_zeros=False, min_fixed=0, max_fixed=0)


xs = [1e-12, 1e-6, 0.001, 0.9999999999999999, 1.0, 1.0000000000000002, 100.0, 700.0]
xs += [random.uniform(0, 1) for _ in range(30)] + [random.uniform(1, 6) for _ in range(30)] + [random.uniform(6, 80) for _ in range(20)]
with open("exp_integral.csv", "w") as f:
    f.write("# source: E_n(x) = int_1^inf e^(-xt)/t^n dt\n# how obtained: mpmath 1.4.1 expint at 45 digits, 30 printed, by exp_integral.py in this folder\n# licence: factual data\nx,E1,E2\n")
    for x in sorted(xs):
        f.write(f"{x!r},{s(mp.expint(1, mp.mpf(x)))},{s(mp.expint(2, mp.mpf(x)))}\n")
