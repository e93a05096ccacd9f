"""Ground states in a magnetic field against closed forms, matrices and published shifts."""

import itertools
import math
from typing import Any

import numpy as np
import pytest
from independent import atoms, frames, light

import fluxloom as fl

ALKALIS = ["87Rb", "40K", "133Cs", "6Li", "7Li", "23Na", "41K"]
NO_ELECTRON_SPIN = ["87Sr", "171Yb", "173Yb"]
FIELDS = [0.0, 1e-3, 0.1, 1.0, 19.7, 100.0, 333.3, 767.5, 1000.0]


def in_our_order(levels: Any, one: atoms.Species) -> list[int]:
    """Place among the product's states of each state of the reference."""
    places = {(state.f, state.m): place for place, state in enumerate(levels.states)}
    assert len(places) == len(levels.states) == len(one.states)
    return [places[state] for state in one.states]


def within_rounding(found: float, expected: float) -> bool:
    """To 1e-6 Hz, or to the last bit where that is coarser."""
    return abs(found - expected) <= max(1e-6, np.spacing(abs(expected)))


@pytest.mark.parametrize("field_gauss", FIELDS)
@pytest.mark.parametrize("name", ALKALIS + NO_ELECTRON_SPIN)
def test_energies_and_splittings_follow_breit_rabi(name: str, field_gauss: float) -> None:
    # source: Breit and Rabi, Phys. Rev. 38, 2082 (1931), in mpmath with 40 digits
    one = atoms.species(name)
    levels = fl.Atom(name).ground_levels(field_gauss)
    exact = {state: atoms.breit_rabi_hz(one, *state, field_gauss) for state in one.states}
    for state, energy in exact.items():
        assert within_rounding(levels.energy_hz(*state), float(energy)), state
    for a, b in itertools.permutations(one.states, 2):
        with atoms.mp.workdps(atoms.DIGITS):
            splitting = float(exact[b] - exact[a])
        assert within_rounding(levels.splitting_hz(a, b), splitting), (a, b)


@pytest.mark.parametrize("field_gauss", [0.0, 0.5, 60.0, 1500.0])
@pytest.mark.parametrize("name", ALKALIS + NO_ELECTRON_SPIN)
def test_vectors_are_eigenvectors_of_the_whole_matrix(name: str, field_gauss: float) -> None:
    # source: numpy matrix of A I.J + mu_B B (g_J J_z + g_I I_z), sympy Clebsch-Gordan
    # coefficients in the order J x I -> F
    one = atoms.species(name)
    levels = fl.Atom(name).ground_levels(field_gauss)
    order = in_our_order(levels, one)
    energies, vectors = atoms.eigenstates(one, field_gauss)
    np.testing.assert_allclose(levels.energies_hz[order], energies, rtol=0, atol=5e-6)
    found = np.array([np.asarray(levels.vector(*state))[order] for state in one.states]).T
    np.testing.assert_allclose(found, vectors, rtol=0, atol=1e-9)
    np.testing.assert_allclose(found.T @ found, np.eye(len(order)), rtol=0, atol=1e-13)
    assert np.all(np.diagonal(found) > 0)


@pytest.mark.parametrize("name", ["87Rb", "40K", "171Yb"])
def test_the_arrays_say_the_same_as_the_methods(name: str) -> None:
    atom = fl.Atom(name)
    levels = atom.ground_levels(12.5)
    assert sorted({state.f for state in levels.states}) == sorted(atom.manifolds)
    for place, state in enumerate(levels.states):
        assert (levels.f[place], levels.m[place]) == (state.f, state.m) == state
        assert levels.energies_hz[place] == levels.energy_hz(state.f, state.m)
    for a, b in itertools.combinations(levels.states, 2):
        assert levels.splitting_hz(a, b) == -levels.splitting_hz(b, a)
        assert levels.splitting_hz(a, a) == 0.0


def test_states_are_numbers_or_text() -> None:
    levels = fl.Atom("40K").ground_levels(19.7)
    written = levels.splitting_hz("9/2,-9/2", "9/2,-7/2")
    assert written == levels.splitting_hz((4.5, -4.5), (4.5, -3.5))


@pytest.mark.parametrize("name", ALKALIS)
def test_the_levels_of_a_hyperfine_interaction_have_no_mean(name: str) -> None:
    # source: trace of A I.J + mu_B B (g_J J_z + g_I I_z) over the whole manifold
    for field_gauss in (0.0, 250.0):
        energies = fl.Atom(name).ground_levels(field_gauss).energies_hz
        assert math.fsum(energies) == pytest.approx(0.0, abs=2e-5)


@pytest.mark.parametrize("field_gauss", [0.0, 3.2, 50.0, 400.0, 1000.0])
@pytest.mark.parametrize("name", ALKALIS + NO_ELECTRON_SPIN)
def test_moments_and_curvatures_are_derivatives(name: str, field_gauss: float) -> None:
    # source: derivatives of the closed form, mpmath with 40 digits; the moment is dE/dB,
    # the curvature d2E/dB2
    one = atoms.species(name)
    levels = fl.Atom(name).ground_levels(field_gauss)
    for state in one.states:
        moment = atoms.breit_rabi_slope(one, *state, field_gauss, 1)
        curvature = atoms.breit_rabi_slope(one, *state, field_gauss, 2)
        assert levels.moment_hz_per_gauss(*state) == pytest.approx(moment, rel=1e-9, abs=1e-6)
        found = levels.curvature_hz_per_gauss2(*state)
        assert found == pytest.approx(curvature, rel=1e-8, abs=1e-7)


def test_clock_shift_of_rubidium() -> None:
    levels = fl.Atom("87Rb").ground_levels(0.0)
    curvature = levels.curvature_hz_per_gauss2(2, 0) - levels.curvature_hz_per_gauss2(1, 0)
    # source: Steck, Rubidium 87 D Line Data (from memory): 575.15 Hz/G^2
    assert curvature / 2 == pytest.approx(575.15, abs=0.006)
    weak = fl.Atom("87Rb").ground_levels(0.1)
    shift = weak.splitting_hz((1, 0), (2, 0)) - levels.splitting_hz((1, 0), (2, 0))
    assert shift / 0.1**2 == pytest.approx(575.15, abs=0.006)
    # source: exact by definition of the table's A: the interval is A (I + 1/2)
    assert levels.splitting_hz((1, 0), (2, 0)) == pytest.approx(6834682610.904290, abs=1e-5)


@pytest.mark.parametrize("field_gauss", [0.5, 1.0, 5.0])
def test_quadratic_shift_of_rubidium_f_1(field_gauss: float) -> None:
    levels = fl.Atom("87Rb").ground_levels(field_gauss)
    second = levels.energy_hz(1, 1) + levels.energy_hz(1, -1) - 2 * levels.energy_hz(1, 0)
    # source: computed independently of this project (numpy and mpmath), no publication
    assert second / (2 * field_gauss**2) == pytest.approx(71.89, abs=0.005)


@pytest.mark.parametrize(
    # source: computed independently of this project (numpy and mpmath), no publication
    ("field_gauss", "splitting_hz"),
    [(19.7, 5_912_118.8), (50.0, 14_191_481.6)],
)
def test_splitting_of_potassium(field_gauss: float, splitting_hz: float) -> None:
    levels = fl.Atom("40K").ground_levels(field_gauss)
    found = levels.splitting_hz((4.5, -4.5), (4.5, -3.5))
    assert found == pytest.approx(splitting_hz, abs=0.06)


def test_the_manifolds_of_potassium_40_are_inverted() -> None:
    # source: common knowledge of the trade: A < 0, F = 9/2 lies below F = 7/2
    levels = fl.Atom("40K").ground_levels(0.0)
    assert levels.splitting_hz((4.5, 0.5), (3.5, 0.5)) == pytest.approx(4.5 * 285_730_800.0)


def test_caesium_defines_the_second() -> None:
    # source: SI brochure, 9th edition: 9 192 631 770 Hz exactly
    levels = fl.Atom("133Cs").ground_levels(0.0)
    assert levels.splitting_hz((3, 0), (4, 0)) == pytest.approx(9_192_631_770.0, abs=2e-6)


@pytest.mark.parametrize(
    ("name", "a", "b", "range_gauss"),
    [
        ("87Rb", (1, -1), (2, 1), (0.1, 20.0)),
        ("40K", (4.5, 2.5), (3.5, 3.5), (0.1, 1000.0)),
        ("7Li", (1, 0), (2, -1), (0.1, 1000.0)),
        ("41K", (1, -1), (2, -1), (0.1, 500.0)),
        ("40K", (4.5, 0.5), (4.5, -0.5), (0.1, 1000.0)),
        ("87Rb", (2, 2), (2, 1), (0.1, 100.0)),
    ],
)
def test_insensitive_fields(
    name: str, a: atoms.State, b: atoms.State, range_gauss: tuple[float, float]
) -> None:
    # source: zeros of the derivative of the closed form, mpmath with 40 digits
    expected = atoms.insensitive_fields(atoms.species(name), a, b, *range_gauss)
    found = fl.Atom(name).insensitive_fields_gauss(a, b, range_gauss=range_gauss)
    assert list(found) == pytest.approx(expected, rel=1e-9)
    other_way = fl.Atom(name).insensitive_fields_gauss(b, a, range_gauss=range_gauss)
    assert list(other_way) == pytest.approx(expected, rel=1e-9)


def test_the_magic_field_of_rubidium() -> None:
    # source: Harber et al., Phys. Rev. A 66, 053616 (2002) (from memory): 3.228917(3) G
    (found,) = fl.Atom("87Rb").insensitive_fields_gauss((1, -1), (2, 1), range_gauss=(1, 10))
    assert found == pytest.approx(3.228917, abs=3e-6)


@pytest.mark.parametrize("name", NO_ELECTRON_SPIN)
def test_without_electron_spin_the_nucleus_alone_turns(name: str) -> None:
    # source: E = mu_B B g_I m, scipy's Bohr magneton
    one = atoms.species(name)
    levels = fl.Atom(name).ground_levels(100.0)
    assert {state.f for state in levels.states} == {one.i}
    for f, m in one.states:
        expected = one.g_i * m * atoms.HZ_PER_GAUSS
        assert levels.energy_hz(f, m) == pytest.approx(100.0 * expected, rel=1e-14)
        assert levels.moment_hz_per_gauss(f, m) == pytest.approx(expected, rel=1e-14)
        assert abs(levels.curvature_hz_per_gauss2(f, m)) < 1e-15 * abs(expected)
        assert sorted(levels.vector(f, m)) == [0.0] * (len(one.states) - 1) + [1.0]


def test_nuclear_moments_have_the_sizes_known_for_clocks() -> None:
    # source: Boyd et al., Phys. Rev. A 76, 022510 (2007) (from memory): 87Sr ground state
    # -185 Hz/G per m; 171Yb +-750 Hz/G (common practice), moment +0.4919 nuclear magnetons
    strontium = fl.Atom("87Sr").ground_levels(1.0).splitting_hz((4.5, 0.5), (4.5, 1.5))
    assert abs(strontium) == pytest.approx(185.0, rel=0.01)
    ytterbium = fl.Atom("171Yb").ground_levels(1.0).splitting_hz((0.5, -0.5), (0.5, 0.5))
    assert abs(ytterbium) == pytest.approx(750.0, rel=0.01)
    # Opposite nuclear moments, opposite order of the levels.
    assert strontium * ytterbium < 0


def elements(
    name: str, field_gauss: float, direction: tuple, field_direction: tuple
) -> tuple[np.ndarray, np.ndarray]:
    """Magnitudes |Omega| of a <-> b in a radio field of 10 mG: the product's, the matrix's."""
    one, atom = atoms.species(name), fl.Atom(name)
    expected = light.radio_rabi_hz(one, 0.01, direction, field_gauss, field_direction)
    np.fill_diagonal(expected, 0.0)
    found = np.zeros_like(expected)
    for (row, b), (column, a) in itertools.permutations(enumerate(one.states), 2):
        found[row, column] = fl.radio_rabi_hz(
            atom,
            a,
            b,
            amplitude_gauss=0.01,
            direction=direction,
            field_gauss=field_gauss,
            field_direction=field_direction,
        )
    return np.abs(found), np.abs(expected)


@pytest.mark.parametrize("field_gauss", [0.5, 200.0])
@pytest.mark.parametrize("name", ["87Rb", "40K", "6Li", "173Yb"])
def test_radio_rabi_frequency_is_the_magnetic_element(name: str, field_gauss: float) -> None:
    # source: mu_B B_1 <b|(g_J J + g_I I).n|a>/h for B_1 n cos(omega t), numpy matrices
    random = np.random.default_rng(7)
    for field_direction in [(0.0, 0.0, 1.0), tuple(frames.random_direction(random))]:
        direction = tuple(frames.random_direction(random))
        found, expected = elements(name, field_gauss, direction, field_direction)
        np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9 * expected.max())


def test_radio_field_along_and_across() -> None:
    atom, options = fl.Atom("87Rb"), {"amplitude_gauss": 0.02, "field_gauss": 1e-3}
    across = fl.radio_rabi_hz(atom, (2, 2), (2, 1), direction=(1, 0, 0), **options)
    # source: mu_B g_F B_1 <2,1|F_x|2,2>/h with g_F = 1/2 and <F_x> = 1: 0.70 MHz/G
    # (Steck, Rubidium 87 D Line Data, from memory)
    assert abs(across) == pytest.approx(0.02 * 0.70e6, rel=3e-3)
    along = fl.radio_rabi_hz(atom, (2, 2), (2, 1), direction=(0, 0, -3), **options)
    assert abs(along) < 1e-9 * abs(across)
    # source: <2,0|J_z|1,0> = 1/2: mu_B g_J B_1/2
    clock = fl.radio_rabi_hz(atom, (1, 0), (2, 0), direction=(0, 0, 1), **options)
    assert abs(clock) == pytest.approx(0.02 * atoms.HZ_PER_GAUSS, rel=3e-3)


@pytest.mark.parametrize(
    ("f", "m"), [(3, 0), (0, 0), (1.5, 0.5), (2, 3), (2, -2.5), (1, 2), (2, math.nan)]
)
def test_states_that_do_not_exist(f: float, m: float) -> None:
    levels = fl.Atom("87Rb").ground_levels(1.0)
    for ask in (
        levels.energy_hz,
        levels.moment_hz_per_gauss,
        levels.curvature_hz_per_gauss2,
        levels.vector,
    ):
        with pytest.raises(fl.InputError):
            ask(f, m)
    with pytest.raises(fl.InputError):
        levels.splitting_hz((1, 0), (f, m))
    with pytest.raises(fl.InputError):
        levels.splitting_hz((f, m), (1, 0))


def test_a_wrong_f_is_told_which_there_are() -> None:
    with pytest.raises(fl.InputError, match=r"(?s)\b1\b.*\b2\b|\b2\b.*\b1\b"):
        fl.Atom("87Rb").ground_levels(1.0).energy_hz(3, 0)
    with pytest.raises(fl.InputError, match=r"(?s)7/2.*9/2|9/2.*7/2|3\.5.*4\.5|4\.5.*3\.5"):
        fl.Atom("40K").ground_levels(1.0).energy_hz(2.5, 0.5)


@pytest.mark.parametrize("field_gauss", [2000.1, math.nan, math.inf])
def test_fields_out_of_range(field_gauss: float) -> None:
    with pytest.raises(fl.InputError):
        fl.Atom("87Rb").ground_levels(field_gauss)
