//! What was probably meant by a value that is written in the wrong way.

/// A number behind a text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Meant {
    /// The text is a number as it stands.
    Number,
    /// Written with a point, it is this number.
    Written(String),
    /// With a comma before three digits it may be either of two numbers.
    Either(String, String),
    /// This number with a unit behind it.
    WithUnit(String),
}

/// The number that a text seems to mean, if it does.
#[must_use]
pub fn number_meant(text: &str) -> Option<Meant> {
    let text = text.trim();
    // No number is as long as that.
    if text.is_empty() || text.len() > 60 {
        return None;
    }
    if let Some(fixed) = well_written(text) {
        return Some(if fixed == text { Meant::Number } else { Meant::Written(fixed) });
    }
    if text.matches(',').count() == 1 {
        let pointed = well_written(&text.replace(',', "."))?;
        let (whole, part) = text.split_once(',')?;
        let thousands = part.len() == 3 && (1..=3).contains(&whole.trim_start_matches('-').len());
        return Some(if thousands && !whole.trim_start_matches('-').starts_with('0') {
            Meant::Either(pointed, text.replace(',', ""))
        } else {
            Meant::Written(pointed)
        });
    }
    let split = text.find(|c: char| !(c.is_ascii_digit() || matches!(c, '+' | '-' | '.' | 'e')));
    let split = split.unwrap_or(text.len());
    // `1e` and a unit that begins with an e: the longest number counts.
    let number = text.get(..split)?.trim_end_matches('e');
    let unit = text.get(number.len()..)?.trim();
    let is_unit = unit.chars().count() <= 12
        && unit.starts_with(|c: char| c.is_alphabetic() || matches!(c, '%' | '°' | 'µ'));
    is_unit.then(|| well_written(number)).flatten().map(Meant::WithUnit)
}

/// A number with digits on both sides of its point and no zeros in front.
fn well_written(text: &str) -> Option<String> {
    let is_number = text.bytes().all(|b| b.is_ascii_digit() || b"+-.eE".contains(&b));
    if !is_number || !text.parse::<f64>().is_ok_and(f64::is_finite) {
        return None;
    }
    let (sign, digits) = match text.strip_prefix(['+', '-']) {
        Some(digits) => (text.get(..1)?, digits),
        None => ("", text),
    };
    let end = digits.find(['e', 'E']).unwrap_or(digits.len());
    let (mantissa, exponent) = digits.split_at_checked(end)?;
    let (whole, part) = match mantissa.split_once('.') {
        Some((whole, "")) => (whole, Some("0")),
        Some((whole, part)) => (whole, Some(part)),
        None => (mantissa, None),
    };
    let whole = match whole.trim_start_matches('0') {
        "" => "0",
        whole => whole,
    };
    let part = part.map_or_else(String::new, |part| format!(".{part}"));
    Some(format!("{sign}{whole}{part}{exponent}"))
}

/// What to do about a value that TOML cannot read, in words that follow what is
/// wrong with it.
pub(super) fn advice(value: &str) -> Option<String> {
    let value = value.trim();
    match number_meant(value) {
        Some(Meant::Written(right)) => {
            let comma = if value.contains(',') {
                "numbers are written with a point, not a comma"
            } else {
                "numbers have digits on both sides of the point and no zero in front"
            };
            return Some(format!("{comma}: {right}"));
        }
        Some(Meant::Either(pointed, whole)) => {
            return Some(format!(
                "numbers are written with a point, not a comma, and without separators: \
                 {pointed} or {whole}"
            ));
        }
        Some(Meant::WithUnit(number)) => {
            return Some(format!(
                "units are in the names of keys and a plain number is wanted, such as {number} \
                 if that is its unit"
            ));
        }
        Some(Meant::Number) | None => {}
    }
    let lower = value.to_ascii_lowercase();
    match lower.as_str() {
        "" => return Some("give a value, or leave the key out".to_owned()),
        "true" | "false" => return Some(format!("write {lower}, in lower case")),
        "none" | "null" | "nil" => return Some("leave the key out instead".to_owned()),
        "inf" | "nan" | "+inf" | "-inf" => return Some("a finite number is wanted".to_owned()),
        _ => {}
    }
    if value.starts_with(['\u{201c}', '\u{201d}', '\u{201e}', '\u{2018}', '\u{2019}']) {
        return Some("texts stand in straight quotes, \"...\"".to_owned());
    }
    let is_word = value.starts_with(char::is_alphabetic)
        && value.len() <= 60
        && value.chars().all(|c| c.is_alphanumeric() || matches!(c, '_' | '-' | '.' | ' '));
    is_word.then(|| format!("texts stand in quotes: \"{value}\""))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_seen_through() {
        let written = |text: &str| Some(Meant::Written(text.to_owned()));
        let unit = |text: &str| Some(Meant::WithUnit(text.to_owned()));
        for (text, meant) in [
            ("769.5", Some(Meant::Number)),
            ("-1e-3", Some(Meant::Number)),
            ("769,5", written("769.5")),
            ("770.", written("770.0")),
            (".77e3", written("0.77e3")),
            ("-,5", written("-0.5")),
            ("0770", written("770")),
            ("1,064", Some(Meant::Either("1.064".to_owned(), "1064".to_owned()))),
            ("0,064", written("0.064")),
            ("80 MHz", unit("80")),
            ("80e6Hz", unit("80e6")),
            ("5 eV", unit("5")),
            ("1e", unit("1")),
            ("5%", unit("5")),
            ("1,2,3", None),
            ("abc", None),
            ("", None),
            ("nan", None),
            ("1e999", None),
            ("-", None),
            (".", None),
        ] {
            assert_eq!(number_meant(text), meant, "{text}");
        }
    }

    #[test]
    fn advice_says_how_to_write_it() {
        for (value, part) in [
            ("True", "write true"),
            ("None", "leave the key out"),
            ("80 MHz", "units are in the names of keys"),
            ("absorption", "\"absorption\""),
            ("\u{201c}x\u{201d}", "straight quotes"),
            ("770.", "770.0"),
        ] {
            assert!(advice(value).is_some_and(|text| text.contains(part)), "{value}");
        }
        assert_eq!(advice("[1, 2"), None);
        assert_eq!(advice("1.0"), None);
    }
}
