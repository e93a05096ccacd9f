//! The one table of settings: what every key of an apparatus file means, what
//! it may hold, and what stands in for it when the file is silent.
//!
//! The checks, the accessors, the changes and the writing of files all read
//! this table; a key exists if and only if it has a row here. A `*` in a path
//! stands for a name that the file chooses. Defaults are either plain geometry
//! or common practice with its source; a number that only the laboratory can
//! know has none.

mod atoms;
mod machines;
mod optics;
mod ranges;

use fluxloom_core::limits::Limit;

use crate::files::path::is_bare;

/// What a key may hold.
#[derive(Debug, Clone, Copy, PartialEq)]
#[non_exhaustive]
pub enum Kind {
    /// The name of the file format.
    Format,
    /// The version of the file format.
    Version,
    /// A number, or a measured table around one.
    Number(Limit),
    /// A whole number, or a measured table around one.
    Count(Limit),
    /// A whole number other than 0, or a measured table around one.
    NonZero(Limit),
    /// One number, or two for the two axes of an ellipse.
    OneOrTwo(Limit),
    /// Where the neighbouring setting named second may go: two numbers, ascending.
    Range(Limit, Option<&'static str>),
    /// Three numbers of which only the direction counts.
    Vector,
    /// Free text.
    Text,
    /// true or false.
    Flag,
    /// One of some words.
    Choice(&'static [&'static str]),
    /// The name of an isotope.
    Atom,
    /// A hyperfine state "F,m".
    State,
    /// A table from pairs of states, "F,m F,m", to numbers.
    StatePairs(Limit),
    /// The name of an entry of another table.
    Name(&'static str),
    /// Some different names of entries of another table, from least to most.
    Names {
        /// The other table.
        table: &'static str,
        /// The fewest names.
        least: usize,
        /// The most names.
        most: usize,
    },
    /// The path of another setting, one of these patterns.
    Setting(&'static [&'static str]),
}

impl Kind {
    /// Whether a measured table may stand here.
    #[must_use]
    pub fn is_measurable(&self) -> bool {
        matches!(self, Self::Number(_) | Self::Count(_) | Self::NonZero(_) | Self::OneOrTwo(_))
    }

    /// Whether the value is a table of its own rather than part of the file's layout.
    #[must_use]
    pub fn is_map(&self) -> bool {
        matches!(self, Self::StatePairs(_))
    }
}

/// A value that stands in for a silent file.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Standard {
    /// A number.
    Number(f64),
    /// A whole number.
    Whole(i64),
    /// true or false.
    Flag(bool),
    /// A text.
    Text(&'static str),
    /// A direction.
    Vector([f64; 3]),
}

/// Whether a key must be there.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Need {
    /// Wherever its table is.
    Required,
    /// No; without it nothing can be said about the quantity.
    Optional,
    /// No; the value stands in, for the reason given.
    Default(Standard, &'static str),
}

/// How well a number is known that is given without a standard error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Spread {
    /// A fraction of the value.
    Relative(f64),
    /// In the unit of the value.
    Absolute(f64),
}

/// A row of the table.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Key {
    /// Path with `*` for names that the file chooses.
    pub pattern: &'static str,
    /// What it may hold.
    pub kind: Kind,
    /// Whether it must be there.
    pub need: Need,
    /// What it means.
    pub about: &'static str,
    /// How well it is known if the file does not say, with the source.
    pub spread: Option<(Spread, &'static str)>,
}

impl Key {
    const fn new(pattern: &'static str, kind: Kind, need: Need, about: &'static str) -> Self {
        Self { pattern, kind, need, about, spread: None }
    }

    const fn known_to(mut self, spread: Spread, source: &'static str) -> Self {
        self.spread = Some((spread, source));
        self
    }

    /// The last word of the path.
    #[must_use]
    pub fn name(&self) -> &'static str {
        self.pattern.rsplit('.').next().unwrap_or(self.pattern)
    }

    /// The path of its table, empty at the top.
    #[must_use]
    pub fn table(&self) -> &'static str {
        self.pattern.rsplit_once('.').map_or("", |(table, _)| table)
    }
}

/// Tables that every apparatus has.
pub const NEEDED_TABLES: [&str; 3] = ["", "cloud", "lattice"];

/// The keys of a measured table around a number.
pub const MEASURED_KEYS: [&str; 4] = ["value", "standard_error", "data", "measured"];

/// Every row, in the order of a well-arranged file.
pub fn all() -> impl Iterator<Item = &'static Key> {
    [atoms::KEYS, optics::KEYS, machines::KEYS].into_iter().flatten()
}

/// The smallest standard error of a measured number is nothing at all.
pub const STANDARD_ERROR: Limit = ranges::STANDARD_ERROR;

/// What a path leads to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Found {
    /// A row of the table.
    Setting(&'static Key),
    /// One of [`MEASURED_KEYS`] inside the measured table of a row.
    Part(&'static Key, &'static str),
    /// An entry of a row that is a map.
    Pair(&'static Key),
    /// A table of the file, with its pattern.
    Table(&'static str),
}

/// What the keys of a path lead to, if anything.
pub fn find<S: AsRef<str>>(keys: &[S]) -> Option<Found> {
    let row = |keys: &[S]| all().find(|key| fits(key.pattern, keys));
    if let Some(key) = row(keys) {
        return Some(Found::Setting(key));
    }
    if let Some((last, parent)) = keys.split_last()
        && let Some(key) = row(parent)
    {
        if key.kind.is_map() {
            return Some(Found::Pair(key));
        }
        let part = MEASURED_KEYS.into_iter().find(|part| *part == last.as_ref());
        return part.filter(|_| key.kind.is_measurable()).map(|part| Found::Part(key, part));
    }
    tables().find(|table| fits(table, keys)).map(Found::Table)
}

/// Every table's pattern, the ones with names of the file's choice included.
pub fn tables() -> impl Iterator<Item = &'static str> {
    let mut seen = std::collections::BTreeSet::new();
    all()
        .flat_map(|key| {
            let table = key.table();
            let parent = table.strip_suffix(".*").unwrap_or(table);
            [parent, table]
        })
        .filter(move |table| !table.is_empty() && seen.insert(*table))
}

/// The rows directly in the table of this pattern.
pub fn rows(table: &str) -> impl Iterator<Item = &'static Key> {
    all().filter(move |key| key.table() == table)
}

/// Whether the keys spell this pattern.
fn fits<S: AsRef<str>>(pattern: &str, keys: &[S]) -> bool {
    let mut words = pattern.split('.');
    let all = keys.iter().all(|key| match words.next() {
        Some("*") => is_bare(key.as_ref()),
        Some(word) => word == key.as_ref(),
        None => false,
    });
    all && words.next().is_none()
}
