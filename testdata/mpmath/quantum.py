"""Writes fermi_dirac_full_range.csv, fermi_half_inverse_full_range.csv,
bose_full_range.csv, bose_alpha_full_range.csv and elliptic_full_range.csv.

mpmath 1.4.1, 45 working digits, 30 printed. F_j is the quadrature of its
definition (tanh-sinh, cut at the edge of the Fermi step; eight terms of the series
in e^eta below -20), Li_s mpmath's
polylog (for z near 1 in the form given there), K and E by mpmath's
elliptic functions. Arguments are exact binary numbers.
"""
import random
import mpmath as mp

mp.mp.dps = 45
random.seed(20261203)
assert mp.__version__ == "1.4.1"


def s(v):
    return mp.nstr(v, 30, strip_zeros=False, min_fixed=0, max_fixed=0)


def head(f, source, how):
    f.write(f"# source: {source}\n# how obtained: mpmath 1.4.1, {how}, 30 digits printed, by quantum.py in this folder\n# licence: factual data\n")


def fermi(j, eta):
    """1/Gamma(j+1) int t^j/(e^(t-eta)+1) dt with t = u^2."""
    if eta < -20:  # the integrand is too small for an absolute tolerance
        return sum((-1) ** (k + 1) * mp.exp(k * eta) / mp.mpf(k) ** (j + 1) for k in range(1, 9))
    g = lambda u: 2 * u ** (2 * j + 1) / (mp.exp(u * u - eta) + 1)
    if eta < 0:
        cuts = [0, 1, 2, 4, 7, 11]
    else:
        edge = mp.sqrt(eta)
        cuts = sorted({mp.mpf(0), edge} | {mp.sqrt(max(eta + d, 0)) for d in (-60, -30, -15, -8, -4, -2, 2, 4, 8, 15, 30, 60, 130)})
    return mp.quad(g, cuts) / mp.gamma(j + 1)


def fermi_poly(j, eta):
    """Independent of the quadrature: -Li_(j+1)(-e^eta) by mpmath's polylog."""
    return -mp.polylog(j + 1, -mp.exp(eta))


orders = [mp.mpf(-1) / 2, mp.mpf(1) / 2, mp.mpf(1), mp.mpf(3) / 2, mp.mpf(2), mp.mpf(3)]
etas = [-700.0, -100.0, -30.0, -2.0000000000000004, -2.0, -1.0, 0.0, 1e-9, 41.99999999999999, 42.0, 60.0, 1000.0, 1e6]
etas += [random.uniform(-12, -2) for _ in range(12)] + [random.uniform(-2, 6) for _ in range(40)] + [random.uniform(6, 50) for _ in range(40)] + [10 ** random.uniform(1.7, 5) for _ in range(8)]
check = 0
with open("fermi_dirac_full_range.csv", "w") as f:
    head(f, "F_j(eta) = 1/Gamma(j+1) int_0^inf t^j/(e^(t-eta)+1) dt", "tanh-sinh quadrature at 45 digits")
    f.write("j,eta,F\n")
    for j in orders:
        for e in sorted(set(etas)):
            v = fermi(j, mp.mpf(e))
            if -12 < e < 1 and random.random() < 0.2:
                assert abs(fermi_poly(j, mp.mpf(e)) / v - 1) < mp.mpf(10) ** -32, (j, e)
                check += 1
            f.write(f"{float(j)!r},{e!r},{s(v)}\n")
print("F_j agreed with the polylogarithm at", check, "points")

half = mp.mpf(1) / 2
with open("fermi_half_inverse_full_range.csv", "w") as f:
    head(f, "eta with F_1/2(eta) = F, normalised by Gamma(3/2)", "secant iteration on the quadrature at 45 digits")
    f.write("F,eta\n")
    fs = [1e-300, 1e-20, 1e-6, 0.3678794411714423, 0.36787944117144233, 0.7651470246254079, 0.8, 403.4287934927351, 403.5, 1e4, 1e6, 1e9]
    fs += [10 ** random.uniform(-4, 0) for _ in range(20)] + [10 ** random.uniform(-0.5, 2.7) for _ in range(50)]
    for x in sorted(set(fs)):
        F = mp.mpf(x)
        if x < 1e-15:
            eta = mp.log(F) + F / mp.sqrt(8)
        else:
            eta = mp.log(F) + F / mp.sqrt(8) if x < 1 else (3 * mp.sqrt(mp.pi) * F / 4) ** (mp.mpf(2) / 3)
            for _ in range(40):
                step = (fermi(half, eta) - F) / fermi(-half, eta)
                eta -= step
                if abs(step) < mp.mpf(10) ** -22:
                    break
            assert abs(fermi(half, eta) / F - 1) < mp.mpf(10) ** -38
        f.write(f"{x!r},{s(eta)}\n")

ss = [mp.mpf(1) / 2, mp.mpf(1), mp.mpf(3) / 2, mp.mpf(2), mp.mpf(5) / 2, mp.mpf(3)]


def li(sv, z):
    if z < -1:
        return -fermi(sv - 1, mp.log(-z)) if sv != 1 else -mp.log(1 - z)
    return mp.re(mp.polylog(sv, z)) if z != 1 else (mp.zeta(sv) if sv > 1 else mp.inf)


zs = [-1e9, -50.0, -1.0000000000000002, -1.0, -0.5, -1e-8, 1e-12, 0.49999999999999994, 0.5, 0.5000000000000001, 0.9999999999999999, 0.999999, 1.0]
zs += [random.uniform(-6, -1) for _ in range(8)] + [random.uniform(-1, 0.5) for _ in range(40)] + [random.uniform(0.5, 1) for _ in range(30)] + [1 - 10 ** random.uniform(-10, -1) for _ in range(10)]
with open("bose_full_range.csv", "w") as f:
    head(f, "Li_s(z) = sum z^k/k^s", "polylog at 45 digits, quadrature of the Fermi-Dirac integral for z < -1")
    f.write("s,z,Li\n")
    for sv in ss:
        for z in sorted(set(zs)):
            if z == 1.0 and sv <= 1:
                continue
            f.write(f"{float(sv)!r},{z!r},{s(li(sv, mp.mpf(z)))}\n")

alphas = [1e-300, 1e-20, 1e-10, 1e-5, 0.6931471805599452, 0.6931471805599453, 0.6931471805599454, 30.0, 700.0]
alphas += [10 ** random.uniform(-6, 0) for _ in range(25)] + [random.uniform(0, 5) for _ in range(30)]
with open("bose_alpha_full_range.csv", "w") as f:
    head(f, "Li_s(e^-alpha)", "the series in powers of alpha (alpha < 1) or polylog at 45 digits")
    f.write("s,alpha,Li\n")
    for sv in ss:
        for a in sorted(set(alphas)):
            x = mp.mpf(a)
            if a < 1:
                v = mp.mpf(0)
                for k in range(60):
                    if sv - k == 1:
                        v += (-x) ** k / mp.factorial(k) * (mp.harmonic(k) - mp.log(x))
                    else:
                        v += mp.zeta(sv - k) * (-x) ** k / mp.factorial(k)
                if sv != int(sv):
                    v += mp.gamma(1 - sv) * x ** (sv - 1)
            elif a < 20:
                v = mp.re(mp.polylog(sv, mp.exp(-x)))
            else:
                v = sum(mp.exp(-k * x) / mp.mpf(k) ** sv for k in range(1, 9))
            f.write(f"{float(sv)!r},{a!r},{s(v)}\n")

ms = [-1e12, -1e6, -100.0, -1.0, -1e-9, 0.0, 1e-17, 1e-9, 0.25, 0.5, 0.9, 0.99, 0.9999999999999999, 0.999999999999]
ms += [random.uniform(-10, 0) for _ in range(20)] + [random.uniform(0, 1) for _ in range(60)] + [1 - 10 ** random.uniform(-14, -1) for _ in range(25)]
with open("elliptic_full_range.csv", "w") as f:
    head(f, "K(m) = int_0^(pi/2) (1-m sin^2)^(-1/2), E(m) = int (1-m sin^2)^(1/2), m = k^2", "ellipk and ellipe at 45 digits")
    f.write("m,K,E\n")
    for m in sorted(set(ms)):
        f.write(f"{m!r},{s(mp.ellipk(mp.mpf(m)))},{s(mp.ellipe(mp.mpf(m)))}\n")
