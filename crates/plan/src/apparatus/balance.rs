//! Lattice depth and beam power say the same thing twice: depth goes as the
//! power of a retro-reflected beam, and as the root of the product of two
//! crossing ones. Whoever changes one alone moves the other.

use fluxloom_core::limits::{DEPTH_ER, plain};

use super::check;
use crate::files::{Data, Node, path};

const DEPTH: &str = "lattice.depth_er";

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
    top: f64,
    bottom: f64,
}

impl Factor {
    /// `value` times the ratio.
    pub(super) fn times(self, value: f64) -> f64 {
        value * self.top / self.bottom
    }
}

/// What follows from the changes at `touched`, which lead from `before` to `after`.
pub(super) fn moves(before: &Node, after: &Node, touched: &[Vec<String>]) -> Vec<Move> {
    let is_touched = |path: &str| {
        let keys = path::split(path);
        touched.iter().any(|change| path::overlap(change, &keys))
    };
    let beams = lattice_beams(after);
    // Other beams, other relation: nothing is known about the new one.
    if beams.is_empty() || beams != lattice_beams(before) {
        return Vec::new();
    }
    let powers: Vec<String> = beams.iter().map(|beam| format!("beams.{beam}.power_mw")).collect();
    let moved: Vec<&String> = powers.iter().filter(|power| is_touched(power)).collect();
    let (Some(old), Some(new)) = (number(before, DEPTH), number(after, DEPTH)) else {
        return Vec::new();
    };
    if !DEPTH_ER.contains(new) {
        return Vec::new();
    }
    match (is_touched(DEPTH) && old != new, moved.is_empty()) {
        (true, true) => depth_moved(after, &powers, old, new),
        (false, false) if !is_touched(DEPTH) || old != new => {
            power_moved(before, after, &powers, old)
        }
        _ => Vec::new(),
    }
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

fn lattice_beams(root: &Node) -> Vec<&str> {
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
fn short(value: f64) -> String {
    plain(format!("{value:.5e}").parse().unwrap_or(value))
}
