"""The workloads in numpy, scipy, matplotlib and plain CPython.

Reads the name of one workload a line and prints what it took, one line of JSON
each, as the other sides do. Work whose time grows in proportion to a count is
done for a part of the count and scaled; those say so in PART."""
import io
import json
import math
import os
import resource
import sys
import time

import numpy as np
from scipy.interpolate import CubicSpline
from scipy.linalg import eigvals_banded, lapack
from scipy.optimize import curve_fit
from scipy.special import erfcx

R = 8.31446261815324
ready = {}


def workload(name):
    def keep(f):
        ready[name] = f
        return f
    return keep


# Gauss-Legendre nodes on [0, 1] for Debye's integral.
node, weight = np.polynomial.legendre.leggauss(48)
node, weight = (node + 1) / 2, weight / 2


def debye_quadrature(x):
    """C/3R = 3/x^3 times the integral of t^4 e^t/(e^t-1)^2 from 0 to x, in
    pieces that stay in the cache; the integrand is cut at 60."""
    out = np.empty_like(x)
    for i in range(0, len(x), 2000):
        part = x[i:i + 2000]
        top = np.minimum(part, 60)
        t = np.outer(top, node)
        e = np.exp(-t)
        f = t**4 * e / np.expm1(-t)**2
        out[i:i + 2000] = 3 / part**3 * top * (f @ weight)
    return out


def spline_of_debye():
    x = np.linspace(0, 60, 3001)
    y = np.ones_like(x)
    y[1:] = debye_quadrature(x[1:])
    return CubicSpline(x, y)


def debye_spline(table, x):
    return np.where(x < 60, table(np.minimum(x, 60)), 4 * np.pi**4 / (5 * x**3))


@workload("a numpy, Gauss-Legendre 48")
def _():
    x = 343 / (1 + 999e-6 * np.arange(1_000_000))
    return lambda: 3 * R * debye_quadrature(x).sum()


@workload("a scipy, cubic spline")
def _():
    x = 343 / (1 + 999e-6 * np.arange(1_000_000))
    table = spline_of_debye()
    return lambda: 3 * R * debye_spline(table, x).sum()


@workload("b numpy, sum in pieces")
def _():
    n = 10_000_000
    i = np.arange(n)
    e, g = 5000 * np.modf(i * 0.6180339887498949)[0], 1.0 + i % 7
    ts = 100 + 7.0 * np.arange(100)

    def run():
        s = 0.0
        for T in ts[::10]:
            z = np.zeros(3)
            for k in range(0, n, 50_000):
                y = e[k:k + 50_000] / T
                w = g[k:k + 50_000] * np.exp(-y)
                wy = w * y
                z += w.sum(), wy.sum(), wy @ y
            u = z[1] / z[0]
            s += math.log(z[0]) + u + z[2] / z[0] - u * u
        return s
    return run


def fit_problem(quadrature=False):
    table = spline_of_debye()

    def model(T, gamma, theta, n, thetaE, nE):
        x = thetaE / T
        e = np.exp(-x)
        debye = debye_quadrature(theta / T) if quadrature else debye_spline(table, theta / T)
        return gamma * T + n * R * debye + nE * R * x * x * e / (1 - e)**2

    T = 2 + 0.6 * np.arange(500)
    c = model(T, 7e-4, 250, 3, 550, 3)
    u = 0.005 * c
    y = c + u * math.sqrt(2) * np.sin(12.9898 * np.arange(500))
    start = [5e-4, 230, 2.7, 500, 3.2]
    fit = lambda y, start: curve_fit(model, T, y, start, u, absolute_sigma=True)[0]
    return model, T, y, u, start, fit


def one_fit(quadrature):
    _, _, y, _, start, fit = fit_problem(quadrature)
    return lambda: fit(y, start)[1]


def refits(count, quadrature):
    model, T, y, u, start, fit = fit_problem(quadrature)
    rng = np.random.default_rng(1)

    def run():
        best = fit(y, start)
        c = model(T, *best)
        return np.std([fit(c + u * rng.standard_normal(500), best)[1] for _ in range(count)], ddof=1)
    return run


workload("c scipy, curve_fit on a spline")(lambda: one_fit(False))
workload("c scipy, curve_fit on quadrature")(lambda: one_fit(True))
workload("cb scipy, curve_fit on a spline")(lambda: refits(50, False))
workload("cb scipy, curve_fit on quadrature")(lambda: refits(10, True))


def wang(A, B, C, J):
    """Diagonals and squared-free off-diagonals of the four blocks."""
    K = np.arange(0, J + 1)
    diag = (B + C) / 2 * (J * (J + 1) - K * K) + A * K * K
    k = K[:-2]
    off = (B - C) / 4 * np.sqrt(np.maximum((J * (J + 1) - k * (k + 1.0)) * (J * (J + 1) - (k + 1.0) * (k + 2)), 0))
    even, odd = off[0::2].copy(), off[1::2].copy()
    plus = even.copy()
    if len(plus):
        plus[0] *= math.sqrt(2)
    blocks = [(diag[0::2], plus), (diag[2::2], even[1:])]
    for sign in (1, -1):
        d = diag[1::2].copy()
        if len(d):
            d[0] += sign * (B - C) * J * (J + 1) / 4
        blocks.append((d, odd))
    return [(d, o) for d, o in blocks if len(d)]


def top(eigenvalues):
    def run():
        q = 0.0
        for J in range(61):
            for d, o in wang(27.88, 14.52, 9.28, J):
                q += (2 * J + 1) * np.exp(-1.438776877 * eigenvalues(d, o) / 300).sum()
        return math.log(q)
    return run


@workload("d numpy, eigvalsh a block")
def _():
    return top(lambda d, o: np.linalg.eigvalsh(np.diag(d) + np.diag(o[:len(d) - 1], -1)))


@workload("d LAPACK dsterf from scipy")
def _():
    return top(lambda d, o: lapack.dsterf(d, o)[0] if len(d) > 1 else d)


@workload("e scipy, eigvals_banded")
def _():
    m = np.arange(-200, 201)

    def run():
        band = np.zeros((4, 401))
        band[0] = 10.0 * m * m + (800 + 100 + 50) / 2
        band[3], band[1], band[2] = -800 / 4, -100 / 4, -50 / 4
        return eigvals_banded(band, lower=True)[0]
    return run


@workload("f numpy, two sublattices")
def _():
    L, rng = 256, np.random.default_rng(1)
    p = (math.sqrt(2) - 1)**2  # exp(-4 J/kT) at Tc
    # Acceptance by (s times the sum of the neighbours + 4)/2.
    accept = np.array([1, 1, 1, p, p * p], dtype=np.float32)
    u = np.empty((L, L // 2), dtype=np.float32)
    side = np.empty((L, L // 2), dtype=np.int8)

    def neighbours(other, odd):
        near, far = (-1, 1) if odd else (1, -1)
        side[0::2], side[1::2] = np.roll(other[0::2], near, 1), np.roll(other[1::2], far, 1)
        total = other + side
        total[1:] += other[:-1]
        total[0] += other[-1]
        total[:-1] += other[1:]
        total[-1] += other[0]
        return total

    def half(own, other, odd):
        rng.random(out=u, dtype=np.float32)
        index = own * neighbours(other, odd)
        index += 4
        index >>= 1
        np.negative(own, out=own, where=u < accept.take(index))

    def run():
        black, white = np.ones((L, L // 2), np.int8), np.ones((L, L // 2), np.int8)
        for _ in range(1000):
            half(black, white, False)
            half(white, black, True)
        return -float((black * neighbours(white, False)).sum(dtype=np.int64)) / L**2
    return run


@workload("g numpy, sum in pieces")
def _():
    n = 20_000
    x1 = 400 * np.arange(1, n) / (n - 1)
    g = 3 * x1**2 / 400**3
    w = np.full(n - 1, 400 / (n - 1))
    w[-1] /= 2  # trapezoid; the point at 0 gives 0
    gw = g * w
    ts = 5 + 2.0 * np.arange(500)

    def run():
        s = 0.0
        for T in ts:
            x = x1 / T
            e = np.exp(-x)
            s += gw @ (x * x * e / (1 - e)**2)
        return 3 * R * s
    return run


@workload("h numpy, Generator.normal")
def _():
    rng = np.random.default_rng(1)
    mean = 1 + 0.1 * np.arange(11)

    def run():
        x = rng.normal(mean[:, None], 0.01, (11, 1_000_000))
        y = R * np.log(np.prod(x[:6], axis=0)) + sum(v / np.expm1(v) for v in x[6:])
        lo, hi = np.quantile(y, [0.025, 0.975])
        return hi - lo
    return run


def fermi(eta, largest=50, slope=False):
    """Trapezoid in u = sqrt(t) over the whole line, 2/sqrt(pi) times the
    integral of u^2/(e^(u^2-eta)+1) du, 400 points; with slope also
    F_-1/2, the derivative."""
    u = np.linspace(0, math.sqrt(largest + 45), 400)
    out, out1 = np.empty_like(eta), np.empty_like(eta)
    for i in range(0, len(eta), 2000):
        with np.errstate(over="ignore"):
            f = 1 / (np.exp(u * u - eta[i:i + 2000, None]) + 1)
        out[i:i + 2000] = f @ (u * u) * u[1] * 4 / math.sqrt(math.pi)
        if slope:
            out1[i:i + 2000] = (f.sum(1) - f[:, 0] / 2) * u[1] * 2 / math.sqrt(math.pi)
    return (out, out1) if slope else out


def ramp(a, b):
    return a + (b - a) * (np.arange(100_000) + 0.5) / 100_000


@workload("i1 numpy, trapezoid")
def _():
    eta = ramp(-10, 50)
    return lambda: fermi(eta).sum()


@workload("i2 numpy, Newton on the trapezoid")
def _():
    F = np.exp(ramp(-8, 6))

    def run():
        # Non-degenerate and degenerate limits, then Newton in ln F.
        eta = np.where(F < 1.5, np.log(F) + F / math.sqrt(8), (0.75 * math.sqrt(math.pi) * F)**(2 / 3))
        for _ in range(20):
            f, slope = fermi(eta, 70, True)
            step = np.log(F / f) * f / slope
            eta = eta + step
            if abs(step).max() < 1e-10:
                break
        return eta.sum()
    return run


@workload("i3 numpy, trapezoid of the smooth part")
def _():
    z = ramp(0, 1)

    def run():
        # 4/sqrt(pi) times the integral of u^2/(e^y-1), y = u^2 + alpha. What is
        # left when e^-y/y is subtracted is smooth; that integral is known.
        alpha = -np.log(z)
        u = np.linspace(0, 6.5, 100)
        out = np.empty_like(z)
        for i in range(0, len(z), 2000):
            y = u * u + alpha[i:i + 2000, None]
            e = np.exp(-y)
            out[i:i + 2000] = (e / (1 - e) - e / y) @ (u * u) * u[1]
        a = np.sqrt(alpha)
        out += z * (math.sqrt(math.pi) / 2 - math.pi / 2 * a * erfcx(a))
        return out.sum() * 4 / math.sqrt(math.pi)
    return run


def figure_data():
    T = 2 + 0.149 * np.arange(2000)
    model = lambda T: 3 * R * (240 / T)**2 * np.exp(-240 / T) / (1 - np.exp(-240 / T))**2
    u = 0.02 * model(T)
    return T, model(T) + u * math.sqrt(2) * np.sin(12.9898 * np.arange(2000)), u, model


@workload("j matplotlib, SVG")
def _():
    import matplotlib
    matplotlib.use("svg")
    import matplotlib.pyplot as plt
    plt.rcParams["svg.fonttype"] = "none"
    T, c, u, model = figure_data()

    def run():
        fig, ax = plt.subplots()
        ax.errorbar(T, c, u, fmt=".", ms=2, elinewidth=0.5, label="data")
        ax.plot(T, model(T), label="fit")
        ax.set_xlabel("$T$ / K")
        ax.set_ylabel(r"$C_{p,\mathrm{m}}$ / (J/(mol K))")
        ax.legend()
        out = io.BytesIO()
        fig.savefig(out, format="svg")
        plt.close(fig)
        return len(out.getvalue())
    return run


def fib(n):
    return n if n < 2 else fib(n - 1) + fib(n - 2)


@workload("k1 CPython")
def _():
    return lambda: fib(27)


@workload("k2 CPython")
def _():
    def run(exp=math.exp):
        s = 0.0
        for t in range(500):
            T = 10 + 2.0 * t
            q = 0.0
            for J in range(401):
                q += (2 * J + 1) * exp(-2.88 * (J * (J + 1)) / T)
            s += q
        return s
    return run


@workload("k3 CPython")
def _():
    def f(x):
        return 0.0 if x == 0 else x * x * x / math.expm1(x)

    def run(a=0.0, b=20.0, n=1_000_000):
        h = (b - a) / n
        s = f(a) + f(b)
        for i in range(1, n):
            s += (2 + 2 * (i % 2)) * f(a + i * h)
        return s * h / 3
    return run


PART = {"b numpy, sum in pieces": 10, "cb scipy, curve_fit on a spline": 20, "cb scipy, curve_fit on quadrature": 100}


def main():
    if sys.argv[1:] == ["list"]:
        print("\n".join(ready))
        return
    made = {}
    for line in sys.stdin:
        name = line.rstrip("\n")
        if name not in made:
            made[name] = ready[name]()
            if name not in PART:
                made[name]()  # warm
        run, n = made[name], 0
        r = resource.getrusage(resource.RUSAGE_SELF)
        cpu, start = r.ru_utime + r.ru_stime, time.perf_counter()
        while n == 0 or time.perf_counter() - start < 0.05:
            value = run()
            n += 1
        wall = time.perf_counter() - start
        r = resource.getrusage(resource.RUSAGE_SELF)
        k = PART.get(name, 1) / n
        print(json.dumps({"name": name, "wall": wall * k, "cpu": (r.ru_utime + r.ru_stime - cpu) * k, "value": float(value)}), flush=True)
        if name.startswith("b "):
            del made[name]


if __name__ == "__main__":
    main()
