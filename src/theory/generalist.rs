//! The best body whose cells are all alike.

use super::fitness::{Model, Norm};
use super::jet::{Jet, Scalar};
use super::reaction_norm::{Cue, Programme, sigmoid};

/// The generalist optimum: the best programme with all responsiveness at 0.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Generalist {
    /// Baseline g0*, logit of the soma share.
    pub baseline: f64,
    /// Soma share z* of every cell.
    pub soma_share: f64,
    /// Expected propagules per founder.
    pub r0: f64,
}

impl Generalist {
    /// Its programme.
    #[must_use]
    pub const fn programme(&self) -> Programme {
        Programme::generalist(self.baseline)
    }
}

/// Distance of the grid's points on the logit scale: a curve that bends more sharply than this
/// over a soma share's logit could hide an optimum.
const GRID_STEP: f64 = 0.25;
/// Gain in ln R0 below which two baselines count as equal; of equal ones, the one nearer 0 stands.
const EQUAL: f64 = 1e-13;

impl Model {
    /// Generation time of a population of generalists, h: growth, and the mean age of an adult at
    /// the birth of its propagules, `1 / m` at the constant hazard `m = m_ext + m0 / V`; of placed
    /// bodies, with the mean viability of those that mature.
    ///
    /// Infinite where the generalist cannot grow up or never dies.
    #[must_use]
    pub fn generation_h(&self, generalist: &Generalist) -> f64 {
        if let Some(placed) = &self.placed {
            let norm = Norm::from(&generalist.programme());
            let viability = self.placed_viability(placed, &norm);
            return self.generation_at(viability);
        }
        let effect: f64 = self
            .bodies()
            .iter()
            .map(|(weight, body)| weight * body.mean(|kind| self.viability.effect(kind.exposed)))
            .sum();
        let viability = effect * self.viability.curve.value(generalist.soma_share);
        self.generation_at(viability)
    }

    fn generation_at(&self, viability: f64) -> f64 {
        let growth_h = self.growth_h().unwrap_or(f64::INFINITY);
        let hazard_per_h =
            self.life.extrinsic_hazard_per_h + self.life.adult_hazard_per_h / viability;
        growth_h + 1.0 / hazard_per_h
    }

    /// Mean time from propagule to adult without a tax on responsiveness, h; `None` where nothing
    /// grows up.
    #[must_use]
    pub fn growth_h(&self) -> Option<f64> {
        match &self.placed {
            Some(placed) => placed.growth_h(),
            None => self.life.growth_h(self.life.income_eu_per_h),
        }
    }

    /// The generalist optimum within +-bound: the best point of a grid over the logit, refined by
    /// a safeguarded Newton search on the exact slope. If no baseline leaves propagules, the one
    /// of soma share 1/2, with R0 = 0.
    #[must_use]
    pub fn generalist(&self) -> Generalist {
        let fitness = |g0: f64| finite_or_lost(self.log_fitness(&Programme::generalist(g0)));
        let half = (self.bound / GRID_STEP).ceil().clamp(8.0, 400.0);
        let mut places = vec![0.0];
        places.extend((1..=half as i32).flat_map(|k| {
            let g0 = f64::from(k) / half * self.bound;
            [g0, -g0]
        }));
        places.sort_by(f64::total_cmp);
        let grid: Vec<(f64, f64)> = places.into_iter().map(|g0| (g0, fitness(g0))).collect();
        let mut candidates = grid.clone();
        for (middle, window) in grid.windows(3).enumerate() {
            let [left, here, right] = [window[0], window[1], window[2]];
            if here.1 >= left.1 && here.1 >= right.1 && here.1 > f64::NEG_INFINITY {
                let top = self.top_between(left.0, here.0, right.0);
                let value = fitness(top);
                // Within rounding of the grid point the exact slope knows better than the value.
                if value >= here.1 - EQUAL {
                    candidates[middle + 1] = (top, value);
                }
            }
        }
        candidates.sort_by(|a, b| a.0.abs().total_cmp(&b.0.abs()));
        let first = candidates[0];
        let better = |best: (f64, f64), next: &(f64, f64)| {
            if next.1 > best.1 + EQUAL { *next } else { best }
        };
        let (best, _) = candidates.iter().fold(first, better);
        Generalist {
            baseline: best,
            soma_share: sigmoid(best),
            r0: self.expected_propagules(&Programme::generalist(best)),
        }
    }

    /// Where ln R0 turns from rising to falling between two baselines, searched from `g0`. On level
    /// ground, `g0` itself.
    fn top_between(&self, mut low: f64, mut g0: f64, mut high: f64) -> f64 {
        const LEVEL: f64 = 1e-15;
        for _ in 0..100 {
            let jet = self.log_fitness_along_baseline(g0);
            if jet.slope.abs() <= LEVEL {
                return g0;
            }
            if jet.slope > 0.0 {
                low = g0;
            } else {
                high = g0;
            }
            let newton = g0 - jet.slope / jet.curvature;
            let inside = newton > low && newton < high && jet.curvature < 0.0;
            let next = if inside { newton } else { f64::midpoint(low, high) };
            if (next - g0).abs() <= 2.0 * f64::EPSILON * (1.0 + g0.abs()) {
                return next;
            }
            g0 = next;
        }
        g0
    }

    fn log_fitness_along_baseline(&self, g0: f64) -> Jet {
        let norm = Norm {
            baseline: Jet::variable(g0, 1.0),
            responsiveness: [Jet::constant(0.0); Cue::COUNT],
            noise_probability: 0.5,
        };
        self.r0(&norm).ln()
    }
}

/// Fitness that is not a number counts as none.
pub(super) fn finite_or_lost(value: f64) -> f64 {
    if value.is_nan() { f64::NEG_INFINITY } else { value }
}
