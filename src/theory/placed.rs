//! Placed bodies: every cell has a place of its own, so that incomes and support can differ between
//! cells of a kind.
//!
//! What theory says of them is an account of adults as they are on the day they mature. Where cells
//! are replaced in the course of an adult's life, theory charges for the replacements but keeps the
//! fates that the body matured with; replacements relabel cells and draw their noise anew.

mod census;
mod curvature;
mod gain;
mod luck;
mod output;
mod spread;

use std::sync::Arc;

pub use gain::{Gain, SURE};
pub use spread::Spread;

use self::luck::Luck;
use super::body::CellKind;
use super::reaction_norm::{Cue, CueSet};

/// A cell of a placed body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PlacedCell {
    /// What it reads of its descent and its place.
    pub kind: CellKind,
    /// Its income relative to that of a fully fed cell, before the tax on responsiveness. Numbers
    /// that are not finite or below 0 count as 0.
    pub income: f64,
}

/// A body as its growth left it.
#[derive(Debug, Clone)]
pub struct PlacedBody {
    /// Its cells.
    pub cells: Vec<PlacedCell>,
    /// How many of its cells touch another; where cells are replaced, only these are.
    pub cells_in_contact: usize,
    /// Hours from propagule to adult at full income; none: it never matured.
    pub growth_h: Option<f64>,
    /// How its cells share the viability task's product, in the same order; none: all of it is
    /// pooled.
    pub spread: Option<Arc<dyn Spread>>,
}

/// A sample of placed bodies.
#[derive(Debug, Clone)]
pub struct PlacedBodies {
    /// Bodies with their probabilities.
    sited: Vec<Sited>,
    /// Probability of a body without cells, which is none of those.
    empty: f64,
    /// How many bodies were drawn; 1 where the probabilities are exact.
    drawn: f64,
    /// Rate at which an adult's cells that touch another are replaced (tau), 1/h per cell.
    turnover_per_h: f64,
}

/// A body, its probability, and the fates of its cells that a search looks at.
#[derive(Debug, Clone)]
struct Sited {
    weight: f64,
    body: Arc<Body>,
    luck: Arc<Luck>,
}

/// A body whose like cells share what is worked out once for each.
#[derive(Debug)]
struct Body {
    kinds: Vec<SitedKind>,
    /// Entry of `kinds` of each cell.
    kind_of: Vec<u32>,
    cells_in_contact: usize,
    growth_h: Option<f64>,
    spread: Option<Arc<dyn Spread>>,
}

/// Cells of a body that read and earn the same.
#[derive(Debug)]
struct SitedKind {
    /// What they read, in the order of [`Cue::ALL`], centred; the noise cue is 0 here.
    cues: [f64; Cue::COUNT],
    exposed: bool,
    income: f64,
    count: f64,
}

impl PlacedBodies {
    /// Bodies in these numbers: how many of a sample are like each (they sum to the sample's size),
    /// or their exact probabilities (they sum to 1). Bodies in no number are left out; one without
    /// cells counts, and leaves nothing. `turnover_per_h` is the rate at which each cell of an adult that touches
    /// another is replaced, 0 or more.
    #[must_use]
    pub fn new(bodies: impl IntoIterator<Item = (f64, PlacedBody)>, turnover_per_h: f64) -> Self {
        let bodies: Vec<(f64, PlacedBody)> =
            bodies.into_iter().filter(|(number, _)| *number > 0.0 && number.is_finite()).collect();
        let drawn: f64 = bodies.iter().map(|(number, _)| number).sum();
        let site = |(rank, (number, body)): (usize, (f64, PlacedBody))| {
            let luck = Arc::new(Luck::for_searching(body.cells.len(), rank as u64));
            Sited { weight: number / drawn, body: Arc::new(Body::of(body)), luck }
        };
        let (empty, alive): (Vec<_>, Vec<_>) =
            bodies.into_iter().partition(|(_, body)| body.cells.is_empty());
        let empty = empty.iter().map(|(number, _)| number / drawn).sum();
        let sited = alive.into_iter().enumerate().map(site).collect();
        Self { sited, empty, drawn, turnover_per_h }
    }

    /// Fewer bodies with fewer fates, for finding one's way: the first that matured.
    pub(super) fn sketch(&self) -> Self {
        let mature = self.sited.iter().filter(|sited| sited.body.growth_h.is_some());
        let mut sited: Vec<Sited> = mature.take(SKETCHED).cloned().collect();
        let weight = 1.0 / sited.len().max(1) as f64;
        if sited.iter().any(|sited| sited.body.cells() > LARGE) {
            sited.truncate(1);
        }
        for (rank, sited) in sited.iter_mut().enumerate() {
            sited.weight = weight;
            sited.luck = Arc::new(Luck::for_sketching(sited.body.cells(), rank as u64));
        }
        Self { drawn: 1.0, sited, empty: 0.0, turnover_per_h: self.turnover_per_h }
    }

    /// Mean growth of the bodies that mature, h; `None` where none does.
    pub(super) fn growth_h(&self) -> Option<f64> {
        self.mean_of_mature(|body| body.growth_h.unwrap_or(f64::INFINITY))
    }

    fn mean_of_mature(&self, of: impl Fn(&Body) -> f64) -> Option<f64> {
        let mature = self.sited.iter().filter(|sited| sited.body.growth_h.is_some());
        let weight: f64 = mature.clone().map(|sited| sited.weight).sum();
        let sum: f64 = mature.map(|sited| sited.weight * of(&sited.body)).sum();
        (weight > 0.0).then_some(sum / weight)
    }

    /// Cues of the set that differ between cells of some body; noise always does.
    pub(super) fn varying(&self, cues: CueSet) -> CueSet {
        let reads = |cue: Cue| {
            let mut kinds = self.sited.iter().flat_map(|sited| &sited.body.kinds);
            cue == Cue::Noise || kinds.any(|kind| kind.cues[cue.index()].abs() > ALIKE)
        };
        cues.iter().filter(|cue| reads(*cue)).collect()
    }

    /// What numbers about these bodies rest on.
    #[must_use]
    pub fn sample(&self) -> Sample {
        let cells = self.sited.iter().map(|sited| sited.body.cells()).max().unwrap_or(0);
        let maturing = self.sited.iter().filter(|sited| sited.body.growth_h.is_some());
        // A sum of nothing is -0.
        let maturing = maturing.map(|sited| sited.weight).sum::<f64>() + 0.0;
        let fates = Luck::fates_judged(cells);
        #[expect(clippy::cast_sign_loss, reason = "a number of bodies")]
        Sample { bodies: self.drawn.round() as usize, maturing, fates }
    }
}

/// What numbers about placed bodies rest on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sample {
    /// Bodies grown.
    pub bodies: usize,
    /// Share of them that matured.
    pub maturing: f64,
    /// Fates drawn per body for the last word on a programme with noise; none where all are summed.
    pub fates: Option<usize>,
}

/// Deviation up to which a cue counts as not varying, and an income as full: rounding of a solver.
const ALIKE: f64 = 1e-9;
/// Bodies that a sketch keeps, at most.
const SKETCHED: usize = 2;
/// Cells beyond which luck averages out enough that a sketch looks at one body only.
const LARGE: usize = 200;

impl Body {
    fn of(body: PlacedBody) -> Self {
        let income = |cell: &PlacedCell| {
            if cell.income.is_finite() { cell.income.max(0.0) } else { 0.0 }
        };
        let label = |cell: &PlacedCell| f64::from(cell.kind.label);
        let exposure = |cell: &PlacedCell| f64::from(u8::from(cell.kind.exposed));
        let mean = |of: &dyn Fn(&PlacedCell) -> f64| {
            body.cells.iter().map(of).sum::<f64>() / body.cells.len() as f64
        };
        let [labels, exposures, incomes] = [mean(&label), mean(&exposure), mean(&income)];
        let read = |cell: &PlacedCell| {
            let richer = if incomes > 0.0 { (income(cell) - incomes) / incomes } else { 0.0 };
            [0.0, label(cell) - labels, exposure(cell) - exposures, richer]
        };
        let key = |cell: &PlacedCell| (cell.kind, income(cell).to_bits());
        let mut keys: Vec<_> = body.cells.iter().map(key).collect();
        keys.sort_unstable();
        keys.dedup();
        let mut kinds: Vec<Option<SitedKind>> = keys.iter().map(|_| None).collect();
        let mut kind_of = Vec::with_capacity(body.cells.len());
        for cell in &body.cells {
            let rank = keys.binary_search(&key(cell)).unwrap_or(0);
            let (cues, exposed, income) = (read(cell), cell.kind.exposed, income(cell));
            kinds[rank].get_or_insert(SitedKind { cues, exposed, income, count: 0.0 }).count += 1.0;
            kind_of.push(rank as u32);
        }
        let growth_h = body.growth_h.filter(|hours| hours.is_finite() && *hours >= 0.0);
        let kinds = kinds.into_iter().flatten().collect();
        let PlacedBody { cells_in_contact, spread, .. } = body;
        Self { kinds, kind_of, cells_in_contact, growth_h, spread }
    }

    fn cells(&self) -> usize {
        self.kind_of.len()
    }

    /// Whether every cell earns what a fully fed one does.
    fn is_fully_fed(&self) -> bool {
        self.kinds.iter().all(|kind| (kind.income - 1.0).abs() <= ALIKE)
    }
}
