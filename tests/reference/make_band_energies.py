"""Writes band_energies.json: lattice energies from scipy alone.

At q = 0 and q = 1 the energies are Mathieu characteristic values
(scipy.special.mathieu_a and mathieu_b, E = A + s/2 at parameter s/4); between
them a dense plane-wave matrix of 121 waves goes through
scipy.linalg.eigvalsh.  Run:  python make_band_energies.py
"""

import json
import pathlib

import numpy as np
import scipy
from scipy.linalg import eigvalsh
from scipy.special import mathieu_a, mathieu_b


def edge_energies(depth, edge, count):
    q = depth / 4
    if edge == 0:
        values = [mathieu_a(0, q)]
        for order in range(2, 2 * count, 2):
            values += [mathieu_b(order, q), mathieu_a(order, q)]
    else:
        values = []
        for order in range(1, 2 * count, 2):
            values += [mathieu_b(order, q), mathieu_a(order, q)]
    return sorted(float(v) + depth / 2 for v in values)[:count]


def inner_energies(depth, q, count):
    n = np.arange(-60, 61)
    matrix = np.diag((q + 2 * n) ** 2 + depth / 2)
    off = np.full(len(n) - 1, -depth / 4)
    matrix = matrix + np.diag(off, 1) + np.diag(off, -1)
    return eigvalsh(matrix, subset_by_index=[0, count - 1]).tolist()


def main():
    cases = []
    for depth in [0.5, 1.0, 2.0, 3.0, 5.0, 6.0, 8.0, 10.0, 15.0, 20.0, 30.0, 40.0]:
        for edge in (0, 1):
            cases.append((depth, float(edge), edge_energies(depth, edge, 5)))
    for depth in [0.02, 0.7, 6.0, 33.0, 120.0]:
        for q in [0.05, 0.5, 0.93, -0.37]:
            cases.append((depth, q, inner_energies(depth, q, 5)))
    document = {
        "source": f"scipy {scipy.__version__}: special.mathieu_a/b, linalg.eigvalsh",
        "made_by": "make_band_energies.py",
        "cases": [{"depth_er": d, "quasimomentum": q, "energies_er": e} for d, q, e in cases],
    }
    path = pathlib.Path(__file__).with_name("band_energies.json")
    path.write_text(json.dumps(document, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
