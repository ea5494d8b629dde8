//! What the outlook needs to know from theory.

use crate::scenario::Settings;
use crate::theory::Cue;
use crate::theory::reaction_norm::sigmoid;

/// What theory says of the generalist: where it is best, what it leaves, and how selection
/// pulls at each cue's responsiveness there.
#[derive(Debug, Clone, PartialEq)]
pub struct Selection {
    /// Soma share of the best generalist, in [0, 1].
    pub soma_share: f64,
    /// Propagules that a founder of the best generalist leaves (R0).
    pub r0: f64,
    /// The pull on each enabled cue.
    pub pulls: Vec<Pull>,
}

/// Selection on a cue's responsiveness g at the generalist.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pull {
    /// The cue.
    pub cue: Cue,
    /// First derivative of ln R0 by g.
    pub gradient: f64,
    /// Second derivative of ln R0 by g.
    pub curvature: f64,
    /// Whether theory finds the cue favoured at the generalist.
    pub favoured: bool,
}

impl Pull {
    /// Advantage of a mutant one step of standard deviation `sd` away from the generalist,
    /// `|gradient| sd + max(curvature, 0) sd^2 / 2`.
    #[must_use]
    pub fn advantage(&self, sd: f64) -> f64 {
        self.gradient.abs() * sd + self.curvature.max(0.0) * sd * sd / 2.0
    }

    /// Generations in which a responsiveness grows from `start` to `goal` at the rate
    /// `dg/dt = rate * d ln R0/dg` (Dieckmann & Law 1996, with `rate = N mu sd^2 / 2` per
    /// generation), the derivative taken as `|gradient| + curvature g`.
    #[must_use]
    pub fn generations(&self, start: f64, goal: f64, rate: f64) -> f64 {
        let (slope, curvature) = (self.gradient.abs(), self.curvature.max(0.0));
        if start >= goal {
            0.0
        } else if curvature * goal > 1e-9 * slope {
            let gain = (slope + curvature * goal) / (slope + curvature * start);
            libm::log(gain) / (rate * curvature)
        } else {
            (goal - start) / (rate * slope)
        }
    }
}

/// Steps of the grid on which the best generalist is looked for.
const GRID: u32 = 400;

impl Selection {
    /// The best generalist of `settings`, its soma share within `sigmoid(+-bound)`.
    ///
    /// The pulls are those of theory's prediction, which is not joined yet: they are empty, so
    /// neither drift nor lack of time is warned of.
    #[must_use]
    pub fn of(settings: &Settings) -> Self {
        let r0 = |logit: f64| super::generalist_r0(settings, sigmoid(logit));
        let bound = settings.traits.bound;
        let at = |step: u32| bound * (2.0 * f64::from(step) / f64::from(GRID) - 1.0);
        let best = (0..=GRID).max_by(|a, b| r0(at(*a)).total_cmp(&r0(at(*b)))).unwrap_or(GRID / 2);
        let width = 2.0 * bound / f64::from(GRID);
        let logit = golden_maximum(r0, at(best) - width, at(best) + width);
        let logit = logit.clamp(-bound, bound);
        Self { soma_share: sigmoid(logit), r0: r0(logit), pulls: Vec::new() }
    }
}

/// Where `f`, which has one maximum between `low` and `high`, is greatest.
fn golden_maximum(f: impl Fn(f64) -> f64, mut low: f64, mut high: f64) -> f64 {
    let part = 2.0 / (1.0 + libm::sqrt(5.0));
    for _ in 0..80 {
        let (a, b) = (high - part * (high - low), low + part * (high - low));
        if f(a) < f(b) { low = a } else { high = b }
    }
    f64::midpoint(low, high)
}
