"""Writes the data files of this folder. All of them are INVENTED.

The Fennsund laboratory, its samples and its measurements do not exist. Each file
is a model that is written out below, with random errors (one for each row) and one
common error (the same relative error in all rows) of the sizes that the file states.
The program needs the standard library only and writes the same bytes every time:

    python3 generate.py

It was run with Python 3.11; random.random() gives the same numbers
for the same seed in all versions of Python 3, and normal deviates are made from
it here (Box and Muller, 1958). Constants: R and k of the SI (2019).
"""
import math
import random

R = 8.31446261815324  # J/(mol K)
K = 1.380649e-23  # J/K
H = 6.62607015e-34  # J s
C2 = 1.438776877  # cm K, hc/k
NA = 6.02214076e23

HEAD = "INVENTED, no such substance or laboratory; made by generate.py in this folder"


class Errors:
    """Random numbers of one file."""

    def __init__(self, seed):
        self.uniform = random.Random(seed).random

    def normal(self):
        u, v = 1 - self.uniform(), self.uniform()
        return math.sqrt(-2 * math.log(u)) * math.cos(2 * math.pi * v)


def einstein(theta, T):
    x = theta / T
    return R * x * x * math.exp(-x) / math.expm1(-x) ** 2


def debye(theta, T, steps=1000):
    """Heat capacity of one mole of Debye modes, Simpson's rule."""
    x = theta / T
    h = min(x, 100) / steps  # beyond 100 the integrand is below 1e-35
    total = 0.0
    for i in range(steps + 1):
        t = i * h
        f = 0.0 if t == 0 else t ** 4 * math.exp(-t) / math.expm1(-t) ** 2
        total += f * (1 if i in (0, steps) else 4 if i % 2 else 2)
    return 3 * R * total * h / 3 / x ** 3


def integral(f, a, b, steps=600):
    h = (b - a) / steps
    return h / 3 * sum(f(a + i * h) * (1 if i in (0, steps) else 4 if i % 2 else 2) for i in range(steps + 1))


def geometric(first, last, n):
    return [first * (last / first) ** (i / (n - 1)) for i in range(n)]


def write(name, notes, header, rows):
    with open(name, "w", newline="\n") as f:
        for n in notes:
            f.write("# " + n + "\n")
        f.write(header + "\n")
        for r in rows:
            f.write(", ".join(r) + "\n")


def heat_capacities(errors, ts, cp, random_percent, common_percent):
    """Rows T, Cp, u_r, u_c with errors of the stated sizes in them."""
    shared = common_percent / 100 * errors.normal()
    rows = []
    for T in ts:
        T = float("%.4g" % T) if T < 100 else round(T, 2)
        u = random_percent(T)
        value = cp(T) * (1 + shared) * (1 + u / 100 * errors.normal())
        rows.append(["%g" % T, "%.5g" % value, "%g" % u, "%g" % common_percent])
    return rows


HEADER = "T / K, Cp / (J K-1 mol-1), u_r(Cp) / %, u_c(Cp) / %"


# Sample 12: a molecular crystal of linear molecules XYZ whose ends are frozen in at random.

MASS, B, QUANTA = 74.60, 0.12140, [(2104.0, 1), (1262.0, 1), (455.0, 2)]
T_TRANSITION, T_MELTING, T_BOILING = 93.72, 151.30, 214.85
TC, PC = 381.0, 6.15e6


def ideal_gas_entropy(T, p):
    m = MASS * 1e-3 / NA
    s = 2.5 + math.log((2 * math.pi * m * K * T / H ** 2) ** 1.5 * K * T / p)
    b = C2 * B / T  # linear rotor, symmetry number 1: the sum over its levels
    q = sum((2 * j + 1) * math.exp(-b * j * (j + 1)) for j in range(2000))
    e = sum((2 * j + 1) * b * j * (j + 1) * math.exp(-b * j * (j + 1)) for j in range(2000)) / q
    s += math.log(q) + e
    for quantum, g in QUANTA:
        x = C2 * quantum / T
        s += g * (x / math.expm1(x) - math.log1p(-math.exp(-x)))
    return R * s


def crystal(T):
    lattice = 3 * debye(105, T) + 2 * einstein(88, T)
    inner = sum(g * einstein(C2 * q, T) for q, g in QUANTA)
    return lattice * (1 + 3.5e-4 * T) + inner


def sample12(T):
    if T < T_TRANSITION:
        return crystal(T)
    if T < T_MELTING:
        return crystal(T) + 2.4 + 0.012 * (T - T_TRANSITION)
    return 73.8 + 0.021 * (T - T_MELTING) + 1.6e-4 * (T - T_MELTING) ** 2


def third_law():
    errors = Errors(12)
    ts = geometric(5.2, 91.8, 48) + geometric(95.6, 149.4, 14) + geometric(152.9, 213.6, 12)
    rows = heat_capacities(errors, ts, sample12, lambda T: 0.6 if T < 15 else 0.3 if T < 40 else 0.15, 0.12)
    for r in rows:
        T = float(r[0])
        r.append("II" if T < T_TRANSITION else "I" if T < T_MELTING else "liquid")
    write("sample-12-heat-capacity.csv", [
        "substance: sample 12, an invented molecular compound XYZ, M/(g mol-1): %.2f, per: mole of formula units, atoms per formula unit: 3" % MASS,
        "source: " + HEAD,
        "temperature scale: ITS-90, coverage of u: k=1, pressure: saturation",
        "uncertainty: u_r is the scatter of the points, u_c the error of the amount of sample and of the calibration, common to all rows",
        "licence: may be used for any purpose",
    ], HEADER + ", phase", rows)

    def entropy(a, b):
        return integral(lambda x: sample12(math.exp(x)), math.log(a), math.log(b))

    tiny = 1e-9
    dH1, dH2 = 611.0, 5480.0
    condensed = entropy(0.05, T_TRANSITION - tiny) + dH1 / T_TRANSITION
    condensed += entropy(T_TRANSITION + tiny, T_MELTING - tiny) + dH2 / T_MELTING
    condensed += entropy(T_MELTING + tiny, T_BOILING)
    imperfection = 27 * R * TC ** 3 * 101325 / (32 * PC * T_BOILING ** 3)
    # What vaporisation must add, so that the ideal gas has R ln 2 more than calorimetry finds.
    dH3 = T_BOILING * (ideal_gas_entropy(T_BOILING, 101325) - imperfection - condensed - R * math.log(2))
    u = (1.2, 5.0, 14.0)
    heats = [h + s * errors.normal() for h, s in zip((dH1, dH2, dH3), u)]
    write("sample-12-transitions.csv", [
        "substance: sample 12, an invented molecular compound XYZ",
        "source: " + HEAD,
        "uncertainty: of each heat and temperature, independent of one another and of the heat capacities",
        "temperature scale: ITS-90, coverage of u: k=1",
        "licence: may be used for any purpose",
    ], "name, kind, T / K, u(T) / K, dH / (J mol-1), u(dH) / (J mol-1)", [
        ["II to I", "first-order", "%.2f" % T_TRANSITION, "0.02", "%.1f" % heats[0], "%.1f" % u[0]],
        ["melting", "melting", "%.2f" % T_MELTING, "0.01", "%.0f" % heats[1], "%.0f" % u[1]],
        ["vaporisation", "boiling", "%.2f" % T_BOILING, "0.01", "%.0f" % heats[2], "%.0f" % u[2]],
    ])


# Sample 7: a poor metal of three atoms in the formula unit, one of them heavy in a wide cage.

def decomposition():
    melting = 1640
    a = 5.12e-3 / (3 * melting)  # Cp - C_V = a Cp² T, the rule of Nernst and Lindemann

    def cp(T):
        c = 6 * debye(312, T) + 3 * einstein(94, T) + 4e-5 * T
        return 2 * c / (1 + math.sqrt(1 - 4 * a * T * c))

    ts = geometric(2.0, 90.0, 52)
    write("sample-7-heat-capacity.csv", [
        "substance: sample 7, an invented compound AX2, per: mole of formula units, atoms per formula unit: 3",
        "source: " + HEAD,
        "temperature scale: ITS-90, coverage of u: k=1, phase: cr, melting temperature/K: %d" % melting,
        "uncertainty: u_r is the scatter of the points, u_c the error of the amount of sample and of the calibration, common to all rows",
        "licence: may be used for any purpose",
    ], HEADER, heat_capacities(Errors(7), ts, cp, lambda T: 0.8 if T < 5 else 0.4, 0.5))


# Sample 21: a hydrated salt with one magnetic ion, in a field of 2 T that splits its ground doublet.

def schottky():
    def cp(T):
        x = 3.12 / T
        magnetic = R * (x / 2 / math.cosh(x / 2)) ** 2
        return magnetic + 48 * debye(236, T)

    ts = geometric(0.34, 12.0, 50)
    write("sample-21-heat-capacity.csv", [
        "substance: sample 21, an invented salt with one magnetic ion and 16 atoms in the formula unit, per: mole of formula units, atoms per formula unit: 16",
        "source: " + HEAD,
        "temperature scale: PLTS-2000 below 1 K and ITS-90 above, coverage of u: k=1, phase: cr",
        "flux density/T: 2.000, u(flux density)/T: 0.008",
        "uncertainty: u_r is the scatter of the points, u_c the error of the amount of sample and of the calibration, common to all rows",
        "licence: may be used for any purpose",
    ], HEADER, heat_capacities(Errors(21), ts, cp, lambda T: 1.2 if T < 0.6 else 0.7, 0.8))


# Counts of single trapped atoms in eight spin states at three times.

def counts():
    errors = Errors(8)
    m = ["%+d/2" % k for k in range(-7, 8, 2)]
    first = [0.004, 0.006, 0.010, 0.020, 0.045, 0.105, 0.230, 0.580]
    total = 600
    tables = []
    for mixed in (0.0, 0.62, 1.0):
        p = [(1 - mixed) * x + mixed / 8 for x in first]
        n = [0] * 8
        for _ in range(total):
            v, i = errors.uniform(), 0
            while i < 7 and v >= p[i]:
                v -= p[i]
                i += 1
            n[i] += 1
        tables.append(n)
    write("trapped-atoms.csv", [
        "what: single atoms of an invented element, total spin 7/2, found in each of the 8 states m after no wait, a short wait and a long wait",
        "source: " + HEAD,
        "uncertainty: of counting only; every atom was found in one of the states, 600 atoms for each wait",
        "detection: the probability to recognise a state is the same for all states within a relative standard uncertainty of 1 %",
        "licence: may be used for any purpose",
    ], "m, n_0 / 1, n_1 / 1, n_2 / 1", [[m[i]] + [str(t[i]) for t in tables] for i in range(8)])


third_law()
decomposition()
schottky()
counts()
