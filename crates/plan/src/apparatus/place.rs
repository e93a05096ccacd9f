//! Where a path leads: into the file, to a default of the key table, or nowhere.

use fluxloom_core::fault::Fault;
use serde_json::Value;

use super::keys::{self, Found, Key, Kind, Need, Standard};
use super::{Apparatus, check};
use crate::Error;
use crate::files::{Node, nearest, path};

/// The code of a path that leads nowhere.
pub(super) const UNKNOWN_PATH: &str = "apparatus.unknown_path";

/// A setting as found in the file or in the key table.
pub(super) enum Place<'a> {
    Stated(&'static Key, &'a Node),
    Default(Standard, &'static str),
    /// A part of a measured number, a pair or a table.
    Inner(&'a Node),
    NotStated,
}

impl Apparatus {
    /// A fault about a path that leads nowhere.
    pub(super) fn unknown_path(&self, path: &str) -> Fault {
        let known = self.known_paths();
        let meant = nearest(path, known.iter().map(String::as_str)).map(str::to_owned);
        fault(UNKNOWN_PATH, path, self.why_unknown(path), meant)
    }

    /// Every path that leads somewhere, tables included.
    pub(super) fn known_paths(&self) -> Vec<String> {
        let mut known = self.paths();
        for table in keys::tables() {
            match table.strip_suffix(".*") {
                Some(parent) => {
                    known.extend(self.names(parent).iter().map(|n| format!("{parent}.{n}")));
                }
                None => known.push(table.to_owned()),
            }
        }
        known
    }

    /// The table that would have to be there for this path to lead somewhere.
    pub(super) fn absent_table(&self, keys: &[String]) -> Option<String> {
        keys::find(keys)?;
        let [table, name, ..] = keys else { return None };
        let absent = self.tree.find(&[table, name]).is_none();
        absent.then(|| path::short(&path::join(table, name)).into_owned())
    }

    /// Why a path leads nowhere.
    pub(super) fn why_unknown(&self, path: &str) -> String {
        let (shown, keys) = (path::short(path), path::split(path));
        if let (Some(absent), Some(table)) = (self.absent_table(&keys), keys.first()) {
            let names = self.names(table);
            let others = match names.as_slice() {
                [] => String::new(),
                names => format!("; [{table}] has {}", path::listed(names)),
            };
            return format!("{shown}: there is no [{absent}] in this apparatus{others}");
        }
        let parent = keys.split_last().map(|(_, parent)| parent).unwrap_or_default();
        let inside = match keys::find(parent) {
            Some(Found::Table(table)) => {
                let names = self.names(&parent.join("."));
                let known: Vec<String> = check::children(table).map(str::to_owned).collect();
                let known = if known.is_empty() { names } else { known };
                format!("; {} has {}", path::short(&parent.join(".")), path::listed(known))
            }
            _ => String::new(),
        };
        format!("{shown} is not a setting of this apparatus{inside}")
    }

    /// Whether every name in a path that the file chooses is in the file.
    pub(super) fn names_exist(&self, pattern: &str, keys: &[String]) -> bool {
        pattern
            .split('.')
            .enumerate()
            .filter(|(_, word)| *word == "*")
            .all(|(index, _)| keys.get(..=index).is_some_and(|keys| self.tree.find(keys).is_some()))
    }

    /// Where a path leads.
    ///
    /// # Errors
    /// `apparatus.unknown_path`.
    pub(super) fn place(&self, path: &str) -> Result<Place<'_>, Error> {
        let keys = path::split(path);
        let unknown = || Error::Faults(vec![self.unknown_path(path)]);
        let found = keys::find(&keys).ok_or_else(unknown)?;
        let pattern = match found {
            Found::Setting(key) | Found::Part(key, _) | Found::Pair(key) => key.pattern,
            Found::Table(table) => table,
        };
        if !self.names_exist(pattern, &keys) {
            return Err(unknown());
        }
        let node = self.tree.find(&keys);
        Ok(match (found, node) {
            (Found::Setting(key), Some(node)) => Place::Stated(key, node),
            (Found::Setting(key), None) => self.default(key, &keys),
            (Found::Part(key, "value"), None) => {
                let setting = keys.split_last().map(|(_, setting)| setting).unwrap_or_default();
                let node = self.tree.find(setting);
                node.map_or_else(|| self.default(key, setting), |node| Place::Stated(key, node))
            }
            (_, Some(node)) => Place::Inner(node),
            (_, None) => Place::NotStated,
        })
    }

    fn default(&self, key: &'static Key, keys: &[String]) -> Place<'_> {
        let Need::Default(standard, reason) = key.need else { return Place::NotStated };
        // A beam that is not sent back returns no fraction of its power.
        if key.name() == "return_fraction"
            && let [_, beam, ..] = keys
            && self.pair("lattice").as_slice() != [beam.as_str()]
        {
            return Place::NotStated;
        }
        // Without a Raman pair, say, there is no tilt of it either.
        let table = key.table();
        let absent = !table.contains('*') && !table.is_empty() && self.tree.get(table).is_none();
        if absent && keys::rows(table).any(|row| row.need == Need::Required) {
            return Place::NotStated;
        }
        Place::Default(standard, reason)
    }
}

/// The number of a measured table, or the value itself.
pub(super) fn inner(node: &Node) -> &Node {
    node.get("value").unwrap_or(node)
}

/// A value as its kind has it: `30` is 30.0 where a number is meant.
pub(super) fn value(kind: &Kind, node: &Node) -> Value {
    match kind {
        Kind::Count(_) | Kind::NonZero(_) | Kind::Version => match node.number() {
            // Counts are whole and far below 2^53: the checks saw to it.
            #[allow(clippy::cast_possible_truncation)]
            Some(number) => Value::from(number as i64),
            None => node.to_value(),
        },
        Kind::Number(_) | Kind::OneOrTwo(_) | Kind::Range(..) | Kind::Vector => {
            match node.number() {
                Some(number) => Value::from(number),
                None => node.list().iter().filter_map(Node::number).collect(),
            }
        }
        _ => node.to_value(),
    }
}

pub(super) fn standard_value(standard: Standard) -> Value {
    match standard {
        Standard::Number(number) => Value::from(number),
        Standard::Whole(whole) => Value::from(whole),
        Standard::Flag(flag) => Value::from(flag),
        Standard::Text(text) => Value::from(text),
        Standard::Vector(vector) => vector.into_iter().collect(),
    }
}

/// A fault without a place in a file.
pub(super) fn fault(
    code: &str,
    path: &str,
    message: String,
    did_you_mean: Option<String>,
) -> Fault {
    let path = path::short(path).into_owned();
    Fault { code: code.to_owned(), file: None, line: None, path, message, did_you_mean }
}
