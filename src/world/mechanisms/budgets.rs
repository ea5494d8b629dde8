//! An adult's cells split their income by the reaction norm, and each budget yields its return.
//!
//! Cells of one colony that read and earn the same do the same, so each distinct reading is worked out
//! once; incomes, where they differ, scale what it yields or are worked out cell by cell.

use bevy_ecs::prelude::*;

use super::only_table;
use super::yields::{Fate, IncomeFactors};
use crate::theory::{Cue, Programme};
use crate::world::components::{
    Budget, CellCount, CueMeans, DivisionLabel, Exposed, NoiseDraw, Output, SomaShare,
};
use crate::world::nursery::{SharedBodies, SharedBody};
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
    bodies: Res<SharedBodies>,
    mut readings: Local<Vec<u8>>,
    mut cells: CellQuery,
    mut colonies: Query<(&CueMeans, &CellCount)>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let (labels, exposed, draws, mut shares, mut budgets, mut outputs) =
        only_table(cells.contiguous_iter_mut());
    let shares = shares.bypass_change_detection();
    let (budgets, outputs) = (budgets.bypass_change_detection(), outputs.bypass_change_detection());
    let (means, counts) = only_table(colonies.contiguous_iter_mut());
    let heeded = Heeded::by(&rules);
    let capacity = rules.0.body.adult_cells;
    for &site in &maturing.0 {
        let here = site as usize;
        let rows = counts[here].rows(here, capacity);
        // Cells that starved on the way have left rows behind.
        outputs[rows.end..(here + 1) * capacity].fill(Output::default());
        let cells = Cells {
            labels: &labels[rows.clone()],
            exposed: &exposed[rows.clone()],
            draws: &draws[rows.clone()],
            shares: &mut shares[rows.clone()],
            budgets: &mut budgets[rows.clone()],
            outputs: &mut outputs[rows],
        };
        let programme = &pool.0[here].programme;
        let colony = Colony { rules: &rules, programme, means: &means[here] };
        colony.split(&heeded, bodies.of(here), cells, &mut readings);
    }
}

/// The cells of one colony: what they read, and what they do.
pub(super) struct Cells<'c> {
    pub(super) labels: &'c [DivisionLabel],
    pub(super) exposed: &'c [Exposed],
    pub(super) draws: &'c [NoiseDraw],
    pub(super) shares: &'c mut [SomaShare],
    pub(super) budgets: &'c mut [Budget],
    pub(super) outputs: &'c mut [Output],
}

/// Room for all codes of readings: two bits of noise, two of the label, one of exposure.
const CODES: usize = 32;

/// Which of the things that a cell reads make a difference to what it does.
///
/// A reading is coded in five bits: noise draw + 1, label + 1, exposure; what makes no difference
/// reads as if it were 0, not divided or interior.
pub(super) struct Heeded {
    label_mask: u8,
    exposure_mask: u8,
}

impl Heeded {
    pub(super) fn by(rules: &Rules) -> Self {
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

/// What the fates of one colony's cells depend on together.
pub(super) struct Colony<'a> {
    pub(super) rules: &'a Rules,
    pub(super) programme: &'a Programme,
    pub(super) means: &'a CueMeans,
}

impl Colony<'_> {
    /// Sets what each cell does by what it reads; `readings` is working memory.
    pub(super) fn split(
        &self,
        heeded: &Heeded,
        body: Option<&SharedBody>,
        cells: Cells<'_>,
        readings: &mut Vec<u8>,
    ) {
        let read = cells.draws.iter().zip(cells.labels).zip(cells.exposed);
        readings.clear();
        readings.extend(read.map(|((draw, label), surface)| heeded.code(*draw, *label, *surface)));
        let targets = cells.shares.iter_mut().zip(cells.budgets).zip(cells.outputs);
        let targets = targets.map(|((share, budget), output)| (share, budget, output));
        self.settle(readings, body, targets);
    }

    /// Writes the fates of cells with these readings in a body, shared or of their own.
    fn settle<'w>(
        &self,
        readings: &[u8],
        body: Option<&SharedBody>,
        targets: impl Iterator<Item = (&'w mut SomaShare, &'w mut Budget, &'w mut Output)>,
    ) {
        let cells = readings.iter().zip(targets);
        let heeds_income = self.programme.responsiveness[Cue::Income.index()] != 0.0;
        let factors = body.map_or(&IncomeFactors::Alike, |body| &body.factors);
        match (factors, body) {
            (IncomeFactors::Powers(factors), _) if !heeds_income => {
                let fates = self.fates(readings);
                for ((reading, target), (income, factors)) in cells.zip(factors) {
                    put(&fates[usize::from(*reading) % CODES].scaled(*income, *factors), target);
                }
            }
            (IncomeFactors::Powers(_) | IncomeFactors::Each, Some(body)) => {
                for (cell, (reading, target)) in cells.enumerate() {
                    let income = body.development.incomes[cell];
                    put(&self.fate(u32::from(*reading), body.income_cue(cell), income), target);
                }
            }
            _ => {
                let fates = self.fates(readings);
                for (reading, target) in cells {
                    put(&fates[usize::from(*reading) % CODES], target);
                }
            }
        }
    }

    /// The fates that go with the codes among `readings`, for fully fed cells.
    fn fates(&self, readings: &[u8]) -> [Fate; CODES] {
        let met = readings.iter().fold(0_u32, |met, reading| met | 1 << (reading % CODES as u8));
        let mut fates = [Fate::default(); CODES];
        for (code, fate) in (0..).zip(&mut fates).filter(|(code, _)| met >> code & 1 == 1) {
            *fate = self.fate(code, 0.0, 1.0);
        }
        fates
    }

    /// The fate of a cell with that code that earns `income` relative to e0, before tax.
    fn fate(&self, code: u32, income_cue: f64, income: f64) -> Fate {
        let [draw, label] = [code & 3, code >> 2 & 3].map(|sign| f64::from(sign) - 1.0);
        let surface = code >> 4;
        let mut cues = [0.0; Cue::COUNT];
        cues[Cue::Noise.index()] = draw - self.means.noise;
        cues[Cue::Lineage.index()] = label - self.means.lineage;
        cues[Cue::Exposure.index()] = f64::from(surface) - self.means.exposure;
        cues[Cue::Income.index()] = income_cue;
        let kept = self.rules.kept_share(self.programme);
        Fate::of(self.rules, self.programme, &cues, surface == 1, income * kept)
    }
}

fn put(fate: &Fate, (share, budget, output): (&mut SomaShare, &mut Budget, &mut Output)) {
    (*share, *budget, *output) = (fate.share, fate.budget, fate.output);
}
