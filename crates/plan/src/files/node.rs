//! A tree of values with the lines they stand on, the same for TOML, JSON and
//! values handed over by a program.

use serde_json::Value;

/// What a node holds.
#[derive(Debug, Clone, PartialEq)]
pub enum Data {
    /// `true` or `false`.
    Flag(bool),
    /// A number written without point or exponent.
    Whole(i64),
    /// Any other number; NaN and infinities can be written in TOML.
    Number(f64),
    /// A text.
    Text(String),
    /// A date or time, as written.
    Date(String),
    /// A list.
    List(Vec<Node>),
    /// A list of tables with headers of their own, `[[name]]`.
    Tables(Vec<Node>),
    /// A table, in the order written.
    Table(Vec<Entry>),
    /// JSON's null.
    Null,
    /// Something that could not be read and has been reported.
    Unreadable,
}

/// A key and what stands under it.
#[derive(Debug, Clone, PartialEq)]
pub struct Entry {
    /// The key.
    pub key: String,
    /// The value.
    pub node: Node,
}

/// A value and its place.
#[derive(Debug, Clone, PartialEq)]
pub struct Node {
    /// Line in the file, from 1; of the key for what has one. None without a file.
    pub line: Option<usize>,
    /// The value.
    pub data: Data,
}

impl Node {
    /// A node without a place.
    #[must_use]
    pub fn new(data: Data) -> Self {
        Self { line: None, data }
    }

    /// The entries of a table; empty for anything else.
    #[must_use]
    pub fn entries(&self) -> &[Entry] {
        if let Data::Table(entries) = &self.data { entries } else { &[] }
    }

    /// What stands under `key`, if this is a table that has it.
    #[must_use]
    pub fn get(&self, key: &str) -> Option<&Self> {
        self.entries().iter().find(|entry| entry.key == key).map(|entry| &entry.node)
    }

    /// What stands at the end of `keys`.
    pub fn find<S: AsRef<str>>(&self, keys: &[S]) -> Option<&Self> {
        keys.iter().try_fold(self, |node, key| node.get(key.as_ref()))
    }

    /// Whether this is a table.
    #[must_use]
    pub fn is_table(&self) -> bool {
        matches!(self.data, Data::Table(_))
    }

    /// The number here, whole or not.
    #[must_use]
    pub fn number(&self) -> Option<f64> {
        match self.data {
            // A whole number beyond 2^53 is rounded, as it would be with a point behind it.
            #[allow(clippy::cast_precision_loss)]
            Data::Whole(whole) => Some(whole as f64),
            Data::Number(number) => Some(number),
            _ => None,
        }
    }

    /// The text here.
    #[must_use]
    pub fn text(&self) -> Option<&str> {
        if let Data::Text(text) = &self.data { Some(text) } else { None }
    }

    /// The list here; empty for anything else.
    #[must_use]
    pub fn list(&self) -> &[Self] {
        if let Data::List(list) = &self.data { list } else { &[] }
    }

    /// What was found, for a message: `the text "769"`.
    #[must_use]
    pub fn describe(&self) -> String {
        match &self.data {
            Data::Flag(flag) => format!("{flag}"),
            Data::Whole(whole) => format!("the number {whole}"),
            Data::Number(number) => format!("the number {}", fluxloom_core::limits::plain(*number)),
            Data::Text(text) => format!("the text \"{}\"", shortened(text)),
            Data::Date(time) if !time.contains('-') => format!("the time {}", shortened(time)),
            Data::Date(date) => format!("the date {}", shortened(date)),
            Data::List(list) if list.is_empty() => "an empty list".to_owned(),
            Data::List(list) => format!("a list of {}", list.len()),
            Data::Tables(_) => "an array of tables".to_owned(),
            Data::Table(_) => "a table".to_owned(),
            Data::Null => "nothing".to_owned(),
            Data::Unreadable => "something unreadable".to_owned(),
        }
    }

    /// Whether two nodes hold the same values; places, the order of keys, `30`
    /// against `30.0` and a date against its text make no difference.
    #[must_use]
    pub fn same(&self, other: &Self) -> bool {
        match (&self.data, &other.data) {
            (Data::Whole(one), Data::Whole(two)) => one == two,
            (Data::Text(one) | Data::Date(one), Data::Text(two) | Data::Date(two)) => one == two,
            (Data::Flag(one), Data::Flag(two)) => one == two,
            (Data::List(one) | Data::Tables(one), Data::List(two) | Data::Tables(two)) => {
                one.len() == two.len() && one.iter().zip(two).all(|(a, b)| a.same(b))
            }
            (Data::Table(one), Data::Table(two)) => {
                // Usually the order is the same, and no key has to be looked for.
                let facing = |(here, there): (&Entry, &Entry)| {
                    let node = if here.key == there.key { Some(&there.node) } else { None };
                    node.or_else(|| other.get(&here.key)).is_some_and(|node| here.node.same(node))
                };
                one.len() == two.len() && one.iter().zip(two).all(facing)
            }
            _ => self.number().is_some() && self.number() == other.number(),
        }
    }

    /// The tree as JSON; dates become texts, NaN (which no checked tree holds) null.
    #[must_use]
    pub fn to_value(&self) -> Value {
        match &self.data {
            Data::Flag(flag) => Value::from(*flag),
            Data::Whole(whole) => Value::from(*whole),
            Data::Number(number) => Value::from(*number),
            Data::Text(text) | Data::Date(text) => Value::from(text.as_str()),
            Data::List(list) | Data::Tables(list) => list.iter().map(Self::to_value).collect(),
            Data::Table(entries) => {
                Value::Object(entries.iter().map(|e| (e.key.clone(), e.node.to_value())).collect())
            }
            Data::Null | Data::Unreadable => Value::Null,
        }
    }

    /// The tree of a JSON value.
    #[must_use]
    pub fn from_value(value: &Value) -> Self {
        Self::new(match value {
            Value::Null => Data::Null,
            Value::Bool(flag) => Data::Flag(*flag),
            Value::Number(number) => number.as_i64().map_or_else(
                // Whole numbers beyond 64 bits with sign are numbers like any other.
                || Data::Number(number.as_f64().unwrap_or(f64::NAN)),
                Data::Whole,
            ),
            Value::String(text) => Data::Text(text.clone()),
            Value::Array(list) => Data::List(list.iter().map(Self::from_value).collect()),
            Value::Object(map) => Data::Table(
                map.iter()
                    .map(|(key, value)| Entry { key: key.clone(), node: Self::from_value(value) })
                    .collect(),
            ),
        })
    }
}

/// A text cut to what a message can carry.
fn shortened(text: &str) -> String {
    const MOST: usize = 60;
    let mut short: String = text.chars().take(MOST).collect();
    if text.chars().count() > MOST {
        short.push_str("...");
    }
    short.escape_debug().to_string()
}
