"""Least-squares fits of dose-response curves to invented observations.

Versions: Python 3, numpy 2.4.6, scipy 1.17.1, mpmath 1.4.1. Run: python fits.py > fits.json

Observations are drawn once with a seed and rounded to three decimals. scipy.optimize.curve_fit fits every observation from many
starts (the smallest residual sum of squares counts); its estimates and covariance are written as "curve_fit". From there
mpmath solves the normal equations d RSS / d parameters = 0 with 40 digits by Gauss and Newton's method, and makes the covariance
s² (J'J)⁻¹, s² = RSS / (N - parameters), in the same precision: "parameters", "covariance", "rss". For each set the dose at which the
fitted curve is "target" above that of the lowest dose is found with 40 digits too, where there is one, and its delta-method
standard error from mpmath's numeric derivatives of that dose with respect to the parameters.
"""
import json
import numpy as np
import mpmath as mp
from scipy.optimize import curve_fit

mp.mp.dps = 40
CURVES = {
    "linear": (lambda e, x, a, b: a + b * x, 0),
    "log-linear": (lambda e, x, a, b: a + b * e.log(x + 1), 0),
    "Emax": (lambda e, x, a, b, e50: a + b * x / (e50 + x), 1),
    "exponential": (lambda e, x, a, b, d: a + b * (e.exp(x / d) - 1), 1),
    "quadratic": (lambda e, x, a, b, c: a + b * x + c * x * x, 0),
    "sigmoid Emax": (lambda e, x, a, b, e50, h: a + b * x**h / (e50**h + x**h), 2),
    "logistic": (lambda e, x, a, b, e50, d: a + b / (1 + e.exp((e50 - x) / d)), 2),
}


def starts(name, doses, y, rng):
    top, low, high = max(doses), min(y), max(y)
    for _ in range(60):
        a, b = rng.uniform(low, high), rng.uniform(-1, 1) * 2 * (high - low)
        if name in ("linear", "log-linear"):
            yield [a, b]
        elif name == "quadratic":
            yield [a, b / top, -b / top**2]
        elif name == "Emax":
            yield [a, b, top * 10 ** rng.uniform(-2, 0.5)]
        elif name == "exponential":
            yield [a, b, top * 10 ** rng.uniform(-0.6, 0.5)]
        elif name == "sigmoid Emax":
            yield [a, b, top * 10 ** rng.uniform(-2, 0.2), 10 ** rng.uniform(-0.3, 0.9)]
        else:
            yield [a, b, top * rng.uniform(0, 1), top * 10 ** rng.uniform(-1.5, 0)]


def by_scipy(name, x, y, rng):
    curve = CURVES[name][0]
    best = None
    for start in starts(name, x, y, rng):
        try:
            with np.errstate(all="ignore"):
                p, cov = curve_fit(lambda x, *p: curve(np, x, *p), x, y, p0=start, ftol=1e-15, xtol=1e-15, gtol=1e-15,
                                   maxfev=20000)
        except (RuntimeError, ValueError):
            continue
        rss = float(np.sum((curve(np, x, *p) - y) ** 2))
        allowed = name == "quadratic" or all(v > 0 for v in p[2:])
        if allowed and np.all(np.isfinite(cov)) and (best is None or rss < best[2]):
            best = (p, cov, rss)
    return best


def refine(name, doses, groups, start):
    """Gauss and Newton's steps until the normal equations hold to 28 digits, the observations of a dose entering by their sum and number."""
    curve = CURVES[name][0]
    x = [mp.mpf(str(d)) for d in doses]
    y = [[mp.mpf(str(v)) for v in g] for g in groups]
    f = lambda i, p: curve(mp, x[i], *p) if x[i] != 0 or name != "sigmoid Emax" else p[0]

    def column(i, p):
        out = []
        for j in range(len(p)):
            moved = lambda v: f(i, [v if k == j else q for k, q in enumerate(p)])
            out.append(mp.diff(moved, p[j]))
        return out

    p = [mp.mpf(float(v)) for v in start]
    for _ in range(500):
        rows = [column(i, p) for i in range(len(x))]
        left = [sum(y[i]) - len(y[i]) * f(i, p) for i in range(len(x))]
        information, against = mp.matrix(len(p), len(p)), mp.matrix(len(p), 1)
        for a in range(len(p)):
            against[a] = sum(rows[i][a] * left[i] for i in range(len(x)))
            for b in range(len(p)):
                information[a, b] = sum(len(y[i]) * rows[i][a] * rows[i][b] for i in range(len(x)))
        step = mp.lu_solve(information, against)
        p = [v + s for v, s in zip(p, step)]
        if all(abs(s) <= mp.mpf(10) ** -28 * abs(v) for v, s in zip(p, step)):
            break
    else:
        raise RuntimeError(f"{name}: no convergence")
    rss = sum((v - f(i, p)) ** 2 for i in range(len(x)) for v in y[i])
    df = sum(len(g) for g in groups) - len(p)
    return p, information**-1 * (rss / df), rss, df


def dose(name, doses, p, target):
    """The smallest dose in the range with the target effect, by bisection on a fine grid; None if there is none."""
    curve = CURVES[name][0]
    f = lambda d, p: curve(mp, d, *p) if d != 0 or name != "sigmoid Emax" else p[0]
    low, high = mp.mpf(str(doses[0])), mp.mpf(str(doses[-1]))
    sign = mp.sign(target)
    over = lambda d, p: sign * (f(d, p) - f(low, p) - target)
    grid = [low + (high - low) * i / 2000 for i in range(2001)]
    reached = next((i for i, d in enumerate(grid) if i and over(d, p) >= 0), None)
    if reached is None:
        return None
    solve = lambda p: mp.findroot(lambda d: over(d, p), (grid[reached - 1], grid[reached]), solver="anderson", tol=mp.mpf(10) ** -60)
    found = solve(p)
    gradient = []
    for j in range(len(p)):
        h = abs(p[j]) * mp.mpf(10) ** -12
        moved = lambda by: solve([q + by if k == j else q for k, q in enumerate(p)])
        gradient.append((moved(h) - moved(-h)) / (2 * h))
    return found, gradient


def case(label, truth, doses, sizes, sd, names, target, seed):
    rng = np.random.default_rng(seed)
    groups = [[round(float(truth(d) + sd * z), 3) for z in rng.standard_normal(n)] for d, n in zip(doses, sizes)]
    x = np.repeat(np.array(doses, dtype=float), sizes)
    y = np.array([v for g in groups for v in g])
    fits = []
    for name in names:
        p0, cov0, rss0 = by_scipy(name, x, y, rng)
        p, cov, rss, df = refine(name, doses, groups, p0)
        text = lambda v: mp.nstr(v, 20)
        fit = {"shape": name, "parameters": [text(v) for v in p],
               "covariance": [[text(cov[a, b]) for b in range(len(p))] for a in range(len(p))], "rss": text(rss), "df": df,
               "curve_fit": {"parameters": p0.tolist(), "covariance": cov0.tolist()}}
        found = dose(name, doses, p, mp.mpf(str(target)))
        if found:
            g = mp.matrix(found[1])
            fit["dose"] = text(found[0])
            fit["dose_se"] = text(mp.sqrt((g.T * cov * g)[0]))
        fits.append(fit)
    return {"label": label, "doses": doses, "groups": groups, "target": target, "fits": fits}


CASES = [
    case("Emax, unequal sizes", lambda d: 2 + 6 * d / (8 + d), [0, 2, 5, 10, 20, 50], [9, 7, 8, 6, 9, 5], 1.0,
         ["linear", "log-linear", "Emax", "quadratic", "sigmoid Emax"], 3, 1),
    case("exponential", lambda d: 1 + 0.8 * (np.exp(d / 4) - 1), [0, 1, 2.5, 4, 6, 8], [10, 10, 10, 10, 10, 10], 0.7,
         ["linear", "log-linear", "exponential", "quadratic"], 1.5, 2),
    case("sigmoid", lambda d: 5 + 10 / (1 + (30 / d) ** 3.5 if d else np.inf), [0, 10, 20, 30, 40, 60, 80, 100], [12] * 8, 1.5,
         ["linear", "Emax", "sigmoid Emax", "logistic"], 4, 3),
    case("falling logistic", lambda d: 40 - 12 / (1 + np.exp((0.5 - d) / 0.1)), [0, 0.2, 0.4, 0.5, 0.6, 0.8, 1], [8, 8, 8, 6, 8, 8, 8],
         1.2, ["linear", "sigmoid Emax", "logistic"], -5, 4),
    case("umbrella", lambda d: 3 + 2 * d - 0.16 * d * d, [0, 2, 4, 6, 8, 10], [7] * 6, 0.9, ["linear", "quadratic"], 4, 5),
    case("noisy", lambda d: 2 + 1.2 * d / (1 + d), [0, 0.5, 1, 2, 4, 8], [5, 4, 5, 5, 4, 5], 0.8, ["linear", "log-linear", "Emax"], 0.7, 9),
    case("large numbers far from zero", lambda d: 1e4 + 60 * d / (700 + d), [0, 250, 500, 1000, 2000], [6] * 5, 4.0,
         ["linear", "Emax"], 20, 8),
]
print(json.dumps({"source": "fits.py, mpmath 1.4.1 and scipy 1.17.1", "cases": CASES}, indent=1))
