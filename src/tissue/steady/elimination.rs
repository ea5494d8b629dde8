//! Incomplete elimination of cells, a preconditioner for hard systems.
//!
//! Cells are eliminated from the far end of the body inwards; each takes its share of its later
//! contacts' diagonals with it, and contacts between those are left out (incomplete Cholesky
//! factorisation that changes the diagonal alone; Meijerink & van der Vorst 1977). Where contacts make
//! no ring, as in a chain, nothing is left out and the solution is exact.

use crate::tissue::graph::BodyGraph;

/// Has no rank yet.
const UNRANKED: u32 = u32::MAX;

/// An order of a body's cells and the pivots of the elimination in it.
#[derive(Debug, Clone, Default)]
pub(super) struct Elimination {
    /// Cells in the order of elimination, and each cell's rank in it.
    order: Vec<u32>,
    rank: Vec<u32>,
    /// Ranks of contacts that are eliminated before and after each rank, one's after the other's, and
    /// where each rank's begin.
    before: Vec<u32>,
    after: Vec<u32>,
    starts: Vec<[u32; 2]>,
    inverse_pivots: Vec<f64>,
    solution: Vec<f64>,
}

impl Elimination {
    /// Finds order and pivots for the matrix with that diagonal and -1 for each contact.
    pub(super) fn factorise(&mut self, graph: &BodyGraph, diagonal: &[f64]) {
        self.rank_cells(graph);
        self.sort_contacts(graph);
        self.inverse_pivots.clear();
        for (rank, cell) in self.order.iter().enumerate() {
            let taken: f64 =
                self.earlier(rank).iter().map(|j| self.inverse_pivots[*j as usize]).sum();
            self.inverse_pivots.push((diagonal[*cell as usize] - taken).recip());
        }
    }

    /// Solves the incomplete system with right-hand side `b`.
    pub(super) fn solve(&mut self, b: &[f64], x: &mut [f64]) {
        let mut y = std::mem::take(&mut self.solution);
        y.clear();
        for (rank, cell) in self.order.iter().enumerate() {
            let known: f64 = self.earlier(rank).iter().map(|j| y[*j as usize]).sum();
            y.push((b[*cell as usize] + known) * self.inverse_pivots[rank]);
        }
        for (rank, cell) in self.order.iter().enumerate().rev() {
            let known: f64 = self.later(rank).iter().map(|j| y[*j as usize]).sum();
            y[rank] += known * self.inverse_pivots[rank];
            x[*cell as usize] = y[rank];
        }
        self.solution = y;
    }

    fn earlier(&self, rank: usize) -> &[u32] {
        &self.before[self.starts[rank][0] as usize..self.starts[rank + 1][0] as usize]
    }

    fn later(&self, rank: usize) -> &[u32] {
        &self.after[self.starts[rank][1] as usize..self.starts[rank + 1][1] as usize]
    }

    /// Orders the cells of each part of the body by their distance from an end of it, far ones first.
    fn rank_cells(&mut self, graph: &BodyGraph) {
        let n = graph.cells();
        self.order.clear();
        self.rank.clear();
        self.rank.resize(n, UNRANKED);
        for cell in 0..n {
            if self.rank[cell] == UNRANKED {
                let from = self.order.len();
                self.spread(graph, cell as u32);
                let end = self.order[self.order.len() - 1];
                for cell in self.order.drain(from..) {
                    self.rank[cell as usize] = UNRANKED;
                }
                self.spread(graph, end);
            }
        }
        self.order.reverse();
        for (rank, cell) in self.order.iter().enumerate() {
            self.rank[*cell as usize] = rank as u32;
        }
    }

    /// Appends the part of the body that `cell` belongs to, in order of distance from it.
    fn spread(&mut self, graph: &BodyGraph, cell: u32) {
        let mut next = self.order.len();
        self.rank[cell as usize] = 0;
        self.order.push(cell);
        while next < self.order.len() {
            for touching in graph.touching(self.order[next] as usize) {
                if self.rank[*touching as usize] == UNRANKED {
                    self.rank[*touching as usize] = 0;
                    self.order.push(*touching);
                }
            }
            next += 1;
        }
    }

    fn sort_contacts(&mut self, graph: &BodyGraph) {
        self.before.clear();
        self.after.clear();
        self.starts.clear();
        self.starts.push([0, 0]);
        for (rank, cell) in self.order.iter().enumerate() {
            for touching in graph.touching(*cell as usize) {
                let other = self.rank[*touching as usize];
                if (other as usize) < rank { &mut self.before } else { &mut self.after }
                    .push(other);
            }
            self.starts.push([self.before.len() as u32, self.after.len() as u32]);
        }
    }
}
