"""Computes the comparisons by ranks in this folder.

Usage: python compute.py   (needs scipy 1.17.1 and mpmath 1.4.1, from the package index)

pairwise.json: two groups ranked alone. U, its variance and z from exact rationals; the normal tails in 40-digit arithmetic; the
exact tails by going through every choice of the second group's places one by one ("enumeration", up to 200,000 choices), else by
counting the subsets of the doubled midranks in whole numbers of any length ("subsets"). Second opinions, asserted below:
scipy.stats.mannwhitneyu, exact (without ties) and asymptotic without correction for continuity.

joint.json: contrasts of mean ranks, all groups ranked together, with ties: mean ranks and the variance of a contrast from exact
rationals. The variance is also found by going through every way of dealing the midranks out to the groups, where these
are few ("enumerated": true); both must be the same fraction.
"""
import json
import random
from fractions import Fraction as Fr
from itertools import combinations
from math import comb

import mpmath as mp
from scipy import stats

mp.mp.dps = 40


def digits(q):
    q = mp.mpf(q.numerator) / q.denominator if isinstance(q, Fr) else q
    return mp.nstr(q, 20, strip_zeros=False)


def doubled_midranks(values):
    return [2 * sum(v < x for v in values) + 1 + sum(v == x for v in values) for x in values]


def rank_variance(doubled):
    """The variance of the midranks with divisor N - 1, from its definition."""
    ranks = [Fr(d, 2) for d in doubled]
    mean = sum(ranks) / len(ranks)
    return sum((r - mean) ** 2 for r in ranks) / (len(ranks) - 1)


def exact_tails(doubled, m, observed):
    """P(sum of m of these at least, at most as large as observed)."""
    n = len(doubled)
    if comb(n, m) <= 200_000:
        sums = [sum(chosen) for chosen in combinations(doubled, m)]
        counts = {}
        for s in sums:
            counts[s] = counts.get(s, 0) + 1
        method = "enumeration"
    else:
        by_size = [{0: 1}] + [{} for _ in range(m)]
        for d in doubled:
            for size in range(m, 0, -1):
                for s, count in by_size[size - 1].items():
                    by_size[size][s + d] = by_size[size].get(s + d, 0) + count
        counts, method = by_size[m], "subsets"
    total = comb(n, m)
    assert sum(counts.values()) == total
    greater = Fr(sum(c for s, c in counts.items() if s >= observed), total)
    less = Fr(sum(c for s, c in counts.items() if s <= observed), total)
    return greater, less, method


def pair(first, second):
    n, m = len(first), len(second)
    values = first + second
    doubled = doubled_midranks(values)
    doubled_sum = sum(doubled[n:])
    u = Fr(doubled_sum, 2) - Fr(m * (m + 1), 2)
    by_pairs = sum(Fr(2 if y > x else 1 if y == x else 0, 2) for x in first for y in second)
    assert u == by_pairs
    # Sampling m of N without replacement: variance of the sum n m / N times that of the ranks.
    variance = Fr(n * m, n + m) * rank_variance(doubled)
    z = (mp.mpf((u - Fr(n * m, 2)).numerator) / (u - Fr(n * m, 2)).denominator
         / mp.sqrt(mp.mpf(variance.numerator) / variance.denominator))
    greater, less, method = exact_tails(doubled, m, doubled_sum)
    case = dict(
        first=first, second=second, u=digits(u), variance=digits(variance), z=digits(z),
        tied_share=digits(Fr(sum(values.count(v) > 1 for v in values), n + m)),
        normal=dict(both=digits(2 * mp.ncdf(-abs(z))), greater=digits(mp.ncdf(-z)), less=digits(mp.ncdf(z))),
        exact=dict(both=digits(min(2 * min(greater, less), Fr(1))), greater=digits(greater), less=digits(less)),
        exact_by=method)
    # Second opinions.
    for side, key in (("two-sided", "both"), ("greater", "greater"), ("less", "less")):
        rough = stats.mannwhitneyu(second, first, alternative=side, method="asymptotic", use_continuity=False)
        assert rough.statistic == u
        assert abs(rough.pvalue / float(case["normal"][key]) - 1) < 1e-11, (rough, case)
        if len(set(values)) == n + m:
            exact = stats.mannwhitneyu(second, first, alternative=side, method="exact")
            assert abs(exact.pvalue / float(case["exact"][key]) - 1) < 1e-9, (exact, case)
    return case


def dealt(positions, sizes):
    if len(sizes) == 1:
        yield [positions]
        return
    for chosen in combinations(positions, sizes[0]):
        rest = [p for p in positions if p not in chosen]
        for others in dealt(rest, sizes[1:]):
            yield [chosen] + others


def contrast(groups, coefficients):
    values = [v for g in groups for v in g]
    doubled = doubled_midranks(values)
    sizes = [len(g) for g in groups]

    def estimate_of(parts):
        return sum(Fr(c) * sum(Fr(doubled[p], 2) for p in part) / len(part)
                   for c, part in zip(coefficients, parts))

    places, start = [], 0
    for size in sizes:
        places.append(range(start, start + size))
        start += size
    estimate = estimate_of(places)
    variance = rank_variance(doubled) * sum(Fr(c) ** 2 / n for c, n in zip(coefficients, sizes))
    ways, left = 1, sum(sizes)
    for size in sizes:
        ways, left = ways * comb(left, size), left - size
    if ways <= 20_000:
        found = [estimate_of(parts) for parts in dealt(list(range(len(values))), sizes)]
        mean = sum(found) / ways
        assert mean == 0
        assert variance == sum(f * f for f in found) / ways
    z = mp.mpf(estimate.numerator) / estimate.denominator / mp.sqrt(mp.mpf(variance.numerator) / variance.denominator)
    return dict(
        groups=groups, coefficients=coefficients, estimate=digits(estimate), variance=digits(variance), z=digits(z),
        both=digits(2 * mp.ncdf(-abs(z))), greater=digits(mp.ncdf(-z)), less=digits(mp.ncdf(z)),
        enumerated=ways <= 20_000)


def write(name, quantity, cases):
    with open(f"{name}.json", "w") as out:
        head = json.dumps(dict(quantity=quantity, source="compute.py in this folder", digits=20))
        lines = ",\n  ".join(json.dumps(case) for case in cases)
        out.write(f'{head[:-1]}, "cases": [\n  {lines}\n]}}\n')


random.seed(20261201)
tenths = lambda count, shift, spread: [round(random.gauss(shift, spread), 1) for _ in range(count)]
fine = lambda count, shift, spread: [round(random.gauss(shift, spread), 6) for _ in range(count)]
whole = lambda count, low, high: [float(random.randint(low, high)) for _ in range(count)]

pairs = [
    # Blood counts (Dunnett 1955): control, drug A, drug B.
    pair([7.40, 8.50, 7.20, 8.24, 9.84, 8.32], [9.76, 8.80, 7.68, 9.36]),
    pair([7.40, 8.50, 7.20, 8.24, 9.84, 8.32], [12.80, 9.68, 12.16, 9.20, 10.55]),
    pair([9.76, 8.80, 7.68, 9.36], [12.80, 9.68, 12.16, 9.20, 10.55]),
    pair([1.0], [2.0]), pair([2.0], [1.0, 3.0]), pair([1.0, 2.0], [1.0, 1.0]), pair([0.0, 0.0, 1.0], [0.0]),
    pair([1.0, 2.0, 3.0], [4.0, 5.0, 6.0]), pair([4.0, 5.0, 6.0], [1.0, 2.0, 3.0]),
    pair([1.0, 1.0, 2.0, 2.0], [1.0, 1.0, 2.0, 2.0]), pair([-1.0, 0.0, 0.0, 5.0], [0.0, 5.0, 5.0, 7.0, 7.0]),
]
for n, m, shift in [(2, 9, 0.5), (5, 5, 1), (7, 8, 0.8), (10, 10, -2), (12, 17, 1), (20, 20, 3), (30, 30, 1), (1, 40, 1), (30, 30, 5)]:
    pairs.append(pair(fine(n, 0, 1), fine(m, shift, 1.5)))
for n, m, high in [(3, 4, 3), (6, 6, 4), (8, 9, 2), (9, 5, 1), (15, 15, 5), (20, 20, 10), (10, 40, 3), (19, 21, 200)]:
    pairs.append(pair(whole(n, 0, high), whole(m, 0, high + 1)))
for n, m in [(12, 20), (18, 22)]:
    pairs.append(pair(tenths(n, 0, 1), tenths(m, 2, 1)))
write("pairwise", "rank sums of two groups ranked alone", pairs)

blood = [[7.40, 8.50, 7.20, 8.24, 9.84, 8.32], [9.76, 8.80, 7.68, 9.36], [12.80, 9.68, 12.16, 9.20, 10.55]]
joint = [contrast(blood, c) for c in ([-1, 1, 0], [-1, 0, 1], [0, -1, 1], [-2, 1, 1], [-9, 4, 5])]
small = [[1.0, 2.0, 2.0], [2.0, 3.0], [2.0, 4.0, 4.0]]
joint += [contrast(small, c) for c in ([-1, 1, 0], [1, 0, -1], [-1, 2, -1])]
four = [whole(2, 0, 2), whole(3, 0, 3), whole(2, 1, 3), whole(2, 2, 4)]
joint += [contrast(four, c) for c in ([-1, 0, 0, 1], [-3, -1, 1, 3], [1, 1, -1, -1])]
large = [whole(40, 0, 9), whole(25, 1, 9), whole(60, 2, 9), whole(33, 0, 20), whole(11, 5, 20)]
joint += [contrast(large, c) for c in ([-1, 1, 0, 0, 0], [0, 0, -1, 0, 1], [-4, 1, 1, 1, 1], [-2, -1, 0, 1, 2])]
write("joint", "contrasts of mean ranks, all groups ranked together", joint)
