//! Fitness: the expected number of propagules that a founder leaves.
//!
//! `R0 = P(reach adulthood) E[ F / (c_p m) ]`, with `F = e0 sum_i b_i` the growth rate of the
//! propagule stock and `m = m_ext + m0 / V` the adult hazard (Mylius & Diekmann 1995, Oikos
//! 74:218). Bodies are known by how many cells of each kind they have, all fully fed and with pooled
//! support, `V = mean_i v_i`; or cell by cell ([`super::placed`]).

use super::body::{CellKind, Composition, Compositions, average, joined};
use super::jet::Scalar;
use super::life_history::LifeHistory;
use super::placed::PlacedBodies;
use super::quadrature::{Rule, for_each_combination};
use super::reaction_norm::{Cue, CueSet, NOISE_BIAS_BOUND, Programme};
use super::returns::TaskReturn;

/// How finely the luck of a body's cells is summed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Fineness {
    /// Combinations of counts that are summed one by one, at most; beyond it, Gauss rules.
    enumerated: f64,
    /// Nodes of the Gauss rule of each class, for bodies of 1, 2, 3, and more classes.
    nodes: [usize; 4],
}

/// R0 exactly where combinations are few, to about 1e-11 otherwise; to 1e-5 at worst, where `m_ext` is
/// hundreds of times m0, so that all hangs on the odds of a body without soma.
const FINE: Fineness = Fineness { enumerated: 1100.0, nodes: [24, 12, 9, 7] };
/// R0 to a per mille or so, for finding one's way.
const COARSE: Fineness = Fineness { enumerated: 65.0, nodes: [12, 6, 4, 3] };
/// Bodies that a sketch keeps as they are, at most.
const SKETCHED: usize = 3;

/// All that theory needs of a scenario.
#[derive(Debug, Clone)]
pub struct Model {
    pub(super) life: LifeHistory,
    pub(super) viability: TaskReturn,
    pub(super) fecundity: TaskReturn,
    pub(super) cues: CueSet,
    pub(super) bound: f64,
    pub(super) noise_bias_bound: f64,
    pub(super) germ_below: f64,
    pub(super) soma_above: f64,
    pub(super) placed: Option<PlacedBodies>,
    bodies: Compositions,
    fineness: Fineness,
}

impl Model {
    /// A model of colonies with that life, those returns and cues, whose adult bodies are drawn
    /// from `bodies` (weights are brought to sum 1; without any body, R0 is 0). Traits are within
    /// +-12 and cells germ below z = 0.1 and soma above 0.9, until said otherwise.
    #[must_use]
    pub fn new(
        life: LifeHistory,
        [viability, fecundity]: [TaskReturn; 2],
        cues: CueSet,
        bodies: &[(f64, Composition)],
    ) -> Self {
        let exposure = cues.contains(Cue::Exposure)
            || viability.depends_on_place()
            || fecundity.depends_on_place();
        let labels = cues.contains(Cue::Lineage);
        let bodies =
            joined(bodies.iter().map(|(weight, body)| (*weight, body.seen(labels, exposure))));
        Self {
            life,
            viability,
            fecundity,
            cues,
            bound: 12.0,
            noise_bias_bound: NOISE_BIAS_BOUND,
            germ_below: 0.1,
            soma_above: 0.9,
            placed: None,
            bodies,
            fineness: FINE,
        }
    }

    /// The same model of colonies whose bodies are known cell by cell.
    #[must_use]
    pub fn of_placed(
        life: LifeHistory,
        returns: [TaskReturn; 2],
        cues: CueSet,
        bodies: PlacedBodies,
    ) -> Self {
        Self { placed: Some(bodies), ..Self::new(life, returns, cues, &[]) }
    }

    /// The same with `g0` and every `g_k` within +-`bound`, the noise cue's bias within its own.
    #[must_use]
    pub const fn with_bounds(mut self, bound: f64, noise_bias_bound: f64) -> Self {
        (self.bound, self.noise_bias_bound) = (bound, noise_bias_bound);
        self
    }

    /// The same with cells germ below one soma share and soma above another.
    #[must_use]
    pub const fn with_cell_classes(mut self, germ_below: f64, soma_above: f64) -> Self {
        (self.germ_below, self.soma_above) = (germ_below, soma_above);
        self
    }

    /// A rougher model, quicker to evaluate: luck summed coarsely, many bodies made one average
    /// body.
    pub(super) fn sketch(&self) -> Self {
        let mut sketch = Self { fineness: COARSE, ..self.clone() };
        if sketch.bodies.len() > SKETCHED {
            sketch.bodies = vec![(1.0, average(&self.bodies))];
        }
        sketch.placed = self.placed.as_ref().map(PlacedBodies::sketch);
        sketch
    }

    /// Rates and costs of a colony's life.
    #[must_use]
    pub const fn life(&self) -> &LifeHistory {
        &self.life
    }

    /// The adult bodies with their probabilities, as cells see them; none where bodies are placed.
    #[must_use]
    pub fn bodies(&self) -> &[(f64, Composition)] {
        &self.bodies
    }

    /// The placed bodies, if bodies are known cell by cell.
    #[must_use]
    pub const fn placed(&self) -> Option<&PlacedBodies> {
        self.placed.as_ref()
    }

    /// Expected propagules per founder (R0) of a programme. 0 where it cannot grow up.
    #[must_use]
    pub fn expected_propagules(&self, programme: &Programme) -> f64 {
        self.r0(&Norm::from(programme))
    }

    /// ln R0 of a programme: -inf where R0 is 0.
    #[must_use]
    pub fn log_fitness(&self, programme: &Programme) -> f64 {
        libm::log(self.expected_propagules(programme))
    }

    /// R0 of a reaction norm whose traits may be jets.
    #[must_use]
    pub fn r0<S: Scalar>(&self, norm: &Norm<S>) -> S {
        let relative = self.life.relative_income(norm.total_responsiveness());
        if relative.value() <= 0.0 {
            return S::constant(0.0);
        }
        if let Some(placed) = &self.placed {
            return self.placed_r0(placed, norm, relative);
        }
        let grown = self.life.survival_to_adulthood(relative * self.life.income_eu_per_h);
        let output = self.bodies.iter().fold(S::constant(0.0), |sum, (weight, body)| {
            sum + self.adult_output(norm, relative, body) * *weight
        });
        grown * output * (self.life.income_eu_per_h / self.life.propagule_cost_eu)
    }

    /// `E[ B / (m_ext + m0 / V) ]` over the random fates of a body's cells, h.
    fn adult_output<S: Scalar>(&self, norm: &Norm<S>, relative: S, body: &Composition) -> S {
        let fates = self.fates(norm, relative, body);
        let p = norm.noise_probability;
        let cells = body.cells();
        let expected = |of: fn(Returns<S>) -> S| {
            sum(&fates, |fate| (of(fate.plus) * p + of(fate.minus) * (1.0 - p)) * fate.count)
        };
        let (v, b) = (expected(|r| r.v) * cells.recip(), expected(|r| r.b));
        if norm.is_deterministic() || body.is_endless() {
            return self.lifetime_output(v, b);
        }
        if self.life.extrinsic_hazard_per_h == 0.0 {
            let luck = sum(&fates, |fate| {
                let (dv, db) = (fate.plus.v - fate.minus.v, fate.plus.b - fate.minus.b);
                dv * db * (p * (1.0 - p) * fate.count)
            });
            let product = b * v + luck * cells.recip();
            return product * self.life.adult_hazard_per_h.recip();
        }
        self.output_over_draws(&fates, p, cells)
    }

    /// The same expectation for any hazard, summed over the numbers of cells that read +1.
    fn output_over_draws<S: Scalar>(&self, fates: &[Fate<S>], p: f64, cells: f64) -> S {
        let counts: Vec<f64> = fates.iter().map(|fate| fate.count).collect();
        let mut output = S::constant(0.0);
        for_each_combination(&self.noise_rules(&counts, p), |plus, weight| {
            let body = fates.iter().zip(plus);
            let nothing = Returns { v: S::constant(0.0), b: S::constant(0.0) };
            let sums = body.fold(nothing, |sums, (fate, plus)| Returns {
                v: sums.v + fate.plus.v * *plus + fate.minus.v * (fate.count - plus),
                b: sums.b + fate.plus.b * *plus + fate.minus.b * (fate.count - plus),
            });
            output = output + self.lifetime_output(sums.v * cells.recip(), sums.b) * weight;
        });
        output
    }

    /// Rules for the numbers of cells of each class whose noise cue reads +1: every value where
    /// the combinations are few, Gauss rules otherwise.
    pub(super) fn noise_rules(&self, counts: &[f64], p: f64) -> Vec<Rule> {
        let Fineness { enumerated, nodes } = self.fineness;
        let combinations: f64 = counts.iter().map(|count| count + 1.0).product();
        let whole = counts.iter().all(|count| count.fract() == 0.0);
        let size = nodes[counts.len().clamp(1, nodes.len()) - 1];
        let rule = |count: &f64| {
            #[expect(clippy::cast_sign_loss, reason = "counts are positive")]
            if whole && (combinations <= enumerated || *count < size as f64) {
                Rule::binomial(*count as u64, p)
            } else {
                Rule::gauss_binomial(*count, p, size.min(*count as usize + 1))
            }
        };
        counts.iter().map(rule).collect()
    }

    /// `B V / (m_ext V + m0)`, which is 0 where V is 0.
    pub(super) fn lifetime_output<S: Scalar>(&self, v: S, b: S) -> S {
        if v.value() <= 0.0 {
            return S::constant(0.0);
        }
        let hazard =
            v * self.life.extrinsic_hazard_per_h + S::constant(self.life.adult_hazard_per_h);
        b * v / hazard
    }

    /// What cells of each kind yield when their noise cue reads +1 and -1.
    fn fates<S: Scalar>(&self, norm: &Norm<S>, relative: S, body: &Composition) -> Vec<Fate<S>> {
        let certain = norm.is_deterministic();
        let centre = Centre::of(body);
        let fate = |(kind, count): &(CellKind, f64)| {
            let steady = norm.steady_logit(*kind, &centre);
            let returns = |logit: S| Returns {
                v: self.viability.curve.at(relative * logit.sigmoid())
                    * self.viability.effect(kind.exposed),
                b: self.fecundity.curve.at(relative * (-logit).sigmoid())
                    * self.fecundity.effect(kind.exposed),
            };
            let [up, down] = norm.noise_steps();
            let plus = returns(steady + up);
            let minus = if certain { plus } else { returns(steady + down) };
            Fate { plus, minus, count: *count }
        };
        body.classes().iter().map(fate).collect()
    }
}

/// Means of the positional cues over a body, which centre them.
pub(super) struct Centre {
    label: f64,
    exposure: f64,
}

impl Centre {
    pub(super) fn of(body: &Composition) -> Self {
        Self {
            label: body.mean(|kind| f64::from(kind.label)),
            exposure: body.mean(|kind| f64::from(u8::from(kind.exposed))),
        }
    }
}

/// A reaction norm whose traits may be jets.
#[derive(Debug, Clone, Copy)]
pub struct Norm<S> {
    /// Baseline g0.
    pub baseline: S,
    /// Responsiveness per cue, in the order of [`Cue::ALL`].
    pub responsiveness: [S; Cue::COUNT],
    /// Probability that the noise cue reads +1.
    pub noise_probability: f64,
}

impl From<&Programme> for Norm<f64> {
    fn from(programme: &Programme) -> Self {
        Self {
            baseline: programme.baseline,
            responsiveness: programme.responsiveness,
            noise_probability: programme.noise_probability(),
        }
    }
}

impl<S: Scalar> Norm<S> {
    /// `sum_k |g_k|`.
    pub(super) fn total_responsiveness(&self) -> S {
        self.responsiveness.iter().fold(S::constant(0.0), |sum, g| sum + g.abs())
    }

    /// Whether luck plays no part.
    pub(super) fn is_deterministic(&self) -> bool {
        self.responsiveness[Cue::Noise.index()].is_zero()
    }

    /// The same without the noise cue.
    pub(super) fn without_noise(&self) -> Self {
        let mut still = *self;
        still.responsiveness[Cue::Noise.index()] = S::constant(0.0);
        still
    }

    /// The same without derivatives.
    pub(super) fn values(&self) -> Norm<f64> {
        Norm {
            baseline: self.baseline.value(),
            responsiveness: self.responsiveness.map(S::value),
            noise_probability: self.noise_probability,
        }
    }

    /// Logit of the soma share of a cell that reads `cues`, but for noise.
    pub(super) fn logit_of(&self, cues: &[f64; Cue::COUNT]) -> S {
        let positional = Cue::ALL.into_iter().filter(|cue| *cue != Cue::Noise);
        positional.fold(self.baseline, |sum, cue| {
            sum + self.responsiveness[cue.index()] * cues[cue.index()]
        })
    }

    /// Logit of the soma share but for noise. All cells being fully fed, the income cue reads 0.
    pub(super) fn steady_logit(&self, kind: CellKind, centre: &Centre) -> S {
        let label = f64::from(kind.label) - centre.label;
        let exposure = f64::from(u8::from(kind.exposed)) - centre.exposure;
        self.baseline
            + self.responsiveness[Cue::Lineage.index()] * label
            + self.responsiveness[Cue::Exposure.index()] * exposure
    }

    /// What noise adds to the logit when it reads +1 and -1: `g (1 - (2p - 1))`, `g (-1 - (2p - 1))`.
    pub(super) fn noise_steps(&self) -> [S; 2] {
        let g = self.responsiveness[Cue::Noise.index()];
        [g * (2.0 * (1.0 - self.noise_probability)), g * (-2.0 * self.noise_probability)]
    }
}

/// A cell's returns on its two budgets.
#[derive(Debug, Clone, Copy)]
struct Returns<S> {
    v: S,
    b: S,
}

/// A class of cells and what they yield by the luck of their noise cue.
struct Fate<S> {
    plus: Returns<S>,
    minus: Returns<S>,
    count: f64,
}

fn sum<S: Scalar>(fates: &[Fate<S>], of: impl Fn(&Fate<S>) -> S) -> S {
    fates.iter().fold(S::constant(0.0), |sum, fate| sum + of(fate))
}
