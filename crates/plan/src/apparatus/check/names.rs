//! Names that refer to other entries of the file: they must exist, must not go
//! in circles, and a channel's units must be those of what it drives.

use super::super::keys::{self, Kind};
use super::{matching, named_table};
use crate::files::{Faults, Node, path};

/// Checks every reference of the file.
pub(super) fn check(root: &Node, faults: &mut Faults) {
    for key in keys::all() {
        for (at, node) in matching(root, key.pattern) {
            if let Some(table) = named_table(&key.kind) {
                let single = [node];
                let texts: Vec<&Node> = if node.text().is_some() {
                    single.to_vec()
                } else {
                    node.list().iter().collect()
                };
                for text in texts {
                    exists(root, text, &at, table, faults);
                }
            }
            if let Kind::Setting(playable) = key.kind {
                setting(root, node, &at, playable, faults);
            }
        }
    }
    circles(root, faults);
    units(root, faults);
}

fn exists(root: &Node, node: &Node, at: &str, table: &str, faults: &mut Faults) {
    let Some(name) = node.text() else { return };
    let entries = root.get(table).map(Node::entries).unwrap_or_default();
    let known: Vec<&str> = entries.iter().map(|entry| entry.key.as_str()).collect();
    if known.contains(&name) {
        return;
    }
    let shown = super::value::shown(name);
    let list = if known.is_empty() {
        format!("there is no [{table}.{shown}]: add it")
    } else {
        format!("[{table}] has {}", known.join(", "))
    };
    let message = format!("{at} names \"{shown}\", but {list}");
    faults.add_near("file.unknown_name", node.line, at, message, (name, known));
}

fn setting(root: &Node, node: &Node, at: &str, playable: &[&str], faults: &mut Faults) {
    let Some(found) = node.text() else { return };
    let known: Vec<String> = playable
        .iter()
        .flat_map(|pattern| match pattern.split_once(".*") {
            // The entry must exist; the setting inside it may be stated or not.
            Some((table, rest)) => {
                let entries = root.get(table).map(Node::entries).unwrap_or_default();
                entries.iter().map(|e| path::join(table, &e.key) + rest).collect()
            }
            None => vec![(*pattern).to_owned()],
        })
        .collect();
    if known.iter().any(|path| path == found) {
        return;
    }
    let message = format!(
        "{at} = \"{}\" is not a setting that a channel can play: these are {}",
        super::value::shown(found),
        known.join(", ")
    );
    let near = (found, known.iter().map(String::as_str));
    faults.add_near("file.unknown_name", node.line, at, message, near);
}

/// Clock references that lead back to where they started, each circle once.
fn circles(root: &Node, faults: &mut Faults) {
    let reference = |name: &str| root.find(&["synthesisers", name, "reference"]);
    let mut seen: Vec<&str> = Vec::new();
    for entry in root.get("synthesisers").map(Node::entries).unwrap_or_default() {
        let mut chain: Vec<&str> = Vec::new();
        let mut name = entry.key.as_str();
        while !chain.contains(&name) && !seen.contains(&name) {
            chain.push(name);
            let Some(next) = reference(name).and_then(Node::text) else { break };
            name = next;
            if chain.first() == Some(&name) {
                let at = path::join(&path::join("synthesisers", &entry.key), "reference");
                let line = reference(&entry.key).and_then(|node| node.line);
                let message = format!(
                    "{at} leads in a circle, {} -> {name}: leave it out for the one that has \
                     the clock",
                    chain.join(" -> ")
                );
                faults.add("file.circular_reference", line, &at, message);
            }
        }
        seen.extend(chain);
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
