//! Values into TOML, new or in place of old ones, with the comments around
//! them kept.

use toml_edit::{Array, Datetime, DocumentMut, InlineTable, Item, Table, Value};

use super::keys;
use crate::files::{Data, Entry, Node, path};

/// A new document.
pub(super) fn document(root: &Node) -> DocumentMut {
    let mut document = DocumentMut::new();
    let mut entries: Vec<_> = root.entries().iter().collect();
    entries.sort_by_key(|entry| match entry.key.as_str() {
        "format" => 0,
        "version" => 1,
        _ => 2,
    });
    for entry in entries {
        document.insert(&entry.key, item(&entry.node, &entry.key, &entry.key));
    }
    document
}

/// A value as it stands in a file at a place of the key table with this pattern.
pub(super) fn item(node: &Node, key: &str, pattern: &str) -> Item {
    let is_table = keys::tables().any(|table| table == pattern);
    if is_table && node.is_table() {
        return Item::Table(table(node, pattern));
    }
    value(node, key).map_or(Item::None, Item::Value)
}

fn table(node: &Node, pattern: &str) -> Table {
    let mut table = Table::new();
    for entry in node.entries() {
        let inside = inner_pattern(pattern, &entry.key);
        table.insert(&entry.key, item(&entry.node, &entry.key, &inside));
    }
    // `[lasers]` above `[lasers.raman]` says nothing.
    let is_named = inner_pattern(pattern, "").ends_with('*');
    table.set_implicit(is_named && !table.is_empty());
    table
}

/// A value; none for null, which TOML does not have.
fn value(node: &Node, key: &str) -> Option<Value> {
    Some(match &node.data {
        Data::Flag(flag) => Value::from(*flag),
        Data::Whole(whole) => Value::from(*whole),
        // Through its text, which has an exponent where a person would write one.
        Data::Number(number) => {
            format!("{number:?}").parse().unwrap_or_else(|_| Value::from(*number))
        }
        Data::Text(text) => match text.parse::<Datetime>() {
            Ok(date) if key == "measured" => Value::from(date),
            _ => Value::from(text.as_str()),
        },
        Data::Date(date) => date.parse::<Datetime>().map_or_else(|_| date.into(), Value::from),
        Data::List(list) | Data::Tables(list) => {
            Value::Array(list.iter().filter_map(|node| value(node, key)).collect::<Array>())
        }
        Data::Table(entries) => {
            let pairs = entries.iter().filter_map(|e| Some((&e.key, value(&e.node, &e.key)?)));
            Value::InlineTable(pairs.collect::<InlineTable>())
        }
        Data::Null | Data::Unreadable => return None,
    })
}

/// Puts an item at the end of `keys`; tables on the way are made if need be.
/// None if something that is not a table stands in the way.
pub(super) fn put(document: &mut DocumentMut, keys: &[String], item: Item) -> Option<()> {
    let (last, parents) = keys.split_last()?;
    let mut parent = document.as_item_mut();
    for key in parents {
        let table = parent.as_table_like_mut()?;
        if table.get(key).is_none() {
            let mut new = Table::new();
            new.set_implicit(true);
            table.insert(key, Item::Table(new));
        }
        parent = table.get_mut(key)?;
    }
    let is_inline = parent.is_value();
    let table = parent.as_table_like_mut()?;
    match (table.get_mut(last), item) {
        (Some(place @ Item::Value(_)), Item::Value(mut value)) => {
            if let Some(old) = place.as_value() {
                *value.decor_mut() = old.decor().clone();
            }
            *place = Item::Value(value);
        }
        (Some(Item::Table(old)), Item::Table(mut new)) => {
            *new.decor_mut() = old.decor().clone();
            new.set_position(old.position());
            *old = new;
        }
        (_, item) => {
            // The remark above a table's header moves to the line that replaces it.
            let remark = match table.remove(last) {
                Some(Item::Table(old)) => old.decor().prefix().cloned(),
                _ => None,
            };
            table.insert(last, item);
            if let (Some(remark), Some(mut key)) = (remark, table.key_mut(last)) {
                key.leaf_decor_mut().set_prefix(remark);
            }
        }
    }
    if is_inline && let Some(table) = parent.as_inline_table_mut() {
        table.fmt();
    }
    Some(())
}

/// Makes the table at the end of `keys` hold what `node` says, key by key: what
/// is the same already keeps the way it is written, and its comments.
pub(super) fn merge(
    document: &mut DocumentMut,
    keys: &[String],
    (old, node): (&Node, &Node),
    pattern: &str,
) {
    let gone: Vec<&str> = old.entries().iter().map(|entry| entry.key.as_str()).collect();
    for key in gone.into_iter().filter(|key| node.get(key).is_none()) {
        remove(document, keys, key);
    }
    for Entry { key, node: new } in node.entries() {
        let mut place = keys.to_vec();
        place.push(key.clone());
        let inside = inner_pattern(pattern, key);
        match old.get(key) {
            Some(old) if old.same(new) => {}
            Some(old) if old.is_table() && new.is_table() => {
                merge(document, &place, (old, new), &inside);
            }
            _ => {
                put(document, &place, item(new, key, &inside));
            }
        }
    }
}

/// The place in the key table of what stands under `key` in a table.
fn inner_pattern(pattern: &str, key: &str) -> String {
    let named = format!("{pattern}.*");
    if keys::tables().any(|table| table == named) { named } else { path::join(pattern, key) }
}

fn remove(document: &mut DocumentMut, keys: &[String], key: &str) {
    let table = keys.iter().try_fold(document.as_item_mut(), |item, key| item.get_mut(key));
    let Some(table) = table else { return };
    if let Some(like) = table.as_table_like_mut() {
        like.remove(key);
    }
    // An empty table has to be written as itself, or it would be gone.
    if let Some(inline) = table.as_inline_table_mut() {
        inline.fmt();
        if inline.is_empty() {
            inline.set_dotted(false);
        }
    } else if let Some(table) = table.as_table_mut().filter(|table| table.is_empty()) {
        table.set_implicit(false);
        table.set_dotted(false);
    }
}

/// Gives a changed text the line ends and the byte order mark of the old one: a
/// line that was there keeps its end, a new one ends as the line in its place.
pub(super) fn like(old: &str, new: &str) -> String {
    // The byte order mark.
    const MARK: char = '\u{feff}';
    // A line that is not found as near as that is a new one.
    const WINDOW: usize = 200;
    let old_lines: Vec<&str> = old.trim_start_matches(MARK).split_inclusive('\n').collect();
    let bare = |line: &str| line.trim_end_matches(['\r', '\n']).to_owned();
    let bare_old: Vec<String> = old_lines.iter().map(|line| bare(line)).collect();
    let mut windows = false;
    let mut at = 0;
    let mut text = String::with_capacity(new.len());
    for line in new.trim_start_matches(MARK).split_inclusive('\n') {
        let bare_line = bare(line);
        let rest = bare_old.get(at..).unwrap_or_default();
        // Empty lines are all alike, so that only the next ones can be told apart.
        let window = if bare_line.is_empty() { 3 } else { WINDOW };
        let found = rest.iter().take(window).position(|old| *old == bare_line);
        if let Some(old) = old_lines.get(at + found.unwrap_or(0)).filter(|old| old.ends_with('\n'))
        {
            windows = old.ends_with("\r\n");
        }
        at += found.map_or(0, |found| found + 1);
        text.push_str(&bare_line);
        if line.ends_with('\n') {
            text.push_str(if windows { "\r\n" } else { "\n" });
        }
    }
    // A last line without an end stays without one.
    if let Some(last) = old_lines.last().filter(|last| !last.ends_with('\n'))
        && text.lines().next_back() == Some(*last)
    {
        text.truncate(text.trim_end_matches(['\r', '\n']).len());
    }
    if old.starts_with(MARK) {
        text.insert(0, MARK);
    }
    text
}
