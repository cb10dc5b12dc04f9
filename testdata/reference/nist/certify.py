"""Recomputes the least-squares fits of this folder in exact rational arithmetic.

    python3 certify.py          checks certified.json against the CSV files
    python3 certify.py print    prints what certified.json should hold

Data and certified values: NIST Statistical Reference Datasets (StRD), linear
regression. Norris is taken from the test data of scipy 1.10.1; Pontius, Filip
and Longley from the tests of the GNU Scientific Library 2.7.1, which quote
StRD; Wampler1 to 5 from their formulas (Wampler 1970), the errors of 3 to 5
typed from memory. Residual SD and R squared of all but Norris, and every
standard error of Wampler, are typed from memory or recomputed here; this
script confirms all of them from the data.

Columns x2, x3, ... of Pontius, Filip and Wampler are powers of x1, exact and
then rounded to 17 digits. The certified values belong to the exact powers, so
this script takes powers of x1 itself; it also checks the printed columns.
"""
import csv
import json
import pathlib
import sys
from decimal import Decimal, getcontext
from fractions import Fraction

getcontext().prec = 60
HERE = pathlib.Path(__file__).parent
POWERS = {"Pontius", "Filip", "Wampler1", "Wampler2", "Wampler3", "Wampler4", "Wampler5"}
SETS = ["Norris", "Pontius", "Filip", "Longley"] + [f"Wampler{k}" for k in range(1, 6)]


def read(name):
    with open(HERE / f"{name.lower()}.csv", newline="") as f:
        rows = list(csv.reader(f))
    values = [[Fraction(v) for v in row] for row in rows[1:]]
    y = [row[0] for row in values]
    if name not in POWERS:
        return y, [[Fraction(1)] + row[1:] for row in values]
    x = []
    for row in values:
        exact = [row[1] ** k for k in range(len(row))]
        for printed, power in zip(row[1:], exact[1:]):
            assert abs(printed - power) <= abs(power) / 10**16, (name, row)
        x.append(exact)
    return y, x


def solve(a, b):
    """Gauss-Jordan elimination: a^-1 b and the diagonal of a^-1."""
    p = len(a)
    m = [row[:] + [rhs] + [Fraction(int(i == j)) for j in range(p)] for i, (row, rhs) in enumerate(zip(a, b))]
    for k in range(p):
        pivot = next(i for i in range(k, p) if m[i][k] != 0)
        m[k], m[pivot] = m[pivot], m[k]
        m[k] = [v / m[k][k] for v in m[k]]
        for i in range(p):
            if i != k and m[i][k] != 0:
                m[i] = [u - m[i][k] * v for u, v in zip(m[i], m[k])]
    return [row[p] for row in m], [m[i][p + 1 + i] for i in range(p)]


def root(v):
    return (Decimal(v.numerator) / Decimal(v.denominator)).sqrt()


def fit(name):
    y, x = read(name)
    n, p = len(x), len(x[0])
    xtx = [[sum(r[i] * r[j] for r in x) for j in range(p)] for i in range(p)]
    xty = [sum(r[i] * v for r, v in zip(x, y)) for i in range(p)]
    beta, diagonal = solve(xtx, xty)
    rss = sum((v - sum(b * c for b, c in zip(beta, r))) ** 2 for r, v in zip(x, y))
    mean = sum(y) / n
    tss = sum((v - mean) ** 2 for v in y)
    s2 = rss / (n - p)
    return {
        "coefficients": [float(b) for b in beta],
        "standard_errors": [float(root(s2 * d)) for d in diagonal],
        "residual_sd": float(root(s2)),
        "r_squared": float(1 - rss / tss),
    }


def main():
    found = {name: fit(name) for name in SETS}
    if sys.argv[1:] == ["print"]:
        print(json.dumps(found, indent=1))
        return
    certified = json.loads((HERE / "certified.json").read_text())
    assert list(certified) == SETS, list(certified)
    for name in SETS:
        for key, want in certified[name].items():
            got = found[name][key]
            pairs = zip(got, want) if isinstance(want, list) else [(got, want)]
            for g, w in pairs:
                assert abs(g - w) <= 2e-14 * abs(w), (name, key, g, w)
    print("all certified values confirmed to 2e-14")


main()
