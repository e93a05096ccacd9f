//! Files that people write by hand: a tree of values with their lines, faults
//! that are collected rather than thrown, and writing that never leaves half a
//! file behind.
//!
//! Nothing here knows what a key means; [`crate::apparatus`] does.

mod disk;
mod document;
mod faults;
mod json;
mod mend;
mod node;
pub mod path;
mod slips;
mod statements;
mod toml;

pub use disk::{MOST_BYTES, name_of, read_text, write_atomically};
pub use document::{load_document, save_document};
pub use faults::{Faults, Lines, nearest};
pub use json::read_json;
pub use node::{Data, Entry, Node};
pub use slips::{Meant, number_meant};
pub use toml::read_toml;
