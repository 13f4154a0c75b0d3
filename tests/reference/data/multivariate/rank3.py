"""Reference values for the multivariate t distribution of rank 3, written to rank3.json.

Two independent methods, neither the one of the program (cones over faces, Archimedes' theorem):

outside: P(some a_i.T > b_i) for T spherical t in space, every b_i > 0, as the integral over the face that leads,
    sum_i int_{b_i}^inf f(t) Q_i(t) dt, f Student's density and Q_i(t) the probability that no other face leads, given
    a_i.T = t: across a_i the vector is a t vector with df + 1 degrees of freedom and scale sqrt((df+t^2)/(df+1)), and
    the polygon's probability is (1/2 pi) int [q(r) - q(r')] over the angle, q(r) = (1 + r^2/df')^(-df'/2), r and r' the
    distances at which the direction enters (0 from within) and leaves it.
rectangle: three statistics with a correlation matrix of full rank, df infinite, P(low <= T <= high) as nested
    integrals over the first two of the independent normal variables (Cholesky).

mpmath 1.3 or 1.4, 30 digits; composite Gauss-Legendre rules; each value is computed with two numbers of nodes, and `digits`
is the number of digits in which the two agree, at most 20.
"""

import json
import mpmath as mp

mp.mp.dps = 30
INF = mp.inf


def rule(count):
    nodes = []
    for i in range(count):
        x = mp.cos(mp.pi * (i + mp.mpf(3) / 4) / (count + mp.mpf(1) / 2))
        for _ in range(8):
            before, here = mp.mpf(1), x
            for j in range(2, count + 1):
                before, here = here, ((2 * j - 1) * x * here - (j - 1) * before) / j
            slope = count * (before - x * here) / (1 - x * x)
            x -= here / slope
        nodes.append((x, 2 / ((1 - x * x) * slope * slope)))
    return nodes


RULES = {count: rule(count) for count in (16, 22)}


def integrate(f, low, high, count, panels=1):
    total = mp.mpf(0)
    step = (high - low) / panels
    for panel in range(panels):
        middle = low + (panel + mp.mpf(1) / 2) * step
        total += step / 2 * sum(w * f(middle + step / 2 * x) for x, w in RULES[count])
    return total


def density(t, df):
    if df == INF:
        return mp.exp(-t * t / 2) / mp.sqrt(2 * mp.pi)
    return mp.gamma((df + 1) / 2) / mp.gamma(df / 2) / mp.sqrt(df * mp.pi) * (1 + t * t / df) ** (-(df + 1) / 2)


def factor(correlation):
    """Pivoted Cholesky to rank 3, rows as vectors in space."""
    n = len(correlation)
    rest = [list(row) for row in correlation]
    rows = [[] for _ in range(n)]
    for _ in range(3):
        p = max(range(n), key=lambda i: rest[i][i])
        root = mp.sqrt(rest[p][p])
        column = [rest[i][p] / root for i in range(n)]
        for i in range(n):
            rows[i].append(column[i])
            for j in range(n):
                rest[i][j] -= column[i] * column[j]
    assert max(abs(x) for row in rest for x in row) < mp.mpf(10) ** -25
    return rows


def dot(a, b):
    return sum(x * y for x, y in zip(a, b))


def cross(a, b):
    return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]


def polygon(lines, df, count):
    """P(n.Y <= d for all lines (n, d)) for a spherical t vector Y in the plane; d may be negative."""
    corners = []
    for i, (a, d) in enumerate(lines):
        for b, e in lines[:i]:
            det = a[0] * b[1] - a[1] * b[0]
            if abs(det) < mp.mpf(10) ** -20:
                continue
            p = [(d * b[1] - e * a[1]) / det, (a[0] * e - b[0] * d) / det]
            if all(dot(n, p) <= f + mp.mpf(10) ** -20 * (1 + abs(f)) for n, f in lines):
                corners.append(mp.atan2(p[1], p[0]))
    if not corners:
        return mp.mpf(0)
    corners = sorted(corners)
    corners.append(corners[0] + 2 * mp.pi)
    total = mp.mpf(0)
    for low, high in zip(corners, corners[1:]):
        if high - low < mp.mpf(10) ** -18:
            continue
        middle = (low + high) / 2
        u = [mp.cos(middle), mp.sin(middle)]
        # Between two corners one line is met first on leaving the polygon, and one on entering it unless the
        # origin is within.
        distance = lambda line: line[1] / dot(line[0], u)
        leaving = min((line for line in lines if dot(line[0], u) > 0), key=distance)
        entering = max((line for line in lines if dot(line[0], u) < 0), key=distance)
        if distance(leaving) <= max(distance(entering), 0):
            continue

        def beyond(line, angle):
            r = line[1] / dot(line[0], [mp.cos(angle), mp.sin(angle)])
            return mp.exp(-r * r / 2) if df == INF else (1 + r * r / df) ** (-df / 2)

        if distance(entering) > 0:
            total += integrate(lambda v: beyond(entering, v) - beyond(leaving, v), low, high, count, 3)
        else:
            total += (high - low) - integrate(lambda v: beyond(leaving, v), low, high, count, 3)
    return total / (2 * mp.pi)


def outside(rows, low, high, df, count):
    faces = [(row, b) for row, b in zip(rows, high)] + [([-x for x in row], -b) for row, b in zip(rows, low)]
    mirrored = all(a == -b for a, b in zip(low, high))
    total = mp.mpf(0)
    for i, (a, b) in enumerate(faces[: len(rows)] if mirrored else faces):
        axis = min(range(3), key=lambda k: abs(a[k]))
        e1 = cross(a, [1 if k == axis else 0 for k in range(3)])
        e1 = [x / mp.sqrt(dot(e1, e1)) for x in e1]
        e2 = cross(a, e1)
        others = [(n, d) for j, (n, d) in enumerate(faces) if j != i and j != (i + len(rows)) % len(faces)]

        def share(t):
            scale = mp.mpf(1) if df == INF else mp.sqrt((df + t * t) / (df + 1))
            lines = []
            for n, d in others:
                across = [dot(n, e1), dot(n, e2)]
                length = mp.sqrt(dot(across, across))
                room = d * t / b - dot(n, a) * t
                lines.append(([x / length for x in across], room / length / scale))
            return density(t, df) * polygon(lines, df if df == INF else df + 1, count)

        # t = b e^y: heavy tails fall exponentially in y, normal ones faster.
        slope = mp.mpf(1) if df == INF else df
        end = mp.log(1 + 12 / b) if df == INF else mp.mpf(75) / slope
        panels = 8 if df == INF else 14
        edges = [end * (mp.mpf(k) / panels) ** 2 for k in range(panels + 1)]
        total += sum(
            integrate(lambda y: b * mp.exp(y) * share(b * mp.exp(y)), x, y, count) for x, y in zip(edges, edges[1:])
        )
    return 2 * total if mirrored else total


def rectangle(correlation, low, high, count):
    l21 = correlation[1][0]
    l22 = mp.sqrt(1 - l21**2)
    l31 = correlation[2][0]
    l32 = (correlation[2][1] - l31 * l21) / l22
    l33 = mp.sqrt(1 - l31**2 - l32**2)
    reach = mp.mpf(11)

    def phi(x):
        return mp.exp(-x * x / 2) / mp.sqrt(2 * mp.pi)

    def between(a, b):
        # On the side where it does not cancel.
        if a > 0:
            a, b = -b, -a
        return (mp.erfc(-b / mp.sqrt(2)) - mp.erfc(-a / mp.sqrt(2))) / 2

    def cut(a, b):
        return max(a, -reach), min(b, reach)

    def given(s):
        def first(z1):
            def second(z2):
                before = l31 * z1 + l32 * z2
                return phi(z2) * between((low[2] * s - before) / l33, (high[2] * s - before) / l33)

            a, b = cut((low[1] * s - l21 * z1) / l22, (high[1] * s - l21 * z1) / l22)
            return phi(z1) * integrate(second, a, b, count, panels(a, b)) if a < b else mp.mpf(0)

        a, b = cut(low[0] * s, high[0] * s)
        return integrate(first, a, b, count, panels(a, b)) if a < b else mp.mpf(0)

    def panels(a, b):
        return max(1, int(mp.ceil((b - a) / 4)))

    return given(mp.mpf(1))


def pairs(sizes):
    contrasts = []
    for i in range(len(sizes)):
        for j in range(i + 1, len(sizes)):
            contrast = [0] * len(sizes)
            contrast[i], contrast[j] = -1, 1
            contrasts.append(contrast)
    return contrasts


def correlations(contrasts, sizes):
    product = lambda a, b: sum(mp.mpf(x * y) / n for x, y, n in zip(a, b, sizes))
    return [[product(a, b) / mp.sqrt(product(a, a) * product(b, b)) for b in contrasts] for a in contrasts]


def agreed(compute):
    coarse, fine = compute(16), compute(22)
    difference = abs(coarse / fine - 1)
    digits = 20 if difference == 0 else min(20, int(-mp.log10(difference)))
    return {"value": mp.nstr(fine, 20, strip_zeros=False), "digits": digits}


def text(x):
    return ("inf" if x > 0 else "-inf") if mp.isinf(x) else x


def main():
    cases = []
    for sizes, df, c in [
        ([4, 7, 10, 6], 29, "3.9"), ([4, 7, 10, 6], 23, "7.5"), ([15, 3, 3, 8], 25, "12.5"),
        ([2, 40, 5, 11], 10, "60"), ([2, 40, 5, 11], INF, "7.6"), ([3, 3, 4, 30], 3, "400"),
    ]:
        contrasts = pairs(sizes)
        rows = factor(correlations(contrasts, sizes))
        limit = mp.mpf(c)
        high = [limit] * len(rows)
        case = {"kind": "outside", "n": sizes, "contrasts": contrasts, "df": text(df), "high": [c] * len(rows)}
        case["low"] = ["-" + c] * len(rows)
        case.update(agreed(lambda count: outside(rows, [-x for x in high], high, df if df == INF else mp.mpf(df), count)))
        cases.append(case)
        print(case["value"], case["digits"], flush=True)
    others = [[3, -1, -1, -1], [-1, 3, -1, -1], [-1, -1, 3, -1], [-1, -1, -1, 3]]
    for sizes, df, low, high in [
        ([6, 6, 2, 9], 4, ["-30", "-45", "-60", "-30"], ["50", "40", "35", "80"]),
    ]:
        rows = factor(correlations(others, sizes))
        case = {"kind": "outside", "n": sizes, "contrasts": others, "df": text(df), "low": low, "high": high}
        limits = [[mp.mpf(x) for x in side] for side in (low, high)]
        case.update(agreed(lambda count: outside(rows, *limits, df if df == INF else mp.mpf(df), count)))
        cases.append(case)
        print(case["value"], case["digits"], flush=True)
    polynomials = [[-3, -1, 1, 3], [1, -1, -1, 1], [-1, 3, -3, 1]]
    for sizes, df, low, high in [
        ([3, 8, 5, 10], INF, ["-1", "-2", "-0.5"], ["1.5", "0.5", "2"]),
        ([3, 8, 5, 10], INF, ["1", "0.5", "-2"], ["2.5", "inf", "-0.5"]),
        ([3, 8, 5, 10], INF, ["-inf", "-inf", "0"], ["-1", "2", "inf"]),
        ([3, 8, 5, 10], INF, ["2", "2", "2"], ["4", "4", "4"]),
    ]:
        r = correlations(polynomials, sizes)
        case = {"kind": "rectangle", "n": sizes, "contrasts": polynomials, "df": text(df), "low": low, "high": high}
        limits = [[mp.mpf(x) for x in side] for side in (low, high)]
        case.update(agreed(lambda count: rectangle(r, *limits, count)))
        cases.append(case)
        print(case["value"], case["digits"], flush=True)
    with open("rank3.json", "w") as out:
        head = {
            "quantity": "probabilities of regions of rank 3 of the multivariate t distribution",
            "definition": "T_i = (sum_j c_ij X_j / sqrt(sum_j c_ij^2/n_j)) / S, X_j ~ N(0, 1/n_j) independent, df S^2 "
            "~ chi2(df), c_ij = row i of contrasts; rectangle: P(low_i <= T_i <= high_i for all i); outside: 1 - that",
            "source": f"rank3.py beside this file, mpmath {mp.__version__}, 30 digits, two numbers of nodes",
            "digits": "per case",
        }
        lines = [f' "{key}": {json.dumps(value)},' for key, value in head.items()]
        body = ",\n".join("  " + json.dumps(case) for case in cases)
        out.write("{\n" + "\n".join(lines) + '\n "cases": [\n' + body + "\n ]\n}\n")


main()
