//! Where a knob stands today against the most that it can take.

use fluxloom_core::limits::plain;

use super::{matching, sound_numbers};
use crate::files::{Faults, Node, path};

/// Checks every beam's power against its maximum. A setting outside its range is
/// no fault: the range is for the planner, and what stands outside it can still
/// be judged. [`crate::Apparatus::cautions`] mentions it.
pub(super) fn check(root: &Node, faults: &mut Faults) {
    for (at, beam) in matching(root, "beams.*") {
        power(beam, &at, faults);
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
