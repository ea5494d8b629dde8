//! Fields with which cells react: Newton's method, and exact balancing of one cell after the other.
//!
//! Rates are concave and rise with the field, contacts even it out: Newton's method from anywhere comes
//! to lie below the solution in one step, and then rises to it (Ortega & Rheinboldt 1970, on M-functions).

use super::SteadySolver;
use super::reaction::Reaction;
use crate::tissue::graph::BodyGraph;

/// Imbalance relative to the largest of diagonal times value that Newton's method can do nothing about.
const ROUNDING: f64 = 1e-14;
/// Steps of Newton's method.
const MOST_STEPS: usize = 200;
/// How much a step leaves of the imbalance that the linear system of the step knows of.
const LEFT_BY_STEP: f64 = 1e-3;
/// Relative change of a sweep at which all cells count as balanced.
const BALANCED: f64 = 1e-12;
/// Sweeps after which balancing gives up getting closer.
const MOST_SWEEPS: usize = 20_000;
/// Sweeps before the first step of Newton's method: they are cheap, and take away what is far off.
const FIRST_SWEEPS: usize = 2;

/// How far a field is from balance.
#[derive(Debug, Clone, Copy)]
struct Imbalance {
    /// Largest imbalance of a cell relative to its diagonal times its value, infinite if a value is not
    /// above 0 (but for cells where nothing is to be balanced).
    relative: f64,
    /// Largest imbalance relative to the largest of diagonal times value.
    absolute: f64,
}

impl SteadySolver {
    /// Sets each cell's conductance to its surroundings, empty sites counting `exchange`.
    pub(super) fn set_conductance(&mut self, graph: &BodyGraph, exchange: f64) {
        self.conductance.clear();
        let sites = graph.contacts().iter().zip(graph.open());
        self.conductance.extend(
            sites.map(|(contacts, open)| f64::from(*contacts) + exchange * f64::from(*open)),
        );
    }

    /// Brings the field into balance with the bath and the cells' rates, from the guess that it holds.
    pub(super) fn balance(
        &mut self,
        graph: &BodyGraph,
        exchange: f64,
        bath: f64,
        reaction: &impl Reaction,
    ) {
        self.set_conductance(graph, exchange);
        self.inflow.clear();
        self.inflow.extend(graph.open().iter().map(|open| exchange * bath * f64::from(*open)));
        self.find_cut_off(graph, exchange);
        for _ in 0..FIRST_SWEEPS {
            self.sweep_once(reaction);
        }
        if !self.take_steps(graph, reaction) {
            for value in &mut self.field[..graph.cells()] {
                *value = value.max(0.0);
            }
            self.sweep(reaction);
        }
    }

    /// Newton's method. Says whether every cell's value settled above 0.
    fn take_steps(&mut self, graph: &BodyGraph, reaction: &impl Reaction) -> bool {
        for _ in 0..MOST_STEPS {
            let off = self.linearise(reaction);
            if off.relative <= self.precision.reacting {
                return true;
            }
            if off.absolute <= ROUNDING {
                return false;
            }
            let mut first = None;
            self.linear.solve(graph, &self.contacts, |size, _, _| {
                size <= LEFT_BY_STEP * LEFT_BY_STEP * *first.get_or_insert(size)
            });
            for (value, change) in self.field.iter_mut().zip(&self.linear.x) {
                *value += change;
            }
        }
        false
    }

    /// Sets up the linear system of a step.
    fn linearise(&mut self, reaction: &impl Reaction) -> Imbalance {
        let n = self.contacts.cells();
        let linear = &mut self.linear;
        linear.x.clear();
        linear.x.resize(n, 0.0);
        linear.residual.resize(n, 0.0);
        linear.diagonal.resize(n, 1.0);
        self.contacts.sums(&self.field, &mut linear.residual);
        let (mut relative, mut largest, mut scale): (f64, f64, f64) = (0.0, 0.0, 0.0);
        for (cell, residual) in linear.residual.iter_mut().enumerate() {
            if self.cut_off[cell] {
                (*residual, linear.diagonal[cell]) = (0.0, 1.0);
                continue;
            }
            let (value, conductance) = (self.field[cell], self.conductance[cell]);
            let [rate, slope] = reaction.rate(cell, value);
            *residual += self.inflow[cell] - conductance * value - rate;
            linear.diagonal[cell] = conductance + slope;
            let weight = linear.diagonal[cell] * value;
            let off = residual.abs();
            let share = if off == 0.0 { 0.0 } else { off / weight.max(0.0) };
            relative = relative.max(share);
            largest = largest.max(off);
            scale = scale.max(weight);
        }
        Imbalance { relative, absolute: largest / scale }
    }

    /// Balances one cell after the other until nothing changes any more. Values at or above 0 stay so,
    /// and the smallest get as precise as the largest.
    pub(super) fn sweep(&mut self, reaction: &impl Reaction) {
        for _ in 0..MOST_SWEEPS {
            if self.sweep_once(reaction) <= BALANCED {
                return;
            }
        }
    }

    /// Returns the largest relative change.
    fn sweep_once(&mut self, reaction: &impl Reaction) -> f64 {
        let mut change: f64 = 0.0;
        for cell in 0..self.contacts.cells() {
            if self.cut_off[cell] {
                self.field[cell] = 0.0;
                continue;
            }
            let inflow = self.contacts.sum(cell, &self.field) + self.inflow[cell];
            let next = reaction.balance(cell, self.conductance[cell], inflow);
            change = change.max((next - self.field[cell]).abs() / next.max(f64::MIN_POSITIVE));
            self.field[cell] = next;
        }
        change
    }

    /// Marks the cells from which no way leads to the bath.
    fn find_cut_off(&mut self, graph: &BodyGraph, exchange: f64) {
        self.cut_off.clear();
        self.cut_off.extend(graph.open().iter().map(|open| exchange == 0.0 || *open == 0));
        self.to_visit.clear();
        let reached = self.cut_off.iter().enumerate().filter(|(_, cut_off)| !**cut_off);
        self.to_visit.extend(reached.map(|(cell, _)| cell as u32));
        while let Some(cell) = self.to_visit.pop() {
            for touching in graph.touching(cell as usize) {
                if std::mem::take(&mut self.cut_off[*touching as usize]) {
                    self.to_visit.push(*touching);
                }
            }
        }
    }
}
