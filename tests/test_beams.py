"""Laser beams as Python has them."""

import copy
import json
import math
import pickle
import re
from collections.abc import Callable
from decimal import Decimal
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import fluxloom as fl

X, Z = (1, 0, 0), (0, 0, 1)
ROUND = fl.Beam(
    wavelength_nm=1064.0,
    power_mw=100.0,
    waist_um=100.0,
    direction=(1.0, 0.0, 0.0),
    polarisation=(0.0, 0.0, 1.0),
)
SLANTED = (0.3, -1.2, 2.0)
ODD = fl.Beam(
    wavelength_nm=780.3,
    power_mw=0.1 + 0.2,
    waist_um=(35.0, 90.0),
    direction=SLANTED,
    polarisation=3.0 * fl.polarisation.elliptical(SLANTED, (1.0, 1.0, 0.2), -17.0),
    waist_axis=(2.0, 0.5, 0.0),
    focus_um=(120.0, -0.0, 7.5),
)
BLIND = ODD.replace(waist_axis=None)
BEAMS = {"round": ROUND, "odd": ODD, "blind": BLIND, "reflected": ODD.reflected(0.04)}
each_beam = pytest.mark.parametrize("beam", BEAMS.values(), ids=BEAMS)


def told(call: Callable[[], object]) -> fl.InputError:
    with pytest.raises(fl.InputError) as caught:
        call()
    return caught.value


# Intensity.


def test_intensity_of_a_round_beam() -> None:
    # Closed form, 2 P/(pi w^2): 100 mW on 100 um.
    peak = 2 * 0.1 / (math.pi * 1e-8)
    assert ROUND.intensity_w_per_m2() == pytest.approx(peak, rel=1e-14)
    assert ROUND.intensity_w_per_m2((0.0, 60.0, -80.0)) == pytest.approx(
        peak * math.exp(-2), rel=1e-14
    )
    rayleigh_um = math.pi * 100.0**2 / 1.064
    assert ROUND.intensity_w_per_m2([-rayleigh_um, 0, 0]) == pytest.approx(peak / 2, rel=1e-14)
    assert ROUND.replace(power_mw=0).intensity_w_per_m2(at_um=(5, 5, 5)) == 0.0
    moved = ROUND.replace(focus_um=(1e5, 3.0, -4.0))
    assert moved.intensity_w_per_m2((1e5, 63.0, 76.0)) == ROUND.intensity_w_per_m2((0, 60, 80))


def test_the_power_passes_through_a_plane() -> None:
    k = np.array(SLANTED) / np.linalg.norm(SLANTED)
    first = np.cross(k, (0.2, 1.0, 0.1))
    first /= np.linalg.norm(first)
    steps = np.linspace(-800.0, 800.0, 401)
    grid = np.stack(np.meshgrid(steps, steps), axis=-1)
    points = grid @ np.array([first, np.cross(k, first)]) + np.array(ODD.focus_um) + 3000.0 * k
    intensity = ODD.intensity_w_per_m2(points)
    assert intensity.shape == (401, 401)
    power_mw = intensity.sum() * 4.0**2 * 1e-9
    assert power_mw == pytest.approx(ODD.power_mw, rel=1e-10)


def test_the_first_waist_lies_along_its_axis() -> None:
    beam = ROUND.replace(waist_um=(40, 70), waist_axis=(0, 0, 3))
    peak = beam.intensity_w_per_m2()
    across = beam.intensity_w_per_m2([(0, 0, 40), (0, 0, -40), (0, 70, 0), (0, 40, 0)])
    expected = [math.exp(-2), math.exp(-2), math.exp(-2), math.exp(-2 * (4 / 7) ** 2)]
    np.testing.assert_allclose(across / peak, expected, rtol=1e-14)


PLACES = np.array([[0.0, 1.0, 2.0], [30.0, -5.0, 8.0], [120.0, 0.0, 7.5], [1e4, 1e4, 1e4]])
FORMS = {
    "list": lambda a: a.tolist(),
    "strided": lambda a: np.repeat(a, 2, axis=0)[::2],
    "Fortran order": np.asfortranarray,
    "backwards": lambda a: a[:, ::-1].copy()[:, ::-1],
    "big-endian": lambda a: a.astype(">f8"),
    "deep": lambda a: a.reshape(2, 1, 2, 3),
    "empty": lambda a: a[:0],
    "many": lambda a: np.broadcast_to(a[:, None, :], (4, 20_000, 3)),
}


@pytest.mark.parametrize("form", FORMS.values(), ids=FORMS)
def test_points_in_any_layout(form: Callable[[np.ndarray], object]) -> None:
    given_points = form(PLACES)
    before = copy.deepcopy(given_points)
    found = ODD.intensity_w_per_m2(given_points)
    points = np.asarray(given_points, dtype=np.float64)
    assert found.shape == points.shape[:-1]
    assert found.flags.c_contiguous
    assert not found.flags.writeable
    each = {tuple(p): ODD.intensity_w_per_m2(p) for p in PLACES.tolist()}
    assert all(type(value) is float for value in each.values())
    assert found.ravel().tolist() == [each[tuple(p)] for p in points.reshape(-1, 3).tolist()]
    np.testing.assert_array_equal(np.asarray(given_points), np.asarray(before))


@pytest.mark.parametrize(
    ("wrong", "message"),
    [
        (3.0, r"shape \(\.\.\., 3\), not of shape \(\)"),
        ([1.0, 2.0], r"not of shape \(2,\)"),
        (np.zeros((3, 2)), r"not of shape \(3, 2\)"),
        ("xyz", "at_um must be a number or an array of numbers, not str"),
        ([1j, 0, 0], "at_um must be a number, not complex"),
        ([True, 0, 0], "at_um must be a number, not bool"),
        ([[0, 0, 1j]], "at_um must be a number or an array of numbers, not list"),
        (np.ones(3, dtype=bool), "at_um must be a number or an array of numbers, not ndarray"),
    ],
)
def test_points_that_are_none(wrong: object, message: str) -> None:
    with pytest.raises(TypeError, match=message):
        ROUND.intensity_w_per_m2(wrong)


def test_points_out_of_reach_are_named() -> None:
    points = np.zeros((2, 3))
    points[1, 2] = math.nan
    error = told(lambda: ROUND.intensity_w_per_m2(points))
    assert error.code == "beam.position_out_of_range"
    assert str(error).startswith("at_um[1, 2] = NaN is outside -1e8 <= at_um[1, 2] <= 1e8")


def test_nothing_is_guessed_about_the_waists() -> None:
    focus = np.array(BLIND.focus_um)
    along = np.array([[0.0], [1.0], [-1e4], [3e7]]) * np.array(SLANTED)
    np.testing.assert_allclose(
        BLIND.intensity_w_per_m2(focus + along), ODD.intensity_w_per_m2(focus + along), rtol=1e-12
    )
    for at_um in [(120.0, 0.0, 8.0), [(120.0, 0.0, 7.5), (120.0, 0.0, 8.0)]]:
        error = told(lambda at_um=at_um: BLIND.intensity_w_per_m2(at_um))
        assert error.code == "beam.no_waist_axis"
        assert str(error) == (
            "at_um = [120, 0, 8] is off the axis of a beam with waist_um = [35, 90], and the "
            "intensity there depends on which way the waists lie: give waist_axis, the direction "
            "of the first"
        )


def test_mirrors() -> None:
    back = ODD.reflected(0.5)
    assert back == ODD.replace(
        power_mw=ODD.power_mw * 0.5, direction=tuple(-x for x in ODD.direction)
    )
    assert ROUND.reflected(1).direction == (-1.0, 0.0, 0.0)
    assert "-0.0" not in repr(ROUND.reflected(1))
    assert ROUND.reflected(1).reflected(1) == ROUND
    for wrong in (-0.1, 1.01, math.nan):
        error = told(lambda wrong=wrong: ODD.reflected(wrong))
        assert error.code == "beam.power_fraction_out_of_range"
        assert str(error).endswith("give a fraction, not per cent: 0.99 is ninety-nine per cent")
    with pytest.raises(TypeError, match="power_fraction must be a number, not str"):
        ODD.reflected("0.5")


# Refusals.


@pytest.mark.parametrize(
    ("changes", "code", "message"),
    [
        ({"wavelength_nm": 1.064}, "light.wavelength_out_of_range", "it looks like micrometres"),
        ({"power_mw": -1}, "beam.power_out_of_range", "power_mw = -1 is outside 0 <= power_mw"),
        ({"power_mw": 1e7}, "beam.power_out_of_range", "give the power in milliwatts"),
        ({"waist_um": 0.1}, "beam.waist_out_of_range", "waist_um = 0.1 is outside 0.5 <="),
        ({"waist_um": (50, 2e5)}, "beam.waist_out_of_range", "waist_um[1] = 200000 is outside"),
        ({"waist_um": math.nan}, "beam.waist_out_of_range", "waist_um = NaN is outside"),
        ({"direction": (0, 0, 0)}, "geometry.no_direction", "direction = [0, 0, 0] has no"),
        ({"polarisation": (0, 0j, 0)}, "geometry.no_direction", "polarisation = [0, 0, 0] has no"),
        ({"polarisation": (0, math.inf, 0)}, "geometry.no_direction", "polarisation = [0, inf, 0]"),
        ({"polarisation": (0.1, 1, 1j)}, "beam.not_transverse", "polarisation leans 4.045 degrees"),
        ({"polarisation": X}, "beam.not_transverse", "it lies along direction, so give a vector"),
        ({"waist_axis": (1, 1, 0)}, "beam.not_transverse", "waist_axis leans 45 degrees out of"),
        ({"waist_axis": (0, 0, 0)}, "geometry.no_direction", "waist_axis = [0, 0, 0] has no"),
        ({"focus_um": (0, 0, 1e9)}, "beam.focus_out_of_range", "focus_um[2] = 1e9 is outside"),
    ],
)
def test_beams_that_cannot_be(changes: dict[str, object], code: str, message: str) -> None:
    error = told(lambda: ROUND.replace(**changes))
    assert error.code == code
    assert message in str(error)
    assert error.details["field"].startswith(next(iter(changes)))


def test_the_nearest_vector_that_is_offered_is_taken() -> None:
    for polarisation in [(0.1, 0.2, -3), (1e-3, 1j, 0.4 - 0.2j), (2, 1e-3j, 0), (1e-4, 1, 1j)]:
        for direction in (X, SLANTED):
            error = told(
                lambda u=polarisation, k=direction: ROUND.replace(direction=k, polarisation=u)
            )
            assert error.code == "beam.not_transverse"
            offered = re.search(r"the nearest vector across direction is (\[.*\])$", str(error))
            nearest = eval(offered[1], {})
            u, k = np.array(polarisation), np.array(direction) / np.linalg.norm(direction)
            beam = ROUND.replace(direction=direction, polarisation=nearest)
            assert abs(np.vdot(beam.polarisation, u - (k @ u) * k)) == pytest.approx(
                np.linalg.norm(u - (k @ u) * k), rel=1e-8
            )
            lean = math.degrees(math.asin(abs(k @ u) / np.linalg.norm(u)))
            assert error.details == {"field": "polarisation", "lean_deg": pytest.approx(lean)}


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"wavelength_nm": "1064"}, "wavelength_nm must be a number, not str"),
        ({"power_mw": True}, "power_mw must be a number, not bool"),
        ({"waist_um": None}, "waist_um must be a number or two numbers (w1, w2), not NoneType"),
        ({"waist_um": (1, 2, 3)}, "waist_um must be a number or two numbers (w1, w2), not tuple"),
        ({"waist_um": "50"}, "waist_um must be a number or two numbers (w1, w2), not str"),
        ({"waist_um": b"50"}, "waist_um must be a number or two numbers (w1, w2), not bytes"),
        ({"direction": b"xyz"}, "direction must be three numbers, not bytes"),
        ({"direction": (1, 0)}, "direction must be three numbers, not 2"),
        ({"direction": (1j, 0, 0)}, "direction must be a number, not complex"),
        ({"polarisation": "xyz"}, "polarisation must be three numbers, real or complex, not str"),
        ({"polarisation": (0, 1)}, "polarisation must be three numbers, real or complex, not 2"),
        ({"polarisation": (0, True, 0)}, "three numbers, real or complex, not bool"),
        ({"polarisation": (0, np.True_, 0)}, "three numbers, real or complex, not bool"),
        ({"polarisation": (0, None, 0)}, "three numbers, real or complex, not NoneType"),
        ({"polarisation": (0, "1j", 0)}, "three numbers, real or complex, not str"),
        ({"polarisation": np.eye(3) * 1j}, "three numbers, real or complex, not ndarray"),
        ({"polarisation": 1j}, "polarisation must be three numbers, real or complex, not complex"),
        ({"waist_axis": 3}, "waist_axis must be three numbers, not int"),
        ({"focus_um": 0}, "focus_um must be three numbers, not int"),
        ({"waist": 50}, "replace() knows no argument waist; it has ['wavelength_nm', "),
    ],
)
def test_arguments_of_the_wrong_type(changes: dict[str, object], message: str) -> None:
    with pytest.raises(TypeError, match=re.escape(message)):
        ROUND.replace(**changes)


# Arguments, copies, documents.


@pytest.mark.parametrize(
    "polarisation",
    [
        [0, 0, 1j],
        (Fraction(0), Decimal(0), 1j),
        np.array([0, 0, 1j]),
        np.array([0, 0, 1j], dtype=np.complex64),
        np.array([9, 0, 9, 0, 9, 1j])[1::2],
        np.array([1j, 0, 0])[::-1],
        np.array([[0, 0, 1j], [1, 1, 1]], order="F")[0],
        [np.int8(0), np.array(0.0), np.array(1j)],
        [np.float32(0), np.complex128(0), np.complex64(1j)],
        np.array([0, 0, 1j], dtype=object),
    ],
    ids=repr,
)
def test_any_form_of_a_polarisation(polarisation: object) -> None:
    assert ROUND.replace(polarisation=polarisation).polarisation == (0j, 0j, 1j)


def test_arguments_are_readable_under_their_names() -> None:
    arguments = {
        "wavelength_nm": 780.3,
        "power_mw": 0.3,
        "waist_um": (35.0, 90.0),
        "direction": (0.0, 0.0, -2.0),
        "polarisation": (1.0 + 0.5j, -2j, 1e-9 + 0j),
        "waist_axis": (0.0, 4.0, 0.0),
        "focus_um": (1.0, 2.0, 3.0),
    }
    beam = fl.Beam(**arguments)
    assert {name: getattr(beam, name) for name in arguments} == arguments
    assert all(type(part) is complex for part in ROUND.polarisation)
    assert (ROUND.waist_um, ROUND.waist_axis, ROUND.focus_um) == (100.0, None, (0.0, 0.0, 0.0))
    # A round beam is round however it is said.
    assert ROUND.replace(waist_um=[100, 100]) == ROUND
    assert ROUND.replace(waist_um=np.array([50.0, 60.0])).waist_um == (50.0, 60.0)
    assert ROUND.replace(focus_um=None) == ROUND


def test_replace_and_equality() -> None:
    assert ODD.replace() == ODD
    assert ODD.replace(power_mw=7).power_mw == 7.0
    assert ODD.replace(power_mw=7).replace(power_mw=ODD.power_mw) == ODD
    for name, value in [
        ("power_mw", math.nextafter(ODD.power_mw, 0.0)),
        ("waist_um", (90.0, 35.0)),
        ("polarisation", fl.polarisation.linear(SLANTED, Z)),
        ("waist_axis", (-2.0, -0.5, 0.0)),
        ("direction", tuple(2 * x for x in SLANTED)),
    ]:
        assert ODD.replace(**{name: value}) != ODD
    assert ODD != 1
    with pytest.raises(TypeError, match="unhashable"):
        hash(ODD)
    with pytest.raises(AttributeError):
        ODD.power_mw = 1.0


@each_beam
def test_repr_is_the_call(beam: fl.Beam) -> None:
    again = eval(repr(beam), {"Beam": fl.Beam})
    assert again == beam
    assert again.to_json() == beam.to_json()


def test_repr_of_simple_light_is_simple() -> None:
    assert repr(ROUND.replace(polarisation=(0, 1, 1j))) == (
        "Beam(wavelength_nm=1064.0, power_mw=100.0, waist_um=100.0, direction=(1.0, 0.0, 0.0), "
        "polarisation=(0.0, 1.0, 1.0j), waist_axis=None, focus_um=(0.0, 0.0, 0.0))"
    )


ZERO = st.sampled_from([0.0, -0.0])
PART = st.one_of(ZERO, st.floats(-1e3, 1e3), st.floats(allow_nan=False, allow_infinity=False))


@given(st.tuples(st.builds(complex, PART, PART), st.builds(complex, PART, PART)), ZERO, ZERO)
def test_beams_keep_every_bit(across: tuple[complex, complex], one: float, two: float) -> None:
    if not any(across):
        return
    beam = ROUND.replace(polarisation=(complex(one, two), *across))
    text = beam.to_json()
    assert fl.Beam.from_json(text).to_json() == text
    assert eval(repr(beam), {"Beam": fl.Beam}).to_json() == text
    assert pickle.loads(pickle.dumps(beam)).to_json() == text
    assert [repr(part) for part in beam.polarisation[1:]] == [repr(part) for part in across]


@each_beam
def test_copies_and_files(beam: fl.Beam, tmp_path: Path) -> None:
    for protocol in range(pickle.HIGHEST_PROTOCOL + 1):
        assert pickle.loads(pickle.dumps(beam, protocol)) == beam
    assert copy.copy(beam) == copy.deepcopy(beam) == beam
    beam.save(tmp_path / "beam.json")
    assert fl.Beam.load(tmp_path / "beam.json") == beam
    document = json.loads(beam.to_json())
    assert list(document)[:3] == ["format", "version", "wavelength_nm"]
    assert (document["format"], document["version"]) == ("fluxloom-beam", 1)


@pytest.mark.parametrize(
    "changes",
    [
        {"power_mw": -1.0},
        {"waist_um": 50.0},
        {"polarisation": [1.0, 0.0, 0.0]},
        {"polarisation": [[1.0, 0.0], [0.0, 0.0], [0.0, 0.0]]},
        {"waist_axis": [1.0, 0.0, 0.0]},
        {"novelty": 1},
    ],
)
def test_documents_that_no_beam_can_have(changes: dict[str, object]) -> None:
    with pytest.raises(fl.InputError) as caught:
        fl.Beam.from_json(json.dumps({**json.loads(ROUND.to_json()), **changes}))
    assert caught.value.code == "file.not_valid"
