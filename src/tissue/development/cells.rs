//! The cells of a growing body: what they have saved, what they earn, since when they are hungry.

use super::super::layout::VACANT;

/// Label of a cell that its last division made a mother.
const MOTHER: i8 = -1;
/// Label of a cell that its last division made a daughter.
const DAUGHTER: i8 = 1;

/// Columns of cells in order of birth.
#[derive(Debug, Clone, Default)]
pub(super) struct Cells {
    pub(super) labels: Vec<i8>,
    /// Reserve at `since_h`, eu.
    reserves_eu: Vec<f64>,
    since_h: Vec<f64>,
    /// Reserve at which each cell divides, eu.
    costs_eu: Vec<f64>,
    /// Income less upkeep, eu/h.
    rates: Vec<f64>,
    /// Since when each cell is hungry, h; infinite where it is not.
    hungry_h: Vec<f64>,
}

impl Cells {
    pub(super) const fn count(&self) -> usize {
        self.labels.len()
    }

    pub(super) fn clear(&mut self) {
        self.labels.clear();
        self.hungry_h.clear();
        for column in self.numbers() {
            column.clear();
        }
    }

    const fn numbers(&mut self) -> [&mut Vec<f64>; 4] {
        [&mut self.reserves_eu, &mut self.since_h, &mut self.costs_eu, &mut self.rates]
    }

    /// Adds a founder.
    pub(super) fn found(&mut self, cost_eu: f64, rate: f64) {
        self.add(0, 0.0, cost_eu, rate);
    }

    fn add(&mut self, label: i8, now_h: f64, cost_eu: f64, rate: f64) {
        self.labels.push(label);
        self.reserves_eu.push(0.0);
        self.since_h.push(now_h);
        self.costs_eu.push(cost_eu);
        self.rates.push(rate);
        self.hungry_h.push(f64::INFINITY);
    }

    /// Divides a cell; the costs are those of the next division of mother and daughter.
    pub(super) fn divide(&mut self, mother: usize, now_h: f64, costs_eu: [f64; 2]) {
        self.labels[mother] = MOTHER;
        self.reserves_eu[mother] = 0.0;
        self.since_h[mother] = now_h;
        self.costs_eu[mother] = costs_eu[0];
        self.add(DAUGHTER, now_h, costs_eu[1], self.rates[mother]);
    }

    /// When a cell can divide, as it earns now; infinite if never.
    pub(super) fn ready_h(&self, cell: usize) -> f64 {
        let missing = self.costs_eu[cell] - self.reserves_eu[cell];
        if missing <= 0.0 {
            self.since_h[cell]
        } else if self.rates[cell] > 0.0 {
            self.since_h[cell] + missing / self.rates[cell]
        } else {
            f64::INFINITY
        }
    }

    /// Brings reserves up to `now_h`.
    pub(super) fn save(&mut self, now_h: f64) {
        let columns = self.reserves_eu.iter_mut().zip(&mut self.since_h);
        for ((reserve, since_h), (cost, rate)) in columns.zip(self.costs_eu.iter().zip(&self.rates))
        {
            // Hours are never negative, but 0 times an infinite rate would be no number.
            if now_h > *since_h {
                *reserve = (*reserve + (now_h - *since_h) * rate).max(0.0).min(*cost);
            }
            *since_h = now_h;
        }
    }

    /// Sets what a cell earns from `now_h` on, after upkeep.
    pub(super) fn earn(&mut self, cell: usize, rate: f64, now_h: f64) {
        self.rates[cell] = rate;
        let hungry_h = &mut self.hungry_h[cell];
        *hungry_h = if rate < 0.0 { hungry_h.min(now_h) } else { f64::INFINITY };
    }

    /// Since when the longest hungry cell is so, h; infinite if none is.
    pub(super) fn longest_hungry_h(&self) -> f64 {
        self.hungry_h.iter().copied().fold(f64::INFINITY, f64::min)
    }

    /// Removes the cells that are hungry since `since_h` or longer. `numbers` then holds each cell's new
    /// number, [`VACANT`] for the dead. Returns how many died.
    pub(super) fn bury(&mut self, since_h: f64, numbers: &mut Vec<u32>) -> usize {
        let before = self.count();
        let mut living = 0;
        numbers.clear();
        numbers.extend(self.hungry_h.iter().map(|hungry_h| {
            if *hungry_h <= since_h {
                return VACANT;
            }
            living += 1;
            living - 1
        }));
        keep(&mut self.labels, numbers);
        keep(&mut self.hungry_h, numbers);
        for column in self.numbers() {
            keep(column, numbers);
        }
        before - self.count()
    }

    /// What each cell has saved, eu.
    pub(super) fn reserves_eu(&self) -> Vec<f32> {
        self.reserves_eu.iter().map(|reserve| *reserve as f32).collect()
    }
}

/// Keeps the entries of cells that are not dead.
fn keep<T>(column: &mut Vec<T>, numbers: &[u32]) {
    let mut numbers = numbers.iter();
    column.retain(|_| numbers.next().is_some_and(|number| *number != VACANT));
}
