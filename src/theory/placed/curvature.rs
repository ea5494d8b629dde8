//! Selection on random fates at a body of given shares, exactly.

use rand::{Rng, RngExt, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;

use super::output::{Deed, Vitals, share_left};
use super::spread::{Care, Spread, supports};
use super::{Body, SitedKind};
use crate::theory::fitness::{Model, Norm};
use crate::theory::jet::{Jet, Scalar};

/// Cells up to which the operator of support is looked at column by column.
const COLUMNS: usize = 1024;
/// Random vectors beyond that.
const PROBES: usize = 64;
/// Their seed.
const PROBE_SEED: u64 = 3 << 32;

/// How a body's outcome moves with one cell's own logit x, for each of its kinds of cells: first and
/// second derivatives of what the cell puts out, its germ budget, and its births at the budget that
/// is left.
struct Own {
    output: Jet,
    germ: Jet,
    /// Births by the germ budget, not by the logit.
    births: Jet,
}

/// Sums over the cells of a body that the derivatives share.
struct Whole {
    viability: f64,
    fecundity: f64,
    /// Share of germ budgets that replacements leave, and its first two derivatives by their sum.
    left: Jet,
    /// `sum_j b' gamma_j` and `sum_j b'' gamma_j^2`.
    pull: f64,
    bend: f64,
}

impl Model {
    /// `sum_i d^2 W / d x_i^2` of `W = B V / (m_ext V + m0)`, `x_i` being cell i's own logit.
    ///
    /// Half of it times the variance of an independent perturbation of all logits is that
    /// perturbation's effect on E[W] to second order. With support `S = M v`, `q_k = S_k^-2` and
    /// `V = n / H`, `H = sum_k 1 / S_k`: `H_i = -v_i' (M q)_i` and
    /// `H_ii = 2 v_i'^2 sum_k M_ki^2 S_k^-3 - v_i'' (M q)_i`. Replacements leave the share
    /// `phi = 1 - C / sum_j gamma_j` of all germ budgets, so that every cell's births follow every
    /// cell's logit.
    pub(super) fn curvature_by_own_logits(
        &self,
        body: &Body,
        norm: &Norm<f64>,
        relative: f64,
        cost: f64,
    ) -> f64 {
        let deed = |kind: &SitedKind| {
            self.deed(kind, Jet::constant(relative), Jet::variable(norm.logit_of(&kind.cues), 1.0))
        };
        let deeds: Vec<Deed<Jet>> = body.kinds.iter().map(deed).collect();
        let (whole, owns) = self.whole(body, &deeds, cost);
        if whole.viability <= 0.0 || whole.fecundity <= 0.0 {
            return 0.0;
        }
        let viability = viability_by_own_logits(body, &owns, whole.viability);
        let lifetime = self.lifetime_by_viability(whole.viability);
        let terms = body.kind_of.iter().zip(viability).map(|(kind, [v1, v2])| {
            let [b1, b2] = fecundity_by_own_logit(&owns[*kind as usize], &whole);
            let bent = lifetime.curvature * v1 * v1 + lifetime.slope * v2;
            b2 * lifetime.value + 2.0 * b1 * lifetime.slope * v1 + whole.fecundity * bent
        });
        terms.sum()
    }

    fn whole(&self, body: &Body, deeds: &[Deed<Jet>], cost: f64) -> (Whole, Vec<Own>) {
        let at = |cell: usize| deeds[body.kind_of[cell] as usize].value();
        let Vitals { viability, fecundity } = self.vitals(body, at, cost, Care::Exact);
        let counts = || body.kinds.iter().map(|kind| kind.count);
        let germ: f64 = deeds.iter().zip(counts()).map(|(d, count)| d.germ.value * count).sum();
        let left = if cost > 0.0 {
            share_left(Jet::variable(germ, 1.0), cost)
        } else {
            Jet::constant(1.0)
        };
        let own = |(deed, kind): (&Deed<Jet>, &SitedKind)| {
            let budget = Jet::variable(deed.germ.value * left.value, 1.0);
            let births = self.births(budget, kind.exposed);
            Own { output: deed.output, germ: deed.germ, births }
        };
        let owns: Vec<Own> = deeds.iter().zip(&body.kinds).map(own).collect();
        let total = |of: &dyn Fn(&Own) -> f64| -> f64 {
            owns.iter().zip(counts()).map(|(own, count)| of(own) * count).sum()
        };
        // A cell without income has no budget to lose, however steep its returns would be there.
        let times = |factor: f64, by: f64| if by == 0.0 { 0.0 } else { factor * by };
        let pull = total(&|own| times(own.births.slope, own.germ.value));
        let bend = total(&|own| times(own.births.curvature, own.germ.value * own.germ.value));
        (Whole { viability, fecundity, left, pull, bend }, owns)
    }

    /// `V / (m_ext V + m0)` with its derivatives by V.
    fn lifetime_by_viability(&self, viability: f64) -> Jet {
        self.lifetime_output(Jet::variable(viability, 1.0), Jet::constant(1.0))
    }
}

/// First and second derivative of B by one cell's logit.
fn fecundity_by_own_logit(own: &Own, whole: &Whole) -> [f64; 2] {
    let (germ, births, left) = (own.germ, own.births, whole.left);
    if germ.slope == 0.0 {
        return [0.0; 2];
    }
    let left_first = left.slope * germ.slope;
    let left_second = left.slope * germ.curvature + left.curvature * germ.slope * germ.slope;
    let budget_first = left.value * germ.slope;
    let first = whole.pull * left_first + births.slope * budget_first;
    let second = whole.bend * left_first * left_first
        + whole.pull * left_second
        + births.curvature * budget_first * (2.0 * germ.value * left_first + budget_first)
        + births.slope * (2.0 * left_first * germ.slope + left.value * germ.curvature);
    [first, second]
}

/// First and second derivative of V by each cell's logit.
fn viability_by_own_logits(body: &Body, owns: &[Own], viability: f64) -> Vec<[f64; 2]> {
    let own = |cell: usize| owns[body.kind_of[cell] as usize].output;
    let count = body.cells() as f64;
    let Some(spread) = &body.spread else {
        let pooled = |cell| [own(cell).slope / count, own(cell).curvature / count];
        return (0..body.cells()).map(pooled).collect();
    };
    let output: Vec<f64> = (0..body.cells()).map(|cell| own(cell).value).collect();
    let support = supports(spread.as_ref(), &output, Care::Exact);
    let squares: Vec<f64> = support.iter().map(|s| (s * s).recip()).collect();
    let cubes: Vec<f64> = support.iter().map(|s| (s * s * s).recip()).collect();
    let reached = supports(spread.as_ref(), &squares, Care::Exact);
    let weighed = column_weights(spread.as_ref(), &cubes);
    let derivatives = |cell: usize| {
        let Jet { slope, curvature, .. } = own(cell);
        let first = -slope * reached[cell];
        let second = 2.0 * slope * slope * weighed[cell] - curvature * reached[cell];
        // V = n / H.
        let per_sum = viability * viability / count;
        let bent = 2.0 * per_sum * viability / count;
        [-per_sum * first, bent * first * first - per_sum * second]
    };
    (0..body.cells()).map(derivatives).collect()
}

/// `sum_k M_ki^2 w_k` of every cell i.
///
/// In bodies of more than [`COLUMNS`] cells this is the estimate of Bekas et al. (2007, Appl. Numer.
/// Math. 57:1214) from vectors xi of random signs: the mean of `xi_i (M w M xi)_i`.
fn column_weights(spread: &dyn Spread, weights: &[f64]) -> Vec<f64> {
    let cells = weights.len();
    let mut reach = vec![0.0; cells];
    if cells <= COLUMNS {
        let weighed = |source| {
            spread.reach(source, &mut reach);
            reach.iter().zip(weights).map(|(m, w)| m * m * w).sum()
        };
        return (0..cells).map(weighed).collect();
    }
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(PROBE_SEED);
    let (mut sums, mut back) = (vec![0.0; cells], vec![0.0; cells]);
    for _ in 0..PROBES {
        let signs = random_signs(cells, &mut rng);
        spread.spread_exactly(&signs, &mut reach);
        for (reach, weight) in reach.iter_mut().zip(weights) {
            *reach *= weight;
        }
        spread.spread_exactly(&reach, &mut back);
        for ((sum, sign), back) in sums.iter_mut().zip(&signs).zip(&back) {
            *sum += sign * back / PROBES as f64;
        }
    }
    sums
}

fn random_signs(count: usize, rng: &mut impl Rng) -> Vec<f64> {
    (0..count).map(|_| if rng.random::<bool>() { 1.0 } else { -1.0 }).collect()
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// A ring of cells with `M_ij = (1 - r) / (1 + r) r^|i - j|`, cut off at 40 cells (r^40 < 1e-12).
    #[derive(Debug)]
    struct Ring(f64);

    impl Ring {
        fn share(&self, steps: usize) -> f64 {
            let power = (0..steps).fold(1.0, |product, _| product * self.0);
            (1.0 - self.0) / (1.0 + self.0) * power
        }
    }

    impl Spread for Ring {
        fn spread(&self, output: &[f64], support: &mut [f64]) {
            let cells = output.len();
            let shares: Vec<f64> = (0..=40).map(|steps| self.share(steps)).collect();
            for (cell, support) in support.iter_mut().enumerate() {
                let both =
                    |k: usize| output[(cell + k) % cells] + output[(cell + cells - k) % cells];
                let around: f64 = (1..=40).map(|k| shares[k] * both(k)).sum();
                *support = shares[0] * output[cell] + around;
            }
        }

        fn spread_exactly(&self, output: &[f64], support: &mut [f64]) {
            self.spread(output, support);
        }
    }

    /// `sum_k M_ki^2 = ((1 - r)/(1 + r))^2 (1 + 2 r^2 / (1 - r^2))` for every cell of the ring. From
    /// probes, the sum over n cells has the relative error `sqrt(2 / 64) |off-diagonal of M^2| / trace`;
    /// with r = 1/2 that is 0.177 * 1.51 / sqrt(n), here 0.67 % (fixed seed; 4 errors: false alarm 6e-5).
    #[test]
    fn probes_agree_with_columns() {
        let ring = Ring(0.5);
        let exact = 1.0 / 9.0 * (1.0 + 0.5 / 0.75);
        let columns = column_weights(&ring, &[1.0; 300]);
        for weight in columns {
            assert_relative_eq!(weight, exact, max_relative = 1e-9);
        }
        let cells = 1600;
        let probed = column_weights(&ring, &vec![1.0; cells]);
        let mean = probed.iter().sum::<f64>() / cells as f64;
        assert_relative_eq!(mean, exact, max_relative = 4.0 * 0.0067);
    }
}
