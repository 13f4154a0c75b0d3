"""Computes expected.json for the two open data sets of this folder.

Usage: python compute.py   (needs mpmath, scipy 1.17, statsmodels 0.15; from the package index)

F, Welch's F, Kruskal-Wallis and the effect sizes: exact rationals from the decimal text, then 40-digit tails
(mpmath). Tukey-Kramer and Games-Howell p-values: scipy.stats.tukey_hsd (absolute error about 1e-14).
Adjusted p-values: statsmodels' multipletests on 40-digit pooled t tests.
"""
import csv, json
from fractions import Fraction as Fr
from itertools import combinations
import mpmath as mp
from scipy import stats
from statsmodels.stats.multitest import multipletests

mp.mp.dps = 40


def f_tail(f, d1, d2):
    return mp.betainc(mp.mpf(d2) / 2, mp.mpf(d1) / 2, 0, d2 / (d2 + d1 * f), regularized=True)


def chi_tail(x, df):
    return mp.gammainc(mp.mpf(df) / 2, x / 2, regularized=True)


def m(q):
    return mp.mpf(q.numerator) / q.denominator


def analyse(path, group, outcome):
    groups = {}
    for row in csv.DictReader(open(path)):
        if row[outcome] not in ("", "NA"):
            groups.setdefault(row[group], []).append(Fr(row[outcome]))
    names, data = list(groups), list(groups.values())
    k, n = len(data), [len(g) for g in data]
    N = sum(n)
    means = [sum(g) / len(g) for g in data]
    grand = sum(map(sum, data)) / N
    ssb = sum(a * (b - grand) ** 2 for a, b in zip(n, means))
    sse = [sum((x - c) ** 2 for x in g) for g, c in zip(data, means)]
    ssw = sum(sse)
    var = [s / (a - 1) for s, a in zip(sse, n)]
    msw = ssw / (N - k)
    F = (ssb / (k - 1)) / msw
    w = [a / v for a, v in zip(n, var)]
    W = sum(w)
    centre = sum(a * b for a, b in zip(w, means)) / W
    lam = sum((1 - a / W) ** 2 / (b - 1) for a, b in zip(w, n))
    FW = (sum(a * (b - centre) ** 2 for a, b in zip(w, means)) / (k - 1)) / (1 + Fr(2 * (k - 2), k * k - 1) * lam)
    dfW = Fr(k * k - 1) / (3 * lam)
    values = sorted(x for g in data for x in g)
    rank = {}
    for v in set(values):
        first = values.index(v)
        rank[v] = Fr(2 * first + 1 + values.count(v), 2)
    ties = sum(values.count(v) ** 3 - values.count(v) for v in set(values))
    H = Fr(12, N * (N + 1)) * sum(a * (sum(rank[x] for x in g) / a - Fr(N + 1, 2)) ** 2 for a, g in zip(n, data))
    H /= 1 - Fr(ties, N**3 - N)
    floats = [[float(x) for x in g] for g in data]
    tukey, games = stats.tukey_hsd(*floats), stats.tukey_hsd(*floats, equal_var=False)
    raw, pairs = [], []
    for i, j in combinations(range(k), 2):
        diff = means[j] - means[i]
        t = m(diff) / mp.sqrt(m(msw) * (mp.mpf(1) / n[i] + mp.mpf(1) / n[j]))
        raw.append(f_tail(t * t, 1, N - k))
        pairs.append({"pair": [names[i], names[j]], "difference": str(m(diff)), "t": str(t), "p": str(raw[-1]),
                      "tukey": tukey.pvalue[i, j], "games_howell": games.pvalue[i, j]})
    for name, method in (("holm", "holm"), ("bonferroni", "bonferroni"), ("hochberg", "simes-hochberg")):
        for pair, p in zip(pairs, multipletests([float(p) for p in raw], method=method)[1]):
            pair[name] = p
    return {
        "levels": names, "n": n, "mean": [str(m(x)) for x in means], "sd": [str(mp.sqrt(m(v))) for v in var],
        "anova": {"F": str(m(F)), "df1": k - 1, "df2": N - k, "p": str(f_tail(m(F), k - 1, N - k)), "ss_between": str(m(ssb)), "ss_within": str(m(ssw))},
        "welch": {"F": str(m(FW)), "df2": str(m(dfW)), "p": str(f_tail(m(FW), k - 1, m(dfW)))},
        "kruskal_wallis": {"H": str(m(H)), "p": str(chi_tail(m(H), k - 1))},
        "eta_squared": str(m(ssb / (ssb + ssw))),
        "omega_squared": str(m((ssb - (k - 1) * msw) / (ssb + ssw + msw))),
        "pairs": pairs,
    }


json.dump(
    {"penguins": analyse("penguins.csv", "species", "body_mass_g"), "iris": analyse("iris.csv", "species", "sepal_length_cm")},
    open("expected.json", "w"), indent=1,
)
