"""Adjusted p-values of candidate shapes' best contrasts, as upper tails of the multivariate t.

Versions: Python 3, numpy 2.4.6, scipy 1.17.1. Run: python joint.py > joint.json

The contrasts are found by solving the bordered linear system of the constrained maximum (Lagrange), not from the weighted-mean
formula. P(max T <= c) is scipy.stats.multivariate_t.cdf, a quasi-Monte-Carlo integral: the mean of 8 seeds is written with the
standard error of that mean.
"""
import json
import numpy as np
from scipy.stats import multivariate_t

SHAPES = {
    "linear": lambda x: x,
    "log-linear": lambda x, offset: np.log(x + offset),
    "Emax": lambda x, e50: x / (e50 + x),
    "exponential": lambda x, delta: np.exp(x / delta) - 1,
    "quadratic": lambda x, peak: x - x**2 / (2 * peak),
    "sigmoid Emax": lambda x, e50, h: x**h / (e50**h + x**h),
    "logistic": lambda x, e50, delta: 1 / (1 + np.exp((e50 - x) / delta)),
    "step": lambda x, threshold: (x >= threshold) * 1.0,
}


def best(g, n):
    """The c with sum 0 that maximises c'g - c' diag(1/n) c / 2, up to a factor, by Lagrange's equations."""
    k = len(g)
    system = np.zeros((k + 1, k + 1))
    system[:k, :k] = np.diag(1 / n)
    system[:k, k] = system[k, :k] = 1
    c = np.linalg.solve(system, np.append(g, 0))[:k]
    return c / np.sqrt(np.sum(c * c))


def tail(correlation, df, c, both):
    low = np.full(len(correlation), -c if both else -np.inf)
    high = np.full(len(correlation), c)
    law = multivariate_t(shape=correlation, df=df)
    runs = [1 - law.cdf(high, lower_limit=low, maxpts=2_000_000, random_state=seed) for seed in range(8)]
    return float(np.mean(runs)), float(np.std(runs, ddof=1) / np.sqrt(8))


def case(doses, n, means, variance, shapes):
    doses, n, means = (np.array(a, dtype=float) for a in (doses, n, means))
    df = int(n.sum() - len(n))
    contrasts = np.array([best(SHAPES[name](doses, *guesses), n) for name, guesses in shapes])
    v = contrasts @ np.diag(variance / n) @ contrasts.T
    sd = np.sqrt(np.diag(v))
    t = contrasts @ means / sd
    correlation = v / np.outer(sd, sd)
    found = {"doses": doses.tolist(), "n": n.astype(int).tolist(), "means": means.tolist(), "variance": variance,
             "shapes": [[name, *guesses] for name, guesses in shapes], "contrasts": contrasts.tolist(), "t": t.tolist()}
    for key, both in (("greater", False), ("both", True)):
        found[key] = [tail(correlation, df, abs(s) if both else s, both) for s in t]
    return found


CASES = [
    case([0, 1, 3, 10], [8, 6, 7, 9], [1.0, 1.3, 1.7, 1.9], 0.8, [("linear", ()), ("Emax", (1.5,)), ("step", (3.0,))]),
    case([0, 0.05, 0.2, 0.6, 1], [10, 10, 10, 10, 10], [0.2, 0.4, 0.55, 0.75, 0.7], 0.42,
         [("Emax", (0.2,)), ("linear", ()), ("exponential", (0.3,)), ("quadratic", (0.7,))]),
    case([0, 5, 10, 20, 40, 80, 120, 160], [6, 5, 5, 7, 6, 5, 4, 6],
         [10.2, 10.0, 10.9, 10.8, 11.6, 12.1, 11.9, 12.6], 4.1,
         [("linear", ()), ("log-linear", (5.0,)), ("sigmoid Emax", (40.0, 3.0)), ("logistic", (60.0, 15.0)),
          ("exponential", (60.0,)), ("quadratic", (120.0,))]),
    case([0, 1, 3, 10], [5, 5, 5, 5], [4.0, 3.9, 3.2, 3.0], 0.9, [("log-linear", (1.0,)), ("exponential", (4.0,))]),
]
print(json.dumps({"source": "joint.py, scipy 1.17.1", "cases": CASES}, indent=1))
