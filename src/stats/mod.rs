//! Statistics of finished runs: intervals, survival curves, division-of-labour indices.
//!
//! Nothing here knows of the model. All functions are pure and give the same bits on every
//! machine: transcendental functions come from `libm`, sums run in the order of the input.

pub mod binomial;
pub mod division_of_labour;
pub mod mean;
pub mod quantile;
pub mod survival;

use serde::{Deserialize, Serialize};

pub use binomial::{clopper_pearson, wilson};
pub use division_of_labour::MutualEntropy;
pub use mean::MeanEstimate;
pub use survival::{KaplanMeier, MedianTime, Observation};

/// A closed interval.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Interval {
    /// Lower limit.
    pub low: f64,
    /// Upper limit.
    pub high: f64,
}

impl Interval {
    /// The part of the interval that lies within `low..=high`.
    #[must_use]
    pub fn within(self, low: f64, high: f64) -> Self {
        Self { low: self.low.clamp(low, high), high: self.high.clamp(low, high) }
    }
}

/// Confidence level of a two-sided interval, strictly between 0 and 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Level(f64);

impl Level {
    /// The level of every interval in the reports.
    pub const P95: Self = Self(0.95);

    /// The level `value`.
    ///
    /// # Errors
    /// [`StatsError::Level`] unless `0 < value < 1`.
    pub fn new(value: f64) -> Result<Self, StatsError> {
        if value > 0.0 && value < 1.0 { Ok(Self(value)) } else { Err(StatsError::Level { value }) }
    }

    /// The level as a probability.
    #[must_use]
    pub const fn value(self) -> f64 {
        self.0
    }

    /// Probability left in each tail, `(1 - level) / 2`.
    #[must_use]
    pub const fn tail(self) -> f64 {
        (1.0 - self.0) / 2.0
    }
}

/// What makes a statistic impossible to compute.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum StatsError {
    /// A confidence level outside (0, 1).
    #[error("confidence level {value} must lie strictly between 0 and 1, such as 0.95")]
    Level {
        /// The level given.
        value: f64,
    },
    /// More successes than trials.
    #[error("{successes} successes in {trials} trials: there cannot be more successes than trials")]
    Successes {
        /// Successes given.
        successes: u64,
        /// Trials given.
        trials: u64,
    },
    /// A value that is NaN or infinite.
    #[error("value {index} is {value}: only finite numbers can be averaged; leave it out")]
    NotFinite {
        /// Place in the input, from 0.
        index: usize,
        /// The value given.
        value: f64,
    },
    /// A survival time that is negative, NaN or infinite.
    #[error("survival time {index} is {value}: it must be finite and at least 0")]
    Time {
        /// Place in the input, from 0.
        index: usize,
        /// The time given.
        value: f64,
    },
    /// An entry of an individuals-by-tasks table that is negative, NaN or infinite.
    #[error("work of individual {row} at task {column} is {value}: it must be finite, at least 0")]
    Work {
        /// Row (individual), from 0.
        row: usize,
        /// Column (task), from 0.
        column: usize,
        /// The entry given.
        value: f64,
    },
}
