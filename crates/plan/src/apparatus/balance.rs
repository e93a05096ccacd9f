//! Lattice depth and beam power say the same thing twice: depth goes as the
//! power of a retro-reflected beam, and as the root of the product of two
//! crossing ones. Whoever changes one alone moves the other.

use std::collections::BTreeSet;

use fluxloom_core::limits::{DEPTH_ER, plain};

use super::agreement::DEPTH;
use super::check;
use crate::files::{Data, Node, path};

/// What a change does beyond what it names.
#[derive(Default)]
pub(super) struct Balance {
    /// Numbers that move along.
    pub moves: Vec<Move>,
    /// Why none does, where one might be expected to.
    pub remark: Option<String>,
}

impl Balance {
    /// One sentence for a number that moved twice: what happened between never stood
    /// anywhere. A number that came back is not told at all.
    pub(super) fn merge_steps(&mut self, before: &Node, after: &Node) {
        let mut merged: Vec<Move> = Vec::new();
        for step in std::mem::take(&mut self.moves) {
            let Some(earlier) = merged.iter_mut().find(|earlier| earlier.path == step.path) else {
                merged.push(step);
                continue;
            };
            let cause = |step: &Move| {
                step.sentence.split_once(": ").map_or("", |(cause, _)| cause).to_owned()
            };
            let (old, new) = (number(before, &step.path), number(after, &step.path));
            let value = |found: Option<f64>| found.map_or_else(|| "none".to_owned(), short);
            let (first, second) = (cause(earlier), cause(&step));
            let causes = if second.starts_with(&first) { second } else { first + ", " + &second };
            earlier.sentence =
                format!("{causes}: {} moves, {} -> {}", step.path, value(old), value(new));
        }
        let moved = |step: &Move| match (number(before, &step.path), number(after, &step.path)) {
            (Some(old), Some(new)) => (new - old).abs() > SAME * old.abs(),
            _ => true,
        };
        merged.retain(moved);
        self.moves = merged;
    }

    /// Everything the user is told, a sentence each.
    pub(super) fn sentences(self) -> Vec<String> {
        self.moves.into_iter().map(|step| step.sentence).chain(self.remark).collect()
    }
}

/// Numbers that differ by less than this part are one.
const SAME: f64 = 1e-9;

/// A number that moves along.
pub(super) struct Move {
    /// Its path.
    pub path: String,
    /// Factor on the value and on its standard error.
    pub factor: Factor,
    /// What the user is told.
    pub sentence: String,
}

/// A ratio kept as its two numbers, so that 54.6 x 9 / 6 is 81.9 and nothing beside it.
#[derive(Clone, Copy)]
pub(super) struct Factor {
    pub top: f64,
    pub bottom: f64,
}

impl Factor {
    /// `value` times the ratio.
    pub(super) fn times(self, value: f64) -> f64 {
        value * self.top / self.bottom
    }
}

/// What follows from the changes at `touched`, which lead from `before` to `after`.
pub(super) fn balance(before: &Node, after: &Node, touched: &[Vec<String>]) -> Balance {
    let is_touched = |path: &str| {
        let keys = path::split(path);
        touched.iter().any(|change| path::overlap(change, &keys))
    };
    let beams = lattice_beams(after);
    let (Some(old), Some(new)) = (number(before, DEPTH), number(after, DEPTH)) else {
        return Balance::default();
    };
    if beams.is_empty() || !DEPTH_ER.contains(new) {
        return Balance::default();
    }
    let depth_is_given = is_touched(DEPTH);
    let powers: Vec<String> =
        beams.iter().map(|beam| format!("beams.{}.power_mw", path::join("", beam))).collect();
    // The order makes no difference to a standing wave.
    if beams != lattice_beams(before) {
        let remark = stays(after, &powers, depth_is_given, is_touched);
        return Balance { remark, ..Balance::default() };
    }
    let any_power_is_given = powers.iter().any(|power| is_touched(power));
    let moves = match (depth_is_given && old != new, any_power_is_given) {
        (true, false) => depth_moved(after, &powers, old, new),
        (false, true) if !depth_is_given => power_moved(before, after, &powers, old),
        _ => Vec::new(),
    };
    Balance { moves, remark: None }
}

/// With other beams nothing is known about the relation of depth and power, so
/// what is not given stays; this says so.
fn stays(
    after: &Node,
    powers: &[String],
    depth_is_given: bool,
    is_touched: impl Fn(&str) -> bool,
) -> Option<String> {
    let left = |path: &&String| !is_touched(path) && number(after, path).is_some();
    let mut rest: Vec<String> = powers.iter().filter(left).cloned().collect();
    let power_is_given = powers.iter().any(|path| is_touched(path));
    match (depth_is_given, power_is_given) {
        (true, false) => {}
        (false, _) => rest = vec![DEPTH.to_owned()],
        (true, true) => return None,
    }
    let values: Vec<String> = rest
        .iter()
        .filter_map(|path| Some(format!("{} = {}", path::short(path), short(number(after, path)?))))
        .collect();
    (!values.is_empty()).then(|| {
        format!(
            "lattice.beams names other beams than before: {} as it was, because nothing is known \
             of their depth and power together",
            if let [value] = values.as_slice() {
                format!("{value} stays")
            } else {
                format!("{} stay", values.join(" and "))
            }
        )
    })
}

fn depth_moved(after: &Node, powers: &[String], old: f64, new: f64) -> Vec<Move> {
    let factor = Factor { top: new, bottom: old };
    let stated = powers.iter().filter_map(|path| Some((path, number(after, path)?)));
    stated
        .map(|(path, power)| Move {
            path: path.clone(),
            factor,
            sentence: format!(
                "{DEPTH} {} -> {}: {path} moves in proportion, {} -> {}",
                short(old),
                short(new),
                short(power),
                short(factor.times(power))
            ),
        })
        .collect()
}

fn power_moved(before: &Node, after: &Node, powers: &[String], depth: f64) -> Vec<Move> {
    let mut factor = Factor { top: 1.0, bottom: 1.0 };
    let mut causes = Vec::new();
    for path in powers {
        let (old, new) = match (number(before, path), number(after, path)) {
            (Some(old), Some(new)) => (old, new),
            // Stated neither before nor after: it stays what it is.
            (None, None) => continue,
            _ => return Vec::new(),
        };
        if old == new {
            continue;
        }
        causes.push(format!("{path} {} -> {}", short(old), short(new)));
        factor = Factor { top: factor.top * new, bottom: factor.bottom * old };
    }
    // From no power at all there is no proportion to keep.
    if causes.is_empty() || factor.bottom <= 0.0 || factor.top < 0.0 {
        return Vec::new();
    }
    let how = if powers.len() == 1 {
        "in proportion"
    } else {
        factor = Factor { top: factor.top.sqrt(), bottom: factor.bottom.sqrt() };
        "as the root of the product of both powers"
    };
    let sentence = format!(
        "{}: {DEPTH} moves {how}, {} -> {}",
        causes.join(", "),
        short(depth),
        short(factor.times(depth))
    );
    vec![Move { path: DEPTH.to_owned(), factor, sentence }]
}

fn lattice_beams(root: &Node) -> BTreeSet<&str> {
    let list = root.find(&["lattice", "beams"]).map(Node::list).unwrap_or_default();
    list.iter().filter_map(Node::text).collect()
}

fn number(root: &Node, path: &str) -> Option<f64> {
    let node = root.find(&path::split(path))?;
    check::inner(node)?.number().filter(|number| number.is_finite())
}

/// The value, and the standard error if there is one, after a move.
pub(super) fn scaled(root: &Node, step: &Move) -> Option<Node> {
    let node = root.find(&path::split(&step.path))?;
    let scale = |node: &Node| node.number().map(|n| Node::new(Data::Number(step.factor.times(n))));
    if !node.is_table() {
        return scale(node);
    }
    let mut new = node.clone();
    if let Data::Table(entries) = &mut new.data {
        for entry in entries.iter_mut().filter(|e| e.key == "value" || e.key == "standard_error") {
            entry.node = scale(&entry.node)?;
        }
    }
    Some(new)
}

/// A number for a sentence: six digits are enough.
pub(super) fn short(value: f64) -> String {
    plain(format!("{value:.5e}").parse().unwrap_or(value))
}
