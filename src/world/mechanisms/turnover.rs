//! Turnover: cells of adults die and are replaced by the division of a cell that they touched.
//!
//! Each cell of an adult dies at the rate tau; a touching cell, drawn at random, divides into the gap at
//! once, so that body and fields stay as they are. The mother's label becomes -1, the daughter's +1, and
//! the daughter draws its noise anew; every cell then follows its cues, and V and B what all cells do.
//! A cell that touches no other has nobody to replace it: it lives on and costs nothing.

mod turn;

use bevy_ecs::prelude::*;
use rand::{Rng, RngExt};

use self::turn::{Left, Turn};
use super::budgets::{Cells, Colony, Heeded};
use super::cues::{draw_noise, mean_label};
use super::only_table;
use super::support::{Spreading, pooled};
use crate::theory::{Cue, Programme, ReturnCurve};
use crate::world::components::{
    Budget, CellCount, CueMeans, DivisionLabel, Exposed, HeadStart, Lifespan, NoiseDraw, Output,
    PropaguleStock, SomaShare, StockRate, StockSince, StockUntil, Support, Vitals,
};
use crate::world::draws::exponential;
use crate::world::nursery::{SharedBodies, SharedBody};
use crate::world::resources::{
    Calendar, Clock, EarlierReleases, Event, GenePool, Ledger, Maturing, Random, Rules,
};

/// Lets the germ budgets of each colony that becomes adult pay for its replacements.
pub fn charge_replacements(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    bodies: Res<SharedBodies>,
    mut cells: Query<(&Exposed, &Budget, &mut Output)>,
    mut colonies: Query<&CellCount>,
) {
    if rules.0.budget.turnover_per_h <= 0.0 || maturing.0.is_empty() {
        return;
    }
    let (exposed, budgets, mut outputs) = only_table(cells.contiguous_iter_mut());
    let outputs = outputs.bypass_change_detection();
    let counts = only_table(colonies.contiguous_iter_mut());
    for &site in &maturing.0 {
        let here = site as usize;
        let body = bodies.shared_by(here);
        let rows = counts[here].rows(here, rules.0.body.adult_cells);
        charge(&rules, body, &budgets[rows.clone()], &exposed[rows.clone()], &mut outputs[rows]);
    }
}

/// Scales germ budgets by `max(0, 1 - tau n_c c_div / sum_j g_j)`, `n_c` being the cells that touch
/// another: on average the colony pays its replacements from them. Budgets are kept as they were split;
/// what they yield for fecundity is set.
fn charge(
    rules: &Rules,
    body: &SharedBody,
    budgets: &[Budget],
    exposed: &[Exposed],
    outputs: &mut [Output],
) {
    let budget = &rules.0.budget;
    let germ: f64 = budgets.iter().map(|cell| f64::from(cell.germ_eu_per_h)).sum();
    let cost = budget.turnover_per_h * body.cells_in_contact as f64 * budget.division_cost_eu;
    if cost <= 0.0 {
        return;
    }
    let left = if germ > cost { 1.0 - cost / germ } else { 0.0 };
    let fecundity = &rules.0.returns.fecundity;
    if let ReturnCurve::Power { exponent } = fecundity.curve {
        let factor = libm::pow(left, exponent);
        for output in outputs {
            output.fecundity = (f64::from(output.fecundity) * factor) as f32;
        }
        return;
    }
    for ((output, budget_of_cell), surface) in outputs.iter_mut().zip(budgets).zip(exposed) {
        let germ = left * f64::from(budget_of_cell.germ_eu_per_h);
        output.fecundity = fecundity.value(germ / budget.income_eu_per_h, surface.0) as f32;
    }
}

type CellQuery<'w, 's> = Query<
    'w,
    's,
    (
        &'static mut DivisionLabel,
        &'static Exposed,
        &'static mut NoiseDraw,
        &'static mut SomaShare,
        &'static mut Budget,
        &'static mut Output,
        &'static mut Support,
    ),
>;

type StockQuery<'w, 's> = Query<
    'w,
    's,
    (
        &'static mut StockSince,
        &'static mut StockUntil,
        &'static mut HeadStart,
        &'static mut StockRate,
    ),
>;

/// Working memory of replacements.
#[derive(Debug, Default)]
pub struct Memory {
    readings: Vec<u8>,
    spreading: Spreading,
}

/// Replaces the cells of adults that die in this tick, each at its date, and enters each colony's next
/// event in the calendar: a replacement, or its death if that comes first.
///
/// A colony's replacements come at the rate `tau n`. The hazard left of its Exp(1) draw is spent at the
/// new rate after each, so that it dies when the integrated hazard passes the draw.
#[expect(clippy::too_many_arguments, reason = "a system names everything it touches")]
pub fn replace_cells(
    rules: Res<Rules>,
    clock: Res<Clock>,
    maturing: Res<Maturing>,
    pool: Res<GenePool>,
    bodies: Res<SharedBodies>,
    mut memory: Local<Memory>,
    mut random: ResMut<Random>,
    mut calendar: ResMut<Calendar>,
    mut ledger: ResMut<Ledger>,
    mut earlier: ResMut<EarlierReleases>,
    mut cells: CellQuery,
    mut colonies: Query<(&CellCount, &mut CueMeans, &mut Vitals, &mut Lifespan)>,
    mut stocks: StockQuery,
) {
    if rules.0.budget.turnover_per_h <= 0.0 {
        return;
    }
    let (mut labels, exposed, mut draws, mut shares, mut budgets, mut outputs, mut received) =
        only_table(cells.contiguous_iter_mut());
    let (counts, mut means, mut vitals, mut lives) = only_table(colonies.contiguous_iter_mut());
    let (mut since, mut until, mut head_starts, mut rates) =
        only_table(stocks.contiguous_iter_mut());
    earlier.begin_tick(counts.len());
    let mut adults = Adults {
        rules: &rules,
        clock: &clock,
        capacity: rules.0.body.adult_cells,
        labels: labels.bypass_change_detection(),
        exposed,
        draws: draws.bypass_change_detection(),
        shares: shares.bypass_change_detection(),
        budgets: budgets.bypass_change_detection(),
        outputs: outputs.bypass_change_detection(),
        received: received.bypass_change_detection(),
        counts,
        means: means.bypass_change_detection(),
        vitals: vitals.bypass_change_detection(),
        lives: lives.bypass_change_detection(),
        since: since.bypass_change_detection(),
        until: until.bypass_change_detection(),
        head_starts: head_starts.bypass_change_detection(),
        rates: rates.bypass_change_detection(),
    };
    for &site in &maturing.0 {
        let at_h = adults.lives[site as usize].adult_h;
        adults.expect_next(Event { at_h, site }, &mut calendar, &mut random.0);
    }
    while let Some(event) = calendar.next_replacement(clock.now_h) {
        let body = bodies.shared_by(event.site as usize);
        let programme = &pool.0[event.site as usize].programme;
        if let Some(follows) = adults.replace_one(event, body, programme, &mut random.0) {
            ledger.replacements += 1;
            ledger.cell_lives += 1;
            if follows {
                adults.follow(event, body, programme, &mut memory, &mut earlier);
            }
        }
        adults.expect_next(event, &mut calendar, &mut random.0);
    }
}

/// The columns of cells and colonies that turnover reads and writes.
struct Adults<'w> {
    rules: &'w Rules,
    clock: &'w Clock,
    /// Rows of a site.
    capacity: usize,
    labels: &'w mut [DivisionLabel],
    exposed: &'w [Exposed],
    draws: &'w mut [NoiseDraw],
    shares: &'w mut [SomaShare],
    budgets: &'w mut [Budget],
    outputs: &'w mut [Output],
    received: &'w mut [Support],
    counts: &'w [CellCount],
    means: &'w mut [CueMeans],
    vitals: &'w mut [Vitals],
    lives: &'w mut [Lifespan],
    since: &'w mut [StockSince],
    until: &'w mut [StockUntil],
    head_starts: &'w mut [HeadStart],
    rates: &'w mut [StockRate],
}

impl Adults<'_> {
    /// Enters what comes first after `last`: the death that is due as things stand, or a replacement.
    fn expect_next(&self, last: Event, calendar: &mut Calendar, rng: &mut impl Rng) {
        let here = last.site as usize;
        let cells = f64::from(self.counts[here].0);
        let rate_per_h = self.rules.0.budget.turnover_per_h * cells;
        let at_h = last.at_h + exponential(rng) / rate_per_h;
        let dies_h = self.lives[here].dies_h;
        if at_h < dies_h {
            calendar.expect_replacement(Event { at_h, ..last });
        } else {
            calendar.expect_death(Event { at_h: dies_h, ..last });
        }
    }

    /// Lets a random cell die and one that it touches divide: whether any cell then reads another
    /// thing than before; none if nobody could divide.
    fn replace_one(
        &mut self,
        event: Event,
        body: &SharedBody,
        programme: &Programme,
        rng: &mut impl Rng,
    ) -> Option<bool> {
        let here = event.site as usize;
        let first = here * self.capacity;
        let gap = rng.random_range(0..self.counts[here].0 as usize);
        let touching = body.development.graph.touching(gap);
        if touching.is_empty() {
            return None;
        }
        let mother = first + touching[rng.random_range(0..touching.len())] as usize;
        let daughter = first + gap;
        let (labels, draw) =
            ([mother, daughter].map(|cell| self.labels[cell].0), self.draws[daughter].0);
        (self.labels[mother], self.labels[daughter]) = (DivisionLabel(-1), DivisionLabel(1));
        let cues = self.rules.0.traits.cues;
        if cues.contains(Cue::Noise) {
            let luck = programme.noise_probability();
            draw_noise(&mut self.draws[daughter..=daughter], luck, rng);
        }
        let is_relabelled = cues.contains(Cue::Lineage) && labels != [-1, 1];
        Some(is_relabelled || draw != self.draws[daughter].0)
    }

    /// Lets all cells of a colony follow what they read, and its viability, fecundity, hazard and
    /// stock what they do.
    fn follow(
        &mut self,
        event: Event,
        body: &SharedBody,
        programme: &Programme,
        memory: &mut Memory,
        earlier: &mut EarlierReleases,
    ) {
        let here = event.site as usize;
        let rows = self.counts[here].rows(here, self.capacity);
        if self.rules.0.traits.cues.contains(Cue::Lineage) {
            self.means[here].lineage = mean_label(&self.labels[rows.clone()]);
        }
        let colony = Colony { rules: self.rules, programme, means: &self.means[here] };
        let cells = Cells {
            labels: &self.labels[rows.clone()],
            exposed: &self.exposed[rows.clone()],
            draws: &self.draws[rows.clone()],
            shares: &mut self.shares[rows.clone()],
            budgets: &mut self.budgets[rows.clone()],
            outputs: &mut self.outputs[rows.clone()],
        };
        colony.split(&Heeded::by(self.rules), Some(body), cells, &mut memory.readings);
        let outputs = &mut self.outputs[rows.clone()];
        let (budgets, exposed) = (&self.budgets[rows.clone()], &self.exposed[rows.clone()]);
        charge(self.rules, body, budgets, exposed, outputs);
        let achieved = match self.rules.0.sharing() {
            None => pooled(outputs),
            Some(sharing) => {
                let graph = &body.development.graph;
                memory.spreading.spread(graph, &sharing, outputs, &mut self.received[rows])
            }
        };
        let left = self.turn(event, achieved);
        earlier.of_life[here] += left.of_piece;
        if left.of_tick > 0 {
            earlier.of_tick.push((event.site, left.of_tick));
        }
    }

    /// From the event on a colony achieves `[V, B]`: what its stock has released since the last change.
    fn turn(&mut self, event: Event, achieved: [f64; 2]) -> Left {
        let here = event.site as usize;
        let stock = PropaguleStock {
            since: self.since[here],
            until: self.until[here],
            head_start: self.head_starts[here],
            rate: self.rates[here],
        };
        let mut turn = Turn { stock, vitals: self.vitals[here], dies_h: self.lives[here].dies_h };
        let left = turn.take(self.rules, self.clock, event.at_h, achieved);
        self.vitals[here] = turn.vitals;
        self.lives[here].dies_h = turn.dies_h;
        let PropaguleStock { since, until, head_start, rate } = turn.stock;
        (self.since[here], self.until[here]) = (since, until);
        (self.head_starts[here], self.rates[here]) = (head_start, rate);
        left
    }
}

#[cfg(test)]
mod tests;
