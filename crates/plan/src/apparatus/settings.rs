//! Settings by their paths, in the kind that is asked for.

use fluxloom_core::Document;
use fluxloom_core::atom::State;
use serde::{Deserialize, Serialize};
use serde_json::Value;

use super::Apparatus;
use super::keys::{self, Found, Spread, Standard};
use super::place::{Place, fault, inner, standard_value, value};
use crate::Error;
use crate::files::{Data, Node, path};

/// A number with what is known about it.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Measured {
    /// The value, in the unit of the key.
    pub value: f64,
    /// One standard deviation, in the unit of the key, if stated.
    pub standard_error: Option<f64>,
    /// The file that the value comes from, if stated.
    pub data: Option<String>,
    /// The day of the measurement, as written, if stated.
    pub measured: Option<String>,
}

impl Document for Measured {
    const FORMAT: &'static str = "fluxloom-measured";
}

/// Where a value comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Origin {
    /// The file states it.
    Stated,
    /// The file is silent and this is why the default is what it is.
    Default(&'static str),
    /// The file is silent and there is no default.
    NotStated,
}

impl Apparatus {
    /// The value of a setting; a measured number gives its value, a table gives
    /// its settings, a silent file the documented default.
    ///
    /// # Errors
    /// `apparatus.unknown_path`, or `apparatus.not_stated` if the file is
    /// silent and there is no default.
    pub fn get(&self, path: &str) -> Result<Value, Error> {
        Ok(match self.place(path)? {
            Place::Stated(key, node) => value(&key.kind, inner(node)),
            Place::Default(standard, _) => standard_value(standard),
            Place::Inner(node) => node.to_value(),
            Place::NotStated => return Err(not_stated(path)),
        })
    }

    /// A number, in the unit of its key.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no number.
    pub fn number(&self, path: &str) -> Result<f64, Error> {
        Ok(self.measured(path)?.value)
    }

    /// A whole number.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no whole number.
    pub fn count(&self, path: &str) -> Result<i64, Error> {
        self.get(path)?.as_i64().ok_or_else(|| wrong_kind(path, "a whole number"))
    }

    /// A text.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no text.
    pub fn text(&self, path: &str) -> Result<String, Error> {
        match self.get(path)? {
            Value::String(text) => Ok(text),
            _ => Err(wrong_kind(path, "a text")),
        }
    }

    /// A hyperfine state.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no state.
    pub fn state(&self, path: &str) -> Result<State, Error> {
        State::read(&self.text(path)?).map_err(|_| wrong_kind(path, "a state"))
    }

    /// true or false.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is neither.
    pub fn flag(&self, path: &str) -> Result<bool, Error> {
        self.get(path)?.as_bool().ok_or_else(|| wrong_kind(path, "true or false"))
    }

    /// Three numbers of which the direction counts, as written.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no vector.
    pub fn vector(&self, path: &str) -> Result<[f64; 3], Error> {
        let list = numbers(&self.get(path)?);
        list.try_into().map_err(|_| wrong_kind(path, "a vector"))
    }

    /// Lower and upper end of a range; `None` if it is not stated, which means fixed.
    ///
    /// # Errors
    /// `apparatus.unknown_path`, and `apparatus.wrong_kind` if it is no range.
    pub fn range(&self, path: &str) -> Result<Option<(f64, f64)>, Error> {
        if self.origin(path)? == Origin::NotStated {
            return Ok(None);
        }
        match numbers(&self.get(path)?).as_slice() {
            &[low, high] => Ok(Some((low, high))),
            _ => Err(wrong_kind(path, "a range")),
        }
    }

    /// The two radii of a beam; a round one gives the same twice.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is neither one nor two numbers.
    pub fn one_or_two(&self, path: &str) -> Result<[f64; 2], Error> {
        let value = self.get(path)?;
        match (value.as_f64(), numbers(&value).as_slice()) {
            (Some(one), _) => Ok([one, one]),
            (None, &[one, two]) => Ok([one, two]),
            _ => Err(wrong_kind(path, "one or two numbers")),
        }
    }

    /// A list of names, such as those of `lattice.beams`.
    ///
    /// # Errors
    /// As [`Apparatus::get`], and `apparatus.wrong_kind` if it is no such list.
    pub fn list(&self, path: &str) -> Result<Vec<String>, Error> {
        match self.get(path)? {
            Value::Array(list) => list
                .iter()
                .map(|name| name.as_str().map(str::to_owned))
                .collect::<Option<_>>()
                .ok_or_else(|| wrong_kind(path, "a list of names")),
            _ => Err(wrong_kind(path, "a list of names")),
        }
    }

    /// A number with its uncertainty and provenance, as far as the file states them.
    ///
    /// # Errors
    /// As [`Apparatus::number`].
    pub fn measured(&self, path: &str) -> Result<Measured, Error> {
        let bare = |value| Measured { value, standard_error: None, data: None, measured: None };
        let node = match self.place(path)? {
            Place::Default(Standard::Number(value), _) => return Ok(bare(value)),
            // Defaults of counts are small.
            #[allow(clippy::cast_precision_loss)]
            Place::Default(Standard::Whole(whole), _) => return Ok(bare(whole as f64)),
            Place::Default(..) => return Err(wrong_kind(path, "a number")),
            Place::NotStated => return Err(not_stated(path)),
            Place::Stated(_, node) | Place::Inner(node) => node,
        };
        let value = match &inner(node).data {
            Data::List(list) if list.len() == 2 => {
                return Err(wrong_kind(path, "one number but two: one_or_two gives both"));
            }
            _ => inner(node).number().ok_or_else(|| wrong_kind(path, "a number"))?,
        };
        let words = |key: &str| match &node.get(key)?.data {
            Data::Text(text) | Data::Date(text) => Some(text.clone()),
            _ => None,
        };
        Ok(Measured {
            value,
            standard_error: node.get("standard_error").and_then(Node::number),
            data: words("data"),
            measured: words("measured"),
        })
    }

    /// One standard deviation of a number and where it comes from: the file, or
    /// common practice; `None` if neither says.
    ///
    /// # Errors
    /// As [`Apparatus::number`].
    pub fn standard_error(&self, path: &str) -> Result<Option<(f64, Origin)>, Error> {
        let measured = self.measured(path)?;
        if let Some(stated) = measured.standard_error {
            return Ok(Some((stated, Origin::Stated)));
        }
        let Some(Found::Setting(key)) = keys::find(&path::split(path)) else { return Ok(None) };
        Ok(key.spread.map(|(spread, source)| match spread {
            Spread::Relative(part) => ((part * measured.value).abs(), Origin::Default(source)),
            Spread::Absolute(size) => (size, Origin::Default(source)),
        }))
    }

    /// Whether the file states a setting, and if not, why the default is what it is.
    ///
    /// # Errors
    /// `apparatus.unknown_path`.
    pub fn origin(&self, path: &str) -> Result<Origin, Error> {
        Ok(match self.place(path)? {
            Place::Stated(..) | Place::Inner(_) => Origin::Stated,
            Place::Default(_, reason) => Origin::Default(reason),
            Place::NotStated => Origin::NotStated,
        })
    }

    /// Every default that stands in for a silent file: path, value and reason.
    #[must_use]
    pub fn defaults(&self) -> Vec<(String, Value, &'static str)> {
        let mut list = Vec::new();
        for path in self.paths() {
            if let Ok(Place::Default(standard, reason)) = self.place(&path) {
                list.push((path, standard_value(standard), reason));
            }
        }
        list
    }

    /// The direction of the bias field, as written.
    #[must_use]
    pub fn field_direction(&self) -> [f64; 3] {
        self.vector("field.direction").unwrap_or([0.0, 0.0, 1.0])
    }

    /// The names in a table such as `beams`, in the order of the file.
    #[must_use]
    pub fn names(&self, table: &str) -> Vec<String> {
        let entries = self.tree.find(&path::split(table)).map(Node::entries).unwrap_or_default();
        entries.iter().map(|entry| entry.key.clone()).collect()
    }

    /// Every path that a setting of this apparatus can have, stated or not.
    #[must_use]
    pub fn paths(&self) -> Vec<String> {
        let mut list = Vec::new();
        for key in keys::all() {
            match key.table().strip_suffix(".*") {
                Some(table) => {
                    let names = self.names(table);
                    list.extend(names.iter().map(|name| format!("{table}.{name}.{}", key.name())));
                }
                None => list.push(key.pattern.to_owned()),
            }
        }
        list
    }
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().map(|list| list.iter().filter_map(Value::as_f64).collect()).unwrap_or_default()
}

fn not_stated(path: &str) -> Error {
    let about = match keys::find(&path::split(path)) {
        Some(Found::Setting(key)) => format!(" ({})", key.about),
        _ => String::new(),
    };
    let message = format!(
        "{path}{about} is not stated in this apparatus and has no default: add it to the file"
    );
    Error::Faults(vec![fault("apparatus.not_stated", path, message, None)])
}

fn wrong_kind(path: &str, asked: &str) -> Error {
    let message = format!("{path} is not {asked}");
    Error::Faults(vec![fault("apparatus.wrong_kind", path, message, None)])
}
