"""Light shifts, two-photon couplings and scattering as sums over excited states.

E(t) = Re(E u exp(-i omega t)), I = eps0 c |E|^2/2. Every sum is made between the
zero-field states |F, m> with zero-field energies, then turned into the eigenstates in
the field; the excited Zeeman shift is neglected. Polarisations are unit vectors in the
laboratory frame.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import constants
from scipy.optimize import brentq

from independent.atoms import (
    HZ_PER_GAUSS,
    Species,
    State,
    couple,
    eigenstates,
    hyperfine_hz,
    moment_operators,
)
from independent.dipoles import cartesian_elements, reduced_element, sign, six_j
from independent.frames import to_field_frame, unit

Matrix = NDArray[np.complex128]

HARTREE = constants.physical_constants["Hartree energy"][0]
BOHR_RADIUS = constants.physical_constants["Bohr radius"][0]
#: One atomic unit of polarisability in C m^2/V.
POLARISABILITY = (constants.e * BOHR_RADIUS) ** 2 / HARTREE
#: Energy in Hz for one atomic unit of v in 1 W/m^2: -(1/4)|E|^2/h.
HZ_PER_AU = -POLARISABILITY / (2 * constants.epsilon_0 * constants.c * constants.h)


def frequency_hz(wavelength_nm: float) -> float:
    return constants.c / (wavelength_nm * 1e-9)


def peak_w_per_m2(power_mw: float, waist_um: float, second_um: float | None = None) -> float:
    second_um = waist_um if second_um is None else second_um
    return 2 * power_mw * 1e-3 / (np.pi * waist_um * second_um * 1e-12)


def in_hartree(energy_hz: ArrayLike) -> NDArray[np.float64]:
    return np.asarray(energy_hz) * constants.h / HARTREE


def ground_hz(one: Species) -> NDArray[np.float64]:
    return np.array([one.zero_field_hz(f) for f, _ in one.states])


def amplitude(
    one: Species,
    emitted: ArrayLike,
    absorbed: ArrayLike,
    resonant_hz: NDArray[np.float64],
    counter_hz: NDArray[np.float64],
    *,
    residual: bool = True,
    counter_rotating: bool = True,
) -> Matrix:
    """v[b, a] in atomic units between zero-field states, field along z.

    ``resonant_hz`` and ``counter_hz``, both [b, e, a], are the denominators with the
    photon subtracted and added.
    """
    dipole, _ = cartesian_elements(one)
    out, into = np.conj(emitted), np.asarray(absorbed)
    # <e|d_i|a> is the complex conjugate of <a|d_i|e>.
    up = np.einsum("i,iae->ea", into, dipole.conj())
    up_out = np.einsum("i,iae->ea", out, dipole.conj())
    down = np.einsum("i,ibe->be", out, dipole)
    down_into = np.einsum("i,ibe->be", into, dipole)
    v = np.einsum("be,ea,bea->ba", down, up, 1 / in_hartree(resonant_hz))
    if counter_rotating:
        v += np.einsum("be,ea,bea->ba", down_into, up_out, 1 / in_hartree(counter_hz))
    if residual:
        v += one.residual_au * (out @ into) * np.eye(len(one.states))
    return v


def operator(
    one: Species,
    emitted: ArrayLike,
    absorbed: ArrayLike,
    light_hz: float,
    **options: bool,
) -> Matrix:
    """v[b, a] with the mean of both states' energies in the denominators."""
    _, excited = cartesian_elements(one)
    ground = ground_hz(one)
    mean = (ground[:, None] + ground[None, :]) / 2
    above = excited[None, :, None] - mean[:, None, :]
    return amplitude(one, emitted, absorbed, above - light_hz, above + light_hz, **options)


def operator_in_field(
    one: Species,
    emitted: ArrayLike,
    absorbed: ArrayLike,
    light_hz: float,
    field_gauss: float = 0.0,
    field_direction: ArrayLike = (0, 0, 1),
) -> Matrix:
    """v[b, a] between eigenstates; phases have a meaning only for a field along z."""
    frame = to_field_frame(field_direction)
    v = operator(one, frame @ unit(emitted), frame @ unit(absorbed), light_hz)
    _, vectors = eigenstates(one, field_gauss)
    return vectors.T @ v @ vectors


def light_shifts_hz(
    one: Species,
    polarisation: ArrayLike,
    wavelength_nm: float,
    intensity_w_per_m2: float,
    field_gauss: float = 0.0,
    field_direction: ArrayLike = (0, 0, 1),
) -> NDArray[np.float64]:
    """Diagonal shift of every state, in the order of ``states``."""
    light_hz = frequency_hz(wavelength_nm)
    v = operator_in_field(one, polarisation, polarisation, light_hz, field_gauss, field_direction)
    return HZ_PER_AU * intensity_w_per_m2 * np.diagonal(v).real


@dataclass(frozen=True)
class Light:
    """One beam where the atoms are."""

    polarisation: tuple[complex, complex, complex]
    wavelength_nm: float
    intensity_w_per_m2: float


def rabi_hz(
    one: Species,
    absorb: Light,
    emit: Light,
    field_gauss: float = 0.0,
    field_direction: ArrayLike = (0, 0, 1),
) -> Matrix:
    """Complex 2 V12/h of b <- a, [b, a]."""
    light_hz = (frequency_hz(absorb.wavelength_nm) + frequency_hz(emit.wavelength_nm)) / 2
    v = operator_in_field(
        one, emit.polarisation, absorb.polarisation, light_hz, field_gauss, field_direction
    )
    both = np.sqrt(absorb.intensity_w_per_m2 * emit.intensity_w_per_m2)
    return 2 * HZ_PER_AU * both * v


def radio_rabi_hz(
    one: Species,
    amplitude_gauss: float,
    direction: ArrayLike,
    field_gauss: float,
    field_direction: ArrayLike = (0, 0, 1),
) -> Matrix:
    """Rabi frequency of b <- a in an oscillating field amplitude cos(omega t), [b, a]."""
    along = to_field_frame(field_direction) @ unit(direction).real
    moment = np.einsum("i,iba->ba", along, moment_operators(one))
    _, vectors = eigenstates(one, field_gauss)
    return HZ_PER_GAUSS * amplitude_gauss * vectors.T @ moment @ vectors


def scattering_per_s(
    one: Species,
    light: Light,
    field_gauss: float = 0.0,
    field_direction: ArrayLike = (0, 0, 1),
    **options: bool,
) -> NDArray[np.float64]:
    """Kramers-Heisenberg rate of f <- a, [f, a]; f = a is Rayleigh scattering."""
    _, excited = cartesian_elements(one)
    ground = ground_hz(one)
    light_hz = frequency_hz(light.wavelength_nm)
    shape = (len(ground), len(excited), len(ground))
    resonant = np.broadcast_to(excited[None, :, None] - ground[None, None, :] - light_hz, shape)
    counter = np.broadcast_to(excited[None, :, None] - ground[:, None, None] + light_hz, shape)
    absorbed = to_field_frame(field_direction) @ unit(light.polarisation)
    energies, vectors = eigenstates(one, field_gauss)
    strength = np.zeros((len(ground), len(ground)))
    for emitted in np.eye(3):
        v = amplitude(one, emitted, absorbed, resonant, counter, **options)
        strength += np.abs(vectors.T @ v @ vectors) ** 2
    field_squared = 2 * light.intensity_w_per_m2 / (constants.epsilon_0 * constants.c)
    omega = 2 * np.pi * (light_hz + energies[None, :] - energies[:, None])
    scale = POLARISABILITY**2 * field_squared
    scale /= 12 * np.pi * constants.epsilon_0 * constants.hbar * constants.c**3
    return scale * omega**3 * strength


def polarisabilities_au(one: Species, f: float, wavelength_nm: float) -> tuple[float, float, float]:
    """Scalar (residual included), vector and tensor polarisability of a level F.

    Source: Le Kien, Schneeweiss, Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013).
    """
    light = in_hartree(frequency_hz(wavelength_nm))
    rank = np.zeros(3)
    for line in one.lines:
        for f_excited in couple(line.excited_j, one.i):
            strength = reduced_element(one, line, f, f_excited) ** 2
            energy = line.frequency_hz - one.zero_field_hz(f)
            energy += hyperfine_hz(f_excited, line.excited_j, one.i, line.a_hz, line.b_hz)
            w0 = in_hartree(energy)
            for k in range(3):
                rank[k] += (
                    sign(k + f + f_excited + 1)
                    * np.sqrt(2 * k + 1)
                    * six_j(1.0, float(k), 1.0, f, f_excited, f)
                    * strength
                    * (1 / (w0 - light) + (-1) ** k / (w0 + light))
                )
    scalar = rank[0] / np.sqrt(3 * (2 * f + 1)) + one.residual_au
    vector = -np.sqrt(2 * f / ((f + 1) * (2 * f + 1))) * rank[1] if f > 0 else 0.0
    factor = 2 * f * (2 * f - 1) / (3 * (f + 1) * (2 * f + 1) * (2 * f + 3))
    tensor = -np.sqrt(factor) * rank[2] if f >= 1 else 0.0
    return float(scalar), float(vector), float(tensor)


def along_the_field_au(
    one: Species, state: State, circularity: float, wavelength_nm: float
) -> float:
    """Polarisability of |F, m> for light along the field."""
    f, m = state
    scalar, vector, tensor = polarisabilities_au(one, f, wavelength_nm)
    total = scalar + (circularity * vector * m / (2 * f) if f > 0 else 0.0)
    if f >= 1:
        total -= tensor * (3 * m * m - f * (f + 1)) / (2 * f * (2 * f - 1))
    return total


def tune_out_nm(
    one: Species, low_nm: float, high_nm: float, f: float, m: float | None = None, v: float = 0.0
) -> float:
    """The one zero between two wavelengths that enclose no resonance."""

    def total(wavelength_nm: float) -> float:
        if m is None:
            return polarisabilities_au(one, f, wavelength_nm)[0]
        return along_the_field_au(one, (f, m), v, wavelength_nm)

    return float(brentq(total, low_nm, high_nm, xtol=1e-12, rtol=1e-15))


def two_level_sum(
    one: Species, wavelength_nm: float, intensity_w_per_m2: float
) -> tuple[float, float]:
    """Shift in Hz and scattering per second of the D lines as independent two-level atoms.

    Weights 1/3 and 2/3, linewidths from the dipole elements, both rotating terms, factor
    (omega/omega_0)^3 in the rate. Source: Grimm, Weidemueller, Ovchinnikov,
    Adv. At. Mol. Opt. Phys. 42, 95 (2000).
    """
    omega = 2 * np.pi * frequency_hz(wavelength_nm)
    shift = rate = 0.0
    for line in one.lines:
        w0 = 2 * np.pi * line.frequency_hz
        weight = (2 * line.excited_j + 1) / 6
        dipole = line.dipole_au * constants.e * BOHR_RADIUS
        width = w0**3 * dipole**2 / (2 * line.excited_j + 1)
        width /= 3 * np.pi * constants.epsilon_0 * constants.hbar * constants.c**3
        terms = width / (w0 - omega) + width / (w0 + omega)
        common = np.pi * constants.c**2 * intensity_w_per_m2 * weight / (2 * w0**3)
        shift -= 3 * common * terms / (2 * np.pi * constants.hbar)
        rate += 3 * common * (omega / w0) ** 3 * terms**2 / constants.hbar
    return float(shift), float(rate)


def excited_sum_per_s(one: Species, light: Light) -> NDArray[np.float64]:
    """Scattering of every state as the decay of what is admixed of each excited state.

    Rotating wave, no residual; the emitted frequency is taken to be that of the light.
    Amplitudes by way of different excited states do not interfere in the total, because
    the emission, summed over final states and polarisations, is a scalar. Two lines of the
    same J' would interfere: for the D lines only.
    """
    dipole, excited = cartesian_elements(one)
    light_hz = frequency_hz(light.wavelength_nm)
    up = np.einsum("i,iae->ea", unit(light.polarisation), dipole.conj())
    detuning = in_hartree(excited[:, None] - ground_hz(one)[None, :] - light_hz)
    field = np.sqrt(2 * light.intensity_w_per_m2 / (constants.epsilon_0 * constants.c))
    admixed = np.abs(up / detuning * field * constants.e * BOHR_RADIUS / HARTREE / 2) ** 2
    strength = (np.abs(dipole) ** 2).sum(axis=(0, 1)) * (constants.e * BOHR_RADIUS) ** 2
    decay = (2 * np.pi * light_hz) ** 3 * strength
    decay /= 3 * np.pi * constants.epsilon_0 * constants.hbar * constants.c**3
    return decay @ admixed
