//! One fault of an input, with its place: what a file reader collects and what
//! Python's `err.faults` and the command line's `"faults"` show.

use serde::{Deserialize, Serialize};

/// A fault of one input, with the place where it stands.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Fault {
    /// Stable code, such as `file.unknown_key`.
    pub code: String,
    /// Name of the file, if the input came from one.
    pub file: Option<String>,
    /// Line in the file, counted from 1.
    pub line: Option<usize>,
    /// Path of the setting, such as `beams.raman_a.waist_um`; empty for the whole input.
    pub path: String,
    /// What was found, what is allowed, what to do.
    pub message: String,
    /// The name that was probably meant.
    pub did_you_mean: Option<String>,
}

impl std::fmt::Display for Fault {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        if let Some(file) = &self.file {
            write!(f, "{file}")?;
            match self.line {
                Some(line) => write!(f, ":{line}: ")?,
                None => write!(f, ": ")?,
            }
        } else if let Some(line) = self.line {
            write!(f, "line {line}: ")?;
        }
        if !self.path.is_empty() && !self.message.contains(self.path.as_str()) {
            write!(f, "{}: ", self.path)?;
        }
        write!(f, "{}", self.message)?;
        if let Some(name) = &self.did_you_mean {
            write!(f, " (did you mean \"{name}\"?)")?;
        }
        write!(f, " [{}]", self.code)
    }
}

/// The candidate nearest to `text`, if it is near enough to be a slip of the pen.
///
/// Distance is counted in letters inserted, dropped, changed or swapped, case
/// folded; at most a third of the letters (at least two) may differ.
pub fn suggest<'a>(text: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let folded = text.to_lowercase();
    let allowed = (folded.chars().count() / 3).max(2);
    candidates
        .into_iter()
        .map(|name| (strsim::damerau_levenshtein(&folded, &name.to_lowercase()), name))
        .filter(|(distance, name)| *distance <= allowed && *distance < name.chars().count())
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, name)| name)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn suggestions_need_a_near_miss() {
        let known = ["waist_um", "power_mw", "laser"];
        assert_eq!(suggest("waist_mm", known), Some("waist_um"));
        assert_eq!(suggest("lazer", known), Some("laser"));
        assert_eq!(suggest("temperature", known), None);
    }

    #[test]
    fn text_names_place_and_remedy() {
        let fault = Fault {
            code: "file.unknown_key".into(),
            file: Some("bay.toml".into()),
            line: Some(41),
            path: "beams.raman_a.waist_mm".into(),
            message: "beams.raman_a.waist_mm is not a known key".into(),
            did_you_mean: Some("waist_um".into()),
        };
        assert_eq!(
            fault.to_string(),
            "bay.toml:41: beams.raman_a.waist_mm is not a known key \
             (did you mean \"waist_um\"?) [file.unknown_key]"
        );
    }
}
