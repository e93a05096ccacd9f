//! Reading a text from disk with limits, and replacing a file in one step.

use std::fs::{self, File, OpenOptions};
use std::io::{Error as SystemError, ErrorKind, Read, Write};
use std::path::{Path, PathBuf};

use crate::Error;
use crate::files::{Faults, Lines};

/// The largest file written by hand that is read, in bytes: a hundred times any real one.
pub const MOST_BYTES: usize = 1_000_000;

/// The name under which a file appears in faults.
#[must_use]
pub fn name_of(path: &Path) -> String {
    path.file_name().unwrap_or(path.as_os_str()).to_string_lossy().into_owned()
}

/// The text of a file of at most `most_bytes`.
///
/// # Errors
/// [`Error::System`] if the system refuses, [`Error::Faults`] with
/// `file.too_large` or `file.not_text`.
pub fn read_text(path: &Path, most_bytes: usize) -> Result<String, Error> {
    let system = |source| Error::System { path: path.to_owned(), source };
    let file = File::open(path).map_err(system)?;
    let mut bytes = Vec::new();
    let most = u64::try_from(most_bytes).unwrap_or(u64::MAX).saturating_add(1);
    file.take(most).read_to_end(&mut bytes).map_err(system)?;
    let mut faults = Faults::new(Some(&name_of(path)), Lines::Shown);
    if bytes.len() > most_bytes {
        faults.add("file.too_large", None, "", too_large(most_bytes));
        return faults.finish(String::new());
    }
    match String::from_utf8(bytes) {
        Ok(text) => {
            refuse_zeros(&text, &mut faults);
            faults.finish(text)
        }
        Err(error) => {
            let bytes = error.as_bytes();
            let sixteen = bytes.starts_with(&[0xff, 0xfe]) || bytes.starts_with(&[0xfe, 0xff]);
            let found = if sixteen || bytes.contains(&0) { SIXTEEN } else { "" };
            let valid = error.utf8_error().valid_up_to();
            let line = 1 + bytes.iter().take(valid).filter(|b| **b == b'\n').count();
            let message = format!("this is not a text in UTF-8{found}: save the file as UTF-8");
            faults.add("file.not_text", Some(line), "", message);
            faults.finish(String::new())
        }
    }
}

/// What bytes of zero mean in a text.
const SIXTEEN: &str = " but looks like one in UTF-16, or like no text at all";

/// Reports bytes of zero, which no text holds. Letters of two bytes, one of
/// them zero, are the usual reason, and are valid UTF-8 all the same.
pub(super) fn refuse_zeros(text: &str, faults: &mut Faults) -> bool {
    let Some(at) = text.find('\0') else { return false };
    let line = 1 + text.bytes().take(at).filter(|b| *b == b'\n').count();
    let message =
        format!("this holds bytes of zero and is no text in UTF-8{SIXTEEN}: save it as UTF-8");
    faults.add("file.not_text", Some(line), "", message);
    true
}

/// The message about a text that is too long.
pub(super) fn too_large(most_bytes: usize) -> String {
    format!("this is larger than {most_bytes} bytes: is it the right file?")
}

/// Writes `text` to `path`: afterwards the file is the old one or the new one,
/// never a part. The folder must exist; a link stays a link.
///
/// # Errors
/// [`Error::System`] if the system refuses; the old file is then untouched.
pub fn write_atomically(path: &Path, text: &str) -> Result<(), Error> {
    replace(path, text).map_err(|source| Error::System { path: path.to_owned(), source })
}

fn replace(path: &Path, text: &str) -> Result<(), SystemError> {
    let path = target(path)?;
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder.to_owned(),
        _ => PathBuf::from("."),
    };
    // The file is opened here, so that a refusal is the system's own, about a
    // name that the user knows.
    let mut options = OpenOptions::new();
    options.write(true).create_new(true);
    let mut file =
        tempfile::Builder::new().prefix(".fluxloom-").make_in(folder, |name| options.open(name))?;
    file.as_file_mut().write_all(text.as_bytes())?;
    if let Ok(old) = fs::metadata(&path) {
        file.as_file().set_permissions(old.permissions())?;
    }
    file.as_file().sync_all()?;
    file.persist(&path).map_err(|error| error.error)?;
    Ok(())
}

/// The file that has to be replaced: what a link points to, there or not yet.
fn target(path: &Path) -> Result<PathBuf, SystemError> {
    // As many links in a row as systems follow.
    const MOST_LINKS: usize = 40;
    match path.canonicalize() {
        Err(error) if error.kind() == ErrorKind::NotFound => {}
        found => return found,
    }
    let mut path = path.to_owned();
    for _ in 0..MOST_LINKS {
        let Ok(next) = fs::read_link(&path) else { break };
        path = path.parent().unwrap_or_else(|| Path::new("")).join(next);
    }
    Ok(path)
}
