//! Other settings than depth and power change what a power makes of the lattice:
//! waists, wavelength, polarisation, angles, the atom. The depth stands, because
//! it is what everything else reads, and the power follows, so that computed over
//! stated depth stays the ratio it was. Where the power is given, the depth follows.

use super::agreement::DEPTH;
use super::balance::{Factor, Move, short};
use super::{Apparatus, check};
use crate::files::{Node, path};

/// A computed depth that moves by less than this part is left: no power meter
/// tells, and a state or a field that is changed would move powers for nothing.
const WORTH_MOVING: f64 = 1e-4;

/// What moves.
pub(super) struct Retuned {
    /// Numbers that move along; none if the ratio stays.
    pub moves: Vec<Move>,
    /// Whether both depths are known before and after.
    pub is_known: bool,
}

/// What follows from the changes at `touched`, which lead from `before` to
/// `after`; depth and power themselves are balanced already.
pub(super) fn retune(before: &Apparatus, after: &Apparatus, touched: &[Vec<String>]) -> Retuned {
    let nothing = Retuned { moves: Vec::new(), is_known: false };
    let causes = causes(before, after);
    if causes.is_empty() {
        return nothing;
    }
    let depth_er = |ap: &Apparatus| ap.number(DEPTH).ok().filter(|depth| *depth > 0.0);
    let computed_er = |ap: &Apparatus| ap.depth_from_power_er().ok().filter(|depth| *depth > 0.0);
    let (Some(old_er), Some(new_er)) = (depth_er(before), depth_er(after)) else { return nothing };
    let (Some(old_made_er), Some(new_made_er)) = (computed_er(before), computed_er(after)) else {
        return nothing;
    };
    let known = |moves: Vec<Move>| Retuned { moves, is_known: true };
    // The ratio now over the ratio before.
    let growth = Factor { top: new_made_er * old_er, bottom: old_made_er * new_er };
    if (growth.times(1.0) - 1.0).abs() <= WORTH_MOVING {
        return known(Vec::new());
    }
    let powers = after.lattice_powers();
    let power_is_given = powers.iter().any(|at| is_given(before, after, at, touched));
    let depth_keys = path::split(DEPTH);
    let depth_is_given = touched.iter().any(|change| path::overlap(change, &depth_keys));
    let mut causes = format!("{} changed", path::listed(&causes));
    if depth_is_given && old_er != new_er && !power_is_given {
        causes = format!("{DEPTH} {} -> {}, {causes}", short(old_er), short(new_er));
    }
    known(match (power_is_given, depth_is_given) {
        (true, true) => Vec::new(),
        (true, false) => vec![Move {
            path: DEPTH.to_owned(),
            factor: growth,
            sentence: format!(
                "{causes}: {DEPTH} moves with what the power now makes, {} -> {}",
                short(new_er),
                short(growth.times(new_er))
            ),
        }],
        (false, _) => {
            let factor = Factor { top: growth.bottom, bottom: growth.top };
            let moved = powers.iter().filter_map(|at| Some((at, after.number(at).ok()?)));
            moved
                .map(|(at, power)| Move {
                    path: at.clone(),
                    factor,
                    sentence: format!(
                        "{causes}: {at} moves so that {DEPTH} = {} stands, {} -> {}",
                        short(new_er),
                        short(power),
                        short(factor.times(power))
                    ),
                })
                .collect()
        }
    })
}

/// Whether a change names a power itself, or brings another value with its table.
fn is_given(before: &Apparatus, after: &Apparatus, at: &str, touched: &[Vec<String>]) -> bool {
    let keys = path::split(at);
    touched.iter().filter(|change| path::overlap(change, &keys)).any(|change| {
        change.len() >= keys.len() || number(&before.tree, &keys) != number(&after.tree, &keys)
    })
}

/// The settings behind the computed depth that are not what they were.
fn causes(before: &Apparatus, after: &Apparatus) -> Vec<String> {
    let mut paths = after.depth_inputs();
    paths.extend(before.depth_inputs());
    let mut causes: Vec<String> = Vec::new();
    for at in paths {
        // Beams of the one that are none of the other have no values to compare.
        let same = before.get(&at).ok() == after.get(&at).ok();
        if !same && !causes.contains(&at) {
            causes.push(at);
        }
    }
    causes
}

fn number(root: &Node, keys: &[String]) -> Option<f64> {
    check::inner(root.find(keys)?)?.number()
}
