//! The error of this crate: physics errors passed on, faults of files with
//! their places, and what the operating system refused.

use std::path::PathBuf;

use fluxloom_core::error::{Detail, Kind};
use fluxloom_core::fault::Fault;

/// Errors of targets, apparatus files and verdicts.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum Error {
    /// An error of the physics crate.
    #[error(transparent)]
    Core(#[from] fluxloom_core::Error),
    /// A file or a set of changes has faults; all of them are here, in the order of their lines.
    #[error("{}", list(.0))]
    Faults(Vec<Fault>),
    /// The operating system refused to read or write a file.
    #[error("{}: {source}", path.display())]
    System {
        /// The file.
        path: PathBuf,
        /// What the system said.
        source: std::io::Error,
    },
}

fn list(faults: &[Fault]) -> String {
    match faults {
        [one] => one.to_string(),
        many => {
            let mut text = format!("{} faults:", many.len());
            for fault in many {
                text.push_str("\n  ");
                text.push_str(&fault.to_string());
            }
            text
        }
    }
}

impl Error {
    /// The stable code; for several faults the first one's.
    #[must_use]
    pub fn code(&self) -> &str {
        match self {
            Self::Core(error) => error.code(),
            Self::Faults(faults) => faults.first().map_or("file.empty", |fault| &fault.code),
            Self::System { .. } => "file.system",
        }
    }

    /// The family of the error.
    #[must_use]
    pub fn kind(&self) -> Kind {
        match self {
            Self::Core(error) => error.kind(),
            Self::Faults(_) => Kind::Input,
            Self::System { .. } => Kind::System,
        }
    }

    /// The numbers and texts behind the message.
    #[must_use]
    pub fn details(&self) -> Vec<(&'static str, Detail)> {
        match self {
            Self::Core(error) => error.details(),
            Self::Faults(_) | Self::System { .. } => Vec::new(),
        }
    }

    /// Every fault with its place; an error without a place makes one fault.
    #[must_use]
    pub fn faults(&self) -> Vec<Fault> {
        match self {
            Self::Faults(faults) => faults.clone(),
            other => vec![Fault {
                code: other.code().to_owned(),
                file: None,
                line: None,
                path: String::new(),
                message: other.to_string(),
                did_you_mean: None,
            }],
        }
    }
}
