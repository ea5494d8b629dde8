//! What reaches whom in a body: the steady solver as theory's operator of support.

use std::sync::{Arc, Mutex, PoisonError};

use crate::theory::Spread;
use crate::tissue::{BodyGraph, Sharing, SteadySolver};

/// Cells up to which the whole operator is kept as a table.
const TABLED: usize = 256;
/// Refinements of a solution, at most.
const REFINEMENTS: usize = 4;
/// Residual relative to the output at which a solution is exact enough.
const EXACT: f64 = 1e-14;

/// The operator of support of a body, worked out once where the body is small.
#[derive(Debug)]
pub(super) struct Reach {
    graph: BodyGraph,
    sharing: Sharing,
    solver: Arc<Mutex<SteadySolver>>,
    /// Row i: what every cell has of a unit that cell i makes. Empty in large bodies.
    table: Vec<f64>,
}

impl Reach {
    /// The operator of the body with that graph; bodies may share a solver's memory.
    pub(super) fn new(
        graph: BodyGraph,
        sharing: Sharing,
        solver: Arc<Mutex<SteadySolver>>,
    ) -> Self {
        let cells = graph.cells();
        let mut reach = Self { graph, sharing, solver, table: Vec::new() };
        if cells <= TABLED {
            let mut table = vec![0.0; cells * cells];
            let mut output = vec![0.0; cells];
            for (source, row) in table.chunks_exact_mut(cells.max(1)).enumerate() {
                output[source] = 1.0;
                reach.refine(&output, row);
                output[source] = 0.0;
                for share in row {
                    *share = share.max(0.0);
                }
            }
            reach.table = table;
        }
        reach
    }

    fn solve(&self, output: &[f64], support: &mut [f64]) {
        // A solver holds nothing but scratch, which a panic elsewhere cannot have spoilt.
        let mut solver = self.solver.lock().unwrap_or_else(PoisonError::into_inner);
        solver.support(&self.graph, &self.sharing, output, support);
    }

    /// Solves, and solves again for what the solution leaves over, until that is rounding. The solver
    /// wants outputs that are not negative, so parts of either sign go one by one.
    fn refine(&self, output: &[f64], support: &mut [f64]) {
        let most = greatest(output);
        let (mut left, mut part) = (output.to_vec(), vec![0.0; output.len()]);
        let mut correction = vec![0.0; output.len()];
        let mut before = f64::INFINITY;
        support.fill(0.0);
        for _ in 0..=REFINEMENTS {
            let scale = greatest(&left);
            // What falls no further is rounding.
            if scale <= EXACT * most || scale.is_nan() || scale > 0.5 * before {
                return;
            }
            before = scale;
            for sign in [1.0, -1.0] {
                for (part, left) in part.iter_mut().zip(&left) {
                    *part = (sign * left / scale).max(0.0);
                }
                if part.iter().all(|part| *part == 0.0) {
                    continue;
                }
                self.solve(&part, &mut correction);
                for (support, correction) in support.iter_mut().zip(&correction) {
                    *support += sign * scale * correction;
                }
            }
            self.leave_over(output, support, &mut left);
        }
    }

    /// `v_i - S_i - a (sum_j (S_i - S_j) + leak open_i S_i)`, `a = lambda^2 / 2`.
    fn leave_over(&self, output: &[f64], support: &[f64], left: &mut [f64]) {
        let Sharing { range_diameters, leak } = self.sharing;
        let a = range_diameters * range_diameters / 2.0;
        for (cell, left) in left.iter_mut().enumerate() {
            let here = support[cell];
            let given: f64 =
                self.graph.touching(cell).iter().map(|next| here - support[*next as usize]).sum();
            let lost = leak * f64::from(self.graph.open()[cell]) * here;
            *left = output[cell] - here - a * (given + lost);
        }
    }

    fn look_up(&self, output: &[f64], support: &mut [f64]) {
        support.fill(0.0);
        for (row, output) in self.table.chunks_exact(output.len().max(1)).zip(output) {
            for (support, share) in support.iter_mut().zip(row) {
                *support += output * share;
            }
        }
    }
}

impl Spread for Reach {
    fn spread(&self, output: &[f64], support: &mut [f64]) {
        if self.table.is_empty() {
            self.solve(output, support);
        } else {
            self.look_up(output, support);
        }
    }

    fn spread_exactly(&self, output: &[f64], support: &mut [f64]) {
        if self.table.is_empty() {
            self.refine(output, support);
        } else {
            self.look_up(output, support);
        }
    }

    fn reach(&self, source: usize, support: &mut [f64]) {
        let cells = support.len();
        if let Some(row) = self.table.get(source * cells..(source + 1) * cells) {
            support.copy_from_slice(row);
        } else {
            let mut output = vec![0.0; cells];
            output[source] = 1.0;
            self.solve(&output, support);
        }
    }
}

fn greatest(values: &[f64]) -> f64 {
    values.iter().fold(0.0, |most, value| value.abs().max(most))
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// A line of cells that loses a little along its sides.
    fn line(cells: u32, range_diameters: f64) -> Reach {
        let mut graph = BodyGraph::with_capacity(cells as usize);
        for cell in 0..cells {
            let touching = [cell.checked_sub(1), Some(cell + 1).filter(|next| *next < cells)];
            graph.push(touching.into_iter().flatten(), 10, 10);
        }
        Reach::new(graph, Sharing { range_diameters, leak: 0.01 }, Arc::default())
    }

    /// Beyond the table a solution is refined, whatever the signs; where both exist they agree.
    #[test]
    fn tables_and_refined_solutions_leave_nothing_over() {
        for (cells, range) in [(5, 0.0), (40, 3.0), (256, 1.0), (300, 3.0), (300, 30.0)] {
            let reach = line(cells, range);
            assert_eq!(reach.table.is_empty(), cells > 256);
            let output: Vec<f64> = (0..cells).map(|i| f64::from(i % 7) - 2.5).collect();
            let (mut support, mut left) = (output.clone(), output.clone());
            reach.spread_exactly(&output, &mut support);
            reach.leave_over(&output, &support, &mut left);
            assert!(greatest(&left) < 1e-11 * greatest(&output), "{cells} {range}");
            let made: Vec<f64> = output.iter().map(|output| output.abs()).collect();
            let mut quick = made.clone();
            reach.spread(&made, &mut quick);
            reach.spread_exactly(&made, &mut support);
            for (quick, exact) in quick.iter().zip(&support) {
                assert_relative_eq!(quick, exact, max_relative = 1e-5);
            }
            reach.reach(3, &mut support);
            let mut unit = vec![0.0; made.len()];
            unit[3] = 1.0;
            reach.spread_exactly(&unit, &mut quick);
            for (one, other) in support.iter().zip(&quick) {
                assert_relative_eq!(one, other, max_relative = 1e-5, epsilon = 1e-12);
            }
        }
    }
}
