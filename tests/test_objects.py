"""What all objects have in common: equality, copies, files, and nothing that can be changed."""

import copy
import json
import math
import pickle
from collections.abc import Callable
from decimal import Decimal
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import fluxloom as fl

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0, angle_deg=120.0, axis=(1.0, 2.0, -0.5))
RAMAN = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451, tilt_deg=-0.0)
DIRECTIONS = fl.RamanPair.from_directions(
    absorb=(1.0, 0.1, 0.0),
    absorb_wavelength_nm=769.0,
    emit=(-1.0, 0.0, 0.25),
    emit_wavelength_nm=769.1,
)
CLOCK = fl.RamanPair.from_directions(absorb=(0.0, 1.0, 0.0), absorb_wavelength_nm=698.4457)
ATOM = fl.Atom("40K")
OWN_ATOM = ATOM.with_data({"D1.dipole_au": 4.1075, "mass_u": 40.0}, source="our own").with_data(
    {"D2.lifetime_s": 2.64e-8}, source="a \"quoted\" note, with 'both', \\ and \u00e9\u03bc"
)
BEAM = fl.Beam(
    wavelength_nm=780.3,
    power_mw=0.1 + 0.2,
    waist_um=(35.0, 90.0),
    direction=(0.3, -1.2, 2.0),
    polarisation=fl.polarisation.elliptical((0.3, -1.2, 2.0), (1.0, 1.0, 0.2), -17.0),
    waist_axis=(2.0, 0.5, 0.0),
    focus_um=(120.0, -0.0, 7.5),
)
RIBBON = fl.check_flux(LATTICE, RAMAN, "3/8", sites=60)
TUBE = fl.check_flux(LATTICE, DIRECTIONS, 0.37, sites=60, legs=3, closed=True)
SOLUTION = fl.raman_wavelengths("3/8", LATTICE, range_nm=(500.0, 800.0))[0]
APPARATUS = fl.Apparatus.load(Path(__file__).parents[1] / "notebooks-examples" / "tern_bay.toml")

INPUTS = {
    "lattice": LATTICE,
    "raman": RAMAN,
    "raman swapped": RAMAN.swapped(),
    "directions": DIRECTIONS,
    "directions swapped": DIRECTIONS.swapped(),
    "clock": CLOCK,
    "clock swapped": CLOCK.swapped(),
    "atom": ATOM,
    "atom with own data": OWN_ATOM,
    "beam": BEAM,
}
RESULTS = {
    "bands": LATTICE.bands(count=3, points=7),
    "wannier": LATTICE.wannier(band=1, points_per_site=8, sites=2),
    "ribbon": RIBBON,
    "tube": TUBE,
    "near fraction": RIBBON.nearest[1],
    "solution": SOLUTION,
}
DOCUMENTS = {**INPUTS, **RESULTS, "apparatus": APPARATUS}
NAMES = {"Lattice": fl.Lattice, "RamanPair": fl.RamanPair, "Atom": fl.Atom, "Beam": fl.Beam}

each_document = pytest.mark.parametrize("one", DOCUMENTS.values(), ids=DOCUMENTS)
each_input = pytest.mark.parametrize("one", INPUTS.values(), ids=INPUTS)

lattices = st.builds(
    lambda wavelength, depth, angle, axis: fl.Lattice(
        wavelength_nm=wavelength, depth_er=depth, angle_deg=angle, axis=axis
    ),
    st.floats(100.0, 20_000.0),
    st.floats(0.0, 1000.0, exclude_min=True),
    # A smaller angle spreads the sites beyond a metre.
    st.floats(0.01, 180.0),
    st.tuples(*[st.floats(allow_nan=False, allow_infinity=False)] * 3).filter(any),
)
crossings = st.builds(
    lambda wavelength, angle, tilt: fl.RamanPair(
        wavelength_nm=wavelength, angle_deg=angle, tilt_deg=tilt
    ),
    st.floats(100.0, 20_000.0),
    st.floats(0.0, 180.0),
    st.floats(-180.0, 180.0),
)
pairs = st.builds(
    lambda pair, swap: pair.swapped() if swap else pair,
    st.one_of(crossings, st.sampled_from([DIRECTIONS, CLOCK])),
    st.booleans(),
)


def bits(one: object) -> str:
    """Every digit of an object; equality alone would not tell 0.0 from -0.0."""
    return one.to_json()


# Copies.


@each_document
def test_pickles_and_copies_are_equal(one: object) -> None:
    for protocol in range(pickle.HIGHEST_PROTOCOL + 1):
        again = pickle.loads(pickle.dumps(one, protocol))
        assert type(again) is type(one)
        assert again == one
        assert bits(again) == bits(one)
    assert copy.copy(one) == one
    assert copy.deepcopy([one]) == [one]


@pytest.mark.parametrize(
    "one",
    [ATOM.sources(), ATOM.sources()[0], APPARATUS.measured("lattice.depth_er")],
    ids=["source table", "data source", "measured"],
)
def test_rows_of_results_pickle_too(one: object) -> None:
    assert pickle.loads(pickle.dumps(one)) == one
    assert copy.deepcopy(one) == one


@given(lattices)
def test_lattices_keep_every_bit(one: fl.Lattice) -> None:
    assert bits(fl.Lattice.from_json(one.to_json())) == bits(one)
    assert bits(eval(repr(one), NAMES)) == bits(one)
    numbers = (one.wavelength_nm, one.depth_er, one.angle_deg, *one.axis)
    again = pickle.loads(pickle.dumps(one))
    copies = (again.wavelength_nm, again.depth_er, again.angle_deg, *again.axis)
    assert [x.hex() for x in copies] == [x.hex() for x in numbers]


@given(pairs)
def test_pairs_keep_every_bit(one: fl.RamanPair) -> None:
    assert bits(fl.RamanPair.from_json(one.to_json())) == bits(one)
    assert bits(eval(repr(one), NAMES)) == bits(one)
    assert one.swapped().swapped() == one


# Input objects.


def test_arguments_are_readable_under_their_names() -> None:
    lattice = {"wavelength_nm": 852.5, "depth_er": 0.1, "angle_deg": 33.3, "axis": (0.1, -2.0, 3.0)}
    crossing = {"wavelength_nm": 769.25, "angle_deg": 0.0, "tilt_deg": -17.5}
    directions = {
        "absorb": (0.1, 0.2, 0.3),
        "absorb_wavelength_nm": 769.0,
        "emit": (3.0, 2.0, 1.0),
        "emit_wavelength_nm": 770.0,
    }
    for build, arguments in [
        (fl.Lattice, lattice),
        (fl.RamanPair, crossing),
        (fl.RamanPair.from_directions, directions),
        (fl.RamanPair.from_directions, {**directions, "emit_wavelength_nm": None}),
        (fl.RamanPair.from_directions, {**directions, "emit": None, "emit_wavelength_nm": None}),
    ]:
        one = build(**arguments)
        assert {name: getattr(one, name) for name in arguments} == arguments
    # Of the two forms of a pair, the one that was not used is empty.
    assert {getattr(RAMAN, name) for name in directions} == {None}
    assert {getattr(DIRECTIONS, name) for name in crossing} == {None}


def test_defaults_are_what_the_documentation_says() -> None:
    assert fl.Lattice(wavelength_nm=1064, depth_er=6) == fl.Lattice(
        wavelength_nm=1064, depth_er=6, angle_deg=180, axis=(1, 0, 0)
    )
    assert fl.RamanPair(wavelength_nm=769) == fl.RamanPair(
        wavelength_nm=769, angle_deg=180, tilt_deg=0
    )


@each_input
def test_repr_is_the_call(one: object) -> None:
    assert eval(repr(one), NAMES) == one


@pytest.mark.parametrize("source", ["\u200b", "\x07", "\x7f", "line\nline", "\U0001f52c", "\\u{7}"])
def test_repr_is_the_call_for_any_source(source: str) -> None:
    atom = ATOM.with_data({"mass_u": 40.0}, source=f"a{source}b")
    assert eval(repr(atom), NAMES) == atom


def test_replace() -> None:
    deeper = LATTICE.replace(depth_er=7, axis=(0, 0, 1))
    assert (deeper.depth_er, deeper.axis) == (7.0, (0.0, 0.0, 1.0))
    assert (deeper.wavelength_nm, deeper.angle_deg) == (1064.0, 120.0)
    assert RAMAN.swapped().replace(angle_deg=90) == RAMAN.replace(angle_deg=90).swapped()
    other = DIRECTIONS.swapped().replace(emit_wavelength_nm=770)
    assert (other.emit_wavelength_nm, other.absorb) == (770.0, DIRECTIONS.absorb)
    assert other.roles_swapped
    with pytest.raises(fl.InputError, match="depth_er = -1 is outside"):
        LATTICE.replace(depth_er=-1)


@pytest.mark.parametrize(
    ("one", "name"), [(LATTICE, "depth"), (RAMAN, "absorb"), (DIRECTIONS, "wavelength_nm")]
)
def test_replacing_what_is_not_an_argument(one: object, name: str) -> None:
    with pytest.raises(TypeError, match=f"no argument {name}; it has"):
        one.replace(**{name: 6.0})


# Nothing can be changed.


@each_document
def test_objects_are_frozen(one: object) -> None:
    before = bits(one)
    for name in [*dir(one), "something_new"]:
        if not name.startswith("__"):
            with pytest.raises(AttributeError):
                setattr(one, name, 1.0)
            with pytest.raises(AttributeError):
                delattr(one, name)
    assert bits(one) == before


@each_document
def test_objects_of_floats_have_no_hash(one: object) -> None:
    with pytest.raises(TypeError, match="unhashable"):
        hash(one)


@each_document
def test_repr_is_one_line_without_an_address(one: object) -> None:
    assert "\n" not in repr(one)
    assert " at 0x" not in repr(one)


# Equality.


def test_one_bit_makes_a_difference() -> None:
    for name in ("wavelength_nm", "depth_er", "angle_deg"):
        value = getattr(LATTICE, name)
        assert LATTICE.replace(**{name: math.nextafter(value, 0.0)}) != LATTICE
    # The axis is compared as given, though only its direction counts.
    assert LATTICE.replace(axis=(2.0, 4.0, -1.0)) != LATTICE
    assert RAMAN.replace(tilt_deg=5e-324) != RAMAN
    assert RAMAN != RAMAN.swapped()
    assert ATOM != OWN_ATOM
    assert ATOM.with_data({"mass_u": 40.0}, source="a") != ATOM.with_data(
        {"mass_u": 40.0}, source="b"
    )


@pytest.mark.parametrize(
    ("one", "path"),
    [
        (RESULTS["bands"], ("energies_er", 1, 2)),
        (RESULTS["wannier"], ("amplitude", 3)),
        (RIBBON, ("phase_error_rad",)),
        (TUBE, ("lattice", "depth_er")),
        (RESULTS["near fraction"], ("phase_error_rad",)),
        (SOLUTION, ("kick_overlap",)),
    ],
)
def test_one_bit_of_a_result_makes_a_difference(one: object, path: tuple[str | int, ...]) -> None:
    document = json.loads(one.to_json())
    part = document
    for key in path[:-1]:
        part = part[key]
    part[path[-1]] = math.nextafter(part[path[-1]], math.inf)
    assert type(one).from_json(json.dumps(document)) != one


def test_equality_with_other_things() -> None:
    for one in DOCUMENTS.values():
        assert one != 1
        assert one != one.to_json()
        assert sum(one == other for other in DOCUMENTS.values()) == 1
    with pytest.raises(TypeError):
        LATTICE < LATTICE.replace(depth_er=7)  # noqa: B015
    assert APPARATUS == fl.Apparatus.from_toml("# a remark\n" + APPARATUS.to_toml())


# What may be given for a number or an array.


class Measurement:
    """Something that knows how to be a float."""

    def __init__(self, value: float) -> None:
        self.value = value

    def __float__(self) -> float:
        return float(self.value)


NUMBERS = {
    "int": int,
    "Fraction": Fraction,
    "Decimal": Decimal,
    "float64": np.float64,
    "float32": np.float32,
    "float16": np.float16,
    "longdouble": np.longdouble,
    "int16": np.int16,
    "uint64": np.uint64,
    "0-d array": np.array,
    "with __float__": Measurement,
}


@pytest.mark.parametrize("form", NUMBERS.values(), ids=NUMBERS)
def test_any_form_of_a_number_is_a_number(form: Callable[[int], object]) -> None:
    one, zero = form(1), form(0)
    lattice = fl.Lattice(
        wavelength_nm=form(1064), depth_er=form(6), angle_deg=form(120), axis=(zero, one, zero)
    )
    plain = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0, angle_deg=120.0, axis=(0.0, 1.0, 0.0))
    assert lattice == plain
    pair = fl.RamanPair(wavelength_nm=form(769), angle_deg=form(31), tilt_deg=one)
    assert pair == fl.RamanPair(wavelength_nm=769.0, angle_deg=31.0, tilt_deg=1.0)
    settings = {"sites": form(60), "legs": form(4), "phase_budget_rad": one}
    check = fl.check_flux(plain, pair, one, closed=True, **settings)
    assert (check.sites, check.legs, check.phase_budget_rad, float(check.target)) == (60, 4, 1, 1)
    assert plain.tunnelling_er(reach=one, band=one) == plain.tunnelling_er(reach=1, band=1)
    assert plain.trap_curvature_hz(ATOM, trap_hz=form(24)) == plain.trap_curvature_hz(
        ATOM, trap_hz=24.0
    )
    found = fl.raman_wavelengths("3/8", plain, range_nm=(form(766), form(775)), angle_deg=form(90))
    assert found == fl.raman_wavelengths("3/8", plain, range_nm=[766.0, 775.0], angle_deg=90.0)
    assert ATOM.recoil_hz(form(1064)) == ATOM.recoil_hz(1064.0)
    assert isinstance(ATOM.recoil_hz(form(1064)), float)
    assert fl.flux(spacing_nm=form(532), wavelength_nm=form(1064)) == 1.0


@pytest.mark.parametrize(
    "flux", ["3/8", " 6/16 ", (3, 8), (3.0, np.int8(8)), Fraction(3, 8), Fraction(6, 16)]
)
def test_a_fraction_stays_a_fraction(flux: object) -> None:
    target = fl.check_flux(LATTICE, RAMAN, flux, sites=60).target
    assert (type(target), target) == (Fraction, Fraction(3, 8))


@pytest.mark.parametrize("flux", ["0.375", 0.375, np.float32(0.375), Decimal("0.375")])
def test_a_number_stays_a_number(flux: object) -> None:
    target = fl.check_flux(LATTICE, RAMAN, flux, sites=60).target
    assert (type(target), target) == (float, 0.375)


WAVES = np.linspace(500.0, 623.0, 24)
ARRAYS = {
    "list": list,
    "nested": lambda a: a.reshape(2, 3, 4).tolist(),
    "strided": lambda a: np.repeat(a, 3)[::3],
    "backwards": lambda a: a[::-1].copy()[::-1],
    "Fortran order": lambda a: np.asfortranarray(a.reshape(4, 6)),
    "transposed": lambda a: np.ascontiguousarray(a.reshape(4, 6).T).T,
    "broadcast": lambda a: np.broadcast_to(a, (2, 24)),
    "big-endian": lambda a: a.astype(">f8"),
    "fractions": lambda a: np.array([Fraction(x) for x in a]),
    "empty": lambda a: a[:0],
}


@pytest.mark.parametrize("form", ARRAYS.values(), ids=ARRAYS)
def test_arrays_of_any_layout(form: Callable[[np.ndarray], object]) -> None:
    given_array = form(WAVES)
    if isinstance(given_array, np.ndarray):
        given_array.flags.writeable = False
    before = copy.deepcopy(given_array)
    plain = np.ascontiguousarray(given_array, dtype=np.float64)
    for function in (
        ATOM.recoil_hz,
        ATOM.recoil_m_per_s,
        fl.fold,
        lambda x: fl.flux(spacing_nm=532, wavelength_nm=x),
        LATTICE.replace(angle_deg=180).kick_overlap,
    ):
        found = function(given_array)
        assert found.shape == plain.shape
        one_by_one = [function(x) for x in plain.ravel().tolist()]
        assert found.ravel().tolist() == one_by_one
        assert_closed(found)
    np.testing.assert_array_equal(np.asarray(given_array), np.asarray(before))


@pytest.mark.parametrize("dtype", [np.float32, np.float16, np.int64, np.int8, np.uint16, object])
def test_arrays_of_any_kind(dtype: type) -> None:
    depths, momenta = np.array([3, 7, 10], dtype=dtype), np.array([0, 1], dtype=dtype)
    found = fl.band_energies_er(depths[::2], momenta[::-1], count=np.int8(2))
    expected = fl.band_energies_er([3.0, 10.0], [1.0, 0.0], count=2)
    assert found.tobytes() == expected.tobytes()
    assert depths.tolist() == [3, 7, 10]


def assert_closed(array: np.ndarray) -> None:
    assert array.dtype == np.float64
    assert array.flags.c_contiguous
    assert not array.flags.writeable
    with pytest.raises(ValueError, match="read-only"):
        array[...] = 0.0


def test_results_hold_closed_arrays() -> None:
    bands, wannier = RESULTS["bands"], RESULTS["wannier"]
    for array in (bands.quasimomenta, bands.energies_er, wannier.x_nm, wannier.amplitude):
        assert_closed(array)
    assert bands.energies_er.shape == (3, 7)
    assert bands.dims == ("band", "quasimomentum")
    assert_closed(fl.band_energies_er(6.0, 0.0))
    assert fl.band_energies_er(6.0, 0.0).shape == (1, 1, 4)
