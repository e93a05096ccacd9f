//! The order of the rooms: each uses only what stands before it, and none knows Python.
#![allow(clippy::unwrap_used)]

use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

/// From the foundations upwards.
const ROOMS: [&str; 7] = ["constants", "angular", "rational", "atom", "light", "lattice", "flux"];

fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            found.push(path);
        }
    }
    found
}

fn room_of(path: &Path, root: &Path) -> Option<usize> {
    let first = path.strip_prefix(root).unwrap().components().next()?;
    let name = first.as_os_str().to_str()?.trim_end_matches(".rs").to_owned();
    ROOMS.iter().position(|room| *room == name)
}

#[test]
fn rooms_use_only_what_stands_before_them() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let files = sources(&root);
    assert!(files.len() > 15, "the sources were not found");
    let mut uses = 0;
    for path in files {
        let Some(own) = room_of(&path, &root) else { continue };
        let text = fs::read_to_string(&path).unwrap();
        for (place, room) in ROOMS.iter().enumerate() {
            if text.contains(&format!("crate::{room}::")) {
                uses += 1;
                assert!(place <= own, "{} uses the later room {room}", path.display());
            }
        }
    }
    assert!(uses > 5, "no use between rooms was seen: has the way of importing changed?");
}

#[test]
fn no_python_below() {
    for crate_name in ["fluxloom-kernel", "fluxloom-core", "fluxloom-plan"] {
        let output = Command::new(env!("CARGO"))
            .args(["tree", "--offline", "--locked", "--edges", "normal", "--prefix", "none"])
            .args(["--package", crate_name])
            .current_dir(env!("CARGO_MANIFEST_DIR"))
            .output()
            .unwrap();
        let tree = String::from_utf8(output.stdout).unwrap();
        assert!(tree.contains(crate_name), "{}", String::from_utf8_lossy(&output.stderr));
        for line in tree.lines() {
            let name = line.split(' ').next().unwrap_or_default();
            assert!(!name.starts_with("pyo3") && name != "numpy", "{crate_name} has {name}");
        }
    }
}
