//! One number of the atomic table: value, uncertainty, how far it is to be
//! trusted, and where it comes from.

use std::borrow::Cow;

use crate::documents::Document;
use serde::{Deserialize, Serialize};

use super::table::{Entry, status_meaning};

/// How far a number is to be trusted.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
pub enum DataStatus {
    /// Seen in a source, or exact by definition.
    #[serde(rename = "verified")]
    Verified,
    /// Passed an independent quantitative check.
    #[serde(rename = "consistency-checked")]
    ConsistencyChecked,
    /// Not confirmed in any source.
    #[serde(rename = "from memory, unverified")]
    FromMemory,
    /// Supplied by the user, or follows from a number that was.
    #[serde(rename = "supplied by the user")]
    Own,
}

impl DataStatus {
    /// The word that stands in tables, the same as in the embedded one.
    #[must_use]
    pub fn as_str(self) -> &'static str {
        match self {
            Self::Verified => "verified",
            Self::ConsistencyChecked => "consistency-checked",
            Self::FromMemory => "from memory, unverified",
            Self::Own => "supplied by the user",
        }
    }

    /// What the word means, in a sentence.
    #[must_use]
    pub fn meaning(self) -> &'static str {
        match self {
            Self::Own => "given by the user with a source, or computed here from such a number",
            listed => status_meaning(listed),
        }
    }

    /// Whether somebody stands behind the number: all but [`DataStatus::FromMemory`].
    #[must_use]
    pub fn is_confirmed(self) -> bool {
        self != Self::FromMemory
    }
}

impl std::fmt::Display for DataStatus {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.as_str())
    }
}

/// One number with its pedigree; its unit is the last word of its name.
#[derive(Debug, Clone, PartialEq)]
pub struct Number {
    /// The value, in the unit that its name ends in.
    pub value: f64,
    /// Standard uncertainty in the same unit; `None` if nobody states one.
    pub uncertainty: Option<f64>,
    /// How far it is to be trusted.
    pub status: DataStatus,
    /// Where it comes from; keys in capitals are explained by [`super::bibliography`].
    pub source: Cow<'static, str>,
    /// Whether it stands in the table or comes from the user, rather than being
    /// a mere rewriting of a number that does.
    pub(super) listed: bool,
}

impl Number {
    /// A number as the table has it.
    pub(super) fn tabulated(entry: &'static Entry) -> Self {
        Self {
            value: entry.value,
            uncertainty: entry.uncertainty,
            status: entry.status,
            source: Cow::Borrowed(&entry.source),
            listed: true,
        }
    }

    /// What the table leaves out because it is `self` written differently;
    /// `relation` names the rule, relative uncertainty and status are inherited.
    pub(super) fn rewritten(&self, value: f64, relation: &'static str) -> Self {
        Self {
            value,
            uncertainty: self.uncertainty.map(|own| own * (value / self.value).abs()),
            status: self.status,
            source: Cow::Borrowed(relation),
            listed: false,
        }
    }

    /// A number of the user's, or one that follows from it.
    pub(super) fn own(value: f64, source: String) -> Self {
        Self {
            value,
            uncertainty: None,
            status: DataStatus::Own,
            source: Cow::Owned(source),
            listed: true,
        }
    }
}

/// One row of [`super::Atom::sources`].
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct DataSource {
    /// Name of the number, such as `D1.dipole_au`.
    pub name: String,
    /// The value, in `unit`.
    pub value: f64,
    /// Standard uncertainty, in `unit`; `None` if nobody states one.
    pub uncertainty: Option<f64>,
    /// `"u"`, `"Hz"`, `"a.u."`, `"nm"`, `"s"`, or `"1"` for a bare number.
    pub unit: Cow<'static, str>,
    /// How far it is to be trusted.
    pub status: DataStatus,
    /// Where it comes from.
    pub source: String,
}

impl Document for DataSource {
    const FORMAT: &'static str = "fluxloom-data-source";
}

impl DataSource {
    pub(super) fn new(name: String, number: &Number) -> Self {
        Self {
            value: number.value,
            uncertainty: number.uncertainty,
            unit: Cow::Borrowed(unit_of(&name)),
            status: number.status,
            source: number.source.clone().into_owned(),
            name,
        }
    }
}

/// The unit that a name ends in, as printed in tables.
fn unit_of(name: &str) -> &'static str {
    match name.rsplit_once('_').map(|(_, suffix)| suffix) {
        Some("hz") => "Hz",
        Some("nm") => "nm",
        Some("s") => "s",
        Some("au") => "a.u.",
        Some("u") => "u",
        _ => "1",
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn units_come_from_the_last_word() {
        let expected = [
            ("mass_u", "u"),
            ("g_j", "1"),
            ("nuclear_spin", "1"),
            ("hyperfine_a_hz", "Hz"),
            ("D1.wavelength_nm", "nm"),
            ("1S0-3P1.lifetime_s", "s"),
            ("D2.dipole_au", "a.u."),
        ];
        for (name, unit) in expected {
            assert_eq!(unit_of(name), unit, "{name}");
        }
    }

    #[test]
    fn every_status_says_what_it_means() {
        use DataStatus::{ConsistencyChecked, FromMemory, Own, Verified};
        for status in [Verified, ConsistencyChecked, FromMemory, Own] {
            assert!(!status.meaning().is_empty(), "{status}");
            assert_eq!(status.is_confirmed(), status != FromMemory);
            assert_eq!(serde_json::to_value(status).unwrap(), status.as_str());
        }
    }
}
