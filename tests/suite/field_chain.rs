//! Fields in a chain of cells against the discrete closed form in one dimension.
//!
//! Inner cells have 2 neighbours and 10 open sites, the ends 1 and 11. First-order uptake,
//! `demand u / (kappa + u) -> k u` with `k = demand / kappa`, gives inside
//!
//! `u_{i-1} - (12 - 10 + 10 x + k) u_i + u_{i+1} + 10 x = 0`, x the exchange,
//!
//! with the particular solution `p = 10 x / (10 x + k)` and the homogeneous ones `rho^i`, `rho^-i`,
//! `rho + 1/rho = 2 + 10 x + k`. The chain of n cells is its own mirror image, so
//! `u_i = p + C (rho^i + rho^(n-1-i))`, and C follows from an end,
//! `(1 + 11 x + k) u_0 - u_1 = 11 x`. Support is the same recurrence with a point source.

use somadawn::tissue::{Nutrient, Sharing, SteadySolver};

use crate::field_fixture::{body_on, chain};

fn index(cell: i32) -> usize {
    usize::try_from(cell).expect("a place in the chain")
}

/// The root below 1 of `rho + 1/rho = sum`.
fn decay(sum: f64) -> f64 {
    // The larger root is found without cancellation, and the product of both is 1.
    2.0 / (sum + (sum * sum - 4.0).sqrt())
}

fn uptake_closed_form(n: i32, k: f64, x: f64) -> Vec<f64> {
    let particular = 10.0 * x / (10.0 * x + k);
    let rho = decay(2.0 + 10.0 * x + k);
    let shape = |i: i32| rho.powi(i) + rho.powi(n - 1 - i);
    let at_end = |u: &dyn Fn(i32) -> f64| (1.0 + 11.0 * x + k) * u(0) - u(1);
    let c = (11.0 * x - at_end(&|_| particular)) / at_end(&shape);
    (0..n).map(|i| particular + c * shape(i)).collect()
}

#[test]
fn first_order_uptake_is_that_of_the_recurrence() {
    let mut solver = SteadySolver::default();
    // The longest is beyond what the solver points to with 16 bits.
    for n in [2, 3, 10, 500, 70_000] {
        let graph = body_on(&chain(n));
        for (k, exchange) in [(0.3, 1.0), (5.0, 1.0), (0.01, 1e-3), (40.0, 0.05)] {
            let kappa = 1e12;
            let nutrient = Nutrient { demand: k * kappa, kappa, exchange };
            let mut u = vec![1.0; graph.cells()];
            solver.nutrient(&graph, &nutrient, &mut u);
            for (u, exact) in u.iter().zip(uptake_closed_form(n, k, exchange)) {
                // Uptake falls short of first order by u / kappa.
                approx::assert_relative_eq!(*u, exact, max_relative = 1e-9);
            }
        }
    }
}

/// Support of a chain of n cells of which cell `source` puts out 1: on either side of it a solution
/// that meets its end, `f_i = rho^-i + B rho^i` counted from there with `(1 + 11 leak + 1/a) f_0 = f_1`;
/// `S_i = f(end to the nearer) f(farther to end) / (what leaves the source)`, here without the common
/// factor `rho^(1-n)`.
fn support_closed_form(n: i32, source: i32, a: f64, leak: f64) -> Vec<f64> {
    let used = a.recip();
    let rho = decay(2.0 + 10.0 * leak + used);
    let end = 1.0 + 11.0 * leak + used;
    let mirror = (rho.recip() - end) / (end - rho);
    let at = |i: i32| {
        let (left, right) = (i.min(source), i.max(source));
        let ends = [left, n - 1 - right].map(|from_end| 1.0 + mirror * rho.powi(2 * from_end));
        rho.powi(right - left) * ends[0] * ends[1]
    };
    let beside: Vec<i32> =
        [source - 1, source + 1].into_iter().filter(|j| (0..n).contains(j)).collect();
    let conductance = beside.len() as f64 + (12 - beside.len()) as f64 * leak;
    let inflow = beside.iter().map(|j| at(*j)).sum::<f64>();
    let output = a * ((conductance + used) * at(source) - inflow);
    (0..n).map(|i| at(i) / output).collect()
}

#[test]
fn support_of_a_point_source_is_that_of_the_recurrence() {
    let mut solver = SteadySolver::default();
    for (n, source) in [(7, 0), (7, 3), (60, 20), (400, 399)] {
        let graph = body_on(&chain(n));
        for range_diameters in [0.5, 2.0, 10.0, 200.0] {
            for leak in [0.0, 0.002, 0.3] {
                let sharing = Sharing { range_diameters, leak };
                let mut output = vec![0.0; graph.cells()];
                output[index(source)] = 1.0;
                let mut support = output.clone();
                solver.support(&graph, &sharing, &output, &mut support);
                let exact = support_closed_form(n, source, range_diameters.powi(2) / 2.0, leak);
                for (i, (support, exact)) in support.iter().zip(exact).enumerate() {
                    if exact > 1e-290 {
                        approx::assert_relative_eq!(*support, exact, max_relative = 1e-5);
                    }
                    assert!(*support > 0.0 || exact < 1e-300, "cell {i}: {support}, {exact}");
                }
            }
        }
    }
}

#[test]
fn the_recurrence_holds_in_any_order_of_cells() {
    // Every third cell first: neighbours are far apart in memory.
    let n = 300;
    let order: Vec<i32> = (0..3).flat_map(|start| (start..n).step_by(3)).collect();
    let sites: Vec<[i32; 3]> = order.iter().map(|cell| [*cell, *cell, 0]).collect();
    let graph = body_on(&sites);
    let output: Vec<f64> = order.iter().map(|cell| f64::from(u8::from(*cell == 100))).collect();
    let mut support = output.clone();
    let sharing = Sharing { range_diameters: 30.0, leak: 0.0 };
    SteadySolver::default().support(&graph, &sharing, &output, &mut support);
    let exact = support_closed_form(n, 100, 450.0, 0.0);
    for (cell, support) in order.iter().zip(&support) {
        approx::assert_relative_eq!(*support, exact[index(*cell)], max_relative = 2e-6);
    }
}
