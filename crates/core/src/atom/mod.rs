//! Isotopes: masses, spins, hyperfine constants and optical lines, each number
//! with its uncertainty, status and source.
//!
//! An [`Atom`] is an isotope of the embedded table, perhaps with numbers of the
//! user's own in place of the table's ([`Atom::with_data`]). Names of numbers
//! end in their unit; numbers of a line stand after its name:
//! `mass_u`, `hyperfine_a_hz`, `D1.dipole_au`.
//!
//! Single-photon recoil: `E_R/h = h/(2 m lambda^2)`, `v = h/(m lambda)`.

mod breit_rabi;
mod coverage;
mod dipoles;
mod insensitive;
mod levels;
mod manifold;
mod name;
mod number;
mod own;
mod raw;
mod resolve;
mod state;
mod structure;
mod table;
mod uncertainty;

use serde::{Deserialize, Serialize};

pub use levels::GroundLevels;
pub(crate) use levels::Levels;
pub use manifold::{Hyperfine, Manifold};
pub use number::{DataSource, DataStatus, Number};
pub use resolve::{Ground, Line};
pub use state::{State, halves_text};
pub use structure::{LineStructure, Structure};
pub use uncertainty::{Uncertain, standard_errors, standard_errors_of_all};

use crate::constants::{ATOMIC_MASS_KG, PLANCK_J_S};
use crate::error::Error;
use crate::limits::WAVELENGTH_NM;
use own::{Change, Own};
use raw::RawAtom;
use table::{Isotope, table};

/// Whether atoms of one kind are bosons or fermions.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Statistics {
    /// An even number of nucleons and electrons together.
    Boson,
    /// An odd number of nucleons and electrons together.
    Fermion,
}

impl Statistics {
    /// `"boson"` or `"fermion"`.
    #[must_use]
    pub fn as_str(self) -> &'static str {
        match self {
            Self::Boson => "boson",
            Self::Fermion => "fermion",
        }
    }
}

impl std::fmt::Display for Statistics {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.as_str())
    }
}

/// An isotope with its numbers.
///
/// Two atoms are equal if they are the same isotope with the same own numbers
/// from the same sources.
#[derive(Clone, Serialize, Deserialize)]
#[serde(try_from = "RawAtom", into = "RawAtom")]
pub struct Atom {
    isotope: &'static Isotope,
    own: Own,
    ground: Ground,
    lines: Vec<Line>,
}

impl Atom {
    /// The isotope called `name`, such as `40K` or `87Rb`.
    ///
    /// # Errors
    /// [`Error::UnknownAtom`], with the name that was probably meant: names are exact.
    pub fn new(name: &str) -> Result<Self, Error> {
        Ok(Self::resolved(name::find(name)?, Own::new()))
    }

    /// Every name that [`Atom::new`] takes, by mass number.
    #[must_use]
    pub fn available() -> Vec<&'static str> {
        table().isotopes.iter().map(|isotope| isotope.name.as_str()).collect()
    }

    /// This atom with numbers of the user's own, such as `("D1.dipole_au", 4.1075)`.
    ///
    /// `source` says where they come from and is shown with every result. Own
    /// numbers given earlier stay, unless a new one says the same thing.
    /// Frequency and wavelength of a line follow from each other, and so do
    /// linewidth, lifetime and dipole element: of each group one is given.
    /// Moving a line leaves its dipole element, unless linewidth or lifetime
    /// are the user's own.
    ///
    /// # Errors
    /// [`Error::UnknownData`] for a name that this atom does not have;
    /// [`Error::BadData`] for values that no atom has, for spins, and for two of
    /// one group; [`Error::OutOfRange`] for a wavelength outside its range;
    /// [`Error::Contradiction`] (`atom.no_source`) for an empty source.
    pub fn with_data<K: AsRef<str>>(
        &self,
        changes: &[(K, f64)],
        source: &str,
    ) -> Result<Self, Error> {
        own::check_source(self.isotope, source)?;
        let changes: Vec<Change<'_>> =
            changes.iter().map(|(key, value)| (key.as_ref(), *value, source)).collect();
        self.changed(&changes)
    }

    fn changed(&self, changes: &[Change<'_>]) -> Result<Self, Error> {
        Ok(Self::resolved(self.isotope, own::merged(self.isotope, &self.own, changes)?))
    }

    fn resolved(isotope: &'static Isotope, own: Own) -> Self {
        let ground = Ground::new(isotope, &own);
        let rows = isotope.row.lines.iter();
        let lines = rows.map(|(name, row)| Line::new(name, row, &own)).collect();
        Self { isotope, own, ground, lines }
    }

    /// Name, such as `40K`.
    #[must_use]
    pub fn name(&self) -> &'static str {
        &self.isotope.name
    }

    /// Number of nucleons.
    #[must_use]
    pub fn mass_number(&self) -> u32 {
        self.isotope.mass_number
    }

    /// Mass, kg.
    #[must_use]
    pub fn mass_kg(&self) -> f64 {
        self.ground.mass_u.value * ATOMIC_MASS_KG
    }

    /// Nuclear spin I.
    #[must_use]
    pub fn nuclear_spin(&self) -> f64 {
        self.ground.nuclear_spin.value
    }

    /// Electronic angular momentum J of the ground state: 1/2 or 0.
    #[must_use]
    pub fn ground_spin(&self) -> f64 {
        self.isotope.row.ground_spin
    }

    /// Spectroscopic term of the ground state, such as `1S0`.
    #[must_use]
    pub fn ground_term(&self) -> &'static str {
        &self.isotope.row.ground_term
    }

    /// Boson or fermion, as a neutral atom.
    #[must_use]
    pub fn statistics(&self) -> Statistics {
        // Protons and electrons pair off; the neutrons decide.
        if self.isotope.neutrons.is_multiple_of(2) {
            Statistics::Boson
        } else {
            Statistics::Fermion
        }
    }

    /// Total spins F of the ground state, largest first: I+J, ..., |I-J|.
    #[must_use]
    pub fn manifolds(&self) -> Vec<f64> {
        let (nucleus, electrons) = (self.nuclear_spin(), self.ground_spin());
        let lowest = (nucleus - electrons).abs();
        std::iter::successors(Some(nucleus + electrons), |f| Some(f - 1.0))
            .take_while(|f| *f >= lowest)
            .collect()
    }

    /// Numbers of the ground state.
    #[must_use]
    pub fn ground(&self) -> &Ground {
        &self.ground
    }

    /// Optical lines from the ground state, in the order of the table.
    #[must_use]
    pub fn lines(&self) -> &[Line] {
        &self.lines
    }

    /// Single-photon recoil energy over h, Hz.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a wavelength outside its range.
    pub fn recoil_hz(&self, wavelength_nm: f64) -> Result<f64, Error> {
        let wavelength_m = WAVELENGTH_NM.check(wavelength_nm)? * 1e-9;
        Ok(PLANCK_J_S / (2.0 * self.mass_kg() * wavelength_m * wavelength_m))
    }

    /// Single-photon recoil velocity, m/s.
    ///
    /// # Errors
    /// [`Error::OutOfRange`] for a wavelength outside its range.
    pub fn recoil_m_per_s(&self, wavelength_nm: f64) -> Result<f64, Error> {
        let wavelength_m = WAVELENGTH_NM.check(wavelength_nm)? * 1e-9;
        Ok(PLANCK_J_S / (self.mass_kg() * wavelength_m))
    }

    /// The number called `name`, such as `mass_u` or `D1.dipole_au`.
    ///
    /// # Errors
    /// [`Error::UnknownData`], with the name that was probably meant.
    pub fn number(&self, name: &str) -> Result<&Number, Error> {
        let found = self.numbers().find(|(known, _)| known == name);
        found.map(|(_, number)| number).ok_or_else(|| {
            let known: Vec<String> = self.numbers().map(|(known, _)| known).collect();
            own::unknown(self.isotope, name, &known)
        })
    }

    /// Every number of the table and of the user, with its pedigree, in the
    /// order of the table. A wavelength or lifetime that the table leaves out
    /// because it follows from another number is not repeated here.
    #[must_use]
    pub fn sources(&self) -> Vec<DataSource> {
        self.numbers()
            .filter(|(_, number)| number.listed)
            .map(|(name, number)| DataSource::new(name, number))
            .collect()
    }

    /// Measured ratios of line strengths, d_over^2/d_under^2, with which one of
    /// two dipole elements of the table was obtained (`D2/D1.strength_ratio`).
    /// They join the uncertainties of both elements.
    #[must_use]
    pub fn strength_ratios(&self) -> Vec<DataSource> {
        let rows = self.isotope.row.strength_ratios.iter();
        rows.map(|row| {
            let name = format!("{}/{}.strength_ratio", row.over, row.under);
            DataSource::new(name, &Number::tabulated(&row.strength_ratio))
        })
        .collect()
    }

    /// The user's own numbers by name: name, value, source.
    pub fn own_data(&self) -> impl Iterator<Item = (&str, f64, &str)> {
        self.own.iter().map(|(name, own)| (name.as_str(), own.value, own.source.as_str()))
    }

    /// What the table says about this isotope as a whole.
    #[must_use]
    pub fn note(&self) -> Option<&'static str> {
        let note = self.isotope.row.note.as_deref()?;
        Some(source_meaning(note).unwrap_or(note))
    }

    fn numbers(&self) -> impl Iterator<Item = (String, &Number)> {
        let ground = self.ground.numbers().map(|(field, number)| (field.to_owned(), number));
        let lines = self.lines.iter().flat_map(|line| {
            let name_of = |field| own::full_name(Some(line.name), field);
            line.numbers().map(move |(field, number)| (name_of(field), number))
        });
        ground.chain(lines)
    }
}

impl PartialEq for Atom {
    fn eq(&self, other: &Self) -> bool {
        self.isotope.name == other.isotope.name && self.own == other.own
    }
}

impl std::fmt::Debug for Atom {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "Atom({:?}", self.name())?;
        for (name, value, _) in self.own_data() {
            write!(f, ", {name} = {value:?}")?;
        }
        f.write_str(")")
    }
}

/// The keys that stand in capitals in sources, each with the work it means.
pub fn bibliography() -> impl Iterator<Item = (&'static str, &'static str)> {
    table().sources.iter().map(|(key, text)| (key.as_str(), text.as_str()))
}

/// The work that a key such as `STECK` means.
#[must_use]
pub fn source_meaning(key: &str) -> Option<&'static str> {
    table().sources.get(key).map(String::as_str)
}

/// The conventions that the numbers follow (signs, reduced elements), by topic.
pub fn conventions() -> impl Iterator<Item = (&'static str, &'static str)> {
    table().conventions.iter().map(|(topic, text)| (topic.as_str(), text.as_str()))
}
