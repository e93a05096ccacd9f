//! TOML into a tree with lines. What cannot be read is reported and set aside,
//! see [`super::mend`].

use std::collections::BTreeSet;

use toml_edit::{Document, Item, TableLike, Value};

use super::{Data, Entry, Faults, MOST_BYTES, Node, disk, mend};

/// The tree of a TOML text. Faults go into `faults`; without a tree nothing of
/// the text could be read.
pub fn read_toml(text: &str, faults: &mut Faults) -> Option<Node> {
    if text.len() > MOST_BYTES {
        faults.add("file.too_large", None, "", disk::too_large(disk::MOST_BYTES));
        return None;
    }
    if disk::refuse_zeros(text, faults) {
        return None;
    }
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    if let Ok(document) = Document::parse(text) {
        return Some(Tree::new(text, &BTreeSet::new()).root(document.as_table()));
    }
    let mended = mend::mend(text, faults);
    let document = Document::parse(mended.text.as_str()).ok()?;
    let mut root = Tree::new(&mended.text, &mended.unreadable).root(document.as_table());
    for (name, place) in &mended.moved {
        move_table(&mut root, name, place.as_deref());
    }
    Some(root)
}

/// Puts a table that was read under another name where it belongs, beside what
/// stands there already: a second `[cloud]` is checked as the first one is.
fn move_table(root: &mut Node, name: &str, place: Option<&[String]>) {
    let Data::Table(entries) = &mut root.data else { return };
    let Some(index) = entries.iter().position(|entry| entry.key == name) else { return };
    let moved = entries.remove(index).node;
    if let Some(place) = place {
        put(root, place, moved);
    }
}

fn put(parent: &mut Node, place: &[String], moved: Node) {
    let Data::Table(entries) = &mut parent.data else { return };
    let Some((key, below)) = place.split_first() else {
        if let Data::Table(more) = moved.data {
            merge(entries, more);
        }
        return;
    };
    if let Some(entry) = entries.iter_mut().find(|entry| entry.key == *key) {
        return put(&mut entry.node, below, moved);
    }
    let mut node = Node { line: moved.line, data: Data::Table(Vec::new()) };
    put(&mut node, below, moved);
    entries.push(Entry { key: key.clone(), node });
}

/// Adds entries; of a value that is given twice both stay, so that both are checked.
fn merge(entries: &mut Vec<Entry>, more: Vec<Entry>) {
    for entry in more {
        let same = entries.iter_mut().find(|old| old.key == entry.key);
        match (same.map(|old| &mut old.node.data), entry.node.data) {
            (Some(Data::Table(old)), Data::Table(new)) => merge(old, new),
            (_, data) => {
                let node = Node { line: entry.node.line, data };
                entries.push(Entry { key: entry.key, node });
            }
        }
    }
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
    fn what_is_not_closed_is_blamed_on_the_line_that_opens_it() {
        for (text, line, word) in [
            ("a = [1\nb = 2\nc = 3\n", 1, "list that is not closed"),
            ("x = 1\na = \"\"\"x\nb = 2\n", 2, "three quotes"),
            ("[t\nb = 2\n", 1, "is not TOML"),
            ("a = { b = 1\nb = 2\n", 1, "braces"),
            ("a = \"x\n[t]\nb = 2\n", 1, "without its partner"),
            ("\na = [1,\n\"x,\n2]\nb = 2\n", 3, "without its partner"),
        ] {
            let (tree, faults) = read(text);
            let tree = tree.unwrap();
            assert_eq!(faults.len(), 1, "{text:?} {faults:?}");
            assert_eq!((faults[0].line, faults[0].code.as_str()), (Some(line), "file.syntax"));
            assert!(faults[0].message.contains(word), "{}", faults[0].message);
            let b = tree.get("b").or_else(|| tree.find(&["t", "b"])).unwrap();
            let place = 1 + text.lines().position(|line| line == "b = 2").unwrap();
            assert_eq!((&b.data, b.line), (&Data::Whole(2), Some(place)));
        }
    }

    #[test]
    fn an_earlier_fault_is_not_hidden_by_a_later_one() {
        let (tree, faults) = read("a = \"x\nb = 1\nc = 1,5\nd 4\n= 5\n? = 6\ne = 7\n");
        let lines: Vec<_> = faults.iter().map(|fault| fault.line).collect();
        assert_eq!(lines, [Some(1), Some(3), Some(4), Some(5), Some(6)]);
        assert!(faults[2].message.contains("key = value"), "{}", faults[2].message);
        assert_eq!(tree.unwrap().get("e").unwrap().data, Data::Whole(7));
    }

    #[test]
    fn a_table_with_two_headers_is_read_whole() {
        let (tree, faults) = read("[t]\na = 1\n[u]\nb = 2\n[t]\na = 3\nc = 4\n[[u]]\nd = 5\n");
        let tree = tree.unwrap();
        let found: Vec<_> =
            faults.iter().map(|f| (f.code.as_str(), f.path.as_str(), f.line)).collect();
        assert_eq!(
            found,
            [("file.duplicate_key", "t", Some(5)), ("file.duplicate_key", "u", Some(8))]
        );
        assert!(faults[0].message.contains("first on line 1"), "{}", faults[0].message);
        assert_eq!(tree.find(&["t", "a"]).unwrap().data, Data::Whole(1));
        assert_eq!(tree.find(&["t", "c"]).unwrap().data, Data::Whole(4));
        assert_eq!(tree.find(&["u", "d"]).unwrap().line, Some(9));
        assert_eq!(tree.entries().len(), 2);
        let (_, faults) = read("a = 1\nb = 2\na = 3\na.c = 4\n");
        assert_eq!(faults.len(), 2);
        assert!(faults.iter().all(|f| f.message.contains("first on line 1")), "{faults:?}");
    }

    #[test]
    fn of_a_wrong_file_only_a_part_is_read() {
        let mut text = "a = 1\n".to_owned();
        text.push_str(&"def f(x):\n".repeat(200));
        let (tree, faults) = read(&text);
        assert_eq!(tree.unwrap().get("a").unwrap().data, Data::Whole(1));
        assert_eq!(faults.len(), 51);
        assert!(faults[50].message.contains("what follows was not read"));
    }

    #[test]
    fn letters_of_several_bytes_do_not_matter() {
        let (_, faults) = read("\u{feff}# \u{3bc}\u{3bc}\nna\u{ef}ve = 1\nb = \u{201c}x\u{201d}\n");
        assert_eq!(faults.first().map(|f| f.line), Some(Some(2)));
    }
}
