//! Why a scenario could not be read.

use std::fmt;
use std::io;
use std::path::PathBuf;

use miette::Diagnostic;
use thiserror::Error;

use super::fault::Fault;

/// Largest scenario file that is read, bytes: larger ones are not scenarios.
pub const LARGEST_FILE: u64 = 1 << 20;

/// Why a scenario could not be read. All are for the user to mend.
#[derive(Debug, Error)]
pub enum ScenarioError {
    /// There is no such file.
    #[error("there is no scenario file `{}`", .path.display())]
    Absent {
        /// The path as given.
        path: PathBuf,
    },
    /// The path is a folder.
    #[error("`{}` is a folder, not a scenario file", .path.display())]
    Folder {
        /// The path as given.
        path: PathBuf,
    },
    /// The file holds bytes that are no text.
    #[error("`{}` is not a text file (byte {offset} is no UTF-8 text)", .path.display())]
    NotText {
        /// The path as given.
        path: PathBuf,
        /// The first byte that is no text, from 0.
        offset: usize,
    },
    /// The file is far larger than any scenario.
    #[error("`{}` holds more than {LARGEST_FILE} bytes, too many for a scenario", .path.display())]
    TooLarge {
        /// The path as given.
        path: PathBuf,
    },
    /// The operating system does not let it be read.
    #[error("cannot read scenario file `{}`", .path.display())]
    Unreadable {
        /// The path as given.
        path: PathBuf,
        /// What the operating system says.
        source: io::Error,
    },
    /// It was read and has faults.
    #[error(transparent)]
    Faulty(#[from] Faults),
}

impl Diagnostic for ScenarioError {
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        let remedy = match self {
            Self::Absent { .. } | Self::Folder { .. } => {
                "give the path of a TOML file; `somadawn template` prints some to start from"
            }
            Self::NotText { .. } | Self::TooLarge { .. } => {
                "a scenario is a TOML text file; `somadawn template` prints some to start from"
            }
            Self::Unreadable { .. } => "see to the file's permissions",
            Self::Faulty(_) => return None,
        };
        Some(Box::new(remedy))
    }
}

/// All faults of one scenario, in the order in which they were written; never empty.
#[derive(Debug, Clone)]
pub struct Faults {
    /// Name of the scenario file.
    pub name: String,
    /// The faults.
    pub faults: Vec<Fault>,
}

impl fmt::Display for Faults {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.faults.len() {
            1 => write!(f, "scenario `{}` has a fault", self.name),
            count => write!(f, "scenario `{}` has {count} faults", self.name),
        }
    }
}

impl std::error::Error for Faults {}
