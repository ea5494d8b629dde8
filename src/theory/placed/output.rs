//! Expected reproduction of placed bodies.

use super::luck::Luck;
use super::spread::{Care, supports};
use super::{Body, PlacedBodies, Sited, SitedKind};
use crate::theory::fitness::{Model, Norm};
use crate::theory::jet::Scalar;
use crate::theory::reaction_norm::Cue;

/// What cells of one kind and one fate do.
#[derive(Debug, Clone, Copy)]
pub(super) struct Deed<S> {
    /// What they put out of the viability task's product (v).
    pub(super) output: S,
    /// Their germ budget over e0 (gamma).
    pub(super) germ: S,
    /// What all of that budget yields in fecundity (b).
    births: S,
    exposed: bool,
}

impl<S: Scalar> Deed<S> {
    /// The same without derivatives.
    pub(super) fn value(&self) -> Deed<f64> {
        Deed {
            output: self.output.value(),
            germ: self.germ.value(),
            births: self.births.value(),
            exposed: self.exposed,
        }
    }
}

/// What a body's cells do by kind, when their noise cue reads +1 and -1.
pub(super) struct Deeds<S> {
    pub(super) plus: Vec<Deed<S>>,
    pub(super) minus: Vec<Deed<S>>,
}

/// A body's viability V and fecundity B.
#[derive(Debug, Clone, Copy)]
pub(super) struct Vitals<S> {
    pub(super) viability: S,
    pub(super) fecundity: S,
}

impl Model {
    /// R0 of a reaction norm in placed bodies, `relative` being a cell's income after the tax on
    /// responsiveness.
    ///
    /// `R0 = sum over bodies of weight exp(-m_j T) E[B V / (m_ext V + m0)] e0 / c_p`, where bodies that
    /// never mature add nothing.
    pub(in crate::theory) fn placed_r0<S: Scalar>(
        &self,
        bodies: &PlacedBodies,
        norm: &Norm<S>,
        relative: S,
    ) -> S {
        self.shares_of_r0(bodies, norm, relative)
            .into_iter()
            .zip(&bodies.sited)
            .fold(S::constant(0.0), |sum, (r0, sited)| sum + r0 * sited.weight)
    }

    /// What each body would give for R0 if all were like it.
    pub(super) fn shares_of_r0<S: Scalar>(
        &self,
        bodies: &PlacedBodies,
        norm: &Norm<S>,
        relative: S,
    ) -> Vec<S> {
        let scale = self.life.income_eu_per_h / self.life.propagule_cost_eu;
        let share = |sited: &Sited| {
            let grown = self.survival(&sited.body, relative);
            if grown.value() <= 0.0 {
                return S::constant(0.0);
            }
            let adult = self.placed_output(bodies, &sited.body, &sited.luck, norm, relative);
            grown * adult * scale
        };
        bodies.sited.iter().map(share).collect()
    }

    /// Probability that a propagule becomes this body, `exp(-m_j T)`; 0 if it never matures.
    pub(super) fn survival<S: Scalar>(&self, body: &Body, relative: S) -> S {
        match self.taxed_growth_h(body, relative) {
            Some(hours) => (hours * -self.life.juvenile_hazard_per_h).exp(),
            None => S::constant(0.0),
        }
    }

    /// Hours of growth (T) where cells keep the share `relative` of their incomes; `None`: never adult.
    ///
    /// Without the tax a cell that earns the share f of e0 saves `f e0 - u`, with it `relative f e0 - u`,
    /// and T is the inverse ratio times as long. In a body whose cells are all fully fed f is 1 and that
    /// is exact, however divisions come. Elsewhere f is what cells earn on average if T is that of
    /// divisions in rounds: exact where divisions do come in rounds of cells that earn alike, or there is
    /// no upkeep; otherwise an estimate. Where propagules divide no more, T is how long they wait for
    /// hungry cells to die. Whoever starves does so with and without the tax, and as soon.
    fn taxed_growth_h<S: Scalar>(&self, body: &Body, relative: S) -> Option<S> {
        let full_h = body.growth_h?;
        let spent = self.life.rounds_cost_eu();
        if full_h <= 0.0 || spent == 0.0 {
            return Some(S::constant(full_h));
        }
        let upkeep = self.life.upkeep_eu_per_h;
        let saved_untaxed =
            if body.is_fully_fed() { self.life.income_eu_per_h - upkeep } else { spent / full_h };
        let saved = relative * (saved_untaxed + upkeep) - S::constant(upkeep);
        (saved.value() > 0.0).then(|| S::constant(saved_untaxed) / saved * full_h)
    }

    /// `E[B V / (m_ext V + m0)]` over the random fates of a body's cells, h.
    pub(super) fn placed_output<S: Scalar>(
        &self,
        bodies: &PlacedBodies,
        body: &Body,
        luck: &Luck,
        norm: &Norm<S>,
        relative: S,
    ) -> S {
        let noise = norm.responsiveness[Cue::Noise.index()];
        let cost = self.replacement_cost(bodies, body);
        if norm.is_deterministic() {
            return self.output_of_alike(body, norm, relative, cost);
        }
        if noise.value() == 0.0 {
            // The cue's mean is 0 and its draws are independent: at second order in the
            // responsiveness only the second derivatives by each cell's own logit count.
            let still = norm.without_noise();
            let p = norm.noise_probability;
            let bend = self.curvature_by_own_logits(body, &still.values(), relative.value(), cost);
            let alike = self.output_of_alike(body, &still, relative, cost);
            return alike + noise * noise * (2.0 * p * (1.0 - p) * bend);
        }
        let deeds = self.deeds(body, norm, relative);
        if self.has_closed_expectation(bodies, body) {
            return self.pooled_expectation(body, &deeds, norm.noise_probability);
        }
        let mut expected = S::constant(0.0);
        luck.for_each(body.cells(), norm.noise_probability, |plus, weight| {
            expected = expected + self.output_of_fate(body, &deeds, plus, cost) * weight;
        });
        expected
    }

    /// Whether the expectation over fates is known in closed form: `B V` is then a sum over pairs of
    /// cells.
    pub(super) fn has_closed_expectation(&self, bodies: &PlacedBodies, body: &Body) -> bool {
        body.spread.is_none()
            && self.life.extrinsic_hazard_per_h == 0.0
            && self.replacement_cost(bodies, body) == 0.0
    }

    /// `B V / (m_ext V + m0)` of a body without random fates.
    fn output_of_alike<S: Scalar>(&self, body: &Body, norm: &Norm<S>, relative: S, cost: f64) -> S {
        let deeds = self.certain_deeds(body, norm, relative);
        let vitals =
            self.vitals(body, |cell| deeds[body.kind_of[cell] as usize], cost, Care::Exact);
        self.lifetime_output(vitals.viability, vitals.fecundity)
    }

    /// The same of a body some cells of which read +1.
    pub(super) fn output_of_fate<S: Scalar>(
        &self,
        body: &Body,
        deeds: &Deeds<S>,
        plus: &[bool],
        cost: f64,
    ) -> S {
        let deed = |cell: usize| {
            let deeds = if plus[cell] { &deeds.plus } else { &deeds.minus };
            deeds[body.kind_of[cell] as usize]
        };
        let vitals = self.vitals(body, deed, cost, Care::Quick);
        self.lifetime_output(vitals.viability, vitals.fecundity)
    }

    /// Expectation of `B V / m0` in closed form, where support is pooled: `E[B] E[V] + Cov`.
    fn pooled_expectation<S: Scalar>(&self, body: &Body, deeds: &Deeds<S>, p: f64) -> S {
        let zero = S::constant(0.0);
        let (mut v, mut b, mut luck) = (zero, zero, zero);
        for ((kind, plus), minus) in body.kinds.iter().zip(&deeds.plus).zip(&deeds.minus) {
            v = v + (plus.output * p + minus.output * (1.0 - p)) * kind.count;
            b = b + (plus.births * p + minus.births * (1.0 - p)) * kind.count;
            let (dv, db) = (plus.output - minus.output, plus.births - minus.births);
            luck = luck + dv * db * (p * (1.0 - p) * kind.count);
        }
        let cells = body.cells() as f64;
        (b * v + luck) * (cells * self.life.adult_hazard_per_h).recip()
    }

    /// Viability and fecundity of a body whose cells do `deed`.
    pub(super) fn vitals<S: Scalar>(
        &self,
        body: &Body,
        deed: impl Fn(usize) -> Deed<S>,
        cost: f64,
        care: Care,
    ) -> Vitals<S> {
        let zero = S::constant(0.0);
        let cells = 0..body.cells();
        let left = (cost > 0.0).then(|| {
            let germ = cells.clone().fold(zero, |sum, cell| sum + deed(cell).germ);
            share_left(germ, cost)
        });
        let births = |deed: Deed<S>| match left {
            None => deed.births,
            Some(left) => self.births(deed.germ * left, deed.exposed),
        };
        let fecundity = cells.clone().fold(zero, |sum, cell| sum + births(deed(cell)));
        let count = body.cells() as f64;
        let viability = match &body.spread {
            None => cells.fold(zero, |sum, cell| sum + deed(cell).output) * count.recip(),
            Some(spread) => {
                let output: Vec<S> = cells.map(|cell| deed(cell).output).collect();
                harmonic_mean(&supports(spread.as_ref(), &output, care))
            }
        };
        Vitals { viability, fecundity }
    }

    /// What a germ budget (over e0) yields in fecundity.
    pub(super) fn births<S: Scalar>(&self, germ: S, exposed: bool) -> S {
        self.fecundity.curve.at(germ) * self.fecundity.effect(exposed)
    }

    /// What cells of each kind do when luck plays no part.
    pub(super) fn certain_deeds<S: Scalar>(
        &self,
        body: &Body,
        norm: &Norm<S>,
        relative: S,
    ) -> Vec<Deed<S>> {
        let deed = |kind: &SitedKind| self.deed(kind, relative, norm.logit_of(&kind.cues));
        body.kinds.iter().map(deed).collect()
    }

    pub(super) fn deeds<S: Scalar>(&self, body: &Body, norm: &Norm<S>, relative: S) -> Deeds<S> {
        let steps = norm.noise_steps();
        let [plus, minus] = steps.map(|step| {
            let deed =
                |kind: &SitedKind| self.deed(kind, relative, norm.logit_of(&kind.cues) + step);
            body.kinds.iter().map(deed).collect()
        });
        Deeds { plus, minus }
    }

    /// What a cell does whose soma share has that logit.
    pub(super) fn deed<S: Scalar>(&self, kind: &SitedKind, relative: S, logit: S) -> Deed<S> {
        let income = relative * kind.income;
        let effect = self.viability.effect(kind.exposed);
        let germ = income * (-logit).sigmoid();
        Deed {
            output: self.viability.curve.at(income * logit.sigmoid()) * effect,
            germ,
            births: self.births(germ, kind.exposed),
            exposed: kind.exposed,
        }
    }

    /// What an adult's replacements cost it, over e0: `tau n_c c_div / e0`, `n_c` being its cells that
    /// touch another. Nobody replaces the others, so that a body of one cell pays nothing.
    pub(super) fn replacement_cost(&self, bodies: &PlacedBodies, body: &Body) -> f64 {
        let per_cell = bodies.turnover_per_h * self.life.division_cost_eu;
        per_cell * body.cells_in_contact as f64 / self.life.income_eu_per_h
    }

    /// Viability of a body of generalists.
    pub(in crate::theory) fn placed_viability(
        &self,
        bodies: &PlacedBodies,
        norm: &Norm<f64>,
    ) -> f64 {
        let viability = |body: &Body| {
            let deeds = self.certain_deeds(body, norm, 1.0);
            self.vitals(body, |cell| deeds[body.kind_of[cell] as usize], 0.0, Care::Exact).viability
        };
        bodies.mean_of_mature(viability).unwrap_or(0.0)
    }
}

/// Share of every germ budget that replacements leave: `max(0, 1 - cost / sum_j gamma_j)`.
pub(super) fn share_left<S: Scalar>(germ: S, cost: f64) -> S {
    if germ.value() > cost { S::constant(1.0) - S::constant(cost) / germ } else { S::constant(0.0) }
}

/// `n / sum_i (1 / S_i)`; 0 if any `S_i` is.
fn harmonic_mean<S: Scalar>(support: &[S]) -> S {
    if support.iter().any(|s| !(s.value() > 0.0 && s.value().recip().is_finite())) {
        return S::constant(0.0);
    }
    let zero = S::constant(0.0);
    let sum = support.iter().fold(zero, |sum, s| sum + S::constant(1.0) / *s);
    S::constant(support.len() as f64) / sum
}
