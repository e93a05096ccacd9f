#!/usr/bin/env python3
"""Write wigner.json: 3j and 6j symbols as sympy has them.

Run:  python make_wigner.py

Rows are whole numbers, twice the angular momenta, and then the value:
2j1 2j2 2j3 2m1 2m2 (m3 follows) for a 3j symbol, 2j1..2j6 for a 6j symbol.
sympy sums in rational arithmetic; its values are rounded once from 20 digits.
"""

from __future__ import annotations

import json
import random
from itertools import permutations, product
from pathlib import Path

import sympy
from sympy import Rational
from sympy.physics.wigner import wigner_3j, wigner_6j

# Twice the largest angular momentum of a hyperfine level that occurs.
LARGEST = 11
# Twice the highest rank of an operator.
RANK = 4
# Twice the largest angular momentum of the drawn rows, and their number.
LARGEST_DRAWN = 20
DRAWN = 400


def halves(numbers: tuple[int, ...]) -> list[Rational]:
    return [Rational(number, 2) for number in numbers]


def value(symbol: sympy.Expr) -> float:
    return float(symbol.evalf(20))


def triangle(a: int, b: int, c: int) -> bool:
    return (a + b + c) % 2 == 0 and abs(a - b) <= c <= a + b


def couples(j: tuple[int, ...]) -> bool:
    one, two, three, four, five, six = j
    triads = [(one, two, three), (one, five, six), (four, two, six), (four, five, three)]
    return all(triangle(*triad) for triad in triads)


def first_of_equals(j: tuple[int, ...]) -> tuple[int, ...]:
    """Of the 24 arrangements with the same value, the first in order."""
    columns = list(zip(j[:3], j[3:], strict=True))
    turns = [(0, 0, 0), (1, 1, 0), (1, 0, 1), (0, 1, 1)]
    arrangements = []
    for order in permutations(columns):
        for turn in turns:
            turned = [(b, a) if over else (a, b) for (a, b), over in zip(order, turn, strict=True)]
            arrangements.append(tuple(a for a, _ in turned) + tuple(b for _, b in turned))
    return min(arrangements)


def rows_3j() -> list[tuple[int, ...]]:
    """Every operator of rank up to 2 between two levels, and drawn rows."""
    up_to = range(LARGEST + 1)
    rows = [
        (j1, j2, j3, m1, m2)
        for j1, j2, j3 in product(up_to, up_to, range(RANK + 1))
        if triangle(j1, j2, j3)
        for m1 in range(-j1, j1 + 1, 2)
        for m2 in range(-j2, j2 + 1, 2)
        if abs(m1 + m2) <= j3
    ]
    drawn: set[tuple[int, ...]] = set()
    draw = random.Random(3)
    while len(drawn) < DRAWN:
        j1, j2, j3 = (draw.randint(0, LARGEST_DRAWN) for _ in range(3))
        m1, m2 = draw.randrange(-j1, j1 + 1, 2), draw.randrange(-j2, j2 + 1, 2)
        if max(j1, j2, j3) > LARGEST and triangle(j1, j2, j3) and abs(m1 + m2) <= j3:
            drawn.add((j1, j2, j3, m1, m2))
    return rows + sorted(drawn)


def rows_6j() -> list[tuple[int, ...]]:
    """Every symbol with an entry from 1/2 to 2, once, and drawn rows."""
    up_to = range(LARGEST + 1)
    rows = {
        first_of_equals(j)
        for j in product(up_to, repeat=6)
        if couples(j) and any(1 <= entry <= RANK for entry in j)
    }
    drawn: set[tuple[int, ...]] = set()
    draw = random.Random(6)
    while len(drawn) < DRAWN:
        j = tuple(draw.randint(0, LARGEST_DRAWN) for _ in range(6))
        if max(j) > LARGEST and couples(j):
            drawn.add(first_of_equals(j))
    return sorted(rows) + sorted(drawn)


def value_3j(row: tuple[int, ...]) -> float:
    j1, j2, j3, m1, m2 = halves(row)
    return value(wigner_3j(j1, j2, j3, m1, m2, -m1 - m2))


def value_6j(row: tuple[int, ...]) -> float:
    return value(wigner_6j(*halves(row)))


def main() -> None:
    document = {
        "source": f"sympy {sympy.__version__}: physics.wigner.wigner_3j, wigner_6j",
        "made_by": "make_wigner.py",
        "columns_3j": "2j1 2j2 2j3 2m1 2m2 value",
        "columns_6j": "2j1 2j2 2j3 2j4 2j5 2j6 value",
        "rows_3j": [[*row, value_3j(row)] for row in rows_3j()],
        "rows_6j": [[*row, value_6j(row)] for row in rows_6j()],
    }
    path = Path(__file__).with_name("wigner.json")
    text = json.dumps(document, separators=(",", ":"))
    # One symbol a line, for readable differences.
    path.write_text(text.replace("[[", "[\n[").replace("],[", "],\n[") + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
