//! The statements of a TOML text, found without a parser, so that one that is
//! broken does not swallow the others.
//!
//! A statement is a header, a remark, or a key with its value; lists, tables and
//! long texts may run over several lines. One that is never closed ends where
//! the next `key =` or `[header]` begins.

use std::ops::Range;

/// A bracket or quote that is not closed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Open {
    /// `[`
    List,
    /// `{`
    Table,
    /// A quote whose line ends.
    Text,
    /// Three quotes.
    LongText,
}

/// A part of the text that can be read by itself.
#[derive(Debug, Clone)]
pub(super) struct Statement<'a> {
    /// The number of its first line, from 1.
    pub line: usize,
    /// Where it stands, without the end of its last line.
    pub range: Range<usize>,
    /// The same as text.
    pub text: &'a str,
    /// What is not closed, and on which line it opens.
    pub open: Option<(Open, usize)>,
}

/// The only blanks that TOML knows.
const BLANKS: [char; 2] = [' ', '\t'];

/// A line with its number and place.
#[derive(Clone, Copy)]
struct Line<'a> {
    number: usize,
    start: usize,
    /// Without its end.
    text: &'a str,
}

/// The statements of a text, in order; empty lines belong to none.
pub(super) fn statements(text: &str) -> Vec<Statement<'_>> {
    let mut lines = Vec::new();
    let mut start = 0;
    for (index, line) in text.split_inclusive('\n').enumerate() {
        let bare = line.strip_suffix('\n').unwrap_or(line);
        let bare = bare.strip_suffix('\r').unwrap_or(bare);
        lines.push(Line { number: index + 1, start, text: bare });
        start += line.len();
    }
    let mut list = Vec::new();
    let mut rest = lines.as_slice();
    while let Some((first, below)) = rest.split_first() {
        if first.text.trim_matches(BLANKS).is_empty() {
            rest = below;
            continue;
        }
        let (count, open) = extent(*first, below);
        let last = rest.get(count - 1).unwrap_or(first);
        let range = first.start..last.start + last.text.len();
        let text = text.get(range.clone()).unwrap_or_default();
        list.push(Statement { line: first.number, range, text, open });
        rest = rest.get(count..).unwrap_or_default();
    }
    list
}

/// How many lines the statement takes that begins with `first`.
fn extent(first: Line, below: &[Line]) -> (usize, Option<(Open, usize)>) {
    let start = first.text.trim_start_matches(BLANKS);
    if start.starts_with(['[', '#']) {
        return (1, None);
    }
    let Some(equals) = equals_sign(first.text) else { return (1, None) };
    let mut scan = Scan::default();
    scan.line(first.text.get(equals + 1..).unwrap_or_default(), first.number);
    let mut count = 1;
    for line in below {
        if scan.is_done() {
            break;
        }
        if scan.long.is_none() && scan.runs_into(line.text) {
            return (count, scan.open());
        }
        scan.line(line.text, line.number);
        count += 1;
    }
    if scan.long.is_none() {
        return (count, scan.open());
    }
    // Three quotes without their partners would take the rest of the file.
    let next = below.iter().position(|line| begins_statement(line.text));
    (next.map_or(count, |next| next + 1), scan.open())
}

/// Where the key of a line ends.
pub(super) fn equals_sign(line: &str) -> Option<usize> {
    let mut quote = None;
    for (at, byte) in line.bytes().enumerate() {
        match (quote, byte) {
            (None, b'=') => return Some(at),
            (None, b'#') => return None,
            (None, b'"' | b'\'') => quote = Some(byte),
            (Some(open), _) if open == byte => quote = None,
            _ => {}
        }
    }
    None
}

/// Whether a line is a header, or starts with a key and its equals sign.
fn begins_statement(line: &str) -> bool {
    is_header(line) || is_assignment(line)
}

fn is_header(line: &str) -> bool {
    let line = line.trim();
    let inner = line.strip_prefix("[[").or_else(|| line.strip_prefix('['));
    let Some((name, rest)) = inner.and_then(|inner| inner.split_once(']')) else { return false };
    let rest = rest.strip_prefix(']').unwrap_or(rest).trim_start();
    // A list may hold lists, but of numbers or of texts in quotes.
    name.starts_with(|c: char| c.is_ascii_alphabetic())
        && name.chars().all(is_key_letter)
        && (rest.is_empty() || rest.starts_with('#'))
}

fn is_assignment(line: &str) -> bool {
    let Some(equals) = equals_sign(line) else { return false };
    let key = line.get(..equals).unwrap_or_default().trim();
    let quoted = key.len() > 1 && key.starts_with(['"', '\'']) && key.ends_with(['"', '\'']);
    !key.is_empty() && (quoted || key.chars().all(is_key_letter))
}

fn is_key_letter(c: char) -> bool {
    c.is_ascii_alphanumeric() || matches!(c, '_' | '-' | '.')
}

/// What is open while a value is read, line by line.
struct Scan {
    /// Open brackets and the lines they stand on.
    brackets: Vec<(Open, usize)>,
    /// The letter of three open quotes, and their line.
    long: Option<(u8, usize)>,
    /// A line that ended within quotes.
    cut: Option<usize>,
    /// The last letter that counts; texts count as their quote.
    last: u8,
}

impl Default for Scan {
    fn default() -> Self {
        Self { brackets: Vec::new(), long: None, cut: None, last: b'=' }
    }
}

impl Scan {
    fn is_done(&self) -> bool {
        self.brackets.is_empty() && self.long.is_none()
    }

    fn open(&self) -> Option<(Open, usize)> {
        let long = self.long.map(|(_, line)| (Open::LongText, line));
        let cut = self.cut.map(|line| (Open::Text, line));
        long.or(cut).or_else(|| self.brackets.first().copied())
    }

    /// Whether a line cannot belong to what is open.
    fn runs_into(&self, line: &str) -> bool {
        let in_list = matches!(self.brackets.last(), Some((Open::List, _)));
        let after_value = !matches!(self.last, b',' | b'{');
        is_header(line) || ((in_list || after_value) && is_assignment(line))
    }

    fn line(&mut self, line: &str, number: usize) {
        let bytes = line.as_bytes();
        let mut at = 0;
        while let Some(&byte) = bytes.get(at) {
            let rest = bytes.get(at..).unwrap_or_default();
            if let Some((quote, _)) = self.long {
                at += match byte {
                    b'\\' if quote == b'"' => 2,
                    _ if rest.starts_with(&[quote; 3]) => {
                        self.long = None;
                        // Up to two more quotes belong to the text.
                        rest.iter().take(5).take_while(|b| **b == quote).count()
                    }
                    _ => 1,
                };
                continue;
            }
            at += match byte {
                b'#' => return,
                b' ' | b'\t' => 1,
                b'"' | b'\'' => {
                    let opens_value = matches!(self.last, b'=' | b'[' | b',');
                    self.last = byte;
                    if opens_value && rest.starts_with(&[byte; 3]) {
                        self.long = Some((byte, number));
                        3
                    } else if let Some(length) = length_of_text(rest, byte) {
                        length
                    } else {
                        self.cut = self.cut.or(Some(number));
                        return;
                    }
                }
                _ => {
                    self.bracket(byte, number);
                    self.last = byte;
                    1
                }
            };
        }
    }

    fn bracket(&mut self, byte: u8, number: usize) {
        let last = self.brackets.last().map(|(open, _)| *open);
        match (byte, last) {
            (b'[', _) => self.brackets.push((Open::List, number)),
            (b'{', _) => self.brackets.push((Open::Table, number)),
            (b']', Some(Open::List)) | (b'}', Some(Open::Table)) => {
                self.brackets.pop();
            }
            _ => {}
        }
    }
}

/// Bytes of the text in quotes that begins here, if it ends on this line.
fn length_of_text(bytes: &[u8], quote: u8) -> Option<usize> {
    let mut at = 1;
    loop {
        match bytes.get(at)? {
            b'\\' if quote == b'"' => at += 2,
            byte if *byte == quote => return Some(at + 1),
            _ => at += 1,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn split(text: &str) -> Vec<(&str, Option<Open>)> {
        statements(text).into_iter().map(|s| (s.text, s.open.map(|(open, _)| open))).collect()
    }

    #[test]
    fn values_over_several_lines_are_one_statement() {
        let text = "# x\n\na = [ # ]\n 1,\n [2] ]\n[t]\nb = \"\"\"x\nc = 1\n\"\"\"\nd = { e = 1,\n f = 2 }\n";
        let found: Vec<_> = split(text).into_iter().map(|(text, _)| text).collect();
        let b = "b = \"\"\"x\nc = 1\n\"\"\"";
        assert_eq!(found, ["# x", "a = [ # ]\n 1,\n [2] ]", "[t]", b, "d = { e = 1,\n f = 2 }"]);
        assert!(split(text).iter().all(|(_, open)| open.is_none()));
        assert_eq!(statements(text)[2].line, 6);
    }

    #[test]
    fn what_is_never_closed_ends_at_the_next_statement() {
        assert_eq!(
            split("a = [1,\n2\nb = 2\n"),
            [("a = [1,\n2", Some(Open::List)), ("b = 2", None)]
        );
        assert_eq!(split("a = { b = 1\nc = 2\n")[0], ("a = { b = 1", Some(Open::Table)));
        assert_eq!(split("a = { b = 1,\n[t]\n")[1], ("[t]", None));
        assert_eq!(
            split("a = \"\"\"x\ny\nb = 2\n"),
            [("a = \"\"\"x\ny", Some(Open::LongText)), ("b = 2", None)]
        );
        assert_eq!(split("a = \"x # y\nb = 'z\n")[0], ("a = \"x # y", Some(Open::Text)));
        assert_eq!(split("bits 16\nb = 2\n").len(), 2);
    }
}
