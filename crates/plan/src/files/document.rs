//! Documents on disk: one value, one JSON file, whole or not at all.

use std::path::Path;

use fluxloom_core::Document;
use fluxloom_core::control::memory_limit_bytes;
use fluxloom_core::fault::Fault;

use super::disk::{name_of, read_text, write_atomically};
use crate::error::Error;

/// Writes a value to a file, which appears whole or not at all.
///
/// # Errors
/// [`Error::System`] if the system refuses.
pub fn save_document<T: Document>(value: &T, path: &Path) -> Result<(), Error> {
    let text = value.to_json().map_err(|fault| Error::Faults(vec![*fault]))?;
    write_atomically(path, &(text + "\n"))
}

/// Reads a value from a file.
///
/// # Errors
/// [`Error::System`] if the system refuses, [`Error::Faults`] naming the file
/// if it does not hold such a value.
pub fn load_document<T: Document>(path: &Path) -> Result<T, Error> {
    // Results may be large; what bounds them is memory, not what a person can type.
    let most_bytes = usize::try_from(memory_limit_bytes()).unwrap_or(usize::MAX);
    let text = read_text(path, most_bytes)?;
    T::from_json(&text)
        .map_err(|fault| Error::Faults(vec![Fault { file: Some(name_of(path)), ..*fault }]))
}
