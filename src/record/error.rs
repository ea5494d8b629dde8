//! What can go wrong on disk.

use std::io;
use std::path::{Path, PathBuf};

use parquet::errors::ParquetError;

use crate::stats::StatsError;

/// Whose fault an error is, which decides the exit code.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fault {
    /// The command line or a file of the user's is wrong: nothing was run (exit 2).
    Request,
    /// It arose while running (exit 1).
    Running,
}

/// What can go wrong on disk.
#[derive(Debug, thiserror::Error)]
pub enum RecordError {
    /// The output folder cannot be made.
    #[error("cannot make the output folder {}: {source}; choose another --out", path.display())]
    Create {
        /// The folder.
        path: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// The output path is something else than a folder.
    #[error("{} is not a folder; choose another --out", path.display())]
    NotAFolder {
        /// The path.
        path: PathBuf,
    },
    /// The output folder cannot be written to or listed.
    #[error(
        "cannot write to the output folder {}: {source}; check its permissions or choose another \
         --out",
        path.display()
    )]
    Access {
        /// The folder.
        path: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// The output folder holds another run.
    #[error(
        "{} holds another run (another scenario, seed or program version); choose another --out, \
         or give --replace to delete it",
        path.display()
    )]
    AnotherRun {
        /// The folder.
        path: PathBuf,
    },
    /// The output folder holds files that no run wrote.
    #[error(
        "{} holds files that are not a run's ({}); choose another --out, or move them away",
        path.display(),
        some_of(files)
    )]
    ForeignFiles {
        /// The folder.
        path: PathBuf,
        /// Names of the foreign files, sorted.
        files: Vec<String>,
    },
    /// Another process is writing to the output folder.
    #[error(
        "another run is writing to {} right now; wait for it to end, or choose another --out",
        path.display()
    )]
    InUse {
        /// The folder.
        path: PathBuf,
    },
    /// A file could not be written.
    #[error("cannot write {}: {source}; {}", path.display(), remedy(source))]
    Write {
        /// The file.
        path: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// A table could not be written.
    #[error("cannot write the table {}: {source}; {FREE_SPACE}", path.display())]
    WriteTable {
        /// The file.
        path: PathBuf,
        /// What the table writer said.
        source: ParquetError,
    },
    /// A row could not be put in words.
    #[error("cannot write {}: {source}", path.display())]
    WriteCsv {
        /// The file.
        path: PathBuf,
        /// What the writer said.
        source: csv::Error,
    },
    /// A replicate was handed in twice.
    #[error("replicate {replicate} was recorded twice in {}", path.display())]
    Twice {
        /// The table.
        path: PathBuf,
        /// The replicate.
        replicate: u32,
    },
    /// A value that cannot be summarised.
    #[error("a replicate holds a value that cannot be summarised: {0}")]
    Value(#[from] StatsError),
    /// A file could not be read.
    #[error("cannot read {}: {source}", path.display())]
    Read {
        /// The file.
        path: PathBuf,
        /// What the system said.
        source: io::Error,
    },
    /// A file is not as the run left it.
    #[error("{} was changed after the run; run the scenario again", path.display())]
    Changed {
        /// The file.
        path: PathBuf,
    },
    /// A table is not one that this program wrote.
    #[error("{} is not a table of this program's: {source}; run the scenario again", path.display())]
    ReadTable {
        /// The file.
        path: PathBuf,
        /// What the table reader said.
        source: ParquetError,
    },
    /// A table lacks a column, or has it in another type.
    #[error(
        "{} has no column {column:?} of the expected type; it may come from another version: run \
         the scenario again",
        path.display()
    )]
    Column {
        /// The file.
        path: PathBuf,
        /// The column.
        column: &'static str,
    },
    /// A table holds a word that is not one of its column's.
    #[error("{} holds {value:?} in column {column:?}, which is not one of its words", path.display())]
    Word {
        /// The file.
        path: PathBuf,
        /// The column.
        column: &'static str,
        /// The value found.
        value: String,
    },
    /// A CSV file is not one that this program wrote.
    #[error("{} is not a table of this program's: {source}; run the scenario again", path.display())]
    ReadCsv {
        /// The file.
        path: PathBuf,
        /// What the reader said.
        source: csv::Error,
    },
    /// A JSON file is not one that this program wrote.
    #[error("{} is not one of this program's: {source}; run the scenario again", path.display())]
    ReadJson {
        /// The file.
        path: PathBuf,
        /// What the reader said.
        source: serde_json::Error,
    },
}

const FREE_SPACE: &str = "free some space and run the same command again";

impl RecordError {
    /// Whose fault it is.
    #[must_use]
    pub const fn fault(&self) -> Fault {
        match self {
            Self::Write { .. }
            | Self::WriteTable { .. }
            | Self::WriteCsv { .. }
            | Self::Twice { .. }
            | Self::Value(_) => Fault::Running,
            _ => Fault::Request,
        }
    }

    /// For `map_err`: the error of a failed write to `path`.
    pub(super) fn writing(path: &Path) -> impl FnOnce(io::Error) -> Self {
        move |source| Self::Write { path: path.to_path_buf(), source }
    }

    /// For `map_err`: the error of a failed read of `path`.
    pub(super) fn reading(path: &Path) -> impl FnOnce(io::Error) -> Self {
        move |source| Self::Read { path: path.to_path_buf(), source }
    }

    /// For `map_err`: the error of a failed write to the table `path`.
    ///
    /// The table writer wraps what the system said; unwrapped, it names the remedy that fits.
    pub(super) fn writing_table(path: &Path) -> impl Fn(ParquetError) -> Self {
        move |source| match source {
            ParquetError::External(cause) => match cause.downcast::<io::Error>() {
                Ok(source) => Self::Write { path: path.to_path_buf(), source: *source },
                Err(cause) => Self::WriteTable {
                    path: path.to_path_buf(),
                    source: ParquetError::External(cause),
                },
            },
            source => Self::WriteTable { path: path.to_path_buf(), source },
        }
    }

    /// For `map_err`: the error of a failed read of the table `path`.
    pub(super) fn reading_table(path: &Path) -> impl Fn(ParquetError) -> Self {
        move |source| Self::ReadTable { path: path.to_path_buf(), source }
    }
}

fn remedy(source: &io::Error) -> &'static str {
    match source.kind() {
        io::ErrorKind::StorageFull | io::ErrorKind::QuotaExceeded | io::ErrorKind::FileTooLarge => {
            FREE_SPACE
        }
        _ => "check that the folder still exists and may be written to, then run again",
    }
}

/// The first few names, and how many more there are.
fn some_of(files: &[String]) -> String {
    const SHOWN: usize = 3;
    let shown = files.iter().take(SHOWN).cloned().collect::<Vec<_>>().join(", ");
    match files.len().saturating_sub(SHOWN) {
        0 => shown,
        more => format!("{shown} and {more} more"),
    }
}
