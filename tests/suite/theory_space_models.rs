//! Placed bodies that the checks of space share, with support worked out apart from the program.

use std::sync::Arc;

use somadawn::theory::{
    CellKind, CueSet, LifeHistory, Model, PlacedBodies, PlacedBody, PlacedCell, Spread, TaskReturn,
};

use crate::theory_models::{bare_life, power};

/// An operator of support as a table: entry `[i][j]` is what cell i has of a unit that cell j makes.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Table(pub(crate) Vec<Vec<f64>>);

impl Spread for Table {
    fn spread(&self, output: &[f64], support: &mut [f64]) {
        for (support, row) in support.iter_mut().zip(&self.0) {
            *support = row.iter().zip(output).map(|(share, output)| share * output).sum();
        }
    }

    fn spread_exactly(&self, output: &[f64], support: &mut [f64]) {
        self.spread(output, support);
    }
}

impl Table {
    /// Support where the pairs of cells in `bonds` touch: the inverse of
    /// `(1 + a (neighbours_i + leak_i)) S_i - a sum_j S_j = v_i`, `a = range^2 / 2`, by elimination.
    pub(crate) fn of_bonds(bonds: &[(usize, usize)], leaks: &[f64], range: f64) -> Self {
        let a = range * range / 2.0;
        let cells = leaks.len();
        let mut rows = vec![vec![0.0; 2 * cells]; cells];
        for (cell, row) in rows.iter_mut().enumerate() {
            row[cell] = 1.0 + a * leaks[cell];
            row[cells + cell] = 1.0;
        }
        for &(i, j) in bonds {
            for (from, to) in [(i, j), (j, i)] {
                rows[from][from] += a;
                rows[from][to] -= a;
            }
        }
        for pivot in 0..cells {
            let scale = rows[pivot][pivot].recip();
            rows[pivot].iter_mut().for_each(|x| *x *= scale);
            let ruling = rows[pivot].clone();
            for (other, row) in rows.iter_mut().enumerate().filter(|(other, _)| *other != pivot) {
                let share = row[pivot];
                row.iter_mut().zip(&ruling).for_each(|(x, y)| *x -= share * y);
                debug_assert_ne!(other, pivot);
            }
        }
        Self(rows.into_iter().map(|row| row[cells..].to_vec()).collect())
    }

    /// A line of sealed cells.
    pub(crate) fn of_chain(cells: usize, range: f64) -> Self {
        let bonds: Vec<_> = (1..cells).map(|cell| (cell - 1, cell)).collect();
        Self::of_bonds(&bonds, &vec![0.0; cells], range)
    }

    /// Sealed cells each of which touches every other.
    pub(crate) fn of_huddle(cells: usize, range: f64) -> Self {
        let bonds: Vec<_> = (0..cells).flat_map(|i| (0..i).map(move |j| (i, j))).collect();
        Self::of_bonds(&bonds, &vec![0.0; cells], range)
    }
}

/// Founder cells at the surface with these incomes.
pub(crate) fn earning(incomes: &[f64]) -> Vec<PlacedCell> {
    let kind = CellKind { label: 0, exposed: true };
    incomes.iter().map(|income| PlacedCell { kind, income: *income }).collect()
}

/// A body that is adult at once, whose cells all touch another if there are any others.
pub(crate) fn adult(cells: Vec<PlacedCell>, spread: Option<Table>) -> PlacedBody {
    let spread = spread.map(|table| {
        let spread: Arc<dyn Spread> = Arc::new(table);
        spread
    });
    let cells_in_contact = if cells.len() > 1 { cells.len() } else { 0 };
    PlacedBody { cells, cells_in_contact, growth_h: Some(0.0), spread }
}

/// A life without growth or costs of that many cells.
pub(crate) fn bare_life_of(cells: usize) -> LifeHistory {
    LifeHistory { adult_cells: cells as u64, propagule_cells: cells as u64, ..bare_life() }
}

/// A model of one body, with power returns and a life without growth or costs.
pub(crate) fn of_body(exponents: [f64; 2], cues: CueSet, body: PlacedBody) -> Model {
    let returns: [TaskReturn; 2] = exponents.map(power);
    let life = bare_life_of(body.cells.len());
    Model::of_placed(life, returns, cues, PlacedBodies::new([(1.0, body)], 0.0))
}
