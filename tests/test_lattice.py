"""Lattice quantities against scipy and published tables."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from reference.make_band_energies import edge_energies

import fluxloom as fl


def lattice(depth_er: float, **others: float) -> fl.Lattice:
    return fl.Lattice(wavelength_nm=1064.0, depth_er=depth_er, **others)


def test_every_band_edge_is_a_mathieu_value() -> None:
    # source: scipy.special.mathieu_a, mathieu_b: E = A + s/2 at parameter s/4
    depths = np.concatenate([np.linspace(0.5, 40.0, 159), [0.5, 40.0]])
    found = fl.band_energies_er(depths, [0.0, 1.0, -1.0], count=6)
    for depth, energies in zip(depths, found, strict=True):
        np.testing.assert_allclose(energies[0], edge_energies(depth, 0, 6), rtol=0, atol=2e-9)
        np.testing.assert_allclose(energies[1], edge_energies(depth, 1, 6), rtol=0, atol=2e-9)
        np.testing.assert_allclose(energies[2], energies[1], rtol=0, atol=1e-12)


# source: Bloch, Dalibard, Zwerger, Rev. Mod. Phys. 80, 885 (2008), Table I
# (from memory, confirmed by recomputation): depth, 4t, width, |t2|/t
TABLE = [
    (3, 0.444109, 0.451894, 0.101075),
    (5, 0.263069, 0.264211, 0.051641),
    (10, 0.076730, 0.076747, 0.011846),
    (15, 0.026075, 0.026076, 0.003459),
    (20, 0.009965, 0.009965, 0.001184),
]


@pytest.mark.parametrize(("depth", "four_t", "width", "ratio"), TABLE)
def test_published_tunnelling(depth: float, four_t: float, width: float, ratio: float) -> None:
    here = lattice(depth)
    assert 4 * here.tunnelling_er() == pytest.approx(four_t, abs=6e-7)
    assert here.bands().width_er(0) == pytest.approx(width, abs=6e-7)
    assert -here.tunnelling_er(reach=2) / here.tunnelling_er() == pytest.approx(ratio, abs=6e-7)


def test_the_deep_lattice_formula_is_a_comparison_at_most() -> None:
    # source: Zwerger 2003, (4/sqrt pi) s^(3/4) exp(-2 sqrt s): 31 % high at s = 5,
    # 19 % at s = 10 (computed independently).
    for depth, excess in [(5.0, 0.31), (10.0, 0.19)]:
        formula = 4 / np.sqrt(np.pi) * depth**0.75 * np.exp(-2 * np.sqrt(depth))
        assert formula / lattice(depth).tunnelling_er() - 1 == pytest.approx(excess, abs=0.01)


def test_bands_are_those_of_a_dense_matrix() -> None:
    # source: numpy.linalg.eigvalsh on 61 x 61 plane-wave matrices
    bands = lattice(7.3).bands(count=5, points=41)
    n = np.arange(-30, 31)
    for q, found in zip(bands.quasimomenta, bands.energies_er.T, strict=True):
        matrix = np.diag((q + 2 * n) ** 2 + 7.3 / 2)
        matrix -= 7.3 / 4 * (np.eye(len(n), k=1) + np.eye(len(n), k=-1))
        np.testing.assert_allclose(found, np.linalg.eigvalsh(matrix)[:5], rtol=0, atol=1e-11)
    np.testing.assert_array_equal(bands.quasimomenta, np.linspace(-1, 1, 41))
    assert bands.error_er < 2e-12


def test_gaps_at_centre_edge_and_smallest() -> None:
    bands = lattice(10.0).bands()
    # source: computed independently of this project (numpy and mpmath), no publication
    assert bands.gap_er(0, 1.0) == pytest.approx(4.57226225228, abs=2e-11)
    assert bands.gap_er(0, 0.0) == pytest.approx(5.64555270878, abs=2e-11)
    assert bands.gap_er() == bands.gap_er(0, 1.0)
    assert bands.gap_er(1) == bands.gap_er(1, 0.0) < bands.gap_er(1, 1.0)


def test_wannier_function_is_normalised_over_its_own_grid() -> None:
    table = lattice(6.0).wannier(sites=24)
    assert np.trapezoid(table.amplitude**2, table.x_nm) == pytest.approx(1.0, abs=1e-12)
    assert table.x_nm[0] == -12 * 532.0


def test_overlap_of_tabulated_functions() -> None:
    here = lattice(8.0)
    table = here.wannier(sites=40)
    k_l = np.pi / here.spacing_nm
    for kick in (0.3, 1.1, 2.7):
        direct = np.trapezoid(table.amplitude**2 * np.cos(kick * k_l * table.x_nm), table.x_nm)
        assert here.kick_overlap(kick) == pytest.approx(direct, abs=1e-10)


def test_overlaps_between_bands_complete_the_sum() -> None:
    # Completeness: a kick leads somewhere. Over all bands and sites the squares
    # add up to 1; on-site elements to the lowest bands carry most of it.
    here = lattice(30.0)
    on_site = sum(here.kick_overlap(0.8, to_band=band) ** 2 for band in range(5))
    hops = sum(2 * here.kick_overlap(0.8, reach=reach) ** 2 for reach in (1, 2))
    assert on_site + hops == pytest.approx(1.0, abs=2e-4)
    # Small kicks: i kick k_L <1|x|0>, harmonic length (4/s)^(1/4)/sqrt(2)/k_L, to a few per cent.
    harmonic = 0.01 * 30.0**-0.25 / np.sqrt(2)
    assert here.kick_overlap(0.01, to_band=1) == pytest.approx(harmonic, rel=0.06)


@settings(max_examples=40, deadline=None)
@given(
    st.floats(0.02, 300.0),
    st.floats(-3.0, 3.0),
    st.integers(1, 8),
)
def test_energies_are_periodic_even_and_ordered(depth: float, q: float, count: int) -> None:
    found = fl.band_energies_er(depth, [q, -q, q + 2], count=count)[0]
    np.testing.assert_allclose(found[1], found[0], rtol=0, atol=1e-10)
    np.testing.assert_allclose(found[2], found[0], rtol=0, atol=1e-10)
    assert np.all(np.diff(found[0]) > -1e-10)
    assert 0 < found[0][0] <= depth / 2 + 1.0


@settings(max_examples=20, deadline=None)
@given(st.floats(1.0, 60.0), st.floats(0.0, 6.0), st.floats(0.0, 6.0))
def test_many_kicks_are_each_alone(depth: float, one: float, other: float) -> None:
    here = lattice(depth)
    together = here.kick_overlap([[one, other]])
    assert together.shape == (1, 2)
    assert together[0, 0] == here.kick_overlap(one)
    assert together[0, 1] == here.kick_overlap(other)


def test_shifts_in_hertz() -> None:
    # source: CODATA 2022 and AME2020 by hand: m g a/h and m (2 pi f)^2 a^2/h
    atom, here = fl.Atom("40K"), lattice(6.0)
    planck = 6.62607015e-34
    mass = atom.mass_kg
    assert here.tilt_hz(atom, acceleration_m_per_s2=9.80665) == pytest.approx(
        mass * 9.80665 * 532e-9 / planck, rel=1e-12
    )
    assert here.trap_curvature_hz(atom, trap_hz=24.0) == pytest.approx(
        mass * (2 * np.pi * 24.0 * 532e-9) ** 2 / planck, rel=1e-12
    )
    assert here.tunnelling_hz(atom) == here.tunnelling_er() * here.recoil_hz(atom)
