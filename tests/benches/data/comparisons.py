"""Makes comparisons.json: the measurements that tests/benches/numbers.mjs times, and what they come to in 40-digit arithmetic.

Measurements: made up by a fixed rule, with two decimals. Statistics: exact fractions up to one square root.
Probabilities: trapezoidal sums in mpmath over z and over u = log s, analytic integrands whose steps were halved without a
change in the digits that are kept; the formulas are those of tests/reference/data/values/README.md. Critical values: secant.

Run by hand with mpmath (here 1.4.1): python comparisons.py > comparisons.json
"""

import json
from fractions import Fraction
from functools import lru_cache

import mpmath
from mpmath import mp, mpf

mp.dps = 40
ALPHA = mpf("0.05")
KEPT = 25


def measurements(groups, size, spread, seed):
    """Values in hundredths; group i lies spread * i / (groups - 1) higher than the first."""
    state = seed
    made = []
    for group in range(groups):
        shift = 5000 + spread * group // (groups - 1)
        values = []
        for _ in range(size):
            noise = 0
            for _ in range(4):
                state = (state * 1664525 + 1013904223) % 2**32
                noise += (state >> 16) % 801
            values.append(shift + noise - 1600)
        made.append(values)
    return made


def scale_nodes(df):
    """Nodes s and weights of the density of S = sqrt(chi-squared / df), in u = log s."""
    width = 1 / mpmath.sqrt(2 * df)
    log_constant = mpmath.log(2) + df / 2 * mpmath.log(df / 2) - mpmath.loggamma(df / 2)
    step = width / 3
    nodes = []
    for i in range(-60, 61):
        u = i * step
        weight = step * mpmath.exp(log_constant + df * u - df / 2 * mpmath.exp(2 * u))
        if weight > mpf(10) ** -42:
            nodes.append((mpmath.exp(u), weight))
    return nodes


STEP = mpf(1) / 8
Z = [i * STEP for i in range(-112, 113)]
PHI = [mpmath.npdf(z) for z in Z]
CDF = [mpmath.ncdf(z) for z in Z]


@lru_cache(maxsize=None)
def range_within(w, groups):
    terms = (p * (c - mpmath.ncdf(z - w)) ** (groups - 1) for z, p, c in zip(Z, PHI, CDF))
    return groups * STEP * mpmath.fsum(terms)


def range_tail(q, groups, nodes):
    return mpmath.fsum(weight * (1 - range_within(q * s, groups)) for s, weight in nodes)


def control_tail(d, comparisons, nodes):
    """Equal group sizes: b = c = sqrt(1/2), so that (d s + b z) / c = sqrt(2) d s + z."""
    total = mpf(0)
    for s, weight in nodes:
        reach = mpmath.sqrt(2) * d * s
        inside = (p * (mpmath.ncdf(z + reach) - mpmath.ncdf(z - reach)) ** comparisons for z, p in zip(Z, PHI))
        total += weight * (1 - STEP * mpmath.fsum(inside))
    return total


def critical(tail, start):
    return mpmath.findroot(lambda x: mpmath.log(tail(x) / ALPHA), (start, start + mpf("0.01")), solver="secant", tol=1e-30)


def case(groups, size, spread, seed, all_pairs):
    made = measurements(groups, size, spread, seed)
    means = [Fraction(sum(values), size) for values in made]
    squares = sum((value - mean) ** 2 for values, mean in zip(made, means) for value in values)
    df = groups * (size - 1)
    variance_of_mean = Fraction(squares) / df / size
    pairs = [(i, j) for i in range(groups if all_pairs else 1) for j in range(i + 1, groups)]
    nodes = scale_nodes(mpf(df))
    # Of a difference of two means, which Tukey's statistic leaves out a factor of 2 from.
    unit = variance_of_mean if all_pairs else 2 * variance_of_mean
    unit = mpmath.sqrt(mpf(unit.numerator) / unit.denominator)
    if all_pairs:
        tail, start = (lambda q: range_tail(q, groups, nodes)), mpf("5.0")
    else:
        tail, start = (lambda d: control_tail(d, groups - 1, nodes)), mpf("2.55")
    p_values, differences = [], []
    for i, j in pairs:
        difference = means[j] - means[i]
        difference = mpf(difference.numerator) / difference.denominator
        p_values.append(tail(abs(difference) / unit))
        differences.append(difference / 100)
    reach = critical(tail, start) * unit / 100
    text = lambda value: mpmath.nstr(value, KEPT)
    return {
        "values": [[value / 100 for value in values] for values in made],
        "df": df,
        "p": [text(p) for p in p_values],
        "lower": [text(difference - reach) for difference in differences],
        "upper": [text(difference + reach) for difference in differences],
    }


print(
    json.dumps(
        {
            "source": f"comparisons.py, mpmath {mpmath.__version__}, 40 digits, of which {KEPT} are kept",
            "order": "all pairs: (1, 2), (1, 3), ...; against the first: 2, 3, ...; a difference is the later less the earlier",
            "all_pairs": case(20, 50, 600, 20261201, True),
            "against_first": case(6, 20, 500, 20261202, False),
        }
    )
)
