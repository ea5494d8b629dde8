//! `evolve`: the replicates of one scenario into a run folder, going on where an earlier call stopped.

use std::collections::BTreeSet;
use std::path::Path;
use std::sync::atomic::AtomicBool;

use super::prediction::{Prediction, predict};
use super::run::{Replicates, RunError, Watcher};
use super::start::start;
use crate::record::{
    self, BodyRow, CensusRow, Ending, Manifest, RecordError, ReplicateRecord, ReplicateRow,
    RunFolder, RunIdentity, RunRecorder, Summary, Throughput, file_name, read_table,
};
use crate::scenario::Settings;

/// What to evolve, where to, and how.
#[derive(Clone, Copy)]
pub struct Evolve<'a> {
    /// The scenario.
    pub settings: &'a Settings,
    /// Folder of the run.
    pub folder: &'a Path,
    /// Whether another run's files in the folder may be replaced.
    pub replace: bool,
    /// Threads, at least one; results do not depend on it.
    pub threads: usize,
    /// Set from outside to end early with what is finished.
    pub stop: &'a AtomicBool,
    /// Who watches.
    pub watcher: &'a dyn Watcher,
}

/// What a run came to.
#[derive(Debug, Clone)]
pub struct Evolved {
    /// The answer.
    pub summary: Summary,
    /// Replicates that finished.
    pub rows: Vec<ReplicateRow>,
    /// Their time series.
    pub census: Vec<CensusRow>,
    /// What theory said beforehand.
    pub prediction: Prediction,
    /// Replicates that an earlier call had finished already.
    pub found_finished: usize,
    /// Whether every replicate has finished.
    pub complete: bool,
}

impl Evolve<'_> {
    /// Runs what the folder does not hold yet and records it.
    ///
    /// A folder that holds the whole run already is only read.
    ///
    /// # Errors
    /// [`RunError::Record`] if the folder is refused or the disk fails, [`RunError::Threads`] if
    /// threads cannot be had. Replicates finished in an earlier call stay as they were.
    pub fn run(self) -> Result<Evolved, RunError> {
        let prediction = predict(self.settings);
        let identity = RunIdentity::new(self.settings.to_toml(), self.settings.seed);
        let folder = RunFolder::open(self.folder, identity, self.replace)?;
        let earlier = folder.earlier().filter(|manifest| manifest.verify(self.folder).is_ok());
        let finished = earlier.map_or_else(|| Ok(Vec::new()), |_| self.read_finished())?;
        let found_finished = finished.len();
        if !earlier.is_some_and(|manifest| manifest.complete) {
            self.run_rest(folder, finished, &prediction)?;
        }
        Ok(Evolved {
            summary: Summary::read(self.folder)?,
            rows: record::replicates::read_replicates(&self.folder.join(file_name::REPLICATES))?,
            census: read_table(&self.folder.join(file_name::CENSUS))?,
            complete: Manifest::read(self.folder)?.complete,
            prediction,
            found_finished,
        })
    }

    fn run_rest(
        &self,
        folder: RunFolder,
        finished: Vec<ReplicateRecord>,
        prediction: &Prediction,
    ) -> Result<(), RunError> {
        let done: BTreeSet<u32> = finished.iter().map(|record| record.row.replicate).collect();
        let mut recorder = RunRecorder::start(folder)?;
        finished.into_iter().try_for_each(|record| {
            self.watcher.at_end(&record.row);
            recorder.add(record)
        })?;
        let planned = self.settings.run.replicates;
        let numbers: Vec<u32> = (0..planned).filter(|number| !done.contains(number)).collect();
        let replicates = Replicates {
            settings: self.settings,
            start: start(self.settings),
            threads: self.threads,
            stop: self.stop,
            watcher: self.watcher,
        };
        let throughput = replicates.run(&numbers, |record| recorder.add(record))?;
        recorder.finish(&self.ending(prediction, throughput))?;
        Ok(())
    }

    fn ending(&self, prediction: &Prediction, throughput: Throughput) -> Ending {
        Ending {
            title: self.settings.title.clone(),
            replicates: self.settings.run.replicates,
            prediction: record::Prediction {
                verdict: prediction.verdict,
                class: prediction.best.class,
            },
            throughput,
        }
    }

    /// The replicates that the folder holds, as they were recorded.
    fn read_finished(&self) -> Result<Vec<ReplicateRecord>, RecordError> {
        let rows = record::replicates::read_replicates(&self.folder.join(file_name::REPLICATES))?;
        let census: Vec<CensusRow> = read_table(&self.folder.join(file_name::CENSUS))?;
        let bodies: Vec<BodyRow> = read_table(&self.folder.join(file_name::BODIES))?;
        let record = |row: ReplicateRow| {
            let number = row.replicate;
            ReplicateRecord {
                row,
                census: census.iter().filter(|r| r.replicate == number).cloned().collect(),
                bodies: bodies.iter().filter(|r| r.replicate == number).cloned().collect(),
            }
        };
        Ok(rows.into_iter().map(record).collect())
    }
}
