//! The reaction norm: how one genotype makes the cells of a body differ.
//!
//! `z_i = sigmoid(g0 + sum_k g_k cue_k(i))`, with z the soma share of cell i.

use std::fmt;

use serde::{Deserialize, Serialize};

/// What a cell can read about its place, its descent or its luck.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Cue {
    /// An independent random draw per cell: +1 with probability `sigmoid(bias)`, else -1.
    Noise,
    /// The label of the cell's last division: mother -1, daughter +1, founder 0.
    Lineage,
    /// 1 for a surface cell, 0 for an interior cell.
    Exposure,
    /// Relative deviation of the cell's income from the body's mean.
    Income,
}

impl Cue {
    /// Number of cues there are.
    pub const COUNT: usize = 4;
    /// All cues, in the order of their traits and of the columns of every table.
    pub const ALL: [Self; Self::COUNT] = [Self::Noise, Self::Lineage, Self::Exposure, Self::Income];

    /// The cue's place in arrays over cues.
    #[must_use]
    pub const fn index(self) -> usize {
        self as usize
    }

    /// The cue's name in scenario files, tables and reports.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Noise => "noise",
            Self::Lineage => "lineage",
            Self::Exposure => "exposure",
            Self::Income => "income",
        }
    }

    /// The cue of that name, if there is one.
    #[must_use]
    pub fn from_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|cue| cue.name() == name)
    }
}

impl fmt::Display for Cue {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// A set of cues: those whose responsiveness can evolve in a scenario.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct CueSet(u8);

impl CueSet {
    /// The set without any cue.
    pub const EMPTY: Self = Self(0);

    /// The same set with `cue` in it.
    #[must_use]
    pub const fn with(self, cue: Cue) -> Self {
        Self(self.0 | 1 << cue.index())
    }

    /// Whether `cue` is in the set.
    #[must_use]
    pub const fn contains(self, cue: Cue) -> bool {
        self.0 >> cue.index() & 1 == 1
    }

    /// Whether no cue is in the set.
    #[must_use]
    pub const fn is_empty(self) -> bool {
        self.0 == 0
    }

    /// The cues of the set, in the order of [`Cue::ALL`].
    pub fn iter(self) -> impl Iterator<Item = Cue> {
        Cue::ALL.into_iter().filter(move |cue| self.contains(*cue))
    }
}

impl FromIterator<Cue> for CueSet {
    fn from_iter<I: IntoIterator<Item = Cue>>(cues: I) -> Self {
        cues.into_iter().fold(Self::EMPTY, Self::with)
    }
}

/// Bound of the noise cue's bias trait (logit of the probability of +1).
pub const NOISE_BIAS_BOUND: f64 = 4.0;

/// The heritable developmental programme: what a propagule inherits.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Programme {
    /// Baseline g0: logit of the soma share of a cell whose cues are all at their mean.
    pub baseline: f64,
    /// Responsiveness `g_k` per cue, in the order of [`Cue::ALL`]; 0 for a cue not in use.
    pub responsiveness: [f64; Cue::COUNT],
    /// Logit of the probability that the noise cue reads +1.
    pub noise_bias: f64,
}

impl Programme {
    /// A programme whose cells are all alike, with baseline `g0`.
    #[must_use]
    pub const fn generalist(baseline: f64) -> Self {
        Self { baseline, responsiveness: [0.0; Cue::COUNT], noise_bias: 0.0 }
    }

    /// Soma share `z = sigmoid(g0 + sum_k g_k cue_k)` of a cell that reads `cues` (centred).
    #[must_use]
    pub fn soma_share(&self, cues: &[f64; Cue::COUNT]) -> f64 {
        sigmoid(self.soma_logit(cues))
    }

    /// Logit of the soma share of a cell that reads `cues` (centred).
    #[must_use]
    pub fn soma_logit(&self, cues: &[f64; Cue::COUNT]) -> f64 {
        self.responsiveness.iter().zip(cues).fold(self.baseline, |sum, (g, cue)| sum + g * cue)
    }

    /// Probability that the noise cue reads +1.
    #[must_use]
    pub fn noise_probability(&self) -> f64 {
        sigmoid(self.noise_bias)
    }

    /// Summed responsiveness `sum_k |g_k|`, which `traits.cost_per_unit` taxes.
    #[must_use]
    pub fn total_responsiveness(&self) -> f64 {
        self.responsiveness.iter().map(|g| g.abs()).sum()
    }
}

/// The logistic function `1 / (1 + exp(-x))`, the same on every machine.
#[must_use]
pub fn sigmoid(x: f64) -> f64 {
    if x >= 0.0 {
        1.0 / (1.0 + libm::exp(-x))
    } else {
        let e = libm::exp(x);
        e / (1.0 + e)
    }
}

/// Inverse of [`sigmoid`]: `ln(p / (1 - p))`, infinite at 0 and 1.
#[must_use]
pub fn logit(p: f64) -> f64 {
    libm::log(p) - libm::log1p(-p)
}
