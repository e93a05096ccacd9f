//! The form in which an atom is written down: its name and the user's own
//! numbers. The table itself is never written, so that nothing can drift.

use std::collections::BTreeMap;

use serde::de::{Error as _, MapAccess, Visitor};
use serde::{Deserialize, Deserializer, Serialize};

use super::Atom;
use super::own::{Change, Own, OwnNumber};
use crate::documents::Document;
use crate::error::Error;

impl Document for Atom {
    const FORMAT: &'static str = "fluxloom-atom";
}

#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub(super) struct RawAtom {
    name: String,
    #[serde(deserialize_with = "unique")]
    own: Own,
}

impl From<Atom> for RawAtom {
    fn from(atom: Atom) -> Self {
        Self { name: atom.name().to_owned(), own: atom.own }
    }
}

impl TryFrom<RawAtom> for Atom {
    type Error = Error;

    fn try_from(raw: RawAtom) -> Result<Self, Error> {
        let atom = Self::new(&raw.name)?;
        let changes: Vec<Change<'_>> = raw
            .own
            .iter()
            .map(|(key, number)| (key.as_str(), number.value, number.source.as_str()))
            .collect();
        atom.changed(&changes)
    }
}

/// A map in which no name stands twice: the last one must not win in silence.
fn unique<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Own, D::Error> {
    struct Unique;

    impl<'de> Visitor<'de> for Unique {
        type Value = Own;

        fn expecting(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
            f.write_str("a map from names to {value, source}")
        }

        fn visit_map<M: MapAccess<'de>>(self, mut map: M) -> Result<Own, M::Error> {
            let mut own = BTreeMap::new();
            while let Some((key, number)) = map.next_entry::<String, OwnNumber>()? {
                if own.contains_key(&key) {
                    return Err(M::Error::custom(format!("{key} stands twice")));
                }
                own.insert(key, number);
            }
            Ok(own)
        }
    }

    deserializer.deserialize_map(Unique)
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn written_down_and_read_back() {
        for name in Atom::available() {
            let atom = Atom::new(name).unwrap();
            let text = atom.to_json().unwrap();
            assert_eq!(Atom::from_json(&text).unwrap(), atom);
        }
        let own = Atom::new("40K").unwrap().with_data(&[("D1.dipole_au", 4.1075)], "us").unwrap();
        assert_eq!(
            own.to_json().unwrap(),
            r#"{"format":"fluxloom-atom","version":1,"name":"40K","own":{"D1.dipole_au":{"value":4.1075,"source":"us"}}}"#
        );
        assert_eq!(format!("{own:?}"), r#"Atom("40K", D1.dipole_au = 4.1075)"#);
    }

    #[test]
    fn what_is_read_is_as_valid_as_what_is_made() {
        let written = |version: u32, format: &str, name: &str, own: &str| {
            format!(
                r#"{{"format":"{format}","version":{version},"name":"{name}","own":{{{own}}}}}"#
            )
        };
        let number =
            |name: &str, value: &str| format!(r#""{name}":{{"value":{value},"source":"us"}}"#);
        let good = number("g_j", "2.0");
        assert!(Atom::from_json(&written(1, "fluxloom-atom", "40K", &good)).is_ok());
        let twice = format!("{good},{good}");
        let pair =
            format!("{},{}", number("D1.dipole_au", "4.1"), number("D1.lifetime_s", "26e-9"));
        for (text, part) in [
            (written(2, "fluxloom-atom", "40K", ""), "version 2"),
            (written(1, "fluxloom-lattice", "40K", ""), "fluxloom-lattice"),
            (written(1, "fluxloom-atom", "K40", ""), "did you mean"),
            (written(1, "fluxloom-atom", "40K", &number("mass_u", "-1.0")), "mass_u"),
            (written(1, "fluxloom-atom", "40K", &number("nuclear_spin", "3.5")), "defines"),
            (written(1, "fluxloom-atom", "40K", &twice), "stands twice"),
            (written(1, "fluxloom-atom", "40K", &pair), "give one of them"),
            (written(1, "fluxloom-atom", "40K", r#""g_j":{"value":2.0,"source":""}"#), "source"),
            (r#"{"format":"fluxloom-atom","version":1,"name":"40K"}"#.to_owned(), "own"),
        ] {
            let error = Atom::from_json(&text).unwrap_err().to_string();
            assert!(error.contains(part), "{text}: {error}");
        }
    }
}
