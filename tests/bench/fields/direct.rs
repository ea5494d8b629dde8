//! The same linear system for a general-purpose sparse direct solver.

use rsparse::data::{Sprs, Trpl};
use somadawn::tissue::BodyGraph;

/// Order the unknowns by approximate minimum degree before the factorisation.
const MINIMUM_DEGREE: i8 = 0;

/// A symmetric positive definite system in compressed columns.
pub(crate) struct Direct {
    matrix: Sprs<f64>,
    right: Vec<f64>,
}

impl Direct {
    /// `sum_j (x_i - x_j) + own_i x_i = right_i` over the cells j that touch i.
    pub(crate) fn of(
        graph: &BodyGraph,
        own: impl Fn(usize) -> f64,
        right: impl Fn(usize) -> f64,
    ) -> Self {
        let mut entries = Trpl::new();
        for cell in 0..graph.cells() {
            let touching = graph.touching(cell);
            entries.append(cell, cell, touching.len() as f64 + own(cell));
            for other in touching {
                entries.append(cell, *other as usize, -1.0);
            }
        }
        Self { matrix: entries.to_sprs(), right: (0..graph.cells()).map(right).collect() }
    }

    /// Factorises and solves.
    ///
    /// # Panics
    /// When the matrix is not positive definite.
    pub(crate) fn solve(mut self) -> Vec<f64> {
        rsparse::cholsol(&self.matrix, &mut self.right, MINIMUM_DEGREE)
            .expect("a positive definite matrix");
        self.right
    }
}
