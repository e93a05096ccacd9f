//! The numbers of an atom that its response to fields and light is computed
//! from, as plain values.
//!
//! They are apart from the table so that one of them can be moved by its
//! uncertainty and everything computed anew (see [`super::uncertainty`]).

use super::dipoles::Dipoles;
use super::manifold::{Hyperfine, Manifold};
use super::{Atom, DataStatus, Number};

/// One optical line.
#[derive(Debug, Clone, PartialEq)]
pub struct LineStructure {
    /// Name, such as `D1`.
    pub name: &'static str,
    /// Frequency between the centres of gravity, Hz.
    pub frequency_hz: f64,
    /// Full natural linewidth, Hz.
    pub linewidth_hz: f64,
    /// Reduced dipole element, symmetric 3j convention, e a0.
    pub dipole_au: f64,
    /// Hyperfine constants of the excited level.
    pub hyperfine: Hyperfine,
}

/// The numbers of an atom in fields and light.
#[derive(Debug, Clone, PartialEq)]
pub struct Structure {
    /// Name of the isotope.
    pub name: &'static str,
    /// Hyperfine constants of the ground level; zero if J = 0.
    pub hyperfine: Hyperfine,
    /// Lande factor of the electrons; zero if J = 0.
    pub g_j: f64,
    /// Factor of the nucleus in Bohr magnetons.
    pub g_i: f64,
    /// Scalar polarisability beyond the listed lines, atomic units; zero if unknown.
    pub residual_au: f64,
    /// The optical lines.
    pub lines: Vec<LineStructure>,
    pub(crate) dipoles: &'static Dipoles,
}

impl Structure {
    /// The ground manifold.
    #[must_use]
    pub fn manifold(&self) -> &'static Manifold {
        &self.dipoles.manifold
    }

    /// Zero-field energy over h of a ground level from the centre of gravity, Hz.
    #[must_use]
    pub fn ground_hz(&self, twice_f: i32) -> f64 {
        self.hyperfine.shift_hz(twice_f)
    }
}

impl Atom {
    /// The numbers behind its response to fields and light.
    #[must_use]
    pub fn structure(&self) -> Structure {
        let value = |number: &Option<Number>| number.as_ref().map_or(0.0, |n| n.value);
        let dipoles = self.isotope.dipoles();
        let twice_i = dipoles.manifold.twice_i;
        let lines = self.lines.iter().zip(&dipoles.lines).map(|(line, geometry)| LineStructure {
            name: line.name,
            frequency_hz: line.frequency_hz.value,
            linewidth_hz: line.linewidth_hz.value,
            dipole_au: line.dipole_au.value,
            hyperfine: Hyperfine {
                twice_i,
                twice_j: geometry.twice_j,
                a_hz: value(&line.hyperfine_a_hz),
                b_hz: value(&line.hyperfine_b_hz),
            },
        });
        Structure {
            name: self.name(),
            hyperfine: Hyperfine {
                twice_i,
                twice_j: dipoles.manifold.twice_j,
                a_hz: value(&self.ground.hyperfine_a_hz),
                b_hz: 0.0,
            },
            g_j: value(&self.ground.g_j),
            g_i: self.ground.g_i.value,
            residual_au: value(&self.ground.residual_polarisability_au),
            lines: lines.collect(),
            dipoles,
        }
    }

    /// The states of the ground manifold.
    #[must_use]
    pub fn manifold(&self) -> &'static Manifold {
        &self.isotope.dipoles().manifold
    }

    /// Names of the numbers behind the ground levels that no source confirms.
    #[must_use]
    pub fn unconfirmed_in_fields(&self) -> Vec<String> {
        let magnetic = ["hyperfine_a_hz", "g_j", "g_i"];
        self.unconfirmed(|name| magnetic.contains(&name))
    }

    /// Names of the numbers behind the response to light that no source
    /// confirms. What follows from them (linewidth, wavelength) is not repeated.
    #[must_use]
    pub fn unconfirmed_in_light(&self) -> Vec<String> {
        let optical = ["frequency_hz", "dipole_au", "hyperfine_a_hz", "hyperfine_b_hz"];
        self.unconfirmed(|name| {
            let field = name.rsplit_once('.').map_or(name, |(_, field)| field);
            optical.contains(&field) || field == "residual_polarisability_au"
        })
    }

    /// Whether the table knows the polarisability beyond the listed lines.
    #[must_use]
    pub fn has_residual(&self) -> bool {
        self.ground.residual_polarisability_au.is_some()
    }

    fn unconfirmed(&self, counts: impl Fn(&str) -> bool) -> Vec<String> {
        self.numbers()
            .filter(|(name, number)| number.status == DataStatus::FromMemory && counts(name))
            .map(|(name, _)| name)
            .collect()
    }
}
