"""Band energies against numpy: the lowest four bands, 10^4 depths, 51 quasimomenta.

The peer is numpy's batched ``eigvalsh`` on truncated 25 x 25 plane-wave
matrices, which is what a script does.  Both use one thread; the ratio is of
one run.  Accuracy is checked against 61 x 61 matrices at every hundredth
depth, near-degenerate points included.

Run:  make bench-peers
"""

import os

for variable in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[variable] = "1"

import time

import numpy as np

import fluxloom as fl


def matrices(depth: float, quasimomenta: np.ndarray, half: int) -> np.ndarray:
    """Plane-wave matrices of one depth, ``[quasimomentum, row, column]``."""
    n = np.arange(-half, half + 1)
    batch = np.zeros((len(quasimomenta), len(n), len(n)))
    rows = np.arange(len(n))
    batch[:, rows, rows] = (quasimomenta[:, None] + 2 * n) ** 2 + depth / 2
    batch[:, rows[:-1], rows[1:]] = -depth / 4
    batch[:, rows[1:], rows[:-1]] = -depth / 4
    return batch


def main() -> None:
    """Time both and print the ratio."""
    fl.set_threads(1)
    depths = np.linspace(0.02, 40.0, 10_000)
    # Edges and centre exactly and nearly: where bands all but touch.
    quasimomenta = np.linspace(-1.0, 1.0, 51)
    quasimomenta[[1, 24, 26]] = [-1.0 + 1e-6, -1e-6, 1e-3]

    ours = []
    for _ in range(7):
        start = time.process_time()
        found = fl.band_energies_er(depths, quasimomenta, count=4)
        ours.append(time.process_time() - start)

    # Making the matrices is not counted.
    peer = 0.0
    for depth in depths:
        batch = matrices(depth, quasimomenta, 12)
        start = time.process_time()
        np.linalg.eigvalsh(batch)
        peer += time.process_time() - start

    worst = 0.0
    for place in range(0, len(depths), 100):
        exact = np.linalg.eigvalsh(matrices(depths[place], quasimomenta, 30))[:, :4]
        worst = max(worst, float(np.abs(found[place] - exact).max()))

    best = min(ours)
    print(f"numpy eigvalsh 25 x 25   {peer:8.3f} s")
    print(f"fluxloom                 {best:8.4f} s (best of {len(ours)})")
    print(f"ratio                    {peer / best:8.0f}")
    print(f"largest difference from 61 x 61 matrices: {worst:.1e} E_R")

    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
    raman = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
    start = time.perf_counter()
    for _ in range(200):
        fl.check_flux(lattice, raman, "3/8", sites=60)
    print(f"one check_flux           {(time.perf_counter() - start) / 200 * 1e3:8.3f} ms")


if __name__ == "__main__":
    main()
