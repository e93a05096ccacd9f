//! Where a knob stands today against where it may go.

use fluxloom_core::limits::plain;

use super::super::keys::{self, Kind};
use super::{matching, sound_numbers};
use crate::files::{Faults, Node, path};

/// Checks every setting that has a range or a maximum beside it.
pub(super) fn check(root: &Node, faults: &mut Faults) {
    for key in keys::all() {
        let Kind::Range(_, Some(today)) = key.kind else { continue };
        for (table_at, table) in matching(root, key.table()) {
            range(table, &table_at, today, key.name(), faults);
        }
    }
    for (at, beam) in matching(root, "beams.*") {
        power(beam, &at, faults);
    }
}

fn range(table: &Node, at: &str, today: &str, range: &str, faults: &mut Faults) {
    let (Some(today_node), Some(range_node)) = (table.get(today), table.get(range)) else { return };
    let (here, range_at) = (path::join(at, today), path::join(at, range));
    let value = sound_numbers(today_node, &here, faults);
    let ends = sound_numbers(range_node, &range_at, faults);
    let (&[value], &[low, high]) = (value.as_slice(), ends.as_slice()) else { return };
    if value < low || value > high {
        let message = format!(
            "{here} = {} is outside {range_at} = [{}, {}]: move the setting or widen the range",
            plain(value),
            plain(low),
            plain(high)
        );
        faults.add("file.value_outside_range", today_node.line, &here, message);
    }
}

fn power(beam: &Node, at: &str, faults: &mut Faults) {
    let (Some(today), Some(most)) = (beam.get("power_mw"), beam.get("max_power_mw")) else {
        return;
    };
    let (here, most_at) = (path::join(at, "power_mw"), path::join(at, "max_power_mw"));
    let value = sound_numbers(today, &here, faults);
    let limit = sound_numbers(most, &most_at, faults);
    let (&[value], &[limit]) = (value.as_slice(), limit.as_slice()) else { return };
    if value > limit {
        let message = format!(
            "{here} = {} is more than {most_at} = {}: lower the power or raise the maximum",
            plain(value),
            plain(limit)
        );
        faults.add("file.above_maximum", today.line, &here, message);
    }
}
