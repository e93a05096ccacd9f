"""Fundamental constants against scipy.constants (CODATA 2022)."""

from scipy import constants

from fluxloom import _core

#: Our names and scipy's.
NAMES = {
    "planck": "Planck constant",
    "reduced_planck": "reduced Planck constant",
    "speed_of_light": "speed of light in vacuum",
    "elementary_charge": "elementary charge",
    "boltzmann": "Boltzmann constant",
    "atomic_mass": "atomic mass constant",
    "electron_mass": "electron mass",
    "bohr_radius": "Bohr radius",
    "vacuum_permittivity": "vacuum electric permittivity",
    "hartree": "Hartree energy",
    "bohr_magneton": "Bohr magneton",
}


def test_constants_are_those_of_scipy() -> None:
    found = {name: value for name, value, _ in _core.constants()}
    assert set(found) == set(NAMES)
    for name, value in found.items():
        expected = constants.physical_constants[NAMES[name]][0]
        assert abs(value / expected - 1) < 1e-15, name
