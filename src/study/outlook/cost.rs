//! What a run is expected to take.

use serde::Serialize;

use super::TimeOutlook;
use crate::scenario::Settings;
use crate::scenario::settings::{Layout, Tick};
use crate::theory::{Cue, CueSet};
use crate::world::nursery;

/// Cell lives per second and thread that a run is assumed to reach, 1/s, where support is pooled
/// and every cell is fully fed.
const CELL_LIVES_PER_SECOND: f64 = 1e7;

/// How many times as long a cell life takes where support is local. Rough, as what follows: measured
/// on bodies of 64 and 512 cells.
const LOCAL_SUPPORT: f64 = 2.5;

/// How many times as long a cell life takes where fields decide incomes and colonies share
/// developments. Bodies that starve take longer still.
const FIELDS: f64 = 3.0;

/// Time that a settlement takes on a torus beyond that in a mixed habitat, s. Measured on 256 sites
/// with a kernel of 0.4 site widths.
const SECONDS_PER_LANDING: f64 = 5e-6;

/// Time that growth takes per cell where every colony has a development of its own, s. Measured, as
/// are those of a replacement, on bodies of 64 and 512 cells.
const SECONDS_PER_CELL_GROWN: f64 = 5e-6;

/// Time that a replacement takes by itself, s.
const SECONDS_PER_REPLACEMENT: f64 = 1e-7;

/// Time that a body takes to follow a replacement, for each of its cells: to split its budget, and
/// besides to share its help where that is local, s.
const SECONDS_PER_CELL_FOLLOWING: [f64; 2] = [1e-8, 1e-7];

/// Time that a tick takes in which nothing happens, s, and for each site besides. Measured on 16 to
/// 4,096 sites.
const SECONDS_PER_TICK: [f64; 2] = [6e-7, 2e-9];

/// Memory that a cell takes, bytes: its components, the ECS's record of their changes and of the
/// entity, and what spawning needs. Measured as the growth of peak memory between 1 and 4 million cells.
const BYTES_PER_CELL: f64 = 200.0;

/// What a run is expected to take.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Cost {
    /// Cells that will be born: one growth of every site per generation and replicate, and the
    /// replacements of adults.
    pub cell_lives: f64,
    /// Time at 10 million cell lives per second and thread, a few million where bodies are worked
    /// out in space and fewer where colonies cannot share them; for replacements, for landing on a
    /// torus, and for ticks that the scenario makes short, s.
    pub seconds: f64,
    /// Memory for the cells of the replicates that run at once, bytes.
    pub bytes: f64,
}

impl Cost {
    /// The cost of a run of `settings` whose colonies live as `time` says.
    pub(super) fn of(settings: &Settings, time: &TimeOutlook, threads: usize) -> Self {
        let sites = settings.habitat.sites as f64;
        let cells = sites * settings.body.adult_cells as f64;
        let generations = settings.run.generations as f64 * f64::from(settings.run.replicates);
        let at_once = f64::from(settings.run.replicates).min(threads.max(1) as f64);
        let grown = cells * generations;
        let replaced = grown * replacements_per_cell(settings, time);
        let ticks = generations * ticks_per_generation(settings, time);
        let [each, per_site] = SECONDS_PER_TICK;
        let torus = matches!(settings.habitat.layout, Layout::Torus { .. });
        let landings = if torus { sites * generations } else { 0.0 };
        let seconds = grown * seconds_per_life(settings)
            + landings * SECONDS_PER_LANDING
            + replaced * seconds_per_replacement(settings)
            + ticks * (each + per_site * sites);
        Self {
            cell_lives: grown + replaced,
            seconds: seconds / at_once,
            bytes: cells * BYTES_PER_CELL * at_once,
        }
    }
}

/// Ticks that the scenario asks for; those that the program chooses are too few to count.
fn ticks_per_generation(settings: &Settings, time: &TimeOutlook) -> f64 {
    match settings.run.tick {
        Tick::Hours(tick_h) if time.generation_h.is_finite() => time.generation_h / tick_h,
        _ => 0.0,
    }
}

/// Replacements of each cell in an adult's life, whose mean is what a generation is longer than
/// growth; none where no generation passes.
fn replacements_per_cell(settings: &Settings, time: &TimeOutlook) -> f64 {
    let adult_h = time.generation_h - time.growth_h;
    if adult_h.is_finite() { settings.budget.turnover_per_h * adult_h.max(0.0) } else { 0.0 }
}

/// Time that a cell life takes, s.
fn seconds_per_life(settings: &Settings) -> f64 {
    if grows_alone(settings) {
        return SECONDS_PER_CELL_GROWN;
    }
    let local = if settings.support.is_some() { LOCAL_SUPPORT } else { 1.0 };
    let fields = if settings.fields().act() { FIELDS } else { 1.0 };
    local * fields / CELL_LIVES_PER_SECOND
}

/// Whether programmes that respond to cues need developments of their own: the least tax decides who
/// starves.
fn grows_alone(settings: &Settings) -> bool {
    let taxed = settings.traits.cost_per_unit > 0.0 && settings.traits.cues != CueSet::EMPTY;
    taxed && nursery::slowness(settings, 1.0 - f64::EPSILON).is_none()
}

/// Time that a replacement takes, s.
fn seconds_per_replacement(settings: &Settings) -> f64 {
    let [split, share] = SECONDS_PER_CELL_FOLLOWING;
    let per_cell = if settings.support.is_some() { split + share } else { split };
    let cells = settings.body.adult_cells as f64;
    SECONDS_PER_REPLACEMENT + share_followed(settings) * cells * per_cell
}

/// Share of replacements after which cells read another thing than before: luck is drawn anew, other
/// than before in up to half of the cases, and of four pairs of labels one is that of a division.
fn share_followed(settings: &Settings) -> f64 {
    let cues = settings.traits.cues;
    let same_luck = if cues.contains(Cue::Noise) { 0.5 } else { 1.0 };
    let same_labels = if cues.contains(Cue::Lineage) { 0.25 } else { 1.0 };
    1.0 - same_luck * same_labels
}
