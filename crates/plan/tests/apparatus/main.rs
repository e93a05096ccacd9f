//! Apparatus files: reading, settings, changes, writing.

#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod changes;
mod faults;
mod files;
mod light;
mod links;
mod random;
mod settings;

use std::path::{Path, PathBuf};

use fluxloom_core::fault::Fault;
use fluxloom_plan::Error;
use fluxloom_plan::apparatus::Apparatus;
use serde_json::Value;

const BAY: &str = include_str!("../../../../notebooks-examples/tern_bay.toml");

/// The smallest apparatus there is.
const SMALL: &str = r#"format = "fluxloom-apparatus"
version = 1
[cloud]
atom = "40K"
[lasers.lattice]
wavelength_nm = 1064
[beams.lattice]
laser = "lattice"
[lattice]
beams = ["lattice"]
depth_er = 6
"#;

fn bay() -> Apparatus {
    Apparatus::from_toml_named(BAY, "tern_bay.toml").unwrap()
}

fn bay_path() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../notebooks-examples/tern_bay.toml")
}

/// Tern Bay with one line changed.
fn bay_with(old: &str, new: &str) -> String {
    assert_eq!(BAY.matches(old).count(), 1, "{old:?} must occur once");
    BAY.replace(old, new)
}

fn faults(text: &str) -> Vec<Fault> {
    Apparatus::from_toml_named(text, "bay.toml").expect_err("faults expected").faults()
}

fn change(ap: &Apparatus, changes: &[(&str, Value)]) -> Result<Apparatus, Error> {
    let changes: Vec<_> = changes.iter().map(|(p, v)| ((*p).to_owned(), v.clone())).collect();
    ap.replace(&changes)
}
