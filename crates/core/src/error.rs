//! The error of this crate: one enum, stable codes, numbers in the fields.
//!
//! A message says what was asked, what was found, what is allowed and what to
//! do. [`Error::code`] never changes once released; [`Error::details`] gives
//! the numbers to a program.

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
        "this Raman pair was given by its geometry and carries no beams: powers and couplings cannot be asked of it"
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

fn did_you_mean(name: Option<&str>) -> String {
    name.map_or_else(String::new, |name| format!(" (did you mean \"{name}\"?)"))
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
            Self::NoDirection { .. } => "geometry.no_direction",
            Self::BadFlux { code, .. } | Self::Contradiction { code, .. } => code,
            Self::UnknownAtom { .. } => "atom.unknown",
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
            Self::NoDirection { field, .. } => vec![("field", Text(field.clone()))],
            Self::BadFlux { text, .. } => {
                vec![("field", Text("flux".into())), ("value", Text(text.clone()))]
            }
            Self::UnknownAtom { name, suggestion, .. } => {
                named(("value", name), suggestion.as_deref())
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
