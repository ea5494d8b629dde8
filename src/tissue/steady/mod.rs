//! The one steady solver on a body's graph, for nutrient, waste and support.
//!
//! All three are balances of each cell, `sum_j (u_i - u_j) + (exchange with the bath) + rate(u_i) = 0`,
//! with rates that rise with u: the solution exists wherever the bath or use bounds it, is unique, and
//! lies at or above 0. Support is linear; the others are solved by Newton's method. What is asked of a
//! solution is asked of each cell relative to its own value, for a body's viability is ruled by the
//! least supported cell.
//!
//! Where a number that comes in (an output, what a cell is fed, a parameter) is negative or not finite,
//! or kappa is 0, all of the solution is NaN. Guesses may be anything.

mod contacts;
mod elimination;
mod linear;
mod reacting;
mod reaction;
mod support;
#[cfg(test)]
mod tests;

use contacts::Contacts;
use linear::Linear;
use reaction::Release;

use super::fields::{Fields, Nutrient, Sharing, Waste};
use super::graph::BodyGraph;

/// How closely fields are solved: the imbalance of a cell that is let pass, relative to what it holds.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Precision {
    /// Nutrient and waste, relative to the diagonal of the balance.
    reacting: f64,
    /// Support, relative to its use.
    support: f64,
}

impl Precision {
    const FULL: Self = Self { reacting: 1e-11, support: 2e-6 };
    const WORKING: Self = Self { reacting: 1e-5, support: 1e-4 };
}

impl Default for Precision {
    fn default() -> Self {
        Self::FULL
    }
}

/// Solves fields in the same working memory: once it has seen the largest body, it asks for no more.
#[derive(Debug, Clone, Default)]
pub struct SteadySolver {
    precision: Precision,
    contacts: Contacts,
    linear: Linear,
    /// The field that is being solved, filled up so that contacts can be summed.
    field: Vec<f64>,
    /// Conductance of each cell to all that is around it, and what flows in from the bath.
    conductance: Vec<f64>,
    inflow: Vec<f64>,
    /// Which cells no bath reaches, not even through others.
    cut_off: Vec<bool>,
    to_visit: Vec<u32>,
}

impl SteadySolver {
    /// A solver for work in which a field is one of thousands: support to within 1e-4 of each cell's own
    /// value, and so viability; nutrient and waste to within 2e-4 in bodies of up to 1,000 cells.
    #[must_use]
    pub fn working() -> Self {
        Self { precision: Precision::WORKING, ..Self::default() }
    }

    /// From now on solves as closely as a new solver.
    pub(super) fn work_fully(&mut self) {
        self.precision = Precision::FULL;
    }

    /// From now on solves as [`Self::working`] says.
    pub(super) fn work_quickly(&mut self) {
        self.precision = Precision::WORKING;
    }

    /// The steady nutrient of a body: `u` holds a first guess (the last solution of a body that has
    /// changed a little is best; whatever is not above 0 is replaced by the bath's 1) and then the
    /// solution, relative to the bath, `0 < u <= 1`.
    ///
    /// In a part of the body that no bath reaches, not even through other cells, u is 0; without
    /// demand it stays at the guess there.
    pub fn nutrient(&mut self, graph: &BodyGraph, nutrient: &Nutrient, u: &mut [f64]) {
        let Nutrient { demand, kappa, exchange } = *nutrient;
        if ![demand, kappa, exchange].into_iter().all(is_usable) || kappa == 0.0 {
            return u.fill(f64::NAN);
        }
        self.take(graph, u, |u| if u > 0.0 && u.is_finite() { u } else { 1.0 });
        self.balance(graph, exchange, 1.0, nutrient);
        let keep_cut_off = demand == 0.0;
        for ((u, field), cut_off) in u.iter_mut().zip(&self.field).zip(&self.cut_off) {
            if !(*cut_off && keep_cut_off) {
                *u = field.min(1.0);
            }
        }
    }

    /// The steady waste of a body whose cells would earn `fed` without it: `w` holds a first guess
    /// (whatever is not above 0 is replaced by 0) and then the solution, relative to the toxic
    /// concentration.
    ///
    /// In a part of the body that no bath reaches, not even through other cells, waste mounts for ever:
    /// w is infinite, and income 0. Where nobody releases anything, w is 0.
    pub fn waste(&mut self, graph: &BodyGraph, waste: &Waste, fed: &[f64], w: &mut [f64]) {
        let Waste { release, exchange } = *waste;
        let mut numbers = fed.iter().copied().chain([release, exchange]);
        if !numbers.all(is_usable) {
            return w.fill(f64::NAN);
        }
        if release == 0.0 || fed.iter().all(|fed| *fed == 0.0) {
            return w.fill(0.0);
        }
        self.take(graph, w, |w| if w > 0.0 && w.is_finite() { w } else { 0.0 });
        self.balance(graph, exchange, 0.0, &Release { waste, fed });
        for ((w, field), cut_off) in w.iter_mut().zip(&self.field).zip(&self.cut_off) {
            *w = if *cut_off { f64::INFINITY } else { *field };
        }
    }

    /// The steady support of a body whose cells put out `output`: `support` holds the solution.
    ///
    /// Without leak its mean is that of the output. A cell's support is above 0 wherever a cell of the
    /// same part of the body puts something out; a part in which none does has support 0.
    pub fn support(
        &mut self,
        graph: &BodyGraph,
        sharing: &Sharing,
        output: &[f64],
        support: &mut [f64],
    ) {
        let Sharing { range_diameters, leak } = *sharing;
        let a = range_diameters * range_diameters / 2.0;
        if !output.iter().copied().chain([a, leak]).all(is_usable) {
            return support.fill(f64::NAN);
        }
        support.copy_from_slice(output);
        // Below this, support would not differ from output by a rounding error.
        if a >= f64::EPSILON / 64.0 && output.iter().any(|output| *output > 0.0) {
            self.spread(graph, a, leak, support);
        }
    }

    /// Incomes of a body's cells relative to e0, under whatever fields there are. `u` and `w` hold
    /// guesses (one entry per cell) and then solutions of the fields that there are.
    pub fn incomes(
        &mut self,
        graph: &BodyGraph,
        fields: &Fields,
        [u, w]: [&mut [f64]; 2],
        incomes: &mut [f64],
    ) {
        incomes.fill(1.0);
        if let Some(nutrient) = &fields.nutrient {
            self.nutrient(graph, nutrient, u);
            for (income, u) in incomes.iter_mut().zip(&*u) {
                *income = nutrient.income(*u);
            }
        }
        if let Some(waste) = &fields.waste {
            self.waste(graph, waste, incomes, w);
            for (income, w) in incomes.iter_mut().zip(&*w) {
                *income /= 1.0 + w;
            }
        }
    }

    /// Takes over a body and a guess of its field.
    fn take(&mut self, graph: &BodyGraph, guess: &[f64], usable: impl Fn(f64) -> f64) {
        self.contacts.read(graph);
        self.contacts.fit(&mut self.field);
        for (field, guess) in self.field[..graph.cells()].iter_mut().zip(guess) {
            *field = usable(*guess);
        }
    }
}

fn is_usable(number: f64) -> bool {
    number >= 0.0 && number.is_finite()
}
