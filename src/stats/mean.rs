//! Means with Student t intervals.

use super::quantile;
use super::{Interval, Level, StatsError};

/// A mean and what is known about it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MeanEstimate {
    /// How many values it rests on.
    pub n: usize,
    /// The arithmetic mean.
    pub mean: f64,
    /// `mean -+ t sd / sqrt(n)`, t of n - 1 degrees of freedom (Student 1908); `None` for one
    /// value, which says nothing about spread.
    pub interval: Option<Interval>,
}

impl MeanEstimate {
    /// The mean of `values` with its interval; `None` without values.
    ///
    /// # Errors
    /// [`StatsError::NotFinite`] names the first value that is NaN or infinite.
    pub fn of(values: &[f64], level: Level) -> Result<Option<Self>, StatsError> {
        if let Some(index) = values.iter().position(|value| !value.is_finite()) {
            return Err(StatsError::NotFinite { index, value: values[index] });
        }
        let n = values.len();
        if n == 0 {
            return Ok(None);
        }
        let count = n as f64;
        let mean = values.iter().sum::<f64>() / count;
        let interval = (n > 1).then(|| {
            let squares: f64 = values.iter().map(|value| (value - mean) * (value - mean)).sum();
            let freedom = count - 1.0;
            let half =
                quantile::student_two_sided(level, freedom) * (squares / freedom / count).sqrt();
            Interval { low: mean - half, high: mean + half }
        });
        Ok(Some(Self { n, mean, interval }))
    }
}
