//! The adult bodies that a programme builds.

use super::{Body, PlacedBodies};
use crate::theory::fitness::Norm;
use crate::theory::reaction_norm::sigmoid;

impl PlacedBodies {
    /// Shows every adult body under every fate that a search looks at, as soma shares with numbers of
    /// cells, and its probability. Where no body matures, those that ceased to grow are shown.
    pub(in crate::theory) fn for_each_mature_body(
        &self,
        norm: &Norm<f64>,
        mut show: impl FnMut(&[(f64, f64)], f64),
    ) {
        let none_matures = self.growth_h().is_none();
        let shown = self.sited.iter().filter(|s| none_matures || s.body.growth_h.is_some());
        let whole: f64 = shown.clone().map(|sited| sited.weight).sum();
        for sited in shown {
            let body = &sited.body;
            let mut show_fate = |plus: &[bool], probability: f64| {
                show(&shares(body, norm, plus), probability * sited.weight / whole);
            };
            if norm.is_deterministic() {
                show_fate(&vec![true; body.cells()], 1.0);
            } else {
                sited.luck.for_each(body.cells(), norm.noise_probability, show_fate);
            }
        }
    }
}

/// Soma shares of a body's cells by kind and fate, with the number of cells of each.
fn shares(body: &Body, norm: &Norm<f64>, plus: &[bool]) -> Vec<(f64, f64)> {
    let [up, down] = norm.noise_steps();
    let kinds = body.kinds.iter().flat_map(|kind| {
        let logit = norm.logit_of(&kind.cues);
        [(sigmoid(logit + down), 0.0), (sigmoid(logit + up), 0.0)]
    });
    let mut shares: Vec<(f64, f64)> = kinds.collect();
    for (kind, plus) in body.kind_of.iter().zip(plus) {
        shares[2 * *kind as usize + usize::from(*plus)].1 += 1.0;
    }
    shares.retain(|(_, count)| *count > 0.0);
    shares
}
