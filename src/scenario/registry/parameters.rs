//! Every parameter of the scenario file. To add one: a `static` here or below, a line in
//! [`ENTRIES`], a line in `read.rs` and one in `resolved.rs`.

use super::super::settings::Plan;
use super::domain::{Flag, Text};
use super::numbers::{Real, RealOr, Whole, WordOr};
use super::words::Words;
use super::{Condition, Described, Parameter};

/// Most cells of all colonies together: about 200 bytes each in memory.
pub(crate) const MOST_CELLS: u64 = 100_000_000;

/// Least diameter of a cell, um: far below any cell, and far above where conductances underflow.
const LEAST_DIAMETER_UM: f64 = 1e-3;

/// The words of `habitat.layout`.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum LayoutKind {
    /// Every site is as near as any other.
    Mixed,
    /// Sites lie on a square torus.
    Torus,
}

/// Parameters of one `Domain`, written with only what differs.
macro_rules! parameter {
    ($path:literal, $unit:literal, $meaning:expr, $domain:expr, $default:expr) => {
        Parameter {
            path: $path,
            unit: $unit,
            meaning: $meaning,
            domain: $domain,
            default: $default,
            required: false,
            condition: None,
        }
    };
}

mod fields;
mod returns;
mod run;
mod traits;

pub(crate) use fields::{NUTRIENT, SUPPORT, WASTE};
pub(crate) use returns::{FECUNDITY, TaskParameters, VIABILITY};
pub(crate) use run::{
    CENSUS_EVERY, GENERATIONS, GERM_BELOW, ONSET_INDEX, REPLICATES, SOMA_ABOVE, STOP_AFTER_ONSET,
    SUSTAINED_CENSUSES, TICK,
};
pub(crate) use traits::{
    BASELINE, BOUND, COST_PER_UNIT, CUES, MUTATION_PROBABILITY, MUTATION_SD, START,
};

pub(crate) static TITLE: Parameter<Text> = Parameter {
    required: true,
    ..parameter!(
        "title",
        "none",
        "What the scenario is about, in your words",
        Text { longest: 200 },
        "Lantern algae of the Ostrel ponds"
    )
};
pub(crate) static SEED: Parameter<Whole> = parameter!(
    "seed",
    "none",
    "Seed from which every random number of the scenario derives",
    Whole { least: 0, most: i64::MAX.unsigned_abs() },
    1
);

pub(crate) static SITES: Parameter<Whole> = parameter!(
    "habitat.sites",
    "sites",
    "Places (N), each empty or holding one colony",
    Whole { least: 4, most: 1_000_000 },
    256
);
pub(crate) static LAYOUT: Parameter<Words<LayoutKind>> = parameter!(
    "habitat.layout",
    "none",
    "How propagules spread; mixed: each lands on any site with equal probability; torus: around \
     its parent on a square whose opposite edges join, so that kin compete (sites must then be a \
     square number)",
    Words { words: &[("mixed", LayoutKind::Mixed), ("torus", LayoutKind::Torus)], later: &[] },
    LayoutKind::Mixed
);
pub(crate) static DISPERSAL: Parameter<Real> = Parameter {
    condition: Some(Condition { sibling: "layout", words: &["torus"] }),
    ..parameter!(
        "habitat.dispersal_sites",
        "site widths",
        "Standard deviation of landing along each of the square's two axes",
        Real::above_to(0.0, 1e6),
        1.5
    )
};

pub(crate) static PLAN: Parameter<Words<Plan>> = parameter!(
    "body.plan",
    "none",
    "How a daughter cell is placed; clump: pushed in, so that the body stays compact; chain: next \
     to its mother in a line; tree: only on an empty site beside its mother; shell: as in a clump, \
     and the adult is a hollow ball of one layer",
    Words {
        words: &[
            ("clump", Plan::Clump),
            ("chain", Plan::Chain),
            ("tree", Plan::Tree),
            ("shell", Plan::Shell),
        ],
        later: &[],
    },
    Plan::Clump
);
pub(crate) static ADULT_CELLS: Parameter<Whole> = parameter!(
    "body.adult_cells",
    "cells",
    "Cells of an adult colony (n)",
    Whole { least: 1, most: 100_000 },
    64
);
pub(crate) static CELL_DIAMETER: Parameter<Real> = parameter!(
    "body.cell_diameter_um",
    "um",
    "Distance between the centres of touching cells (d)",
    Real::from_to(LEAST_DIAMETER_UM, 1e4),
    10.0
);

pub(crate) static PROPAGULE_CELLS: Parameter<Whole> = parameter!(
    "life.propagule_cells",
    "cells",
    "Cells of a propagule: 1 is the narrowest bottleneck",
    Whole { least: 1, most: 100_000 },
    1
);
pub(crate) static PROPAGULE_COST: Parameter<Real> = parameter!(
    "life.propagule_cost_eu",
    "eu",
    "Cost of one propagule (c_p)",
    Real::from_to(1e-6, 1e6),
    8.0
);
pub(crate) static ADULT_HAZARD: Parameter<Real> = parameter!(
    "life.adult_hazard_per_h",
    "1/h",
    "Hazard of an adult colony of unit viability (m0); viability V divides it",
    Real::from_to(1e-9, 1e6),
    0.005
);
pub(crate) static EXTRINSIC_HAZARD: Parameter<Real> = parameter!(
    "life.extrinsic_hazard_per_h",
    "1/h",
    "Hazard of an adult colony that no viability lowers (m_ext)",
    Real::from_to(0.0, 1e6),
    0.0
);
pub(crate) static JUVENILE_HAZARD: Parameter<Real> = parameter!(
    "life.juvenile_hazard_per_h",
    "1/h",
    "Hazard of a growing colony",
    Real::from_to(0.0, 1e6),
    0.0
);

pub(crate) static INCOME: Parameter<Real> = parameter!(
    "budget.income_eu_per_h",
    "eu/h",
    "Income of a fully fed cell (e0)",
    Real::above_to(0.0, 1e6),
    1.0
);
pub(crate) static UPKEEP: Parameter<Real> = parameter!(
    "budget.upkeep_eu_per_h",
    "eu/h",
    "What a growing cell spends on itself; below the income",
    Real::from_to(0.0, 1e6),
    0.0
);
pub(crate) static DIVISION_COST: Parameter<Real> = parameter!(
    "budget.division_cost_eu",
    "eu",
    "Reserve at which a growing cell divides",
    Real::above_to(0.0, 1e6),
    8.0
);
pub(crate) static DIVISION_CV: Parameter<Real> = parameter!(
    "budget.division_cv",
    "none",
    "Coefficient of variation of that reserve between divisions; 0: cells divide in rounds",
    Real::from_to(0.0, 1.0),
    0.0
);

pub(crate) static STARVATION: Parameter<Real> = parameter!(
    "budget.starvation_h",
    "h",
    "How long a growing cell lives on an income below its upkeep; 1e6 and more: for ever",
    Real::from_to(0.0, 1e9),
    24.0
);
pub(crate) static TURNOVER: Parameter<Real> = parameter!(
    "budget.turnover_per_h",
    "1/h",
    "Rate at which a cell of an adult dies and is replaced by a neighbour's division, whose cost \
     the colony's germ budget pays; a cell that touches no other lives on and costs nothing; at 10 \
     a cell lives for six minutes, and a run takes time for every replacement",
    Real::from_to(0.0, 10.0),
    0.0
);

/// All parameters, in the order of the scenario file.
pub(crate) static ENTRIES: &[&dyn Described] = &[
    &TITLE,
    &SEED,
    &SITES,
    &LAYOUT,
    &DISPERSAL,
    &PLAN,
    &ADULT_CELLS,
    &CELL_DIAMETER,
    &PROPAGULE_CELLS,
    &PROPAGULE_COST,
    &ADULT_HAZARD,
    &EXTRINSIC_HAZARD,
    &JUVENILE_HAZARD,
    &INCOME,
    &UPKEEP,
    &DIVISION_COST,
    &DIVISION_CV,
    &STARVATION,
    &TURNOVER,
    &VIABILITY.curve,
    &VIABILITY.exponent,
    &VIABILITY.half,
    &VIABILITY.steepness,
    &VIABILITY.points,
    &VIABILITY.surface_effect,
    &VIABILITY.interior_effect,
    &FECUNDITY.curve,
    &FECUNDITY.exponent,
    &FECUNDITY.half,
    &FECUNDITY.steepness,
    &FECUNDITY.points,
    &FECUNDITY.surface_effect,
    &FECUNDITY.interior_effect,
    &SUPPORT.range,
    &SUPPORT.leak,
    &NUTRIENT.bath,
    &NUTRIENT.half_saturation,
    &NUTRIENT.uptake,
    &NUTRIENT.diffusivity,
    &NUTRIENT.exchange,
    &WASTE.release,
    &WASTE.diffusivity,
    &WASTE.toxic,
    &WASTE.exchange,
    &CUES,
    &BASELINE,
    &START,
    &MUTATION_PROBABILITY,
    &MUTATION_SD,
    &BOUND,
    &COST_PER_UNIT,
    &GENERATIONS,
    &CENSUS_EVERY,
    &REPLICATES,
    &STOP_AFTER_ONSET,
    &TICK,
    &ONSET_INDEX,
    &SUSTAINED_CENSUSES,
    &GERM_BELOW,
    &SOMA_ABOVE,
];
