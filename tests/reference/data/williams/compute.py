"""Computes unequal.json in this folder: tails of Williams's statistic for doses of unequal sizes.

Usage: python compute.py   (needs numpy 2.4, scipy 1.17.1 and mpmath 1.4.1, from the package index; about 10 minutes)

T = (M - X_0)/(S sqrt(1/n_k + 1/n_0)), M = max over u of the weighted mean of doses u..k. S is known
here (df infinite). For a given control mean the walk with steps N(-n_j y, n_j), j = k..1, is followed with its drift, density by density, on Gauss-Legendre panels; the chances
to exceed 0 first at step v are added up (upper) or what is left below 0 integrated (lower); then the control's mean by
Gauss-Legendre on [-10, 10], all in double precision. Each case is computed on two grids; `digits` are those in
which they agree, less one, at most 13. Two doses and |T| up to 2 also in 30-digit arithmetic (mpmath, nested tanh-sinh), and
scipy.stats.multivariate_normal as a second opinion to 1e-5.
"""
import json

import mpmath as mp
import numpy as np
from scipy import stats
from scipy.special import ndtr


def panels(low, high, count, nodes):
    x, w = np.polynomial.legendre.leggauss(nodes)
    edges = np.linspace(low, high, count + 1)
    half = (edges[1:] - edges[:-1]) / 2
    middle = (edges[1:] + edges[:-1]) / 2
    return (middle[:, None] + half[:, None] * x).ravel(), (half[:, None] * w).ravel()


def density(x, var):
    return np.exp(-x * x / (2 * var)) / np.sqrt(2 * np.pi * var)


def walk(y, sizes, fine):
    """P(some sum > 0), P(all sums <= 0) for steps N(-n y, n) in the opposite order of the doses."""
    steps = sizes[::-1]
    upper = ndtr(-y * np.sqrt(steps[0]))
    total, place, weight, mass = steps[0], None, None, None
    for v, n in enumerate(steps):
        if v:
            upper += float(np.sum(weight * mass * ndtr((place - n * y) / np.sqrt(n))))
        total = n if v == 0 else total + n
        reach = 10 * np.sqrt(total) + total * max(y, 0.0)
        x, w = panels(-reach, 0.0, int(24 * fine), 16)
        if v == 0:
            new = density(x + n * y, n)
        else:
            new = density(x[:, None] - place[None, :] + n * y, n) @ (weight * mass)
        place, weight, mass = x, w, new
    return upper, float(np.sum(weight * mass))


def known(w, sizes, control, fine):
    scale = np.sqrt(1 / sizes[-1] + 1 / control)
    z, wz = panels(-10, 10, int(14 * fine), 10)
    both = np.array([walk(zi / np.sqrt(control) + w * scale, sizes, fine) for zi in z])
    return (wz * density(z, 1)) @ both


def two_doses(w, sizes, control):
    """P(T <= w) for two doses, known variance, 30 digits."""
    mp.mp.dps = 30
    n1, n2 = (mp.mpf(str(n)) for n in sizes)
    n0, w = mp.mpf(str(control)), mp.mpf(str(w))
    scale = mp.sqrt(1 / n2 + 1 / n0)

    def given(z):
        y = z / mp.sqrt(n0) + w * scale
        # The last mean is at most y, and the other no larger than what makes their weighted mean y.
        top = y * mp.sqrt(n2)
        return mp.quad(lambda x: mp.npdf(x) * mp.ncdf(((n1 + n2) * y - mp.sqrt(n2) * x) / n1 * mp.sqrt(n1)),
                       [top - 14, top - 6, top - 2, top])

    return mp.quad(lambda z: mp.npdf(z) * given(z), [-12, -6, -3, 0, 3, 6, 12])


def by_simulation_of_space(w, sizes, control):
    """The same tail as a multivariate normal probability, by scipy."""
    k = len(sizes)
    scale = np.sqrt(1 / sizes[-1] + 1 / control)
    a = np.array([[0] * u + [n / sum(sizes[u:]) for n in sizes[u:]] for u in range(k)])
    cov = a @ np.diag([1 / n for n in sizes]) @ a.T + 1 / control
    return stats.multivariate_normal(np.zeros(k), cov, seed=1, maxpts=20_000_000, abseps=1e-7).cdf(np.full(k, w * scale))


CASES = [([5, 8], 10, 2.0, "inf"), ([12, 4], 6, 1.7, "inf"), ([12, 4], 6, 4.5, "inf"), ([12, 4], 6, -1.5, "inf"), ([3, 4, 6], 8, 2.3, "inf"),
         ([9, 5, 2], 7, 1.8, "inf"), ([10, 2, 8, 5], 12, 0.4, "inf"), ([6, 5, 7, 6, 4, 6], 9, 3.2, "inf"),
         ([6, 5, 7, 6, 4, 6], 9, -1.0, "inf"), ([20, 10, 3, 2], 20, 6.0, "inf")]


def main():
    cases = []
    for sizes, control, t, df in CASES:
        coarse, fine = (known(t, sizes, control, f) for f in (1, 1.4))
        error = max(abs(c / f - 1) for c, f in zip(coarse, fine))
        digits = int(min(13, -np.log10(max(error, 1e-16)) - 1))
        assert abs(by_simulation_of_space(t, sizes, control) - fine[1]) < 1e-5, (sizes, t)
        case = {"sizes": sizes, "control": control, "t": t, "df": df, "value": f"{fine[0]:.14e}", "lower": f"{fine[1]:.14e}", "digits": digits}
        if len(sizes) == 2 and abs(t) <= 2:
            lower = two_doses(t, sizes, control)
            assert abs(float(lower) / fine[1] - 1) < 1e-13, (sizes, t, lower, fine)
            case |= {"value": mp.nstr(1 - lower, 20), "lower": mp.nstr(lower, 20), "digits": 15}
        print(case, error, flush=True)
        cases.append(case)
    head = {"quantity": "Williams's statistic for doses of unequal sizes, upper tail P(T > t) and lower tail",
            "source": "compute.py in this folder", "digits": "per case"}
    with open("unequal.json", "w") as file:
        file.write(json.dumps(head, indent=1)[:-2] + ',\n "cases": [\n  ' + ",\n  ".join(map(json.dumps, cases)) + "\n ]\n}\n")


if __name__ == "__main__":
    main()
