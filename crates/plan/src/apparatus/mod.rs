//! The laboratory as a file: what stands on the table, how well it is known,
//! and where it may be moved.
//!
//! An [`Apparatus`] is the text of such a file, checked as a whole. Comments
//! and order survive changes, and a setting has the same name everywhere: its
//! path, such as `lasers.raman.wavelength_nm`.
//!
//! ```
//! use fluxloom_plan::{Apparatus, CheckOptions};
//!
//! let bay = Apparatus::from_toml(include_str!("../../../../notebooks-examples/tern_bay.toml"))?;
//! let check = bay.check("3/8".parse()?, CheckOptions::default())?;
//! assert!(check.meets_target && check.sites == 60);
//! # Ok::<(), fluxloom_plan::Error>(())
//! ```

mod agreement;
mod balance;
mod beams;
mod check;
mod edit;
pub mod keys;
mod physics;
mod place;
mod replace;
mod retune;
mod settings;
mod state;

use std::fmt;
use std::path::Path;

use serde_json::Value;

pub use settings::{Measured, Origin};
pub use state::read_pair;

use crate::Error;
use crate::files::{self, Faults, Lines, Node};

/// A laboratory: settings of today, their uncertainties, and where they may go.
///
/// Two are equal if they state the same values; comments, order and the way a
/// number is written make no difference.
#[derive(Clone)]
pub struct Apparatus {
    /// The TOML text, comments included.
    text: String,
    /// The same as values.
    tree: Node,
    /// What moved along in the last change.
    changes: Vec<String>,
}

impl Apparatus {
    /// Reads a file; one whose name ends in `.json` is JSON, any other TOML.
    ///
    /// # Errors
    /// [`Error::System`] if the file cannot be read, [`Error::Faults`] with
    /// everything that is wrong with it.
    pub fn load(path: &Path) -> Result<Self, Error> {
        let text = files::read_text(path, files::MOST_BYTES)?;
        let name = files::name_of(path);
        if is_json(path) {
            return Self::read_json(&text, Some(&name));
        }
        Self::from_toml_named(&text, &name)
    }

    /// Reads a TOML text.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with it.
    pub fn from_toml(text: &str) -> Result<Self, Error> {
        Self::read_toml(text, None)
    }

    /// Reads a TOML text that came from a file of this name.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with it.
    pub fn from_toml_named(text: &str, file_name: &str) -> Result<Self, Error> {
        Self::read_toml(text, Some(file_name))
    }

    /// Reads a JSON text.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with it.
    pub fn from_json(text: &str) -> Result<Self, Error> {
        Self::read_json(text, None)
    }

    /// Takes nested tables, as [`Apparatus::to_value`] gives them.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with them.
    pub fn from_value(value: &Value) -> Result<Self, Error> {
        Self::from_tree(Node::from_value(value))
    }

    /// Takes a tree of values, in which numbers may be NaN or infinite: they
    /// are reported with their place, which a [`Value`] could not do.
    ///
    /// # Errors
    /// [`Error::Faults`] with everything that is wrong with it.
    pub fn from_tree(tree: Node) -> Result<Self, Error> {
        Self::from_node(tree, Faults::new(None, Lines::Hidden))
    }

    fn read_toml(text: &str, file: Option<&str>) -> Result<Self, Error> {
        let mut faults = Faults::new(file, Lines::Shown);
        let tree = files::read_toml(text, &mut faults);
        let tree = tree.inspect(|tree| check::check(tree, &mut faults));
        let tree = tree.unwrap_or_else(|| Node::new(files::Data::Unreadable));
        Self { text: text.to_owned(), tree, changes: Vec::new() }.agreed(faults)
    }

    fn read_json(text: &str, file: Option<&str>) -> Result<Self, Error> {
        let mut faults = Faults::new(file, Lines::Shown);
        match files::read_json(text, &mut faults) {
            Some(value) => Self::from_node(Node::from_value(&value), faults),
            None => faults.finish(Self {
                text: String::new(),
                tree: Node::new(files::Data::Unreadable),
                changes: Vec::new(),
            }),
        }
    }

    fn from_node(tree: Node, mut faults: Faults) -> Result<Self, Error> {
        if tree.is_table() {
            check::check(&tree, &mut faults);
        } else {
            let message = format!("an apparatus is a table but {} was found", tree.describe());
            faults.add("file.wrong_type", None, "", message);
        }
        let mut apparatus =
            Self { text: String::new(), tree, changes: Vec::new() }.agreed(faults)?;
        apparatus.text = edit::document(&apparatus.tree).to_string();
        Ok(apparatus)
    }

    /// This apparatus, if nothing is wrong with it and what it says twice agrees.
    fn agreed(self, mut faults: Faults) -> Result<Self, Error> {
        agreement::check(&self, &mut faults);
        faults.finish(self)
    }

    /// The settings as nested tables, as written; dates are texts. Format and
    /// version come first.
    #[must_use]
    pub fn to_value(&self) -> Value {
        let mut rest = match self.tree.to_value() {
            Value::Object(map) => map,
            _ => serde_json::Map::new(),
        };
        let mut map = serde_json::Map::new();
        for first in ["format", "version"] {
            if let Some(value) = rest.shift_remove(first) {
                map.insert(first.to_owned(), value);
            }
        }
        map.append(&mut rest);
        Value::Object(map)
    }

    /// The settings as JSON; every number keeps all its bits.
    #[must_use]
    pub fn to_json(&self) -> String {
        format!("{:#}", self.to_value())
    }

    /// The settings as TOML, with the comments and the order of the file read.
    #[must_use]
    pub fn to_toml(&self) -> String {
        self.text.clone()
    }

    /// Writes the settings to a file, which is replaced in one step; a name
    /// that ends in `.json` gives JSON, any other TOML with its comments.
    ///
    /// # Errors
    /// [`Error::System`], also if the folder does not exist.
    pub fn save(&self, path: &Path) -> Result<(), Error> {
        if is_json(path) {
            return files::write_atomically(path, &(self.to_json() + "\n"));
        }
        files::write_atomically(path, &self.text)
    }

    /// What else moved in the change that made this apparatus, a sentence each.
    #[must_use]
    pub fn changes(&self) -> &[String] {
        &self.changes
    }
}

impl PartialEq for Apparatus {
    fn eq(&self, other: &Self) -> bool {
        self.tree.same(&other.tree)
    }
}

impl fmt::Debug for Apparatus {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let text = |keys: &[&str]| self.tree.find(keys).and_then(Node::text).unwrap_or("");
        write!(f, "Apparatus({:?}, {})", text(&["name"]), text(&["cloud", "atom"]))
    }
}

fn is_json(path: &Path) -> bool {
    path.extension().is_some_and(|ending| ending.eq_ignore_ascii_case("json"))
}
