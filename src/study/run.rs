//! A run: the replicates of one scenario, side by side on threads, recorded as they finish.

use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::sync::mpsc;
use std::time::Instant;

use crate::evolution::{Replicate, Start};
use crate::record::{CensusRow, RecordError, ReplicateRecord, ReplicateRow, Throughput};
use crate::scenario::Settings;

/// Whoever wants to see how a run goes, from whichever thread.
pub trait Watcher: Sync {
    /// A replicate has taken a census.
    fn at_census(&self, _census: &CensusRow) {}
    /// A replicate is over.
    fn at_end(&self, _row: &ReplicateRow) {}
}

/// A watcher that looks away.
#[derive(Debug, Clone, Copy)]
pub struct Unwatched;

impl Watcher for Unwatched {}

/// Which replicates to run, and how.
#[derive(Clone, Copy)]
pub struct Replicates<'a> {
    /// The scenario.
    pub settings: &'a Settings,
    /// What each replicate starts from.
    pub start: Start,
    /// Threads, at least one; results do not depend on it.
    pub threads: usize,
    /// Set from outside to end the run early; replicates under way are then given up.
    pub stop: &'a AtomicBool,
    /// Who watches.
    pub watcher: &'a dyn Watcher,
}

/// Why a run failed.
#[derive(Debug, thiserror::Error)]
pub enum RunError {
    /// The disk refused.
    #[error(transparent)]
    Record(#[from] RecordError),
    /// The system refused threads.
    #[error("cannot start {threads} threads; ask for fewer with --threads")]
    Threads {
        /// How many were asked for.
        threads: usize,
        /// What the system said.
        source: rayon::ThreadPoolBuildError,
    },
}

impl Replicates<'_> {
    /// Runs the replicates with these numbers and hands each to `sink` as it finishes.
    ///
    /// # Errors
    /// [`RunError::Threads`] if threads cannot be had; [`RunError::Record`] if `sink` fails, which
    /// ends the run.
    pub fn run(
        self,
        numbers: &[u32],
        mut sink: impl FnMut(ReplicateRecord) -> Result<(), RecordError>,
    ) -> Result<Throughput, RunError> {
        let began = Instant::now();
        let threads = self.threads;
        let pool = rayon::ThreadPoolBuilder::new()
            .num_threads(threads)
            .build()
            .map_err(|source| RunError::Threads { threads, source })?;
        let cell_lives = AtomicU64::new(0);
        let broken = AtomicBool::new(false);
        let (sender, receiver) = mpsc::channel();
        let outcome = std::thread::scope(|scope| {
            let (cell_lives, broken) = (&cell_lives, &broken);
            scope.spawn(move || {
                pool.scope_fifo(|scope| {
                    for &number in numbers {
                        let sender = sender.clone();
                        scope.spawn_fifo(move |_| {
                            if let Some(record) = self.run_one(number, broken, cell_lives) {
                                // Nobody listens any more once the disk has refused.
                                let _ = sender.send(record);
                            }
                        });
                    }
                });
            });
            receiver.iter().try_for_each(&mut sink).inspect_err(|_| {
                broken.store(true, Ordering::Relaxed);
            })
        });
        outcome?;
        let wall_s = began.elapsed().as_secs_f64();
        Ok(Throughput::new(cell_lives.into_inner(), wall_s, threads))
    }

    fn run_one(
        &self,
        number: u32,
        broken: &AtomicBool,
        cell_lives: &AtomicU64,
    ) -> Option<ReplicateRecord> {
        let stopped = || self.stop.load(Ordering::Relaxed) || broken.load(Ordering::Relaxed);
        if stopped() {
            return None;
        }
        let mut replicate = Replicate::found(self.settings, self.start, number);
        // Asked here too: censuses may follow each other faster than a replicate asks by itself.
        while !stopped()
            && let Some(census) = replicate.advance(stopped)
        {
            self.watcher.at_census(census);
        }
        cell_lives.fetch_add(replicate.cell_lives(), Ordering::Relaxed);
        if !replicate.is_over() {
            return None;
        }
        let record = replicate.finish();
        self.watcher.at_end(&record.row);
        Some(record)
    }
}
