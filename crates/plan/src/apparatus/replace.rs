//! Changing settings: a new apparatus with the same comments, or every reason
//! why not.

use fluxloom_core::limits::plain;
use serde_json::Value;
use toml_edit::{DocumentMut, Item};

use super::balance::Move;
use super::keys::{self, Found};
use super::place::UNKNOWN_PATH;
use super::{Apparatus, agreement, balance, check, edit, retune};
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
    /// lattice move together, and the power follows what else changes the depth
    /// it makes; [`Apparatus::changes`] says what moved.
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
            put(&mut document, &self.tree, change);
        }
        let touched = touched(&changes);
        let mut new = self.reread(&document);
        let mut balance = balance::balance(&self.tree, &new.tree, &touched);
        if move_along(&mut document, &new.tree, &balance.moves) {
            new = self.reread(&document);
        }
        let retuned = retune::retune(self, &new, &touched);
        if retuned.is_known {
            balance.remark = None;
        }
        if move_along(&mut document, &new.tree, &retuned.moves) {
            new = self.reread(&document);
        }
        balance.moves.extend(retuned.moves);
        balance.merge_steps(&self.tree, &new.tree);
        check::check(&new.tree, &mut faults);
        agreement::check(&new, &mut faults);
        // The user set one number and the fault is at the other: name both.
        for fault in faults.iter_mut() {
            if let Some(step) = balance.moves.iter().find(|step| step.path == fault.path) {
                fault.message = format!("{}; {}", step.sentence, fault.message);
            }
        }
        faults.finish(Self { changes: balance.sentences(), ..new })
    }

    /// A changed document with the line ends of this one, not judged yet.
    fn reread(&self, document: &DocumentMut) -> Self {
        let text = edit::like(&self.text, &document.to_string());
        let mut reading = Faults::new(None, Lines::Hidden);
        let tree =
            files::read_toml(&text, &mut reading).unwrap_or_else(|| Node::new(Data::Unreadable));
        Self { text, tree, changes: Vec::new() }
    }

    /// Finds out where the changes lead, and reports those that lead nowhere.
    fn resolve(&self, changes: &[(String, Node)], faults: &mut Faults) -> Vec<Change> {
        let mut list: Vec<Change> = Vec::new();
        let mut known = None;
        for (at, node) in changes {
            let keys = path::split(at);
            let found = keys::find(&keys).filter(|found| self.may_set(*found, &keys));
            let Some(found) = found else {
                let mut message = String::new();
                // Beyond the most faults that are listed, they are only counted.
                if !faults.is_full() {
                    message = self.why_unknown(at);
                    if let Some(table) = self.absent_table(&keys) {
                        message += &format!("; to add one, give the whole table {table}");
                    }
                }
                let known = known.get_or_insert_with(|| self.known_paths());
                let near = (at.as_str(), known.iter().map(String::as_str));
                faults.add_near(UNKNOWN_PATH, None, at, message, near);
                continue;
            };
            if let Some(other) = list.iter().find(|other| path::overlap(&other.keys, &keys)) {
                let message = both(at, (found, node), other);
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
            let message = format!("{at} is given no value, and cannot be taken away: give one");
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

/// The refusal of two changes of which one contains the other.
fn both(at: &str, (found, node): (Found, &Node), other: &Change) -> String {
    let other_at = other.keys.iter().fold(String::new(), |parent, key| path::join(&parent, key));
    let remedy = match ((found, node, at), (other.found, &other.node, &*other_at)) {
        // A value and what is known about it have one table to stand in.
        ((Found::Part(_, part), detail, _), (Found::Setting(_), value, setting))
        | ((Found::Setting(_), value, setting), (Found::Part(_, part), detail, _))
            if part != "value" && !value.is_table() =>
        {
            format!(
                "give both in one table, {} = {{ value = {}, {part} = {} }}",
                path::short(setting),
                shown(value),
                shown(detail)
            )
        }
        _ => "set one of them".to_owned(),
    };
    format!(
        "{} and {} are set in one call and one contains the other: {remedy}",
        path::short(at),
        path::short(&other_at)
    )
}

/// A value as it may be typed.
fn shown(node: &Node) -> String {
    match node.number() {
        Some(number) => plain(number),
        None => "...".to_owned(),
    }
}

/// Writes a change over what `tree` says so far; a value that stays the same
/// stays as it is written.
fn put(document: &mut DocumentMut, tree: &Node, change: &Change) {
    let Change { keys, found, node } = change;
    let old = tree.find(keys);
    if old.is_some_and(|old| old.same(node)) {
        return;
    }
    let (name, pattern) = match found {
        Found::Setting(key) => (key.name(), key.pattern),
        Found::Pair(_) => ("", ""),
        Found::Table(table) => ("", *table),
        Found::Part(_, part) => return put_part(document, keys, part, node),
    };
    match old.filter(|old| old.is_table() && node.is_table()) {
        Some(old) => edit::merge(document, keys, (old, node), pattern),
        None => {
            edit::put(document, keys, edit::item(node, name, pattern));
        }
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

/// Writes numbers that move along; whether there were any.
fn move_along(document: &mut DocumentMut, tree: &Node, moves: &[Move]) -> bool {
    for step in moves {
        if let Some(node) = balance::scaled(tree, step) {
            let keys = path::split(&step.path);
            edit::put(document, &keys, edit::item(&node, "", &step.path));
        }
    }
    !moves.is_empty()
}
