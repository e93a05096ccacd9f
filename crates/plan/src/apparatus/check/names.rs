//! Names that refer to other entries of the file: they must exist, must not go
//! in circles, and a channel's units must be those of what it drives.

use std::collections::{BTreeMap, BTreeSet};

use super::super::keys::{self, Kind};
use super::matching;
use crate::files::{Data, Faults, Node, path};

/// Checks every reference of the file; `misnamed` are tables whose own names
/// are misspelt.
pub(super) fn check(root: &Node, misnamed: &[(&'static str, &Node)], faults: &mut Faults) {
    // What is not found in half a file may stand in the other half.
    if faults.is_whole() {
        references(root, misnamed, faults);
    }
    circles(root, faults);
    units(root, faults);
}

fn references(root: &Node, misnamed: &[(&'static str, &Node)], faults: &mut Faults) {
    let mut tables: BTreeMap<&str, Option<Defined>> = BTreeMap::new();
    let mut defined =
        |table| tables.entry(table).or_insert_with(|| Defined::new(root, misnamed, table)).clone();
    for key in keys::all() {
        match key.kind {
            Kind::Name(table) | Kind::Names { table, .. } => {
                let Some(defined) = defined(table) else { continue };
                for (at, node) in matching(root, key.pattern) {
                    // What is wrong in itself is not looked up.
                    if !faults.spoils(&at) {
                        for name in std::iter::once(node).chain(node.list()) {
                            exists(name, &at, table, &defined, faults);
                        }
                    }
                }
            }
            Kind::Setting(playable) => {
                let mut known = Vec::new();
                let mut sound = true;
                for pattern in playable {
                    // The entry must exist; the setting inside it may be stated or not.
                    let Some((table, rest)) = pattern.split_once(".*") else {
                        known.push((*pattern).to_owned());
                        continue;
                    };
                    match defined(table) {
                        Some(entries) => known.extend(
                            entries.names.iter().map(|name| path::join(table, name) + rest),
                        ),
                        None => sound = false,
                    }
                }
                if sound {
                    settings(root, key.pattern, &known, faults);
                }
            }
            _ => {}
        }
    }
}

/// The names that a table defines.
#[derive(Clone)]
struct Defined<'a> {
    /// In the order of the file.
    names: Vec<&'a str>,
    set: BTreeSet<&'a str>,
}

impl<'a> Defined<'a> {
    /// None if the table is at fault itself: then nobody knows its names.
    fn new(root: &'a Node, misnamed: &[(&str, &'a Node)], table: &str) -> Option<Self> {
        let same = misnamed.iter().filter(|(meant, _)| *meant == table).map(|(_, node)| *node);
        let mut names = Vec::new();
        for node in root.get(table).into_iter().chain(same) {
            let Data::Table(entries) = &node.data else { return None };
            let is_entry = |node: &Node| matches!(node.data, Data::Table(_) | Data::Unreadable);
            if !entries.iter().all(|entry| is_entry(&entry.node)) {
                return None;
            }
            names.extend(entries.iter().map(|entry| entry.key.as_str()));
        }
        Some(Self { set: names.iter().copied().collect(), names })
    }
}

fn exists(node: &Node, at: &str, table: &str, defined: &Defined, faults: &mut Faults) {
    let Some(name) = node.text() else { return };
    if defined.set.contains(name) {
        return;
    }
    let shown = super::value::shown(name);
    let list = if defined.names.is_empty() {
        format!("there is no [{table}.{shown}]: add it")
    } else {
        format!("[{table}] has {}", path::listed(&defined.names))
    };
    let message = format!("{at} names \"{shown}\", but {list}");
    let near = (name, defined.names.iter().copied());
    faults.add_near("file.unknown_name", node.line, at, message, near);
}

fn settings(root: &Node, pattern: &str, known: &[String], faults: &mut Faults) {
    let set: BTreeSet<&str> = known.iter().map(String::as_str).collect();
    for (at, node) in matching(root, pattern) {
        let Some(found) = node.text().filter(|found| !set.contains(found)) else { continue };
        let message = format!(
            "{at} = \"{}\" is not a setting that a channel can play: these are {}",
            super::value::shown(found),
            path::listed(known)
        );
        let near = (found, known.iter().map(String::as_str));
        faults.add_near("file.unknown_name", node.line, &at, message, near);
    }
}

/// Clock references that lead back to where they were, each circle once and at
/// the synthesiser of it that the file has first.
fn circles(root: &Node, faults: &mut Faults) {
    let entries = root.get("synthesisers").map(Node::entries).unwrap_or_default();
    let order: BTreeMap<&str, usize> =
        entries.iter().enumerate().rev().map(|(index, e)| (e.key.as_str(), index)).collect();
    let reference = |index: usize| entries.get(index).and_then(|e| e.node.get("reference"));
    let mut seen = BTreeSet::new();
    for start in 0..entries.len() {
        let mut chain: Vec<usize> = Vec::new();
        let mut next = Some(start);
        while let Some(index) = next.filter(|index| seen.insert(*index)) {
            chain.push(index);
            next = reference(index).and_then(Node::text).and_then(|name| order.get(name).copied());
        }
        let Some(circle) = chain.iter().position(|index| Some(*index) == next) else { continue };
        let circle = chain.get(circle..).unwrap_or_default();
        let Some(first) = (0..circle.len()).min_by_key(|at| circle.get(*at)) else { continue };
        let turned: Vec<usize> =
            circle.iter().cycle().skip(first).take(circle.len() + 1).copied().collect();
        let names = turned.iter().filter_map(|index| entries.get(*index)).map(|e| e.key.as_str());
        let names: Vec<&str> = names.collect();
        let (Some(name), Some(index)) = (names.first(), turned.first()) else { continue };
        let at = path::join(&path::join("synthesisers", name), "reference");
        let message = format!(
            "{at} leads in a circle, {}: leave it out for the one that has the clock",
            path::listed(&names).replace(", ", " -> ")
        );
        let line = reference(*index).and_then(|node| node.line);
        faults.add("file.circular_reference", line, &at, message);
    }
}

/// A channel that plays milliwatts has no full scale in gauss.
fn units(root: &Node, faults: &mut Faults) {
    for (at, channel) in matching(root, "channels.*") {
        let Some(drives) = channel.get("drives").and_then(Node::text) else { continue };
        let unit = match drives.rsplit(['.', '_']).next() {
            Some(unit @ ("mw" | "gauss")) => unit,
            _ => continue,
        };
        for entry in channel.entries() {
            let (stem, found, tail) = match entry.key.as_str() {
                "full_scale_mw" => ("full_scale_", "mw", ""),
                "full_scale_gauss" => ("full_scale_", "gauss", ""),
                "slew_mw_per_s" => ("slew_", "mw", "_per_s"),
                "slew_gauss_per_s" => ("slew_", "gauss", "_per_s"),
                _ => continue,
            };
            if found != unit {
                let here = path::join(&at, &entry.key);
                let right = format!("{stem}{unit}{tail}");
                let message = format!(
                    "{here} is in another unit than {drives}, which the channel drives: \
                     give {right}"
                );
                faults.add_meant("file.wrong_unit", entry.node.line, &here, message, Some(right));
            }
        }
    }
}
