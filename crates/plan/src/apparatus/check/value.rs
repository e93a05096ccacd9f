//! One value against its row of the key table.

use fluxloom_core::limits::{Limit, plain};
use fluxloom_core::{Atom, Error};

use super::super::keys::{Key, Kind};
use super::{FORMAT, VERSION, atom, measured};
use crate::files::{Data, Faults, Meant, Node, number_meant};

/// Checks a value that the file states.
pub(super) fn check(key: &Key, node: &Node, at: &str, atom: Option<&Atom>, faults: &mut Faults) {
    if matches!(node.data, Data::Null) {
        let message = format!("{at} has no value: leave the key out instead");
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
        Kind::Number(limit) => number(&limit, node, at, Asked::Number("a number"), faults),
        Kind::Count(limit) => count(&limit, node, at, faults),
        Kind::NonZero(limit) => {
            count(&limit, node, at, faults);
            if node.number() == Some(0.0) {
                let message = format!("{at} = 0 does nothing: {}", limit.remedy);
                faults.add(limit.code, node.line, at, message);
            }
        }
        Kind::OneOrTwo(limit) => match node.list() {
            list @ [_, _] => numbers(&limit, list, at, "numbers", faults),
            _ => number(&limit, node, at, Asked::Number("one number, or a list of two,"), faults),
        },
        Kind::Range(limit, _) => range(&limit, node, at, faults),
        Kind::Vector => vector(node, at, faults),
        Kind::Text => {
            text(node, at, "a text", faults);
        }
        Kind::Flag => {
            if !matches!(node.data, Data::Flag(_)) {
                wrong_type(node, at, Asked::Flag, faults);
            }
        }
        Kind::Choice(words) => choice(words, node, at, faults),
        Kind::Atom => atom::name(node, at, faults),
        Kind::State => atom::state(node, at, atom, faults),
        Kind::StatePairs(limit) => atom::pairs(&limit, node, at, atom, faults),
        // Whether the names exist is asked when all tables are known.
        Kind::Name(table) => {
            text(node, at, &format!("the name of one of [{table}]"), faults);
        }
        Kind::Setting(_) => {
            text(node, at, "the path of a setting", faults);
        }
        Kind::Names { table, least, most } => names(node, at, (table, least, most), faults),
    }
}

/// What a key takes, in words that follow "takes".
#[derive(Clone, Copy)]
pub(super) enum Asked<'a> {
    /// A number, or several.
    Number(&'a str),
    /// A text, or several.
    Text(&'a str),
    /// true or false.
    Flag,
    /// Anything else.
    Other(&'a str),
}

/// Reports a value of the wrong sort, and says how to write the right one.
/// Quotes are mentioned only where the user wrote some.
pub(super) fn wrong_type(node: &Node, at: &str, asked: Asked, faults: &mut Faults) {
    let written = faults.is_text();
    let hint = match (asked, &node.data) {
        (_, Data::Null) => ": leave the key out instead".to_owned(),
        (Asked::Number(_), Data::Text(text)) => how_to_write(text, written),
        (Asked::Flag, Data::Text(text)) if ["true", "false"].contains(&&*text.to_lowercase()) => {
            if written { ": leave out the quotes" } else { ": give the value itself, not a text" }
                .to_owned()
        }
        (Asked::Text(_), Data::Whole(_) | Data::Number(_) | Data::Flag(_) | Data::Date(_))
            if written =>
        {
            ": put it in quotes".to_owned()
        }
        _ => String::new(),
    };
    let asked = match asked {
        Asked::Number(words) | Asked::Text(words) | Asked::Other(words) => words,
        Asked::Flag => "true or false",
    };
    let message = format!("{at} takes {asked} but {} was found{hint}", node.describe());
    faults.add("file.wrong_type", node.line, at, message);
}

/// How the number that a text means is to be written.
fn how_to_write(text: &str, written: bool) -> String {
    match (number_meant(text), written) {
        (None, _) => String::new(),
        (Some(Meant::Number), true) => ": leave out the quotes".to_owned(),
        (Some(Meant::Number), false) => ": give the number itself, not a text".to_owned(),
        (Some(Meant::Written(right)), true) => format!(": write {right}, without quotes"),
        (Some(Meant::Written(right)), false) => format!(": write {right}"),
        (Some(Meant::Either(pointed, whole)), _) => {
            format!(": write {pointed}, with a point, or {whole}, without separators")
        }
        (Some(Meant::WithUnit(_)), true) => {
            ": leave out the quotes and the unit, which is in the key".to_owned()
        }
        (Some(Meant::WithUnit(number)), false) => {
            format!(": leave out the unit, which is in the key: {number}")
        }
    }
}

/// A text cut to what a message can carry, without its quotes.
pub(super) fn shown(text: &str) -> String {
    text.chars().take(60).flat_map(char::escape_debug).collect()
}

pub(super) fn number(limit: &Limit, node: &Node, at: &str, asked: Asked, faults: &mut Faults) {
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
        wrong_type(node, at, Asked::Text(asked), faults);
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
        _ => self::number(limit, node, at, Asked::Number("a whole number"), faults),
    }
}

/// Checks numbers in a list; what is no number at all is told once.
fn numbers(limit: &Limit, list: &[Node], at: &str, asked: &str, faults: &mut Faults) {
    if let Some(other) = list.iter().find(|node| node.number().is_none()) {
        return wrong_type(other, at, Asked::Number(asked), faults);
    }
    for node in list {
        number(limit, node, at, Asked::Number(asked), faults);
    }
}

/// How many were found, with its verb.
fn found(count: usize) -> String {
    if count == 1 { "1 was found".to_owned() } else { format!("{count} were found") }
}

fn range(limit: &Limit, node: &Node, at: &str, faults: &mut Faults) {
    let list = match node.list() {
        list @ [_, _] => list,
        [] => {
            let asked = Asked::Other("a list of two numbers, [low, high],");
            return wrong_type(node, at, asked, faults);
        }
        list => {
            let message = format!("{at} takes two numbers, [low, high], but {}", found(list.len()));
            return faults.add("file.wrong_count", node.line, at, message);
        }
    };
    let before = faults.spoils(at);
    numbers(limit, list, at, "two numbers, [low, high],", faults);
    let ends: Vec<f64> = list.iter().filter_map(Node::number).collect();
    let &[low, high] = ends.as_slice() else { return };
    if low < high || before != faults.spoils(at) {
        return;
    }
    let error = Error::EmptyRange { field: at.to_owned(), low, high };
    if low == high {
        let message = format!(
            "{at} has equal ends, {0} and {0}, and leaves nothing to choose: move one of them, or \
             leave the range out, which means that the setting is fixed",
            plain(low)
        );
        return faults.add(error.code(), node.line, at, message);
    }
    faults.add_error(&error, node.line, at);
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
    if !matches!(node.data, Data::List(_)) {
        let asked = Asked::Other("a list of three numbers, [x, y, z],");
        return wrong_type(node, at, asked, faults);
    }
    let list @ [x, y, z] = node.list() else {
        let count = found(node.list().len());
        let message = format!("{at} takes three numbers, [x, y, z], but {count}");
        return faults.add("file.wrong_count", node.line, at, message);
    };
    numbers(&COMPONENT, list, at, "three numbers, [x, y, z],", faults);
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
        return wrong_type(node, at, Asked::Other(&asked), faults);
    }
    let list = node.list();
    if !(least..=most).contains(&list.len()) {
        let found = found(list.len());
        let message = format!("{at} takes {count} names of [{table}] but {found}");
        return faults.add("file.wrong_count", node.line, at, message);
    }
    if let Some(other) = list.iter().find(|item| item.text().is_none()) {
        let asked = format!("names of [{table}]");
        return wrong_type(other, at, Asked::Text(&asked), faults);
    }
    let mut seen: Vec<&str> = Vec::new();
    for (name, item) in list.iter().filter_map(|item| Some((item.text()?, item))) {
        if seen.contains(&name) {
            let message = format!("{at} names \"{}\" twice: give different names", shown(name));
            faults.add("file.duplicate_name", item.line, at, message);
        }
        seen.push(name);
    }
}

fn format(node: &Node, faults: &mut Faults) {
    let needed = format!("give format = \"{FORMAT}\"");
    match node.text() {
        None => {
            let message = format!("format is {}, which names no format: {needed}", node.describe());
            faults.add("file.format", node.line, "format", message);
        }
        Some(FORMAT) => {}
        Some(found) => {
            let message = format!("format = \"{}\" is not an apparatus: {needed}", shown(found));
            faults.add_near("file.format", node.line, "format", message, (found, [FORMAT]));
        }
    }
}

fn version(node: &Node, faults: &mut Faults) {
    let found = match node.number() {
        Some(VERSION) => return,
        Some(found) => format!("version = {} does not exist", plain(found)),
        None => format!("version takes a whole number but {} was found", node.describe()),
    };
    let message = format!("{found}: give version = {VERSION}");
    faults.add("file.version", node.line, "version", message);
}
