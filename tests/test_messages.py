"""Every bad number gets one clear error: what was given, what is allowed, what to do."""

import math
import pickle
import warnings
from collections.abc import Iterator

import numpy as np
import pytest
from numeric_arguments import ARGUMENTS, ATOM, LATTICE, RAMAN, Argument, check, lattice, plain_flux

import fluxloom as fl
from fluxloom import _core

LIMITS = {code: rest for _, code, *rest in _core.limits()}

BAD_NUMBERS = [math.nan, math.inf, -math.inf, 1e300, -1e300, 0.0, -1.0]


def plain(value: float) -> str:
    """A number as messages write it."""
    if not math.isfinite(value):
        return "NaN" if math.isnan(value) else str(value)
    if value == 0.0 or 1e-4 <= abs(value) < 1e7:
        return str(int(value)) if value == int(value) else repr(value)
    return np.format_float_scientific(value, trim="-", exp_digits=1).replace("e+", "e")


@pytest.mark.parametrize("value", BAD_NUMBERS)
@pytest.mark.parametrize("argument", ARGUMENTS.values(), ids=ARGUMENTS)
def test_a_number_outside_its_range(argument: Argument, value: float) -> None:
    low, high, low_open, remedy = LIMITS[argument.code]
    field = argument.field
    if (low < value if low_open else low <= value) and value <= high:
        # Zero and minus one mean something here, if perhaps an empty range.
        try:
            argument.call(value)
        except fl.InputError as error:
            assert error.code == "range.empty"
        return
    with pytest.raises(fl.InputError) as caught:
        argument.call(value)
    error = caught.value
    given = f"{field} = {plain(value)} is outside "
    allowed = f"{plain(low)} {'<' if low_open else '<='} {field} <= {plain(high)}"
    finite = "" if math.isfinite(value) else ", it is not a finite number"
    assert str(error) == f"{given}{allowed}{finite}; {remedy}"
    assert error.code == argument.code
    found = error.details.pop("value")
    assert found == value or (math.isnan(found) and math.isnan(value))
    assert error.details == {"field": field, "low": low, "high": high}
    assert [(f.code, f.message, f.file, f.line) for f in error.faults] == [
        (error.code, str(error), None, None)
    ]


class Truth:
    """Something of the outside world that is no number."""

    def __bool__(self) -> bool:
        return True


WRONG_TYPES = {
    "True": True,
    "numpy True": np.True_,
    "text": "60",
    "numpy text": np.array("60"),
    "bytes": b"60",
    "None": None,
    "complex": 60j,
    "numpy complex": np.complex128(60 + 1j),
    "complex array": np.array([60j]),
    "dict": {"value": 60.0},
    "set": {60.0},
    "object": Truth(),
    "date": np.datetime64("2026-11-30"),
    "function": len,
    "list of texts": ["60"],
    "list of None": [None],
    "array of texts": np.array(["60"], dtype=object),
    "array of truth": np.array([True]),
    "ragged": [[60.0], [60.0, 60.0]],
}


@pytest.mark.parametrize("kind", WRONG_TYPES)
@pytest.mark.parametrize("argument", ARGUMENTS.values(), ids=ARGUMENTS)
def test_what_is_no_number_at_all(argument: Argument, kind: str) -> None:
    value = WRONG_TYPES[kind]
    if value is None and argument.optional:
        argument.call(value)
        return
    with warnings.catch_warnings():
        # In a laboratory warnings are not errors, and must not stand in for them.
        warnings.simplefilter("ignore")
        with pytest.raises(TypeError) as caught:
            argument.call(value)
    field = argument.field.split("[")[0]
    assert str(caught.value).startswith(f"{field} must be ")


def test_the_message_about_a_wrong_type_says_what_it_is() -> None:
    with pytest.raises(TypeError, match=r"^depth_er must be a number, not str$"):
        lattice(depth_er="6")
    with pytest.raises(TypeError, match=r"^sites must be a whole number, not bool$"):
        check(sites=True)
    with pytest.raises(TypeError, match=r"^kick must be a number or an array of numbers, not str$"):
        LATTICE.kick_overlap("6")
    with pytest.raises(TypeError, match=r"^spacing_nm must be a number or an array.*, not str$"):
        plain_flux(spacing_nm="532")
    with pytest.raises(TypeError, match=r"^range_nm must be two numbers \(low, high\), not int$"):
        fl.raman_wavelengths("3/8", LATTICE, range_nm=766)
    with pytest.raises(TypeError, match=r"^closed must be True or False, not str$"):
        check(closed="no")
    with pytest.raises(TypeError, match=r"^name must be a text, not int$"):
        fl.Atom(40)
    with pytest.raises(TypeError, match=r"^path must be a file name or a path, not int$"):
        fl.Lattice.load(3)


@pytest.mark.parametrize("value", [10**400, -(10**400)])
def test_whole_numbers_beyond_all_floats(value: int) -> None:
    sign = "-" if value < 0 else ""
    with pytest.raises(fl.InputError, match=rf"depth_er = {sign}inf is outside"):
        lattice(depth_er=value)
    with pytest.raises(fl.InputError, match=rf"sites = {sign}inf is outside"):
        check(sites=value)
    with pytest.raises(fl.InputError, match="outside"):
        fl.check_flux(LATTICE, RAMAN, value, sites=60)


# Counts.


@pytest.mark.parametrize("sites", [60.0, np.float32(60), np.int8(60), 2, 10**6])
def test_whole_numbers_of_any_type_are_counts(sites: object) -> None:
    assert check(sites=sites).sites == int(sites)


@pytest.mark.parametrize(
    ("name", "value", "code", "message"),
    [
        ("sites", 60.5, "count.not_whole", "sites = 60.5 is not a whole number; give the number"),
        (
            "sites",
            1e30,
            "check.sites_out_of_range",
            "sites = 1e30 is outside 2 <= sites <= 1000000",
        ),
        ("sites", 10**13, "check.sites_out_of_range", "sites = 1e13 is outside"),
        ("sites", 1, "check.sites_out_of_range", "sites = 1 is outside 2 <= sites"),
        (
            "legs",
            2.5,
            "count.not_whole",
            "legs = 2.5 is not a whole number; give the number of int",
        ),
        ("legs", 65, "check.legs_out_of_range", "legs = 65 is outside 1 <= legs <= 64"),
    ],
)
def test_counts(name: str, value: float, code: str, message: str) -> None:
    with pytest.raises(fl.InputError) as caught:
        check(**{name: value})
    assert str(caught.value).startswith(message)
    assert caught.value.code == code
    assert caught.value.details["field"] == name
    assert caught.value.details["value"] == value


# Memory.


@pytest.fixture
def default_memory_limit() -> Iterator[None]:
    yield
    fl.set_memory_limit_bytes(None)


def test_absurd_answers_are_refused_before_anything_is_allocated() -> None:
    with pytest.raises(fl.InputError, match="set_memory_limit_bytes") as caught:
        fl.band_energies_er(np.linspace(1.0, 2.0, 10**5), np.linspace(-1.0, 1.0, 10**5))
    error = caught.value
    assert error.code == "memory.over_limit"
    # 10^10 points, four bands, eight bytes.
    assert error.details["asked_bytes"] == 3.2e11
    assert "this needs 3.2e11 bytes and" in str(error)


@pytest.mark.usefixtures("default_memory_limit")
def test_the_memory_limit_can_be_set() -> None:
    fl.set_memory_limit_bytes(1000)
    with pytest.raises(fl.InputError) as caught:
        fl.band_energies_er(np.ones(10), np.zeros(10))
    assert caught.value.code == "memory.over_limit"
    assert caught.value.details == {"asked_bytes": 3200.0, "limit_bytes": 1000.0}
    for call in (
        lambda: LATTICE.bands(points=200),
        lambda: LATTICE.wannier(),
        lambda: LATTICE.kick_overlap(np.ones(1000)),
        lambda: fl.flux(spacing_nm=532, wavelength_nm=np.full(1000, 769.0)),
        lambda: fl.fold(np.ones(1000)),
        lambda: ATOM.recoil_hz(np.full(1000, 769.0)),
    ):
        with pytest.raises(fl.InputError, match=r"needs .* bytes and 1000 are allowed"):
            call()
    fl.set_memory_limit_bytes(None)
    assert fl.band_energies_er(np.ones(10), np.zeros(10)).shape == (10, 10, 4)
    for bad in (0, -1, 1e300, math.nan):
        with pytest.raises(fl.InputError, match=r"limit_bytes = .* is outside 1 <= limit_bytes"):
            fl.set_memory_limit_bytes(bad)
    for bad in (0, 1025, 2.5, math.inf):
        with pytest.raises(fl.InputError, match=r"^threads = "):
            fl.set_threads(bad)
    for bad in (True, "2", None):
        with pytest.raises(TypeError, match=r"^threads must be a whole number"):
            fl.set_threads(bad)


# Errors as objects.


def test_errors_keep_everything_when_pickled() -> None:
    with pytest.raises(fl.InputError) as caught:
        lattice(depth_er=-1)
    again = pickle.loads(pickle.dumps(caught.value))
    assert type(again) is fl.InputError
    assert (str(again), again.code, again.details, again.faults) == (
        str(caught.value),
        caught.value.code,
        caught.value.details,
        caught.value.faults,
    )
    assert isinstance(again, ValueError)
    assert isinstance(again, fl.FluxloomError)


def test_every_limit_is_met_by_a_test_or_belongs_to_the_file() -> None:
    of_files = {"field.magnitude_out_of_range", "time.out_of_range"}
    of_files |= {"polarisation.angle_out_of_range"}
    elsewhere = {"flux.denominator_out_of_range", "threads.out_of_range"}
    elsewhere |= {"memory.limit_out_of_range"}
    codes = {argument.code for argument in ARGUMENTS.values()}
    assert codes | of_files | elsewhere == set(LIMITS)


def test_the_first_bad_number_of_an_array_is_named_by_its_place() -> None:
    bad = [1.0, 2.0, math.nan]
    for call, field in [
        (lambda: fl.band_energies_er(bad, 0.0), "depths_er[2]"),
        (lambda: fl.band_energies_er(2.0, bad), "quasimomenta[2]"),
        (lambda: LATTICE.kick_overlap(bad), "kick[2]"),
        (lambda: fl.fold(bad), "x[2]"),
        (lambda: ATOM.recoil_hz([[769.0, 770.0], [1.0, 2.0]]), "wavelength_nm[1, 0]"),
        (lambda: plain_flux(wavelength_nm=[769.0, 1.0]), "wavelength_nm[1]"),
    ]:
        with pytest.raises(fl.InputError) as caught:
            call()
        assert str(caught.value).startswith(f"{field} = ")
        assert caught.value.details["field"] == field
