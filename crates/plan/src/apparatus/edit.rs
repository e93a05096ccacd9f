//! Values into TOML, new or in place of old ones, with the comments around
//! them kept.

use toml_edit::{Array, Datetime, DocumentMut, InlineTable, Item, Table, Value};

use super::keys;
use crate::files::{Data, Node, path};

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
    let named = format!("{pattern}.*");
    let is_named = keys::tables().any(|table| table == named);
    for entry in node.entries() {
        let inside = if is_named { named.clone() } else { path::join(pattern, &entry.key) };
        table.insert(&entry.key, item(&entry.node, &entry.key, &inside));
    }
    // `[lasers]` above `[lasers.raman]` says nothing.
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

/// Gives a changed text the line ends and the byte order mark of the old one.
pub(super) fn like(old: &str, new: String) -> String {
    let all_crlf = old.contains("\r\n") && !old.replace("\r\n", "").contains('\n');
    let new = if all_crlf { new.replace("\r\n", "\n").replace('\n', "\r\n") } else { new };
    if old.starts_with('\u{feff}') && !new.starts_with('\u{feff}') {
        return format!("\u{feff}{new}");
    }
    new
}
