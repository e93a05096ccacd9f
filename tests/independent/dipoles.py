"""Dipole matrix elements between ground and excited hyperfine states.

<F m|d_q|F' m'> = (-1)^(F-m) (F 1 F'; -m q m') <F||d||F'> with
<F||d||F'> = (-1)^(J+I+F'+1) sqrt((2F+1)(2F'+1)) {J F I; F' J' 1} <J||d||J'>.
"""

from functools import cache

import numpy as np
from numpy.typing import NDArray
from sympy.physics.wigner import wigner_3j, wigner_6j

from independent.atoms import Line, Species, couple, exact, hyperfine_hz, projections


@cache
def three_j(*numbers: float) -> float:
    return float(wigner_3j(*[exact(x) for x in numbers]))


@cache
def six_j(*numbers: float) -> float:
    """Zero where a triad does not close."""
    a, b, c, d, e, f = numbers
    for x, y, z in [(a, b, c), (a, e, f), (d, b, f), (d, e, c)]:
        if not abs(x - y) <= z <= x + y:
            return 0.0
    return float(wigner_6j(*[exact(x) for x in numbers]))


def sign(power: float) -> int:
    return 1 if round(power) % 2 == 0 else -1


def reduced_element(one: Species, line: Line, f: float, f_excited: float) -> float:
    """<F||d||F'> in e a0."""
    return (
        sign(one.j + one.i + f_excited + 1)
        * np.sqrt((2 * f + 1) * (2 * f_excited + 1))
        * six_j(one.j, f, one.i, f_excited, line.excited_j, 1.0)
        * line.dipole_au
    )


@cache
def spherical_elements(one: Species, line: Line) -> NDArray[np.float64]:
    """<F m|d_q|F' m'> in e a0: [q = -1, 0, 1; ground; excited]."""
    excited = excited_states(one, line)
    elements = np.zeros((3, len(one.states), len(excited)))
    for g, (f, m) in enumerate(one.states):
        for e, (f_excited, m_excited) in enumerate(excited):
            q = m - m_excited
            if abs(q) <= 1 and abs(f - f_excited) <= 1 <= f + f_excited:
                elements[round(q) + 1, g, e] = (
                    sign(f - m)
                    * three_j(f, 1.0, f_excited, -m, q, m_excited)
                    * reduced_element(one, line, f, f_excited)
                )
    return elements


def excited_states(one: Species, line: Line) -> list[tuple[float, float]]:
    return [(f, m) for f in couple(line.excited_j, one.i) for m in projections(f)]


@cache
def cartesian_elements(one: Species) -> tuple[NDArray[np.complex128], NDArray[np.float64]]:
    """<F m|d_i|e> in e a0, [x, y, z; ground; excited], and energies of e in Hz, all lines.

    d_(+-1) = -+(d_x +- i d_y)/sqrt(2), d_0 = d_z.
    """
    blocks, energies = [], []
    for line in one.lines:
        minus, zero, plus = spherical_elements(one, line)
        blocks.append([(minus - plus) / np.sqrt(2), 1j * (minus + plus) / np.sqrt(2), zero + 0j])
        energies += [
            line.frequency_hz + hyperfine_hz(f, line.excited_j, one.i, line.a_hz, line.b_hz)
            for f, _ in excited_states(one, line)
        ]
    return np.concatenate([np.array(block) for block in blocks], axis=2), np.array(energies)
