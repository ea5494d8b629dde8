//! The course of a development: which event comes next, and what it changes.

use std::cmp::Reverse;
use std::collections::BinaryHeap;

use rand::Rng;

use super::super::draws::standard_normal;
use super::super::graph::BodyGraph;
use super::super::growth::LEAST_COST_SHARE;
use super::super::layout::{Concentrations, Layout, pick};
use super::super::steady::SteadySolver;
use super::cells::Cells;
use super::{Development, Ending, GrowthRules};

/// Growth after which fields are solved anew, as a share of the body's cells.
///
/// Against solving after every division this left the mean duration of growth to 64 cells (57.7 h, least
/// income 0.93) as it was to within the 0.1 h that 4,000 bodies tell apart, even at twice the step.
pub(super) const STEP: f64 = 1.0 / 16.0;

/// Times that differ by less than this share of the shortest division interval are equal: cells on
/// equal sites have equal incomes but for what the solver leaves over.
const EQUAL_TIMES: f64 = 1e-6;

/// A body on its way, and the memory it takes.
#[derive(Debug, Clone)]
pub(super) struct Course {
    rules: GrowthRules,
    step: f64,
    layout: Layout,
    solver: SteadySolver,
    graph: BodyGraph,
    cells: Cells,
    incomes: Vec<f64>,
    fields: Concentrations,
    /// Divisions to come, as cells earn now.
    queue: BinaryHeap<Reverse<Due>>,
    dividing: Vec<u32>,
    numbers: Vec<u32>,
    state: State,
}

/// Where a body stands.
#[derive(Debug, Clone, Default)]
struct State {
    now_h: f64,
    /// Income of a fully fed cell after the tax, eu/h.
    full_income: f64,
    /// Times closer than this are equal, h.
    equal_h: f64,
    grown: bool,
    /// Divisions since the fields were solved.
    unsolved: usize,
    /// When the next cell starves, h.
    starving_h: f64,
    births_h: Vec<f64>,
    starved: usize,
    /// The largest size so far, and how many have starved since it was reached.
    largest: usize,
    starved_since: usize,
}

impl Course {
    pub(super) fn under(rules: GrowthRules) -> Self {
        Self {
            layout: Layout::of(rules.plan, rules.adult_cells),
            rules,
            step: STEP,
            solver: SteadySolver::default(),
            graph: BodyGraph::with_capacity(0),
            cells: Cells::default(),
            incomes: Vec::new(),
            fields: [Vec::new(), Vec::new()],
            queue: BinaryHeap::new(),
            dividing: Vec::new(),
            numbers: Vec::new(),
            state: State::default(),
        }
    }

    /// The same, but solving fields anew after growth by `step` of the cells.
    #[cfg(test)]
    pub(super) fn in_steps(rules: GrowthRules, step: f64) -> Self {
        Self { step, ..Self::under(rules) }
    }

    pub(super) fn run(&mut self, income_share: f64, rng: &mut impl Rng) -> Development {
        self.found(income_share, rng);
        let ending = loop {
            if let Some(ending) = self.advance(rng) {
                break ending;
            }
        };
        self.finish(ending)
    }

    fn found(&mut self, income_share: f64, rng: &mut impl Rng) {
        let founders = self.rules.propagule_cells;
        self.layout.found(founders, rng);
        let full_income = income_share * self.rules.income_eu_per_h;
        let interval_h = self.rules.division_cost_eu / (full_income - self.rules.upkeep_eu_per_h);
        let interval_h = if interval_h.is_finite() { interval_h.max(0.0) } else { 0.0 };
        self.state = State {
            full_income,
            equal_h: EQUAL_TIMES * interval_h,
            births_h: vec![0.0; founders],
            largest: founders,
            ..State::default()
        };
        self.cells.clear();
        for _ in 0..founders {
            let cost = self.draw_cost(rng);
            self.cells.found(cost, 0.0);
        }
        self.solve();
    }

    fn draw_cost(&self, rng: &mut impl Rng) -> f64 {
        let mean = self.rules.division_cost_eu;
        if self.rules.division_cv > 0.0 {
            mean * (1.0 + self.rules.division_cv * standard_normal(rng)).max(LEAST_COST_SHARE)
        } else {
            mean
        }
    }

    /// Goes on to the next event, or tells how the development has ended.
    fn advance(&mut self, rng: &mut impl Rng) -> Option<Ending> {
        let state = &self.state;
        if self.cells.count() == 0 {
            return Some(Ending::Stunted(state.now_h));
        }
        if !state.grown && self.cells.count() >= self.rules.adult_cells {
            self.grow_up();
            return None;
        }
        let next = self.queue.peek().map_or(f64::INFINITY, |Reverse(due)| due.at_h);
        let division_h = if state.grown { f64::INFINITY } else { next };
        let next_h = division_h.min(state.starving_h);
        let deadly = division_h > state.starving_h;
        if self.is_stale(division_h) && (deadly || next_h > state.now_h + state.equal_h) {
            self.solve();
            return None;
        }
        if next_h == f64::INFINITY {
            let ending = if state.grown { Ending::Adult } else { Ending::Stunted };
            return Some(ending(state.now_h));
        }
        self.state.now_h = state.now_h.max(next_h);
        if division_h <= self.state.starving_h {
            self.divide_due(rng);
            return None;
        }
        self.starve()
    }

    /// Whether the fields must be solved before time goes on: always before a death, so that only those
    /// die who are still hungry.
    fn is_stale(&self, division_h: f64) -> bool {
        let growth = self.step * self.cells.count() as f64;
        let due = self.state.unsolved as f64 >= growth;
        self.state.unsolved > 0
            && (due || division_h == f64::INFINITY || division_h > self.state.starving_h)
    }

    fn grow_up(&mut self) {
        self.state.grown = true;
        self.layout.mature();
        self.solve();
    }

    /// Brings reserves up to date, solves the fields and sets what everyone earns from now on.
    fn solve(&mut self) {
        if self.state.grown {
            self.solver.work_fully();
        } else {
            self.solver.work_quickly();
        }
        let now_h = self.state.now_h;
        self.cells.save(now_h);
        self.incomes.clear();
        self.incomes.resize(self.cells.count(), 1.0);
        if self.rules.fields.act() && self.cells.count() > 0 {
            self.layout.describe(&mut self.graph);
            self.layout.recall(&mut self.fields);
            let [u, w] = &mut self.fields;
            self.solver.incomes(&self.graph, &self.rules.fields, [u, w], &mut self.incomes);
            self.layout.remember(&self.fields);
        }
        for (cell, income) in self.incomes.iter().enumerate() {
            let rate = self.state.full_income * income - self.rules.upkeep_eu_per_h;
            self.cells.earn(cell, rate, now_h);
        }
        self.state.starving_h = self.cells.longest_hungry_h() + self.rules.starvation_h;
        self.state.unsolved = 0;
        self.foresee();
    }

    /// Fills the queue anew.
    fn foresee(&mut self) {
        let mut due = std::mem::take(&mut self.queue).into_vec();
        due.clear();
        let cells = &self.cells;
        let all =
            (0..cells.count()).map(|cell| Due { at_h: cells.ready_h(cell), cell: cell as u32 });
        due.extend(all.filter(|due| due.at_h < f64::INFINITY).map(Reverse));
        self.queue = BinaryHeap::from(due);
    }

    /// Divides the cells whose time has come, in random order, until the body is full.
    fn divide_due(&mut self, rng: &mut impl Rng) {
        let until_h = self.state.now_h + self.state.equal_h;
        self.dividing.clear();
        while let Some(Reverse(due)) = self.queue.peek().filter(|Reverse(due)| due.at_h <= until_h)
        {
            self.dividing.push(due.cell);
            self.queue.pop();
        }
        for turn in 0..self.dividing.len() {
            if self.cells.count() >= self.rules.adult_cells {
                return;
            }
            let rest = self.dividing.len() - turn;
            let chosen = if rest > 1 { pick(rest, rng) } else { 0 };
            self.dividing.swap(turn, turn + chosen);
            let mother = self.dividing[turn];
            if self.layout.divide(mother, rng) {
                self.bear(mother, rng);
            }
        }
    }

    /// Takes note of a daughter of `mother`.
    fn bear(&mut self, mother: u32, rng: &mut impl Rng) {
        let now_h = self.state.now_h;
        let daughter = self.cells.count() as u32;
        let costs = [self.draw_cost(rng), self.draw_cost(rng)];
        self.cells.divide(mother as usize, now_h, costs);
        for cell in [mother, daughter] {
            let at_h = self.cells.ready_h(cell as usize);
            self.queue.push(Reverse(Due { at_h, cell }));
        }
        self.state.births_h.push(now_h);
        if self.rules.fields.act() {
            self.state.unsolved += 1;
        }
        if self.cells.count() > self.state.largest {
            self.state.largest = self.cells.count();
            self.state.starved_since = 0;
        }
    }

    /// Buries those whose time is over.
    fn starve(&mut self) -> Option<Ending> {
        let since_h = self.cells.longest_hungry_h() + self.state.equal_h;
        let dead = self.cells.bury(since_h, &mut self.numbers);
        self.layout.bury(&self.numbers);
        self.state.starved += dead;
        self.state.starved_since += dead;
        self.solve();
        let spent = !self.state.grown && self.state.starved_since >= self.state.largest;
        spent.then_some(Ending::Stunted(self.state.now_h))
    }

    fn finish(&mut self, ending: Ending) -> Development {
        if !self.state.grown {
            // Grown or not, the final body's fields are solved as closely as any.
            self.state.grown = true;
            self.solve();
        }
        self.cells.save(self.state.now_h);
        self.incomes.resize(self.cells.count(), 1.0);
        self.layout.describe(&mut self.graph);
        Development {
            ending,
            coordinates: self.layout.coordinates(),
            labels: self.cells.labels.clone(),
            reserves_eu: self.cells.reserves_eu(),
            incomes: self.incomes.clone(),
            graph: self.graph.clone(),
            births_h: std::mem::take(&mut self.state.births_h),
            starved: self.state.starved,
        }
    }
}

/// A division to come.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Due {
    at_h: f64,
    cell: u32,
}

impl Eq for Due {}

impl Ord for Due {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        self.at_h.total_cmp(&other.at_h).then(self.cell.cmp(&other.cell))
    }
}

impl PartialOrd for Due {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}
