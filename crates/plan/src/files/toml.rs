//! TOML into a tree with lines.
//!
//! A parser stops at the first broken line. So that one comma does not hide the
//! other faults of a file, a broken line that is one `key = value` by itself is
//! reported, set aside and the rest is read on.

use std::collections::BTreeSet;

use toml_edit::{Document, Item, TableLike, TomlError, Value};

use super::{Data, Entry, Faults, MOST_BYTES, Node, disk, path};

/// Broken lines that are set aside before reading stops.
const MOST_MENDED: usize = 50;

/// The tree of a TOML text. Faults go into `faults`; without a tree the text
/// could not be read at all.
pub fn read_toml(text: &str, faults: &mut Faults) -> Option<Node> {
    if text.len() > MOST_BYTES {
        faults.add("file.too_large", None, "", disk::too_large());
        return None;
    }
    let mut text = text.strip_prefix('\u{feff}').unwrap_or(text).to_owned();
    let mut unreadable = BTreeSet::new();
    for _ in 0..=MOST_MENDED {
        let error = match Document::parse(text.as_str()) {
            Ok(document) => return Some(Tree::new(&text, &unreadable).root(document.as_table())),
            Err(error) => error,
        };
        let broken = Broken::find(&text, &error);
        // Each line gets one chance; twice the same line is not mended by setting it aside.
        let mended = broken.mended(&text).filter(|_| unreadable.insert(broken.number));
        broken.report(&error, mended.is_some(), faults);
        text = mended?;
    }
    None
}

/// A line that the parser could not read.
struct Broken<'a> {
    /// Its number, from 1.
    number: usize,
    /// Bytes before it.
    start: usize,
    line: &'a str,
    /// The key before the equals sign, if the line has the shape `key = value`.
    key: Option<&'a str>,
    /// The table in whose part of the file it stands.
    table: &'a str,
    /// Whether the parser found the same key twice.
    twice: Option<bool>,
}

impl<'a> Broken<'a> {
    fn find(text: &'a str, error: &TomlError) -> Self {
        let at = error.span().map_or(0, |span| span.start).min(text.len());
        let before = text.get(..text.floor_char_boundary(at)).unwrap_or("");
        let start = before.rfind('\n').map_or(0, |newline| newline + 1);
        let line = text.get(start..).unwrap_or("").lines().next().unwrap_or("");
        let head = text.get(..start).unwrap_or("");
        let table = head.lines().rev().find_map(|line| line.trim_start().strip_prefix('['));
        let table = table.and_then(|rest| rest.split(']').next()).unwrap_or("");
        let indent = line.len() - line.trim_start().len();
        let twice = error.message().starts_with("duplicate key");
        Self {
            number: head.matches('\n').count() + 1,
            start,
            line,
            key: key_of(line),
            table: table.trim_matches(['[', ' ', '\t']),
            twice: twice.then_some(at == start + indent),
        }
    }

    fn report(&self, error: &TomlError, goes_on: bool, faults: &mut Faults) {
        let path = match self.key {
            Some(key) if self.table.is_empty() => key.to_owned(),
            Some(key) => format!("{}.{key}", self.table),
            None => String::new(),
        };
        let shown: String = self.line.trim().chars().take(80).collect();
        let rest = if goes_on { "" } else { " (what follows was not read)" };
        if self.twice.is_some() {
            let message = format!("`{shown}` gives a name a second time: keep one{rest}");
            return faults.add("file.duplicate_key", Some(self.number), &path, message);
        }
        let hint = if self.has_decimal_comma() {
            "; numbers are written with a point, not a comma"
        } else {
            ""
        };
        let message = format!("`{shown}` is not TOML: {}{hint}{rest}", error.message());
        faults.add("file.syntax", Some(self.number), &path, message);
    }

    fn has_decimal_comma(&self) -> bool {
        let value = self.line.split_once('=').map_or("", |(_, value)| value);
        let value = value.split('#').next().unwrap_or("").trim();
        value.split_once(',').is_some_and(|(whole, part)| {
            let digits = |text: &str| text.chars().all(|c| c.is_ascii_digit());
            digits(whole.trim_start_matches(['-', '+'])) && !part.is_empty() && digits(part)
        })
    }

    /// The text without this line, if that leaves everything else as it was meant.
    fn mended(&self, text: &str) -> Option<String> {
        let key = self.key?;
        let before = text.get(..self.start)?;
        let after = text.get(self.start + self.line.len()..)?;
        // Only if what stands before is whole is this a line by itself.
        Document::parse(before).ok()?;
        let stand_in = match self.twice {
            Some(true) => String::new(),
            _ => format!("{key} = 0"),
        };
        Some(format!("{before}{stand_in}{after}"))
    }
}

/// The key of a line `key = value` whose value does not go on in the next line.
fn key_of(line: &str) -> Option<&str> {
    let (key, value) = line.split_once('=')?;
    let key = key.trim();
    let count = |open: char| value.matches(open).count();
    let whole = !value.contains("\"\"\"")
        && !value.contains("'''")
        && count('[') == count(']')
        && count('{') == count('}');
    (whole && key.split('.').all(path::is_bare)).then_some(key)
}

/// Builds nodes and counts lines.
struct Tree<'a> {
    /// Byte offsets of line ends.
    ends: Vec<usize>,
    unreadable: &'a BTreeSet<usize>,
}

impl<'a> Tree<'a> {
    fn new(text: &str, unreadable: &'a BTreeSet<usize>) -> Self {
        let ends = text.bytes().enumerate().filter(|(_, b)| *b == b'\n').map(|(i, _)| i).collect();
        Self { ends, unreadable }
    }

    fn line(&self, span: Option<std::ops::Range<usize>>) -> Option<usize> {
        span.map(|span| self.ends.partition_point(|end| *end < span.start) + 1)
    }

    fn root(&self, table: &dyn TableLike) -> Node {
        Node { line: Some(1), data: self.table(table) }
    }

    fn table(&self, table: &dyn TableLike) -> Data {
        let entries = table.iter().map(|(key, item)| {
            let span = table.key(key).and_then(toml_edit::Key::span).or_else(|| item.span());
            Entry { key: key.to_owned(), node: self.item(item, self.line(span)) }
        });
        Data::Table(entries.collect())
    }

    fn item(&self, item: &Item, line: Option<usize>) -> Node {
        let data = match item {
            _ if line.is_some_and(|line| self.unreadable.contains(&line)) => Data::Unreadable,
            Item::None => Data::Null,
            Item::Value(value) => self.value(value),
            Item::Table(table) => self.table(table),
            Item::ArrayOfTables(list) => {
                let node = |table: &toml_edit::Table| Node {
                    line: self.line(table.span()),
                    data: self.table(table),
                };
                Data::Tables(list.iter().map(node).collect())
            }
        };
        Node { line, data }
    }

    fn value(&self, value: &Value) -> Data {
        match value {
            Value::String(text) => Data::Text(text.value().clone()),
            Value::Integer(whole) => Data::Whole(*whole.value()),
            Value::Float(number) => Data::Number(*number.value()),
            Value::Boolean(flag) => Data::Flag(*flag.value()),
            Value::Datetime(date) => Data::Date(date.value().to_string()),
            Value::Array(list) => Data::List(
                list.iter()
                    .map(|v| Node { line: self.line(v.span()), data: self.value(v) })
                    .collect(),
            ),
            Value::InlineTable(table) => self.table(table),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::files::Lines;

    fn read(text: &str) -> (Option<Node>, Vec<fluxloom_core::fault::Fault>) {
        let mut faults = Faults::new(None, Lines::Shown);
        let tree = read_toml(text, &mut faults);
        (tree, faults.finish(()).err().map(|error| error.faults()).unwrap_or_default())
    }

    #[test]
    fn nodes_know_their_lines() {
        let (tree, faults) = read("a = 1\n\n[b.c]\nd = [\n 1,\n 2]\ne = { f = 3 }\n");
        let tree = tree.unwrap();
        assert!(faults.is_empty());
        let line = |keys: &[&str]| tree.find(keys).unwrap().line;
        assert_eq!(line(&["a"]), Some(1));
        assert_eq!(line(&["b", "c"]), Some(3));
        assert_eq!(line(&["b", "c", "d"]), Some(4));
        assert_eq!(tree.find(&["b", "c", "d"]).unwrap().list()[1].line, Some(6));
        assert_eq!(line(&["b", "c", "e", "f"]), Some(7));
    }

    #[test]
    fn broken_lines_are_set_aside_and_the_rest_is_read() {
        let (tree, faults) =
            read("[t]\na = 1,5\nb = 2\nb = 3\nc = 1 mW\nd = { e = 1, e = 2 }\nf = 4\n");
        let tree = tree.unwrap();
        let found: Vec<_> =
            faults.iter().map(|f| (f.code.as_str(), f.path.as_str(), f.line)).collect();
        assert_eq!(
            found,
            [
                ("file.syntax", "t.a", Some(2)),
                ("file.duplicate_key", "t.b", Some(4)),
                ("file.syntax", "t.c", Some(5)),
                ("file.duplicate_key", "t.d", Some(6)),
            ]
        );
        assert_eq!(tree.find(&["t", "a"]).unwrap().data, Data::Unreadable);
        assert_eq!(tree.find(&["t", "b"]).unwrap().data, Data::Whole(2));
        assert_eq!(tree.find(&["t", "d"]).unwrap().data, Data::Unreadable);
        assert_eq!(tree.find(&["t", "f"]).unwrap().data, Data::Whole(4));
    }

    #[test]
    fn what_runs_over_several_lines_is_not_set_aside() {
        for text in [
            "a = [1\nb = 2\nc = 3\n",
            "a = \"\"\"x\nb = 2\n",
            "[t\na = 1\n",
            "a = { b = 1\nc = 2\n",
        ] {
            let (tree, faults) = read(text);
            assert!(tree.is_none(), "{text:?}");
            assert_eq!(faults.len(), 1, "{text:?} {faults:?}");
            assert!(faults[0].message.contains("not read"));
        }
    }

    #[test]
    fn letters_of_several_bytes_do_not_matter() {
        let (_, faults) = read("\u{feff}# \u{3bc}\u{3bc}\nna\u{ef}ve = 1\nb = \u{201c}x\u{201d}\n");
        assert_eq!(faults.first().map(|f| f.line), Some(Some(2)));
    }
}
