//! The numbers that a user put in the place of the table's.
//!
//! Quantities that follow from each other form a group (frequency and
//! wavelength; linewidth, lifetime and dipole element of a line): one of a
//! group may be given, the others follow (see [`super::resolve`]).

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use super::table::Isotope;
use crate::constants::SPEED_OF_LIGHT_M_PER_S;
use crate::error::Error;
use crate::fault::suggest;
use crate::limits::{WAVELENGTH_NM, plain};

/// Longer names are no slip of the pen, and comparing them costs time.
const LONGEST_SLIP: usize = 80;

/// What every atom may be given, and lines below it.
const GROUND_FIELDS: [&str; 5] =
    ["mass_u", "hyperfine_a_hz", "g_j", "g_i", "residual_polarisability_au"];
const LINE_FIELDS: [&str; 7] = [
    "frequency_hz",
    "wavelength_nm",
    "linewidth_hz",
    "lifetime_s",
    "dipole_au",
    "hyperfine_a_hz",
    "hyperfine_b_hz",
];
const GROUPS: [&[&str]; 2] =
    [&["frequency_hz", "wavelength_nm"], &["linewidth_hz", "lifetime_s", "dipole_au"]];

/// Values outside cannot belong to an atom: they are slips of a unit, and would
/// overflow later. A frequency has the limits of a wavelength.
const RANGES: [(&str, f64, f64); 9] = [
    ("mass_u", 0.5, 500.0),
    (
        "frequency_hz",
        SPEED_OF_LIGHT_M_PER_S / (WAVELENGTH_NM.high * 1e-9),
        SPEED_OF_LIGHT_M_PER_S / (WAVELENGTH_NM.low * 1e-9),
    ),
    ("linewidth_hz", 1e-9, 1e12),
    ("lifetime_s", 1e-13, 1e9),
    ("dipole_au", 1e-9, 1e3),
    ("hyperfine_a_hz", -1e12, 1e12),
    ("hyperfine_b_hz", -1e12, 1e12),
    ("g_j", -100.0, 100.0),
    ("g_i", -100.0, 100.0),
];
const OTHER_RANGE: (f64, f64) = (-1e6, 1e6);

/// One number of the user's.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct OwnNumber {
    pub value: f64,
    pub source: String,
}

/// All numbers of the user's, by name.
pub(super) type Own = BTreeMap<String, OwnNumber>;

/// A number to be put in: name, value, source.
pub(super) type Change<'a> = (&'a str, f64, &'a str);

/// `earlier` with `changes` put in; a change displaces what was given earlier in its group.
pub(super) fn merged(
    isotope: &'static Isotope,
    earlier: &Own,
    changes: &[Change<'_>],
) -> Result<Own, Error> {
    let mut own = earlier.clone();
    for (index, (key, value, source)) in changes.iter().enumerate() {
        check_source(isotope, source)?;
        check_key(isotope, key, *value)?;
        check_value(isotope, key, *value)?;
        for (other, ..) in changes.iter().take(index) {
            check_pair(isotope, (key, *value), other)?;
        }
        own.retain(|other, _| !same_group(key, other));
        own.insert(
            (*key).to_owned(),
            OwnNumber { value: *value, source: source.trim().to_owned() },
        );
    }
    Ok(own)
}

/// The name of a number of a line, or of the ground state.
pub(super) fn full_name(line: Option<&str>, field: &str) -> String {
    line.map_or_else(|| field.to_owned(), |line| format!("{line}.{field}"))
}

/// [`Error::UnknownData`] with the nearest of `known`.
pub(super) fn unknown(isotope: &Isotope, key: &str, known: &[String]) -> Error {
    let known = known.iter().map(String::as_str);
    let suggestion = if key.len() > LONGEST_SLIP { None } else { suggest(key, known) };
    Error::UnknownData {
        atom: isotope.name.clone(),
        key: key.to_owned(),
        suggestion: suggestion.map(str::to_owned),
    }
}

fn parts(key: &str) -> (Option<&str>, &str) {
    key.split_once('.').map_or((None, key), |(line, field)| (Some(line), field))
}

fn same_group(key: &str, other: &str) -> bool {
    let ((line, field), (other_line, other_field)) = (parts(key), parts(other));
    line.is_some()
        && line == other_line
        && GROUPS.iter().any(|group| group.contains(&field) && group.contains(&other_field))
}

fn bad(isotope: &Isotope, key: &str, value: f64, why: String) -> Error {
    Error::BadData { atom: isotope.name.clone(), key: key.to_owned(), value, why }
}

/// Own numbers need a source.
pub(super) fn check_source(isotope: &Isotope, source: &str) -> Result<(), Error> {
    if source.trim().is_empty() {
        return Err(Error::Contradiction {
            code: "atom.no_source",
            message: format!(
                "{}: own numbers come without a source: say where they are from, such as \
                 source = \"our own measurement\"; it is shown with every result",
                isotope.name
            ),
        });
    }
    Ok(())
}

fn check_key(isotope: &Isotope, key: &str, value: f64) -> Result<(), Error> {
    if replaceable(isotope).iter().any(|known| known == key) {
        return Ok(());
    }
    let (line, field) = parts(key);
    let defining = match line {
        None => ["nuclear_spin", "ground_spin"].contains(&field),
        Some(line) => field == "excited_spin" && isotope.row.lines.contains_key(line),
    };
    if defining {
        let why = "it defines the isotope and cannot be replaced".to_owned();
        return Err(bad(isotope, key, value, why));
    }
    Err(unknown(isotope, key, &replaceable(isotope)))
}

/// The names that a user may give, in the order of the table.
fn replaceable(isotope: &Isotope) -> Vec<String> {
    let row = &isotope.row;
    let mut names = Vec::new();
    for field in GROUND_FIELDS {
        // A ground state without electronic angular momentum has no g_J and no
        // hyperfine splitting; a residual polarisability it has, tabulated or not.
        let exists = match field {
            "hyperfine_a_hz" => row.hyperfine_a_hz.is_some(),
            "g_j" => row.g_j.is_some(),
            _ => true,
        };
        if exists {
            names.push(field.to_owned());
        }
    }
    for (name, line) in &row.lines {
        for field in LINE_FIELDS {
            let exists = match field {
                "hyperfine_a_hz" => line.hyperfine_a_hz.is_some(),
                "hyperfine_b_hz" => line.hyperfine_b_hz.is_some(),
                _ => true,
            };
            if exists {
                names.push(full_name(Some(name), field));
            }
        }
    }
    names
}

fn check_value(isotope: &Isotope, key: &str, value: f64) -> Result<(), Error> {
    let (_, field) = parts(key);
    if field == "wavelength_nm" {
        return WAVELENGTH_NM.check_as(value, key).map(|_| ());
    }
    let range = RANGES.iter().find(|(name, ..)| *name == field);
    let (low, high) = range.map_or(OTHER_RANGE, |(_, low, high)| (*low, *high));
    if value.is_finite() && (low..=high).contains(&value) {
        return Ok(());
    }
    let (low, high) = (plain(low), plain(high));
    Err(bad(isotope, key, value, format!("give a number from {low} to {high}")))
}

fn check_pair(isotope: &Isotope, change: (&str, f64), other: &str) -> Result<(), Error> {
    let (key, value) = change;
    if key == other {
        return Err(bad(isotope, key, value, "it is given twice; give it once".to_owned()));
    }
    if same_group(key, other) {
        let why = format!("{other} is given too; give one of them, the others follow from it");
        return Err(bad(isotope, key, value, why));
    }
    Ok(())
}
