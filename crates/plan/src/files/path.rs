//! Dotted paths of settings, such as `lasers.raman.wavelength_nm`.
//!
//! A key that holds anything but letters, digits, `_` and `-` stands in double
//! quotes, so that a path can always be taken apart again.

use std::borrow::Cow;

/// Whether `key` may stand in a path, and in a TOML file, without quotes.
#[must_use]
pub fn is_bare(key: &str) -> bool {
    !key.is_empty() && key.chars().all(|c| c.is_ascii_alphanumeric() || c == '_' || c == '-')
}

/// `key` below `parent`; an empty parent is the top of the file.
#[must_use]
pub fn join(parent: &str, key: &str) -> String {
    let key = if is_bare(key) { key.to_owned() } else { format!("\"{key}\"") };
    if parent.is_empty() { key } else { format!("{parent}.{key}") }
}

/// The keys of a path; text in double quotes is one key, dots included.
#[must_use]
pub fn split(path: &str) -> Vec<String> {
    let mut keys = vec![String::new()];
    let mut quoted = false;
    for c in path.chars() {
        match c {
            '"' => quoted = !quoted,
            '.' if !quoted => keys.push(String::new()),
            _ => {
                if let Some(key) = keys.last_mut() {
                    key.push(c);
                }
            }
        }
    }
    keys
}

/// A path cut to what a message can carry; real ones are far shorter.
#[must_use]
pub fn short(path: &str) -> Cow<'_, str> {
    const MOST: usize = 120;
    match path.char_indices().nth(MOST) {
        Some((end, _)) => Cow::Owned(format!("{}...", path.get(..end).unwrap_or_default())),
        None => Cow::Borrowed(path),
    }
}

/// Names in a row for a message; of very many only the first ones.
pub fn listed<S: AsRef<str>>(names: impl IntoIterator<Item = S>) -> String {
    const MOST: usize = 40;
    let mut names = names.into_iter();
    let first: Vec<String> =
        names.by_ref().take(MOST).map(|name| short(name.as_ref()).into_owned()).collect();
    match names.count() {
        0 => first.join(", "),
        more => format!("{} and {more} more", first.join(", ")),
    }
}

/// Whether one path is the other or lies inside it.
#[must_use]
pub fn overlap(one: &[String], other: &[String]) -> bool {
    one.iter().zip(other).all(|(a, b)| a == b)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paths_come_apart_as_they_were_joined() {
        let path = join(&join("interaction", "scattering_length_bohr"), "9/2,-9/2 9/2,-7/2");
        assert_eq!(path, "interaction.scattering_length_bohr.\"9/2,-9/2 9/2,-7/2\"");
        assert_eq!(split(&path), ["interaction", "scattering_length_bohr", "9/2,-9/2 9/2,-7/2"]);
        assert_eq!(split(&join("a", "b.c")), ["a", "b.c"]);
        assert_eq!(split(""), [""]);
    }

    #[test]
    fn messages_do_not_carry_everything() {
        assert_eq!(short("lattice.axis"), "lattice.axis");
        assert_eq!(short(&"\u{3bc}".repeat(1000)).chars().count(), 123);
        assert_eq!(listed(["a", "b"]), "a, b");
        assert!(listed(vec!["a"; 1000]).ends_with("a, a and 960 more"));
    }

    #[test]
    fn overlap_is_same_or_inside() {
        let (whole, part) = (split("lattice"), split("lattice.depth_er"));
        assert!(overlap(&whole, &part) && overlap(&part, &whole) && overlap(&part, &part));
        assert!(!overlap(&split("lattice.axis"), &part));
    }
}
