//! What was probably meant by an isotope's name that is not in the table.
//!
//! Names are exact: nothing is repaired in silence, only suggested.

use super::table::{Isotope, table};
use crate::error::Error;
use crate::fault::suggest;

/// Longer texts are no slip of the pen, and comparing them costs time.
const LONGEST_SLIP: usize = 40;

/// The isotope of exactly this name.
pub(super) fn find(name: &str) -> Result<&'static Isotope, Error> {
    let isotopes = &table().isotopes;
    isotopes.iter().find(|isotope| isotope.name == name).ok_or_else(|| Error::UnknownAtom {
        name: shortened(name),
        suggestion: meant(name).map(str::to_owned),
        known: isotopes.iter().map(|isotope| isotope.name.as_str()).collect::<Vec<_>>().join(", "),
    })
}

/// A name as an error repeats it.
fn shortened(name: &str) -> String {
    let short: String = name.chars().take(LONGEST_SLIP).collect();
    if short.len() < name.len() { short + "..." } else { short }
}

fn meant(name: &str) -> Option<&'static str> {
    if name.len() > LONGEST_SLIP {
        return None;
    }
    let isotopes = &table().isotopes;
    let letters: String =
        name.chars().filter(|c| c.is_ascii_alphabetic()).map(|c| c.to_ascii_lowercase()).collect();
    let mass_number: Option<u32> =
        name.chars().filter(char::is_ascii_digit).collect::<String>().parse().ok();
    let of_element: Vec<&'static Isotope> =
        isotopes.iter().filter(|isotope| is_called(isotope, &letters)).collect();
    if of_element.is_empty() {
        return suggest(name, isotopes.iter().map(|isotope| isotope.name.as_str()));
    }
    match (mass_number, of_element.as_slice()) {
        // The element alone says enough only if there is one isotope of it.
        (None, [only]) => Some(&only.name),
        (None, _) => None,
        (Some(number), several) => several
            .iter()
            .min_by_key(|isotope| isotope.mass_number.abs_diff(number))
            .map(|isotope| isotope.name.as_str()),
    }
}

fn is_called(isotope: &Isotope, letters: &str) -> bool {
    isotope.symbol.eq_ignore_ascii_case(letters) || isotope.element_names.contains(&letters)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_usual_ways_to_write_an_isotope_lead_to_its_name() {
        for name in ["K40", "K-40", "k40", "40k", "40-K", "40 K", "potassium-40", "Potassium 40"] {
            assert_eq!(meant(name), Some("40K"), "{name}");
        }
        for (name, expected) in [
            ("Rb87", "87Rb"),
            ("Rb", ""),
            ("K", ""),
            ("Na", "23Na"),
            ("cesium", "133Cs"),
            ("caesium 133", "133Cs"),
            ("88Sr", "87Sr"),
            ("87Tb", "87Rb"),
            ("40L", "40K"),
            ("unobtainium", ""),
            ("", ""),
            ("99999999999999999999K", ""),
        ] {
            assert_eq!(meant(name).unwrap_or(""), expected, "{name}");
        }
        assert_eq!(meant(&"K".repeat(1_000_000)), None);
    }
}
