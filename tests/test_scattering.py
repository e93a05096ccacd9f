"""Scattering rates against Kramers-Heisenberg sums and two-level atoms."""

import itertools
import math

import numpy as np
import pytest
from independent import atoms, frames, light
from independent.beams import LINEAR, Setup, complex_triple, random_setup, sigma

import fluxloom as fl

CASES = [
    ("87Rb", 790.03),
    ("87Rb", 1064.0),
    ("40K", 769.0),
    ("133Cs", 870.0),
    ("6Li", 671.1),
    ("173Yb", 555.9),
    ("87Sr", 813.4274),
]


def without_residual(name: str) -> fl.Atom:
    zero = {"residual_polarisability_au": 0.0}
    return fl.Atom(name).with_data(zero, source="D lines alone")


def totals(atom: fl.Atom, setup: Setup, name: str) -> list[float]:
    beam = setup.beam()
    return [atom.scattering_per_s(beam, f, m).total for f, m in atoms.species(name).states]


def test_published_rate_of_an_optical_trap() -> None:
    # source: computed independently of this project (numpy and mpmath), no publication:
    # 100 mW, waist 100 um, 1064 nm
    beam = LINEAR.beam()
    for m in (-1, 0, 1):
        found = fl.Atom("87Rb").scattering_per_s(beam, 1, m).total
        assert found == pytest.approx(3.617e-3, abs=6e-7)
    # source: two-level sum, Grimm, Weidemueller, Ovchinnikov (2000); the counter-rotating
    # terms of both lines interfere, 2e-4, which that sum leaves out
    for found in totals(without_residual("87Rb"), LINEAR, "87Rb"):
        assert found == pytest.approx(3.506e-3, rel=4e-4)


@pytest.mark.parametrize("field_gauss", [0.0, 20.0])
@pytest.mark.parametrize(("name", "wavelength_nm"), CASES)
def test_rates_are_the_sums(name: str, wavelength_nm: float, field_gauss: float) -> None:
    # source: Kramers-Heisenberg sum over |F', m'> with sympy 3j and 6j symbols
    one, atom = atoms.species(name), fl.Atom(name)
    random = np.random.default_rng(13)
    setup = random_setup(random, wavelength_nm)
    # In a field the emitted photon's frequency may leave the Zeeman energies out: below 1e-6.
    within = 1e-9 if field_gauss == 0.0 else 1e-6
    for field_direction in [(0.0, 0.0, 1.0), tuple(frames.random_direction(random))]:
        options = {"field_gauss": field_gauss, "field_direction": field_direction}
        expected = light.scattering_per_s(one, setup.light(), **options)
        for column, state in enumerate(one.states):
            found = atom.scattering_per_s(setup.beam(), *state, **options)
            total = expected[:, column].sum()
            assert found.total == pytest.approx(total, rel=within)
            rayleigh = expected[column, column]
            assert found.rayleigh == pytest.approx(rayleigh, rel=0, abs=within * total)
            assert found.raman == pytest.approx(total - rayleigh, rel=0, abs=within * total)
            each = {(s.f, s.m): rate for s, rate in found.to.items()}
            for row, final in enumerate(one.states):
                rate = each.get(final, 0.0)
                assert rate == pytest.approx(expected[row, column], rel=0, abs=within * total)


@pytest.mark.parametrize(("name", "wavelength_nm"), CASES)
def test_parts_make_the_whole(name: str, wavelength_nm: float) -> None:
    atom = fl.Atom(name)
    beam = random_setup(np.random.default_rng(19), wavelength_nm).beam()
    for f, m in atoms.species(name).states:
        found = atom.scattering_per_s(beam, f, m, field_gauss=5.0)
        assert found.rayleigh >= 0 and found.raman >= 0
        assert found.rayleigh + found.raman == pytest.approx(found.total, rel=1e-13)
        assert math.fsum(found.to.values()) == pytest.approx(found.total, rel=1e-12)
        assert found.to[(f, m)] == pytest.approx(found.rayleigh, rel=1e-13)


@pytest.mark.parametrize("detuning_ghz", [-40.0, 15.0, 60.0])
@pytest.mark.parametrize("line", [0, 1])
def test_near_resonance_the_excited_states_decay_by_themselves(
    line: int, detuning_ghz: float
) -> None:
    # source: sum over excited states of linewidth times population, rotating wave; the
    # counter-rotating terms left out are 3e-4 of the amplitudes at most
    one = atoms.species("87Rb")
    frequency = one.lines[line].frequency_hz + 1e9 * detuning_ghz
    setup = random_setup(np.random.default_rng(5), 1e9 * light.constants.c / frequency)
    expected = light.excited_sum_per_s(one, setup.light())
    found = totals(without_residual("87Rb"), setup, "87Rb")
    np.testing.assert_allclose(found, expected, rtol=1e-3)


@pytest.mark.parametrize("wavelength_nm", [782.0, 787.0, 792.0, 800.0])
def test_the_mean_rate_is_that_of_two_level_atoms(wavelength_nm: float) -> None:
    # source: Grimm, Weidemueller, Ovchinnikov, Adv. At. Mol. Opt. Phys. 42, 95 (2000):
    # weights 1/3 and 2/3, factor (omega/omega_0)^3. The mean over all states leaves the
    # hyperfine structure in second order, and vector parts of polarised light out.
    one = atoms.species("87Rb")
    for polarisation in [(1.0, 0.0, 0.0), (1.0, 1.0j, 0.0)]:
        setup = Setup((0.0, 0.0, 1.0), complex_triple(polarisation), wavelength_nm)
        _, expected = light.two_level_sum(one, wavelength_nm, setup.light().intensity_w_per_m2)
        found = np.mean(totals(without_residual("87Rb"), setup, "87Rb"))
        assert found == pytest.approx(expected, rel=4e-3)


def test_the_rotating_wave_sum_is_incoherent() -> None:
    # A test of the reference itself: without residual and counter-rotating terms the sum is
    # that over excited states, but for the emitted frequency.
    for name, wavelength_nm in CASES[:5]:
        one = atoms.species(name)
        setup = random_setup(np.random.default_rng(3), wavelength_nm)
        options = {"residual": False, "counter_rotating": False}
        sums = light.scattering_per_s(one, setup.light(), **options).sum(axis=0)
        np.testing.assert_allclose(sums, light.excited_sum_per_s(one, setup.light()), rtol=1e-4)


def test_a_closed_transition_keeps_the_state() -> None:
    # source: angular momentum; from |2,2> circular light reaches m = 3 and m = 1, both
    # rotating terms lead back to |2,2> alone
    setup = sigma(1, 779.5)
    found = fl.Atom("87Rb").scattering_per_s(setup.beam(), 2, 2)
    assert found.raman <= 1e-14 * found.total
    opposite = sigma(-1, 779.5)
    assert fl.Atom("87Rb").scattering_per_s(opposite.beam(), 2, 2).raman > 0.1 * found.total


def test_between_the_lines_most_scattering_changes_the_state() -> None:
    # source: at a scalar tune-out the linear light leaves no dipole along itself; common
    # practice. Far away the two paths to another state cancel.
    atom = fl.Atom("87Rb")
    tune_out = atom.tune_out_nm((789, 791), f=1)
    between = Setup((0.0, 1.0, 0.0), (0.0, 0.0, 1.0), tune_out).beam()
    found = atom.scattering_per_s(between, 1, 0)
    assert found.rayleigh < 1e-4 * found.total
    far = atom.scattering_per_s(LINEAR.beam(), 1, 0)
    assert far.raman < 0.02 * far.total


def test_rates_turn_with_everything_else() -> None:
    random = np.random.default_rng(73)
    for name, wavelength_nm in [("87Rb", 790.03), ("40K", 769.0), ("173Yb", 555.9)]:
        atom, setup = fl.Atom(name), random_setup(random, wavelength_nm)
        field = frames.random_direction(random)
        turn = frames.rotation(random.normal(size=3), float(random.uniform(0.5, 3.0)))
        both = [(setup.beam(), tuple(field)), (setup.turned(turn).beam(), tuple(turn @ field))]
        for f, m in atoms.species(name).states:
            before, after = (
                atom.scattering_per_s(beam, f, m, field_gauss=15.0, field_direction=direction)
                for beam, direction in both
            )
            for part in ("total", "rayleigh", "raman"):
                size = 1e-9 * before.total
                assert getattr(after, part) == pytest.approx(getattr(before, part), abs=size)


def test_rates_add_up_and_follow_the_power() -> None:
    atom, random = fl.Atom("40K"), np.random.default_rng(79)
    first, second = (random_setup(random, nm).beam() for nm in (1064.0, 769.0))
    state, options = (4.5, -2.5), {"field_gauss": 10.0}
    one, two = (atom.scattering_per_s(beam, *state, **options) for beam in (first, second))
    both = atom.scattering_per_s([first, second], *state, **options)
    for part in ("total", "rayleigh", "raman"):
        expected = getattr(one, part) + getattr(two, part)
        assert getattr(both, part) == pytest.approx(expected, rel=1e-12)
    strong = atom.scattering_per_s(first.replace(power_mw=5 * first.power_mw), *state, **options)
    assert strong.total == pytest.approx(5 * one.total, rel=1e-12)


@pytest.mark.parametrize("state", [(3, 0), (2, 3), (2, 0.5), (1, math.nan)])
def test_states_that_do_not_exist(state: tuple[float, float]) -> None:
    with pytest.raises(fl.InputError):
        fl.Atom("87Rb").scattering_per_s(LINEAR.beam(), *state)


def test_fields_that_cannot_be() -> None:
    for options in itertools.chain(
        [{"field_direction": (0, 0, 0)}],
        [{"field_gauss": field} for field in (2000.1, math.nan)],
    ):
        with pytest.raises(fl.InputError):
            fl.Atom("87Rb").scattering_per_s(LINEAR.beam(), 2, 0, **options)
