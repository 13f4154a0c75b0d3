"""Computes the exact tails of rank statistics in this folder, and the normal and chi-squared approximations beside them.

Usage: python compute.py   (needs scipy 1.17.1 and mpmath 1.4.1, from the package index)

Small cases: every assignment of the observations to the groups, one by one, in whole numbers and exact rationals
("enumeration"). Larger rank sums: the subsets of the doubled midranks counted by size and sum in whole numbers of any length,
one observation after the other ("subsets"). Approximations: mean and variance by the textbook formulas in exact rationals,
tails in 40-digit arithmetic (mpmath). Second opinions, asserted below: scipy.stats.mannwhitneyu (exact without ties,
asymptotic with), scipy.stats.kruskal.
"""
import json
from fractions import Fraction as Fr
from itertools import combinations
from math import comb

import mpmath as mp
from scipy import stats

mp.mp.dps = 40


def digits(q):
    q = mp.mpf(q.numerator) / q.denominator if isinstance(q, Fr) else q
    return mp.nstr(q, 20, strip_zeros=False)


def values_of(ties):
    return [value for value, t in enumerate(ties) for _ in range(t)]


def doubled_midranks(values):
    ordered = sorted(values)
    return [2 * ordered.index(v) + 1 + ordered.count(v) for v in values]


def assignments(positions, sizes):
    if len(sizes) == 1:
        yield [positions]
        return
    for chosen in combinations(positions, sizes[0]):
        rest = [p for p in positions if p not in chosen]
        for others in assignments(rest, sizes[1:]):
            yield [list(chosen)] + others


def doubled_j(groups):
    return sum((2 if x < y else 1 if x == y else 0)
               for i, one in enumerate(groups) for other in groups[i + 1:] for x in one for y in other)


def enumerated(sizes, values, statistic):
    counts = {}
    for groups in assignments(list(range(len(values))), sizes):
        s = statistic([[values[p] for p in g] for g in groups])
        counts[s] = counts.get(s, 0) + 1
    return counts


def subsets(first, second, ties):
    """Counts of 2U over all choices of the second group, by size and sum of its doubled midranks."""
    table = [{} for _ in range(second + 1)]
    table[0][0] = 1
    for rank in doubled_midranks(values_of(ties)):
        for size in range(second, 0, -1):
            here = table[size]
            for total, ways in table[size - 1].items():
                here[total + rank] = here.get(total + rank, 0) + ways
    assert sum(table[second].values()) == comb(first + second, second)
    return {total - second * (second + 1): ways for total, ways in table[second].items()}


def tails(counts, at):
    everything = sum(counts.values())
    upper = Fr(sum(w for s, w in counts.items() if s >= at), everything)
    lower = Fr(sum(w for s, w in counts.items() if s <= at), everything)
    return {"value": digits(upper), "exact": str(upper) if everything < 10**18 else None,
            "lower": digits(lower), "point": digits(Fr(counts.get(at, 0), everything))}


def at_shares(counts, shares):
    """Values of the statistic at about these shares of the distribution, the two ends among them."""
    ordered, everything, found = sorted(counts), sum(counts.values()), []
    for share in shares:
        below = 0
        for s in ordered:
            below += counts[s]
            if below >= share * everything:
                found.append(s)
                break
    return sorted(set(found + [ordered[-1]]))


def half(doubled):
    return doubled / 2 if doubled % 2 else doubled // 2


def variance(sizes, ties):
    n = sum(sizes)
    a = n * (n - 1) * (2 * n + 5) - sum(x * (x - 1) * (2 * x + 5) for x in sizes + ties)
    v = Fr(a, 72)
    if n > 2:
        v += Fr(sum(x * (x - 1) * (x - 2) for x in sizes) * sum(t * (t - 1) * (t - 2) for t in ties),
                36 * n * (n - 1) * (n - 2))
    return v + Fr(sum(x * (x - 1) for x in sizes) * sum(t * (t - 1) for t in ties), 8 * n * (n - 1))


def approximation(sizes, ties, doubled):
    n = sum(sizes)
    mean, v = Fr(n * n - sum(x * x for x in sizes), 4), variance(sizes, ties)
    sd = mp.sqrt(mp.mpf(v.numerator) / v.denominator)
    upper = lambda half: mp.ncdf(-(mp.mpf(doubled) / 2 - mp.mpf(mean.numerator) / mean.denominator - half) / sd)
    return {"mean": digits(mean), "variance": digits(v), "normal": digits(upper(0)), "normal_half": digits(upper(mp.mpf(1) / 2))}


def write(name, quantity, source, cases):
    lines = ",\n  ".join(json.dumps({k: v for k, v in c.items() if v is not None}) for c in cases)
    head = {"quantity": quantity, "source": source, "digits": 20}
    text = json.dumps(head, indent=1)[:-2] + ',\n "cases": [\n  ' + lines + "\n ]\n}\n"
    with open(name + ".json", "w") as file:
        file.write(text)
    print(name, len(cases))


def rank_sums():
    cases = []
    small = [(3, 3, [1] * 6), (4, 6, [1] * 10), (2, 2, [2, 1, 1]), (4, 4, [2, 2, 2, 2]), (3, 6, [1, 3, 1, 2, 2]),
             (6, 5, [5, 1, 1, 1, 3]), (7, 7, [1, 4, 4, 4, 1]), (5, 9, [3, 1, 2, 1, 1, 2, 4]), (1, 7, [2, 1, 5])]
    for first, second, ties in small:
        values = values_of(ties)
        counts = enumerated([first, second], values, doubled_j)
        assert counts == subsets(first, second, ties)
        for at in at_shares(counts, [0.0, 0.05, 0.4, 0.9]):
            case = {"first": first, "second": second, "ties": ties, "u": half(at), "how": "enumeration", **tails(counts, at)}
            cases.append(case | approximation([first, second], ties, at))
    large = [(10, 10, [1] * 20), (20, 30, [1] * 50), (8, 100, [1] * 108), (60, 60, [1] * 120), (25, 25, [5] * 10),
             (12, 40, [1, 2, 3, 4] * 5 + [2]), (50, 60, [7, 20, 30, 21, 20, 10, 2])]
    for first, second, ties in large:
        counts = subsets(first, second, ties)
        for at in at_shares(counts, [0.0, 1e-9, 0.001, 0.05, 0.6]):
            case = {"first": first, "second": second, "ties": ties, "u": half(at), "how": "subsets", **tails(counts, at)}
            cases.append(case | approximation([first, second], ties, at))
    for case in cases:
        second_opinion(case)
    write("rank_sum", "rank sum: P(U >= u), U the pairs in which the second group's observation is larger, tied pairs 1/2",
          "compute.py in this folder, exact counts; second opinion scipy 1.17.1", cases)


def second_opinion(case):
    """scipy's U for groups that have this U is not at hand; its null distribution is asked through its own samples."""
    first, second, ties = case["first"], case["second"], case["ties"]
    if set(ties) != {1} or first * second > 700:
        return
    # A sample with the wanted U: move the second group's observations up one place at a time.
    places, wanted = list(range(second)), int(case["u"])
    for i in reversed(range(second)):
        step = min(wanted, first)
        places[i] += step
        wanted -= step
    others = [p for p in range(first + second) if p not in places]
    theirs = stats.mannwhitneyu(places, others, alternative="greater", method="exact")
    assert theirs.statistic == case["u"] and abs(theirs.pvalue / float(case["value"]) - 1) < 1e-12, case
    rough = stats.mannwhitneyu(places, others, alternative="greater", method="asymptotic")
    assert abs(rough.pvalue / float(case["normal_half"]) - 1) < 1e-11, case


def jonckheeres():
    cases = []
    for sizes, ties in [([2, 2, 2], [1] * 6), ([2, 2, 2], [2, 3, 1]), ([3, 3, 3], [2, 2, 1, 4]), ([3, 2, 4], [1, 1, 3, 2, 2]),
                        ([1, 2, 3, 4], [3, 3, 4]), ([2, 2, 2, 2], [1, 2, 1, 2, 2]), ([4, 4, 4], [5, 1, 1, 1, 4]),
                        ([1, 1, 1, 1, 1, 1], [2, 2, 2]), ([5, 3, 3], [4, 7])]:
        counts = enumerated(sizes, values_of(ties), doubled_j)
        for at in at_shares(counts, [0.0, 0.1, 0.5, 0.95]):
            case = {"n": sizes, "ties": ties, "J": half(at), "how": "enumeration", **tails(counts, at)}
            cases.append(case | approximation(sizes, ties, at))
    write("jonckheere_ties", "Jonckheere and Terpstra's J with ties: P(J >= j), tied pairs 1/2",
          "compute.py in this folder, every assignment enumerated; normal approximation from exact rationals", cases)


def kruskals():
    cases = []
    for sizes, ties in [([2, 2, 2], [2, 3, 1]), ([3, 3, 3], [2, 2, 1, 4]), ([3, 2, 4], [1, 1, 3, 2, 2]), ([5, 5], [3, 3, 4]),
                        ([1, 2, 3, 4], [3, 3, 4]), ([2, 2, 2, 2], [1, 2, 1, 2, 2]), ([4, 4, 4], [5, 1, 1, 1, 4]),
                        ([6, 2, 3], [1, 1, 1, 1, 1, 1, 5]), ([1, 1, 1, 1, 1], [2, 1, 2])]:
        values, n = values_of(ties), sum(sizes)
        ranks = dict(zip(values, doubled_midranks(values)))
        spread = lambda groups: sum(Fr(sum(ranks[v] for v in g) ** 2, len(g)) for g in groups)
        counts, example = {}, {}
        for places in assignments(list(range(n)), sizes):
            groups = [[values[p] for p in g] for g in places]
            s = spread(groups)
            counts[s] = counts.get(s, 0) + 1
            example.setdefault(s, groups)
        for at in at_shares(counts, [0.3, 0.8, 0.97]):
            groups = example[at]
            correction = 1 - Fr(sum(t**3 - t for t in ties), n**3 - n)
            # The doubled ranks have squares four times too large.
            h = (Fr(12, n * (n + 1)) * at / 4 - 3 * (n + 1)) / correction
            df = len(sizes) - 1
            chi = mp.gammainc(mp.mpf(df) / 2, mp.mpf(h.numerator) / h.denominator / 2, regularized=True)
            theirs = stats.kruskal(*groups)
            assert abs(theirs.statistic - float(h)) < 1e-11 and abs(theirs.pvalue / float(chi) - 1) < 1e-11
            cases.append({"n": sizes, "ties": ties, "data": groups, "H": digits(h), "chi_squared": digits(chi),
                          "how": "enumeration", "value": tails(counts, at)["value"], "exact": tails(counts, at)["exact"]})
    write("kruskal_ties", "Kruskal and Wallis's H with ties: P(H >= h)",
          "compute.py in this folder, every assignment enumerated; second opinion on H and chi-squared scipy 1.17.1", cases)


rank_sums()
jonckheeres()
kruskals()
