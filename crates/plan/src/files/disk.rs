//! Reading a text from disk with limits, and replacing a file in one step.

use std::fs::{self, File};
use std::io::{Error as SystemError, Read, Write};
use std::path::{Path, PathBuf};

use crate::Error;
use crate::files::{Faults, Lines};

/// The largest file that is read, in bytes: a hundred times any real one.
pub const MOST_BYTES: usize = 1_000_000;

/// The name under which a file appears in faults.
#[must_use]
pub fn name_of(path: &Path) -> String {
    path.file_name().unwrap_or(path.as_os_str()).to_string_lossy().into_owned()
}

/// The text of a file.
///
/// # Errors
/// [`Error::System`] if the system refuses, [`Error::Faults`] with
/// `file.too_large` or `file.not_text`.
pub fn read_text(path: &Path) -> Result<String, Error> {
    let system = |source| Error::System { path: path.to_owned(), source };
    let file = File::open(path).map_err(system)?;
    let mut bytes = Vec::new();
    let most = u64::try_from(MOST_BYTES).unwrap_or(u64::MAX).saturating_add(1);
    file.take(most).read_to_end(&mut bytes).map_err(system)?;
    let mut faults = Faults::new(Some(&name_of(path)), Lines::Shown);
    if bytes.len() > MOST_BYTES {
        faults.add("file.too_large", None, "", too_large());
        return faults.finish(String::new());
    }
    match String::from_utf8(bytes) {
        Ok(text) => Ok(text),
        Err(error) => {
            let valid = error.utf8_error().valid_up_to();
            let line = 1 + error.as_bytes().iter().take(valid).filter(|b| **b == b'\n').count();
            let message = "this is not a text in UTF-8: save the file as UTF-8".to_owned();
            faults.add("file.not_text", Some(line), "", message);
            faults.finish(String::new())
        }
    }
}

/// The message about a text that is too long.
pub(super) fn too_large() -> String {
    format!("this is larger than {MOST_BYTES} bytes: is it the right file?")
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
    // The name that a link points to is what has to be replaced.
    let path = if path.exists() { path.canonicalize()? } else { path.to_owned() };
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder.to_owned(),
        _ => PathBuf::from("."),
    };
    let mut builder = tempfile::Builder::new();
    builder.prefix(".fluxloom-");
    // A temporary file is private by default; this one becomes an ordinary file.
    #[cfg(unix)]
    builder.permissions(std::os::unix::fs::PermissionsExt::from_mode(0o666));
    let mut file = builder.tempfile_in(folder)?;
    file.write_all(text.as_bytes())?;
    if let Ok(old) = fs::metadata(&path) {
        file.as_file().set_permissions(old.permissions())?;
    }
    file.as_file().sync_all()?;
    file.persist(&path).map_err(|error| error.error)?;
    Ok(())
}
