//! One value against its row of the key table.

use fluxloom_core::limits::{Limit, plain};
use fluxloom_core::{Atom, Error};

use super::super::keys::{Key, Kind};
use super::{FORMAT, VERSION, atom, measured};
use crate::files::{Data, Faults, Node};

/// Checks a value that the file states.
pub(super) fn check(key: &Key, node: &Node, at: &str, atom: Option<&Atom>, faults: &mut Faults) {
    if matches!(node.data, Data::Null) {
        let message = format!("{at} is null, which is no value: leave the key out instead");
        return faults.add("file.null", node.line, at, message);
    }
    if key.kind.is_measurable() && node.is_table() {
        measured::check(node, at, faults);
        if let Some(inner) = node.get("value") {
            plain_value(key, inner, at, atom, faults);
        }
        return;
    }
    plain_value(key, node, at, atom, faults);
}

fn plain_value(key: &Key, node: &Node, at: &str, atom: Option<&Atom>, faults: &mut Faults) {
    match key.kind {
        Kind::Format => format(node, faults),
        Kind::Version => version(node, faults),
        Kind::Number(limit) => number(&limit, node, at, "a number", faults),
        Kind::Count(limit) => count(&limit, node, at, faults),
        Kind::OneOrTwo(limit) => match node.list() {
            [one, two] => {
                number(&limit, one, at, "a number", faults);
                number(&limit, two, at, "a number", faults);
            }
            _ => number(&limit, node, at, "one number, or a list of two,", faults),
        },
        Kind::Range(limit, _) => range(&limit, node, at, faults),
        Kind::Vector => vector(node, at, faults),
        Kind::Text => {
            text(node, at, "a text in quotes", faults);
        }
        Kind::Flag => {
            if !matches!(node.data, Data::Flag(_)) {
                wrong_type(node, at, "true or false, without quotes,", faults);
            }
        }
        Kind::Choice(words) => choice(words, node, at, faults),
        Kind::Atom => atom::name(node, at, faults),
        Kind::State => atom::state(node, at, atom, faults),
        Kind::StatePairs(limit) => atom::pairs(&limit, node, at, atom, faults),
        // Whether the names exist is asked when all tables are known.
        Kind::Name(table) => {
            text(node, at, &format!("the name of one of [{table}], in quotes,"), faults);
        }
        Kind::Setting(_) => {
            text(node, at, "the path of a setting, in quotes,", faults);
        }
        Kind::Names { table, least, most } => names(node, at, (table, least, most), faults),
    }
}

/// Reports a value of the wrong sort.
pub(super) fn wrong_type(node: &Node, at: &str, asked: &str, faults: &mut Faults) {
    let hint = match &node.data {
        Data::Text(text) if asked.contains("number") => match text.trim().parse::<f64>() {
            Ok(_) => ": leave out the quotes",
            Err(_) if text.trim_start().starts_with(|c: char| c.is_ascii_digit()) => {
                ": leave out the quotes and the unit, which is in the key"
            }
            Err(_) => "",
        },
        Data::Text(text) if matches!(text.as_str(), "true" | "false") => ": leave out the quotes",
        Data::Null => ": leave the key out instead",
        _ => "",
    };
    let message = format!("{at} takes {asked} but {} was found{hint}", node.describe());
    faults.add("file.wrong_type", node.line, at, message);
}

/// A text cut to what a message can carry, without its quotes.
pub(super) fn shown(text: &str) -> String {
    text.chars().take(60).flat_map(char::escape_debug).collect()
}

pub(super) fn number(limit: &Limit, node: &Node, at: &str, asked: &str, faults: &mut Faults) {
    let Some(number) = node.number() else {
        return wrong_type(node, at, asked, faults);
    };
    if let Err(error) = limit.check_as(number, at) {
        faults.add_error(&error, node.line, at);
    }
}

/// The text here, or a fault.
pub(super) fn text<'a>(
    node: &'a Node,
    at: &str,
    asked: &str,
    faults: &mut Faults,
) -> Option<&'a str> {
    let text = node.text();
    if text.is_none() {
        wrong_type(node, at, asked, faults);
    }
    text
}

fn count(limit: &Limit, node: &Node, at: &str, faults: &mut Faults) {
    match node.number() {
        Some(number) if number.is_finite() && number.fract() != 0.0 => {
            let message =
                format!("{at} = {} is not a whole number; {}", plain(number), limit.remedy);
            faults.add("file.not_whole", node.line, at, message);
        }
        _ => self::number(limit, node, at, "a whole number", faults),
    }
}

fn range(limit: &Limit, node: &Node, at: &str, faults: &mut Faults) {
    let (low, high) = match node.list() {
        [low, high] => (low, high),
        [] => return wrong_type(node, at, "a list of two numbers, [low, high],", faults),
        list => {
            let message =
                format!("{at} takes two numbers, [low, high], but {} were found", list.len());
            return faults.add("file.wrong_count", node.line, at, message);
        }
    };
    let before = faults.spoils(at);
    for end in [low, high] {
        number(limit, end, at, "a list of two numbers, [low, high],", faults);
    }
    if let (Some(low), Some(high)) = (low.number(), high.number())
        && low >= high
        && before == faults.spoils(at)
    {
        let error = Error::EmptyRange { field: at.to_owned(), low, high };
        faults.add_error(&error, node.line, at);
    }
}

/// Components beyond this are slips, and their squares overflow.
const COMPONENT: Limit = Limit {
    field: "component",
    code: "file.value_out_of_range",
    low: -1e12,
    high: 1e12,
    low_open: false,
    remedy: "only the direction counts: give numbers of ordinary size",
};

fn vector(node: &Node, at: &str, faults: &mut Faults) {
    let asked = "a list of three numbers, [x, y, z],";
    if !matches!(node.data, Data::List(_)) {
        return wrong_type(node, at, asked, faults);
    }
    let [x, y, z] = node.list() else {
        let message =
            format!("{at} takes three numbers, [x, y, z], but {} were found", node.list().len());
        return faults.add("file.wrong_count", node.line, at, message);
    };
    for component in [x, y, z] {
        number(&COMPONENT, component, at, asked, faults);
    }
    if let (Some(x), Some(y), Some(z)) = (x.number(), y.number(), z.number())
        && [x, y, z] == [0.0; 3]
    {
        let error = Error::NoDirection { field: at.to_owned(), vector: [x, y, z] };
        faults.add_error(&error, node.line, at);
    }
}

fn choice(words: &[&str], node: &Node, at: &str, faults: &mut Faults) {
    let quoted = words.iter().map(|word| format!("\"{word}\"")).collect::<Vec<_>>().join(" or ");
    let Some(found) = text(node, at, &quoted, faults) else { return };
    if !words.contains(&found) {
        let message = format!("{at} = \"{}\" is not known: give {quoted}", shown(found));
        let near = (found, words.iter().copied());
        faults.add_near("file.unknown_word", node.line, at, message, near);
    }
}

fn names(node: &Node, at: &str, of: (&str, usize, usize), faults: &mut Faults) {
    let (table, least, most) = of;
    let count = if least == most { format!("{least}") } else { format!("{least} or {most}") };
    if !matches!(node.data, Data::List(_)) {
        let asked = format!("a list of {count} names of [{table}]");
        return wrong_type(node, at, &asked, faults);
    }
    if !(least..=most).contains(&node.list().len()) {
        let found = node.list().len();
        let message = format!("{at} takes {count} names of [{table}] but {found} were found");
        faults.add("file.wrong_count", node.line, at, message);
    }
    let mut seen: Vec<&str> = Vec::new();
    for item in node.list() {
        let asked = format!("names of [{table}], in quotes,");
        let Some(name) = text(item, at, &asked, faults) else { continue };
        if seen.contains(&name) {
            let message = format!("{at} names \"{}\" twice: give different names", shown(name));
            faults.add("file.duplicate_name", item.line, at, message);
        }
        seen.push(name);
    }
}

fn format(node: &Node, faults: &mut Faults) {
    match node.text() {
        None => wrong_type(node, "format", &format!("\"{FORMAT}\""), faults),
        Some(FORMAT) => {}
        Some(found) => {
            let message = format!(
                "format = \"{}\" is not an apparatus: give format = \"{FORMAT}\"",
                shown(found)
            );
            faults.add_near("file.format", node.line, "format", message, (found, [FORMAT]));
        }
    }
}

fn version(node: &Node, faults: &mut Faults) {
    match node.number() {
        None => wrong_type(node, "version", "a whole number", faults),
        Some(found) if found == VERSION => {}
        Some(found) => {
            let message =
                format!("version = {} does not exist: give version = {VERSION}", plain(found));
            faults.add("file.version", node.line, "version", message);
        }
    }
}
