//! Bodies for the tests of fields: balls, chains and any other sites, as graphs.

use std::collections::BTreeMap;

use somadawn::tissue::{BodyGraph, Lattice, NEIGHBOURS, SITES_AROUND, compact_radius_um};

/// A body of cells on lattice sites all of whose empty neighbour sites the water reaches.
pub(crate) fn body_on(sites: &[[i32; 3]]) -> BodyGraph {
    let cells: BTreeMap<[i32; 3], u32> = sites.iter().copied().zip(0..).collect();
    let mut graph = BodyGraph::with_capacity(sites.len());
    for site in sites {
        let around = NEIGHBOURS.map(|step| [0, 1, 2].map(|axis| site[axis] + step[axis]));
        let touching: Vec<u32> =
            around.iter().filter_map(|next| cells.get(next).copied()).collect();
        let empty = (SITES_AROUND - touching.len()) as u8;
        graph.push(touching, empty, empty);
    }
    graph
}

/// Sites of a straight line of cells each of which touches the next.
pub(crate) fn chain(cells: i32) -> Vec<[i32; 3]> {
    (0..cells).map(|cell| [cell, cell, 0]).collect()
}

/// Sites of whole shells around a site, `cells` or more; from the middle outwards.
pub(crate) fn ball(cells: usize) -> Vec<[i32; 3]> {
    let lattice = Lattice::around(cells);
    lattice.order().iter().map(|place| lattice.coordinates(*place).map(i32::from)).collect()
}

/// A compact body and its radius in cell diameters, that of the ball of the same volume.
pub(crate) struct Ball {
    pub(crate) graph: BodyGraph,
    pub(crate) radius: f64,
}

impl Ball {
    /// Whole shells of `cells` or more; cell 0 is in the middle.
    pub(crate) fn of(cells: usize) -> Self {
        let sites = ball(cells);
        Self { graph: body_on(&sites), radius: compact_radius_um(sites.len(), 1.0) }
    }
}

/// Coefficients of the polynomial in x of that degree with the least squared distance to the points.
pub(crate) fn polynomial<const TERMS: usize>(x: &[f64], y: &[f64]) -> [f64; TERMS] {
    let power = |x: f64, exponent: usize| x.powi(i32::try_from(exponent).expect("a low power"));
    let mut rows = vec![[0.0; TERMS]; TERMS];
    let mut right = [0.0; TERMS];
    for (x, y) in x.iter().zip(y) {
        for (i, row) in rows.iter_mut().enumerate() {
            for (j, entry) in row.iter_mut().enumerate() {
                *entry += power(*x, i + j);
            }
            right[i] += power(*x, i) * y;
        }
    }
    // Gauss and Jordan; the matrix is positive definite.
    for pivot in 0..TERMS {
        let pivot_row = rows[pivot];
        let (head, value) = (pivot_row[pivot], right[pivot] / pivot_row[pivot]);
        for i in 0..TERMS {
            let factor = rows[i][pivot];
            for j in 0..TERMS {
                let kept = if i == pivot { 0.0 } else { rows[i][j] };
                let sign = if i == pivot { 1.0 } else { -factor };
                rows[i][j] = kept + sign * pivot_row[j] / head;
            }
            right[i] = if i == pivot { value } else { right[i] - factor * value };
        }
    }
    right
}

/// What the values tend to as `spacing`, the cell diameter over the body's radius, goes to 0: the
/// quadratic through them that fits best, at 0.
pub(crate) fn limit(spacing: &[f64], values: &[f64]) -> f64 {
    polynomial::<3>(spacing, values)[0]
}

/// The power of `spacing` with which errors vanish: slope of log error over log spacing.
pub(crate) fn observed_order(spacing: &[f64], errors: &[f64]) -> f64 {
    let logs = |values: &[f64]| values.iter().map(|value| value.abs().ln()).collect::<Vec<_>>();
    polynomial::<2>(&logs(spacing), &logs(errors))[1]
}

/// Rows of a table in `tests/data` whose columns are all numbers.
pub(crate) fn numbers(table: &str) -> Vec<Vec<f64>> {
    table
        .lines()
        .skip(1)
        .map(|row| row.split(',').map(|x| x.parse().expect("a number")).collect())
        .collect()
}
