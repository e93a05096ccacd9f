"""What cannot be is refused in words: impossible geometry, unknown names, broken files."""

import math
import subprocess
import sys
from collections.abc import Callable
from fractions import Fraction
from pathlib import Path

import pytest

import fluxloom as fl

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
SHALLOW = LATTICE.replace(depth_er=1e-4)
RAMAN = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
ATOM = fl.Atom("40K")
BAY = Path(__file__).parents[1] / "notebooks-examples" / "tern_bay.toml"
APPARATUS = fl.Apparatus.load(BAY)


def check(target: object = "3/8", **options: object) -> fl.FluxCheck:
    return fl.check_flux(LATTICE, RAMAN, target, **{"sites": 60, **options})


def told(kind: type[fl.FluxloomError], call: Callable[[], object]) -> fl.FluxloomError:
    with pytest.raises(kind) as caught:
        call()
    return caught.value


# Fluxes.


@pytest.mark.parametrize(
    ("flux", "code", "message"),
    [
        ("three", "flux.not_a_fraction", 'flux "three" is not a fraction: write p/q'),
        ("3/8/2", "flux.not_a_fraction", 'flux "3/8/2" is not a fraction: write p/q'),
        ("", "flux.not_a_fraction", 'flux "" is not a fraction: write p/q'),
        ("3/8.5", "flux.not_a_fraction", 'flux "3/8.5" is not a fraction: write p/q'),
        ("\u0663/\u0668", "flux.not_a_fraction", 'flux "\u0663/\u0668" is not a fraction'),
        ("3/0", "flux.zero_denominator", 'flux "3/0" has a denominator of zero: write p/q'),
        ((3, 0), "flux.zero_denominator", 'flux "3/0" has a denominator of zero: write p/q'),
        ((3.5, 8), "count.not_whole", "numerator = 3.5 is not a whole number; give the flux"),
        ((3, 8.5), "count.not_whole", "denominator = 8.5 is not a whole number; write the flux"),
        ("1/1000001", "flux.denominator_out_of_range", "denominator = 1000001 is outside 1 <="),
        ((1, 1000001), "flux.denominator_out_of_range", "denominator = 1000001 is outside 1 <="),
        ((3, -8), "flux.denominator_out_of_range", "denominator = -8 is outside 1 <="),
        (Fraction(1, 10**7), "flux.denominator_out_of_range", "denominator = 1e7 is outside 1 <="),
        ((math.nan, 8), "flux.out_of_range", "numerator = NaN is outside"),
        ((3, math.inf), "flux.denominator_out_of_range", "denominator = inf is outside 1 <="),
        (math.nan, "flux.out_of_range", "flux = NaN is outside -1e9 <= flux <= 1e9, it is not a"),
        (math.inf, "flux.out_of_range", "flux = inf is outside -1e9 <= flux <= 1e9, it is not a"),
        ("nan", "flux.out_of_range", "flux = NaN is outside -1e9 <= flux <= 1e9"),
        (-1e300, "flux.out_of_range", "flux = -1e300 is outside -1e9 <= flux <= 1e9; give the"),
        (Fraction(10**10), "flux.out_of_range", "flux = 1e10 is outside -1e9 <= flux <= 1e9"),
    ],
)
def test_fluxes_that_are_none(flux: object, code: str, message: str) -> None:
    for call in (
        lambda: check(flux),
        lambda: APPARATUS.check(flux),
        lambda: fl.raman_wavelengths(flux, LATTICE, range_nm=(766, 775)),
        lambda: fl.raman_angles(flux, LATTICE, wavelength_nm=769),
    ):
        error = told(fl.InputError, call)
        assert str(error).startswith(message)
        assert error.code == code
        assert error.details["field"] in message


@pytest.mark.parametrize("flux", [None, True, b"3/8", [3, 8], {}, 1j, (3,), (3, 8, 1), (True, 8)])
def test_fluxes_of_the_wrong_type(flux: object) -> None:
    with pytest.raises(TypeError, match=r"^target must be a number"):
        check(flux)
    with pytest.raises(TypeError, match=r"^flux must be a number"):
        APPARATUS.check(flux)


@pytest.mark.parametrize("flux", [0, "0", (0, 5), -0.375, "-3/8", 7.5, Fraction(-9, 8)])
def test_fluxes_beyond_one_and_below_zero_are_fluxes(flux: object) -> None:
    expected = Fraction(*flux) if isinstance(flux, tuple) else Fraction(flux)
    assert check(flux).target == expected


# Geometry.


def test_an_angle_of_zero_makes_no_lattice_but_a_raman_pair() -> None:
    error = told(fl.InputError, lambda: LATTICE.replace(angle_deg=0))
    assert str(error) == (
        "angle_deg = 0 is outside 0 < angle_deg <= 180; give the full angle between the two "
        "lattice beams; 180 is a retro-reflected beam"
    )
    assert error.code == "lattice.angle_out_of_range"
    pair = fl.RamanPair(wavelength_nm=769, angle_deg=0)
    assert pair.flux(LATTICE) == 0.0
    found = fl.check_flux(LATTICE, pair, "3/8", sites=60)
    assert (found.flux, found.exact_wavelength_nm, found.kick_overlap) == (0.0, None, 1.0)
    assert found.exact_angle_deg is not None


@pytest.mark.parametrize(
    ("wavelength_nm", "words"),
    [
        (1064e-9, "it looks like metres: in nanometres it is 1064;"),
        (0.769, "it looks like micrometres: in nanometres it is 769;"),
        (20_001 * 5, "it looks like angstroms: in nanometres it is 10000.5;"),
    ],
)
def test_wavelengths_in_another_unit(wavelength_nm: float, words: str) -> None:
    for call in (
        lambda: LATTICE.replace(wavelength_nm=wavelength_nm),
        lambda: fl.RamanPair(wavelength_nm=wavelength_nm),
        lambda: ATOM.recoil_hz(wavelength_nm),
    ):
        error = told(fl.InputError, call)
        assert words in str(error)
        assert str(error).endswith("give the vacuum wavelength in nanometres")
        assert error.details["value"] == wavelength_nm


@pytest.mark.parametrize("axis", [(0, 0, 0), (0.0, -0.0, 0.0), (math.nan, 0, 1), (math.inf, 0, 0)])
def test_vectors_without_a_direction(axis: tuple[float, ...]) -> None:
    for field, call in [
        ("axis", lambda: LATTICE.replace(axis=axis)),
        ("absorb", lambda: fl.RamanPair.from_directions(absorb=axis, absorb_wavelength_nm=769)),
        (
            "emit",
            lambda: fl.RamanPair.from_directions(
                absorb=(1, 0, 0), absorb_wavelength_nm=769, emit=axis
            ),
        ),
    ]:
        error = told(fl.InputError, call)
        assert str(error).startswith(f"{field} = [")
        assert str(error).endswith(
            "has no direction: give three finite numbers that are not all zero"
        )
        assert (error.code, error.details["field"]) == ("geometry.no_direction", field)


@pytest.mark.parametrize("axis", [(1, 0), (1, 0, 0, 0), "xyz", 1.0, (1, "0", 0), (True, 0, 0), {}])
def test_vectors_that_are_none(axis: object) -> None:
    with pytest.raises(TypeError, match=r"^axis must be (three numbers|a number)"):
        LATTICE.replace(axis=axis)


# Questions that mean nothing.


@pytest.mark.parametrize(
    ("call", "code", "message"),
    [
        (lambda: check(closed=True), "check.closed_needs_legs", "closed = true with legs = none: "),
        (
            lambda: check(closed=True, legs=1),
            "check.closed_needs_legs",
            "closed = true with legs = 1: a tube needs at least 2 legs",
        ),
        (
            lambda: fl.raman_wavelengths("3/8", LATTICE, range_nm=(775, 766)),
            "range.empty",
            "range_nm = (775, 766) is empty: the first number must be smaller than the second",
        ),
        (
            lambda: fl.raman_angles("3/8", LATTICE, wavelength_nm=769, range_deg=(90, 90)),
            "range.empty",
            "range_deg = (90, 90) is empty: ",
        ),
        (
            lambda: fl.raman_wavelengths(0, LATTICE, range_nm=(766, 775), angle_deg=0),
            "flux.nothing_to_solve",
            "at angle_deg = 0 and tilt_deg = 0 the flux is 0 at every wavelength",
        ),
        (
            lambda: LATTICE.kick_overlap(0.75, reach=1, to_band=1),
            "lattice.reach_between_bands",
            "reach = 1 with band = 0 and to_band = 1: between different bands only reach = 0",
        ),
        (
            lambda: LATTICE.bands(count=2).width_er(2),
            "lattice.band_out_of_range",
            "band = 2 is outside 0 <= band <= 1; bands are counted from 0, the lowest",
        ),
        (
            lambda: LATTICE.bands(count=2).gap_er(2),
            "lattice.band_out_of_range",
            "lower = 2 is outside 0 <= lower <= 1",
        ),
        (
            lambda: LATTICE.tunnelling_er(band=32),
            "lattice.band_out_of_range",
            "band = 32 is outside 0 <= band <= 31",
        ),
        (lambda: RAMAN.beams, "raman.no_beams", "this Raman pair was given by its geometry"),
        (
            lambda: fl.RamanPair.from_directions(
                absorb=(1, 0, 0), absorb_wavelength_nm=769, emit_wavelength_nm=770
            ),
            "raman.no_emit_direction",
            "emit_wavelength_nm = 770 is given without emit: give the direction",
        ),
        (
            lambda: fl.raman_wavelengths(
                "1/3", LATTICE.replace(angle_deg=0.01), range_nm=(100, 999)
            ),
            "flux.too_many_solutions",
            "range_nm = (100, 999) holds about ",
        ),
    ],
)
def test_questions_that_mean_nothing(call: Callable[[], object], code: str, message: str) -> None:
    error = told(fl.InputError, call)
    assert str(error).startswith(message)
    assert error.code == code


def test_lattices_next_to_free_motion() -> None:
    for call in (
        lambda: SHALLOW.kick_overlap(0.75),
        lambda: SHALLOW.wannier(),
        lambda: SHALLOW.onsite_integral(),
        lambda: fl.check_flux(SHALLOW, RAMAN, "3/8", sites=60),
    ):
        error = told(fl.NumericalError, call)
        assert str(error).startswith("band 0 at depth_er = 0.0001 is too close to free motion: ")
        assert str(error).endswith("deepen the lattice or take a lower band")
        assert error.code == "lattice.not_localised"
        assert error.details == {"band": 0.0, "depth_er": 1e-4}
        assert isinstance(error, ArithmeticError)
    # The bands themselves, and what follows from them alone, are no trouble.
    assert SHALLOW.effective_mass() == pytest.approx(1.0, abs=1e-6)
    assert SHALLOW.tunnelling_er() == pytest.approx(2 / math.pi**2, abs=1e-4)
    assert SHALLOW.bands().width_er(0) == pytest.approx(1.0, abs=1e-3)


@pytest.mark.parametrize(
    ("name", "meant"), [("K40", "40K"), ("rb-87", "87Rb"), ("potassium 40", "40K"), ("Xx", None)]
)
def test_unknown_isotopes(name: str, meant: str | None) -> None:
    error = told(fl.InputError, lambda: fl.Atom(name))
    guess = f' (did you mean "{meant}"?)' if meant else ""
    known = ", ".join(fl.Atom.available())
    assert str(error) == f'atom "{name}" is not in the table{guess}: known are {known}'
    assert error.code == "atom.unknown"
    assert error.details == {"value": name} | ({"did_you_mean": meant} if meant else {})


def test_own_data_that_cannot_be() -> None:
    for numbers, source, code, words in [
        ({"D1.dipole": 4.1}, "x", "atom.unknown_data", 'did you mean "D1.dipole_au"?'),
        ({"D1.dipole_au": math.nan}, "x", "atom.bad_data", "D1.dipole_au = NaN cannot be used"),
        ({"mass_u": -1}, "x", "atom.bad_data", "mass_u = -1 cannot be used: give a number from"),
        ({"nuclear_spin": 4}, "x", "atom.bad_data", "it defines the isotope"),
        ({"D1.wavelength_nm": 769e-9}, "x", "light.wavelength_out_of_range", "looks like metres"),
        ({"mass_u": 40.0}, " ", "atom.no_source", "say where they are from"),
    ]:
        error = told(fl.InputError, lambda n=numbers, s=source: ATOM.with_data(n, source=s))
        assert words in str(error)
        assert error.code == code
    with pytest.raises(TypeError, match="mass_u must be a number, not str"):
        ATOM.with_data({"mass_u": "40"}, source="x")


def test_the_wrong_objects_are_named() -> None:
    for call, argument, wanted in [
        (lambda: fl.check_flux(RAMAN, RAMAN, "3/8", sites=60), "lattice", "Lattice"),
        (lambda: fl.check_flux(LATTICE, LATTICE, "3/8", sites=60), "raman", "RamanPair"),
        (lambda: LATTICE.recoil_hz("40K"), "atom", "Atom"),
        (lambda: RAMAN.flux(1064.0), "lattice", "Lattice"),
    ]:
        with pytest.raises(TypeError, match=wanted) as caught:
            call()
        notes = " ".join(getattr(caught.value, "__notes__", []))
        assert argument in f"{caught.value} {notes}"


@pytest.mark.parametrize("place", [10**3, -(10**3), 2**63, -(10**400)])
def test_rows_that_are_not_there(place: int) -> None:
    with pytest.raises(IndexError):
        ATOM.sources()[place]


def test_more_memory_than_there_is_does_not_end_python() -> None:
    # In a process of its own, since what must not happen is its sudden end.
    program = """
import numpy as np, fluxloom as fl
fl.set_memory_limit_bytes(1e15)
try:
    fl.band_energies_er(np.ones(10**6), np.zeros(10**6), count=32)
except (fl.InputError, MemoryError):
    print("refused")
"""
    done = subprocess.run(
        [sys.executable, "-c", program], capture_output=True, text=True, check=False, timeout=120
    )
    assert (done.returncode, done.stdout) == (0, "refused\n"), done.stderr


# Files.


def test_files_that_are_not_there(tmp_path: Path) -> None:
    for kind in (fl.Apparatus, fl.Lattice, fl.FluxCheck):
        missing = tmp_path / "no such file.toml"
        with pytest.raises(FileNotFoundError) as caught:
            kind.load(missing)
        assert caught.value.filename == str(missing)
        assert caught.value.strerror == "No such file or directory"
        with pytest.raises(IsADirectoryError) as caught:
            kind.load(tmp_path)
        assert caught.value.filename == str(tmp_path)
        with pytest.raises((OSError, ValueError), match=r"(?i)nul"):
            kind.load("nul\0byte")


SIX_FAULTS = [
    ("name = ", "nmae = ", "file.unknown_key", "nmae", "name"),
    ('atom = "40K"', 'atom = "K40"', "atom.unknown", "cloud.atom", "40K"),
    (
        "wavelength_nm = 1064.0",
        "wavelength_nm = 1064e-9",
        "light.wavelength_out_of_range",
        "lasers.lattice.wavelength_nm",
        None,
    ),
    ("power_mw = 0.44 ", "power_mw = 44 ", "file.above_maximum", "beams.raman_a.power_mw", None),
    (
        'beams = ["lattice"]',
        'beams = ["latice"]',
        "file.unknown_name",
        "lattice.beams",
        "lattice",
    ),
    ("mains_locked = true", "mains_locked = 1", "file.wrong_type", "field.mains_locked", None),
]


def test_all_faults_of_a_file_come_at_once(tmp_path: Path) -> None:
    text = BAY.read_text(encoding="utf-8")
    for old, new, *_ in SIX_FAULTS:
        assert text.count(old) == 1
        text = text.replace(old, new)
    path = tmp_path / "bay.toml"
    path.write_text(text, encoding="utf-8")
    lines = text.splitlines()
    for call, file in [
        (lambda: fl.Apparatus.load(path), "bay.toml"),
        (lambda: fl.Apparatus.from_toml(text), None),
    ]:
        error = told(fl.InputError, call)
        assert error.code == "file.unknown_key"
        assert str(error).startswith("6 faults:\n")
        assert len(error.faults) == 6
        for fault, (_, new, code, path_in_file, meant) in zip(
            error.faults, SIX_FAULTS, strict=True
        ):
            assert (fault.code, fault.path, fault.did_you_mean) == (code, path_in_file, meant)
            assert new in lines[fault.line - 1]
            assert fault.file == file
            assert fault.message in str(error)
            assert dict(fault) == {key: getattr(fault, key) for key in fault.keys()}


def test_settings_that_are_not_there() -> None:
    error = told(fl.InputError, lambda: APPARATUS["lasers.raman.wavelength"])
    assert error.code == "apparatus.unknown_path"
    assert error.faults[0].did_you_mean == "lasers.raman.wavelength_nm"
    with pytest.raises(fl.InputError, match=r"field\.noise_rms_gauss = NaN is outside"):
        APPARATUS.replace({"field.noise_rms_gauss": math.nan})
    error = told(fl.InputError, lambda: APPARATUS.replace({"cloud.atom": "40L", "lattice.x": 1}))
    assert {fault.code for fault in error.faults} == {"atom.unknown", "apparatus.unknown_path"}
    endless: dict[str, object] = {}
    endless["cloud"] = endless
    assert told(fl.InputError, lambda: fl.Apparatus.from_dict(endless)).code == "file.too_deep"
