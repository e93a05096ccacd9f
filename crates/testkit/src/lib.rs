//! Helpers for the tests of this workspace: reference data with their sources,
//! and comparisons that say what was off by how much.

use std::path::PathBuf;

/// A file of `tests/reference/`, parsed.
///
/// # Panics
/// If the file is missing or is not JSON: a test cannot go on without it.
#[must_use]
pub fn reference(name: &str) -> serde_json::Value {
    let path = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../tests/reference").join(name);
    let text = std::fs::read_to_string(&path)
        .unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    serde_json::from_str(&text).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// Asserts that `found` is within `tolerance` of `expected` (same unit as both).
///
/// # Panics
/// If it is not, or if `found` is not a number.
#[track_caller]
pub fn assert_near(found: f64, expected: f64, tolerance: f64, what: &str) {
    let off = (found - expected).abs();
    assert!(
        off <= tolerance,
        "{what}: found {found}, expected {expected}, off by {off:e}, allowed {tolerance:e}"
    );
}
