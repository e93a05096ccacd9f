"""Whatever is thrown at a public function, it answers or raises an ordinary, meaningful error."""

import warnings
from collections.abc import Callable, Iterator
from datetime import date
from decimal import Decimal
from fractions import Fraction
from pathlib import Path
from types import ModuleType

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import fluxloom as fl

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
RAMAN = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
ATOM = fl.Atom("40K")
BANDS = LATTICE.bands(points=3)
BAY = fl.Apparatus.load(Path(__file__).parents[1] / "notebooks-examples" / "tern_bay.toml")
BEAM = fl.Beam(
    wavelength_nm=1064, power_mw=100, waist_um=(50, 60), direction=(1, 0, 0), polarisation=(0, 0, 1)
)
FLUX = {"lattice": LATTICE, "raman": RAMAN, "target": "3/8", "sites": 60}
KICK = {"kick": 0.7, "reach": 0, "band": 0, "to_band": 0}

# Public calls with arguments that work, by name; each is spoilt in turn.
LIT = fl.RamanPair.from_beams(
    absorb=BEAM.replace(wavelength_nm=769.0),
    emit=BEAM.replace(
        wavelength_nm=769.0,
        direction=(0.0, 1.0, 0.0),
        polarisation=(1.0, 0.0, 0.0),
        waist_axis=(0.0, 0.0, 1.0),
    ),
)
with warnings.catch_warnings():
    # This runs while the file is read, before pytest has its filters.
    warnings.simplefilter("ignore", fl.FluxloomWarning)
    LEVELS = ATOM.ground_levels(30.0)
STATES: dict[str, object] = {"atom": ATOM, "a": "9/2,-9/2", "b": (4.5, -3.5)}
FIELD: dict[str, object] = {"field_gauss": 30.0, "field_direction": (0.0, 0.0, 1.0)}
LATTICE_LIGHT: dict[str, object] = {
    "atom": ATOM,
    "beams": [BEAM, BEAM.reflected(0.9)],
    "state": "9/2,-9/2",
}
CALLS: list[tuple[Callable[..., object], dict[str, object]]] = [
    (
        fl.Lattice,
        {"wavelength_nm": 1064.0, "depth_er": 6.0, "angle_deg": 180.0, "axis": (1.0, 0.0, 0.0)},
    ),
    (fl.Lattice.from_json, {"text": LATTICE.to_json()}),
    (fl.Lattice.load, {"path": "no such file"}),
    (LATTICE.replace, {"depth_er": 6.0}),
    (LATTICE.recoil_hz, {"atom": ATOM}),
    (LATTICE.depth_hz, {"atom": ATOM}),
    (LATTICE.tunnelling_er, {"reach": 1, "band": 0}),
    (LATTICE.tunnelling_hz, {"atom": ATOM, "reach": 1, "band": 0}),
    (LATTICE.bands, {"count": 2, "points": 3}),
    (LATTICE.effective_mass, {"band": 0}),
    (LATTICE.onsite_integral, {"band": 0}),
    (LATTICE.wannier, {"band": 0, "points_per_site": 2, "sites": 2}),
    (LATTICE.kick_overlap, KICK),
    (LATTICE.trap_curvature_hz, {"atom": ATOM, "trap_hz": 24.0}),
    (LATTICE.tilt_hz, {"atom": ATOM, "acceleration_m_per_s2": 9.8}),
    (BANDS.width_er, {"band": 0}),
    (BANDS.gap_er, {"lower": 0, "quasimomentum": 0.5}),
    (fl.Bands.from_json, {"text": BANDS.to_json()}),
    (fl.RamanPair, {"wavelength_nm": 769.0, "angle_deg": 180.0, "tilt_deg": 0.0}),
    (
        fl.RamanPair.from_directions,
        {
            "absorb": (1, 0, 0),
            "absorb_wavelength_nm": 769.0,
            "emit": (-1, 0, 0),
            "emit_wavelength_nm": 769.0,
        },
    ),
    (RAMAN.flux, {"lattice": LATTICE}),
    (RAMAN.kick, {"lattice": LATTICE}),
    (RAMAN.replace, {"angle_deg": 180.0}),
    (fl.Atom, {"name": "40K"}),
    (fl.Atom.from_json, {"text": ATOM.to_json()}),
    (ATOM.recoil_hz, {"wavelength_nm": 769.0}),
    (ATOM.recoil_m_per_s, {"wavelength_nm": 769.0}),
    (ATOM.with_data, {"numbers": {"mass_u": 40.0}, "source": "ours"}),
    (fl.check_flux, {**FLUX, "legs": 3, "closed": True, "phase_budget_rad": 0.5}),
    (fl.FluxCheck.from_json, {"text": fl.check_flux(**FLUX).to_json()}),
    (fl.fold, {"x": 1.75}),
    (
        fl.flux,
        {"spacing_nm": 532.0, "wavelength_nm": 769.0, "angle_deg": 180.0, "tilt_deg": 0.0},
    ),
    (fl.band_energies_er, {"depths_er": 6.0, "quasimomenta": 0.0, "count": 2}),
    (
        fl.raman_wavelengths,
        {
            "target": "3/8",
            "lattice": LATTICE,
            "range_nm": (766.0, 775.0),
            "angle_deg": 180.0,
            "tilt_deg": 0.0,
        },
    ),
    (
        fl.raman_angles,
        {
            "target": "3/8",
            "lattice": LATTICE,
            "wavelength_nm": 769.0,
            "tilt_deg": 0.0,
            "range_deg": (0.0, 180.0),
        },
    ),
    (fl.Apparatus.load, {"path": "no such file"}),
    (fl.Apparatus.from_toml, {"text": BAY.to_toml()}),
    (fl.Apparatus.from_json, {"text": BAY.to_json()}),
    (fl.Apparatus.from_dict, {"settings": BAY.to_dict()}),
    (BAY.replace, {"changes": {"field.magnitude_gauss": 30.0}}),
    (BAY.measured, {"path": "lattice.depth_er"}),
    (BAY.__getitem__, {"": "lattice.depth_er"}),
    (
        BAY.check,
        {"flux": "3/8", "sites": 60, "legs": 3, "closed": False, "phase_budget_rad": 0.5},
    ),
    (
        fl.Beam,
        {
            "wavelength_nm": 1064.0,
            "power_mw": 100.0,
            "waist_um": (50.0, 60.0),
            "direction": (1.0, 0.0, 0.0),
            "polarisation": (0.0, 1.0, 1j),
            "waist_axis": (0.0, 0.0, 1.0),
            "focus_um": (0.0, 0.0, 0.0),
        },
    ),
    (fl.Beam.from_json, {"text": BEAM.to_json()}),
    (fl.Beam.load, {"path": "no such file"}),
    (BEAM.replace, {"polarisation": (0.0, 1.0, 1j)}),
    (BEAM.intensity_w_per_m2, {"at_um": (1.0, 0.0, 0.0)}),
    (BEAM.reflected, {"power_fraction": 0.5}),
    (fl.polarisation.linear, {"direction": (1, 0, 0), "along": (0, 0, 1)}),
    (fl.polarisation.circular, {"direction": (1, 0, 0), "helicity": 1}),
    (
        fl.polarisation.elliptical,
        {"direction": (1, 0, 0), "along": (0, 0, 1), "ellipticity_deg": 10.0},
    ),
    (fl.RamanPair.from_beams, {"absorb": BEAM, "emit": BEAM}),
    (fl.RamanPair.from_json, {"text": LIT.to_json()}),
    (LIT.replace, {"absorb": BEAM}),
    (LIT.rabi_hz, {**STATES, **FIELD, "uncertainty": False}),
    (LIT.rabi_matrix_hz, {"atom": ATOM, **FIELD}),
    (LIT.coupling, {**STATES, **FIELD, "lattice": LATTICE, "uncertainty": False}),
    (LIT.stray_couplings, {**STATES, **FIELD, "reflection": 0.005}),
    (LIT.quality, {**STATES, **FIELD, "range_nm": (768.0, 769.0), "points": 3}),
    (LIT.on_resonance, {**STATES, **FIELD}),
    (fl.Ranks, {"scalar": 0j, "vector": 1j, "tensor": 0.0}),
    (fl.Coupling.from_json, {"text": "{}"}),
    (fl.Quality.from_json, {"text": "{}"}),
    (fl.StrayCoupling.from_json, {"text": "{}"}),
    (fl.Scattering.from_json, {"text": "{}"}),
    (fl.Polarisability.from_json, {"text": "{}"}),
    (fl.GroundLevels.from_json, {"text": "{}"}),
    (fl.Uncertain.from_json, {"text": "{}"}),
    (ATOM.ground_levels, {"field_gauss": 30.0}),
    (LEVELS.energy_hz, {"f": 4.5, "m": -4.5}),
    (LEVELS.moment_hz_per_gauss, {"f": 4.5, "m": -4.5}),
    (LEVELS.curvature_hz_per_gauss2, {"f": 4.5, "m": -4.5}),
    (LEVELS.vector, {"f": 4.5, "m": -4.5}),
    (LEVELS.splitting_hz, {"a": "9/2,-9/2", "b": (4.5, -3.5)}),
    (
        ATOM.insensitive_fields_gauss,
        {"a": "9/2,-9/2", "b": (4.5, -3.5), "range_gauss": (0.0, 100.0)},
    ),
    (ATOM.polarisability_au, {"wavelength_nm": 1064.0, "f": 4.5, "uncertainty": False}),
    (ATOM.static_polarisability_au, {"f": 4.5}),
    (ATOM.light_shift_hz, {"beams": BEAM, "f": 4.5, "m": 0.5, **FIELD, "uncertainty": False}),
    (ATOM.scattering_per_s, {"beams": [BEAM], "f": 4.5, "m": 0.5, **FIELD, "uncertainty": False}),
    (
        ATOM.differential_shift_hz,
        {"beams": BEAM, "a": "9/2,-9/2", "b": (4.5, -3.5), **FIELD},
    ),
    (
        ATOM.tune_out_nm,
        {"range_nm": (768.0, 769.5), "f": 4.5, "m": 0.5, "circularity": 0.1, "uncertainty": False},
    ),
    (ATOM.tune_outs_nm, {"range_nm": (768.0, 769.5), "f": 4.5, "m": 0.5, "circularity": 0.1}),
    (
        fl.radio_rabi_hz,
        {**STATES, **FIELD, "amplitude_gauss": 0.01, "direction": (1.0, 0.0, 0.0)},
    ),
    (fl.lattice_depth_er, {**LATTICE_LIGHT, **FIELD}),
    (fl.lattice_power_mw, {**LATTICE_LIGHT, **FIELD, "depth_er": 6.0}),
    (fl.lattice_scattering_per_s, {**LATTICE_LIGHT, **FIELD}),
    (fl.set_memory_limit_bytes, {"limit_bytes": 1e9}),
    (ATOM.sources().__getitem__, {"": 0}),
]
PLACES = [(call, arguments, name) for call, arguments in CALLS for name in arguments]


def is_hashable(value: object) -> bool:
    try:
        hash(value)
    except (TypeError, ValueError):
        return False
    return True


def as_object_array(values: list[object]) -> np.ndarray:
    array = np.empty(len(values), dtype=object)
    array[:] = values
    return array


numbers = st.one_of(
    st.integers(),
    st.integers(-(10**400), 10**400),
    st.floats(),
    st.sampled_from([0.0, -0.0, 5e-324, 1e300, 1e-300, 2**53 + 1, 2**63, 2**64, -(2**63)]),
    st.fractions(),
    st.decimals(),
    st.complex_numbers(),
    st.sampled_from([np.float16(3), np.int64(-1), np.complex64(1j), np.datetime64("NaT")]),
)
words = st.one_of(
    st.text(),
    # Lone surrogates, too: they can be in file names.
    st.text(st.characters(categories=["Cs", "Cc"]), min_size=1, max_size=3),
    st.sampled_from(["3/8", "nan", "-1/0", "1e999", "40K", "lattice.depth_er", "\0", "/", "."]),
    st.binary(),
)
keys = st.one_of(
    st.text(max_size=5), st.sampled_from(["mass_u", "lattice.depth_er", "field", "beams.x"])
)
single = st.one_of(
    numbers,
    words,
    st.none(),
    st.booleans(),
    st.sampled_from([object(), len, int, date(2026, 11, 30), LATTICE, RAMAN, ATOM, BANDS, BAY]),
)
anything = st.recursive(
    single,
    lambda inside: st.one_of(
        st.lists(inside, max_size=4),
        st.tuples(inside, inside),
        st.tuples(inside, inside, inside),
        st.dictionaries(st.one_of(keys, single.filter(is_hashable)), inside, max_size=3),
        st.lists(st.floats(), max_size=4).map(np.array),
        st.lists(inside, max_size=3).map(as_object_array),
    ),
    max_leaves=6,
)


@pytest.fixture(autouse=True, scope="module")
def default_memory_limit() -> Iterator[None]:
    yield
    fl.set_memory_limit_bytes(None)


def answers_or_refuses(call: Callable[..., object], arguments: dict[str, object]) -> None:
    positional = [arguments.pop("")] if "" in arguments else []
    try:
        call(*positional, **arguments)
    except (fl.FluxloomError, TypeError, ValueError, OSError, IndexError) as error:
        assert str(error)
        assert "internal computation failed" not in str(error)
        if isinstance(error, fl.FluxloomError):
            assert error.code
            assert error.faults
    except BaseException as error:
        # A panic would come here: it passes `except Exception`, and nobody could stop it.
        pytest.fail(f"{type(error).__name__} from {call} with {arguments}: {error}")


@settings(deadline=None, max_examples=1500)
@given(st.sampled_from(PLACES), anything)
def test_anything_in_one_place(
    place: tuple[Callable[..., object], dict[str, object], str], value: object
) -> None:
    call, arguments, name = place
    answers_or_refuses(call, {**arguments, name: value})


@settings(deadline=None, max_examples=500)
@given(st.sampled_from(PLACES), st.one_of(numbers, st.lists(numbers, max_size=3)))
def test_any_number_in_one_place(
    place: tuple[Callable[..., object], dict[str, object], str], value: object
) -> None:
    call, arguments, name = place
    answers_or_refuses(call, {**arguments, name: value})


@settings(deadline=None, max_examples=500)
@given(st.data(), st.sampled_from(CALLS))
def test_anything_everywhere(
    data: st.DataObject, call: tuple[Callable[..., object], dict[str, object]]
) -> None:
    function, arguments = call
    answers_or_refuses(function, {name: data.draw(anything, name) for name in arguments})


@settings(deadline=None)
@given(st.sampled_from(CALLS), st.text(max_size=8).filter(lambda name: name not in {"", "self"}))
def test_arguments_that_do_not_exist(
    call: tuple[Callable[..., object], dict[str, object]], name: str
) -> None:
    function, arguments = call
    if name not in arguments and "" not in arguments:
        with pytest.raises(TypeError):
            function(**arguments, **{name: 1.0})


def test_every_public_function_is_thrown_at() -> None:
    thrown = {getattr(call, "__qualname__", "") for call, _ in CALLS}
    thrown |= {call.__name__ for call, _ in CALLS}
    # The number of threads is nothing to try at random; its refusals are tested by name.
    left_out = {"set_threads", "show_versions"}
    functions = {
        name for name in fl.__all__ if not isinstance(getattr(fl, name), (type, str, ModuleType))
    }
    assert functions <= thrown | left_out


@pytest.mark.parametrize(
    "number", [Fraction(1, 3), Decimal("1e400"), Decimal("nan"), Fraction(10**400, 3)]
)
def test_exact_numbers_beyond_floats(number: object) -> None:
    answers_or_refuses(fl.Lattice, {"wavelength_nm": number, "depth_er": 6.0})
    answers_or_refuses(fl.check_flux, {**FLUX, "target": number})
    answers_or_refuses(fl.fold, {"x": number})
