//! Changing settings: a new apparatus with the same comments, or every reason
//! why not.

use serde_json::Value;
use toml_edit::{DocumentMut, Item};

use super::keys::{self, Found};
use super::{Apparatus, balance, check, edit};
use crate::Error;
use crate::files::{self, Data, Faults, Lines, Node, path};

/// A change whose path leads somewhere.
struct Change {
    keys: Vec<String>,
    found: Found,
    node: Node,
}

impl Apparatus {
    /// The same apparatus with other values. Any path of a setting will do,
    /// stated so far or not; a table's path takes the whole table, which is how
    /// a new beam or laser is added. A plain number in place of a measured one
    /// drops the old uncertainty with the old value. Depth and power of the
    /// lattice move together; [`Apparatus::changes`] says what moved.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with the changes and
    /// with what they would make; the places are paths without lines.
    pub fn replace(&self, changes: &[(String, Value)]) -> Result<Self, Error> {
        let changes: Vec<(String, Node)> =
            changes.iter().map(|(at, value)| (at.clone(), Node::from_value(value))).collect();
        self.replace_nodes(&changes)
    }

    /// As [`Apparatus::replace`], with values that may be NaN or infinite: they
    /// are reported with their place.
    ///
    /// # Errors
    /// As [`Apparatus::replace`].
    pub fn replace_nodes(&self, changes: &[(String, Node)]) -> Result<Self, Error> {
        let mut faults = Faults::new(None, Lines::Hidden);
        let changes = self.resolve(changes, &mut faults);
        let mut document: DocumentMut = match self.text.parse() {
            Ok(document) => document,
            Err(error) => {
                faults.add("file.syntax", None, "", error.to_string());
                return faults.finish(self.clone());
            }
        };
        for change in &changes {
            put(&mut document, change);
        }
        let mut text = edit::like(&self.text, document.to_string());
        let mut reading = Faults::new(None, Lines::Hidden);
        let mut tree = read(&text, &mut reading);
        let moves = balance::moves(&self.tree, &tree, &touched(&changes));
        for step in &moves {
            if let Some(node) = balance::scaled(&tree, step) {
                let keys = path::split(&step.path);
                let item = edit::item(&node, "", &step.path);
                edit::put(&mut document, &keys, item);
            }
        }
        if !moves.is_empty() {
            text = edit::like(&self.text, document.to_string());
            tree = read(&text, &mut reading);
        }
        check::check(&tree, &mut faults);
        // The user set one number and the fault is at the other: name both.
        for fault in faults.iter_mut() {
            if let Some(step) = moves.iter().find(|step| step.path == fault.path) {
                fault.message = format!("{}; {}", step.sentence, fault.message);
            }
        }
        let changes = moves.into_iter().map(|step| step.sentence).collect();
        faults.finish(Self { text, tree, changes })
    }

    /// Finds out where the changes lead, and reports those that lead nowhere.
    fn resolve(&self, changes: &[(String, Node)], faults: &mut Faults) -> Vec<Change> {
        let mut list: Vec<Change> = Vec::new();
        for (at, node) in changes {
            let keys = path::split(at);
            let found = keys::find(&keys).filter(|found| self.may_set(*found, &keys));
            let Some(found) = found else {
                let fault = self.unknown_path(at);
                faults.add_meant(&fault.code, None, at, fault.message, fault.did_you_mean);
                continue;
            };
            if let Some(other) = list.iter().find(|other| path::overlap(&other.keys, &keys)) {
                let message = format!(
                    "{at} and {} are set in one call and one contains the other: set one of them",
                    other.keys.join(".")
                );
                faults.add("apparatus.overlapping_changes", None, at, message);
                continue;
            }
            if nulls(node, at, faults) {
                continue;
            }
            list.push(Change { keys, found, node: node.clone() });
        }
        list
    }

    /// Whether a path may be set: names in it must exist, but for a table that is
    /// given whole.
    fn may_set(&self, found: Found, keys: &[String]) -> bool {
        match found {
            Found::Setting(key) | Found::Part(key, _) | Found::Pair(key) => {
                self.names_exist(key.pattern, keys)
            }
            Found::Table(_) => true,
        }
    }
}

/// Reports every null in a value.
fn nulls(node: &Node, at: &str, faults: &mut Faults) -> bool {
    let mut any = false;
    match &node.data {
        Data::Null => {
            let message = format!("{at} cannot become null, which is no value: give a value");
            faults.add("file.null", None, at, message);
            any = true;
        }
        Data::List(list) => {
            for item in list {
                any |= nulls(item, at, faults);
            }
        }
        Data::Table(entries) => {
            for entry in entries {
                any |= nulls(&entry.node, &path::join(at, &entry.key), faults);
            }
        }
        _ => {}
    }
    any
}

fn put(document: &mut DocumentMut, change: &Change) {
    let Change { keys, found, node } = change;
    match found {
        Found::Setting(key) => {
            edit::put(document, keys, edit::item(node, key.name(), key.pattern));
        }
        Found::Pair(_) => {
            edit::put(document, keys, edit::item(node, "", ""));
        }
        Found::Table(table) => {
            edit::put(document, keys, edit::item(node, "", table));
        }
        Found::Part(_, part) => put_part(document, keys, part, node),
    }
}

/// Sets one part of a measured number, which may have been a plain one so far.
fn put_part(document: &mut DocumentMut, keys: &[String], part: &str, node: &Node) {
    let setting = keys.split_last().map(|(_, setting)| setting).unwrap_or_default();
    let old = setting.iter().try_fold(document.as_item(), |item, key| item.get(key.as_str()));
    let plain = old.filter(|item| !item.is_table_like()).and_then(Item::as_value).cloned();
    let item = edit::item(node, part, "");
    match plain {
        Some(_) if part == "value" => {
            edit::put(document, setting, item);
        }
        Some(mut value) => {
            value.decor_mut().clear();
            let mut table = toml_edit::InlineTable::new();
            table.insert("value", value);
            edit::put(document, setting, Item::Value(table.into()));
            edit::put(document, keys, item);
        }
        None => {
            edit::put(document, keys, item);
        }
    }
}

/// The paths whose values are given by the changes.
fn touched(changes: &[Change]) -> Vec<Vec<String>> {
    let is_value =
        |change: &&Change| !matches!(change.found, Found::Part(_, part) if part != "value");
    changes.iter().filter(is_value).map(|change| change.keys.clone()).collect()
}

fn read(text: &str, faults: &mut Faults) -> Node {
    files::read_toml(text, faults).unwrap_or_else(|| Node::new(Data::Unreadable))
}
