//! Survival curves of right-censored times (Kaplan & Meier 1958).

use super::quantile;
use super::{Interval, Level, StatsError};

/// Survival within this of a half counts as having reached it: products of fractions such as
/// 3/4 x 2/3 may miss 1/2 by a rounding.
const ROUNDING: f64 = 1e-12;

/// One subject: when it was last seen, and whether the event happened then.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Observation {
    /// Time of the event or of censoring, any unit, finite and at least 0.
    pub time: f64,
    /// True for an event, false for censoring.
    pub event: bool,
}

/// One drop of the curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Step {
    /// Time of the events.
    pub time: f64,
    /// Subjects under observation just before.
    pub at_risk: usize,
    /// Events at this time.
    pub events: usize,
    /// Probability to be free of the event beyond this time.
    pub survival: f64,
    /// Greenwood's standard error of `survival`; 0 once survival is 0.
    pub standard_error: f64,
    /// Standard error of `ln(-ln survival)`; `None` where survival is 0.
    log_log_error: Option<f64>,
}

/// A median time with what is known about it; `None` where the curve does not reach it.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct MedianTime {
    /// First time at which survival is at most 1/2.
    pub median: Option<f64>,
    /// Lower limit.
    pub low: Option<f64>,
    /// Upper limit.
    pub high: Option<f64>,
}

/// The product-limit estimate of a survival curve.
#[derive(Debug, Clone, PartialEq)]
pub struct KaplanMeier {
    steps: Vec<Step>,
}

impl KaplanMeier {
    /// The curve of `observations`, in any order; without any it stays at 1.
    ///
    /// `S(t) = prod_{t_i <= t} (1 - d_i / n_i)`; at one time, events precede censorings, so a
    /// subject censored at t is at risk at t. Greenwood's variance (Greenwood 1926) is
    /// `S^2 sum d_i / (n_i (n_i - d_i))`.
    ///
    /// # Errors
    /// [`StatsError::Time`] names the first time that is negative, NaN or infinite.
    pub fn fit(observations: &[Observation]) -> Result<Self, StatsError> {
        let bad = |o: &Observation| !(o.time.is_finite() && o.time >= 0.0);
        if let Some(index) = observations.iter().position(bad) {
            return Err(StatsError::Time { index, value: observations[index].time });
        }
        let mut sorted = observations.to_vec();
        // A time of -0 is 0, though the total order tells them apart.
        for observation in &mut sorted {
            observation.time += 0.0;
        }
        sorted.sort_by(|a, b| a.time.total_cmp(&b.time));
        Ok(Self { steps: drops(&sorted) })
    }

    /// The drops of the curve, by time.
    #[must_use]
    pub fn steps(&self) -> &[Step] {
        &self.steps
    }

    /// Probability to be free of the event beyond `time`; 1 before the first event.
    #[must_use]
    pub fn survival(&self, time: f64) -> f64 {
        self.step_at(time).map_or(1.0, |step| step.survival)
    }

    /// Plain pointwise interval `S -+ z SE`, cut to [0, 1]; [1, 1] before the first event.
    #[must_use]
    pub fn plain_interval(&self, time: f64, level: Level) -> Interval {
        let Some(step) = self.step_at(time) else { return Interval { low: 1.0, high: 1.0 } };
        let half = quantile::normal_two_sided(level) * step.standard_error;
        Interval { low: step.survival - half, high: step.survival + half }.within(0.0, 1.0)
    }

    /// Pointwise interval by the log-log transform, `S^exp(-+z SE(ln(-ln S)))` (Kalbfleisch &
    /// Prentice 1980); [1, 1] before the first event, `None` once survival is 0.
    #[must_use]
    pub fn log_log_interval(&self, time: f64, level: Level) -> Option<Interval> {
        match self.step_at(time) {
            None => Some(Interval { low: 1.0, high: 1.0 }),
            Some(step) => step.log_log_interval(quantile::normal_two_sided(level)),
        }
    }

    /// The median time and its interval (Brookmeyer & Crowley 1982, on the log-log scale).
    ///
    /// The limits are the first times at which the lower and the upper limit of survival are at
    /// most 1/2. Once survival is 0 the transform is undefined: the lower limit then counts as 0,
    /// the upper as unknown, so a curve that drops from above 1/2 to 0 leaves `high` at `None`.
    #[must_use]
    pub fn median(&self, level: Level) -> MedianTime {
        let z = quantile::normal_two_sided(level);
        let first = |limit: &dyn Fn(&Step) -> f64| {
            self.steps.iter().find(|step| limit(step) <= 0.5 + ROUNDING).map(|step| step.time)
        };
        MedianTime {
            median: first(&|step| step.survival),
            low: first(&|step| step.log_log_interval(z).map_or(0.0, |interval| interval.low)),
            high: first(&|step| step.log_log_interval(z).map_or(1.0, |interval| interval.high)),
        }
    }

    fn step_at(&self, time: f64) -> Option<&Step> {
        self.steps.iter().take_while(|step| step.time <= time).last()
    }
}

impl Step {
    fn log_log_interval(&self, z: f64) -> Option<Interval> {
        let half = z * self.log_log_error?;
        let limit = |shift: f64| libm::pow(self.survival, libm::exp(shift));
        Some(Interval { low: limit(half), high: limit(-half) })
    }
}

/// The drops of the curve through observations sorted by time.
fn drops(sorted: &[Observation]) -> Vec<Step> {
    let mut steps = Vec::new();
    let (mut survival, mut greenwood) = (1.0, 0.0);
    let mut at_risk = sorted.len();
    for tied in sorted.chunk_by(|a, b| a.time.total_cmp(&b.time).is_eq()) {
        let events = tied.iter().filter(|observation| observation.event).count();
        if events > 0 {
            let (d, n) = (events as f64, at_risk as f64);
            survival *= (n - d) / n;
            greenwood += d / (n * (n - d));
            steps.push(step(tied[0].time, at_risk, events, survival, greenwood));
        }
        at_risk -= tied.len();
    }
    steps
}

fn step(time: f64, at_risk: usize, events: usize, survival: f64, greenwood: f64) -> Step {
    // With everyone gone `greenwood` is infinite, and the curve is known to end here.
    let gone = events == at_risk;
    Step {
        time,
        at_risk,
        events,
        survival,
        standard_error: if gone { 0.0 } else { survival * greenwood.sqrt() },
        log_log_error: (!gone).then(|| greenwood.sqrt() / libm::log(survival).abs()),
    }
}
