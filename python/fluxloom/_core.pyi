"""Types of the compiled part of Fluxloom.

What each name does is told by its docstring at run time, ``help(fluxloom.Lattice)``.
"""

from collections.abc import Iterable, Iterator, Mapping, Sequence
from datetime import date
from decimal import Decimal
from fractions import Fraction
from os import PathLike
from typing import (
    ClassVar,
    Final,
    Generic,
    Literal,
    SupportsComplex,
    SupportsFloat,
    SupportsIndex,
    TypeAlias,
    TypeVar,
    final,
    overload,
)

import numpy as np
from matplotlib.axes import Axes
from numpy.typing import ArrayLike, NDArray
from pandas import DataFrame
from xarray import DataArray

from fluxloom.results import CouplingError, State, Uncertain

__all__ = [
    "Apparatus",
    "Atom",
    "Bands",
    "Beam",
    "Caution",
    "Coupling",
    "DataSource",
    "FluxCheck",
    "GroundLevels",
    "Lattice",
    "LegReport",
    "LightReport",
    "LinkReport",
    "Measured",
    "NearFraction",
    "Polarisability",
    "Quality",
    "RamanPair",
    "Ranks",
    "Scattering",
    "Solution",
    "SourceTable",
    "StrayCoupling",
    "Wannier",
    "band_energies_er",
    "build_info",
    "check_flux",
    "circular_polarisation",
    "constants",
    "elliptical_polarisation",
    "flux_of_arrays",
    "fold",
    "lattice_depth_er",
    "lattice_power_mw",
    "lattice_scattering_per_s",
    "limits",
    "linear_polarisation",
    "radio_rabi_hz",
    "raman_angles",
    "raman_wavelengths",
    "set_memory_limit_bytes",
    "set_threads",
]

_T = TypeVar("_T")

# A number in any of Python's and numpy's forms; True and complex are refused.
_Real: TypeAlias = SupportsFloat | SupportsIndex
# What makes a single number of a function that takes arrays too.
_Single: TypeAlias = float | Fraction | Decimal
# As _Real; None stands for the default.
_Option: TypeAlias = _Real | None
_Flux: TypeAlias = str | tuple[int, int] | Fraction | float
_Triple: TypeAlias = tuple[float, float, float]
# A number that may be complex.
_Complex: TypeAlias = _Real | SupportsComplex
_Path: TypeAlias = str | PathLike[str]
# A hyperfine state, and one beam or several.
_State: TypeAlias = str | Iterable[_Real]
_Beams: TypeAlias = "Beam | RamanPair | Iterable[Beam]"
_Vector: TypeAlias = Iterable[_Real] | None
# A setting of an apparatus as it is read, and what may be given for one.
_Setting: TypeAlias = "bool | int | float | str | list[_Setting] | dict[str, _Setting]"
_Given: TypeAlias = (
    "str | _Real | date | NDArray[np.generic] | Sequence[_Given] | Mapping[str, _Given] | None"
)

# What the classes share; at run time each has these by itself.
class _Value:
    __hash__: ClassVar[None]  # type: ignore[assignment]
    def __eq__(self, value: object, /) -> bool: ...

class _Document(_Value, Generic[_T]):
    def to_json(self) -> str: ...
    @staticmethod
    def from_json(text: str) -> _T: ...
    def save(self, path: _Path) -> None: ...
    @staticmethod
    def load(path: _Path) -> _T: ...

@final
class Lattice(_Document["Lattice"]):
    """A one-dimensional optical lattice of two beams."""

    def __new__(
        cls,
        *,
        wavelength_nm: _Real,
        depth_er: _Real,
        angle_deg: _Option = 180.0,
        axis: Iterable[_Real] | None = (1, 0, 0),
    ) -> Lattice: ...
    wavelength_nm: Final[float]
    depth_er: Final[float]
    angle_deg: Final[float]
    axis: Final[_Triple]
    spacing_nm: Final[float]
    def replace(self, **changes: _Real | Iterable[_Real] | None) -> Lattice: ...
    def recoil_hz(self, atom: Atom) -> float: ...
    def depth_hz(self, atom: Atom) -> float: ...
    def tunnelling_er(self, *, reach: _Option = 1, band: _Option = 0) -> float:
        """Tunnelling over ``reach`` sites (1) in a band (0)."""

    def tunnelling_hz(self, atom: Atom, *, reach: _Option = 1, band: _Option = 0) -> float: ...
    def bands(self, *, count: _Option = 4, points: _Option = 101) -> Bands:
        """Compute the lowest ``count`` (4) bands at ``points`` (101) quasimomenta."""

    def effective_mass(self, *, band: _Option = 0) -> float: ...
    def onsite_integral(self, *, band: _Option = 0) -> float: ...
    def wannier(
        self, *, band: _Option = 0, points_per_site: _Option = 64, sites: _Option = 8
    ) -> Wannier:
        """Tabulate a Wannier function with 64 points per site over 8 sites."""

    @overload
    def kick_overlap(
        self, kick: _Single, *, reach: _Option = 0, band: _Option = 0, to_band: _Option = 0
    ) -> float: ...
    @overload
    def kick_overlap(
        self,
        kick: ArrayLike,
        *,
        reach: _Option = 0,
        band: _Option = 0,
        to_band: _Option = 0,
    ) -> float | NDArray[np.float64]:
        """O_d: what a kick in k_L leaves between Wannier functions."""

    def trap_curvature_hz(self, atom: Atom, *, trap_hz: _Real) -> float: ...
    def tilt_hz(self, atom: Atom, *, acceleration_m_per_s2: _Real) -> float: ...

@final
class Bands(_Document["Bands"]):
    """The lowest bands of a lattice over the zone."""

    lattice: Final[Lattice]
    quasimomenta: Final[NDArray[np.float64]]
    energies_er: Final[NDArray[np.float64]]
    dims: Final[tuple[str, str]]
    error_er: Final[float]
    def width_er(self, band: _Real) -> float: ...
    def gap_er(self, lower: _Option = 0, quasimomentum: _Option = None) -> float:
        """Gap above band ``lower`` (0): the smallest, or that at a quasimomentum."""

    def plot(self, ax: Axes | None = None) -> Axes: ...
    def to_xarray(self) -> DataArray: ...
    def _repr_html_(self) -> str: ...

@final
class Wannier(_Document["Wannier"]):
    """A Wannier function on a grid."""

    band: Final[int]
    x_nm: Final[NDArray[np.float64]]
    amplitude: Final[NDArray[np.float64]]
    def plot(self, ax: Axes | None = None) -> Axes: ...

@final
class RamanPair(_Document["RamanPair"]):
    """The light of one Raman link."""

    def __new__(
        cls, *, wavelength_nm: _Real, angle_deg: _Option = 180.0, tilt_deg: _Option = 0.0
    ) -> RamanPair: ...
    @staticmethod
    def from_directions(
        *,
        absorb: Iterable[_Real],
        absorb_wavelength_nm: _Real,
        emit: Iterable[_Real] | None = None,
        emit_wavelength_nm: _Option = None,
    ) -> RamanPair: ...
    @staticmethod
    def from_beams(*, absorb: Beam, emit: Beam) -> RamanPair: ...
    def with_beams(self, *, absorb: Beam, emit: Beam) -> RamanPair: ...
    wavelength_nm: Final[float | None]
    angle_deg: Final[float | None]
    tilt_deg: Final[float | None]
    absorb: Final[_Triple | Beam | None]
    absorb_wavelength_nm: Final[float | None]
    emit: Final[_Triple | Beam | None]
    emit_wavelength_nm: Final[float | None]
    roles_swapped: Final[bool]
    beams: Final[tuple[Beam, Beam]]
    def flux(self, lattice: Lattice) -> float: ...
    def kick(self, lattice: Lattice) -> float: ...
    def swapped(self) -> RamanPair: ...
    def replace(self, **changes: _Real | Iterable[_Real] | Beam | None) -> RamanPair: ...
    @overload
    def rabi_hz(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[False] | None = False,
    ) -> complex: ...
    @overload
    def rabi_hz(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[True],
    ) -> Uncertain[complex, float]:
        """Complex Rabi frequency of b <- a, over 2 pi."""

    def rabi_matrix_hz(
        self, atom: Atom, *, field_gauss: _Real, field_direction: _Vector = (0, 0, 1)
    ) -> NDArray[np.complex128]:
        """Rabi frequencies between all states, ``[b, a]``; the field is along z unless said."""

    @overload
    def coupling(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
        lattice: Lattice | None = None,
        uncertainty: Literal[False] | None = False,
    ) -> Coupling: ...
    @overload
    def coupling(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
        lattice: Lattice | None = None,
        uncertainty: Literal[True],
    ) -> Uncertain[Coupling, CouplingError]:
        """Explain the coupling b <- a."""

    def stray_couplings(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
        reflection: _Option = 0.005,
    ) -> tuple[StrayCoupling, ...]:
        """Every other way in which the beams drive b <- a (0.5 % reflected)."""

    def quality(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        range_nm: Iterable[_Real],
        field_gauss: _Real,
        points: _Option = 1001,
        field_direction: _Vector = (0, 0, 1),
    ) -> Quality:
        """Coupling over scattering at 1001 wavelengths of a range."""

    def on_resonance(
        self,
        atom: Atom,
        a: _State,
        b: _State,
        *,
        field_gauss: _Real,
        field_direction: _Vector = (0, 0, 1),
    ) -> RamanPair:
        """Tune the tones to the splitting in a field, along z unless said."""

@final
class Coupling(_Document["Coupling"]):
    """A two-photon coupling with its explanation."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    a: Final[State]
    b: Final[State]
    rabi_hz: Final[complex]
    effective_rabi_hz: Final[complex]
    kick: Final[float | None]
    ranks: Final[Ranks]
    relative: Final[float]
    forbidden: Final[bool]
    rule: Final[str]
    alternatives: Final[tuple[str, ...]]
    def _repr_html_(self) -> str: ...

@final
class Ranks(_Value):
    """The parts of a coupling by tensor rank."""

    def __new__(cls, scalar: _Complex, vector: _Complex, tensor: _Complex) -> Ranks: ...
    scalar: Final[complex]
    vector: Final[complex]
    tensor: Final[complex]
    def __len__(self) -> int: ...
    def __getitem__(self, rank: SupportsIndex, /) -> complex: ...
    def __iter__(self) -> Iterator[complex]: ...

@final
class StrayCoupling(_Document["StrayCoupling"]):
    """A coupling that nobody asked for."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    absorb: Final[str]
    emit: Final[str]
    rabi_hz: Final[complex]
    pair: Final[RamanPair]

@final
class Quality(_Document["Quality"]):
    """Coupling over scattering against wavelength."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    wavelengths_nm: Final[NDArray[np.float64]]
    rabi_hz: Final[NDArray[np.float64]]
    scattering_per_s: Final[NDArray[np.float64]]
    ratio: Final[NDArray[np.float64]]
    best_wavelength_nm: Final[float]
    best_ratio: Final[float]
    excluded_nm: Final[tuple[tuple[float, float], ...]]
    def plot(self, ax: Axes | None = None) -> Axes: ...
    def to_pandas(self) -> DataFrame: ...

@final
class Beam(_Document["Beam"]):
    """A Gaussian laser beam."""

    def __new__(
        cls,
        *,
        wavelength_nm: _Real,
        power_mw: _Real,
        waist_um: _Real | Iterable[_Real],
        direction: Iterable[_Real],
        polarisation: Iterable[_Complex],
        waist_axis: Iterable[_Real] | None = None,
        focus_um: Iterable[_Real] | None = (0, 0, 0),
    ) -> Beam: ...
    wavelength_nm: Final[float]
    power_mw: Final[float]
    waist_um: Final[float | tuple[float, float]]
    direction: Final[_Triple]
    polarisation: Final[tuple[complex, complex, complex]]
    waist_axis: Final[_Triple | None]
    focus_um: Final[_Triple]
    @overload
    def intensity_w_per_m2(
        self, at_um: tuple[_Single, _Single, _Single] | None = (0, 0, 0)
    ) -> float: ...
    @overload
    def intensity_w_per_m2(self, at_um: ArrayLike) -> float | NDArray[np.float64]:
        """Intensity at a point, the origin unless given, or at points ``[..., 3]``."""

    def reflected(self, power_fraction: _Real) -> Beam: ...
    def replace(self, **changes: _Real | Iterable[_Complex] | None) -> Beam: ...

@final
class Solution(_Document["Solution"]):
    """One setting that reaches a target flux."""

    wavelength_nm: Final[float]
    angle_deg: Final[float]
    tilt_deg: Final[float]
    flux: Final[float]
    branch: Final[int]
    sense: Final[int]
    kick_overlap: Final[float]

@final
class Atom(_Document["Atom"]):
    """An isotope with its embedded data."""

    def __new__(cls, name: str) -> Atom: ...
    @staticmethod
    def available() -> tuple[str, ...]: ...
    name: Final[str]
    mass_kg: Final[float]
    nuclear_spin: Final[float]
    statistics: Final[Literal["boson", "fermion"]]
    manifolds: Final[tuple[float, ...]]
    @overload
    def recoil_hz(self, wavelength_nm: _Single) -> float: ...
    @overload
    def recoil_hz(self, wavelength_nm: ArrayLike) -> float | NDArray[np.float64]: ...
    @overload
    def recoil_m_per_s(self, wavelength_nm: _Single) -> float: ...
    @overload
    def recoil_m_per_s(self, wavelength_nm: ArrayLike) -> float | NDArray[np.float64]: ...
    def sources(self) -> SourceTable: ...
    def strength_ratios(self) -> tuple[DataSource, ...]: ...
    def with_data(self, numbers: Mapping[str, _Real], *, source: str) -> Atom: ...
    def ground_levels(self, field_gauss: _Real) -> GroundLevels: ...
    def insensitive_fields_gauss(
        self, a: _State, b: _State, *, range_gauss: Iterable[_Real]
    ) -> tuple[float, ...]: ...
    @overload
    def polarisability_au(
        self, wavelength_nm: ArrayLike, f: _Real, *, uncertainty: Literal[False] | None = False
    ) -> Polarisability: ...
    @overload
    def polarisability_au(
        self, wavelength_nm: ArrayLike, f: _Real, *, uncertainty: Literal[True]
    ) -> Uncertain[Polarisability, Polarisability]:
        """Scalar, vector and tensor polarisability of F."""

    def static_polarisability_au(self, f: _Real) -> Polarisability: ...
    @overload
    def tune_out_nm(
        self,
        range_nm: Iterable[_Real],
        *,
        f: _Real,
        m: _Option = None,
        circularity: _Option = 0.0,
        uncertainty: Literal[False] | None = False,
    ) -> float: ...
    @overload
    def tune_out_nm(
        self,
        range_nm: Iterable[_Real],
        *,
        f: _Real,
        m: _Option = None,
        circularity: _Option = 0.0,
        uncertainty: Literal[True],
    ) -> Uncertain[float, float]:
        """Find the one tune-out in a range, scalar unless m is given."""

    def tune_outs_nm(
        self,
        range_nm: Iterable[_Real],
        *,
        f: _Real,
        m: _Option = None,
        circularity: _Option = 0.0,
    ) -> tuple[float, ...]:
        """Every tune-out in a range, for linear light (circularity 0) unless said."""

    @overload
    def light_shift_hz(
        self,
        beams: _Beams,
        f: _Real,
        m: _Real,
        *,
        field_gauss: _Option = 0.0,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[False] | None = False,
    ) -> float: ...
    @overload
    def light_shift_hz(
        self,
        beams: _Beams,
        f: _Real,
        m: _Real,
        *,
        field_gauss: _Option = 0.0,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[True],
    ) -> Uncertain[float, float]:
        """Light shift of a state, without a field along z unless said."""

    def differential_shift_hz(
        self,
        beams: _Beams,
        a: _State,
        b: _State,
        *,
        field_gauss: _Option = 0.0,
        field_direction: _Vector = (0, 0, 1),
    ) -> float:
        """Change of E(b) - E(a) by the light, without a field unless said."""

    @overload
    def scattering_per_s(
        self,
        beams: _Beams,
        f: _Real,
        m: _Real,
        *,
        field_gauss: _Option = 0.0,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[False] | None = False,
    ) -> Scattering: ...
    @overload
    def scattering_per_s(
        self,
        beams: _Beams,
        f: _Real,
        m: _Real,
        *,
        field_gauss: _Option = 0.0,
        field_direction: _Vector = (0, 0, 1),
        uncertainty: Literal[True],
    ) -> Uncertain[Scattering, Scattering]:
        """Photons that a state scatters, without a field along z unless said."""

@final
class GroundLevels(_Document["GroundLevels"]):
    """The levels of an atom at one magnetic field."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    field_gauss: Final[float]
    states: Final[tuple[State, ...]]
    f: Final[NDArray[np.float64]]
    m: Final[NDArray[np.float64]]
    energies_hz: Final[NDArray[np.float64]]
    def energy_hz(self, f: _Real, m: _Real) -> float: ...
    def splitting_hz(self, a: _State, b: _State) -> float: ...
    def moment_hz_per_gauss(self, f: _Real, m: _Real) -> float: ...
    def curvature_hz_per_gauss2(self, f: _Real, m: _Real) -> float: ...
    def vector(self, f: _Real, m: _Real) -> NDArray[np.float64]: ...
    def to_pandas(self) -> DataFrame: ...
    def _repr_html_(self) -> str: ...

@final
class Polarisability(_Document["Polarisability"]):
    """Polarisabilities of one F."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    scalar: Final[float | NDArray[np.float64]]
    vector: Final[float | NDArray[np.float64]]
    tensor: Final[float | NDArray[np.float64]]

@final
class Scattering(_Document["Scattering"]):
    """Photons per second that a state scatters."""

    atom: Final[Atom]
    sources: Final[SourceTable]
    state: Final[State]
    total: Final[float]
    rayleigh: Final[float]
    raman: Final[float]
    to: Final[Mapping[State, float]]
    heating_hz_per_s: Final[float]
    def _repr_html_(self) -> str: ...
    def __float__(self) -> float: ...

@final
class DataSource(_Document["DataSource"]):
    """One number of the atomic table."""

    name: Final[str]
    value: Final[float]
    uncertainty: Final[float | None]
    unit: Final[str]
    status: Final[str]
    source: Final[str]

@final
class SourceTable(_Value):
    """The numbers of an atom: a sequence of rows."""

    atom: Final[Atom]
    def __len__(self) -> int: ...
    def __getitem__(self, key: int, /) -> DataSource: ...
    def __iter__(self) -> Iterator[DataSource]: ...
    def to_pandas(self) -> DataFrame: ...
    def _repr_html_(self) -> str: ...

@final
class NearFraction(_Document["NearFraction"]):
    """A fraction next to a flux."""

    fraction: Final[Fraction]
    phase_error_rad: Final[float]

@final
class FluxCheck(_Document["FluxCheck"]):
    """The verdict on one Raman pair, one lattice and one target flux."""

    meets_target: Final[bool]
    verdict: Final[str]
    lattice: Final[Lattice]
    raman: Final[RamanPair]
    target: Final[Fraction | float]
    sites: Final[int]
    legs: Final[int | None]
    closed: Final[bool]
    phase_budget_rad: Final[float]
    flux: Final[float]
    folded: Final[float]
    branch: Final[int]
    sense: Final[int]
    error: Final[float]
    phase_error_rad: Final[float]
    nearest: Final[tuple[NearFraction, ...]]
    exact_wavelength_nm: Final[float | None]
    wavelength_tolerance_nm: Final[float | None]
    exact_angle_deg: Final[float | None]
    angle_tolerance_deg: Final[float | None]
    kick_overlap: Final[float]
    diagonal_ratio: Final[float | None]
    loop_flux: Final[float | None]
    closure_mismatch: Final[float | None]
    closure_overlap: Final[float | None]
    loop_phase_is_physical: Final[bool | None]
    def table(self) -> str: ...
    def plot(self, ax: Axes | None = None) -> Axes: ...
    def _repr_html_(self) -> str: ...

@final
class Apparatus(_Document["Apparatus"]):
    """The laboratory as it stands: lasers, beams, lattice, field, hardware."""

    @staticmethod
    def from_toml(text: str) -> Apparatus: ...
    @staticmethod
    def from_dict(settings: Mapping[str, _Given]) -> Apparatus: ...
    def to_dict(self) -> dict[str, _Setting]: ...
    def to_toml(self) -> str: ...
    def __getitem__(self, key: str, /) -> _Setting: ...
    def __contains__(self, key: object, /) -> bool: ...
    def __iter__(self) -> Iterator[str]: ...
    def measured(self, path: str) -> Measured: ...
    def replace(self, changes: Mapping[str, _Given]) -> Apparatus: ...
    changes: Final[tuple[str, ...]]
    def atom(self) -> Atom: ...
    def lattice(self) -> Lattice: ...
    def raman_pair(self) -> RamanPair: ...
    def beam(self, name: str) -> Beam:
        """Return a beam of the file as light, focused on the atoms."""

    def lattice_beams(self) -> tuple[Beam, Beam]: ...
    def links(self, *, legs: _Option = None, closed: bool | None = False) -> LightReport | None:
        """Return depth from power, couplings and scattering; None without light."""

    field_direction: Final[_Triple]
    cautions: Final[tuple[Caution, ...]]
    def defaults(self) -> dict[str, tuple[_Setting, str]]:
        """Return what the file leaves to its defaults: value and reason by path."""

    def check(
        self,
        flux: _Flux,
        *,
        sites: _Option = None,
        legs: _Option = None,
        closed: bool | None = False,
        phase_budget_rad: _Option = 0.5,
    ) -> FluxCheck: ...

@final
class LightReport(_Document["LightReport"]):
    """What the light of an apparatus does to its atoms."""

    depth_from_power_er: Final[float | None]
    depth_er: Final[float]
    depth_standard_error_er: Final[float | None]
    field_gauss: Final[float | None]
    field_rms_gauss: Final[float]
    links: Final[tuple[LinkReport, ...]]
    scattering_per_s: Final[tuple[LegReport, ...]]
    remarks: Final[tuple[str, ...]]
    unconfirmed_data: Final[tuple[str, ...]]
    beyond_lines_nm: Final[tuple[float, ...]]
    assumed: Final[tuple[str, ...]]
    cautions: Final[tuple[Caution, ...]]
    def table(self) -> str: ...

@final
class LinkReport(_Document["LinkReport"]):
    """A link between two legs."""

    a: Final[State]
    b: Final[State]
    splitting_hz: Final[float]
    rabi_hz: Final[float | None]
    effective_rabi_hz: Final[float | None]
    forbidden: Final[bool]
    rule: Final[str | None]
    alternatives: Final[tuple[str, ...]]
    field_hz_per_gauss: Final[float]
    field_rms_hz: Final[float]

@final
class LegReport(_Document["LegReport"]):
    """Light that a leg scatters."""

    state: Final[State]
    raman_beams_per_s: Final[float | None]
    raman_beams_changing_per_s: Final[float | None]
    lattice_beams_per_s: Final[float | None]
    lattice_beams_changing_per_s: Final[float | None]

@final
class Caution(_Document["Caution"]):
    """Something to know about an apparatus."""

    code: Final[str]
    text: Final[str]

@final
class Measured(_Document["Measured"]):
    """A number of the apparatus with what is known about it."""

    value: Final[float]
    standard_error: Final[float | None]
    data: Final[str | None]
    measured: Final[str | None]

def check_flux(
    lattice: Lattice,
    raman: RamanPair,
    target: _Flux,
    *,
    sites: _Real,
    legs: _Option = None,
    closed: bool | None = False,
    phase_budget_rad: _Option = 0.5,
) -> FluxCheck:
    """Judge a Raman pair on a lattice; the phase budget is 0.5 rad unless given."""

@overload
def fold(x: _Single) -> float: ...
@overload
def fold(x: ArrayLike) -> float | NDArray[np.float64]:
    """Fold a flux into (-1/2, 1/2]."""

def flux_of_arrays(
    spacing_nm: ArrayLike, wavelength_nm: ArrayLike, angle_deg: ArrayLike, tilt_deg: ArrayLike
) -> float | NDArray[np.float64]:
    """Flux of crossing beams for arrays of one shape; use ``fluxloom.flux``."""

def band_energies_er(
    depths_er: ArrayLike, quasimomenta: ArrayLike, *, count: _Option = 4
) -> NDArray[np.float64]:
    """Compute the ``count`` (4) lowest energies, ``[depth, quasimomentum, band]``."""

def linear_polarisation(
    direction: Iterable[_Real], along: Iterable[_Real]
) -> NDArray[np.complex128]:
    """Linear light; use ``fluxloom.polarisation.linear``."""

def circular_polarisation(direction: Iterable[_Real], helicity: _Real) -> NDArray[np.complex128]:
    """Circular light; use ``fluxloom.polarisation.circular``."""

def elliptical_polarisation(
    direction: Iterable[_Real], along: Iterable[_Real], ellipticity_deg: _Real
) -> NDArray[np.complex128]:
    """Elliptical light; use ``fluxloom.polarisation.elliptical``."""

def raman_wavelengths(
    target: _Flux,
    lattice: Lattice,
    *,
    range_nm: Iterable[_Real],
    angle_deg: _Option = 180.0,
    tilt_deg: _Option = 0.0,
) -> tuple[Solution, ...]:
    """All Raman wavelengths in a range that reach a target flux (180 deg, no tilt)."""

def raman_angles(
    target: _Flux,
    lattice: Lattice,
    *,
    wavelength_nm: _Real,
    tilt_deg: _Option = 0.0,
    range_deg: Iterable[_Real] | None = (0, 180),
) -> tuple[Solution, ...]:
    """All crossing angles in a range (0 to 180 deg) that reach a target flux."""

def radio_rabi_hz(
    atom: Atom,
    a: _State,
    b: _State,
    *,
    amplitude_gauss: _Real,
    direction: Iterable[_Real],
    field_gauss: _Real,
    field_direction: _Vector = (0, 0, 1),
) -> complex:
    """Rabi frequency by an oscillating field; the bias is along z unless said."""

def lattice_depth_er(
    atom: Atom,
    beams: _Beams,
    *,
    state: _State,
    field_gauss: _Option = 0.0,
    field_direction: _Vector = (0, 0, 1),
) -> float:
    """Depth of the lattice that a state sees, without a field unless said."""

def lattice_power_mw(
    atom: Atom,
    beams: _Beams,
    *,
    depth_er: _Real,
    state: _State,
    field_gauss: _Option = 0.0,
    field_direction: _Vector = (0, 0, 1),
) -> float:
    """Power of the first beam for a depth, without a field unless said."""

def lattice_scattering_per_s(
    atom: Atom,
    beams: _Beams,
    *,
    state: _State,
    field_gauss: _Option = 0.0,
    field_direction: _Vector = (0, 0, 1),
) -> Scattering:
    """Scattering of atoms on the sites, without a field unless said."""

def set_threads(threads: _Real) -> None:
    """Set the number of threads that work is spread over."""

def set_memory_limit_bytes(limit_bytes: _Option) -> None:
    """Set the memory that one answer may take; None is half of what is free."""

def build_info() -> tuple[str, str, int]:
    """Version, CPU level and number of threads."""

def constants() -> list[tuple[str, float, str]]:
    """Return the fundamental constants: name, value, unit."""

def limits() -> list[tuple[str, str, float, float, bool, str]]:
    """Return the allowed ranges: field, code, low, high, whether low is refused, remedy."""
