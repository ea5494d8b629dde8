//! Route: which cues make the cells of adult bodies differ.

use crate::scenario::settings::Traits;
use crate::theory::Cue;
use crate::world::ColonyView;

/// Between-cell variance of logit z below which a body counts as undivided.
const NO_VARIANCE: f64 = 1e-12;

/// Share of the between-cell variance of logit z that each cue explains, over all adult bodies:
/// `sum Cov(g_k cue_k, logit z) / sum Var(logit z)`, sums over bodies, divisor n. The shares sum to 1.
///
/// None where cells do not differ.
pub(super) fn routes<'w>(
    adults: impl Iterator<Item = ColonyView<'w>>,
    traits: &Traits,
) -> Option<[f64; Cue::COUNT]> {
    let mut covariances = [0.0; Cue::COUNT];
    let mut variance = 0.0;
    for body in adults {
        let parts = traits.cues.iter().map(|cue| (cue, contributions(&body, cue)));
        let parts: Vec<(Cue, Vec<f64>)> = parts.collect();
        let n = body.shares.len();
        let whole: Vec<f64> = (0..n).map(|i| parts.iter().map(|(_, part)| part[i]).sum()).collect();
        variance += covariance(&whole, &whole);
        for (cue, part) in &parts {
            covariances[cue.index()] += covariance(part, &whole);
        }
    }
    (variance > NO_VARIANCE).then(|| covariances.map(|c| c / variance))
}

/// `g_k cue_k(i)` of every cell, not centred.
fn contributions(body: &ColonyView<'_>, cue: Cue) -> Vec<f64> {
    let weight = body.genotype.programme.responsiveness[cue.index()];
    let cells = 0..body.shares.len();
    match cue {
        Cue::Noise => cells.map(|i| weight * f64::from(body.noise[i].0)).collect(),
        Cue::Lineage => cells.map(|i| weight * f64::from(body.labels[i].0)).collect(),
        Cue::Exposure => cells.map(|i| weight * f64::from(u8::from(body.exposed[i].0))).collect(),
        Cue::Income => cells.map(|i| weight * body.income_cue(i)).collect(),
    }
}

fn covariance(a: &[f64], b: &[f64]) -> f64 {
    let n = a.len() as f64;
    let mean = |values: &[f64]| values.iter().sum::<f64>() / n;
    let (mean_a, mean_b) = (mean(a), mean(b));
    a.iter().zip(b).map(|(x, y)| (x - mean_a) * (y - mean_b)).sum::<f64>() / n
}
