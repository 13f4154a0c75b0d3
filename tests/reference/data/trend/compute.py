"""Computes the tests of trend in this folder.

Usage: python compute.py   (needs scipy 1.17.1, mpmath 1.4.1 and numpy, from the package index)

monotone.json: monotone fits by the closed form f_i = max over u <= i of the min over v >= i of the weighted means of u..v, in
exact rationals. Second opinion, asserted below: scipy.optimize.isotonic_regression.

ordered.json: Jonckheere and Terpstra's J by going through all pairs; its expectation, its variance and its exact tails by going
through every way of dealing the values out to the levels (the moments in exact rationals, so that they check the published
formula for the variance with ties), the normal tails in 40-digit arithmetic. "normal": too many ways to go through, the variance
by the published formula {N(N-1)(2N+5) - sum n(n-1)(2n+5) - sum t(t-1)(2t+5)}/72 + ... in exact rationals. Second opinion of J,
asserted below: the sum of the Mann-Whitney statistics of all pairs of levels from scipy.stats.mannwhitneyu.

proportions.json: Cochran and Armitage's test in exact rationals (logarithmic scores: 40 digits), the exact tails by going through
every table with the same totals. Second opinions, asserted below: z is the square root of N times scipy.stats.pearsonr of
response and score, X^2 is scipy.stats.chi2_contingency without correction.

steps.json: P(max T > c) for contrasts of Williams's type. The differences W_u of the mean of the top u doses and the control have
Cov(W_u, W_v) = v_v for u < v with v_u = 1/n_0 + 1/N_u: a walk from u = k down to 1 with independent steps, followed density by
density with 200 Gauss-Legendre points a step, then integrated over S with 200 points; good to about 1e-11 (the same with 300
points, asserted). Second opinion, asserted to 1e-4: scipy.stats.multivariate_t.

scales.json: P(max |T| > c) for the scores, their ranks and their logarithms of the invented dose set, as the integral over S of
the normal probability of the three, in polar form: on each ray from the origin |T| stays below c up to a radius r, and the
squared distance of three normal numbers over S^2 is 3 F(3, df), so that the tail is the mean over the sphere of P(F > r^2/3).
Product rule on the sphere with 1200 x 2400 points, the same with 800 x 1600 asserted to agree.
"""
import json
import random
from fractions import Fraction as Fr
from itertools import combinations, product
from math import comb

import mpmath as mp
import numpy as np
from scipy import optimize, stats

mp.mp.dps = 40


def digits(q):
    q = mp.mpf(q.numerator) / q.denominator if isinstance(q, Fr) else mp.mpf(q)
    return mp.nstr(q, 20, strip_zeros=False)


def write(name, what, cases):
    with open(f"{name}.json", "w") as file:
        lines = ",\n  ".join(json.dumps(case) for case in cases)
        file.write('{"what": %s,\n "cases": [\n  %s\n]}\n' % (json.dumps(what), lines))


# ---- monotone fits

def monotone_case(means, weights, falling):
    m = [Fr(x) if isinstance(x, int) else Fr(str(x)) for x in means]
    w = [Fr(x) if isinstance(x, int) else Fr(str(x)) for x in weights]
    s = -1 if falling else 1
    mean = lambda u, v: sum(s * a * b for a, b in zip(m[u:v + 1], w[u:v + 1])) / sum(w[u:v + 1])
    k = len(m)
    fitted = [s * max(min(mean(u, v) for v in range(i, k)) for u in range(i + 1)) for i in range(k)]
    second = optimize.isotonic_regression([float(x) for x in m], weights=[float(x) for x in w],
                                          increasing=not falling).x
    assert np.allclose(second, [float(f) for f in fitted], rtol=1e-12, atol=1e-12), (means, weights)
    return {"means": means, "weights": weights, "falling": falling, "fitted": [digits(f) for f in fitted]}


def monotone_cases():
    rng = random.Random(1)
    # Williams (1971), worked example: means of the doses.
    yield monotone_case([9.9, 10.0, 10.6, 11.4, 11.9, 11.7], [8] * 6, False)
    yield monotone_case([5, 4, 3, 2, 1], [1, 2, 3, 4, 5], False)
    yield monotone_case([1, 2, 2, 7], [3, 1, 1, 2], False)
    yield monotone_case([4], [2], True)
    for _ in range(40):
        k = rng.randint(2, 12)
        means = [rng.randint(-99, 99) / 8 for _ in range(k)]
        weights = [rng.choice([1, 2, 5, 8, 0.5, 30]) for _ in range(k)]
        yield monotone_case(means, weights, rng.random() < 0.5)


# ---- Jonckheere and Terpstra

def doubled_j(groups):
    pairs = combinations(range(len(groups)), 2)
    return sum((y > x) * 2 + (y == x) for g, h in pairs for x in groups[g] for y in groups[h])


def arrangements(values, sizes):
    if not sizes:
        yield []
        return
    for chosen in combinations(range(len(values)), sizes[0]):
        rest = [v for i, v in enumerate(values) if i not in chosen]
        for others in arrangements(rest, sizes[1:]):
            yield [[values[i] for i in chosen]] + others


def formula(sizes, ties):
    n = sum(sizes)
    a = lambda c: Fr(sum(x * (x - 1) * (2 * x + 5) for x in c))
    b = lambda c: sum(x * (x - 1) * (x - 2) for x in c)
    c2 = lambda c: sum(x * (x - 1) for x in c)
    v = (a([n]) - a(sizes) - a(ties)) / 72
    if n > 2:
        v += Fr(b(sizes) * b(ties), 36 * n * (n - 1) * (n - 2))
    return v + Fr(c2(sizes) * c2(ties), 8 * n * (n - 1))


def ordered_case(name, groups, enumerate_all):
    values = [x for group in groups for x in group]
    sizes = [len(group) for group in groups]
    ties = [values.count(v) for v in sorted(set(values))]
    observed = doubled_j(groups)
    second = sum(stats.mannwhitneyu(h, g, method="asymptotic").statistic for g, h in combinations(groups, 2))
    assert 2 * second == observed
    mean = Fr(sum(sizes) ** 2 - sum(n * n for n in sizes), 4)
    variance = formula(sizes, ties)
    case = {"name": name, "groups": groups, "J": observed / 2}
    if enumerate_all:
        found = [doubled_j(one) for one in arrangements(values, sizes)]
        count = len(found)
        assert Fr(sum(found), 2 * count) == mean
        assert sum((Fr(x, 2) - mean) ** 2 for x in found) / count == variance
        upper, lower = (Fr(sum(x >= observed for x in found), count), Fr(sum(x <= observed for x in found), count))
        case |= {"exact_greater": digits(upper), "exact_less": digits(lower)}
    z = (mp.mpf(observed) / 2 - mp.mpf(mean.numerator) / mean.denominator) / mp.sqrt(
        mp.mpf(variance.numerator) / variance.denominator)
    return case | {
        "mean": digits(mean), "variance": digits(variance), "z": digits(z),
        "normal_greater": digits(mp.erfc(z / mp.sqrt(2)) / 2), "normal_less": digits(mp.erfc(-z / mp.sqrt(2)) / 2),
        "how": "every arrangement" if enumerate_all else "normal",
    }


def ordered_cases():
    rng = random.Random(2)
    # Hollander and Wolfe's example (data from memory) and the invented dose set.
    yield ordered_case("Hollander and Wolfe", [[40, 35, 38, 43, 44, 41], [38, 40, 47, 44, 40, 42],
                                               [48, 40, 45, 43, 46, 44]], False)
    yield ordered_case("dose set", [[12, 15, 14, 11, 13, 13], [14, 16, 15, 13, 17], [18, 17, 15, 19, 16],
                                    [19, 21, 18, 22]], False)
    for sizes, distinct in [([2, 2, 2], 99), ([3, 2, 4], 99), ([3, 3, 3], 4), ([1, 4, 2, 1], 3), ([4, 4], 5),
                            ([2, 2, 2, 2], 2), ([5, 1, 3], 2), ([3, 3, 2, 1], 6), ([1, 1, 1, 1, 1], 4)]:
        for turn in range(3):
            groups = [[rng.randint(1, distinct) + turn * level for _ in range(n)] for level, n in enumerate(sizes)]
            if len({x for group in groups for x in group}) > 1:
                yield ordered_case(f"{sizes} of {distinct}", groups, True)


# ---- Cochran and Armitage

def proportion_case(r, n, scores):
    """Scores: whole numbers or decimals, or "log 10" for a logarithm."""
    logs = any(isinstance(x, str) for x in scores)
    x = [mp.log(int(a.split()[1])) if logs else Fr(str(a)) for a in scores]
    total, all_r = sum(n), sum(r)
    num = (lambda q: mp.mpf(q.numerator) / q.denominator) if logs else (lambda q: q)
    p = num(Fr(all_r, total))
    xbar = sum(a * b for a, b in zip(x, n)) / total
    t = sum((a - xbar) * (num(Fr(b)) - c * p) for a, b, c in zip(x, r, n))
    square = sum(c * (a - xbar) ** 2 for a, c in zip(x, n))
    z2 = t * t / (p * (1 - p) * square)
    chi = sum((num(Fr(b)) - c * p) ** 2 / (c * p * (1 - p)) for b, c in zip(r, n))
    mpf = lambda q: mp.mpf(q.numerator) / q.denominator if isinstance(q, Fr) else q
    z = mp.sign(mpf(t)) * mp.sqrt(mpf(z2))
    y = np.concatenate([[1] * a + [0] * (b - a) for a, b in zip(r, n)])
    second = stats.pearsonr(y, np.repeat([float(a) for a in x], n)).statistic * np.sqrt(total)
    assert abs(second - float(z)) < 1e-10, (second, z)
    table = np.array([r, [b - a for a, b in zip(r, n)]])
    assert abs(stats.chi2_contingency(table, correction=False).statistic - float(mpf(chi))) < 1e-10
    df = len(n) - 2
    left = mpf(chi) - mpf(z2)
    case = {"r": r, "n": n, "scores": [float(a) for a in x], "z": digits(z), "chi_squared": digits(mpf(chi)),
            "left": digits(left), "slope": digits(t / square),
            "left_p": digits(mp.gammainc(mp.mpf(df) / 2, left / 2, regularized=True)) if df else None}
    tables = 1
    for b in n:
        tables *= min(b, all_r) + 1
    if tables <= 400_000:
        observed = sum(a * b for a, b in zip(x, r))
        slack = mp.mpf(10) ** -25 if logs else 0
        upper = lower = whole = 0
        for some in product(*(range(min(b, all_r) + 1) for b in n[:-1])):
            last = all_r - sum(some)
            if not 0 <= last <= n[-1]:
                continue
            ways = 1
            for a, b in zip((*some, last), n):
                ways *= comb(b, a)
            value = sum(a * b for a, b in zip(x, (*some, last)))
            whole += ways
            upper += ways * (value >= observed - slack)
            lower += ways * (value <= observed + slack)
        assert whole == comb(total, all_r)
        case |= {"exact_greater": digits(Fr(upper, whole)), "exact_less": digits(Fr(lower, whole))}
    return case


def proportion_cases():
    rng = random.Random(3)
    yield proportion_case([3, 5, 9, 14], [50] * 4, [0, 1, 2, 4])
    yield proportion_case([1, 9], [10, 12], [0, 1])
    yield proportion_case([0, 2, 3, 8], [8, 8, 8, 8], ["log 10", "log 30", "log 100", "log 700"])
    yield proportion_case([4, 1, 2, 0], [6, 9, 7, 8], ["log 10", "log 100", "log 1000", "log 10000"])
    for _ in range(20):
        k = rng.randint(2, 5)
        n = [rng.randint(1, 11) for _ in range(k)]
        r = [rng.randint(0, b) for b in n]
        scores = sorted(rng.sample([0, 0.1, 0.25, 1, 2.5, 3, 7, 10, 33.3, 100], k))
        if 0 < sum(r) < sum(n):
            yield proportion_case(r, n, scores)


# ---- contrasts of Williams's type

def steps_tail(n, df, c, points):
    node, weight = np.polynomial.legendre.leggauss(points)
    totals = np.cumsum(n[:0:-1])
    v = 1 / n[0] + 1 / totals
    dens = lambda z, var: np.exp(-z * z / (2 * var)) / np.sqrt(2 * np.pi * var)

    def below(b):
        w, f = None, None
        for u in range(len(v) - 1, -1, -1):
            high, low = b * np.sqrt(v[u]), -9 * np.sqrt(v[0])
            y = low + (high - low) * (node + 1) / 2
            g = weight * (high - low) / 2
            f = dens(y, v[u]) if w is None else dens(y[:, None] - w[None, :], v[u] - v[u + 1]) @ f
            w, f = y, f * g
        return f.sum()

    s = stats.chi(df, scale=1 / np.sqrt(df))
    low, high = s.ppf(1e-15), s.isf(1e-15)
    at = low + (high - low) * (node + 1) / 2
    return float(sum(weight * (high - low) / 2 * s.pdf(at) * np.array([1 - below(c * x) for x in at])))


def steps_case(n, df, c):
    value = steps_tail(n, df, c, 200)
    assert abs(value - steps_tail(n, df, c, 300)) < 1e-11, (n, df, c)
    totals = np.cumsum(n[:0:-1])
    v = 1 / n[0] + 1 / totals
    corr = np.array([[np.sqrt(min(a, b) / max(a, b)) for a in v] for b in v])
    second = 1 - stats.multivariate_t.cdf([c] * len(v), shape=corr, df=df, random_state=1, maxpts=200_000)
    assert abs(second - value) < 1e-4, (second, value)
    return {"n": n, "df": df, "c": c, "value": f"{value:.12f}"}


def steps_cases():
    for n, df in [([10] * 6, 54), ([20, 10, 12, 8, 15, 9], 68), ([50] * 8, 392)]:
        for c in [1.3, 2.2, 3.1]:
            yield steps_case(n, df, c)


# ---- three scales

def scales_tail(c, points):
    n, df = np.array([6.0, 5, 5, 4]), 16
    x = [np.array([0.0, 10, 30, 100]), np.arange(4.0)]
    logs = np.log([10.0, 30, 100])
    x.append(np.concatenate([[logs[0] - 10 / 20 * (logs[1] - logs[0])], logs]))
    rows = np.array([np.sqrt(n) * (a - n @ a / n.sum()) for a in x])
    rows /= np.sqrt((rows ** 2).sum(axis=1))[:, None]
    low = np.linalg.cholesky(rows @ rows.T)
    up, weight = np.polynomial.legendre.leggauss(points)
    angle = 2 * np.pi * (np.arange(2 * points) + 0.5) / (2 * points)
    flat = np.sqrt(1 - up ** 2)
    total = 0.0
    for z, f, w in zip(up, flat, weight):
        on = np.array([f * np.cos(angle), f * np.sin(angle), np.full_like(angle, z)])
        radius = c / np.abs(low @ on).max(axis=0)
        total += w / 2 * stats.f.sf(radius ** 2 / 3, 3, df).mean()
    return total


def scales_cases():
    for c in [1.2, 2.0, 2.3001832896, 2.30019, 3.5, 7.1]:
        value = scales_tail(c, 1200)
        error = abs(value - scales_tail(c, 800))
        assert error < 1e-6 * value, (c, value, error)
        yield {"c": c, "value": f"{value:.9g}", "error": f"{error:.1e}"}


if __name__ == "__main__":
    write("monotone", "monotone fits, 20 digits: see compute.py", list(monotone_cases()))
    write("ordered", "Jonckheere and Terpstra's test, 20 digits: see compute.py", list(ordered_cases()))
    write("proportions", "Cochran and Armitage's test, 20 digits: see compute.py", list(proportion_cases()))
    write("steps", "largest t of contrasts of Williams's type, about 1e-11: see compute.py", list(steps_cases()))
    write("scales", "largest |t| of three scales, about 1e-6 of itself: see compute.py", list(scales_cases()))
