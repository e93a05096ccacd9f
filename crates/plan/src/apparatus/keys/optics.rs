//! Rows about lasers, beams, and what they make: the lattice and the Raman pair.

use fluxloom_core::limits::{
    DEPTH_ER, LATTICE_ANGLE_DEG, POWER_MW, RAMAN_ANGLE_DEG, TILT_DEG, WAIST_UM, WAVELENGTH_NM,
};

use super::Kind::{Flag, Name, Names, Number, OneOrTwo, Range, Vector};
use super::Need::{Default, Optional, Required};
use super::Spread::{Absolute, Relative};
use super::Standard::{Number as N, Vector as V};
use super::{Key, ranges as r};

/// One milliradian, in degrees.
const ONE_MRAD_DEG: f64 = 1e-3 * 180.0 / std::f64::consts::PI;
const BEAM_ANGLE: &str = "common practice: a beam angle is known to 1 mrad";

pub(super) const KEYS: &[Key] = &[
    Key::new(
        "lasers.*.wavelength_nm",
        Number(WAVELENGTH_NM),
        Required,
        "the vacuum wavelength today",
    ),
    Key::new(
        "lasers.*.range_nm",
        Range(WAVELENGTH_NM, Some("wavelength_nm")),
        Optional,
        "where the wavelength may go",
    ),
    Key::new("lasers.*.linewidth_hz", Number(r::FREQUENCY_HZ), Optional, "the linewidth"),
    Key::new(
        "lasers.*.drift_rms_hz",
        Number(r::FREQUENCY_HZ),
        Optional,
        "rms of the frequency between calibrations",
    ),
    Key::new(
        "lasers.*.intensity_noise_rms",
        Number(r::FRACTION),
        Optional,
        "rms of the intensity, a fraction",
    ),
    Key::new("beams.*.laser", Name("lasers"), Required, "the laser it comes from"),
    Key::new("beams.*.power_mw", Number(POWER_MW), Optional, "the power of all its tones today"),
    Key::new("beams.*.max_power_mw", Number(POWER_MW), Optional, "the most power there is"),
    Key::new(
        "beams.*.waist_um",
        OneOrTwo(WAIST_UM),
        Optional,
        "the 1/e^2 radius, or [w1, w2] of an ellipse, w1 in the plane of the pair and w2 along \
         plane_normal",
    ),
    Key::new(
        "beams.*.polarisation_deg",
        Number(r::ANGLE_DEG),
        Optional,
        "the polarisation: 0 in the plane of the pair, 90 along plane_normal",
    ),
    Key::new(
        "beams.*.polarisation_range_deg",
        Range(r::ANGLE_DEG, Some("polarisation_deg")),
        Optional,
        "where the polarisation may be turned",
    ),
    Key::new(
        "beams.*.ellipticity_deg",
        Number(r::ELLIPTICITY_DEG),
        Default(N(0.0), "linear light unless said"),
        "the ellipticity: 0 linear, +-45 circular",
    ),
    Key::new(
        "beams.*.return_fraction",
        Number(r::FRACTION),
        Default(N(1.0), "retro-reflected without loss unless said"),
        "power of the retro-reflected beam over the incoming one",
    ),
    Key::new(
        "lattice.beams",
        Names { table: "beams", least: 1, most: 2 },
        Required,
        "the beams that make it: one is retro-reflected, two cross at angle_deg",
    ),
    Key::new(
        "lattice.angle_deg",
        Number(LATTICE_ANGLE_DEG),
        Default(N(180.0), "retro-reflected unless said"),
        "the full angle between the lattice beams",
    )
    .known_to(Absolute(ONE_MRAD_DEG), BEAM_ANGLE),
    Key::new(
        "lattice.axis",
        Vector,
        Default(V([1.0, 0.0, 0.0]), "laboratory axes: lattice along x"),
        "the direction of the lattice",
    ),
    Key::new(
        "lattice.plane_normal",
        Vector,
        Default(V([0.0, 0.0, 1.0]), "laboratory axes: lattice beams in the xy plane"),
        "the normal of the plane of the lattice beams",
    ),
    Key::new(
        "lattice.depth_er",
        Number(DEPTH_ER),
        Required,
        "the peak-to-peak depth in lattice recoils at the power stated",
    )
    .known_to(
        Relative(0.05),
        "common practice: 5 % by short-pulse diffraction; 0.6 % at best \
         (Zhou et al., Opt. Express 26, 16726 (2018))",
    ),
    Key::new(
        "raman.beams",
        Names { table: "beams", least: 2, most: 2 },
        Required,
        "the two beams: absorbed, emitted, for sense +1",
    ),
    Key::new(
        "raman.angle_deg",
        Number(RAMAN_ANGLE_DEG),
        Required,
        "the full angle between the Raman beams today",
    )
    .known_to(Absolute(ONE_MRAD_DEG), BEAM_ANGLE),
    Key::new(
        "raman.angle_range_deg",
        Range(RAMAN_ANGLE_DEG, Some("angle_deg")),
        Optional,
        "where the angle may go; leave out if the mounts are fixed",
    ),
    Key::new(
        "raman.tilt_deg",
        Number(TILT_DEG),
        Default(N(0.0), "momentum transfer along the lattice unless said"),
        "the angle between the momentum transfer and the lattice",
    )
    .known_to(Absolute(ONE_MRAD_DEG), BEAM_ANGLE),
    Key::new(
        "raman.plane_normal",
        Vector,
        Default(V([0.0, 0.0, 1.0]), "laboratory axes: Raman beams in the xy plane"),
        "the normal of the plane of the Raman beams",
    ),
    Key::new(
        "raman.phase_noise_rms_rad",
        Number(r::PHASE_NOISE_RAD),
        Default(N(0.07), "common practice: 2-70 mrad per run, the cautious end taken"),
        "rms of the phase between the two beams within a run",
    ),
    Key::new(
        "raman.phase_noise_white_rad2_per_hz",
        Number(r::PHASE_DENSITY),
        Optional,
        "the white part of the phase noise between the two beams",
    ),
    Key::new(
        "raman.phase_repeats",
        Flag,
        Optional,
        "whether the loop phase is the same from run to run",
    ),
];
