//! Every parameter and every table of the scenario file. To add one: a `static` here, a line in
//! [`ENTRIES`], a line in `read.rs` and one in `resolved.rs`.

use crate::theory::Cue;

use super::super::settings::{Layout, Plan};
use super::domain::{Flag, Text};
use super::numbers::{Real, RealOr, Whole, WordOr};
use super::per_cue::PerCue;
use super::words::{CueList, Words};
use super::{Described, Later, Parameter, Table};

mod returns;

pub(crate) use returns::{FECUNDITY, TaskParameters, VIABILITY};

/// Most cells of all colonies together: about 200 bytes each in memory.
pub(crate) const MOST_CELLS: u64 = 100_000_000;

/// Largest bound of a trait: beyond it the logistic function is 0 or 1 to double precision.
const WIDEST_BOUND: f64 = 50.0;

const BUILT_CUES: &[Cue] = &[Cue::Noise, Cue::Lineage, Cue::Exposure];
const LATER_CUES: &[&str] = &["income", "neighbours"];

/// Parameters of one `Domain`, written with only what differs.
macro_rules! parameter {
    ($path:literal, $unit:literal, $meaning:literal, $domain:expr, $default:expr) => {
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
pub(crate) static LAYOUT: Parameter<Words<Layout>> = parameter!(
    "habitat.layout",
    "none",
    "How propagules spread; mixed: each lands on any site with equal probability",
    Words { words: &[("mixed", Layout::Mixed)], later: &["torus"] },
    Layout::Mixed
);

pub(crate) static PLAN: Parameter<Words<Plan>> = parameter!(
    "body.plan",
    "none",
    "How a daughter cell is placed; clump: the body stays compact",
    Words { words: &[("clump", Plan::Clump)], later: &["chain", "tree", "shell"] },
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
    Real::above_to(0.0, 1e4),
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

pub(crate) static CUES: Parameter<CueList> = parameter!(
    "traits.cues",
    "none",
    "Cues whose responsiveness can evolve; all that are named compete in one population",
    CueList { built: BUILT_CUES, later: LATER_CUES },
    &[Cue::Noise]
);
pub(crate) static BASELINE: Parameter<RealOr> = parameter!(
    "traits.baseline",
    "logit",
    "Where the baseline g0 (logit of a cell's soma share) starts, within +-bound",
    RealOr {
        word: "optimum",
        means: "the generalist's best",
        number: Real::from_to(-WIDEST_BOUND, WIDEST_BOUND),
    },
    WordOr::Word
);
pub(crate) static START: Parameter<PerCue> = parameter!(
    "traits.start",
    "logit",
    "Where each cue's responsiveness starts, within +-bound; 0 where unnamed",
    PerCue {
        built: BUILT_CUES,
        later: LATER_CUES,
        number: Real::from_to(-WIDEST_BOUND, WIDEST_BOUND),
    },
    [0.0; Cue::COUNT]
);
pub(crate) static MUTATION_PROBABILITY: Parameter<Real> = parameter!(
    "traits.mutation_probability",
    "none",
    "Probability that a trait mutates, per trait and propagule",
    Real::from_to(0.0, 1.0),
    0.1
);
pub(crate) static MUTATION_SD: Parameter<Real> = parameter!(
    "traits.mutation_sd",
    "logit",
    "Standard deviation of a mutation's step",
    Real::from_to(0.0, WIDEST_BOUND),
    0.2
);
pub(crate) static BOUND: Parameter<Real> = parameter!(
    "traits.bound",
    "logit",
    "Bound of the baseline and of every responsiveness; mutations are reflected at +-bound",
    Real::above_to(0.0, WIDEST_BOUND),
    12.0
);
pub(crate) static COST_PER_UNIT: Parameter<Real> = parameter!(
    "traits.cost_per_unit",
    "none",
    "Share of a cell's income lost per unit of summed responsiveness",
    Real::from_to(0.0, 1.0),
    0.0
);

pub(crate) static GENERATIONS: Parameter<Whole> = parameter!(
    "run.generations",
    "generations",
    "Length of a replicate",
    Whole { least: 1, most: 10_000_000 },
    1500
);
pub(crate) static CENSUS_EVERY: Parameter<Whole> = parameter!(
    "run.census_every",
    "generations",
    "Time between censuses; at most the length of a replicate",
    Whole { least: 1, most: 10_000_000 },
    10
);
pub(crate) static REPLICATES: Parameter<Whole> = parameter!(
    "run.replicates",
    "replicates",
    "Independent populations, each with random numbers of its own",
    Whole { least: 1, most: 1_000_000 },
    8
);
pub(crate) static STOP_AFTER_ONSET: Parameter<Flag> = parameter!(
    "run.stop_after_onset",
    "none",
    "Whether a replicate ends once its onset is confirmed",
    Flag,
    false
);
pub(crate) static TICK: Parameter<RealOr> = parameter!(
    "run.tick_h",
    "h",
    "Hours over which settlement is batched",
    RealOr {
        word: "auto",
        means: "a 100th of the generalist's generation time",
        number: Real::from_to(1e-6, 1e6),
    },
    WordOr::Word
);

pub(crate) static ONSET_INDEX: Parameter<Real> = parameter!(
    "onset.index",
    "none",
    "Division index D at and above which a population counts as differentiated",
    Real::above_to(0.0, 1.0),
    0.5
);
pub(crate) static SUSTAINED_CENSUSES: Parameter<Whole> = parameter!(
    "onset.sustained_censuses",
    "censuses",
    "Censuses in a row for which D must stay so",
    Whole { least: 1, most: 1_000_000 },
    5
);
pub(crate) static GERM_BELOW: Parameter<Real> = parameter!(
    "onset.germ_below",
    "none",
    "Soma share below which a cell counts as germ; below `soma_above`",
    Real::between(0.0, 1.0),
    0.1
);
pub(crate) static SOMA_ABOVE: Parameter<Real> = parameter!(
    "onset.soma_above",
    "none",
    "Soma share above which a cell counts as soma",
    Real::between(0.0, 1.0),
    0.9
);

/// All parameters, in the order of the scenario file.
pub(crate) static ENTRIES: &[&dyn Described] = &[
    &TITLE,
    &SEED,
    &SITES,
    &LAYOUT,
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

/// All tables, in the order of the scenario file.
pub(crate) static TABLES: &[Table] = &[
    Table { path: "habitat", meaning: "Where colonies live" },
    Table { path: "body", meaning: "The shape and size of an adult colony" },
    Table { path: "life", meaning: "Founding, reproduction and death of a colony" },
    Table {
        path: "budget",
        meaning: "A cell's energy; 1 eu is what it earns in an hour by default",
    },
    Table {
        path: "returns.viability",
        meaning: "What the soma budget yields: viability, which lowers the hazard",
    },
    Table {
        path: "returns.fecundity",
        meaning: "What the germ budget yields: fecundity, which makes propagules",
    },
    Table { path: "traits", meaning: "What is heritable, where it starts and how it mutates" },
    Table { path: "run", meaning: "How long a replicate is, and how many there are" },
    Table { path: "onset", meaning: "When differentiation counts as arisen" },
];

/// Tables and keys of later versions.
pub(crate) static LATER: &[Later] = &[
    Later { path: "support", instead: "without this table, support is pooled over the colony" },
    Later { path: "nutrient", instead: "without this table, every cell is fully fed" },
    Later { path: "waste", instead: "without this table, there is no waste" },
    Later { path: "scan", instead: "change single keys with --set in the meantime" },
    Later {
        path: "habitat.dispersal_sites",
        instead: "in the mixed habitat a propagule lands on any site with equal probability",
    },
];
