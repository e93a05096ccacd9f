"""Beams, light shifts and lattice depths against sums over excited states."""

import math

import numpy as np
import pytest
from independent import atoms, frames, light
from independent.beams import LINEAR, WAVELENGTHS, Setup, random_setup, sigma

import fluxloom as fl

# Beams.


def test_intensity_of_a_gaussian_beam() -> None:
    beam = sigma(1).beam()
    # source: I0 = 2P/(pi w^2)
    peak = 2 * 0.1 / (math.pi * 1e-8)
    assert beam.intensity_w_per_m2() == pytest.approx(peak, rel=1e-13)
    across = beam.intensity_w_per_m2(at_um=(60.0, 80.0, 0.0))
    assert across == pytest.approx(peak * math.exp(-2), rel=1e-12)
    # source: Rayleigh length pi w^2/lambda, where the intensity on the axis has halved
    rayleigh_um = math.pi * 100.0**2 / 1.064
    for z in (rayleigh_um, -rayleigh_um):
        assert beam.intensity_w_per_m2(at_um=(0, 0, z)) == pytest.approx(peak / 2, rel=1e-12)


def test_intensity_of_an_elliptical_beam_out_of_centre() -> None:
    beam = fl.Beam(
        wavelength_nm=769.0,
        power_mw=3.0,
        waist_um=(40.0, 160.0),
        direction=(2.0, 0.0, 0.0),
        polarisation=(0.0, 0.0, 1.0),
        waist_axis=(0.0, 1.0, 0.0),
        focus_um=(10.0, 20.0, -30.0),
    )
    peak = light.peak_w_per_m2(3.0, 40.0, 160.0)
    assert beam.intensity_w_per_m2(at_um=(10.0, 20.0, -30.0)) == pytest.approx(peak, rel=1e-13)
    for at_um in [(10.0, 60.0, -30.0), (10.0, 20.0, 130.0)]:
        found = beam.intensity_w_per_m2(at_um=at_um)
        assert found == pytest.approx(peak * math.exp(-2), rel=1e-12)
    here = math.exp(-2 * ((20 / 40) ** 2 + (30 / 160) ** 2))
    # The origin lies 10 um before the focus: a millionth of the Rayleigh length squared.
    assert beam.intensity_w_per_m2() == pytest.approx(peak * here, rel=1e-4)


@pytest.mark.parametrize("direction", [(0, 0, 1), (0, 0, -2.0), (1, -2, 0.5)])
def test_polarisations_are_transverse_and_turn_as_they_say(direction: tuple) -> None:
    k = frames.unit(direction).real
    for helicity in (1, -1):
        u = np.asarray(fl.polarisation.circular(direction, helicity))
        np.testing.assert_allclose([np.linalg.norm(u), abs(u @ k)], [1, 0], rtol=0, atol=1e-14)
        # source: -i u* x u is the photon's spin: along the beam for positive helicity
        spin = -1j * np.cross(u.conj(), u)
        np.testing.assert_allclose(spin, helicity * k, rtol=0, atol=1e-14)
    along = np.cross(k, (0.3, 0.1, -0.7))
    linear = np.asarray(fl.polarisation.linear(direction, along))
    np.testing.assert_allclose(linear, frames.unit(along), rtol=0, atol=1e-14)
    for angle_deg in (-45.0, -20.0, 0.0, 10.0, 45.0):
        u = np.asarray(fl.polarisation.elliptical(direction, along, angle_deg))
        spin = -1j * np.cross(u.conj(), u)
        expected = math.sin(2 * math.radians(angle_deg)) * k
        np.testing.assert_allclose(spin, expected, rtol=0, atol=1e-14)
        share = abs(u.conj() @ frames.unit(along)) ** 2
        assert share == pytest.approx(math.cos(math.radians(angle_deg)) ** 2, abs=1e-14)


@pytest.mark.parametrize(
    "changes",
    [
        {"polarisation": (0.0, 0.0, 1.0)},
        {"polarisation": (1.0, 0.0, 0.05)},
        {"polarisation": (0.0, 0.0, 0.0)},
        {"direction": (0.0, 0.0, 0.0)},
        {"waist_um": 0.4},
        {"waist_um": (100.0, 1.1e5)},
        {"power_mw": 1.1e6},
        {"power_mw": -1.0},
        {"wavelength_nm": 99.0},
        {"wavelength_nm": 1064e-9},
    ],
)
def test_beams_that_cannot_be(changes: dict[str, object]) -> None:
    given = {
        "wavelength_nm": 1064.0,
        "power_mw": 100.0,
        "waist_um": 100.0,
        "direction": (0.0, 0.0, 1.0),
        "polarisation": (1.0, 0.0, 0.0),
    }
    fl.Beam(**given)
    with pytest.raises(fl.InputError):
        fl.Beam(**{**given, **changes})


def test_polarisations_that_cannot_be() -> None:
    for make in (
        lambda: fl.polarisation.linear((0, 0, 0), (1, 0, 0)),
        lambda: fl.polarisation.linear((0, 0, 1), (0, 0, 0)),
        lambda: fl.polarisation.linear((0, 0, 1), (0, 0, 1)),
        lambda: fl.polarisation.circular((0, 0, 0), 1),
        lambda: fl.polarisation.circular((0, 0, 1), 0),
        lambda: fl.polarisation.elliptical((0, 0, 1), (0, 0, 1), 10.0),
    ):
        with pytest.raises(fl.InputError):
            make()


# Light shifts.


def test_published_shift_of_an_optical_trap() -> None:
    atom, beam = fl.Atom("87Rb"), LINEAR.beam()
    # source: computed independently of this project (numpy and mpmath), no publication:
    # 100 mW, waist 100 um, 1064 nm
    for m in (-1, 0, 1):
        assert atom.light_shift_hz(beam, 1, m) == pytest.approx(-20_537.0, abs=0.6)
    bare = atom.with_data({"residual_polarisability_au": 0.0}, source="D lines alone")
    shifts = [bare.light_shift_hz(beam, f, m) for f, m in atoms.species("87Rb").states]
    # source: two-level sum, Grimm, Weidemueller, Ovchinnikov (2000)
    assert np.mean(shifts) == pytest.approx(-20_219.0, abs=0.5)
    expected, _ = light.two_level_sum(atoms.species("87Rb"), 1064.0, 2 * 0.1 / (math.pi * 1e-8))
    assert np.mean(shifts) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("field_gauss", [0.0, 40.0])
@pytest.mark.parametrize(("name", "wavelengths_nm"), WAVELENGTHS)
def test_shifts_are_diagonal_elements_of_the_sum(
    name: str, wavelengths_nm: tuple[float, ...], field_gauss: float
) -> None:
    # source: sum over |F', m'> with sympy 3j and 6j symbols, turned into field eigenstates
    one, atom = atoms.species(name), fl.Atom(name)
    random = np.random.default_rng(11)
    for wavelength_nm in wavelengths_nm:
        setup = random_setup(random, wavelength_nm)
        for field_direction in [(0.0, 0.0, 1.0), tuple(frames.random_direction(random))]:
            expected = light.light_shifts_hz(
                one,
                setup.polarisation,
                wavelength_nm,
                setup.light().intensity_w_per_m2,
                field_gauss,
                field_direction,
            )
            options = {"field_gauss": field_gauss, "field_direction": field_direction}
            found = [atom.light_shift_hz(setup.beam(), *s, **options) for s in one.states]
            size = np.abs(expected).max()
            np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9 * size)


@pytest.mark.parametrize(("name", "wavelengths_nm"), WAVELENGTHS)
def test_vector_and_tensor_shifts_have_no_mean(
    name: str, wavelengths_nm: tuple[float, ...]
) -> None:
    # source: traces of F and of rank-two operators vanish; what is left is the scalar shift
    atom, random = fl.Atom(name), np.random.default_rng(3)
    setup = random_setup(random, wavelengths_nm[0])
    for f in atom.manifolds:
        mean = np.mean([atom.light_shift_hz(setup.beam(), f, m) for m in atoms.projections(f)])
        found = atom.polarisability_au(wavelengths_nm[0], f)
        unit_hz = light.HZ_PER_AU * setup.light().intensity_w_per_m2
        size = abs(found.scalar) + abs(found.vector) + abs(found.tensor)
        assert mean == pytest.approx(unit_hz * found.scalar, abs=1e-10 * abs(unit_hz) * size)


def test_shift_of_circular_light_tells_m() -> None:
    # source: V(sigma+, m) = -(1/4)|E|^2 (a_s + a_v m/(2F) - a_t (3m^2-F(F+1))/(2F(2F-1)))
    atom = fl.Atom("40K")
    for helicity in (1, -1):
        setup = sigma(helicity, 769.5)
        unit_hz = light.HZ_PER_AU * setup.light().intensity_w_per_m2
        for f in (4.5, 3.5):
            a = atom.polarisability_au(769.5, f)
            for m in atoms.projections(f):
                tensor = (3 * m * m - f * (f + 1)) / (2 * f * (2 * f - 1))
                expected = a.scalar + helicity * a.vector * m / (2 * f) - a.tensor * tensor
                found = atom.light_shift_hz(setup.beam(), f, m)
                assert found == pytest.approx(unit_hz * expected, rel=1e-10)


def test_shifts_add_up_and_follow_the_power() -> None:
    atom, random = fl.Atom("87Rb"), np.random.default_rng(2)
    first, second = (random_setup(random, nm) for nm in (1064.0, 790.5))
    options = {"field_gauss": 3.0, "field_direction": (1, 1, 0)}
    one = atom.light_shift_hz(first.beam(), 2, 1, **options)
    two = atom.light_shift_hz(second.beam(), 2, 1, **options)
    both = atom.light_shift_hz([first.beam(), second.beam()], 2, 1, **options)
    assert both == pytest.approx(one + two, rel=1e-13)
    strong = first.beam().replace(power_mw=10 * first.power_mw)
    assert atom.light_shift_hz(strong, 2, 1, **options) == pytest.approx(10 * one, rel=1e-13)
    # Of a vector only the direction counts.
    longer = first.beam().replace(polarisation=tuple(3 * x for x in first.polarisation))
    assert atom.light_shift_hz(longer, 2, 1, **options) == pytest.approx(one, rel=1e-13)


def test_shifts_turn_with_everything_else() -> None:
    random = np.random.default_rng(23)
    for name, wavelength_nm in [("87Rb", 790.0), ("40K", 769.0), ("173Yb", 555.9)]:
        atom, setup = fl.Atom(name), random_setup(random, wavelength_nm)
        field = frames.random_direction(random)
        turn = frames.rotation(random.normal(size=3), float(random.uniform(0.5, 3.0)))
        states = atoms.species(name).states
        shifts = [
            [
                atom.light_shift_hz(s.beam(), f, m, field_gauss=8.0, field_direction=tuple(b))
                for f, m in states
            ]
            for s, b in [(setup, field), (setup.turned(turn), turn @ field)]
        ]
        np.testing.assert_allclose(shifts[0], shifts[1], rtol=1e-10)


@pytest.mark.parametrize("angle_deg", [180.0, 90.0, 31.451])
def test_lattice_depth_is_four_times_the_cross_term(angle_deg: float) -> None:
    half = math.radians(angle_deg) / 2
    setups = [
        Setup((side * math.sin(half), math.cos(half), 0.0), (0.0, 0.0, 1.0), 1064.0, 50.0)
        for side in (1.0, -1.0)
    ]
    atom, beams = fl.Atom("40K"), [setup.beam() for setup in setups]
    recoil_hz = fl.Lattice(wavelength_nm=1064.0, depth_er=1.0, angle_deg=angle_deg).recoil_hz(atom)
    for state in [(4.5, -4.5), (3.5, 0.5)]:
        depth = fl.lattice_depth_er(atom, beams, state=state)
        single = atom.light_shift_hz(beams[0], *state)
        # source: |E_1 + E_2|^2 goes from 0 to 4 |E_1|^2
        assert depth == pytest.approx(4 * abs(single) / recoil_hz, rel=1e-10)
        power = fl.lattice_power_mw(atom, beams, depth_er=3 * depth, state=state)
        assert power == pytest.approx(150.0, rel=1e-10)


# Refusals.


def test_what_cannot_be_asked_of_light() -> None:
    atom, beam = fl.Atom("87Rb"), LINEAR.beam()
    with pytest.raises(fl.InputError, match=r"(?s)\b1\b.*\b2\b|\b2\b.*\b1\b"):
        atom.polarisability_au(1064.0, 3)
    for ask in (
        lambda: atom.polarisability_au(99.0, 2),
        lambda: atom.polarisability_au(math.nan, 2),
        lambda: atom.light_shift_hz(beam, 3, 0),
        lambda: atom.light_shift_hz(beam, 2, 3),
        lambda: atom.light_shift_hz(beam, 2, 0.5),
        lambda: atom.light_shift_hz(beam, 2, 0, field_direction=(0, 0, 0)),
        lambda: atom.light_shift_hz(beam, 2, 0, field_gauss=2000.1),
    ):
        with pytest.raises(fl.InputError):
            ask()


def test_uncertainty_comes_with_the_same_value() -> None:
    atom, beam = fl.Atom("87Rb"), LINEAR.beam()
    shift = atom.light_shift_hz(beam, 2, 0, uncertainty=True)
    assert shift.value == atom.light_shift_hz(beam, 2, 0)
    # source: at 1064 nm a residual of 10.70(15) in 688 a.u. and linewidths known to 3e-4
    assert 1e-4 < shift.standard_error / abs(shift.value) < 1e-3
    tune_out = atom.tune_out_nm((789, 791), f=2, uncertainty=True)
    assert tune_out.value == atom.tune_out_nm((789, 791), f=2)
    assert 0 < tune_out.standard_error < 0.05
