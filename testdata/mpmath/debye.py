"""Writes debye_thermal_full_range.csv and debye_functions_full_range.csv.

mpmath 1.4.1, 50 working digits, 30 printed. Every value is a quadrature of the
definition (tanh-sinh, subdivided), a route that shares nothing with the series
from which the program's own coefficients are made. Arguments are exact binary
numbers (shortest decimal form that reads back to them).
"""
import random
import mpmath as mp

mp.mp.dps = 50
random.seed(20261201)
assert mp.__version__ == "1.4.1"


def cuts(x):
    return [mp.mpf(0)] + [mp.mpf(c) for c in (0.5, 2, 6, 15, 40, 100, 160) if c < x] + ([x] if x < 250 else [mp.mpf(250)])


def e(t):
    return t * t * mp.exp(-t) / mp.expm1(-t) ** 2 if t else mp.mpf(1)


def debye(n, x):
    return n / x**n * mp.quad(lambda t: t**n / mp.expm1(t) if t else mp.mpf(n == 1), cuts(x))


def heat(d, x):
    return d / x**d * mp.quad(lambda t: t ** (d - 1) * e(t), cuts(x))


def grid():
    xs = [10 ** (k / 4) for k in range(-24, 25)]
    xs += [random.uniform(0, 8) for _ in range(50)]
    xs += [random.uniform(8, 64) for _ in range(50)]
    xs += [0.25, 2.0, 3.25, 49.75, 49.999999999999993, 50.0, 50.000000000000007, 59.999999999999993, 60.0, 60.25]
    xs += [0.24999999999999997, 4 - 2**-51, 100.5, 1000.0]
    return sorted(set(xs))


def s(v):
    return mp.nstr(v, 30, strip_zeros=False, min_fixed=0, max_fixed=0)


HEAD = """# source: the definitions, %s
# how obtained: mpmath 1.4.1, tanh-sinh quadrature at 50 digits, 30 printed, by %s in this folder
# licence: factual data
"""

with open("debye_thermal_full_range.csv", "w") as f:
    f.write(HEAD % ("C/R per mode = (d/x^d) int_0^x t^(d+1) e^t/(e^t-1)^2 dt, x = theta/T", "debye.py"))
    f.write("d,x,C,U,S,ln_q,dC_dx\n")
    for d in (1, 2, 3):
        for xf in grid():
            x = mp.mpf(xf)
            c, u = heat(d, x), debye(d, x)
            mp.mp.dps = 70
            lnq = u / d - mp.log(-mp.expm1(-x))
            slope = d / x * (e(x) - c)
            mp.mp.dps = 50
            f.write(f"{d},{xf!r},{s(c)},{s(u)},{s(u + lnq)},{s(lnq)},{s(slope)}\n")

with open("debye_functions_full_range.csv", "w") as f:
    f.write(HEAD % ("D_n(x) = (n/x^n) int_0^x t^n/(e^t-1) dt", "debye.py"))
    f.write("n,x,D\n")
    for n in range(1, 7):
        for xf in grid():
            f.write(f"{n},{xf!r},{s(debye(n, mp.mpf(xf)))}\n")
