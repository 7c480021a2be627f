"""Writes solid_terms.csv: C, U/T and S of heat-capacity terms over R, from the
spectra themselves by quadrature (mpmath 1.4.1, 40 working digits, 140 where results are below
1e-13, 20 printed).

tarasov: C/n of one mode, parameters theta1, theta2, theta3.
ferro: waves of energy gap + q^2 with C = R T^1.5 without a gap; parameter gap.
antiferro: waves of energy sqrt(gap^2 + q^2) with C = R T^3 without a gap.
expgap: C = R exp(-gap/T), U and S as its integrals from 0.
spin52: six levels 0, 1, 4, 9, 16, 25 times p, degeneracies 1.
"""
import mpmath as mp

mp.mp.dps = 40
assert mp.__version__ == "1.4.1"
INF = mp.inf


def mode(x):
    """ln q, U/kT, C/k of one oscillator"""
    if x == 0:
        return mp.mpf(0), mp.mpf(1), mp.mpf(1)  # ln q has no weight there
    b = x / mp.expm1(x)
    return (-mp.log(-mp.expm1(-x)) if x < 1 else -mp.log1p(-mp.exp(-x))), b, b * b * mp.exp(x)


def spectrum(g, cuts, T, energy):
    r = []
    for i in range(3):
        r.append(mp.quad(lambda w: g(w) * mode(energy(w) / T)[i], cuts))
    return r


def split(a, b, T):
    """subdivision at multiples of T"""
    return [mp.mpf(a)] + [mp.mpf(c) * T for c in (0.01, 0.3, 1, 3, 8, 20, 50, 90) if a < mp.mpf(c) * T < b] + [min(mp.mpf(b), max(mp.mpf(a) + T, 150 * T))]


rows = []
for t1, t2, t3 in ((500, 300, 100), (500, 500, 20), (300, 50, 50), (400, 400, 400), (200, 80, 0), (600, 0, 0)):
    for T in (0.05, 1, 5, 12, 40, 150, 1000):
        T = mp.mpf(T)
        tot = [mp.mpf(0)] * 3
        bands = []
        if t3:
            bands.append((lambda w: 3 * w**2 / (mp.mpf(t1) * t2 * t3), 0, t3))
        if t2 > t3:
            bands.append((lambda w: 2 * w / (mp.mpf(t1) * t2), t3, t2))
        if t1 > t2:
            bands.append((lambda w: mp.mpf(1) / t1, t2, t1))
        for g, a, b in bands:
            v = spectrum(g, split(a, b, T), T, lambda w: w)
            tot = [x + y for x, y in zip(tot, v)]
        rows.append(("tarasov", t1, t2, t3, T, tot))
for gap in (0, 0.5, 4, 60):
    for T in (0.3, 1, 2.5, 20):
        T = mp.mpf(T)
        mp.mp.dps = 140 if gap / T > 30 else 40  # the tolerance of quad is absolute
        n = mp.quad(lambda q: q * q * mode(q * q)[2], [0, 0.3, 1, 2, 4, 7, 12])  # C of T = 1 without a gap
        v = spectrum(lambda q: q * q / n, [0] + [mp.sqrt(T) * c for c in (0.05, 0.3, 1, 2, 4, 7, 11)], T, lambda q: gap + q * q)
        rows.append(("ferro", gap, "", "", T, v))
        n = mp.quad(lambda q: q * q * mode(q)[2], [0, 0.3, 1, 3, 9, 25, 60, 130])
        s = mp.sqrt(gap * T + T * T)
        v = spectrum(lambda q: q * q / n, [0] + [s * c for c in (0.05, 0.3, 1, 3, 8, 20, 50, 130)], T, lambda q: mp.sqrt(gap * gap + q * q))
        rows.append(("antiferro", gap, "", "", T, v))
for gap in (1, 10, 100):
    for T in (0.5, 4, 30, 250):
        T = mp.mpf(T)
        mp.mp.dps = 140 if gap / T > 30 else 40
        c = mp.exp(-gap / T)
        u = mp.quad(lambda t: mp.exp(-gap / t), [0, T / 4, T / 2, T]) / T
        s = mp.quad(lambda t: mp.exp(-gap / t) / t, [0, T / 4, T / 2, T])
        rows.append(("expgap", gap, "", "", T, (s - u, u, c)))
mp.mp.dps = 140  # ln(1 + 1e-70)
for p in (1, 8):
    for T in (0.05, 0.4, 3, 50, 4000):
        T = mp.mpf(T)
        w = [mp.exp(-p * k * k / T) for k in range(6)]
        z = sum(w)
        m1 = sum(a * p * k * k for k, a in enumerate(w)) / z
        m2 = sum(a * (p * k * k - m1) ** 2 for k, a in enumerate(w)) / z
        rows.append(("spin52", p, "", "", T, (mp.log(z), m1 / T, m2 / T**2)))


def n(v):
    return mp.nstr(v, 20, strip_zeros=False, min_fixed=0, max_fixed=0)


with open("solid_terms.csv", "w") as f:
    f.write("# source: the spectra named in solid_terms.py in this folder\n# how obtained: mpmath 1.4.1, tanh-sinh quadrature at 40 or 140 digits, 20 printed, by solid_terms.py\n# licence: factual data\n")
    f.write("model,p1,p2,p3,T,lnq,U_over_T,C,S\n")
    for model, a, b, c, T, v in rows:
        f.write(f"{model},{a},{b},{c},{mp.nstr(T, 6)},{n(v[0])},{n(v[1])},{n(v[2])},{n(v[0] + v[1])}\n")
