//! Everything on disk: the run folder, its tables, its summary and its manifest.
//!
//! Nothing here knows of the model: rows are plain structs that the driver fills. Every file is
//! written under a temporary name in the run folder, flushed to the disk and then renamed, so that
//! nothing half-written ever bears a final name.

pub mod atomic;
pub mod bodies;
pub mod census;
pub mod column;
pub mod error;
pub mod folder;
pub mod manifest;
pub mod replicates;
pub mod run;
pub mod summary;
pub mod table;

pub use bodies::{BodyRow, Stage};
pub use census::{CensusRow, TRAITS};
pub use error::{Fault, RecordError};
pub use folder::{RunFolder, RunIdentity};
pub use manifest::{FileEntry, Machine, Manifest};
pub use replicates::{Outcome, ReplicateRow};
pub use run::{Ending, ReplicateRecord, RunRecorder};
pub use summary::{Prediction, Summary, Throughput};
pub use table::read_table;

/// Program name and version, as every file states it.
pub const PROGRAM: &str = concat!(env!("CARGO_PKG_NAME"), " ", env!("CARGO_PKG_VERSION"));

/// Names of a run folder's files.
pub mod file_name {
    /// Program, scenario, seed, machine and checksums; written last.
    pub const MANIFEST: &str = "manifest.json";
    /// A row per replicate.
    pub const REPLICATES: &str = "replicates.csv";
    /// The time series.
    pub const CENSUS: &str = "census.parquet";
    /// Cells of sampled adult colonies.
    pub const BODIES: &str = "bodies.parquet";
    /// The answer, as `evolve --json` prints it.
    pub const SUMMARY: &str = "summary.json";
    /// Held while a run writes, and naming the run it belongs to; stays, since removing it could
    /// let two runs in at once.
    pub const LOCK: &str = ".lock";

    /// The files of results, in the order of the manifest.
    pub const RESULTS: [&str; 4] = [REPLICATES, CENSUS, BODIES, SUMMARY];

    /// Start and end of a temporary file's name.
    pub(super) const TEMPORARY: (&str, &str) = (".unfinished-", ".tmp");

    /// Whether a run folder owns a file of that name, and may therefore replace or remove it.
    pub(super) fn is_owned(name: &str) -> bool {
        name == MANIFEST || name == LOCK || RESULTS.contains(&name) || is_temporary(name)
    }

    /// Whether a file of that name is what a run that was killed left behind.
    pub(super) fn is_temporary(name: &str) -> bool {
        name.starts_with(TEMPORARY.0) && name.ends_with(TEMPORARY.1)
    }
}
