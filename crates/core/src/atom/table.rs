//! The embedded atomic table: parsed once, never changed.
//!
//! `data/convert_atoms.py` makes it; keys carry their unit as the last word.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use serde::Deserialize;

use super::dipoles::Dipoles;
use super::number::DataStatus;

const TEXT: &str = include_str!("../../data/atoms.json");
const FORMAT: &str = "fluxloom-atomic-table";

/// Symbol, atomic number and English names of the elements in the table.
const ELEMENTS: [(&str, u32, &[&str]); 7] = [
    ("Li", 3, &["lithium"]),
    ("Na", 11, &["sodium"]),
    ("K", 19, &["potassium"]),
    ("Rb", 37, &["rubidium"]),
    ("Sr", 38, &["strontium"]),
    ("Cs", 55, &["caesium", "cesium"]),
    ("Yb", 70, &["ytterbium"]),
];

/// One number as it stands in the table.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct Entry {
    pub value: f64,
    pub uncertainty: Option<f64>,
    pub status: DataStatus,
    pub source: String,
}

/// One optical line as it stands in the table.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct LineRow {
    pub excited_spin: f64,
    pub frequency_hz: Entry,
    pub wavelength_nm: Option<Entry>,
    pub linewidth_hz: Entry,
    pub lifetime_s: Option<Entry>,
    pub dipole_au: Entry,
    pub hyperfine_a_hz: Option<Entry>,
    pub hyperfine_b_hz: Option<Entry>,
}

/// One isotope as it stands in the table.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct IsotopeRow {
    pub ground_term: String,
    pub ground_spin: f64,
    pub note: Option<String>,
    pub mass_u: Entry,
    pub nuclear_spin: Entry,
    pub hyperfine_a_hz: Option<Entry>,
    pub g_j: Option<Entry>,
    pub g_i: Entry,
    pub residual_polarisability_au: Option<Entry>,
    pub lines: BTreeMap<String, LineRow>,
    #[serde(default)]
    pub strength_ratios: Vec<RatioRow>,
}

/// A measured ratio of two lines' strengths (squared reduced dipole elements):
/// the element of `under` was computed from that of `over` with it.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct RatioRow {
    pub over: String,
    pub under: String,
    pub strength_ratio: Entry,
}

/// One isotope with what its name says.
#[derive(Debug)]
pub(super) struct Isotope {
    pub name: String,
    pub symbol: &'static str,
    pub element_names: &'static [&'static str],
    pub mass_number: u32,
    /// Neutrons of the neutral atom: their parity decides its statistics.
    pub neutrons: u32,
    pub row: IsotopeRow,
    dipoles: OnceLock<Dipoles>,
}

impl Isotope {
    /// What the spins say about the lines, computed when first asked for.
    pub fn dipoles(&'static self) -> &'static Dipoles {
        self.dipoles.get_or_init(|| {
            let excited: Vec<i32> =
                self.row.lines.values().map(|line| twice(line.excited_spin)).collect();
            Dipoles::new(twice(self.row.nuclear_spin.value), twice(self.row.ground_spin), &excited)
        })
    }
}

/// Twice a spin of the table.
fn twice(spin: f64) -> i32 {
    // A test holds that the table's spins are small multiples of one half.
    #[allow(clippy::cast_possible_truncation)]
    let whole = (2.0 * spin).round() as i32;
    whole
}

#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct RawTable {
    format: String,
    version: u32,
    #[serde(rename = "made_by")]
    _made_by: String,
    status_legend: BTreeMap<DataStatus, String>,
    sources: BTreeMap<String, String>,
    conventions: BTreeMap<String, String>,
    atoms: BTreeMap<String, IsotopeRow>,
}

/// The whole table.
#[derive(Debug, Default)]
pub(super) struct Table {
    pub status_legend: BTreeMap<DataStatus, String>,
    pub sources: BTreeMap<String, String>,
    pub conventions: BTreeMap<String, String>,
    /// By mass number, then by name.
    pub isotopes: Vec<Isotope>,
}

/// The table. It is a part of the program and a test parses it, so that it
/// cannot be broken at run time; were it, no atom would be known.
pub(super) fn table() -> &'static Table {
    static TABLE: OnceLock<Table> = OnceLock::new();
    TABLE.get_or_init(|| parse(TEXT).unwrap_or_default())
}

/// What the legend says about a status; empty for one that is not in the table.
pub(super) fn status_meaning(status: DataStatus) -> &'static str {
    table().status_legend.get(&status).map_or("", String::as_str)
}

fn parse(text: &str) -> Result<Table, String> {
    let raw: RawTable = serde_json::from_str(text).map_err(|error| error.to_string())?;
    if raw.format != FORMAT || raw.version != 1 {
        return Err(format!("{} version {}", raw.format, raw.version));
    }
    let mut isotopes = Vec::with_capacity(raw.atoms.len());
    for (name, row) in raw.atoms {
        isotopes.push(isotope(&name, row).ok_or_else(|| format!("{name} is no isotope"))?);
    }
    isotopes.sort_by(|a, b| (a.mass_number, &a.name).cmp(&(b.mass_number, &b.name)));
    Ok(Table {
        status_legend: raw.status_legend,
        sources: raw.sources,
        conventions: raw.conventions,
        isotopes,
    })
}

fn isotope(name: &str, row: IsotopeRow) -> Option<Isotope> {
    let digits = name.chars().take_while(char::is_ascii_digit).count();
    let (mass_number, symbol) = name.split_at_checked(digits)?;
    let mass_number: u32 = mass_number.parse().ok()?;
    let (symbol, protons, element_names) =
        ELEMENTS.into_iter().find(|(known, ..)| *known == symbol)?;
    let neutrons = mass_number.checked_sub(protons)?;
    Some(Isotope {
        name: name.to_owned(),
        symbol,
        element_names,
        mass_number,
        neutrons,
        row,
        dipoles: OnceLock::new(),
    })
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn the_embedded_table_parses() {
        let table = parse(TEXT).unwrap();
        assert_eq!(table.isotopes.len(), 12);
        assert_eq!(table.status_legend.len(), 3);
        assert!(table.sources.contains_key("AME"));
        assert!(table.conventions.contains_key("reduced_matrix_element"));
    }

    #[test]
    fn broken_tables_are_refused() {
        assert!(parse("{}").is_err());
        assert!(parse(&TEXT.replacen("\"40K\"", "\"40Kx\"", 1)).is_err());
        assert!(parse(&TEXT.replacen("\"version\": 1", "\"version\": 2", 1)).is_err());
    }

    #[test]
    fn spins_and_masses_make_sense() {
        for isotope in &table().isotopes {
            let row = &isotope.row;
            // Nucleons and I are both whole, or I is half-integer for an odd number of them.
            let half = f64::from(isotope.mass_number % 2) / 2.0;
            assert_eq!((row.nuclear_spin.value - half).fract(), 0.0, "{}", isotope.name);
            assert_eq!(row.mass_u.value.round(), f64::from(isotope.mass_number));
            assert_eq!(row.ground_spin > 0.0, row.hyperfine_a_hz.is_some());
            assert_eq!(row.ground_spin > 0.0, row.g_j.is_some());
            // What the level formulas are written for.
            assert!(row.ground_spin == 0.0 || row.ground_spin == 0.5);
            assert!(row.nuclear_spin.value > 0.0 && row.nuclear_spin.value < 10.0);
            assert_eq!(row.lines.len(), 2);
            for (name, line) in &row.lines {
                // One-photon lines: J changes by at most one.
                assert!((line.excited_spin - row.ground_spin).abs() <= 1.0, "{name}");
                // A quadrupole splitting needs a spin of at least one on both sides.
                let quadrupole = line.excited_spin >= 1.0 && row.nuclear_spin.value >= 1.0;
                assert_eq!(line.hyperfine_b_hz.is_some(), quadrupole, "{} {name}", isotope.name);
            }
        }
    }
}
