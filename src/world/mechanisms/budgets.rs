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
    mut readings: Local<Vec<u8>>,
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
    let heeded = Heeded::by(&rules);
    let n = rules.0.body.adult_cells;
    for &site in &maturing.0 {
        let rows = site as usize * n..(site as usize + 1) * n;
        let cells = draws[rows.clone()].iter().zip(&labels[rows.clone()]);
        let cells = cells.zip(&exposed[rows.clone()]);
        readings.clear();
        readings.extend(cells.map(|((draw, label), surface)| heeded.code(*draw, *label, *surface)));
        let programme = &pool.0[site as usize].programme;
        let fates = fates(&rules, programme, &means[site as usize], &readings);
        let targets = shares[rows.clone()].iter_mut().zip(&mut budgets[rows.clone()]);
        let targets = targets.zip(&mut outputs[rows]);
        for (reading, ((share, budget), output)) in readings.iter().zip(targets) {
            let fate = &fates[usize::from(*reading) % CODES];
            (*share, *budget, *output) = (fate.share, fate.budget, fate.output);
        }
    }
}

/// Room for all codes of readings: two bits of noise, two of the label, one of exposure.
const CODES: usize = 32;

/// Which of the things that a cell reads make a difference to what it does.
///
/// A reading is coded in five bits: noise draw + 1, label + 1, exposure; what makes no difference
/// reads as if it were 0, not divided or interior.
struct Heeded {
    label_mask: u8,
    exposure_mask: u8,
}

impl Heeded {
    fn by(rules: &Rules) -> Self {
        let lineage = rules.0.traits.cues.contains(Cue::Lineage);
        let mask = |heeded: bool| if heeded { u8::MAX } else { 0 };
        Self { label_mask: mask(lineage), exposure_mask: mask(rules.0.exposure_matters()) }
    }

    #[inline]
    const fn code(&self, draw: NoiseDraw, label: DivisionLabel, surface: Exposed) -> u8 {
        let label = (label.0.cast_unsigned() & self.label_mask).wrapping_add(1);
        let surface = surface.0 as u8 & self.exposure_mask;
        draw.0.cast_unsigned().wrapping_add(1) | label << 2 | surface << 4
    }
}

/// What a cell does, given what it reads.
#[derive(Debug, Clone, Copy, Default)]
struct Fate {
    share: SomaShare,
    budget: Budget,
    output: Output,
}

/// The fates that go with the codes among `readings`, for cells of one colony.
fn fates(rules: &Rules, programme: &Programme, means: &CueMeans, readings: &[u8]) -> [Fate; CODES] {
    let met = readings.iter().fold(0_u32, |met, reading| met | 1 << (reading % CODES as u8));
    let mut fates = [Fate::default(); CODES];
    for (code, fate) in (0..).zip(&mut fates).filter(|(code, _)| met >> code & 1 == 1) {
        let [draw, label] = [code & 3, code >> 2 & 3].map(|sign: u32| f64::from(sign) - 1.0);
        let surface = code >> 4;
        let mut cues = [0.0; Cue::COUNT];
        cues[Cue::Noise.index()] = draw - means.noise;
        cues[Cue::Lineage.index()] = label - means.lineage;
        cues[Cue::Exposure.index()] = f64::from(surface) - means.exposure;
        *fate = Fate::of(rules, programme, &cues, surface == 1);
    }
    fates
}

impl Fate {
    fn of(rules: &Rules, programme: &Programme, cues: &[f64; Cue::COUNT], surface: bool) -> Self {
        let z = programme.soma_share(cues);
        let income = rules.taxed_income_eu_per_h(programme);
        let (soma, germ) = (income * z, income * (1.0 - z));
        let full = rules.0.budget.income_eu_per_h;
        let returns = &rules.0.returns;
        let viability = returns.viability.value(soma / full, surface);
        let fecundity = returns.fecundity.value(germ / full, surface);
        Self {
            share: SomaShare(z as f32),
            budget: Budget { soma_eu_per_h: soma as f32, germ_eu_per_h: germ as f32 },
            output: Output { viability: viability as f32, fecundity: fecundity as f32 },
        }
    }
}
