"""Light against numpy: polarisabilities, all couplings of a pair, levels, scattering.

The peer is vectorised numpy: what the spins alone say (dipole elements, recoupling
weights) is made once and not timed, neither there nor here.  Both use one thread; the
ratios are of one run.  The peer's elements come from sympy by way of
``tests/independent``, so that the differences printed compare two calculations.

The difference is over the largest number of each array.  The tensor polarisability is
what terms ten million times larger leave, and has lost as many digits in both.

Run:  make bench-peers
"""

import os

for variable in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[variable] = "1"

import pathlib
import sys
import time
import warnings
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

import fluxloom as fl

sys.path.insert(0, str(pathlib.Path(__file__).parent.parent / "tests"))

from independent.atoms import HZ_PER_GAUSS, Species, couple, hyperfine_hz, moment_operators, species
from independent.dipoles import cartesian_elements, reduced_element, sign, six_j
from independent.light import HZ_PER_AU, POLARISABILITY, ground_hz, in_hartree
from scipy import constants

#: Photons per second of 1 a.u.^2 in 1 W/m^2, without omega^3.
SCATTERING = POLARISABILITY**2 * 2 / (constants.epsilon_0 * constants.c)
SCATTERING /= 12 * np.pi * constants.epsilon_0 * constants.hbar * constants.c**3
FIELD_GAUSS = 30.0
# An isotope, its larger F, and a wavelength between its lines.
ISOTOPES = [("87Rb", 2.0, 790.03), ("40K", 4.5, 769.0), ("133Cs", 4.0, 880.2)]


@dataclass(frozen=True)
class Light:
    """One beam at the atoms."""

    polarisation: np.ndarray
    frequency_hz: float
    intensity_w_per_m2: float


class Polarisabilities:
    """The three sums over F' of one F, for an array of wavelengths."""

    def __init__(self, one: Species, f: float) -> None:
        energies, weights = [], []
        for line in one.lines:
            for excited in couple(line.excited_j, one.i):
                strength = reduced_element(one, line, f, excited) ** 2
                if strength == 0.0:
                    continue
                structure = (line.excited_j, one.i, line.a_hz, line.b_hz)
                energies.append(
                    line.frequency_hz + hyperfine_hz(excited, *structure) - one.zero_field_hz(f)
                )
                weights.append(
                    [
                        sign(k + f + excited + 1)
                        * np.sqrt(2 * k + 1)
                        * six_j(1.0, float(k), 1.0, f, excited, f)
                        * strength
                        for k in range(3)
                    ]
                )
        scale = [
            1 / np.sqrt(3 * (2 * f + 1)),
            -np.sqrt(2 * f / ((f + 1) * (2 * f + 1))),
            -np.sqrt(2 * f * (2 * f - 1) / (3 * (f + 1) * (2 * f + 1) * (2 * f + 3))),
        ]
        self.energies = in_hartree(np.array(energies))
        weights = np.array(weights) * scale
        self.even, self.odd = weights[:, ::2], weights[:, 1]
        self.residual = one.residual_au

    def __call__(self, wavelengths_nm: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        light = in_hartree(constants.c / (wavelengths_nm * 1e-9))[:, None]
        near, far = 1 / (self.energies - light), 1 / (self.energies + light)
        scalar, tensor = ((near + far) @ self.even).T
        return scalar + self.residual, (near - far) @ self.odd, tensor


class Ground:
    """Levels, couplings and scattering of a ground manifold, field along z."""

    def __init__(self, one: Species) -> None:
        self.residual = one.residual_au
        dipole, self.excited = cartesian_elements(one)
        # <b|d_i|e> and <e|d_i|a>, the components in rows: one product turns them to a
        # polarisation.
        _, self.count, excited = dipole.shape
        self.shape = (self.count, excited)
        self.dipole = np.ascontiguousarray(dipole)
        self.up = np.ascontiguousarray(dipole.conj().transpose(0, 2, 1))
        self.rest = ground_hz(one)
        self.levels_of_f = [slice(one.index((f, -f)), one.index((f, f)) + 1) for f in one.manifolds]
        # Blocks of one m: pairs, and the two states that stand alone.
        blocks = [
            [n for n, state in enumerate(one.states) if state[1] == m]
            for m in sorted({m for _, m in one.states})
        ]
        self.pairs = np.array([block for block in blocks if len(block) == 2])
        self.alone = np.array([block[0] for block in blocks if len(block) == 1])
        self.zeeman = HZ_PER_GAUSS * moment_operators(one)[2].real

    def down_along(self, polarisation: np.ndarray) -> np.ndarray:
        return (polarisation @ self.dipole.reshape(3, -1)).reshape(self.shape)

    def up_along(self, polarisation: np.ndarray) -> np.ndarray:
        return (polarisation @ self.up.reshape(3, -1)).reshape(self.shape[::-1])

    def levels(self, field_gauss: float) -> tuple[np.ndarray, np.ndarray]:
        """Energies in Hz, and the states of the field in columns."""
        energies, vectors = np.empty(self.count), np.zeros((self.count, self.count))
        rows, columns = self.pairs[:, :, None], self.pairs[:, None, :]
        blocks = field_gauss * self.zeeman[rows, columns]
        blocks[:, [0, 1], [0, 1]] += self.rest[self.pairs]
        found, turned = np.linalg.eigh(blocks)
        # The small F lies lower, unless the hyperfine structure is inverted.
        if self.rest[0] > self.rest[-1]:
            found, turned = found[:, ::-1], turned[:, :, ::-1]
        signs = np.sign(turned[:, [0, 1], [0, 1]])
        energies[self.pairs], vectors[rows, columns] = found, turned * signs[:, None, :]
        alone = self.alone
        energies[alone] = self.rest[alone] + field_gauss * self.zeeman[alone, alone]
        vectors[alone, alone] = 1.0
        return energies, vectors

    def couplings_hz(self, absorb: Light, emit: Light) -> np.ndarray:
        """Rabi frequencies between all states, [b, a]; one product per pair of levels."""
        into, out = absorb.polarisation, emit.polarisation.conj()
        up, up_out = self.up_along(into), self.up_along(out)
        down, down_into = self.down_along(out), self.down_along(into)
        light_hz = 0.5 * (absorb.frequency_hz + emit.frequency_hz)
        v = np.empty((self.count, self.count), dtype=complex)
        for b in self.levels_of_f:
            for a in self.levels_of_f:
                above = self.excited - 0.5 * (self.rest[b.start] + self.rest[a.start])
                v[b, a] = (down[b] / in_hartree(above - light_hz)) @ up[:, a]
                v[b, a] += (down_into[b] / in_hartree(above + light_hz)) @ up_out[:, a]
        v.flat[:: self.count + 1] += self.residual * (out @ into)
        _, vectors = self.levels(FIELD_GAUSS)
        both = np.sqrt(absorb.intensity_w_per_m2 * emit.intensity_w_per_m2)
        return 2 * HZ_PER_AU * both * (vectors.T @ v @ vectors)

    def scattering_per_s(self, place: int, lights: tuple[Light, ...]) -> np.ndarray:
        """Rates of one state by final state."""
        energies, vectors = self.levels(FIELD_GAUSS)
        start = vectors[:, place]
        rates = np.zeros(self.count)
        for light in lights:
            into, nu = light.polarisation, light.frequency_hz
            up, down = self.up_along(into), self.down_along(into)
            # The denominators know the level that the light finds the atom in.
            elements = self.residual * into[:, None] * start
            for a in self.levels_of_f:
                near = in_hartree(self.excited - self.rest[a.start] - nu)
                elements = elements + self.dipole @ (up[:, a] @ start[a] / near)
            far = in_hartree(self.excited[None, :] - self.rest[:, None] + nu)
            elements = elements + (self.up @ start) @ (down / far).T
            strength = (np.abs(elements @ vectors) ** 2).sum(axis=0)
            omega = 2 * np.pi * (nu + energies[place] - energies)
            rates += SCATTERING * light.intensity_w_per_m2 * omega**3 * strength
        return rates


def crossed_pair(wavelength_nm: float) -> fl.RamanPair:
    """Make a pair in which every rank takes part."""
    beams = [
        fl.Beam(
            wavelength_nm=wavelength_nm,
            power_mw=1.0,
            waist_um=200.0,
            direction=direction,
            polarisation=fl.polarisation.linear(direction, along),
        )
        for direction, along in [((1, 0, 0), (0, 1, 2)), ((0, 1, 0), (1, 0, 0.3))]
    ]
    return fl.RamanPair.from_beams(absorb=beams[0], emit=beams[1])


def best_s(work: Callable[[], object], repeats: int) -> float:
    """Shortest of seven mean times of ``repeats`` calls."""
    found = []
    for _ in range(7):
        start = time.perf_counter()
        for _ in range(repeats):
            work()
        found.append((time.perf_counter() - start) / repeats)
    return min(found)


def row(what: str, peer: tuple[float, float], difference: float) -> None:
    """Print one comparison; times in seconds."""
    numpy_s, ours_s = peer
    unit, scale = ("ms", 1e3) if ours_s > 1e-3 else ("us", 1e6)
    print(
        f"{what:38} {numpy_s * scale:8.2f} {ours_s * scale:8.2f} {unit}"
        f" {numpy_s / ours_s:6.1f}   {difference:.0e}"
    )


def apart(ours: np.ndarray, theirs: np.ndarray) -> float:
    """Largest difference over the largest number."""
    return float(np.abs(ours - theirs).max() / np.abs(theirs).max())


def compare(name: str, f: float, wavelength_nm: float) -> None:
    """Time one isotope and print its rows."""
    atom, one = fl.Atom(name), species(name)
    wavelengths = 900.0 + 0.002 * np.arange(100_000)
    peer = Polarisabilities(one, f)
    ours, theirs = atom.polarisability_au(wavelengths, f), peer(wavelengths)
    times = (
        best_s(lambda: peer(wavelengths), 3),
        best_s(lambda: atom.polarisability_au(wavelengths, f), 3),
    )
    three = (ours.scalar, ours.vector, ours.tensor)
    worst = max(apart(mine, other) for mine, other in zip(three, theirs, strict=True))
    row(f"{name} polarisabilities, 1e5 wavelengths", times, worst)

    ground, pair = Ground(one), crossed_pair(wavelength_nm)
    lights = tuple(
        Light(np.array(beam.polarisation), constants.c / wavelength_nm * 1e9, intensity)
        for beam in pair.beams
        for intensity in [float(beam.intensity_w_per_m2())]
    )
    levels = atom.ground_levels(FIELD_GAUSS)
    # The peer has the small F first.
    order = [one.index(state) for state in levels.states]
    matrix = pair.rabi_matrix_hz(atom, field_gauss=FIELD_GAUSS)
    times = (
        best_s(lambda: ground.couplings_hz(*lights), 300),
        best_s(lambda: pair.rabi_matrix_hz(atom, field_gauss=FIELD_GAUSS), 300),
    )
    worst = apart(matrix, ground.couplings_hz(*lights)[np.ix_(order, order)])
    row(f"{name} all couplings, {FIELD_GAUSS:g} G", times, worst)

    times = (
        best_s(lambda: ground.levels(FIELD_GAUSS), 300),
        best_s(lambda: atom.ground_levels(FIELD_GAUSS), 300),
    )
    worst = apart(levels.energies_hz, ground.levels(FIELD_GAUSS)[0][order])
    row(f"{name} levels, {FIELD_GAUSS:g} G", times, worst)

    state = (f, f - 1.0)
    place = one.index(state)
    found = atom.scattering_per_s(pair.beams, *state, field_gauss=FIELD_GAUSS)
    times = (
        best_s(lambda: ground.scattering_per_s(place, lights), 300),
        best_s(lambda: atom.scattering_per_s(pair.beams, *state, field_gauss=FIELD_GAUSS), 300),
    )
    rates = np.array([found.to[state] for state in levels.states])
    worst = apart(rates, ground.scattering_per_s(place, lights)[order])
    row(f"{name} scattering in two beams, {FIELD_GAUSS:g} G", times, worst)


def main() -> None:
    """Time both and print the ratios."""
    fl.set_threads(1)
    # That much of the table is from memory is not the subject here.
    warnings.simplefilter("ignore", fl.FluxloomWarning)
    print(f"{'one thread':38} {'numpy':>8} {'fluxloom':>8}     ratio   difference")
    for isotope in ISOTOPES:
        compare(*isotope)


if __name__ == "__main__":
    main()
