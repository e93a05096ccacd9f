"""Every numeric argument of a public call, by name: what the tests of messages walk."""

from collections.abc import Callable
from dataclasses import dataclass

import fluxloom as fl

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
RAMAN = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
ATOM = fl.Atom("40K")
BANDS = LATTICE.bands(points=3)
BEAM = fl.Beam(
    wavelength_nm=1064, power_mw=100, waist_um=50, direction=(1, 0, 0), polarisation=(0, 0, 1)
)


@dataclass(frozen=True)
class Argument:
    """One numeric argument of one public call."""

    call: Callable[..., object]
    field: str
    code: str
    # Whether arrays are taken too, and whether None stands for the default.
    array: bool = False
    optional: bool = False


def lattice(**changed: object) -> fl.Lattice:
    return fl.Lattice(**{"wavelength_nm": 1064, "depth_er": 6, **changed})


def pair(**changed: object) -> fl.RamanPair:
    return fl.RamanPair(**{"wavelength_nm": 769, **changed})


def directions(**changed: object) -> fl.RamanPair:
    given = {"absorb": (1, 0, 0), "absorb_wavelength_nm": 769, "emit": (-1, 0, 0), **changed}
    return fl.RamanPair.from_directions(**given)


def check(**changed: object) -> fl.FluxCheck:
    return fl.check_flux(LATTICE, RAMAN, "3/8", **{"sites": 60, **changed})


def wavelengths(low: object = 766, high: object = 775, **changed: object) -> object:
    return fl.raman_wavelengths("3/8", LATTICE, range_nm=(low, high), **changed)


def angles(low: object = 0, high: object = 180, **changed: object) -> object:
    given = {"wavelength_nm": 769, "range_deg": (low, high), **changed}
    return fl.raman_angles("3/8", LATTICE, **given)


def plain_flux(**changed: object) -> object:
    return fl.flux(**{"spacing_nm": 532, "wavelength_nm": 769, **changed})


def named(call: Callable[..., object], name: str, code: str, **rest: bool) -> Argument:
    return Argument(lambda x: call(**{name: x}), name, code, **rest)


WAVE, TILT, ANGLE = (
    "light.wavelength_out_of_range",
    "raman.tilt_out_of_range",
    "raman.angle_out_of_range",
)
BAND, REACH, MOMENTUM = (
    "lattice.band_out_of_range",
    "lattice.reach_out_of_range",
    "lattice.quasimomentum_out_of_range",
)
LIT = fl.RamanPair.from_beams(
    absorb=fl.Beam(
        wavelength_nm=769.0,
        power_mw=0.4,
        waist_um=200.0,
        direction=(0, 1, 0),
        polarisation=(0, 0, 1),
    ),
    emit=fl.Beam(
        wavelength_nm=769.0,
        power_mw=0.2,
        waist_um=200.0,
        direction=(1, 0, 0),
        polarisation=(0, 1, 0),
    ),
)

ARGUMENTS = {
    "Lattice wavelength_nm": named(lattice, "wavelength_nm", WAVE),
    "Lattice depth_er": named(lattice, "depth_er", "lattice.depth_out_of_range"),
    "Lattice angle_deg": named(lattice, "angle_deg", "lattice.angle_out_of_range", optional=True),
    "RamanPair wavelength_nm": named(pair, "wavelength_nm", WAVE),
    "RamanPair angle_deg": named(pair, "angle_deg", ANGLE, optional=True),
    "RamanPair tilt_deg": named(pair, "tilt_deg", TILT, optional=True),
    "directions absorb": named(directions, "absorb_wavelength_nm", WAVE),
    "directions emit": named(directions, "emit_wavelength_nm", WAVE, optional=True),
    "circularity": Argument(
        lambda value: ATOM.tune_outs_nm((768.0, 769.5), f=4.5, m=0.5, circularity=value),
        "circularity",
        "light.circularity_out_of_range",
        optional=True,
    ),
    "quality points": Argument(
        lambda value: LIT.quality(
            ATOM, "9/2,-9/2", "9/2,-7/2", range_nm=(768.0, 769.5), field_gauss=30.0, points=value
        ),
        "points",
        "light.points_out_of_range",
        optional=True,
    ),
    "radio amplitude": Argument(
        lambda value: fl.radio_rabi_hz(
            ATOM,
            "9/2,-9/2",
            "9/2,-7/2",
            amplitude_gauss=value,
            direction=(1, 0, 0),
            field_gauss=30.0,
        ),
        "amplitude_gauss",
        "radio.amplitude_out_of_range",
    ),
    "check_flux sites": named(check, "sites", "check.sites_out_of_range"),
    "check_flux legs": named(check, "legs", "check.legs_out_of_range", optional=True),
    "check_flux budget": named(
        check, "phase_budget_rad", "check.phase_budget_out_of_range", optional=True
    ),
    "flux spacing_nm": named(plain_flux, "spacing_nm", "lattice.spacing_out_of_range", array=True),
    "flux wavelength_nm": named(plain_flux, "wavelength_nm", WAVE, array=True),
    "flux angle_deg": named(plain_flux, "angle_deg", ANGLE, array=True),
    "flux tilt_deg": named(plain_flux, "tilt_deg", TILT, array=True),
    "wavelengths low": Argument(lambda x: wavelengths(low=x), "range_nm[0]", WAVE),
    "wavelengths high": Argument(lambda x: wavelengths(high=x), "range_nm[1]", WAVE),
    "wavelengths angle_deg": named(wavelengths, "angle_deg", ANGLE, optional=True),
    "wavelengths tilt_deg": named(wavelengths, "tilt_deg", TILT, optional=True),
    "angles low": Argument(lambda x: angles(low=x), "range_deg[0]", ANGLE),
    "angles high": Argument(lambda x: angles(low=0, high=x), "range_deg[1]", ANGLE),
    "angles wavelength_nm": named(angles, "wavelength_nm", WAVE),
    "angles tilt_deg": named(angles, "tilt_deg", TILT, optional=True),
    "recoil_hz": Argument(ATOM.recoil_hz, "wavelength_nm", WAVE, array=True),
    "recoil_m_per_s": Argument(ATOM.recoil_m_per_s, "wavelength_nm", WAVE, array=True),
    "tunnelling reach": named(LATTICE.tunnelling_er, "reach", REACH, optional=True),
    "tunnelling band": named(LATTICE.tunnelling_er, "band", BAND, optional=True),
    "effective_mass band": named(LATTICE.effective_mass, "band", BAND, optional=True),
    "onsite_integral band": named(LATTICE.onsite_integral, "band", BAND, optional=True),
    "kick": Argument(LATTICE.kick_overlap, "kick", "lattice.kick_out_of_range", array=True),
    "kick reach": Argument(
        lambda x: LATTICE.kick_overlap(0.7, reach=x), "reach", REACH, optional=True
    ),
    "kick to_band": Argument(
        lambda x: LATTICE.kick_overlap(0.7, to_band=x), "to_band", BAND, optional=True
    ),
    "bands count": named(LATTICE.bands, "count", "lattice.count_out_of_range", optional=True),
    "bands points": named(LATTICE.bands, "points", "lattice.points_out_of_range", optional=True),
    "gap_er quasimomentum": named(BANDS.gap_er, "quasimomentum", MOMENTUM, optional=True),
    "wannier sites": named(
        LATTICE.wannier, "sites", "lattice.wannier_sites_out_of_range", optional=True
    ),
    "wannier points": named(
        LATTICE.wannier, "points_per_site", "lattice.points_per_site_out_of_range", optional=True
    ),
    "trap_hz": Argument(
        lambda x: LATTICE.trap_curvature_hz(ATOM, trap_hz=x), "trap_hz", "lattice.trap_out_of_range"
    ),
    "acceleration": Argument(
        lambda x: LATTICE.tilt_hz(ATOM, acceleration_m_per_s2=x),
        "acceleration_m_per_s2",
        "lattice.acceleration_out_of_range",
    ),
    "band_energies_er depths": Argument(
        lambda x: fl.band_energies_er(x, 0.0),
        "depths_er[0]",
        "lattice.depth_out_of_range",
        array=True,
    ),
    "band_energies_er quasimomenta": Argument(
        lambda x: fl.band_energies_er(2.0, x), "quasimomenta[0]", MOMENTUM, array=True
    ),
    "fold": Argument(fl.fold, "x", "flux.out_of_range", array=True),
    "Beam wavelength_nm": named(BEAM.replace, "wavelength_nm", WAVE),
    "Beam power_mw": named(BEAM.replace, "power_mw", "beam.power_out_of_range"),
    "Beam waist_um": named(BEAM.replace, "waist_um", "beam.waist_out_of_range"),
    "Beam second waist": Argument(
        lambda x: BEAM.replace(waist_um=(50, x)), "waist_um[1]", "beam.waist_out_of_range"
    ),
    "Beam focus_um": Argument(
        lambda x: BEAM.replace(focus_um=(x, 0, 0)), "focus_um[0]", "beam.focus_out_of_range"
    ),
    "intensity at_um": Argument(
        lambda x: BEAM.intensity_w_per_m2((0, x, 0)), "at_um[1]", "beam.position_out_of_range"
    ),
    "reflected": Argument(BEAM.reflected, "power_fraction", "beam.power_fraction_out_of_range"),
    "ellipticity_deg": Argument(
        lambda x: fl.polarisation.elliptical((0, 0, 1), (1, 0, 0), x),
        "ellipticity_deg",
        "polarisation.ellipticity_out_of_range",
    ),
}
