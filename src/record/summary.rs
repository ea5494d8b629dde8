//! The answer of a run: what `evolve --json` prints and `summary.json` holds.

use std::path::Path;

use serde::{Deserialize, Serialize};

use super::manifest::read_json;
use super::{Outcome, RecordError, ReplicateRow, file_name};
use crate::stats::{self, KaplanMeier, Level, MeanEstimate, Observation, StatsError};
use crate::theory::{BodyClass, Cue, Verdict};

/// The answer of a run.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Summary {
    /// The scenario's title.
    pub title: String,
    /// Replicates that finished.
    pub replicates: usize,
    /// Whether and when differentiation arose.
    pub onset: OnsetSummary,
    /// Replicates that died out.
    pub extinct: usize,
    /// Colonies that settled and whose growth stops short of adult size, over all replicates.
    pub never_matured: u64,
    /// Where the replicates that did not die out ended.
    #[serde(rename = "final")]
    pub last: FinalSummary,
    /// What theory said.
    pub prediction: Prediction,
    /// How fast it went.
    pub throughput: Throughput,
}

/// Whether and when differentiation arose.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct OnsetSummary {
    /// Replicates with an onset.
    pub count: usize,
    /// Their share; `None` without replicates.
    pub probability: Option<f64>,
    /// Lower limit of the share's 95 % Wilson interval.
    pub wilson_low: f64,
    /// Upper limit.
    pub wilson_high: f64,
    /// Kaplan-Meier median of the generation of onset; `None` if the curve does not reach it.
    pub median_generation: Option<f64>,
    /// Lower limit of the median's 95 % interval.
    pub median_low: Option<f64>,
    /// Upper limit.
    pub median_high: Option<f64>,
}

/// Where the replicates that did not die out ended.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct FinalSummary {
    /// Mean division index D; `None` if all died out.
    pub division_index: Option<f64>,
    /// Lower limit of its 95 % Student t interval, cut at 0; `None` from one replicate.
    pub division_index_low: Option<f64>,
    /// Upper limit, cut at 1.
    pub division_index_high: Option<f64>,
    /// Mean share of soma cells.
    pub soma_fraction: Option<f64>,
    /// Mean number of living cells of adult colonies, over replicates.
    pub adult_cells: Option<f64>,
    /// Commonest class of bodies; of equally common ones the least differentiated.
    pub class: Option<BodyClass>,
    /// Commonest route; of equally common ones the first in [`Cue::ALL`].
    pub route: Option<Cue>,
}

/// What theory said of the scenario.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Prediction {
    /// Overall verdict.
    pub verdict: Verdict,
    /// Class of the best programme.
    pub class: BodyClass,
}

/// How much was computed in which time. Differs from run to run.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Throughput {
    /// Cells simulated, each from its birth to the end of its colony.
    pub cell_lives: u64,
    /// Time it took, s.
    pub wall_s: f64,
    /// Threads that worked.
    pub threads: usize,
    /// Cell lives over time; `None` if no time passed.
    pub cell_lives_per_second: Option<f64>,
}

impl Throughput {
    /// `cell_lives` in `wall_s` seconds on `threads` threads.
    #[must_use]
    pub fn new(cell_lives: u64, wall_s: f64, threads: usize) -> Self {
        let cell_lives_per_second = (wall_s > 0.0).then(|| cell_lives as f64 / wall_s);
        Self { cell_lives, wall_s, threads, cell_lives_per_second }
    }
}

impl Summary {
    /// The answer that `rows` give.
    ///
    /// The time to onset is right-censored at a replicate's last generation. A replicate that died
    /// out is censored when it did: it stays in the curve as one that had not differentiated by
    /// then, and counts among the replicates of the probability. An onset is dated by the census
    /// that saw it, so the median is resolved to one census interval.
    ///
    /// # Errors
    /// [`StatsError`] if a generation is negative, or any number NaN or infinite.
    pub fn from_replicates(
        title: &str,
        rows: &[ReplicateRow],
        prediction: Prediction,
        throughput: Throughput,
    ) -> Result<Self, StatsError> {
        let count_of = |outcome| rows.iter().filter(|row| row.outcome == outcome).count();
        Ok(Self {
            title: title.to_owned(),
            replicates: rows.len(),
            onset: OnsetSummary::of(rows, count_of(Outcome::Onset))?,
            extinct: count_of(Outcome::Extinct),
            never_matured: rows.iter().map(|row| row.never_matured).sum(),
            last: FinalSummary::of(rows)?,
            prediction,
            throughput,
        })
    }

    /// The summary in the run folder `folder`.
    ///
    /// # Errors
    /// [`RecordError::Read`] if there is none, [`RecordError::ReadJson`] if it is damaged.
    pub fn read(folder: &Path) -> Result<Self, RecordError> {
        read_json(&folder.join(file_name::SUMMARY))
    }
}

impl OnsetSummary {
    fn of(rows: &[ReplicateRow], count: usize) -> Result<Self, StatsError> {
        let interval = stats::wilson(count as u64, rows.len() as u64, Level::P95)?;
        let observations: Vec<Observation> = rows.iter().map(time_to_onset).collect();
        let median = KaplanMeier::fit(&observations)?.median(Level::P95);
        Ok(Self {
            count,
            probability: (!rows.is_empty()).then(|| count as f64 / rows.len() as f64),
            wilson_low: interval.low,
            wilson_high: interval.high,
            median_generation: median.median,
            median_low: median.low,
            median_high: median.high,
        })
    }
}

fn time_to_onset(row: &ReplicateRow) -> Observation {
    match (row.outcome, row.onset_generation) {
        (Outcome::Onset, Some(time)) => Observation { time, event: true },
        (Outcome::Onset, None) => Observation { time: row.end_generation, event: true },
        _ => Observation { time: row.end_generation, event: false },
    }
}

impl FinalSummary {
    fn of(rows: &[ReplicateRow]) -> Result<Self, StatsError> {
        let alive = || rows.iter().filter(|row| row.outcome != Outcome::Extinct);
        let mean = |value: fn(&ReplicateRow) -> Option<f64>| {
            MeanEstimate::of(&alive().filter_map(value).collect::<Vec<_>>(), Level::P95)
        };
        let index = mean(|row| row.division_index)?;
        let interval = index.and_then(|index| index.interval).map(|found| found.within(0.0, 1.0));
        Ok(Self {
            division_index: index.map(|index| index.mean),
            division_index_low: interval.map(|interval| interval.low),
            division_index_high: interval.map(|interval| interval.high),
            soma_fraction: mean(|row| row.soma_fraction)?.map(|share| share.mean),
            adult_cells: mean(|row| row.adult_cells)?.map(|cells| cells.mean),
            class: commonest(&BodyClass::ALL, alive().filter_map(|row| row.class)),
            route: commonest(&Cue::ALL, alive().filter_map(ReplicateRow::route)),
        })
    }
}

/// The commonest of `found`; of equally common ones the first in `order`.
fn commonest<T: Copy + PartialEq>(order: &[T], found: impl Iterator<Item = T>) -> Option<T> {
    let found: Vec<T> = found.collect();
    let count = |kind: &T| found.iter().filter(|other| *other == kind).count();
    order
        .iter()
        .map(|kind| (*kind, count(kind)))
        .filter(|(_, count)| *count > 0)
        .reduce(|best, next| if next.1 > best.1 { next } else { best })
        .map(|(kind, _)| kind)
}
