"""Writes einstein_full_range.csv.

mpmath 1.4.1, 400 working digits, 30 printed. The closed forms of one harmonic
mode; ln q at x = 700 loses 304 digits. Arguments are exact
binary numbers.
"""
import random
import mpmath as mp

mp.mp.dps = 400
random.seed(20261202)
assert mp.__version__ == "1.4.1"


def s(v):
    return mp.nstr(v, 30, strip_zeros=False, min_fixed=0, max_fixed=0)


xs = [10 ** (k / 4) for k in range(-24, 12)]
xs += [random.uniform(0, 3) for _ in range(60)] + [random.uniform(3, 60) for _ in range(60)]
xs += [0.6931471805599453, 0.6931471805599454, 0.9999999999999999, 1.0, 44.99999999999999, 45.0, 650.0, 700.0]
with open("einstein_full_range.csv", "w") as f:
    f.write("# source: C = x^2 e^x/(e^x-1)^2, U = x/(e^x-1), ln q = -ln(1-e^-x), S = U + ln q, x = theta/T\n")
    f.write("# how obtained: mpmath 1.4.1, closed forms at 400 digits, 30 printed, by einstein.py in this folder\n")
    f.write("# licence: factual data\n")
    f.write("x,C,U,S,ln_q,dC_dx\n")
    for xf in sorted(set(xs)):
        x = mp.mpf(xf)
        d = mp.expm1(x)
        c, u, q = x * x * mp.exp(x) / d**2, x / d, -mp.log(-mp.expm1(-x))
        f.write(f"{xf!r},{s(c)},{s(u)},{s(u + q)},{s(q)},{s(c * (2 / x - mp.coth(x / 2)))}\n")
