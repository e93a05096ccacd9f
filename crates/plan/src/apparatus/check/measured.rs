//! Measured numbers, `{ value = 19.712, standard_error = 0.0004, data =
//! "field.csv", measured = 2026-11-30 }`: uncertainty and provenance in one place.

use toml_edit::Datetime;

use super::super::keys::{MEASURED_KEYS, STANDARD_ERROR};
use super::value::{Asked, wrong_type};
use crate::files::{Data, Faults, Node, path};

/// The number of a measured table, or the node itself if it is no table.
pub(in crate::apparatus) fn inner(node: &Node) -> Option<&Node> {
    if node.is_table() { node.get("value") } else { Some(node) }
}

/// Checks all of a measured table but its value.
pub(super) fn check(node: &Node, at: &str, faults: &mut Faults) {
    if node.get("value").is_none() {
        let here = path::join(at, "value");
        let message = format!("{here} is missing: a measured number needs its value");
        faults.add("file.missing_key", node.line, &here, message);
    }
    for entry in node.entries() {
        let here = path::join(at, &entry.key);
        let place = &entry.node;
        match entry.key.as_str() {
            "value" => {}
            "standard_error" => standard_error(place, &here, faults),
            "data" => {
                if place.text().is_none() {
                    wrong_type(place, &here, Asked::Text("the name of a file"), faults);
                }
            }
            "measured" => {
                let is_date = match &place.data {
                    Data::Date(text) | Data::Text(text) => {
                        // A time alone is no date, though TOML has it too.
                        text.parse::<Datetime>().is_ok_and(|date| date.date.is_some())
                    }
                    _ => false,
                };
                if !is_date {
                    wrong_type(place, &here, Asked::Other("a date such as 2026-11-30"), faults);
                }
            }
            _ => {
                let message = format!(
                    "{here} is not a known key: a measured number knows {}",
                    MEASURED_KEYS.join(", ")
                );
                let near = (entry.key.as_str(), MEASURED_KEYS);
                faults.add_near("file.unknown_key", place.line, &here, message, near);
            }
        }
    }
}

fn standard_error(node: &Node, at: &str, faults: &mut Faults) {
    match node.number() {
        Some(number) => {
            if let Err(error) = STANDARD_ERROR.check_as(number, at) {
                faults.add_error(&error, node.line, at);
            }
        }
        None => wrong_type(node, at, Asked::Number("a number"), faults),
    }
}
