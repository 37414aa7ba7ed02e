#!/usr/bin/env python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Polynomial least squares in rational numbers: what a stress set's coefficients are, to 25 digits.

    stress_exact.py data plain      prints the set stress_plain.csv
    stress_exact.py data weighted   prints the set stress_weighted.csv: the same points, with uncertainties
    stress_exact.py solve FILE...   prints the solutions of such sets (stress_certified.csv)

Twenty x lie in 1 to 2 and four in 120 to 301; the degree is 9. All numbers are binary fractions printed in full, so
that a double holds them exactly and the solution is that of the doubles as well as that of the text.

Method: normal equations X'WX b = X'Wy in powers of x, solved by Gauss-Jordan elimination in fractions.Fraction, nothing
rounded; standard deviations are square roots by integer arithmetic. With a column u weights are 1/u^2 and the
covariance is not scaled by the residuals. Only what is printed is rounded.
"""
import math
import os
import re
import sys
from fractions import Fraction

DIGITS = 25
DEGREE = 9


def points():
    """x on a grid of 2^-10, irregular; y of a smooth curve with scatter, on a grid of 2^-16."""
    inner = [Fraction(1024 + 54 * i + (37 * i * i) % 29 - 14 * (0 < i < 19), 1024) for i in range(19)] + [Fraction(2)]
    outer = [Fraction(v) for v in ("120.25", "171.5", "239.75", "300.875")]
    scatter = [(7919 * (i + 3) ** 3) % 101 - 50 for i in range(24)]
    rows = []
    for i, x in enumerate(inner + outer):
        y = 40 * x / (x + 30) + 3 / (x * x + 1) + Fraction(scatter[i], 2000)
        u = Fraction(3 + (5 * i * i + 2 * i) % 11, 256)
        rows.append((x, Fraction(round(y * 65536), 65536), u))
    return rows


def decimal(x, digits=None):
    """A binary fraction in full, or any fraction rounded (half to even) to significant digits."""
    if digits is None:
        scale = 0
        while (x * 10**scale).denominator != 1:
            scale += 1
        n = abs(x * 10**scale).numerator
        text = str(n).rjust(scale + 1, "0")
        text = text[:-scale] + "." + text[-scale:] if scale else text
        return ("-" if x < 0 else "") + text
    if x == 0:
        return "0"
    e = 0
    while abs(x) >= Fraction(10) ** (e + 1):
        e += 1
    while abs(x) < Fraction(10) ** e:
        e -= 1
    n = str(round(abs(x) / Fraction(10) ** (e - digits + 1)))
    if len(n) > digits:
        n, e = n[:-1], e + 1
    return ("-" if x < 0 else "") + n[0] + "." + n[1:] + "e%d" % e


def root(x):
    """sqrt(x) to 40 digits."""
    if x == 0:
        return Fraction(0)
    shift = 0
    while x * 4**shift < 10**80:
        shift += 8
    return Fraction(math.isqrt(int(x * 4**shift)), 2**shift)


def inverse(m):
    n = len(m)
    a = [list(row) + [Fraction(int(i == j)) for j in range(n)] for i, row in enumerate(m)]
    for k in range(n):
        pivot = next(i for i in range(k, n) if a[i][k] != 0)
        a[k], a[pivot] = a[pivot], a[k]
        a[k] = [v / a[k][k] for v in a[k]]
        for i in range(n):
            if i != k and a[i][k] != 0:
                f = a[i][k]
                a[i] = [v - f * w for v, w in zip(a[i], a[k])]
    return [row[n:] for row in a]


def read(path):
    rows, header, degree = [], None, None
    for line in open(path, encoding="utf-8"):
        line = line.strip()
        if line.startswith("# model:"):
            degree = int(re.search(r"x\^(\d+)", line).group(1))
        elif line and not line.startswith("#"):
            cells = line.split(",")
            if header is None:
                header = cells
            else:
                row = dict(zip(header, map(Fraction, cells)))
                rows.append((row["x"], row["y"], row.get("u")))
    return rows, degree


def solve(path):
    rows, degree = read(path)
    name = re.sub(r"^stress_(.*)\.csv$", r"\1", os.path.basename(path))
    weighted = rows[0][2] is not None
    w = [1 / (u * u) if weighted else Fraction(1) for _, _, u in rows]
    p = degree + 1
    power = [[x**k for k in range(p)] for x, _, _ in rows]
    g = inverse([[sum(wi * a[j] * a[k] for wi, a in zip(w, power)) for k in range(p)] for j in range(p)])
    right = [sum(wi * a[j] * y for wi, a, (_, y, _) in zip(w, power, rows)) for j in range(p)]
    b = [sum(g[j][k] * right[k] for k in range(p)) for j in range(p)]
    rss = sum(wi * (y - sum(bj * aj for bj, aj in zip(b, a))) ** 2 for wi, a, (_, y, _) in zip(w, power, rows))
    mean = sum(wi * y for wi, (_, y, _) in zip(w, rows)) / sum(w)
    total = sum(wi * (y - mean) ** 2 for wi, (_, y, _) in zip(w, rows))
    variance = rss / (len(rows) - p)
    for k in range(p):
        sd = root(g[k][k] * (1 if weighted else variance))
        print("%s,B%d,%s,%s" % (name, k, decimal(b[k], DIGITS), decimal(sd, DIGITS)))
    print("%s,residual_sd,%s," % (name, decimal(root(variance), DIGITS)))
    print("%s,R2,%s," % (name, decimal(1 - rss / total, DIGITS)))
    print("%s,residual_ss,%s," % (name, decimal(rss, DIGITS)))


def main():
    if sys.argv[1:2] == ["data"] and sys.argv[2:] in (["plain"], ["weighted"]):
        weighted = sys.argv[2] == "weighted"
        print("# SPDX-License-Identifier: GPL-3.0-or-later")
        print("# quantity: y against x, invented; twenty x in 1 to 2, four in 120 to 301; binary fractions in full")
        print("# made by: python3 tests/published/stress_exact.py data %s" % sys.argv[2])
        print("# model: y = B0+B1*x+...+B%d*x^%d, 24 points" % (DEGREE, DEGREE))
        print("# exact solution: stress_certified.csv")
        print("x,y,u" if weighted else "x,y")
        for x, y, u in points():
            print(",".join(map(decimal, (x, y, u) if weighted else (x, y))))
    elif sys.argv[1:2] == ["solve"] and len(sys.argv) > 2:
        print("# SPDX-License-Identifier: GPL-3.0-or-later")
        print("# Exact least-squares solutions of the stress sets, rounded to %d digits; with a column u," % DIGITS)
        print("# weights 1/u^2 and deviations not scaled by the residuals; residual_sd^2 = residual_ss/(n - parameters)")
        print("# made by: python3 tests/published/stress_exact.py solve " + " ".join(sys.argv[2:]))
        print("dataset,item,certified,certified_sd")
        for path in sys.argv[2:]:
            solve(path)
    else:
        sys.exit(__doc__)


main()
