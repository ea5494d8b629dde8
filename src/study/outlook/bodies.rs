//! What adult bodies are like: a few are grown, always the same.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use serde::Serialize;

use crate::scenario::Settings;
use crate::tissue::{Developer, Development, Ending, Growth, Pace, Plan, plan_radius_um};

/// Compact bodies over which the share of interior cells is averaged.
const COMPACT_BODIES: usize = 16;

/// Cells grown in all where fields or the plan shape bodies, and most bodies grown for that.
const GROWN_CELLS: usize = 1 << 15;
/// Most bodies grown for that.
const MOST_GROWN: usize = 8;

/// Seed of that growth: the same scenario always gets the same outlook.
const SEED: u64 = 0;

/// Spread of incomes, relative to their mean, below which they are equal but for rounding.
const EQUAL_INCOMES: f64 = 1e-9;

/// The adult body.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BodyOutlook {
    /// Cells of an adult colony (n).
    pub cells: usize,
    /// Radius of the ball of the body's volume for `clump` and `tree`,
    /// `(3 n d^3 / (4 pi sqrt 2))^(1/3)`; half the length of a `chain`; radius of the sphere on
    /// which the cells of a `shell` lie; um.
    pub radius_um: f64,
    /// Share of cells without an empty neighbour site, in [0, 1].
    pub interior_share: f64,
}

/// What a few bodies of a scenario turned out to be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Bodies {
    /// Share of cells without an empty neighbour site.
    pub(super) interior_share: f64,
    /// Mean income of a cell relative to a fully fed one's.
    pub(super) mean_income: f64,
    /// Share of cells that touch another.
    pub(super) contact_share: f64,
    /// Whether cells of one body earn differently.
    pub(super) incomes_vary: bool,
    /// Bodies grown; 0 where growth has nothing to say on incomes or size.
    pub(super) grown: usize,
    /// Bodies of these that stopped growing short of adult size.
    pub(super) stunted: usize,
    /// Mean number of cells at which those stopped.
    pub(super) stunted_cells: f64,
    /// Bodies of all that lost cells to hunger while they grew.
    pub(super) starving: usize,
    /// Mean number of cells that those lost.
    pub(super) starved_cells: f64,
}

impl Bodies {
    /// Bodies of `settings`. Those of a clump whose cells all are fully fed need not be grown.
    pub(super) fn of(settings: &Settings) -> Self {
        if settings.body.plan == Plan::Clump && !settings.fields().act() {
            return Self::compact(settings.body.adult_cells);
        }
        let cells = settings.body.adult_cells;
        let mut developer = Developer::new(settings.growth_rules());
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(SEED);
        let bodies = (GROWN_CELLS / cells).clamp(1, MOST_GROWN);
        let grown: Vec<_> = (0..bodies).map(|_| developer.develop(1.0, &mut rng)).collect();
        Self::summed_up(&grown)
    }

    fn compact(cells: usize) -> Self {
        Self {
            interior_share: compact_interior_share(cells),
            mean_income: 1.0,
            contact_share: f64::from(u8::from(cells > 1)),
            incomes_vary: false,
            grown: 0,
            stunted: 0,
            stunted_cells: 0.0,
            starving: 0,
            starved_cells: 0.0,
        }
    }

    /// Means over the adults; over the stunted if no body became adult.
    fn summed_up(grown: &[Development]) -> Self {
        let (adult, stunted): (Vec<_>, Vec<_>) =
            grown.iter().partition(|body| matches!(body.ending, Ending::Adult(_)));
        let starving: Vec<_> = grown.iter().filter(|body| body.starved > 0).collect();
        let looked_at = if adult.is_empty() { &stunted } else { &adult };
        let mean = |of: fn(&Development) -> f64, bodies: &[&Development]| {
            (bodies.iter().map(|body| of(body)).sum::<f64>() + 0.0) / bodies.len().max(1) as f64
        };
        Self {
            interior_share: mean(interior_share, looked_at),
            mean_income: mean(Development::mean_income, looked_at),
            contact_share: mean(contact_share, looked_at),
            incomes_vary: looked_at.iter().any(|body| incomes_vary(body)),
            grown: grown.len(),
            stunted: stunted.len(),
            stunted_cells: mean(|body| body.incomes.len() as f64, &stunted),
            starving: starving.len(),
            starved_cells: mean(|body| body.starved as f64, &starving),
        }
    }

    /// The adult body as the outlook tells it.
    pub(super) fn outlook(&self, settings: &Settings) -> BodyOutlook {
        let cells = settings.body.adult_cells;
        let diameter_um = settings.body.cell_diameter_um;
        BodyOutlook {
            cells,
            radius_um: plan_radius_um(settings.body.plan, cells, diameter_um),
            interior_share: self.interior_share,
        }
    }
}

fn interior_share(body: &Development) -> f64 {
    let empty = body.graph.empty();
    let interior = empty.iter().map(|sites| f64::from(u8::from(*sites == 0))).sum::<f64>();
    // A sum of nothing is -0.
    (interior + 0.0) / empty.len().max(1) as f64
}

fn contact_share(body: &Development) -> f64 {
    body.graph.cells_in_contact() as f64 / body.graph.cells().max(1) as f64
}

fn incomes_vary(body: &Development) -> bool {
    let mean = body.mean_income();
    body.incomes.iter().any(|income| (income - mean).abs() > EQUAL_INCOMES * mean)
}

/// Mean share of interior cells over a few compact bodies, whose outermost shells are filled at
/// random; how a body grew does not matter, so they are founded at adult size.
pub(super) fn compact_interior_share(cells: usize) -> f64 {
    let mut growth = Growth::of_clump(cells, cells);
    let pace = Pace { net_income_eu_per_h: 1.0, division_cost_eu: 1.0, division_cv: 0.0 };
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(SEED);
    let mut interior = 0;
    for _ in 0..COMPACT_BODIES {
        growth.grow(&pace, f64::INFINITY, &mut rng);
        interior += growth.exposed().filter(|exposed| !exposed).count();
    }
    interior as f64 / (cells * COMPACT_BODIES) as f64
}
