//! The parameters of `[run]` and `[onset]`.

use super::super::Parameter;
use super::{Flag, Real, RealOr, Whole, WordOr};

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
