//! What the outlook needs to know from theory.

use crate::scenario::Settings;
use crate::study::prediction::model;
use crate::theory::selection::Verdict;
use crate::theory::{Cue, CueSelection};

/// What theory says of the generalist: where it is best, what it leaves, and how selection
/// pulls at each cue's responsiveness there.
#[derive(Debug, Clone, PartialEq)]
pub struct Selection {
    /// Soma share of the best generalist, in [0, 1].
    pub soma_share: f64,
    /// Propagules that a founder of the best generalist leaves (R0).
    pub r0: f64,
    /// From founding to adulthood, h; infinite where nothing grows up.
    pub growth_h: f64,
    /// Mean age of a parent at the birth of a propagule, h; infinite where the generalist cannot
    /// grow up or never dies.
    pub generation_h: f64,
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
    /// Gain in ln R0 of a mutant one step `sd` further from the generalist than `start`,
    /// `(|gradient| + max(curvature, 0) start) sd + max(curvature, 0) sd^2 / 2`.
    #[must_use]
    pub fn advantage(&self, start: f64, sd: f64) -> f64 {
        let curvature = self.curvature.max(0.0);
        (self.gradient.abs() + curvature * start) * sd + curvature * sd * sd / 2.0
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

impl Selection {
    /// What theory says of the generalist of `settings`.
    #[must_use]
    pub fn of(settings: &Settings) -> Self {
        let model = model(settings);
        let generalist = model.generalist();
        let pulls = model.selection_at(&generalist).iter().map(pull).collect();
        Self {
            soma_share: generalist.soma_share,
            r0: generalist.r0,
            growth_h: model.growth_h().unwrap_or(f64::INFINITY),
            generation_h: model.generation_h(&generalist),
            pulls,
        }
    }
}

fn pull(selection: &CueSelection) -> Pull {
    let favoured =
        matches!(selection.verdict(), Verdict::FavouredAtOnce | Verdict::FavouredByDisruption);
    let CueSelection { cue, gradient, curvature, .. } = *selection;
    Pull { cue, gradient, curvature, favoured }
}
