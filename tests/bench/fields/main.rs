//! How fast fields are solved: a growing body of about 1,000 cells, against a general-purpose sparse
//! direct solver (`rsparse`: approximate minimum degree order, Cholesky factorisation, substitution;
//! Davis 2006) that factorises and solves the same linear system; and what support costs per cell.
//!
//! `cargo bench --bench fields` measures for some seconds; run as a test, everything is done once, to
//! see that both solvers agree. Times are printed, never judged; they are the best of several rounds.

#![expect(clippy::print_stdout, reason = "a benchmark is there to print")]

mod direct;
#[path = "../life_cycle/stopwatch.rs"]
mod stopwatch;

use direct::Direct;
use somadawn::tissue::{BodyGraph, Lattice, Nutrient, SITES_AROUND, Sharing, SteadySolver};
use stopwatch::Stopwatch;

/// Cells of the growing body before and after.
const GROWTH: (usize, usize) = (990, 1010);
/// K over the bath's concentration at which uptake is of first order, and the balance linear.
const FIRST_ORDER: f64 = 1e12;
/// Support of a body that no support leaves.
const SHARING: Sharing = Sharing { range_diameters: 2.0, leak: 0.0 };
/// Bodies for the cost of support per cell, cells.
const SIZES: [usize; 3] = [64, 512, 4096];

/// How often to measure: rounds, and cells that a measured stretch of support solves goes over.
struct Effort {
    rounds: usize,
    cells: usize,
}

const MEASURE: Effort = Effort { rounds: 25, cells: 400_000 };
const GLANCE: Effort = Effort { rounds: 1, cells: 1 };

fn main() {
    // `cargo bench` says so; `cargo test` does not.
    let effort = if std::env::args().any(|word| word == "--bench") { MEASURE } else { GLANCE };
    let bodies: Vec<BodyGraph> = (GROWTH.0..=GROWTH.1).map(body).collect();
    println!("a body that grows from {} to {} cells, per solve", GROWTH.0, GROWTH.1);
    compare_nutrient(&bodies, "nutrient, first order", FIRST_ORDER, effort.rounds);
    compare_nutrient(&bodies, "nutrient, K = c_bath / 10", 0.1, effort.rounds);
    compare_support(&bodies, effort.rounds);
    compare_sizes(&effort);
}

/// A compact body: the sites nearest the middle.
fn body(cells: usize) -> BodyGraph {
    let lattice = Lattice::around(cells);
    let sites = &lattice.order()[..cells];
    let mut numbers = vec![None; lattice.grid_len()];
    for (number, site) in (0_u32..).zip(sites) {
        numbers[*site as usize] = Some(number);
    }
    let mut graph = BodyGraph::with_capacity(cells);
    for site in sites {
        let touching: Vec<u32> =
            lattice.neighbours(*site).filter_map(|next| numbers[next as usize]).collect();
        let empty = (SITES_AROUND - touching.len()) as u8;
        graph.push(touching, empty, empty);
    }
    graph
}

/// Uptake at a Thiele modulus of about 3 in 1,000 cells (radius 5.5 cell diameters).
fn nutrient(kappa: f64) -> Nutrient {
    Nutrient { demand: 0.6 * kappa, kappa, exchange: 1.0 }
}

fn compare_nutrient(bodies: &[BodyGraph], name: &str, kappa: f64, rounds: usize) {
    let nutrient = nutrient(kappa);
    let mut solver = SteadySolver::default();
    let (mut ours, mut theirs) = (Vec::new(), Vec::new());
    for _ in 0..rounds {
        let mut u = vec![1.0; GROWTH.0];
        solver.nutrient(&bodies[0], &nutrient, &mut u);
        let grown = &bodies[1..];
        let mut solutions = Vec::new();
        let began = Stopwatch::start();
        for graph in grown {
            u.push(1.0);
            solver.nutrient(graph, &nutrient, &mut u);
            solutions.push(u.clone());
        }
        ours.push(began.seconds() / grown.len() as f64);
        if kappa >= FIRST_ORDER {
            let systems: Vec<Direct> = grown.iter().map(|graph| uptake(graph, &nutrient)).collect();
            theirs.push(compare_with_direct(systems, &solutions, 1e-8));
        }
    }
    report(name, &ours, &theirs);
}

fn compare_support(bodies: &[BodyGraph], rounds: usize) {
    let mut solver = SteadySolver::default();
    let (mut ours, mut theirs) = (Vec::new(), Vec::new());
    let grown = &bodies[1..];
    for _ in 0..rounds {
        let mut solutions: Vec<Vec<f64>> =
            grown.iter().map(|graph| vec![0.0; graph.cells()]).collect();
        let outputs: Vec<Vec<f64>> = grown.iter().map(|graph| outputs(graph.cells())).collect();
        let began = Stopwatch::start();
        for ((graph, output), support) in grown.iter().zip(&outputs).zip(&mut solutions) {
            solver.support(graph, &SHARING, output, support);
        }
        ours.push(began.seconds() / grown.len() as f64);
        let systems: Vec<Direct> =
            grown.iter().zip(&outputs).map(|(graph, output)| sharing(graph, output)).collect();
        // Support is solved to 1e-6 of each cell's own.
        theirs.push(compare_with_direct(systems, &solutions, 1e-6));
    }
    report("support, range 2, sealed", &ours, &theirs);
}

fn compare_sizes(effort: &Effort) {
    println!("support, range 2, sealed, by body size");
    for cells in SIZES {
        let (graph, output) = (body(cells), outputs(cells));
        let mut support = vec![0.0; cells];
        let mut solver = SteadySolver::default();
        let turns = effort.cells.div_ceil(cells);
        let round = |_| {
            let began = Stopwatch::start();
            for _ in 0..turns {
                solver.support(&graph, &SHARING, &output, &mut support);
            }
            began.seconds() / (turns * cells) as f64
        };
        let times: Vec<f64> = (0..effort.rounds).map(round).collect();
        println!("  {:<26} {:6.0} ns per cell", format!("{cells} cells"), best(&times) * 1e9);
    }
}

/// Outputs of a body whose cells differ: 1 for soma, 0 for germ, others between.
fn outputs(cells: usize) -> Vec<f64> {
    (0..cells).map(|cell| (cell * cell % 11) as f64 / 10.0).collect()
}

/// The linear system of first-order uptake `demand / kappa` per concentration.
fn uptake(graph: &BodyGraph, nutrient: &Nutrient) -> Direct {
    let from_bath = |cell: usize| nutrient.exchange * f64::from(graph.open()[cell]);
    let own = |cell| from_bath(cell) + nutrient.demand / nutrient.kappa;
    Direct::of(graph, own, from_bath)
}

/// The linear system of support, over the conductance of a bond.
fn sharing(graph: &BodyGraph, output: &[f64]) -> Direct {
    let used = 2.0 / SHARING.range_diameters.powi(2);
    Direct::of(graph, |_| used, |cell| used * output[cell])
}

/// Seconds per system that factorising and solving takes.
///
/// # Panics
/// When a solution differs from ours by more than `tolerance` relative to its own value.
fn compare_with_direct(systems: Vec<Direct>, ours: &[Vec<f64>], tolerance: f64) -> f64 {
    let count = systems.len() as f64;
    let began = Stopwatch::start();
    let solved: Vec<Vec<f64>> = systems.into_iter().map(Direct::solve).collect();
    let seconds = began.seconds() / count;
    for (ours, theirs) in ours.iter().flatten().zip(solved.iter().flatten()) {
        let off = (ours / theirs - 1.0).abs();
        assert!(off <= tolerance, "the solvers disagree: {ours}, {theirs}");
    }
    seconds
}

fn report(name: &str, ours: &[f64], theirs: &[f64]) {
    let us = best(ours) * 1e6;
    if theirs.is_empty() {
        println!("  {name:<26} {us:7.0} us");
    } else {
        let ratio = best(theirs) / best(ours);
        println!(
            "  {name:<26} {us:7.0} us; direct {:7.0} us, {ratio:.1} times as long",
            best(theirs) * 1e6
        );
    }
}

fn best(times: &[f64]) -> f64 {
    times.iter().copied().fold(f64::INFINITY, f64::min)
}
