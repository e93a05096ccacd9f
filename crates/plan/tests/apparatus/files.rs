//! Reading, writing, and JSON in place of TOML.

use fluxloom_plan::apparatus::Apparatus;
use fluxloom_plan::{Error, files};
use serde_json::{Value, json};

use crate::{BAY, bay, bay_with, change};

#[test]
fn bad_bytes_and_missing_files() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("latin.toml");
    std::fs::write(&path, b"format = \"fluxloom-apparatus\"\nname = \"K\xf6nig\"\n").unwrap();
    let fault = Apparatus::load(&path).unwrap_err().faults().remove(0);
    assert_eq!((fault.code.as_str(), fault.line), ("file.not_text", Some(2)));
    assert_eq!(fault.file.as_deref(), Some("latin.toml"));
    std::fs::write(&path, vec![b' '; files::MOST_BYTES + 1]).unwrap();
    assert_eq!(Apparatus::load(&path).unwrap_err().code(), "file.too_large");
    let missing = Apparatus::load(&folder.path().join("none.toml")).unwrap_err();
    assert!(matches!(&missing, Error::System { source, .. }
        if source.kind() == std::io::ErrorKind::NotFound));
    assert!(matches!(Apparatus::load(folder.path()), Err(Error::System { .. })));
}

#[test]
fn letters_of_two_bytes_are_seen() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("wide.toml");
    let little: Vec<u8> = BAY.encode_utf16().flat_map(u16::to_le_bytes).collect();
    let big: Vec<u8> = BAY.encode_utf16().flat_map(u16::to_be_bytes).collect();
    let marked = [&[0xff, 0xfe], little.as_slice()].concat();
    for bytes in [little, big, marked, b"name = \"\0\"".to_vec()] {
        std::fs::write(&path, bytes).unwrap();
        let list = Apparatus::load(&path).unwrap_err().faults();
        assert_eq!((list.len(), list[0].code.as_str()), (1, "file.not_text"));
        assert!(list[0].message.contains("UTF-16"), "{}", list[0].message);
    }
    assert_eq!(Apparatus::from_toml("a\0").unwrap_err().code(), "file.not_text");
    assert_eq!(Apparatus::from_json("{\0}").unwrap_err().code(), "file.not_text");
}

#[test]
fn mixed_line_ends_stay_mixed() {
    let text: String = BAY
        .split_inclusive('\n')
        .enumerate()
        .map(
            |(index, line)| {
                if index % 3 == 0 { line.replace('\n', "\r\n") } else { line.to_owned() }
            },
        )
        .collect();
    let ap = Apparatus::from_toml(&text).unwrap();
    let changed = change(&ap, &[("trap.along_hz", json!(25.0))]).unwrap().to_toml();
    let mut different = 0;
    for (old, new) in text.split_inclusive('\n').zip(changed.split_inclusive('\n')) {
        different += usize::from(old != new);
        assert!(old == new || new.contains("along_hz = 25.0"), "{old:?} {new:?}");
    }
    assert_eq!((different, changed.len()), (1, text.len()));
}

#[test]
fn a_byte_order_mark_and_windows_lines_are_fine_and_stay() {
    let text = format!("\u{feff}{}", BAY.replace('\n', "\r\n"));
    let ap = Apparatus::from_toml(&text).unwrap();
    assert_eq!(ap, bay());
    assert_eq!(ap.to_toml(), text);
    let ap = change(&ap, &[("trap.along_hz", json!(25.0))]).unwrap();
    assert_eq!(ap.to_toml(), text.replace("along_hz = 24.0", "along_hz = 25.0"));
}

#[test]
fn saving_keeps_the_text_byte_for_byte() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("bay.toml");
    bay().save(&path).unwrap();
    assert_eq!(std::fs::read_to_string(&path).unwrap(), BAY);
    assert_eq!(Apparatus::load(&path).unwrap(), bay());
    // Over an existing file, and nothing else is left in the folder.
    let other = change(&bay(), &[("trap.along_hz", json!(25))]).unwrap();
    other.save(&path).unwrap();
    assert_eq!(Apparatus::load(&path).unwrap(), other);
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 1);
    // What the system says about the user's own path.
    let nowhere = folder.path().join("no/such/bay.toml");
    let Err(Error::System { path, source }) = bay().save(&nowhere) else { panic!() };
    assert_eq!((path, source.kind()), (nowhere, std::io::ErrorKind::NotFound));
    assert!(source.raw_os_error().is_some() && !source.to_string().contains("fluxloom"));
    let Err(Error::System { source, .. }) = bay().save(folder.path()) else { panic!() };
    assert!(source.raw_os_error().is_some());
    assert_eq!(std::fs::read_dir(folder.path()).unwrap().count(), 1);
}

#[cfg(unix)]
#[test]
fn saving_keeps_permissions_and_links() {
    use std::os::unix::fs::PermissionsExt;
    let folder = tempfile::tempdir().unwrap();
    let (path, link) = (folder.path().join("bay.toml"), folder.path().join("today.toml"));
    std::fs::write(&path, "").unwrap();
    std::fs::set_permissions(&path, std::fs::Permissions::from_mode(0o640)).unwrap();
    std::os::unix::fs::symlink(&path, &link).unwrap();
    bay().save(&link).unwrap();
    assert!(link.is_symlink());
    assert_eq!(std::fs::read_to_string(&path).unwrap(), BAY);
    assert_eq!(std::fs::metadata(&path).unwrap().permissions().mode() & 0o777, 0o640);
    // A link to what is not there yet stays a link as well; one to itself leads nowhere.
    let (early, far) = (folder.path().join("early.toml"), folder.path().join("far.toml"));
    std::os::unix::fs::symlink("late.toml", &early).unwrap();
    std::os::unix::fs::symlink("early.toml", &far).unwrap();
    bay().save(&far).unwrap();
    assert!(early.is_symlink() && far.is_symlink());
    assert_eq!(std::fs::read_to_string(folder.path().join("late.toml")).unwrap(), BAY);
    let circle = folder.path().join("circle.toml");
    std::os::unix::fs::symlink("circle.toml", &circle).unwrap();
    assert!(matches!(bay().save(&circle), Err(Error::System { .. })));
    assert!(circle.is_symlink());
}

#[test]
fn json_goes_there_and_back() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("bay.json");
    let text = bay_with(
        "[timing]",
        "[lasers.third]\nwavelength_nm = { value = 780.241209686, measured = 2026-11-30 }\n[timing]",
    );
    let ap = Apparatus::from_toml(&text).unwrap();
    ap.save(&path).unwrap();
    let back = Apparatus::load(&path).unwrap();
    assert_eq!(back, ap);
    assert_eq!(back.to_json(), ap.to_json());
    assert!(
        ap.to_json().starts_with("{\n  \"format\": \"fluxloom-apparatus\",\n  \"version\": 1,")
    );
    // What came from JSON can be written as TOML, with tables and dates as a person writes them.
    assert_eq!(Apparatus::from_toml(&back.to_toml()).unwrap(), ap);
    assert!(back.to_toml().contains("\n[lasers.third]\n"), "{}", back.to_toml());
    assert!(back.to_toml().contains("measured = 2026-11-30"));
    assert_eq!(Apparatus::from_value(&ap.to_value()).unwrap(), ap);
}

#[test]
fn json_is_strict() {
    let json = bay().to_json();
    let code = |text: &str| Apparatus::from_json(text).unwrap_err().code().to_owned();
    let twice = json.replace("\"along_hz\": 24.0,", "\"along_hz\": 24.0, \"along_hz\": 25.0,");
    let list = Apparatus::from_json(&twice).unwrap_err().faults();
    assert_eq!(list.len(), 1);
    assert_eq!(
        (list[0].code.as_str(), list[0].path.as_str()),
        ("file.duplicate_key", "trap.along_hz")
    );
    assert_eq!(list[0].line, None);
    assert_eq!(code(&json.replace("24.0", "NaN")), "file.syntax");
    assert_eq!(code(&json.replace("24.0", "1e999")), "file.syntax");
    assert_eq!(code(&json.replace("24.0", "null")), "file.null");
    assert_eq!(code(&format!("{json} x")), "file.syntax");
    assert_eq!(code("[]"), "file.wrong_type");
    assert_eq!(code(&"[".repeat(10_000)), "file.syntax");
    let list = Apparatus::from_json(&json.replace("24.0", "-24.0")).unwrap_err().faults();
    assert_eq!((list.len(), list[0].line, list[0].path.as_str()), (1, None, "trap.along_hz"));
}

#[test]
fn values_from_a_program_are_checked_alike() {
    let mut value = bay().to_value();
    value["trap"]["along_hz"] = Value::Null;
    value["cloud"]["count"] = json!("many");
    value["lasers"]["raman"]["wavelength_mn"] = json!(1);
    value["beams"] = json!([1]);
    let list = Apparatus::from_value(&value).unwrap_err().faults();
    let codes: Vec<&str> = list.iter().map(|f| f.code.as_str()).collect();
    assert!(list.iter().all(|f| f.line.is_none() && f.file.is_none()));
    for code in ["file.null", "file.wrong_type", "file.unknown_key", "file.not_a_table"] {
        assert!(codes.contains(&code), "{code} is not in {codes:?}");
    }
    for (key, new, code) in [
        ("format", json!(null), "file.format"),
        ("version", json!(1.5), "file.version"),
        ("version", json!("1"), "file.version"),
        ("version", json!(-1), "file.version"),
        ("version", json!(1e30), "file.version_too_new"),
    ] {
        let mut value = bay().to_value();
        if new.is_null() {
            value.as_object_mut().unwrap().shift_remove(key);
        } else {
            value[key] = new;
        }
        let list = Apparatus::from_value(&value).unwrap_err().faults();
        assert_eq!((list.len(), list[0].code.as_str()), (1, code), "{list:?}");
        assert_eq!(Apparatus::from_json(&value.to_string()).unwrap_err().code(), code);
    }
    assert_eq!(Apparatus::from_value(&json!(3)).unwrap_err().code(), "file.wrong_type");
    assert_eq!(Apparatus::from_value(&json!(null)).unwrap_err().code(), "file.wrong_type");
}
