//! The one steady solver on a body's graph, for nutrient, waste and support.

use super::fields::{Fields, Nutrient, Sharing, Waste};
use super::graph::BodyGraph;

/// Relative change of a sweep at which a field counts as settled.
const SETTLED: f64 = 1e-10;
/// Sweeps after which a solve gives up getting closer.
const MOST_SWEEPS: usize = 100_000;

/// Solves fields in the same working memory.
#[derive(Debug, Clone, Default)]
pub struct SteadySolver {}

impl SteadySolver {
    /// The steady nutrient of a body: `u` holds a first guess (anything positive; the last solution of
    /// a body that has changed a little is best) and then the solution, relative to the bath.
    pub fn nutrient(&mut self, graph: &BodyGraph, nutrient: &Nutrient, u: &mut [f64]) {
        let Nutrient { demand, kappa, exchange } = *nutrient;
        sweep(graph, exchange, 1.0, u, |_, conductance, inflow| {
            // The positive root of s u + demand u / (kappa + u) = r.
            let b = conductance * kappa + demand - inflow;
            let root = (b * b + 4.0 * conductance * inflow * kappa).sqrt();
            if b > 0.0 {
                2.0 * inflow * kappa / (b + root)
            } else {
                (root - b) / (2.0 * conductance)
            }
        });
    }

    /// The steady waste of a body whose cells would earn `fed` without it: `w` holds a first guess and
    /// then the solution, relative to the toxic concentration.
    pub fn waste(&mut self, graph: &BodyGraph, waste: &Waste, fed: &[f64], w: &mut [f64]) {
        sweep(graph, waste.exchange, 0.0, w, |cell, conductance, inflow| {
            // The root of s w - release f / (1 + w) = r at or above r / s.
            let source = waste.release * fed[cell];
            let b = conductance - inflow;
            let root = (b * b + 4.0 * conductance * (source + inflow)).sqrt();
            if b > 0.0 {
                2.0 * (source + inflow) / (b + root)
            } else {
                (root - b) / (2.0 * conductance)
            }
        });
    }

    /// The steady support of a body whose cells put out `output`: `support` holds the solution.
    pub fn support(
        &mut self,
        graph: &BodyGraph,
        sharing: &Sharing,
        output: &[f64],
        support: &mut [f64],
    ) {
        support.copy_from_slice(output);
        let a = sharing.range_diameters * sharing.range_diameters / 2.0;
        if a == 0.0 {
            return;
        }
        sweep(graph, sharing.leak, 0.0, support, |cell, conductance, inflow| {
            (a * inflow + output[cell]) / (a * conductance + 1.0)
        });
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
}

/// Sets each cell in turn to what `settle(cell, conductance, inflow)` says, given its neighbours, until
/// nothing changes any more.
fn sweep(
    graph: &BodyGraph,
    exchange: f64,
    bath: f64,
    field: &mut [f64],
    settle: impl Fn(usize, f64, f64) -> f64,
) {
    for _ in 0..MOST_SWEEPS {
        let mut change: f64 = 0.0;
        for cell in 0..graph.cells() {
            let touching = graph.touching(cell);
            let open = exchange * f64::from(graph.open()[cell]);
            let inflow = touching.iter().map(|j| field[*j as usize]).sum::<f64>() + open * bath;
            let next = settle(cell, touching.len() as f64 + open, inflow);
            change = change.max((next - field[cell]).abs() / next.max(f64::MIN_POSITIVE));
            field[cell] = next;
        }
        if change <= SETTLED {
            return;
        }
    }
}
