//! The error of this crate: one enum, stable codes, numbers in the fields.
//!
//! A message says what was asked, what was found, what is allowed and what to
//! do. [`Error::code`] never changes once released; [`Error::details`] gives
//! the numbers to a program.

use num_complex::Complex64;

use crate::limits::{Limit, plain};

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
        "{field} = ({}, {}) is empty: the first number must be smaller than the second; swap them",
        plain(*low), plain(*high)
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

fn resonance_message(error: &Error) -> String {
    let Error::OnResonance { wavelength_nm, line, detuning_hz, window_hz, outside_nm } = error
    else {
        return String::new();
    };
    let (below, above) = outside_nm;
    // Nine decimals hide the rounding of a wavelength that was a frequency.
    format!(
        "light at {} nm is {} from {line}, nearer than {RESONANCE_LINEWIDTHS} \
         linewidths ({}): shifts and couplings far from resonance mean nothing there; go below \
         {below:.6} nm or above {above:.6} nm",
        plain((wavelength_nm * 1e9).round() / 1e9),
        megahertz(detuning_hz.abs()),
        megahertz(*window_hz)
    )
}

/// Light nearer than this many linewidths to a line is refused.
pub const RESONANCE_LINEWIDTHS: f64 = 100.0;

fn megahertz(hz: f64) -> String {
    format!("{:.4} MHz", hz * 1e-6)
}

fn tune_out_message(error: &Error) -> String {
    let Error::TuneOutCount { range_nm: (low, high), found_nm, what, nearest_nm } = error else {
        return String::new();
    };
    let list =
        |values: &[f64]| values.iter().map(|nm| format!("{nm:.6}")).collect::<Vec<_>>().join(", ");
    if !found_nm.is_empty() {
        return format!(
            "{what} has {} tune-outs in range_nm = ({}, {}): {} nm; narrow the range to one of \
             them, or ask tune_outs_nm for all",
            found_nm.len(),
            plain(*low),
            plain(*high),
            list(found_nm)
        );
    }
    let elsewhere = if nearest_nm.is_empty() {
        "and none near it".to_owned()
    } else {
        format!("the nearest are at {} nm", list(nearest_nm))
    };
    format!(
        "{what} has no tune-out in range_nm = ({}, {}): {elsewhere}; widen or move the range",
        plain(*low),
        plain(*high)
    )
}

fn did_you_mean(name: Option<&str>) -> String {
    name.map_or_else(String::new, |name| format!(" (did you mean \"{name}\"?)"))
}

/// Four digits, enough to find what went wrong.
fn rounded(value: f64) -> f64 {
    format!("{value:.3e}").parse().unwrap_or(value)
}

fn nearest_text(nearest: Option<[Complex64; 3]>) -> String {
    nearest.map_or_else(
        || "it lies along direction, so give a vector across it".to_owned(),
        |vector| {
            // Digits beyond those that the check itself looks at would only be noise.
            let short = |x: f64| (x * 1e9).round() / 1e9;
            let vector = vector.map(|x| Complex64::new(short(x.re), short(x.im)));
            format!("the nearest vector across direction is {}", vector_text(vector))
        },
    )
}

/// A complex vector as a person writes it, and as Python reads it: `[1, 0.5j, 0]`.
pub(crate) fn vector_text(vector: [Complex64; 3]) -> String {
    // Adding zero takes the sign from zeros.
    let part = |x: f64| plain(x + 0.0);
    let [x, y, z] = vector.map(|Complex64 { re, im }| {
        if im == 0.0 {
            part(re)
        } else if re == 0.0 {
            format!("{}j", part(im))
        } else {
            let sign = if im < 0.0 { '-' } else { '+' };
            format!("{}{sign}{}j", part(re), part(im.abs()))
        }
    });
    format!("[{x}, {y}, {z}]")
}

fn range_message(limit: &Limit, field: &str, value: f64) -> String {
    let hint = limit.hint(value);
    let hint = if hint.is_empty() { String::new() } else { format!(", {hint}") };
    format!(
        "{field} = {} is outside {}{hint}; {}",
        plain(value),
        limit.range_text(field),
        limit.remedy
    )
}

impl Error {
    /// The stable code, such as `lattice.depth_out_of_range`.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::OutOfRange { limit, .. } => limit.code,
            Self::NotWhole { .. } => "count.not_whole",
            Self::EmptyRange { .. } => "range.empty",
            Self::NoDirection { .. } | Self::NoPolarisation { .. } => "geometry.no_direction",
            Self::NotTransverse { .. } => "beam.not_transverse",
            Self::BadFlux { code, .. } | Self::Contradiction { code, .. } => code,
            Self::UnknownAtom { .. } => "atom.unknown",
            Self::BadState { .. } => "state.not_a_state",
            Self::NoSuchState { .. } => "state.unknown",
            Self::OnResonance { .. } => "light.on_resonance",
            Self::NoLattice { .. } => "lattice.no_interference",
            Self::TuneOutCount { found_nm, .. } if found_nm.is_empty() => "light.no_tune_out",
            Self::TuneOutCount { .. } => "light.several_tune_outs",
            Self::UnknownData { .. } => "atom.unknown_data",
            Self::BadData { .. } => "atom.bad_data",
            Self::NoBeams => "raman.no_beams",
            Self::TooManySolutions { .. } => "flux.too_many_solutions",
            Self::MemoryOverLimit { .. } => "memory.over_limit",
            Self::NotLocalised { .. } => "lattice.not_localised",
            Self::Cancelled => "run.cancelled",
        }
    }

    /// The family of the error.
    #[must_use]
    pub fn kind(&self) -> Kind {
        match self {
            Self::NotLocalised { .. } => Kind::Numerical,
            Self::NoLattice { .. } => Kind::Infeasible,
            Self::Cancelled => Kind::Cancelled,
            _ => Kind::Input,
        }
    }

    /// The numbers and texts behind the message.
    #[must_use]
    pub fn details(&self) -> Vec<(&'static str, Detail)> {
        use Detail::{Number, Text};
        match self {
            Self::OutOfRange { limit, field, value } | Self::NotWhole { limit, field, value } => {
                vec![
                    ("field", Text(field.clone())),
                    ("value", Number(*value)),
                    ("low", Number(limit.low)),
                    ("high", Number(limit.high)),
                ]
            }
            Self::EmptyRange { field, low, high } => {
                vec![("field", Text(field.clone())), ("low", Number(*low)), ("high", Number(*high))]
            }
            Self::NoDirection { field, .. } | Self::NoPolarisation { field, .. } => {
                vec![("field", Text(field.clone()))]
            }
            Self::NotTransverse { field, lean_deg, .. } => {
                vec![("field", Text(field.clone())), ("lean_deg", Number(*lean_deg))]
            }
            Self::BadFlux { text, .. } => {
                vec![("field", Text("flux".into())), ("value", Text(text.clone()))]
            }
            Self::UnknownAtom { name, suggestion, .. } => {
                named(("value", name), suggestion.as_deref())
            }
            Self::BadState { text, .. } => vec![("value", Text(text.clone()))],
            Self::NoSuchState { atom, state, known } => vec![
                ("atom", Text(atom.clone())),
                ("value", Text(state.clone())),
                ("known", Text(known.clone())),
            ],
            Self::OnResonance { wavelength_nm, line, detuning_hz, window_hz, outside_nm } => vec![
                ("wavelength_nm", Number(*wavelength_nm)),
                ("line", Text(line.clone())),
                ("detuning_hz", Number(*detuning_hz)),
                ("window_hz", Number(*window_hz)),
                ("below_nm", Number(outside_nm.0)),
                ("above_nm", Number(outside_nm.1)),
            ],
            Self::NoLattice { state, wavelength_nm } => {
                vec![("state", Text(state.clone())), ("wavelength_nm", Number(*wavelength_nm))]
            }
            Self::TuneOutCount { range_nm, found_nm, nearest_nm, .. } => {
                let mut details = vec![("low", Number(range_nm.0)), ("high", Number(range_nm.1))];
                let listed = if found_nm.is_empty() { nearest_nm } else { found_nm };
                let listed: Vec<String> = listed.iter().map(f64::to_string).collect();
                details.push(("tune_outs_nm", Text(listed.join(", "))));
                details
            }
            Self::UnknownData { atom, key, suggestion } => {
                let mut details = named(("value", key), suggestion.as_deref());
                details.push(("atom", Text(atom.clone())));
                details
            }
            Self::BadData { atom, key, value, .. } => vec![
                ("atom", Text(atom.clone())),
                ("field", Text(key.clone())),
                ("value", Number(*value)),
            ],
            Self::TooManySolutions { field, low, high, count, .. } => vec![
                ("field", Text(field.clone())),
                ("low", Number(*low)),
                ("high", Number(*high)),
                ("count", Number(*count)),
            ],
            Self::MemoryOverLimit { asked_bytes, limit_bytes } => {
                vec![("asked_bytes", Number(*asked_bytes)), ("limit_bytes", Number(*limit_bytes))]
            }
            Self::NotLocalised { band, depth_er, .. } => {
                #[allow(clippy::cast_precision_loss)]
                let band = *band as f64;
                vec![("band", Number(band)), ("depth_er", Number(*depth_er))]
            }
            Self::NoBeams | Self::Contradiction { .. } | Self::Cancelled => Vec::new(),
        }
    }
}

fn named(name: (&'static str, &str), suggestion: Option<&str>) -> Vec<(&'static str, Detail)> {
    let mut details = vec![(name.0, Detail::Text(name.1.to_owned()))];
    if let Some(suggestion) = suggestion {
        details.push(("did_you_mean", Detail::Text(suggestion.to_owned())));
    }
    details
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn complex_vectors_read_like_vectors() {
        let c = Complex64::new;
        let vector = [c(1.0, -0.0), c(-0.0, 0.5), c(0.25, -1e-9)];
        assert_eq!(vector_text(vector), "[1, 0.5j, 0.25-1e-9j]");
        assert_eq!(vector_text([c(f64::NAN, 0.0), c(0.0, 0.0), c(-2.0, 3.0)]), "[NaN, 0, -2+3j]");
    }
}
