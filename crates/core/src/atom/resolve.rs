//! From the table and the user's own numbers to the numbers of an atom.
//!
//! With nu the frequency, lambda the vacuum wavelength, gamma the full
//! linewidth in Hz, tau the lifetime and d the reduced dipole element of a line:
//!
//! ```text
//! lambda = c/nu,   gamma = 1/(2 pi tau),   gamma proportional to d^2 nu^3
//! ```
//!
//! The factor of the last relation is taken from the table, so that giving a
//! number the value that it has already moves nothing. What is left untouched
//! keeps the table's digits. A frequency of the user's leaves d where it is:
//! d is the property of the atom that does not know of nu.

use std::f64::consts::PI;

use super::number::Number;
use super::own::{Own, full_name};
use super::table::{Entry, Isotope, LineRow};
use crate::constants::SPEED_OF_LIGHT_M_PER_S;

/// Numbers of the ground state.
#[derive(Debug, Clone, PartialEq)]
#[non_exhaustive]
pub struct Ground {
    /// Mass of the neutral atom, u.
    pub mass_u: Number,
    /// Nuclear spin I.
    pub nuclear_spin: Number,
    /// Magnetic hyperfine constant A over h, Hz; `None` if J = 0.
    pub hyperfine_a_hz: Option<Number>,
    /// Lande factor of the electrons; `None` if J = 0.
    pub g_j: Option<Number>,
    /// Factor of the nucleus, in Bohr magnetons: H = `mu_B` B `g_I` `I_z`.
    pub g_i: Number,
    /// Scalar polarisability of everything but the listed lines, atomic units;
    /// `None` if the table has none.
    pub residual_polarisability_au: Option<Number>,
}

/// One optical line from the ground state.
#[derive(Debug, Clone, PartialEq)]
#[non_exhaustive]
pub struct Line {
    /// Name, such as `D1` or `1S0-3P1`.
    pub name: &'static str,
    /// Electronic angular momentum J' of the excited state.
    pub excited_spin: f64,
    /// Frequency of the centre of gravity, Hz.
    pub frequency_hz: Number,
    /// Vacuum wavelength, nm.
    pub wavelength_nm: Number,
    /// Full natural linewidth over 2 pi, Hz.
    pub linewidth_hz: Number,
    /// Lifetime against decay on this line, s.
    pub lifetime_s: Number,
    /// Reduced dipole element in the symmetric 3j convention, e a0.
    pub dipole_au: Number,
    /// Magnetic hyperfine constant A of the excited state over h, Hz.
    pub hyperfine_a_hz: Option<Number>,
    /// Quadrupole hyperfine constant B of the excited state over h, Hz.
    pub hyperfine_b_hz: Option<Number>,
}

impl Ground {
    pub(super) fn new(isotope: &'static Isotope, own: &Own) -> Self {
        let row = &isotope.row;
        Self {
            mass_u: given(own, "mass_u").unwrap_or_else(|| Number::tabulated(&row.mass_u)),
            nuclear_spin: Number::tabulated(&row.nuclear_spin),
            hyperfine_a_hz: pick(own, "hyperfine_a_hz", row.hyperfine_a_hz.as_ref()),
            g_j: pick(own, "g_j", row.g_j.as_ref()),
            g_i: given(own, "g_i").unwrap_or_else(|| Number::tabulated(&row.g_i)),
            residual_polarisability_au: pick(
                own,
                "residual_polarisability_au",
                row.residual_polarisability_au.as_ref(),
            ),
        }
    }

    /// Every number with its name, in the order of the table.
    pub(super) fn numbers(&self) -> impl Iterator<Item = (&'static str, &Number)> {
        [
            ("mass_u", Some(&self.mass_u)),
            ("nuclear_spin", Some(&self.nuclear_spin)),
            ("hyperfine_a_hz", self.hyperfine_a_hz.as_ref()),
            ("g_j", self.g_j.as_ref()),
            ("g_i", Some(&self.g_i)),
            ("residual_polarisability_au", self.residual_polarisability_au.as_ref()),
        ]
        .into_iter()
        .filter_map(|(field, number)| Some((field, number?)))
    }
}

impl Line {
    pub(super) fn new(name: &'static str, row: &'static LineRow, own: &Own) -> Self {
        let own_of = |field: &str| given(own, &full_name(Some(name), field));
        let hyperfine = |field: &str, entry: Option<&'static Entry>| {
            own_of(field).or_else(|| entry.map(Number::tabulated))
        };
        let (frequency_hz, wavelength_nm, moved_by) = position(name, row, own);
        let strength = Strength::new(name, row, own, frequency_hz.value, moved_by);
        Self {
            name,
            excited_spin: row.excited_spin,
            frequency_hz,
            wavelength_nm,
            linewidth_hz: strength.linewidth_hz,
            lifetime_s: strength.lifetime_s,
            dipole_au: strength.dipole_au,
            hyperfine_a_hz: hyperfine("hyperfine_a_hz", row.hyperfine_a_hz.as_ref()),
            hyperfine_b_hz: hyperfine("hyperfine_b_hz", row.hyperfine_b_hz.as_ref()),
        }
    }

    /// Every number with its name, in the order of the table.
    pub(super) fn numbers(&self) -> impl Iterator<Item = (&'static str, &Number)> {
        [
            ("frequency_hz", Some(&self.frequency_hz)),
            ("wavelength_nm", Some(&self.wavelength_nm)),
            ("linewidth_hz", Some(&self.linewidth_hz)),
            ("lifetime_s", Some(&self.lifetime_s)),
            ("dipole_au", Some(&self.dipole_au)),
            ("hyperfine_a_hz", self.hyperfine_a_hz.as_ref()),
            ("hyperfine_b_hz", self.hyperfine_b_hz.as_ref()),
        ]
        .into_iter()
        .filter_map(|(field, number)| Some((field, number?)))
    }
}

/// Frequency and wavelength, and the field that the user gave of the two.
fn position(
    name: &str,
    row: &'static LineRow,
    own: &Own,
) -> (Number, Number, Option<&'static str>) {
    let (frequency, wavelength) = ("frequency_hz", "wavelength_nm");
    if let Some(given) = given(own, &full_name(Some(name), frequency)) {
        let value = SPEED_OF_LIGHT_M_PER_S / given.value * 1e9;
        return (given, follows(value, name, &[frequency]), Some(frequency));
    }
    if let Some(given) = given(own, &full_name(Some(name), wavelength)) {
        let value = SPEED_OF_LIGHT_M_PER_S / given.value * 1e9;
        return (follows(value, name, &[wavelength]), given, Some(wavelength));
    }
    let frequency = Number::tabulated(&row.frequency_hz);
    let wavelength = row.wavelength_nm.as_ref().map_or_else(
        || frequency.rewritten(SPEED_OF_LIGHT_M_PER_S / frequency.value * 1e9, "c/frequency"),
        Number::tabulated,
    );
    (frequency, wavelength, None)
}

/// The three ways to say how strong a line is.
struct Strength {
    linewidth_hz: Number,
    lifetime_s: Number,
    dipole_au: Number,
}

impl Strength {
    /// `moved_by` is the field by which the user moved the line, if one did.
    fn new(
        name: &str,
        row: &'static LineRow,
        own: &Own,
        frequency_hz: f64,
        moved_by: Option<&'static str>,
    ) -> Self {
        let own_of = |field: &str| given(own, &full_name(Some(name), field));
        let linewidth = Number::tabulated(&row.linewidth_hz);
        let dipole = Number::tabulated(&row.dipole_au);
        let growth = (frequency_hz / row.frequency_hz.value).powi(3);
        let because = |field: &'static str| -> Vec<&'static str> {
            std::iter::once(field).chain(moved_by).collect()
        };
        let inverse = |value: f64| 1.0 / (2.0 * PI * value);
        let dipole_for = |linewidth_hz: f64, causes: &[&str]| {
            let value = dipole.value * (linewidth_hz / linewidth.value / growth).sqrt();
            follows(value, name, causes)
        };

        if let Some(dipole_au) = own_of("dipole_au") {
            let value = linewidth.value * (dipole_au.value / dipole.value).powi(2) * growth;
            let causes = because("dipole_au");
            let linewidth_hz = follows(value, name, &causes);
            let lifetime_s = follows(inverse(value), name, &causes);
            return Self { linewidth_hz, lifetime_s, dipole_au };
        }
        if let Some(linewidth_hz) = own_of("linewidth_hz") {
            let lifetime_s = follows(inverse(linewidth_hz.value), name, &["linewidth_hz"]);
            let dipole_au = dipole_for(linewidth_hz.value, &because("linewidth_hz"));
            return Self { linewidth_hz, lifetime_s, dipole_au };
        }
        if let Some(lifetime_s) = own_of("lifetime_s") {
            let linewidth_hz = follows(inverse(lifetime_s.value), name, &["lifetime_s"]);
            let dipole_au = dipole_for(linewidth_hz.value, &because("lifetime_s"));
            return Self { linewidth_hz, lifetime_s, dipole_au };
        }
        if let Some(cause) = moved_by {
            // The dipole element's uncertainty is still what limits the linewidth.
            let mut linewidth_hz = follows(linewidth.value * growth, name, &[cause]);
            linewidth_hz.uncertainty = linewidth.uncertainty.map(|size| size * growth);
            let lifetime_s = follows(inverse(linewidth_hz.value), name, &[cause]);
            return Self { linewidth_hz, lifetime_s, dipole_au: dipole };
        }
        let lifetime_s = row.lifetime_s.as_ref().map_or_else(
            || linewidth.rewritten(inverse(linewidth.value), "1/(2 pi linewidth)"),
            Number::tabulated,
        );
        Self { linewidth_hz: linewidth, lifetime_s, dipole_au: dipole }
    }
}

fn given(own: &Own, key: &str) -> Option<Number> {
    own.get(key).map(|number| Number::own(number.value, number.source.clone()))
}

fn pick(own: &Own, key: &str, entry: Option<&'static Entry>) -> Option<Number> {
    given(own, key).or_else(|| entry.map(Number::tabulated))
}

fn follows(value: f64, line: &str, causes: &[&str]) -> Number {
    let names: Vec<String> = causes.iter().map(|field| full_name(Some(line), field)).collect();
    Number::own(value, format!("follows from {} supplied by the user", names.join(" and ")))
}
