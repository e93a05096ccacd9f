"""Ground states of an isotope in a magnetic field, from matrices and in closed form.

H/h = A I.J + (mu_B B/h) (g_J J_z + g_I I_z). The states of the basis are |F, m> with
Condon-Shortley phases, coupled in the order J x I -> F. Numbers of the isotope are the
product's own rows of data; constants are scipy's.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np
from mpmath import mp, mpf
from numpy.typing import NDArray
from scipy import constants
from sympy import Rational
from sympy.physics.quantum.cg import CG

import fluxloom as fl

Array = NDArray[np.float64]
State = tuple[float, float]

#: Bohr magneton over the Planck constant, with the field in gauss.
HZ_PER_GAUSS = constants.physical_constants["Bohr magneton"][0] / constants.h / 1e4
#: Digits of the closed form.
DIGITS = 40


@dataclass(frozen=True)
class Line:
    """A resonance line: from the centre of one hyperfine structure to that of the other."""

    name: str
    excited_j: float
    frequency_hz: float
    dipole_au: float
    a_hz: float
    b_hz: float


@dataclass(frozen=True)
class Species:
    """The numbers of one isotope."""

    name: str
    i: float
    j: float
    a_hz: float
    g_j: float
    g_i: float
    residual_au: float
    lines: tuple[Line, ...]

    @property
    def manifolds(self) -> list[float]:
        return couple(self.j, self.i)

    @property
    def states(self) -> list[State]:
        """(F, m): small F first, then small m."""
        return [(f, m) for f in self.manifolds for m in projections(f)]

    def index(self, state: State) -> int:
        return self.states.index(state)

    def zero_field_hz(self, f: float) -> float:
        return hyperfine_hz(f, self.j, self.i, self.a_hz, 0.0)


def species(atom: str | fl.Atom) -> Species:
    """Numbers of an isotope as the product states them, no formula applied."""
    atom = fl.Atom(atom) if isinstance(atom, str) else atom
    rows = {row.name: row.value for row in atom.sources()}
    names = [row.removesuffix(".frequency_hz") for row in rows if row.endswith(".frequency_hz")]
    alkali = "g_j" in rows
    excited = {"D1": 0.5, "D2": 1.5}
    return Species(
        name=atom.name,
        i=rows["nuclear_spin"],
        j=0.5 if alkali else 0.0,
        a_hz=rows.get("hyperfine_a_hz", 0.0),
        g_j=rows.get("g_j", 0.0),
        g_i=rows["g_i"],
        residual_au=rows.get("residual_polarisability_au", 0.0),
        lines=tuple(
            Line(
                name=name,
                excited_j=excited[name] if alkali else 1.0,
                frequency_hz=rows[f"{name}.frequency_hz"],
                dipole_au=rows[f"{name}.dipole_au"],
                a_hz=rows[f"{name}.hyperfine_a_hz"],
                b_hz=rows.get(f"{name}.hyperfine_b_hz", 0.0),
            )
            for name in names
        ),
    )


def couple(j: float, i: float) -> list[float]:
    """All F of J x I, smallest first."""
    return [abs(j - i) + n for n in range(round(j + i - abs(j - i)) + 1)]


def projections(f: float) -> list[float]:
    return [-f + n for n in range(round(2 * f) + 1)]


def hyperfine_hz(f: float, j: float, i: float, a_hz: float, b_hz: float) -> float:
    k = f * (f + 1) - i * (i + 1) - j * (j + 1)
    energy = a_hz * k / 2
    if b_hz != 0.0:
        quadrupole = 1.5 * k * (k + 1) - 2 * i * (i + 1) * j * (j + 1)
        energy += b_hz * quadrupole / (2 * i * (2 * i - 1) * 2 * j * (2 * j - 1))
    return energy


def exact(number: float) -> Rational:
    """A whole or half number as sympy has it."""
    return Rational(round(2 * number), 2)


def spin_matrices(j: float) -> tuple[Array, Array]:
    """J_z and J_+ in the basis m = -j..j."""
    m = np.array(projections(j))
    raise_by_one = np.sqrt(j * (j + 1) - m[:-1] * (m[:-1] + 1))
    return np.diag(m), np.diag(raise_by_one, k=-1)


def cartesian_spin(j: float) -> list[NDArray[np.complex128]]:
    z, plus = spin_matrices(j)
    return [(plus + plus.T) / 2 + 0j, (plus - plus.T) / 2j, z + 0j]


@cache
def coupling_matrix(j: float, i: float) -> Array:
    """<m_J, m_I|F, m>: rows m_J (slow) and m_I, columns in the order of ``Species.states``."""
    columns = [(f, m) for f in couple(j, i) for m in projections(f)]
    matrix = np.zeros((len(columns), len(columns)))
    rows = [(m_j, m_i) for m_j in projections(j) for m_i in projections(i)]
    for row, (m_j, m_i) in enumerate(rows):
        for column, (f, m) in enumerate(columns):
            if m_j + m_i == m:
                numbers = [exact(x) for x in (j, m_j, i, m_i, f, m)]
                matrix[row, column] = float(CG(*numbers).doit())
    return matrix


def moment_operators(one: Species) -> NDArray[np.complex128]:
    """(g_J J + g_I I) along x, y and z between the states |F, m>."""
    change = coupling_matrix(one.j, one.i)
    eye_j, eye_i = np.eye(round(2 * one.j) + 1), np.eye(round(2 * one.i) + 1)
    parts = [
        one.g_j * np.kron(of_j, eye_i) + one.g_i * np.kron(eye_j, of_i)
        for of_j, of_i in zip(cartesian_spin(one.j), cartesian_spin(one.i), strict=True)
    ]
    return np.einsum("pa,ipq,qb->iab", change, np.array(parts), change)


def hamiltonian_hz(one: Species, field_gauss: float) -> Array:
    """The whole ground manifold between the states |F, m>."""
    n_j, n_i = round(2 * one.j) + 1, round(2 * one.i) + 1
    (j_z, j_plus), (i_z, i_plus) = spin_matrices(one.j), spin_matrices(one.i)
    flip = np.kron(j_plus, i_plus.T)
    product = one.a_hz * (np.kron(j_z, i_z) + (flip + flip.T) / 2)
    product += (
        HZ_PER_GAUSS
        * field_gauss
        * (one.g_j * np.kron(j_z, np.eye(n_i)) + one.g_i * np.kron(np.eye(n_j), i_z))
    )
    change = coupling_matrix(one.j, one.i)
    return change.T @ product @ change


def eigenstates(one: Species, field_gauss: float) -> tuple[Array, Array]:
    """Energies in Hz and eigenvectors [basis, state], both in the order of ``states``.

    Levels of one m never cross, so that their order is that at zero field.
    """
    matrix = hamiltonian_hz(one, field_gauss)
    energies = np.zeros(len(one.states))
    vectors = np.zeros_like(matrix)
    for m in {m for _, m in one.states}:
        block = [n for n, state in enumerate(one.states) if state[1] == m]
        block.sort(key=lambda n: one.zero_field_hz(one.states[n][0]))
        found, columns = np.linalg.eigh(matrix[np.ix_(block, block)])
        for rank, n in enumerate(block):
            energies[n] = found[rank]
            vectors[block, n] = columns[:, rank] * np.sign(columns[rank, rank])
    return energies, vectors


def breit_rabi_hz(one: Species, f: float, m: float, field_gauss: mpf | float) -> mpf:
    """Energy in closed form for J = 1/2, and the nuclear Zeeman energy for J = 0.

    Source: Breit and Rabi, Phys. Rev. 38, 2082 (1931).
    """
    # Derivatives by differences ask for more digits than the value itself.
    with mp.workdps(max(DIGITS, mp.dps)):
        magneton = mpf(constants.physical_constants["Bohr magneton"][0]) / mpf(constants.h) / 10000
        zeeman = magneton * mpf(field_gauss)
        g_j, g_i, i, m_exact = mpf(one.g_j), mpf(one.g_i), mpf(one.i), mpf(m)
        if one.j == 0:
            return g_i * m_exact * zeeman
        if abs(m) == one.i + 0.5:
            sign = 1 if m > 0 else -1
            return mpf(one.a_hz) * i / 2 + sign * (g_j / 2 + g_i * i) * zeeman
        interval = mpf(one.a_hz) * (i + mpf(1) / 2)
        x = (g_j - g_i) * zeeman / interval
        root = mp.sqrt(1 + 4 * m_exact * x / (2 * i + 1) + x * x)
        half = interval / 2 * (1 if f > one.i else -1)
        return -interval / (2 * (2 * i + 1)) + g_i * m_exact * zeeman + half * root


def breit_rabi_slope(one: Species, f: float, m: float, field_gauss: float, order: int) -> float:
    """First or second derivative of the closed form by the field: Hz/G or Hz/G^2."""
    with mp.workdps(DIGITS):
        return float(mp.diff(lambda b: breit_rabi_hz(one, f, m, b), mpf(field_gauss), order))


def insensitive_fields(one: Species, a: State, b: State, low: float, high: float) -> list[float]:
    """Fields in (low, high) at which the splitting of two states is stationary."""

    def slope(field: mpf | float) -> mpf:
        return mp.diff(
            lambda x: breit_rabi_hz(one, *b, x) - breit_rabi_hz(one, *a, x), mpf(field), 1
        )

    with mp.workdps(DIGITS):
        grid = mp.linspace(mpf(low), mpf(high), 401)
        slopes = [slope(x) for x in grid]
        return [
            float(mp.findroot(slope, (grid[n], grid[n + 1]), solver="anderson"))
            for n in range(400)
            if slopes[n] * slopes[n + 1] < 0
        ]
