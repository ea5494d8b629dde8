//! The solver against a slow one that is plainly right: one cell balanced after the other until
//! nothing changes any more (Gauss & Seidel), from far below and to the last digits.

use super::reaction::{Reaction, Release, Supply};
use super::{Nutrient, Sharing, SteadySolver, Waste};
use crate::tissue::{BodyGraph, Lattice};

/// The first cells of a ball, in an order that has nothing to do with where they are.
fn body(cells: usize) -> BodyGraph {
    let lattice = Lattice::around(cells);
    let stride = (cells / 3..=cells).find(|stride| coprime(*stride, cells)).unwrap_or(1);
    let sites: Vec<u32> = (0..cells).map(|cell| lattice.order()[cell * stride % cells]).collect();
    let mut graph = BodyGraph::with_capacity(cells);
    for site in &sites {
        let cell_at = |next: u32| sites.iter().position(|site| *site == next);
        let touching: Vec<u32> =
            lattice.neighbours(*site).filter_map(cell_at).map(|cell| cell as u32).collect();
        let empty = (12 - touching.len()) as u8;
        graph.push(touching, empty, empty);
    }
    graph
}

fn coprime(mut a: usize, mut b: usize) -> bool {
    while b > 0 {
        (a, b) = (b, a % b);
    }
    a == 1
}

/// Balances cells in turn, starting from a field.
fn slowly(graph: &BodyGraph, exchange: f64, bath: f64, reaction: &impl Reaction) -> Vec<f64> {
    let mut field = vec![bath; graph.cells()];
    loop {
        let mut change: f64 = 0.0;
        for cell in 0..graph.cells() {
            let touching = graph.touching(cell);
            let open = exchange * f64::from(graph.open()[cell]);
            let inflow = touching.iter().map(|j| field[*j as usize]).sum::<f64>() + open * bath;
            let next = reaction.balance(cell, touching.len() as f64 + open, inflow);
            change = change.max((next - field[cell]).abs() / next);
            field[cell] = next;
        }
        if change < 1e-13 {
            return field;
        }
    }
}

fn assert_near(field: &[f64], exact: &[f64], tolerance: f64) {
    for (value, exact) in field.iter().zip(exact) {
        approx::assert_relative_eq!(*value, *exact, max_relative = tolerance);
    }
}

/// Outputs of germ and soma in no order, and of a single cell: what a working solver lets pass is said
/// in its documentation.
#[test]
fn a_working_solver_is_as_close_as_it_says() {
    let (mut working, mut full) = (SteadySolver::working(), SteadySolver::default());
    let viability = |support: &[f64]| crate::tissue::fields::viability(support);
    for cells in [13, 64, 300, 1_000] {
        let graph = body(cells);
        let mixed = (0..cells).map(|i| if i * i % 7 < 3 { 0.9 } else { 1e-3 }).collect();
        let lone = (0..cells).map(|i| if i == cells / 2 { 1.0 } else { 0.0 }).collect();
        let outputs: [Vec<f64>; 2] = [mixed, lone];
        for output in outputs {
            for range_diameters in [0.3, 1.0, 3.0, 10.0] {
                let sharing = Sharing { range_diameters, leak: 0.1 };
                let [mut quick, mut exact] = [(); 2].map(|()| vec![0.0; cells]);
                working.support(&graph, &sharing, &output, &mut quick);
                full.support(&graph, &sharing, &output, &mut exact);
                assert_near(&quick, &exact, 1e-4);
                let (quick, exact) = (viability(&quick), viability(&exact));
                approx::assert_relative_eq!(quick, exact, max_relative = 1e-4);
            }
        }
    }
}

#[test]
fn a_working_solver_feeds_cells_as_closely_as_it_says() {
    let (mut working, mut full) = (SteadySolver::working(), SteadySolver::default());
    for cells in [13, 64, 300, 1_000] {
        let graph = body(cells);
        for (demand, kappa) in [(0.05, 0.4), (0.5, 0.1), (5.0, 0.4), (5.0, 0.02)] {
            let nutrient = Nutrient { demand, kappa, exchange: 0.8 };
            let waste = Waste { release: 0.1, exchange: 0.8 };
            let [mut quick, mut exact] = [(); 2].map(|()| vec![1.0; cells]);
            working.nutrient(&graph, &nutrient, &mut quick);
            full.nutrient(&graph, &nutrient, &mut exact);
            assert_near(&quick, &exact, 2e-4);
            let [mut foul, mut exactly_foul] = [(); 2].map(|()| vec![0.0; cells]);
            working.waste(&graph, &waste, &exact, &mut foul);
            full.waste(&graph, &waste, &exact, &mut exactly_foul);
            assert_near(&foul, &exactly_foul, 2e-4);
        }
    }
}

#[test]
fn nutrient_is_that_of_the_slow_solver() {
    let mut solver = SteadySolver::default();
    for cells in [1, 2, 40, 300] {
        let graph = body(cells);
        for (demand, kappa, exchange) in [
            (0.1, 1.0, 1.0),
            (0.5, 0.01, 0.2),
            (5.0, 1e-6, 1.0),
            (1e6, 1e-6, 1.0),
            (30.0, 100.0, 0.5),
        ] {
            let nutrient = Nutrient { demand, kappa, exchange };
            let mut u = vec![1.0; cells];
            solver.nutrient(&graph, &nutrient, &mut u);
            assert_near(&u, &slowly(&graph, exchange, 1.0, &nutrient), 1e-9);
        }
    }
}

#[test]
fn waste_is_that_of_the_slow_solver() {
    let mut solver = SteadySolver::default();
    for cells in [1, 2, 40, 300] {
        let graph = body(cells);
        let fed: Vec<f64> = (0..cells).map(|cell| 0.1 + (cell % 3) as f64).collect();
        for (release, exchange) in [(0.01, 1.0), (2.0, 0.1), (1e4, 1.0)] {
            let waste = Waste { release, exchange };
            let mut w = vec![0.0; cells];
            solver.waste(&graph, &waste, &fed, &mut w);
            let release = Release { waste: &waste, fed: &fed };
            assert_near(&w, &slowly(&graph, exchange, 0.0, &release), 1e-9);
        }
    }
}

#[test]
fn support_is_that_of_the_slow_solver() {
    let mut solver = SteadySolver::default();
    for cells in [1, 2, 40, 300] {
        let graph = body(cells);
        let mut one = vec![0.0; cells];
        one[0] = 1.0;
        let mixed: Vec<f64> = (0..cells).map(|cell| (cell % 4) as f64 + 0.01).collect();
        for output in [&one, &mixed] {
            for (range_diameters, leak) in
                [(0.05, 0.0), (0.3, 1.0), (2.0, 0.0), (2.0, 0.1), (6.0, 0.0)]
            {
                let mut support = vec![0.0; cells];
                solver.support(&graph, &Sharing { range_diameters, leak }, output, &mut support);
                let use_rate = 2.0 / (range_diameters * range_diameters);
                let supply = Supply { output, use_rate };
                assert_near(&support, &slowly(&graph, leak, 0.0, &supply), 2e-6);
            }
        }
    }
}

#[test]
fn a_cell_that_is_added_changes_little() {
    // From the last solution of a body that has grown by a cell to the same solution as from the bath.
    let nutrient = Nutrient { demand: 0.4, kappa: 0.1, exchange: 0.5 };
    let mut solver = SteadySolver::default();
    let mut warm = vec![1.0; 200];
    for cells in 190..=200 {
        let graph = body(200);
        let mut first = BodyGraph::with_capacity(cells);
        for cell in 0..cells {
            let touching = graph.touching(cell).iter().filter(|j| (**j as usize) < cells).copied();
            let empty = 12 - touching.clone().count() as u8;
            first.push(touching, empty, empty);
        }
        let mut cold = vec![1.0; cells];
        solver.nutrient(&first, &nutrient, &mut cold);
        solver.nutrient(&first, &nutrient, &mut warm[..cells]);
        assert_near(&warm[..cells], &cold, 1e-9);
    }
}
