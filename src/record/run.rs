//! Recording a run: replicates come in as they finish, files go out when the run ends.

use std::collections::BTreeMap;

use jiff::{Timestamp, Unit};

use super::atomic::{PendingFile, pending_bytes, pending_json};
use super::table::TableWriter;
use super::{
    BodyRow, CensusRow, FileEntry, Machine, Manifest, PROGRAM, Prediction, RecordError,
    ReplicateRow, RunFolder, Summary, Throughput, file_name, replicates,
};

/// All that one finished replicate leaves; `row.replicate` says which one it was, from 0.
#[derive(Debug, Clone, PartialEq)]
pub struct ReplicateRecord {
    /// What became of it.
    pub row: ReplicateRow,
    /// Its censuses, in order of time.
    pub census: Vec<CensusRow>,
    /// Cells of its sampled bodies.
    pub bodies: Vec<BodyRow>,
}

/// What is known of a run when it ends.
#[derive(Debug, Clone, PartialEq)]
pub struct Ending {
    /// The scenario's title.
    pub title: String,
    /// Replicates asked for; a run of which fewer finished is recorded as incomplete.
    pub replicates: u32,
    /// What theory said.
    pub prediction: Prediction,
    /// How fast it went.
    pub throughput: Throughput,
}

/// A run that is being recorded.
///
/// Tables grow on the disk under temporary names while it goes on. Dropped without
/// [`finish`](Self::finish), it leaves the folder as it was.
pub struct RunRecorder {
    folder: RunFolder,
    started: Timestamp,
    rows: BTreeMap<u32, ReplicateRow>,
    census: TableWriter<CensusRow>,
    bodies: TableWriter<BodyRow>,
}

impl RunRecorder {
    /// Begins to record in `folder`.
    ///
    /// # Errors
    /// [`RecordError::Write`] or [`RecordError::WriteTable`] if the disk refuses.
    pub fn start(folder: RunFolder) -> Result<Self, RecordError> {
        let census = TableWriter::create(folder.path(), file_name::CENSUS)?;
        let bodies = TableWriter::create(folder.path(), file_name::BODIES)?;
        Ok(Self { folder, started: Timestamp::now(), rows: BTreeMap::new(), census, bodies })
    }

    /// Takes a finished replicate, in any order of replicates. Optional numbers of its row that are
    /// NaN or infinite count as not known.
    ///
    /// # Errors
    /// [`RecordError::Twice`] if the replicate is already there; [`RecordError::Write`] or
    /// [`RecordError::WriteTable`] if the disk refuses.
    pub fn add(&mut self, record: ReplicateRecord) -> Result<(), RecordError> {
        let replicate = record.row.replicate;
        self.census.add(replicate, record.census)?;
        self.bodies.add(replicate, record.bodies)?;
        self.rows.insert(replicate, record.row.with_finite_values());
        Ok(())
    }

    /// Replicates recorded so far.
    #[must_use]
    pub fn finished(&self) -> usize {
        self.rows.len()
    }

    /// Gives all files their names, the manifest last: a folder with a manifest is whole.
    ///
    /// Nothing gets its name before everything is on the disk, so a disk that fills up leaves an
    /// earlier run as it was.
    ///
    /// # Errors
    /// [`RecordError::Write`] or [`RecordError::WriteTable`] if the disk refuses;
    /// [`RecordError::Value`] if a replicate's generations are not finite numbers from 0 up.
    pub fn finish(self, ending: &Ending) -> Result<(Summary, Manifest), RecordError> {
        let Self { folder, started, rows, census, bodies } = self;
        let path = folder.path();
        let finished: Vec<u32> = rows.keys().copied().collect();
        let rows: Vec<ReplicateRow> = rows.into_values().collect();
        let summary = Summary::from_replicates(
            &ending.title,
            &rows,
            ending.prediction.clone(),
            ending.throughput,
        )?;
        let csv = replicates::to_csv(&rows, &path.join(file_name::REPLICATES))?;
        let pending = [
            pending_bytes(path, file_name::REPLICATES, &csv)?,
            census.finish()?,
            bodies.finish()?,
            pending_json(path, file_name::SUMMARY, &summary)?,
        ];
        let files = entries(&pending)?;
        let manifest = manifest(&folder, started, ending, finished, files);
        let last = pending_json(path, file_name::MANIFEST, &manifest)?;
        publish(&folder, pending, last)?;
        Ok((summary, manifest))
    }
}

fn entries(pending: &[PendingFile; 4]) -> Result<Vec<FileEntry>, RecordError> {
    pending.iter().zip(file_name::RESULTS).map(|(file, name)| file.entry(name)).collect()
}

fn manifest(
    folder: &RunFolder,
    started: Timestamp,
    ending: &Ending,
    finished: Vec<u32>,
    files: Vec<FileEntry>,
) -> Manifest {
    let identity = folder.identity();
    Manifest {
        program: PROGRAM.to_owned(),
        identity: identity.digest().to_owned(),
        seed: identity.seed(),
        complete: finished.len() as u64 >= u64::from(ending.replicates),
        replicates: ending.replicates,
        replicates_finished: finished,
        started: to_the_second(started),
        ended: to_the_second(Timestamp::now()),
        machine: Machine::this(),
        files,
        scenario: identity.scenario().to_owned(),
    }
}

/// RFC 3339 in UTC, without fractions of a second.
fn to_the_second(time: Timestamp) -> String {
    time.round(Unit::Second).unwrap_or(time).to_string()
}

fn publish(
    folder: &RunFolder,
    results: [PendingFile; 4],
    manifest: PendingFile,
) -> Result<(), RecordError> {
    // An earlier manifest must not vouch for files that are being replaced one by one; the lock
    // file goes on to say whose folder it is.
    let old = folder.path().join(file_name::MANIFEST);
    if old.exists() {
        std::fs::remove_file(&old).map_err(RecordError::writing(&old))?;
    }
    results.into_iter().try_for_each(PendingFile::finish)?;
    manifest.finish()
}
