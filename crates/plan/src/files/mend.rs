//! A text that a TOML parser refuses, made readable.
//!
//! A parser stops at the first thing it cannot read. So that one comma does not
//! hide the other faults of a file, each statement is read by itself; a broken
//! one is reported and a stand-in takes its line. What is given twice is
//! reported as well, and a repeated table is read under another name.

use std::borrow::Cow;
use std::collections::BTreeSet;

use toml_edit::{Document, Item, Key, TomlError};

use super::statements::{Open, Statement, equals_sign, statements};
use super::{Faults, path, slips};

/// Broken statements that are set aside before reading stops: nobody reads more.
const MOST_MENDED: usize = 50;

/// A text that can be read, line for line like the broken one.
pub(super) struct Mended {
    pub text: String,
    /// Lines of keys whose values could not be read.
    pub unreadable: BTreeSet<usize>,
    /// Names under which tables are read, and where they belong if that is known.
    pub moved: Vec<(String, Option<Vec<String>>)>,
}

/// Sets aside what cannot be read.
pub(super) fn mend(text: &str, faults: &mut Faults) -> Mended {
    let mut bench = Bench {
        whole: text,
        parts: Vec::new(),
        unreadable: BTreeSet::new(),
        moved: Vec::new(),
        mended: 0,
        cut: false,
    };
    bench.syntax(faults);
    let text = bench.repetitions(faults);
    Mended { text, unreadable: bench.unreadable, moved: bench.moved }
}

/// A statement on the bench.
struct Part<'a> {
    statement: Statement<'a>,
    /// What stands in its place.
    now: Cow<'a, str>,
    /// The path of the table or key, as far as it can be read.
    place: Vec<String>,
    is_header: bool,
}

impl Part<'_> {
    /// Whether it stands as the user wrote it.
    fn is_original(&self) -> bool {
        matches!(self.now, Cow::Borrowed(_))
    }

    /// Puts something else in its place, on as many lines.
    fn becomes(&mut self, text: &str) {
        let ends = self.statement.text.matches('\n').count();
        self.now = Cow::Owned(text.to_owned() + &"\n".repeat(ends));
    }

    fn path(&self) -> String {
        self.place.iter().fold(String::new(), |parent, key| path::join(&parent, key))
    }
}

struct Bench<'a> {
    whole: &'a str,
    parts: Vec<Part<'a>>,
    unreadable: BTreeSet<usize>,
    moved: Vec<(String, Option<Vec<String>>)>,
    mended: usize,
    /// Whether the text ends with the last part.
    cut: bool,
}

impl<'a> Bench<'a> {
    /// Reads each statement by itself.
    fn syntax(&mut self, faults: &mut Faults) {
        let mut table: Vec<String> = Vec::new();
        for statement in statements(self.whole) {
            let text = statement.text;
            let read = Document::parse(text);
            let is_header = text.trim_start().starts_with('[');
            let keys = match &read {
                Ok(document) if is_header => header_keys(document.as_item()),
                _ if is_header => broken_header(text).and_then(keys_of).unwrap_or_default(),
                _ => key_of(text).and_then(|key| keys_of(&key)).unwrap_or_default(),
            };
            let place = if is_header {
                table.clone_from(&keys);
                keys
            } else {
                table.iter().cloned().chain(keys).collect()
            };
            let mut part = Part { now: Cow::Borrowed(text), statement, place, is_header };
            if let Err(error) = read {
                if self.stops(&part, Some(&error), faults) {
                    return;
                }
                report(&part, &error, faults);
                self.stand_in(&mut part, faults);
            }
            self.parts.push(part);
        }
    }

    /// Whether enough is broken to stop here; the text then ends before this part.
    fn stops(&mut self, part: &Part, error: Option<&TomlError>, faults: &mut Faults) -> bool {
        self.mended += 1;
        if self.mended <= MOST_MENDED {
            return false;
        }
        self.cut = true;
        faults.leave_unread();
        let shown = cut_line(part.statement.text);
        let why = error.map_or("a name is given twice", TomlError::message);
        let message = format!("`{shown}` cannot be read: {why} (what follows was not read)");
        faults.add("file.syntax", Some(part.statement.line), "", message);
        true
    }

    /// Puts something in the place of a broken statement that leaves the rest as it was meant.
    fn stand_in(&mut self, part: &mut Part, faults: &mut Faults) {
        let text = part.statement.text;
        if part.is_header {
            return match broken_header(text) {
                Some(name) if !part.place.is_empty() => part.becomes(&format!("[{name}]")),
                _ => self.set_aside(part, faults),
            };
        }
        match key_of(text) {
            Some(key) if keys_of(&key).is_some() => {
                part.becomes(&format!("{key} = 0"));
                self.unreadable.insert(part.statement.line);
            }
            _ => part.becomes(""),
        }
    }

    /// Reads a table under a name that nobody else can have given.
    fn set_aside(&mut self, part: &mut Part, faults: &mut Faults) {
        let line = part.statement.line;
        part.becomes(&format!("[\"\\u0001{line}\"]"));
        let place = (!part.place.is_empty()).then(|| part.place.clone());
        if place.is_none() {
            // Nobody knows which table's keys these are.
            faults.leave_unread();
        }
        self.moved.push((format!("\u{1}{line}"), place));
    }

    /// Reads all statements together: what is left is what is given twice.
    fn repetitions(&mut self, faults: &mut Faults) -> String {
        loop {
            let (text, starts) = self.assembled();
            let error = match Document::parse(text.as_str()) {
                Ok(_) => return text,
                Err(error) => error,
            };
            let at = error.span().map_or(0, |span| span.start);
            let index = starts.partition_point(|start| *start <= at).saturating_sub(1);
            let mut rest = self.parts.split_off(index.min(self.parts.len())).into_iter();
            let Some(mut part) = rest.next() else { return String::new() };
            if part.is_original() {
                if self.stops(&part, None, faults) {
                    continue;
                }
                let first = self.first(&part);
                report_twice(&part, first, faults);
            } else if part.now.trim().is_empty() || part.now.contains("\\u0001") {
                // Set aside already, and still in the way: end before it.
                self.cut = true;
                faults.leave_unread();
                continue;
            }
            if part.is_header {
                self.set_aside(&mut part, faults);
            } else {
                part.becomes("");
            }
            self.parts.push(part);
            self.parts.extend(rest);
        }
    }

    /// The text with all stand-ins, and where each part begins in it.
    fn assembled(&self) -> (String, Vec<usize>) {
        let mut text = String::with_capacity(self.whole.len());
        let mut starts = Vec::with_capacity(self.parts.len());
        let mut at = 0;
        for Part { statement, now, .. } in &self.parts {
            text.push_str(self.whole.get(at..statement.range.start).unwrap_or_default());
            starts.push(text.len());
            text.push_str(now);
            at = statement.range.end;
        }
        if !self.cut {
            text.push_str(self.whole.get(at..).unwrap_or_default());
        }
        (text, starts)
    }

    /// The line on which what a part repeats was given first.
    fn first(&self, part: &Part) -> Option<usize> {
        let equal = self.parts.iter().find(|other| other.place == part.place);
        let overlap = || {
            let mut pairs = self.parts.iter().filter(|other| !other.is_header);
            pairs.find(|other| path::overlap(&other.place, &part.place))
        };
        equal.or_else(overlap).map(|other| other.statement.line)
    }
}

/// The keys of a header that can be read.
fn header_keys(item: &Item) -> Vec<String> {
    let mut keys = Vec::new();
    let mut item = item;
    loop {
        let table = match item {
            Item::ArrayOfTables(list) => list.get(0),
            other => other.as_table(),
        };
        let Some((key, inner)) = table.and_then(|table| table.iter().next()) else { return keys };
        keys.push(key.to_owned());
        item = inner;
    }
}

/// The name in a broken header.
fn broken_header(text: &str) -> Option<&str> {
    let inner = text.trim().trim_start_matches('[');
    let name = inner.split([']', '#']).next()?.trim();
    keys_of(name).map(|_| name)
}

/// The keys of a dotted name, if it is one.
fn keys_of(name: &str) -> Option<Vec<String>> {
    let keys = Key::parse(name).ok()?;
    (!keys.is_empty()).then(|| keys.iter().map(|key| key.get().to_owned()).collect())
}

/// The key of a broken line, or one like it that can be read.
fn key_of(text: &str) -> Option<Cow<'_, str>> {
    // No name is as long as that.
    const MOST: usize = 200;
    let first = text.lines().next()?.trim();
    let key = match equals_sign(first) {
        Some(equals) => first.get(..equals)?.trim(),
        None => first.split([' ', '\t', ':']).next()?,
    };
    if keys_of(key).is_some() {
        return Some(Cow::Borrowed(key));
    }
    let has_letters = key.starts_with(|c: char| c.is_ascii_alphabetic()) && key.len() <= MOST;
    let bare = |c: char| if c.is_ascii_alphanumeric() || c == '-' { c } else { '_' };
    has_letters.then(|| Cow::Owned(key.chars().map(bare).collect()))
}

/// A line without its remark, cut to what a message can carry.
fn cut_line(text: &str) -> String {
    let line = text.lines().next().unwrap_or("").trim();
    let mut marks = line.match_indices('#').map(|(at, _)| line.get(..at).unwrap_or_default());
    let is_outside = |before: &&str| {
        before.ends_with([' ', '\t']) && before.matches('"').count().is_multiple_of(2)
    };
    let line = marks.find(is_outside).unwrap_or(line).trim_end();
    line.chars().take(80).collect()
}

fn report_twice(part: &Part, first: Option<usize>, faults: &mut Faults) {
    let shown = cut_line(part.statement.text);
    let path = part.path();
    let before = first.map_or_else(String::new, |line| format!(", first on line {line}"));
    let what = if part.is_header {
        format!(
            "`{shown}` opens this table a second time{before}: keep one header for all its keys"
        )
    } else {
        format!("`{shown}` gives {} a second time{before}: keep one", path::short(&path))
    };
    faults.add("file.duplicate_key", Some(part.statement.line), &path, what);
}

fn report(part: &Part, error: &TomlError, faults: &mut Faults) {
    let Statement { text, line, open, .. } = &part.statement;
    let at = error.span().map_or(0, |span| span.start).min(text.len());
    let before = text.get(..text.floor_char_boundary(at)).unwrap_or("");
    let inside = match open {
        Some((_, opening)) => opening - line,
        None => before.matches('\n').count().min(text.lines().count().saturating_sub(1)),
    };
    let broken = text.lines().nth(inside).unwrap_or("");
    let shown = cut_line(broken);
    let number = Some(line + inside);
    let path = if part.is_header || key_of(text).is_some() { part.path() } else { String::new() };
    if error.message().starts_with("duplicate key") {
        let message = format!("`{shown}` gives a name a second time: keep one");
        return faults.add("file.duplicate_key", number, &path, message);
    }
    let equals = equals_sign(broken);
    let message = match open {
        Some((Open::List, _)) => format!("`{shown}` opens a list that is not closed: add ]"),
        Some((Open::Table, _)) => {
            format!("`{shown}` opens a table in braces that is not closed: add }}")
        }
        Some((Open::Text, _)) => {
            format!("`{shown}` has a quote without its partner: close the text on its line")
        }
        Some((Open::LongText, _)) => format!(
            "`{shown}` opens a text with three quotes that is never closed: one quote will do"
        ),
        None if !part.is_header && inside == 0 && equals.is_none() => {
            format!("`{shown}` is not TOML: write key = value, and # before a remark")
        }
        None => {
            let value = equals.and_then(|equals| broken.get(equals + 1..)).filter(|_| inside == 0);
            let value = value.map(|value| value.split('#').next().unwrap_or_default());
            let advice = value.and_then(slips::advice);
            // The parser tells what it expected of a letter, the advice what was meant.
            let why = advice.unwrap_or_else(|| error.message().to_owned());
            format!("`{shown}` is not TOML: {why}")
        }
    };
    faults.add("file.syntax", number, &path, message);
}
