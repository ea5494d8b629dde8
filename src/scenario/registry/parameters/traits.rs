//! The parameters of `[traits]`.

use super::super::Parameter;
use super::super::per_cue::PerCue;
use super::super::words::CueList;
use super::{Real, RealOr, WordOr};
use crate::theory::Cue;

/// Largest bound of a trait: beyond it the logistic function is 0 or 1 to double precision.
const WIDEST_BOUND: f64 = 50.0;

const BUILT_CUES: &[Cue] = &[Cue::Noise, Cue::Lineage, Cue::Exposure, Cue::Income];
const LATER_CUES: &[&str] = &["neighbours"];

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
