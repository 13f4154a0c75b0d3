"""Computes the tests of trend in this folder.

Usage: python compute.py   (needs scipy 1.17.1, mpmath 1.4.1 and numpy, from the package index)

monotone.json: monotone fits by the closed form f_i = max over u <= i of the min over v >= i of the weighted means of u..v, in
exact rationals. Second opinion, asserted below: scipy.optimize.isotonic_regression.

ordered.json: Jonckheere and Terpstra's J by going through all pairs; its expectation, its variance and its exact tails by going
through every way of dealing the values out to the levels (the moments in exact rationals, so that they check the published
formula for the variance with ties), the normal tails in 40-digit arithmetic. "normal": too many ways to go through, the variance
by the published formula {N(N-1)(2N+5) - sum n(n-1)(2n+5) - sum t(t-1)(2t+5)}/72 + ... in exact rationals. Second opinion of J,
asserted below: the sum of the Mann-Whitney statistics of all pairs of levels from scipy.stats.mannwhitneyu.
"""
import json
import random
from fractions import Fraction as Fr
from itertools import combinations

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


if __name__ == "__main__":
    write("monotone", "monotone fits, 20 digits: see compute.py", list(monotone_cases()))
    write("ordered", "Jonckheere and Terpstra's test, 20 digits: see compute.py", list(ordered_cases()))
