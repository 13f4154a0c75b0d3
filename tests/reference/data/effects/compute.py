"""Computes the effect sizes and detectable differences in this folder.

Usage: python compute.py   (needs mpmath 1.4.1 and scipy 1.17.1, from the package index)

superiority.json: A = P(Y2 > Y1) + P(=)/2 and the variance by placements from exact rationals, every pair looked at; bounds in 40-digit
arithmetic: on the logit scale, or (A = 0 or 1, one observation, no variance) the roots of |A - t| = z sqrt(V(t)), found by bisection;
V(t) from P(two of one group exceed one of the other) for exponential distributions, t/(2-t) and 2t²/(1+t) (Hanley and McNeil 1982),
not from the formula with these put in.

glass.json: limits of the noncentrality of t by 30-digit quadrature of P(T <= t) = E Phi(t S - ncp) and bisection.

ratio.json: Fieller's set as the values of theta whose own test |a - theta b| > c sqrt(var(a - theta b)) does not reject: the ends by
bisection between points where the test changes its answer, on a grid of theta in 40-digit arithmetic. Data as exact decimals.

detectable.json: the noncentrality at which P(|T'| > c), or P(T' > c), is the power: 30-digit quadrature and bisection. Second
opinion, asserted below: scipy.stats.nct.
"""
import json
import random
from fractions import Fraction as Fr

import mpmath as mp
from scipy import stats

mp.mp.dps = 40


def real(q):
    return mp.mpf(q.numerator) / q.denominator if isinstance(q, Fr) else mp.mpf(q)


def digits(q):
    return "inf" if q == mp.inf else "-inf" if q == -mp.inf else mp.nstr(real(q), 20, strip_zeros=False)


def bisected(f, low, high):
    """The root of f between low and high, where it has opposite signs."""
    below = f(low) < 0
    assert below != (f(high) < 0)
    while high - low > mp.mpf(10) ** -26 * max(abs(low), abs(high)):
        middle = (low + high) / 2
        low, high = (middle, high) if (f(middle) < 0) == below else (low, middle)
    return (low + high) / 2


def write(name, quantity, cases):
    with open(f"{name}.json", "w") as out:
        head = json.dumps(dict(quantity=quantity, source="compute.py in this folder", digits=20))
        lines = ",\n  ".join(json.dumps(case) for case in cases)
        out.write(f'{head[:-1]}, "cases": [\n  {lines}\n]}}\n')


# Probability of superiority.

def superiority(first, second, z):
    n, m = len(first), len(second)
    score = lambda x, y: Fr(1) if y > x else Fr(1, 2) if y == x else Fr(0)
    a = sum(score(x, y) for x in first for y in second) / (n * m)
    of_first = [sum(score(x, y) for y in second) / m for x in first]
    of_second = [sum(score(x, y) for x in first) / n for y in second]
    variance = lambda v: sum((x - sum(v) / len(v)) ** 2 for x in v) / (len(v) - 1)
    squared = variance(of_first) / n + variance(of_second) / m if n > 1 and m > 1 else None
    z = mp.mpf(z)
    if squared and 0 < a < 1:
        se, at = mp.sqrt(real(squared)), real(a)
        logit, reach = mp.log(at / (1 - at)), z * se / (at * (1 - at))
        lower, upper = (1 / (1 + mp.exp(-logit - sign * reach)) for sign in (-1, 1))
        method = "logit"
    else:
        at, more = real(a), mp.mpf(n + m) / 2 - 1
        def v(t):
            q1, q2 = t / (2 - t), 2 * t * t / (1 + t)
            return (t * (1 - t) + more * (q1 - t * t) + more * (q2 - t * t)) / (n * m)
        tiny = mp.mpf(10) ** -30
        end = lambda low, high: bisected(lambda t: abs(at - t) - z * mp.sqrt(v(t)), low, high)
        lower = mp.mpf(0) if at == 0 else end(tiny, at - tiny)
        upper = mp.mpf(1) if at == 1 else end(at + tiny, 1 - tiny)
        method = "score"
    return dict(first=first, second=second, z=float(z), a=digits(a), delta=digits(2 * a - 1),
                se=None if squared is None else digits(mp.sqrt(real(squared))), lower=digits(lower), upper=digits(upper), method=method)


# Noncentral t.

def noncentral_below(t, df, ncp):
    """P(T <= t), for df S² chi-squared with df degrees of freedom."""
    with mp.workdps(30):
        t, df, ncp = mp.mpf(t), mp.mpf(df), mp.mpf(ncp)
        constant = 2 * mp.power(df / 2, df / 2) / mp.gamma(df / 2)
        density = lambda s: constant * mp.power(s, df - 1) * mp.exp(-df * s * s / 2)
        spread = 1 / mp.sqrt(2 * df)
        ends = [mp.mpf(0)] + [1 + k * spread for k in (-8, -4, -2, 0, 2, 4, 8, 14) if 1 + k * spread > 0] + [1 + 30 * spread + 5 / df]
        return mp.quad(lambda s: density(s) * mp.ncdf(t * s - ncp), ends)


def secant(f, start):
    with mp.workdps(30):
        return mp.findroot(f, (start, start + mp.mpf("0.1")), tol=1e-24)


def glass(group, control, equal, outside):
    value = lambda v: [Fr(x) for x in v]
    g, c = value(group), value(control)
    mean = lambda v: sum(v) / len(v)
    var = lambda v: sum((x - mean(v)) ** 2 for x in v) / (len(v) - 1)
    sd, df = mp.sqrt(real(var(c))), len(c) - 1
    difference = real(mean(g) - mean(c))
    per = mp.sqrt(real(Fr(1, len(c)) + (1 if equal else var(g) / var(c)) / len(g)))
    t = difference / sd / per
    bound = lambda p: secant(lambda ncp: mp.log(noncentral_below(t, df, ncp) / p), t) * per
    factor = mp.gamma(mp.mpf(df) / 2) / mp.sqrt(mp.mpf(df) / 2) / mp.gamma((mp.mpf(df) - 1) / 2) if df > 1 else mp.mpf(0)
    half = mp.mpf(outside) / 2
    return dict(group=[str(x) for x in group], control=[str(x) for x in control], variances="equal" if equal else "unequal",
                outside=outside, delta=digits(difference / sd), corrected=digits(factor * difference / sd),
                lower=digits(bound(1 - half)), upper=digits(bound(half)))


def detectable(power, critical, df, sides):
    p = mp.mpf(power)
    def beyond(ncp):
        above = noncentral_below(-mp.mpf(critical), df, -ncp)
        return above + noncentral_below(-mp.mpf(critical), df, ncp) if sides == "both" else above
    if beyond(mp.mpf(0)) >= p:
        delta = mp.mpf(0)
    else:
        delta = secant(lambda ncp: mp.log(beyond(ncp) / p), mp.mpf(critical) + 1)
        delta = abs(delta) if sides == "both" else delta  # the power on both sides is even
    d = float(delta)
    check = stats.nct.sf(critical, df, d) + (stats.nct.cdf(-critical, df, d) if sides == "both" else 0)
    # It is no number for the opposite tail at 1960 degrees of freedom.
    assert delta == 0 or check != check or abs(check - power) < 1e-8, (check, power, critical, df, sides)
    return dict(power=power, critical=critical, df=df, sides=sides, value=digits(delta))


# Ratio of means, equal or separate variances.

def ratio(groups, coefficients, critical, equal):
    data = [[Fr(x) for x in g] for g in groups]
    mean = [sum(g) / len(g) for g in data]
    ss = [sum((x - m) ** 2 for x in g) for g, m in zip(data, mean)]
    pooled = sum(ss) / sum(len(g) - 1 for g in data)
    v = [(pooled if equal else s / (len(g) - 1)) / len(g) for s, g in zip(ss, data)]
    weight = sum(Fr(c) for c in coefficients if c > 0)
    p = [max(Fr(c), Fr(0)) / weight for c in coefficients]
    q = [max(-Fr(c), Fr(0)) / weight for c in coefficients]
    a, b = sum(x * m for x, m in zip(p, mean)), sum(x * m for x, m in zip(q, mean))
    va, vb = (real(sum(x * x * s for x, s in zip(w, v))) for w in (p, q))
    c, a, b = mp.mpf(critical), real(a), real(b)
    excess = lambda theta: abs(a - theta * b) - c * mp.sqrt(va + theta * theta * vb)  # the sides share no level
    size = a / b + 1
    tangent = lambda u: size * mp.tan(u)
    grid = [mp.pi * (mp.mpf(k) / 4000 - mp.mpf(1) / 2) for k in range(1, 4000)]
    values = [excess(tangent(u)) > 0 for u in grid]
    ends = [tangent(bisected(lambda u: excess(tangent(u)), one, other))
            for one, other, x, y in zip(grid, grid[1:], values, values[1:]) if x != y]
    if not ends:
        assert not any(values)
        shape, ends = "all", [None, None]
    else:
        assert len(ends) == 2
        shape = "bounded" if values[0] else "all but"
    return dict(groups=[[str(x) for x in g] for g in groups], coefficients=coefficients, critical=critical,
                variances="equal" if equal else "unequal", ratio=digits(a / b), shape=shape,
                low=ends[0] if ends[0] is None else digits(ends[0]), high=ends[1] if ends[1] is None else digits(ends[1]))


random.seed(20261202)
whole = lambda count, low, high: [float(random.randint(low, high)) for _ in range(count)]
fine = lambda count, shift, spread: [round(random.gauss(shift, spread), 6) for _ in range(count)]
blood = (["7.40", "8.50", "7.20", "8.24", "9.84", "8.32"], ["9.76", "8.80", "7.68", "9.36"], ["12.80", "9.68", "12.16", "9.20", "10.55"])
numbers = lambda group: [float(x) for x in group]
Z = 1.959963984540054

found = [superiority(numbers(blood[0]), numbers(blood[2]), z) for z in (Z, 2.3437, 1.6448536269514722)]
found += [superiority(numbers(blood[0]), numbers(blood[1]), Z), superiority(numbers(blood[1]), numbers(blood[2]), Z)]
found += [superiority(x, y, Z) for x, y in [
    ([1.0, 2.0, 3.0], [4.0, 5.0, 6.0]), ([4.0, 5.0], [1.0, 2.0, 3.0]), ([1.0], [2.0]), ([1.0], [0.0, 2.0, 2.0]), ([1.0, 2.0, 3.0], [3.0]),
    ([1.0, 1.0], [1.0, 1.0, 1.0]), ([1.0, 2.0], [1.0, 2.0]), ([0.0, 0.0, 1.0], [0.0, 1.0, 1.0, 1.0])]]
found += [superiority([float(i) for i in range(n)], [float(100 + i) for i in range(m)], z)
          for n, m, z in [(5, 5, Z), (30, 12, Z), (50, 50, 3.9), (2, 40, 1.0)]]
for n, m, shift in [(6, 9, 1), (20, 15, -1), (40, 50, 0), (25, 25, 3)]:
    found.append(superiority(fine(n, 0, 1), fine(m, shift, 2), Z))
for n, m, high in [(5, 7, 3), (30, 40, 6), (12, 90, 2)]:
    found.append(superiority(whole(n, 0, high), whole(m, 0, high + 1), 2.5))
write("superiority", "probability of superiority of the second group over the first, and Cliff's delta", found)

found = [glass(blood[i], blood[0], equal, outside)
         for i in (1, 2) for equal in (True, False) for outside in (0.05, 0.020491)]
found += [glass(["1.5", "2.25", "7"], ["3", "4", "4.5", "3.5"], equal, 0.1) for equal in (True, False)]
found += [glass(["5"], ["3", "4", "4.5", "3.5", "9", "2", "4", "4"], True, 0.05), glass(["30", "31"], ["1", "2"], True, 0.05)]
write("glass", "Glass's delta and its interval", found)

found = [ratio(blood, c, t, equal) for equal in (True, False) for c, t in
         [([-1, 1, 0], 2.1788128), ([-1, 0, 1], 2.1788128), ([0, -1, 1], 2.667864), ([-2, 1, 1], 2.1788128), ([1, -1, 0], 2.667864),
          ([-9, 4, 5], 1.5), ([1, 1, -2], 2.5)]]
near_zero = [["0.1", "1.9", "0.4", "0.8"], ["3.1", "2.2", "4.0"], ["0.2", "0.1", "2.9"]]
found += [ratio(near_zero, c, t, equal) for equal in (True, False) for c, t in
          [([-1, 1, 0], 1.5), ([-1, 1, 0], 2.5), ([-1, 1, 0], 4.0), ([0, 1, -1], 2.2), ([1, -1, 0], 4.0), ([-1, 0, 1], 2.4), ([-1, 0, 1], 5.0)]]
write("ratio", "Fieller's set of the ratio of two means", found)

found = [detectable(power, critical, df, sides) for power, critical, df, sides in [
    (0.8, 2.178812829667229, 12, "both"), (0.8, 2.667864, 12, "both"), (0.8, 2.513483, 12, "both"), (0.8, 2.121078, 12, "greater"),
    (0.8, 1.978970602, 126, "both"), (0.9, 3.9, 80, "both"), (0.8, 3.9, 1960, "both"), (0.5, 2.0, 5, "both"), (0.8, 1.0, 3, "both"),
    (0.8, 0.5, 10, "both"), (0.8, 0.3, 10, "both"), (0.8, 0.2, 10, "both"), (0.99, 4.3026527, 2, "both"), (0.8, 12.7062047, 1, "both"),
    (0.8, 1.644853627, 400, "greater"), (0.8, 6.3, 1.7, "greater"), (0.2, 2.9, 30, "both"), (0.8, -1.5, 10, "greater")]]
write("detectable", "noncentrality that is detected with the given power", found)
