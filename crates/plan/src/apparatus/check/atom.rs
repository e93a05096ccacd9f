//! The isotope and its states.

use std::collections::BTreeSet;

use fluxloom_core::atom::{State, halves_text};
use fluxloom_core::limits::Limit;
use fluxloom_core::{Atom, Error};

use super::super::state::read_pair;
use super::value::{Asked, number, shown, text, wrong_type};
use crate::files::{Data, Faults, Node, path};

/// The atom that the file names, if it exists.
pub(super) fn of(root: &Node) -> Option<Atom> {
    Atom::new(root.find(&["cloud", "atom"])?.text()?).ok()
}

/// Checks the name of an isotope.
pub(super) fn name(node: &Node, at: &str, faults: &mut Faults) {
    let Some(found) = text(node, at, "the name of an isotope, such as \"40K\",", faults) else {
        return;
    };
    if let Err(error) = Atom::new(found) {
        let message = format!(
            "{at} = \"{}\" is not in the table: known are {}",
            shown(found),
            Atom::available().join(", ")
        );
        let meant = match &error {
            Error::UnknownAtom { suggestion, .. } => suggestion.clone(),
            _ => None,
        };
        faults.add_meant(error.code(), node.line, at, message, meant);
    }
}

/// Checks a state "F,m" of the atom; of any atom if it is not known.
pub(super) fn state(node: &Node, at: &str, atom: Option<&Atom>, faults: &mut Faults) {
    let Some(found) = text(node, at, "a state, such as \"9/2,-9/2\",", faults) else {
        return;
    };
    let why = match State::read(found) {
        Ok(state) => foreign(state, atom),
        Err(why) => Some(format!("{why}: write F,m such as \"9/2,-9/2\"")),
    };
    if let Some(why) = why {
        let message = format!("{at} = \"{}\" {why}", shown(found));
        faults.add("file.bad_state", node.line, at, message);
    }
}

/// Checks a table from pairs of states to numbers.
pub(super) fn pairs(
    limit: &Limit,
    node: &Node,
    at: &str,
    atom: Option<&Atom>,
    faults: &mut Faults,
) {
    if !node.is_table() {
        let asked = "a table from pairs of states to numbers, { \"F,m F,m\" = 100.0 },";
        return wrong_type(node, at, Asked::Other(asked), faults);
    }
    let mut seen: BTreeSet<[State; 2]> = BTreeSet::new();
    for entry in node.entries() {
        let here = path::join(at, &entry.key);
        let line = entry.node.line;
        if matches!(entry.node.data, Data::Unreadable) {
            continue;
        }
        match read_pair(&entry.key) {
            Err(why) => {
                let message = format!("{here} {why}: write \"9/2,-9/2 9/2,-7/2\"");
                faults.add("file.bad_state", line, &here, message);
            }
            Ok(mut pair) => {
                pair.sort_unstable();
                if let Some(why) = pair.into_iter().find_map(|state| foreign(state, atom)) {
                    let message = format!("{here} {why}");
                    faults.add("file.bad_state", line, &here, message);
                }
                if !seen.insert(pair) {
                    let message = format!("{here} is the same pair as one before: keep one");
                    faults.add("file.duplicate_name", line, &here, message);
                }
            }
        }
        if entry.node.is_table() {
            super::measured::check(&entry.node, &here, faults);
        }
        if let Some(value) = super::measured::inner(&entry.node) {
            number(limit, value, &here, Asked::Number("a number"), faults);
        }
    }
}

/// Why the atom has no such state, if so.
fn foreign(state: State, atom: Option<&Atom>) -> Option<String> {
    let atom = atom?;
    let manifold = atom.manifold();
    if manifold.index_of(state).is_some() {
        return None;
    }
    let list: Vec<String> = manifold.twice_f.iter().map(|f| halves_text(*f)).collect();
    Some(format!("is not a state of {}, which has F = {}", atom.name(), list.join(" and ")))
}
