//! What follows from a scenario before anything is simulated: the `check` command's document.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use serde::Serialize;

use crate::scenario::Settings;
use crate::study::prediction::life_history;
use crate::theory::{Cue, TaskReturn};
use crate::tissue::{Growth, Pace, compact_radius_um};

mod selection;
mod warning;

pub use selection::{Pull, Selection};
pub use warning::{Advice, Warning};

/// Cell lives per second and thread that a run is assumed to reach, 1/s.
const CELL_LIVES_PER_SECOND: f64 = 1e7;

/// Bodies over which the share of interior cells is averaged.
const BODIES_LOOKED_AT: usize = 16;

/// Memory that a cell takes, bytes: its components, the ECS's record of their changes and of the
/// entity, and what spawning needs. Measured as the growth of peak memory between 1 and 4 million cells.
const BYTES_PER_CELL: f64 = 200.0;

/// What follows from a scenario.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Outlook {
    /// The scenario's title.
    pub title: String,
    /// The adult body.
    pub body: BodyOutlook,
    /// Supply by diffusion; null where every cell is fully fed.
    pub transport: Option<TransportOutlook>,
    /// Sharing of support; null where support is pooled.
    pub support: Option<SupportOutlook>,
    /// Times of the generalist's life.
    pub time: TimeOutlook,
    /// Mutations expected among the settlers of one generation, `N * traits * mu`.
    pub mutations_per_generation: f64,
    /// What a run is expected to take.
    pub cost: Cost,
    /// What may disappoint, each with a remedy.
    pub warnings: Vec<Advice>,
}

/// The adult body.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BodyOutlook {
    /// Cells of an adult colony (n).
    pub cells: usize,
    /// Radius of the ball of the body's volume, um: `(3 n d^3 / (4 pi sqrt 2))^(1/3)`.
    pub radius_um: f64,
    /// Share of cells without an empty neighbour site, in [0, 1].
    pub interior_share: f64,
}

/// Supply by diffusion.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TransportOutlook {
    /// Thiele modulus of the body, `R sqrt(k/D)`.
    pub thiele_modulus: f64,
    /// Share of the income that diffusion costs, in [0, 1].
    pub income_lost_share: f64,
    /// Cells of the largest body without starved cells.
    pub largest_fed_cells: u64,
}

/// Sharing of support.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SupportOutlook {
    /// Range of sharing over the body's radius.
    pub range_over_radius: f64,
}

/// Times of the generalist's life.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TimeOutlook {
    /// From founding to adulthood, h.
    pub growth_h: f64,
    /// Mean age of a parent at the birth of a propagule, h.
    pub generation_h: f64,
}

/// What a run is expected to take.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Cost {
    /// Cells that will be born, one growth of every site per generation and replicate.
    pub cell_lives: f64,
    /// Time at 10 million cell lives per second and thread, s.
    pub seconds: f64,
    /// Memory for the cells of the replicates that run at once, bytes.
    pub bytes: f64,
}

impl Outlook {
    /// What follows from `settings`, given what theory says of the generalist and how many
    /// threads a run will have.
    #[must_use]
    pub fn of(settings: &Settings, selection: &Selection, threads: usize) -> Self {
        let body = body(settings);
        let time = time(settings, selection.soma_share, body.interior_share);
        let warnings = warning::warnings(settings, &body, &time, selection);
        Self {
            title: settings.title.clone(),
            transport: None,
            support: None,
            time,
            mutations_per_generation: mutations_per_generation(settings),
            cost: cost(settings, threads),
            warnings: warnings.iter().map(Warning::advice).collect(),
            body,
        }
    }
}

fn body(settings: &Settings) -> BodyOutlook {
    let cells = settings.body.adult_cells;
    BodyOutlook {
        cells,
        radius_um: compact_radius_um(cells, settings.body.cell_diameter_um),
        interior_share: interior_share(cells),
    }
}

/// Mean share of interior cells over a few compact bodies, whose outermost shells are filled at
/// random; how a body grew does not matter, so they are founded at adult size.
fn interior_share(cells: usize) -> f64 {
    let mut growth = Growth::of_clump(cells, cells);
    let pace = Pace { net_income_eu_per_h: 1.0, division_cost_eu: 1.0, division_cv: 0.0 };
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(0);
    let mut interior = 0;
    for _ in 0..BODIES_LOOKED_AT {
        growth.grow(&pace, f64::INFINITY, &mut rng);
        interior += growth.exposed().filter(|exposed| !exposed).count();
    }
    interior as f64 / (cells * BODIES_LOOKED_AT) as f64
}

/// Hazard `m_ext + m0 / V` of an adult generalist of soma share `z`, 1/h; infinite at V = 0.
fn generalist_hazard_per_h(settings: &Settings, z: f64, interior_share: f64) -> f64 {
    let task = &settings.returns.viability;
    let viability = mean_effect(task, interior_share) * task.curve.value(z);
    settings.life.extrinsic_hazard_per_h + settings.life.adult_hazard_per_h / viability
}

fn mean_effect(task: &TaskReturn, interior_share: f64) -> f64 {
    (1.0 - interior_share) * task.surface_effect + interior_share * task.interior_effect
}

/// At a steady rate of propagules and a constant hazard m, parents are on average `1/m` into
/// adulthood. Where division costs vary, growth is that of the mean cost.
fn time(settings: &Settings, soma_share: f64, interior_share: f64) -> TimeOutlook {
    let income = settings.budget.income_eu_per_h;
    let growth_h = life_history(settings).growth_h(income).unwrap_or(f64::INFINITY);
    let hazard = generalist_hazard_per_h(settings, soma_share, interior_share);
    TimeOutlook { growth_h, generation_h: growth_h + 1.0 / hazard }
}

/// Heritable traits of a scenario: the baseline, one responsiveness per cue, and noise's bias.
#[must_use]
pub fn heritable_traits(settings: &Settings) -> usize {
    let cues = settings.traits.cues;
    1 + cues.iter().count() + usize::from(cues.contains(Cue::Noise))
}

fn mutations_per_generation(settings: &Settings) -> f64 {
    let traits = heritable_traits(settings);
    settings.habitat.sites as f64 * traits as f64 * settings.traits.mutation_probability
}

fn cost(settings: &Settings, threads: usize) -> Cost {
    let cells = settings.habitat.sites as f64 * settings.body.adult_cells as f64;
    let replicates = f64::from(settings.run.replicates);
    let at_once = replicates.min(threads.max(1) as f64);
    let cell_lives = cells * settings.run.generations as f64 * replicates;
    Cost {
        cell_lives,
        seconds: cell_lives / (CELL_LIVES_PER_SECOND * at_once),
        bytes: cells * BYTES_PER_CELL * at_once,
    }
}

#[cfg(test)]
mod tests;
