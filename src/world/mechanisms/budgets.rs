//! An adult's cells split their income by the reaction norm, and each budget yields its return.
//!
//! `z_i = sigmoid(g0 + sum_k g_k cue_k(i))`, `s = e z`, `g = e (1 - z)`, `v_i = h_i v(s_i / e0)`,
//! `b_i = k_i b(g_i / e0)`. Cells of one colony that read the same do the same, so each distinct
//! reading is worked out once.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::theory::{Cue, Programme};
use crate::world::components::{
    Budget, CueMeans, DivisionLabel, Exposed, NoiseDraw, Output, SomaShare,
};
use crate::world::resources::{GenePool, Maturing, Rules};

type CellQuery<'w, 's> = Query<
    'w,
    's,
    (
        &'static DivisionLabel,
        &'static Exposed,
        &'static NoiseDraw,
        &'static mut SomaShare,
        &'static mut Budget,
        &'static mut Output,
    ),
>;

/// Sets soma share, budgets and yields of every cell that becomes adult in this tick.
pub fn split_budgets(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    pool: Res<GenePool>,
    mut cells: CellQuery,
    mut colonies: Query<&CueMeans>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let (labels, exposed, draws, mut shares, mut budgets, mut outputs) =
        only_table(cells.contiguous_iter_mut());
    let shares = shares.bypass_change_detection();
    let (budgets, outputs) = (budgets.bypass_change_detection(), outputs.bypass_change_detection());
    let means = only_table(colonies.contiguous_iter_mut());
    let n = rules.0.body.adult_cells;
    for &site in &maturing.0 {
        let rows = site as usize * n..(site as usize + 1) * n;
        let programme = &pool.0[site as usize].programme;
        let mut fates = Fates::of(&rules, programme, &means[site as usize]);
        let readings = labels[rows.clone()].iter().zip(&exposed[rows.clone()]);
        let readings = readings.zip(&draws[rows.clone()]);
        let targets = shares[rows.clone()].iter_mut().zip(&mut budgets[rows.clone()]);
        let targets = targets.zip(&mut outputs[rows]);
        for (((label, surface), draw), ((share, budget), output)) in readings.zip(targets) {
            let fate = fates.of_cell(*draw, *label, *surface);
            (*share, *budget, *output) = (fate.share, fate.budget, fate.output);
        }
    }
}

/// What a cell does, given what it reads.
#[derive(Debug, Clone, Copy, Default)]
struct Fate {
    share: SomaShare,
    budget: Budget,
    output: Output,
}

/// Number of distinct readings: three of noise (one unused) by three labels by two of exposure.
const READINGS: usize = 18;

/// The fates of one colony's cells, worked out as they are met.
struct Fates<'a> {
    rules: &'a Rules,
    programme: &'a Programme,
    means: &'a CueMeans,
    income_eu_per_h: f64,
    label_weight: usize,
    exposure_weight: usize,
    known: [Option<Fate>; READINGS],
}

impl<'a> Fates<'a> {
    fn of(rules: &'a Rules, programme: &'a Programme, means: &'a CueMeans) -> Self {
        let cues = rules.0.traits.cues;
        Self {
            rules,
            programme,
            means,
            income_eu_per_h: rules.taxed_income_eu_per_h(programme),
            label_weight: usize::from(cues.contains(Cue::Lineage)),
            exposure_weight: usize::from(rules.0.exposure_matters()),
            known: [None; READINGS],
        }
    }

    #[inline]
    fn of_cell(&mut self, draw: NoiseDraw, label: DivisionLabel, surface: Exposed) -> Fate {
        let reading = (draw.0 + 1) as usize
            + 3 * self.label_weight * (label.0 + 1) as usize
            + 9 * self.exposure_weight * usize::from(surface.0);
        match self.known[reading] {
            Some(fate) => fate,
            None => self.work_out(reading, draw, label, surface),
        }
    }

    #[cold]
    fn work_out(
        &mut self,
        reading: usize,
        draw: NoiseDraw,
        label: DivisionLabel,
        surface: Exposed,
    ) -> Fate {
        let mut cues = [0.0; Cue::COUNT];
        cues[Cue::Noise.index()] = f64::from(draw.0) - self.means.noise;
        cues[Cue::Lineage.index()] = f64::from(label.0) - self.means.lineage;
        cues[Cue::Exposure.index()] = f64::from(u8::from(surface.0)) - self.means.exposure;
        let z = self.programme.soma_share(&cues);
        let (soma, germ) = (self.income_eu_per_h * z, self.income_eu_per_h * (1.0 - z));
        let full = self.rules.0.budget.income_eu_per_h;
        let returns = &self.rules.0.returns;
        let viability = returns.viability.value(soma / full, surface.0);
        let fecundity = returns.fecundity.value(germ / full, surface.0);
        let fate = Fate {
            share: SomaShare(z as f32),
            budget: Budget { soma_eu_per_h: soma as f32, germ_eu_per_h: germ as f32 },
            output: Output { viability: viability as f32, fecundity: fecundity as f32 },
        };
        self.known[reading] = Some(fate);
        fate
    }
}
