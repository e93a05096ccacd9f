"""Fluxes against published values, hand formulas and the module fractions."""

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import fluxloom as fl

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)


def test_flux_from_vectors() -> None:
    # The flux from wave vectors written out in numpy, for an oblique pair.
    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0, angle_deg=75.0, axis=(1, 2, 0))
    absorb, emit = np.array([1.0, 0.2, 0.3]), np.array([-0.4, 1.0, 0.1])
    pair = fl.RamanPair.from_directions(
        absorb=absorb, absorb_wavelength_nm=769.0, emit=emit, emit_wavelength_nm=769.4
    )
    spacing = 1064.0 / 2 / np.sin(np.radians(75.0) / 2)
    axis = np.array([1, 2, 0]) / np.sqrt(5)
    wave = absorb / np.linalg.norm(absorb) / 769.0 - emit / np.linalg.norm(emit) / 769.4
    assert pair.flux(lattice) == pytest.approx(spacing * axis @ wave, abs=1e-14)
    assert pair.kick(lattice) == 2 * pair.flux(lattice)


def test_published_fluxes() -> None:
    # source: Kolkowitz et al., Nature 542, 66 (2017) (from memory): 1.1646 pi a plaquette
    clock = fl.RamanPair.from_directions(absorb=(1, 0, 0), absorb_wavelength_nm=698.4457)
    lattice = fl.Lattice(wavelength_nm=813.4274, depth_er=20)
    assert 2 * clock.flux(lattice) == pytest.approx(1.1646, abs=5e-5)
    # source: Mancini et al., Science 349, 1510 (2015) (from memory): 0.27104 k_R gives 0.37 pi
    angle = 2 * np.degrees(np.arcsin(0.27104 / 2))
    ytterbium = fl.RamanPair(wavelength_nm=556.0, angle_deg=angle)
    lattice = fl.Lattice(wavelength_nm=759.0, depth_er=15)
    assert 2 * ytterbium.flux(lattice) == pytest.approx(0.37, abs=1e-5)
    # source: Han, Kang, Shin, PRL 122, 065303 (2019): 2 pi/3 needs a difference of
    # cosines of 0.696742 (computed independently) for 532 nm (from memory) and 556 nm
    first, second = 0.8, 0.8 - 0.696742
    tube = fl.RamanPair.from_directions(
        absorb=(first, np.sqrt(1 - first**2), 0),
        absorb_wavelength_nm=556.0,
        emit=(second, np.sqrt(1 - second**2), 0),
    )
    lattice = fl.Lattice(wavelength_nm=532.0, depth_er=5)
    assert 2 * tube.flux(lattice) == pytest.approx(2 / 3, abs=1e-6)


def test_broadcasting_makes_maps() -> None:
    wavelengths = np.linspace(766.0, 775.0, 5)
    angles = np.array([[30.0], [90.0], [180.0]])
    found = fl.flux(spacing_nm=532.0, wavelength_nm=wavelengths, angle_deg=angles)
    expected = 2 * 532.0 / wavelengths * np.sin(np.radians(angles) / 2)
    np.testing.assert_allclose(found, expected, rtol=1e-14)
    assert not found.flags.writeable
    assert isinstance(fl.flux(spacing_nm=532, wavelength_nm=769), float)
    with pytest.raises(ValueError, match="do not fit together"):
        fl.flux(spacing_nm=[1.0, 2.0], wavelength_nm=[1.0, 2.0, 3.0])


def test_the_demo_apparatus_meets_and_misses() -> None:
    bay = fl.Apparatus.load("notebooks-examples/tern_bay.toml")
    check = bay.check("3/8")
    assert check.meets_target
    assert check.sites == 60
    missed = bay.replace({"raman.angle_deg": 180}).check("3/8")
    assert not missed.meets_target
    assert missed.phase_error_rad == pytest.approx(2 * np.pi * 59 * (1064 / 769 - 1.375), abs=1e-9)
    assert missed.exact_wavelength_nm == pytest.approx(1064 / 1.375, abs=1e-9)
    assert "773.818 nm" in missed.verdict


@settings(max_examples=60, deadline=None)
@given(st.floats(0.01, 2.0), st.integers(2, 300))
def test_nearest_fractions_are_those_of_the_standard_library(x: float, sites: int) -> None:
    pair = fl.RamanPair(wavelength_nm=1064.0, angle_deg=2 * np.degrees(np.arcsin(x / 2)))
    check = fl.check_flux(LATTICE, pair, "1/3", sites=sites)
    best = Fraction(check.folded).limit_denominator(sites)
    assert abs(check.nearest[0].fraction - Fraction(check.folded)) == abs(
        best - Fraction(check.folded)
    )
    phases = [abs(near.phase_error_rad) for near in check.nearest]
    assert phases == sorted(phases)
    for near in check.nearest:
        turned = 2 * np.pi * float(Fraction(check.folded) - near.fraction) * (sites - 1)
        assert near.phase_error_rad == pytest.approx(turned, rel=1e-9, abs=1e-12)
        assert near.fraction.denominator <= sites


@settings(max_examples=60, deadline=None)
@given(st.floats(-1e6, 1e6))
def test_folding(x: float) -> None:
    folded = fl.fold(x)
    assert -0.5 < folded <= 0.5
    assert (Fraction(x) - Fraction(folded)).denominator == 1
    np.testing.assert_array_equal(fl.fold([x, x]), [folded, folded])


@settings(max_examples=40, deadline=None)
@given(
    st.fractions(0, 1, max_denominator=40),
    st.floats(5.0, 180.0),
    st.floats(-60.0, 60.0),
)
def test_every_solution_is_one(target: Fraction, angle: float, tilt: float) -> None:
    found = fl.raman_wavelengths(
        target, LATTICE, range_nm=(300, 2500), angle_deg=angle, tilt_deg=tilt
    )
    for solution in found:
        again = fl.flux(
            spacing_nm=532.0,
            wavelength_nm=solution.wavelength_nm,
            angle_deg=angle,
            tilt_deg=tilt,
        )
        assert again == pytest.approx(solution.flux, abs=1e-12)
        wanted = solution.branch + solution.sense * target
        assert solution.flux == pytest.approx(float(wanted), abs=1e-11)
    overlaps = [solution.kick_overlap for solution in found]
    assert overlaps == sorted(overlaps, reverse=True)
    # None is missed: count the fluxes that are 1/wavelength times the geometry.
    reach = 1064.0 * np.sin(np.radians(angle / 2)) * np.cos(np.radians(tilt))
    low, high = reach / 2500, reach / 300
    fluxes = {branch + sense * target for branch in range(-2, 6) for sense in (1, -1)}
    inside = [flux for flux in fluxes if low * (1 + 1e-9) < flux < high * (1 - 1e-9)]
    assert len(found) >= len(inside)
    assert len(found) <= sum(low * (1 - 1e-9) < flux < high * (1 + 1e-9) for flux in fluxes)


@settings(max_examples=40, deadline=None)
@given(st.fractions(0, 1, max_denominator=40), st.floats(400.0, 1500.0))
def test_every_angle_is_one(target: Fraction, wavelength: float) -> None:
    for solution in fl.raman_angles(target, LATTICE, wavelength_nm=wavelength):
        pair = fl.RamanPair(wavelength_nm=wavelength, angle_deg=solution.angle_deg)
        assert pair.flux(LATTICE) == pytest.approx(solution.flux, abs=1e-12)
        wanted = solution.branch + solution.sense * target
        assert solution.flux == pytest.approx(float(wanted), abs=1e-7)


def test_tube_closure() -> None:
    pair = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
    check = fl.check_flux(LATTICE, pair, (3, 8), sites=60, legs=3, closed=True)
    # |sum over sites of exp(2 pi i mu n)|/N, written out
    mismatch = abs(3 * check.flux - round(3 * check.flux))
    direct = abs(np.exp(2j * np.pi * mismatch * np.arange(60)).mean())
    assert check.closure_mismatch == pytest.approx(mismatch, abs=1e-15)
    assert check.closure_overlap == pytest.approx(direct, abs=1e-12)
    assert check.loop_phase_is_physical is False
    eight = fl.check_flux(LATTICE, pair, "3/8", sites=60, legs=8, closed=True)
    assert eight.loop_phase_is_physical is True
