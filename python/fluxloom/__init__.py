"""Plan, check and rehearse synthetic magnetic flux in Raman-coupled optical lattices.

The short way in::

    import fluxloom as fl

    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
    raman = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
    print(fl.check_flux(lattice, raman, "3/8", sites=60).verdict)

Units are in the names (``_nm``, ``_er``, ``_hz``, ``_deg``, ...); flux is in
flux quanta per plaquette, kicks and quasimomenta in k_L = pi/spacing.
"""

from fluxloom import polarisation
from fluxloom._core import (
    Apparatus,
    Atom,
    Bands,
    Beam,
    Caution,
    Coupling,
    DataSource,
    FluxCheck,
    GroundLevels,
    Lattice,
    LegReport,
    LightReport,
    LinkReport,
    Measured,
    NearFraction,
    Polarisability,
    Quality,
    RamanPair,
    Ranks,
    Scattering,
    Solution,
    SourceTable,
    StrayCoupling,
    Wannier,
    band_energies_er,
    check_flux,
    fold,
    lattice_depth_er,
    lattice_power_mw,
    lattice_scattering_per_s,
    radio_rabi_hz,
    raman_angles,
    raman_wavelengths,
    set_memory_limit_bytes,
    set_threads,
)
from fluxloom.broadcasting import flux
from fluxloom.exceptions import (
    Fault,
    FluxloomError,
    FluxloomWarning,
    InfeasibleError,
    InputError,
    NumericalError,
)
from fluxloom.results import CouplingError, State, Uncertain
from fluxloom.versions import __version__, show_versions

__all__ = [
    "Apparatus",
    "Atom",
    "Bands",
    "Beam",
    "Caution",
    "Coupling",
    "CouplingError",
    "DataSource",
    "Fault",
    "FluxCheck",
    "FluxloomError",
    "FluxloomWarning",
    "GroundLevels",
    "InfeasibleError",
    "InputError",
    "Lattice",
    "LegReport",
    "LightReport",
    "LinkReport",
    "Measured",
    "NearFraction",
    "NumericalError",
    "Polarisability",
    "Quality",
    "RamanPair",
    "Ranks",
    "Scattering",
    "Solution",
    "SourceTable",
    "State",
    "StrayCoupling",
    "Uncertain",
    "Wannier",
    "__version__",
    "band_energies_er",
    "check_flux",
    "flux",
    "fold",
    "lattice_depth_er",
    "lattice_power_mw",
    "lattice_scattering_per_s",
    "polarisation",
    "radio_rabi_hz",
    "raman_angles",
    "raman_wavelengths",
    "set_memory_limit_bytes",
    "set_threads",
    "show_versions",
]
