"""Writes what was measured as the section of a page, in Markdown."""
import statistics

# A workload, and the peers with the ratio to be reached (peer over ours; above
# 1, ours is faster): on one processor and, where there is one, on two.
GOALS = {
    "a": ("Debye C_V at 1e6 temperatures", {"numpy, Gauss-Legendre 48": (60,), "scipy, cubic spline": (4,), "GSL, gsl_sf_debye_3": (10,)}),
    "b": ("ln Z, U, C of 1e7 levels at 100 temperatures", {"numpy, sum in pieces": (200, 350), "C, loop": (15,)}),
    "c": ("Debye + Einstein + γT fit, 500 points, 5 parameters", {"scipy, curve_fit on a spline": (6,), "scipy, curve_fit on quadrature": (100,), "GSL, gsl_multifit_nlinear": (20,)}),
    "cb": ("1000 bootstrap refits", {"scipy, curve_fit on a spline": (), "scipy, curve_fit on quadrature": (150,)}),
    "d": ("asymmetric top, levels to J = 60", {"numpy, eigvalsh a block": (4,), "LAPACK dsterf from scipy": (0.9,)}),
    "e": ("internal rotation, 401 plane waves", {"scipy, eigvals_banded": (1.7, 3)}),
    "f": ("2-D Ising 256 × 256, 1000 sweeps at Tc", {"numpy, two sublattices": (20,), "C, 512 spins at once": (0.4,)}),
    "g": ("20,000-point density of states at 500 temperatures", {"numpy, sum in pieces": (15, 25), "C, loop": (2.5,)}),
    "h": ("Monte Carlo, 1e6 draws of 11 inputs", {"numpy, Generator.normal": (2, 3.5), "GSL, ziggurat and qsort": (1.4,)}),
    "i1": ("F_1/2, 1e5 values", {"numpy, trapezoid": (150,), "GSL, gsl_sf_fermi_dirac_half": (6,)}),
    "i2": ("inverse of F_1/2, 1e5 values", {"numpy, Newton on the trapezoid": (150,)}),
    "i3": ("Li_3/2, 1e5 values", {"numpy, trapezoid of the smooth part": (150,)}),
    "j": ("SVG of 2,000 points with bars and a line", {"matplotlib, SVG": (15,)}),
    "k1": ("fib(27)", {"CPython": ()}),
    "k2": ("loop over 401 J and 500 T", {"CPython": ()}),
    "k3": ("an integrand called 1e6 times", {"CPython": ()}),
}
TITLES = {w: title for w, (title, _) in GOALS.items()}

# The order of the algorithm in the size of a part, where a size is not what it
# is linear in: eigenvalues of all J to a J, of a matrix.
ORDER = {"d": 3, "e": 2}
CELL = 1.2  # at most, for k
GAIN = 1.7  # at least, of two processors over one where a goal for two is set


def digits(x):
    return f"{x:.3g}" if x < 1000 else f"{x:.0f}"


def against(ratio, goals, i):
    """The columns of a goal and of what was found."""
    if len(goals) <= i:
        return "", digits(ratio) if i == 0 else ""
    return digits(goals[i]), digits(ratio) if ratio >= goals[i] else f"**{digits(ratio)}**"


def section(run):
    """run is what drive.py stores as JSON."""
    m, samples = run["machine"], run["samples"]

    def mid(workload, side, key):
        values = [s[key] for s in samples.get(workload, {}).get(side, [])]
        return statistics.median(values) if values else None

    out = [f"{m['date']}, {run['rounds']} rounds: {m['processor']}, {m['cores']} cores, {m['memory']}, {m['system']}; {m['go']}; {m['cc']}; Python {m['python']}, {m['peers']}; {m['gsl']}.",
           f"Load average {run['load_before'][0]:.1f} before, {run['load_after'][0]:.1f} after."]
    if run["busy"]:
        out.append("**The machine was busy with other programs**: clock times (two processors, kernels) say little.")
    out += ["", "| workload | ours, ms | 2 processors | cell | MB | against | goal | found | goal, 2 | found, 2 |", "| --- | ---: | ---: | ---: | ---: | --- | ---: | ---: | ---: | ---: |"]
    for w, (title, peers) in GOALS.items():
        cpu, one, two = mid(w, "Go, 1 processor", "cpu"), mid(w, "Go, 1 processor", "wall"), mid(w, "Go, 2 processors", "wall")
        cell = mid(w, "cell", "cpu")
        cell = "" if cell is None else f"{cell / mid(w, 'Go, 2 processors', 'cpu'):.2f}"
        if w[0] == "k" and cell and float(cell) > CELL:
            cell = f"**{cell}**"
        gain = f"{one / two:.2f}"
        if any(len(goals) > 1 for goals in peers.values()) and one / two < GAIN:
            gain = f"**{gain}**"
        start = f"{w}. {title} | {digits(1e3 * cpu)} | {gain} | {cell} | {digits(mid(w, 'Go, 1 processor', 'bytes') / 1e6)}"
        for peer, goals in peers.items():
            if mid(w, peer, "cpu") is None:
                continue  # GSL is not installed
            goal, found = against(mid(w, peer, "cpu") / cpu, goals, 0)
            goal2, found2 = against(mid(w, peer, "wall") / two, goals, 1)
            out.append(f"| {start} | {peer} | {goal} | {found} | {goal2} | {found2} |")
            start = " | | | | "
    out += ["", f"Ours: processor time of one call from Go with one processor, medians. 2 processors: how many times faster by the clock (goal {GAIN} where there is one for two). Cell: the same text as a cell of a notebook, over the program. MB: what one call allocates. "
            f"Found: the peer's processor time over ours (found, 2: clock, ours on two processors). Bold: the goal is not reached (k: at most {CELL} for a cell).", ""]

    out += ["| growth | sizes | ms | exponent | order |", "| --- | --- | --- | ---: | ---: |"]
    for w, g in run["growth"].items():
        order = ORDER.get(w, 1)
        exponent = f"{g['exponent']:.2f}"
        if g["exponent"] > order + 0.25:
            exponent = f"**{exponent}**"
        out.append(f"| {w} | {', '.join(digits(a) for a in g['amounts'])} | {', '.join(digits(1e3 * t) for t in g['cpu'])} | {exponent} | {order} |")
    out += ["", "Exponents over a factor of 16 (d and e: larger sizes); bold: more than 0.25 above the order of the algorithm.", "Sums over 50 arguments against mpmath with 30 digits, relative: " + ", ".join(f"{w} {d:.0e}" for w, d in run["accuracy"].items()) +
            f". f: the energy of 64 × 64 spins at Tc is {abs(run['ising']):.1f} standard uncertainties from Kaufman's.", ""]

    out += ["| kernels, one client, clock | Levelsum, ms | Python, ms | ratio |", "| --- | ---: | ---: | ---: |"]
    for k in run["kernels"]:
        ours, theirs = k["medians"]["levelsum"], k["medians"]["python3"]
        out.append(f"| {k['what']} | {digits(1e3 * ours)} | {digits(1e3 * theirs)} | {theirs / ours:.2f} |")
    for k in run["kernels"]:
        for name, size in k["bytes"].items():
            if size < k["wanted"]:
                out.append(f"\nOf {k['what']} {size / 1e6:.3g} MB came from {name}, which shows the beginning and the end.")
    for line in run["disagreements"]:
        out.append(f"\n**The sides disagree**: {line}")
    return "\n".join(out)
