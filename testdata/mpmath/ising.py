"""Writes ising_onsager.csv: the functions of one spin of the Ising model on the
infinite square lattice from Onsager's formulas (mpmath 1.4.1, 100 working
digits, 20 printed), and prints n a(n) of ln q = sum a(n) exp(-4 n K), with
energies counted from the ground level, from the closed form by exact fractions.
"""
from fractions import Fraction
from math import comb

import mpmath as mp

mp.mp.dps = 100
assert mp.__version__ == "1.4.1"


def functions(t):
    """ln q, E/J + 2, C/k and m at kT/J = t"""
    K = 1 / t
    k = 2 * mp.sinh(2 * K) / mp.cosh(2 * K) ** 2
    k2 = 2 * mp.tanh(2 * K) ** 2 - 1
    lnq = mp.log1p(mp.exp(-4 * K)) + mp.quad(
        lambda x: mp.log((1 + mp.sqrt(k2**2 + k**2 * mp.sin(x) ** 2)) / 2),
        [0] + sorted(abs(k2) * mp.mpf(10) ** j for j in range(-1, 12) if abs(k2) * mp.mpf(10) ** j < 1) + [mp.pi / 2]) / mp.pi
    K1, E1 = mp.ellipk(k * k), mp.ellipe(k * k)
    coth = mp.coth(2 * K)
    u = -coth * (1 + 2 / mp.pi * k2 * K1)
    c = 4 / mp.pi * (K * coth) ** 2 * (K1 - E1 - (1 - mp.tanh(2 * K) ** 2) * (mp.pi / 2 + k2 * K1))
    s = mp.sinh(2 * K)
    m = (1 - s**-4) ** (mp.mpf(1) / 8) if s > 1 else mp.mpf(0)
    return lnq, u + 2, u, c, m


with open("ising_onsager.csv", "w") as f:
    f.write("# source: L. Onsager, Physical Review 65, 117 (1944); C. N. Yang, Physical Review 85, 808 (1952)\n"
            "# how obtained: mpmath 1.4.1, the closed forms at 100 digits, 20 printed, by ising.py in this folder\n"
            "# licence: factual data\n"
            "kT/J,ln q,E/J + 2,E/J,C/k,m\n")
    for t in ("0.0625 0.125 0.25 0.5 0.75 1 1.125 1.25 1.5 2 2.125 2.25 2.26171875 2.269 2.26918 2.2691853 2.26918531 2.26918532 2.2692 2.27 2.2734375 "
              "2.28125 2.375 2.5 3 4 5 7 7.5 8 10 16 32 100 1000 1e5").split():
        # the double nearest to the decimal, which is what a program computes with
        f.write(t + "," + ",".join(mp.nstr(v, 20) for v in functions(mp.mpf(float(t)))) + "\n")

N = 24


def times(a, b):
    r = [Fraction(0)] * (N + 1)
    for i, x in enumerate(a):
        for j in range(N + 1 - i):
            r[i + j] += x * b[j]
    return r


# With x = exp(-4K), ln q = ln(1+x) - sum binomial(2n,n)^2/(4n) z^n, z = x (1-x)^2/(1+x)^4.
z = times([Fraction(v) for v in (0, 1, -2, 1)] + [Fraction(0)] * (N - 3), [Fraction((-1) ** n * comb(n + 3, 3)) for n in range(N + 1)])
a = [Fraction(0)] + [Fraction((-1) ** (n + 1), n) for n in range(1, N + 1)]
power = [Fraction(1)] + [Fraction(0)] * N
for n in range(1, N + 1):
    power = times(power, z)
    a = [v - Fraction(comb(2 * n, n) ** 2, 4 * n) * w for v, w in zip(a, power)]
print([str(n * a[n]) for n in range(2, N + 1)])
