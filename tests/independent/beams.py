"""One beam, given to the package and to the reference in the same words."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

import fluxloom as fl
from independent.frames import random_direction, random_transverse, unit
from independent.light import Light, peak_w_per_m2

Triple = tuple[float, float, float]

# An isotope and wavelengths: near its lines, between them, far away.
WAVELENGTHS = [
    ("87Rb", (780.1, 790.03, 1064.0)),
    ("85Rb", (794.9, 788.0, 532.0)),
    ("40K", (766.6, 769.0, 1064.0)),
    ("39K", (768.97, 1550.0)),
    ("133Cs", (870.0, 880.2179, 1064.0)),
    ("6Li", (671.1, 670.985, 1064.0)),
    ("7Li", (670.972, 1064.0)),
    ("23Na", (589.4, 1064.0)),
    ("87Sr", (689.4, 813.4274)),
    ("171Yb", (555.9, 759.35)),
    ("173Yb", (555.81, 759.35)),
]


@dataclass(frozen=True)
class Setup:
    """A round beam focused on the atoms."""

    direction: Triple
    polarisation: tuple[complex, complex, complex]
    wavelength_nm: float
    power_mw: float = 100.0
    waist_um: float = 100.0

    def beam(self) -> fl.Beam:
        return fl.Beam(
            wavelength_nm=self.wavelength_nm,
            power_mw=self.power_mw,
            waist_um=self.waist_um,
            direction=self.direction,
            polarisation=self.polarisation,
        )

    def light(self) -> Light:
        intensity = peak_w_per_m2(self.power_mw, self.waist_um)
        return Light(self.polarisation, self.wavelength_nm, intensity)

    def turned(self, rotation: NDArray[np.float64]) -> "Setup":
        return Setup(
            direction=triple(rotation @ self.direction),
            polarisation=complex_triple(rotation @ np.array(self.polarisation)),
            wavelength_nm=self.wavelength_nm,
            power_mw=self.power_mw,
            waist_um=self.waist_um,
        )


def triple(vector: ArrayLike) -> Triple:
    x, y, z = np.asarray(vector, dtype=float).tolist()
    return x, y, z


def complex_triple(vector: ArrayLike) -> tuple[complex, complex, complex]:
    x, y, z = unit(vector).tolist()
    return x, y, z


def random_setup(random: np.random.Generator, wavelength_nm: float) -> Setup:
    """Any direction, any elliptical polarisation of any phase."""
    direction = random_direction(random)
    return Setup(
        direction=triple(direction),
        polarisation=complex_triple(random_transverse(random, direction)),
        wavelength_nm=wavelength_nm,
        power_mw=float(random.uniform(1.0, 100.0)),
        waist_um=float(random.uniform(50.0, 200.0)),
    )


def sigma(helicity: int, wavelength_nm: float = 1064.0) -> Setup:
    """Circular light along z, written out by hand."""
    polarisation = complex_triple((1.0, helicity * 1j, 0.0))
    return Setup((0.0, 0.0, 1.0), polarisation, wavelength_nm)


#: 100 mW in a waist of 100 um.
LINEAR = Setup((0.0, 0.0, 1.0), (1.0, 0.0, 0.0), 1064.0)
