//! A collection of faults: everything wrong with an input, told at once.

use std::collections::BTreeSet;

use fluxloom_core::fault::{Fault, suggest};

use super::path;
use crate::Error;

/// Faults that are kept one by one; nobody reads more, and a wrong file of the
/// largest size would give a hundred thousand.
const MOST: usize = 1000;

/// Names that are looked through for suggestions, all faults together: it is
/// far more than a real file needs, and measuring distances takes time.
const MOST_COMPARED: usize = 200_000;

/// The longest message, in bytes; what is longer repeats the user's own words.
const MOST_BYTES: usize = 4000;

/// Letters of the longest unit that a name may lack, generously.
const LONGEST_UNIT: usize = 24;

/// The candidate that was probably meant: the one that only lacks its unit, or a near miss.
pub fn nearest<'a>(found: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    // No name is as long as that, and measuring the distance would take its time.
    if found.len() > 200 {
        return None;
    }
    // As many letters as may differ; names of quite another length are none.
    let allowed = (found.len() / 3).max(2) + LONGEST_UNIT;
    let known = known.into_iter().filter(|name| name.len().abs_diff(found.len()) <= allowed);
    let known: Vec<&str> = known.collect();
    let without_unit = |name: &&&str| {
        name.strip_prefix(found).is_some_and(|unit| !found.is_empty() && unit.starts_with('_'))
    };
    known.iter().find(without_unit).copied().or_else(|| suggest(found, known.iter().copied()))
}

/// Whether faults carry the lines of the nodes they are found at.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Lines {
    /// The input is a file or a text with lines, in which texts have quotes.
    Shown,
    /// The input is a value of a program: places are paths only, and nothing is
    /// known of how it was written.
    Hidden,
}

/// Collects faults of one input.
#[derive(Debug, Clone)]
pub struct Faults {
    file: Option<String>,
    lines: Lines,
    list: Vec<Fault>,
    left_out: usize,
    /// Places that were written under another name.
    meant: BTreeSet<String>,
    /// Whether all of the input was read.
    whole: bool,
    compared: usize,
}

impl Faults {
    /// An empty collection for an input that comes from `file`, if it has a name.
    #[must_use]
    pub fn new(file: Option<&str>, lines: Lines) -> Self {
        Self {
            file: file.map(str::to_owned),
            lines,
            list: Vec::new(),
            left_out: 0,
            meant: BTreeSet::new(),
            whole: true,
            compared: 0,
        }
    }

    /// Whether the input is a text, so that messages may speak of quotes.
    #[must_use]
    pub fn is_text(&self) -> bool {
        self.lines == Lines::Shown
    }

    /// Notes that a part of the input could not be read: what seems to be
    /// missing may stand there.
    pub fn leave_unread(&mut self) {
        self.whole = false;
    }

    /// Whether what is missing is missing, and not only unread.
    #[must_use]
    pub fn is_whole(&self) -> bool {
        self.whole
    }

    /// Notes that what should stand at `path` stands there under another name,
    /// which has been reported.
    pub fn expect(&mut self, path: String) {
        self.meant.insert(path);
    }

    /// Whether what should stand at `path` was written under another name.
    #[must_use]
    pub fn expects(&self, path: &str) -> bool {
        self.meant.contains(path)
    }

    /// Whether one more fault would only be counted: then its words are not needed.
    #[must_use]
    pub fn is_full(&self) -> bool {
        self.list.len() >= MOST
    }

    /// The candidate that was probably meant, as [`nearest`], within what all
    /// suggestions of one input may cost.
    pub fn suggest<'a>(
        &mut self,
        found: &str,
        known: impl IntoIterator<Item = &'a str>,
    ) -> Option<&'a str> {
        if self.is_full() {
            return None;
        }
        let left = MOST_COMPARED.saturating_sub(self.compared);
        let known: Vec<&str> = known.into_iter().take(left).collect();
        self.compared += known.len();
        nearest(found, known)
    }

    /// Adds a fault; the same one twice is kept once.
    pub fn add(&mut self, code: &str, line: Option<usize>, path: &str, message: String) {
        self.add_meant(code, line, path, message, None);
    }

    /// As [`Faults::add`], with the nearest of the names that would have been right.
    pub fn add_near<'a>(
        &mut self,
        code: &str,
        line: Option<usize>,
        path: &str,
        message: String,
        (found, known): (&str, impl IntoIterator<Item = &'a str>),
    ) {
        let meant = self.suggest(found, known).map(str::to_owned);
        self.add_meant(code, line, path, message, meant);
    }

    /// As [`Faults::add`], with the name that was meant.
    pub fn add_meant(
        &mut self,
        code: &str,
        line: Option<usize>,
        path: &str,
        message: String,
        did_you_mean: Option<String>,
    ) {
        let shown = path::short(path);
        let mut message = message;
        if shown.len() < path.len() {
            message = message.replace(path, &shown);
        }
        if message.len() > MOST_BYTES {
            message.truncate(message.floor_char_boundary(MOST_BYTES));
            message.push_str("...");
        }
        let path = &*shown;
        let line = if self.lines == Lines::Shown { line } else { None };
        let same =
            |f: &Fault| f.line == line && f.code == code && f.path == path && f.message == message;
        if self.list.iter().any(same) {
            return;
        }
        if self.is_full() {
            self.left_out += 1;
            return;
        }
        self.list.push(Fault {
            code: code.to_owned(),
            file: self.file.clone(),
            line,
            path: path.to_owned(),
            message,
            did_you_mean,
        });
    }

    /// Adds what the physics crate says about a value.
    pub fn add_error(&mut self, error: &fluxloom_core::Error, line: Option<usize>, path: &str) {
        self.add(error.code(), line, path, error.to_string());
    }

    /// Whether the value at `path`, or anything inside it, is at fault already:
    /// then nothing more can be learnt from comparing it with others.
    #[must_use]
    pub fn spoils(&self, path: &str) -> bool {
        self.list.iter().any(|fault| {
            fault
                .path
                .strip_prefix(path)
                .is_some_and(|rest| rest.is_empty() || rest.starts_with('.'))
        })
    }

    /// Whether nothing was found.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// The faults found so far, in the order found, to be changed.
    pub fn iter_mut(&mut self) -> impl Iterator<Item = &mut Fault> {
        self.list.iter_mut()
    }

    /// `value` if nothing was found.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that was found, in the order of lines;
    /// faults without a line come last.
    pub fn finish<T>(mut self, value: T) -> Result<T, Error> {
        if self.list.is_empty() {
            return Ok(value);
        }
        self.list.sort_by_key(|fault| fault.line.unwrap_or(usize::MAX));
        if self.left_out > 0 {
            self.list.push(Fault {
                code: "file.too_many_faults".to_owned(),
                file: self.file,
                line: None,
                path: String::new(),
                message: format!(
                    "{} more faults are not listed: is it the right file?",
                    self.left_out
                ),
                did_you_mean: None,
            });
        }
        Err(Error::Faults(self.list))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_forgotten_unit_is_a_near_miss() {
        let known = ["max_power_mw", "power_mw", "laser"];
        assert_eq!(nearest("power", known), Some("power_mw"));
        assert_eq!(nearest("power_w", known), Some("power_mw"));
        assert_eq!(nearest("", known), None);
        assert_eq!(nearest(&"x".repeat(1000), known), None);
    }

    #[test]
    fn faults_come_once_and_in_the_order_of_lines() {
        let mut faults = Faults::new(Some("bay.toml"), Lines::Shown);
        for line in [9, 2, 9] {
            faults.add("file.x", Some(line), &format!("a.b{line}"), "no".to_owned());
        }
        faults.add("file.x", None, "c", "no".to_owned());
        assert!(faults.spoils("a.b9") && faults.spoils("a") && !faults.spoils("a.b"));
        let lines: Vec<_> =
            faults.finish(()).unwrap_err().faults().iter().map(|f| f.line).collect();
        assert_eq!(lines, [Some(2), Some(9), None]);
    }

    #[test]
    fn hidden_lines_stay_hidden() {
        let mut faults = Faults::new(None, Lines::Hidden);
        faults.add("file.x", Some(3), "a", "no".to_owned());
        assert_eq!(faults.finish(()).unwrap_err().faults()[0].line, None);
    }
}
