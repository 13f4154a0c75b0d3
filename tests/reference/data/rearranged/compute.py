"""Computes permutation p-values of comparisons, raw and adjusted by closed testing, by naive enumeration in exact rationals.

Usage: python compute.py   (needs scipy 1.17.1 and numpy 2.4.6, from the package index)

Nothing is shared with the program: partitions are found among all set partitions of the levels (kept when its cells are what the rows
inside them connect), rearrangements are lists of sets dealt out one after the other, statistics are signed squares of t as fractions.
t = L / sqrt(v sum c^2/n) with v the pooled variance over all groups, or L / sqrt(sum c^2 s^2/n); 0/0 counts as 0.

raw       share of the rearrangements of a row's own levels whose t is at least the observed one
adjusted  the largest share, over the partitions with the row's levels in one cell, of the rearrangements within cells whose largest
          t over the rows inside cells is at least the observed one; and no less than raw

Second opinions, asserted below: scipy.stats.permutation_test for every raw p-value (exact) of groups of at least two. The case of three groups of five
(756,756 rearrangements) is enumerated in numpy's 64-bit integers.
"""
import json
import math
from fractions import Fraction as Fr
from functools import cache
from itertools import combinations, product

import numpy as np
import scipy
from scipy import stats

INFINITE = Fr(10) ** 40


def deal(items, sizes):
    """Every way to deal `items` (by place) out to groups of these sizes."""
    if not sizes:
        yield []
        return
    for chosen in combinations(range(len(items)), sizes[0]):
        rest = [items[i] for i in range(len(items)) if i not in chosen]
        for others in deal(rest, sizes[1:]):
            yield [[items[i] for i in chosen]] + others


def rearrangements(groups, cells):
    ways = [list(deal(sum((groups[g] for g in cell), []), [len(groups[g]) for g in cell])) for cell in cells]
    for choice in product(*ways):
        made = [list(group) for group in groups]
        for cell, dealt in zip(cells, choice):
            for group, values in zip(cell, dealt):
                made[group] = values
        yield made


@cache
def mean_and_squares(values):
    mean = Fr(sum(values), len(values))
    return mean, sum((v - mean) ** 2 for v in values)


def statistic(groups, row, sides, variances):
    found = [mean_and_squares(tuple(sorted(group))) for group in groups]
    estimate = sum(c * m for c, (m, _) in zip(row, found))
    if variances == "equal":
        v = sum(s for _, s in found) / (sum(map(len, groups)) - len(groups))
        variance = v * sum(Fr(c) ** 2 / len(g) for c, g in zip(row, groups))
    else:
        variance = sum(Fr(c) ** 2 * s / (len(g) - 1) / len(g) for c, (_, s), g in zip(row, found, groups))
    if estimate == 0:
        return Fr(0)
    square = estimate**2 / variance if variance else INFINITE
    sign = {"both": 1, "greater": 1 if estimate > 0 else -1, "less": -1 if estimate > 0 else 1}[sides]
    return sign * square


def share(groups, cells, rows, sides, variances):
    largest = lambda made: max(statistic(made, row, sides, variances) for row in rows)
    observed = largest(groups)
    reached = [largest(made) >= observed for made in rearrangements(groups, cells)]
    return Fr(sum(reached), len(reached)), len(reached)


def set_partitions(items):
    if not items:
        yield []
        return
    first, rest = items[0], items[1:]
    for part in set_partitions(rest):
        yield [[first]] + part
        for i in range(len(part)):
            yield part[:i] + [[first] + part[i]] + part[i + 1 :]


def support(row):
    return {level for level, c in enumerate(row) if c != 0}


def inside(row, cells):
    return any(support(row) <= set(cell) for cell in cells)


def is_generated(cells, rows):
    for cell in cells:
        reached = {cell[0]}
        within = [support(row) for row in rows if support(row) <= set(cell)]
        for _ in cell:
            for s in within:
                if s & reached:
                    reached |= s
        if reached != set(cell):
            return False
    return bool(cells)


def raw_by_scipy(groups, row, sides, variances):
    own = sorted(support(row))

    def of(*samples):
        made = [list(map(Fr, group)) for group in groups]
        for level, sample in zip(own, samples):
            made[level] = [int(v) for v in sample]
        return float(statistic(made, row, sides, variances))

    result = stats.permutation_test(
        [groups[level] for level in own], of, permutation_type="independent", vectorized=False, n_resamples=np.inf, alternative="greater"
    )
    return result.pvalue


def case(name, groups, rows, sides="both", variances="equal"):
    rows = [[Fr(c) for c in row] for row in rows]
    partitions = [
        sorted(sorted(cell) for cell in part if len(cell) > 1) for part in set_partitions(list(range(len(groups))))
    ]
    partitions = [cells for cells in partitions if is_generated(cells, rows)]
    of_partition = [
        (cells, *share(groups, cells, [row for row in rows if inside(row, cells)], sides, variances)) for cells in partitions
    ]
    raw, adjusted, deciding = [], [], []
    for row in rows:
        alone = share(groups, [sorted(support(row))], [row], sides, variances)
        # SciPy asks for two observations in each group.
        small = any(len(groups[level]) == 1 for level in support(row))
        second = float(alone[0]) if small else raw_by_scipy(groups, row, sides, variances)
        assert math.isclose(second, float(alone[0]), rel_tol=1e-9), (name, second, alone)
        fits = [(p, count) for cells, p, count in of_partition if inside(row, cells)]
        best = max([p for p, _ in fits] + [alone[0]])
        raw.append(alone[0])
        adjusted.append(best)
        deciding.append(sorted({count for p, count in fits + [alone] if p == best}))
    return {
        "name": name,
        "data": groups,
        "rows": [[float(c) for c in row] for row in rows],
        "sides": sides,
        "variances": variances,
        "partitions": len(partitions),
        "raw": [str(p) for p in raw],
        "adjusted": [str(p) for p in adjusted],
        "arrangements": deciding,
    }


def three_of_five():
    """All pairs of three groups of five, pooled: largest (T - T')^2 over the error sum of squares, times 5, in whole numbers."""
    groups = [[13, 21, 17, 30, 24], [27, 19, 33, 38, 29], [31, 36, 25, 41, 35]]
    values = np.array(sum(groups, []), dtype=np.int64)
    everyone = frozenset(range(15))
    total, squares = int(values.sum()), int((values**2).sum())
    firsts = list(combinations(range(15), 5))
    t1, t2 = [], []
    for chosen in firsts:
        rest = values[sorted(everyone - set(chosen))]
        seconds = np.array(list(combinations(range(10), 5)))
        t2.append(rest[seconds].sum(axis=1))
        t1.append(np.full(len(seconds), values[list(chosen)].sum()))
    t1, t2 = np.concatenate(t1), np.concatenate(t2)
    t3 = total - t1 - t2
    error = 5 * squares - t1**2 - t2**2 - t3**2
    largest = np.maximum(np.maximum((t1 - t2) ** 2, (t1 - t3) ** 2), (t2 - t3) ** 2)
    a, b, c = (sum(group) for group in groups)
    seen, seen_error = max((a - b) ** 2, (a - c) ** 2, (b - c) ** 2), 5 * squares - a * a - b * b - c * c
    everywhere = Fr(int((largest * seen_error >= seen * error).sum()), len(t1))
    rows = [[-1, 1, 0], [-1, 0, 1], [0, -1, 1]]
    raw = [share(groups, [sorted(support(row))], [row], "both", "equal")[0] for row in rows]
    return {
        "name": "three groups of five",
        "data": groups,
        "rows": rows,
        "sides": "both",
        "variances": "equal",
        "partitions": 4,
        "raw": [str(p) for p in raw],
        "adjusted": [str(max(p, everywhere)) for p in raw],
        "everywhere": [str(everywhere), len(t1)],
    }


PAIRS3 = [[-1, 1, 0], [-1, 0, 1], [0, -1, 1]]
PAIRS4 = [[-1 if i == a else 1 if i == b else 0 for i in range(4)] for a, b in combinations(range(4), 2)]
CONTROL4 = [[-1, 1, 0, 0], [-1, 0, 1, 0], [-1, 0, 0, 1]]
NEIGHBOURS4 = [[-1, 1, 0, 0], [0, -1, 1, 0], [0, 0, -1, 1]]
THREE = [[12, 15, 11], [14, 18, 21], [22, 19, 25]]
TIED = [[1, 2, 2], [1, 3, 2], [3, 3, 4]]
FOUR = [[7, 9], [8, 14, 11], [13, 16], [15, 21]]

CASES = [
    case("two groups", [[10, 12, 9, 14], [13, 17, 15, 16, 12]], [[-1, 1]]),
    case("two groups, greater", [[10, 12, 9, 14], [13, 17, 15, 16, 12]], [[-1, 1]], "greater"),
    case("two groups, less, unequal", [[10, 12, 9, 14], [13, 17, 15, 16, 12]], [[-1, 1]], "less", "unequal"),
    case("pairs of three", THREE, PAIRS3),
    case("pairs of three, unequal", THREE, PAIRS3, variances="unequal"),
    case("pairs of three, greater", THREE, PAIRS3, "greater"),
    case("pairs of three, less, unequal", THREE, PAIRS3, "less", "unequal"),
    case("pairs of three with ties", TIED, PAIRS3),
    case("pairs of three with ties, unequal", TIED, PAIRS3, variances="unequal"),
    case("rare counts", [[0, 0, 0], [0, 0, 1], [1, 0, 2]], PAIRS3, variances="unequal"),
    case("no difference at all", [[1, 3], [1, 3], [0, 4]], PAIRS3),
    case("pairs of four", FOUR, PAIRS4),
    case("pairs of four, one of a single observation", [[7, 9], [14], [13, 16], [15, 21, 18]], PAIRS4, "greater"),
    case("control", FOUR, CONTROL4, "greater"),
    case("control, unequal", FOUR, CONTROL4, "both", "unequal"),
    case("neighbours", FOUR, NEIGHBOURS4),
    case("neighbours, less", FOUR, NEIGHBOURS4, "less"),
    case("contrasts", FOUR, [[-1, 1, 0, 0], [0, 0, -1, 1], ["-1/2", "-1/2", "1/2", "1/2"]]),
    case("contrasts on the same levels", THREE, [["-1/2", "-1/2", 1], ["1/2", -1, "1/2"], [-1, 0, 1]], variances="unequal"),
    three_of_five(),
]

file = {
    "quantity": "permutation p-values of comparisons, raw and adjusted by closed testing over partitions",
    "source": f"compute.py in this folder, every rearrangement enumerated; second opinion on the raw ones scipy {scipy.__version__}",
    "digits": "exact rationals",
}
lines = ",\n".join("  " + json.dumps(one) for one in CASES)
head = json.dumps(file, indent=1)[:-2]
with open("closed.json", "w") as out:
    out.write(f'{head},\n "cases": [\n{lines}\n ]\n}}\n')
