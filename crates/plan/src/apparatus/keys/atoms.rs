//! Rows about the file itself, the cloud, its trap, the field and collisions.

use fluxloom_core::limits::{FIELD_GAUSS, TRAP_HZ};

use super::Kind::{
    Atom, Count, Flag, Format, Number, Range, State, StatePairs, Text, Vector, Version,
};
use super::Need::{Default, Optional, Required};
use super::Standard::{Number as N, Text as T, Vector as V};
use super::{Key, ranges as r};

pub(super) const KEYS: &[Key] = &[
    Key::new("format", Format, Required, "\"fluxloom-apparatus\""),
    Key::new("version", Version, Required, "the version of the file format, 1"),
    Key::new("name", Text, Default(T(""), "no name given"), "the laboratory's name"),
    Key::new(
        "frame.down",
        Vector,
        Default(V([0.0, 0.0, -1.0]), "laboratory axes: gravity along -z"),
        "the direction of gravity",
    ),
    Key::new("cloud.atom", Atom, Required, "the isotope, such as \"40K\""),
    Key::new("cloud.count", Count(r::ATOM_COUNT), Optional, "the number of atoms"),
    Key::new("cloud.temperature_nk", Number(r::TEMPERATURE_NK), Optional, "the temperature"),
    Key::new("cloud.length_um", Number(r::SIZE_UM), Optional, "the full length along the lattice"),
    Key::new("cloud.width_um", Number(r::SIZE_UM), Optional, "the rms width across the lattice"),
    Key::new("cloud.start", State, Optional, "the state the cloud is prepared in, \"F,m\""),
    Key::new(
        "cloud.count_noise",
        Number(r::FRACTION),
        Optional,
        "rms of the atom number from run to run, a fraction",
    ),
    Key::new("trap.along_hz", Number(TRAP_HZ), Optional, "trap frequency along the lattice"),
    Key::new("trap.across_hz", Number(TRAP_HZ), Optional, "trap frequency across the lattice"),
    Key::new("field.magnitude_gauss", Number(FIELD_GAUSS), Optional, "the bias field today"),
    Key::new(
        "field.range_gauss",
        Range(FIELD_GAUSS, Some("magnitude_gauss")),
        Optional,
        "where the bias field may go",
    ),
    Key::new(
        "field.direction",
        Vector,
        Default(V([0.0, 0.0, 1.0]), "laboratory axes: field along z"),
        "the direction of the bias field",
    ),
    Key::new(
        "field.noise_rms_gauss",
        Number(r::FIELD_NOISE_GAUSS),
        Default(N(1e-3), "common practice: an ordinary laboratory has 0.5-3 mG rms"),
        "rms of the field within a run",
    ),
    Key::new(
        "field.mains_rms_gauss",
        Number(r::FIELD_NOISE_GAUSS),
        Optional,
        "rms of the field at the mains frequency",
    ),
    Key::new(
        "field.mains_locked",
        Flag,
        Optional,
        "whether runs start at the same phase of the mains",
    ),
    Key::new(
        "field.noise_ppm",
        Number(r::NOISE_PPM),
        Optional,
        "rms of the field in proportion to the bias",
    ),
    Key::new(
        "field.drift_rms_gauss",
        Number(r::FIELD_NOISE_GAUSS),
        Optional,
        "rms of the field between calibrations",
    ),
    Key::new(
        "field.slew_gauss_per_s",
        Number(r::RATE),
        Optional,
        "the fastest change of the bias field",
    ),
    Key::new(
        "field.gradient_gauss_per_cm",
        Number(r::GRADIENT),
        Optional,
        "the residual gradient along the lattice",
    ),
    Key::new(
        "interaction.scattering_length_bohr",
        StatePairs(r::SCATTERING_LENGTH_BOHR),
        Optional,
        "scattering lengths of pairs of states, \"F,m F,m\"",
    ),
];
