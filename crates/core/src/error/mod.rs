//! The error of this crate: one enum, stable codes, numbers in the fields.
//!
//! A message says what was asked, what was found, what is allowed and what to
//! do. [`Error::code`] never changes once released; [`Error::details`] gives
//! the numbers to a program.

mod details;
mod messages;

use num_complex::Complex64;

use crate::limits::{Limit, plain};
pub(crate) use messages::vector_text;
use messages::{
    did_you_mean, nearest_text, range_message, resonance_message, rounded, tune_out_message,
};

/// What family an error belongs to: the Python exception and exit code follow from it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// The input makes no sense by itself.
    Input,
    /// Physics or hardware cannot do what was asked.
    Infeasible,
    /// A computation could not reach its accuracy.
    Numerical,
    /// The caller asked to stop.
    Cancelled,
    /// The operating system said no.
    System,
}

/// One number or text that belongs to an error.
#[derive(Debug, Clone, PartialEq)]
pub enum Detail {
    /// A number, in the unit of its field's suffix.
    Number(f64),
    /// A text.
    Text(String),
}

/// Errors of the physics crate.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum Error {
    /// A number is not finite or outside its allowed range.
    #[error("{}", range_message(limit, field, *value))]
    OutOfRange {
        /// The range that was broken.
        limit: Limit,
        /// Name of the field as the user knows it.
        field: String,
        /// The value that was found.
        value: f64,
    },
    /// A count is not a whole number.
    #[error("{field} = {} is not a whole number; {}", plain(*value), limit.remedy)]
    NotWhole {
        /// The range of the count.
        limit: Limit,
        /// Name of the field as the user knows it.
        field: String,
        /// The value that was found.
        value: f64,
    },
    /// A lower and an upper end are the wrong way round.
    #[error(
        "{field} = ({}, {}) is empty: the first number must be smaller than the second; {}",
        plain(*low), plain(*high), if low > high { "swap them" } else { "widen it" }
    )]
    EmptyRange {
        /// Name of the field.
        field: String,
        /// First number.
        low: f64,
        /// Second number.
        high: f64,
    },
    /// A vector has no direction.
    #[error("{field} = [{}, {}, {}] has no direction: give three finite numbers that are not all zero",
        plain(vector[0]), plain(vector[1]), plain(vector[2]))]
    NoDirection {
        /// Name of the field.
        field: String,
        /// The components found.
        vector: [f64; 3],
    },
    /// A polarisation has no direction.
    #[error(
        "{field} = {} has no direction: give three finite numbers, real or complex, that are not all zero",
        vector_text(*vector)
    )]
    NoPolarisation {
        /// Name of the field.
        field: String,
        /// The components found.
        vector: [Complex64; 3],
    },
    /// A vector that belongs across a beam leans along it.
    #[error(
        "{field} leans {} degrees out of the plane across direction, where it must lie: {}",
        plain(rounded(*lean_deg)), nearest_text(*nearest)
    )]
    NotTransverse {
        /// Name of the field.
        field: String,
        /// Angle between the vector and the plane across the beam.
        lean_deg: f64,
        /// The nearest unit vector in that plane; none for a vector along the beam.
        nearest: Option<[Complex64; 3]>,
    },
    /// A text is not a flux.
    #[error(
        "flux \"{text}\" {why}: write p/q with whole numbers and q from 1 to 1000000, such as \"3/8\", or a decimal number"
    )]
    BadFlux {
        /// The text.
        text: String,
        /// What is wrong with it.
        why: &'static str,
        /// The stable code.
        code: &'static str,
    },
    /// There is no such isotope.
    #[error("atom \"{name}\" is not in the table{}: known are {known}", did_you_mean(suggestion.as_deref()))]
    UnknownAtom {
        /// The name that was asked for.
        name: String,
        /// The name that was probably meant.
        suggestion: Option<String>,
        /// The names that exist.
        known: String,
    },
    /// Two numbers or a text are no hyperfine state.
    #[error("state {text} {why}: write F,m such as \"9/2,-7/2\" or (4.5, -3.5)")]
    BadState {
        /// What was given.
        text: String,
        /// What is wrong with it, in words that follow it.
        why: &'static str,
    },
    /// An atom has no such state or F.
    #[error(
        "{state} is not a state of {atom}, which has F = {known}: give one of these F with |m| <= F"
    )]
    NoSuchState {
        /// The atom.
        atom: String,
        /// The state or F that was asked for.
        state: String,
        /// The F that exist.
        known: String,
    },
    /// Light so near a line that perturbation theory means nothing.
    #[error("{}", resonance_message(self))]
    OnResonance {
        /// Vacuum wavelength of the light.
        wavelength_nm: f64,
        /// The line and the levels it joins, in words.
        line: String,
        /// Light minus line, Hz.
        detuning_hz: f64,
        /// Half-width of the refused window, Hz.
        window_hz: f64,
        /// The allowed wavelengths nearest to both sides, nm.
        outside_nm: (f64, f64),
    },
    /// Beams whose interference a state does not see at any power.
    #[error(
        "the beams make no lattice for {state} at {wavelength_nm} nm: their polarisations are orthogonal, one of them has no power, or the light is at a tune-out; change one of these"
    )]
    NoLattice {
        /// The state.
        state: String,
        /// Vacuum wavelength, nm.
        wavelength_nm: f64,
    },
    /// A lattice that takes more power than any beam may have.
    #[error(
        "a lattice of depth_er = {} for {state} takes {power_mw:.3e} mW, more than the {} mW a beam may have: the light is nearly at a tune-out, the waist is large, or the polarisations are nearly orthogonal; change one of these",
        plain(*depth_er), plain(*most_mw)
    )]
    PowerOutOfReach {
        /// The state.
        state: String,
        /// The depth asked for.
        depth_er: f64,
        /// The power it takes, mW.
        power_mw: f64,
        /// The most power of a beam, mW.
        most_mw: f64,
    },
    /// Not exactly one tune-out in a range.
    #[error("{}", tune_out_message(self))]
    TuneOutCount {
        /// The range, nm.
        range_nm: (f64, f64),
        /// The tune-outs in it, nm, ascending.
        found_nm: Vec<f64>,
        /// What was asked about, in words.
        what: String,
        /// For none in the range: the nearest outside it, nm.
        nearest_nm: Vec<f64>,
    },
    /// An atom has no such number.
    #[error("{atom} has no number called \"{key}\"{}: see sources() for the names", did_you_mean(suggestion.as_deref()))]
    UnknownData {
        /// The atom.
        atom: String,
        /// The name that was asked for.
        key: String,
        /// The name that was probably meant.
        suggestion: Option<String>,
    },
    /// A number of the atomic table cannot be replaced as asked.
    #[error("{atom}: {key} = {} cannot be used: {why}", plain(*value))]
    BadData {
        /// The atom.
        atom: String,
        /// The name of the number.
        key: String,
        /// The value found.
        value: f64,
        /// What is wrong, and what to do.
        why: String,
    },
    /// A Raman pair was given as geometry only and light was asked of it.
    #[error(
        "this Raman pair was given by its geometry and carries no beams: powers and couplings cannot be asked of it; build it from its beams (from_beams)"
    )]
    NoBeams,
    /// A combination of arguments means nothing.
    #[error("{message}")]
    Contradiction {
        /// The stable code.
        code: &'static str,
        /// What was asked, what is allowed, what to do.
        message: String,
    },
    /// A search would return more answers than anyone can read.
    #[error("{field} = ({}, {}) holds about {} answers, more than {most}: narrow the range", plain(*low), plain(*high), plain(*count))]
    TooManySolutions {
        /// The range's name.
        field: String,
        /// Lower end.
        low: f64,
        /// Upper end.
        high: f64,
        /// Estimated number of answers.
        count: f64,
        /// The most that are returned.
        most: usize,
    },
    /// An answer would need more memory than allowed.
    #[error("this needs {} bytes and {} are allowed: ask for fewer points, or raise the limit with set_memory_limit_bytes", plain(*asked_bytes), plain(*limit_bytes))]
    MemoryOverLimit {
        /// Bytes the answer would take.
        asked_bytes: f64,
        /// Bytes allowed.
        limit_bytes: f64,
    },
    /// The Wannier function spreads too far for a lattice of sites to mean anything.
    #[error(
        "band {band} at depth_er = {} is too close to free motion: its states spread over more than {most_sites} sites and a hopping model means nothing; deepen the lattice or take a lower band",
        plain(*depth_er)
    )]
    NotLocalised {
        /// The band.
        band: usize,
        /// The depth.
        depth_er: f64,
        /// Sites that the method reaches over.
        most_sites: usize,
    },
    /// The caller asked to stop.
    #[error("stopped on request")]
    Cancelled,
}

/// Light nearer than this many linewidths to a line is refused.
pub const RESONANCE_LINEWIDTHS: f64 = 100.0;
