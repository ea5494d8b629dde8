//! Whether a programme does better than the generalist, on fates that no search has looked at.

use super::luck::Luck;
use super::{PlacedBodies, Sited};
use crate::theory::fitness::{Model, Norm};
use crate::theory::jet::{Jet, Scalar};
use crate::theory::reaction_norm::{Cue, Programme};

/// Standard errors by which a gain must exceed 0 to count.
pub const SURE: f64 = 4.0;

/// How much more a programme leaves than the generalist.
///
/// Where no programme is known to leave more the generalist stands, and its gain is 0. The standard error
/// and whether fates were drawn are then those of the most promising programme: what that one may gain
/// unnoticed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Gain {
    /// Difference in ln R0.
    pub ln_r0: f64,
    /// Standard error of that, from the fates and bodies that were drawn; 0 where nothing was.
    pub standard_error: f64,
    /// Whether it is a mean over drawn fates.
    pub draws_fates: bool,
}

impl Gain {
    /// Whether some programme looked better than the generalist, but chance may explain that.
    #[must_use]
    pub fn is_undecided(&self) -> bool {
        self.ln_r0 <= 0.0 && self.standard_error > 0.0
    }

    /// Whether it exceeds `margin`, and chance.
    #[must_use]
    pub fn exceeds(&self, margin: f64) -> bool {
        // The share of R0 that is gained; all of it where the generalist leaves nothing.
        let gained = -libm::expm1(-self.ln_r0);
        self.ln_r0 > margin && gained > SURE * self.standard_error
    }
}

/// A programme on fates of its own.
pub(in crate::theory) struct Judgement {
    /// R0 on these fates.
    pub(in crate::theory) r0: f64,
    /// What it gains.
    pub(in crate::theory) gain: Gain,
    /// The same where chance may explain that gain: none.
    pub(in crate::theory) no_gain: Gain,
}

/// Differences between programme and generalist in one body.
struct Difference {
    weight: f64,
    mean: f64,
    /// Squared standard error of the mean over fates.
    error_square: f64,
    draws_fates: bool,
}

/// A mean over fates, and the square of its standard error if they are drawn.
struct Mean {
    value: f64,
    error_square: Option<f64>,
}

impl Model {
    /// Slack that the first and the second derivative of ln R0 along a jet's direction want, because
    /// bodies are a sample: [`SURE`] standard errors of each, from the spread between bodies of what
    /// they give. 0 where all bodies are alike.
    pub(in crate::theory) fn slack_of_derivatives(
        &self,
        bodies: &PlacedBodies,
        norm: &Norm<Jet>,
    ) -> [f64; 2] {
        if bodies.drawn < 2.0 || bodies.sited.len() < 2 {
            return [0.0; 2];
        }
        let relative = self.life.relative_income(norm.total_responsiveness());
        let shares = self.shares_of_r0(bodies, norm, relative);
        let mean = |of: &dyn Fn(&Jet) -> f64| -> f64 {
            shares.iter().zip(&bodies.sited).map(|(share, sited)| of(share) * sited.weight).sum()
        };
        let r0 = mean(&|share| share.value);
        [1, 2].map(|order| {
            let derivative = mean(&|share| share.part(order)) / r0;
            let square =
                mean(&|share| ((share.part(order) - derivative * share.value) / r0).powi(2));
            SURE * (square / (bodies.drawn - 1.0)).sqrt()
        })
    }

    /// What `programme` leaves and gains on `generalist` in placed bodies, compared body by body on
    /// fates that no search has seen.
    ///
    /// The error is the larger of two: from the spread between pairs of mirrored fates within bodies,
    /// and from the spread between the bodies drawn, which holds the former.
    pub(in crate::theory) fn judge(
        &self,
        bodies: &PlacedBodies,
        programme: &Programme,
        generalist: &Programme,
    ) -> Judgement {
        let differences: Vec<Difference> = bodies
            .sited
            .iter()
            .enumerate()
            .map(|(rank, sited)| self.difference(bodies, sited, rank, [programme, generalist]))
            .collect();
        let mean: f64 = differences.iter().map(|d| d.weight * d.mean).sum();
        let within: f64 = differences.iter().map(|d| d.weight * d.weight * d.error_square).sum();
        let around_mean = |weight: f64, difference: f64| weight * (difference - mean).powi(2);
        let spread: f64 = differences.iter().map(|d| around_mean(d.weight, d.mean)).sum();
        // Bodies without cells differ by nothing, as those do that never mature.
        let spread = spread + around_mean(bodies.empty, 0.0);
        let between = if bodies.drawn >= 2.0 { spread / (bodies.drawn - 1.0) } else { 0.0 };
        let alike = self.expected_propagules(generalist);
        let r0 = (alike + mean).max(0.0);
        let error = within.max(between).sqrt();
        let ln_r0 = libm::log(r0) - libm::log(alike);
        let draws_fates = differences.iter().any(|difference| difference.draws_fates);
        let gain = Gain { ln_r0, standard_error: error / r0, draws_fates };
        let no_gain = Gain { ln_r0: 0.0, standard_error: error / alike, draws_fates };
        Judgement { r0, gain, no_gain }
    }

    fn difference(
        &self,
        bodies: &PlacedBodies,
        sited: &Sited,
        rank: usize,
        [programme, generalist]: [&Programme; 2],
    ) -> Difference {
        let scale = self.life.income_eu_per_h / self.life.propagule_cost_eu;
        let relative = self.life.relative_income(programme.total_responsiveness());
        let norm = Norm::from(generalist);
        let body = &sited.body;
        let alike = self.placed_output(bodies, body, &sited.luck, &norm, 1.0);
        let alike = scale * self.survival(body, 1.0) * alike;
        let grown = if relative > 0.0 { scale * self.survival(body, relative) } else { 0.0 };
        let norm = Norm::from(programme);
        let mean = if grown > 0.0 {
            self.mean_over_fates(bodies, sited, rank, (&norm, relative))
        } else {
            Mean { value: 0.0, error_square: None }
        };
        Difference {
            weight: sited.weight,
            mean: grown * mean.value - alike,
            error_square: grown * grown * mean.error_square.unwrap_or(0.0),
            draws_fates: mean.error_square.is_some(),
        }
    }

    /// Mean of `B V / (m_ext V + m0)` over fates.
    fn mean_over_fates(
        &self,
        bodies: &PlacedBodies,
        sited: &Sited,
        rank: usize,
        (norm, relative): (&Norm<f64>, f64),
    ) -> Mean {
        let body = &sited.body;
        let luck = Luck::for_judging(body.cells(), rank as u64);
        let sampled = matches!(luck, Luck::Drawn(_))
            && norm.responsiveness[Cue::Noise.index()] != 0.0
            && !self.has_closed_expectation(bodies, body);
        if !sampled {
            let value = self.placed_output(bodies, body, &luck, norm, relative);
            return Mean { value, error_square: None };
        }
        let deeds = self.deeds(body, norm, relative);
        let cost = self.replacement_cost(bodies, body);
        let mut halves = Vec::new();
        luck.for_each(body.cells(), norm.noise_probability, |plus, _| {
            halves.push(self.output_of_fate(body, &deeds, plus, cost));
        });
        let pairs: Vec<f64> =
            halves.chunks_exact(2).map(|pair| 0.5 * (pair[0] + pair[1])).collect();
        let count = pairs.len() as f64;
        let value = pairs.iter().sum::<f64>() / count;
        let squares: f64 = pairs.iter().map(|x| (x - value) * (x - value)).sum();
        Mean { value, error_square: Some(squares / ((count - 1.0) * count)) }
    }
}
