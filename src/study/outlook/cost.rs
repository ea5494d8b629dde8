//! What a run is expected to take.

use serde::Serialize;

use crate::scenario::Settings;
use crate::scenario::settings::{Layout, Tick};

/// Cell lives per second and thread that a run is assumed to reach, 1/s, where support is pooled
/// and every cell is fully fed.
const CELL_LIVES_PER_SECOND: f64 = 1e7;

/// How many times as long a cell life takes where support is local. Rough, as what follows: measured
/// on bodies of 64 and 512 cells.
const LOCAL_SUPPORT: f64 = 2.5;

/// How many times as long a cell life takes where fields decide incomes. Bodies that starve take
/// longer still.
const FIELDS: f64 = 3.0;

/// Time that a settlement takes on a torus beyond that in a mixed habitat, s. Measured on 256 sites
/// with a kernel of 0.4 site widths.
const SECONDS_PER_LANDING: f64 = 5e-6;

/// Time that a tick takes in which nothing happens, s, and for each site besides. Measured on 16 to
/// 4,096 sites.
const SECONDS_PER_TICK: [f64; 2] = [6e-7, 2e-9];

/// Memory that a cell takes, bytes: its components, the ECS's record of their changes and of the
/// entity, and what spawning needs. Measured as the growth of peak memory between 1 and 4 million cells.
const BYTES_PER_CELL: f64 = 200.0;

/// What a run is expected to take.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Cost {
    /// Cells that will be born, one growth of every site per generation and replicate.
    pub cell_lives: f64,
    /// Time at 10 million cell lives per second and thread, a few million where bodies are worked
    /// out in space, and for landing on a torus and ticks that the scenario makes short, s.
    pub seconds: f64,
    /// Memory for the cells of the replicates that run at once, bytes.
    pub bytes: f64,
}

impl Cost {
    /// The cost of a run of `settings` whose generations last `generation_h`.
    pub(super) fn of(settings: &Settings, generation_h: f64, threads: usize) -> Self {
        let cells = settings.habitat.sites as f64 * settings.body.adult_cells as f64;
        let generations = settings.run.generations as f64;
        let replicates = f64::from(settings.run.replicates);
        let at_once = replicates.min(threads.max(1) as f64);
        let cell_lives = cells * generations * replicates;
        let lives = cell_lives * slowness(settings) / CELL_LIVES_PER_SECOND;
        let torus = matches!(settings.habitat.layout, Layout::Torus { .. });
        let settlements = cell_lives / settings.body.adult_cells as f64;
        let landing = if torus { settlements * SECONDS_PER_LANDING } else { 0.0 };
        let ticks = generations * replicates * ticks_per_generation(settings, generation_h);
        let [each, per_site] = SECONDS_PER_TICK;
        let idle = ticks * (each + per_site * settings.habitat.sites as f64);
        Self {
            cell_lives,
            seconds: (lives + landing + idle) / at_once,
            bytes: cells * BYTES_PER_CELL * at_once,
        }
    }
}

/// Ticks that the scenario asks for; those that the program chooses are too few to count.
fn ticks_per_generation(settings: &Settings, generation_h: f64) -> f64 {
    match settings.run.tick {
        Tick::Hours(tick_h) if generation_h.is_finite() => generation_h / tick_h,
        _ => 0.0,
    }
}

/// How many times as long a cell life takes as where nothing of space matters.
fn slowness(settings: &Settings) -> f64 {
    let local = if settings.support.is_some() { LOCAL_SUPPORT } else { 1.0 };
    let fields = if settings.fields().act() { FIELDS } else { 1.0 };
    local * fields
}
