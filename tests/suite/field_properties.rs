//! What holds for the fields of any body: where values lie, what follows from linearity and symmetry,
//! and that every solution solves its equations, seen from outside the solver.

use proptest::collection::vec;
use proptest::prelude::*;
use somadawn::tissue::{BodyGraph, NEIGHBOURS, Nutrient, Sharing, SteadySolver, Waste};

use crate::field_fixture::body_on;

/// Most cells of a random body.
const CELLS: usize = 60;

/// A connected body that grew cell by cell, each next to an earlier one.
fn bodies() -> impl Strategy<Value = BodyGraph> {
    vec((any::<prop::sample::Index>(), 0..12_usize), 1..CELLS).prop_map(|steps| {
        let mut sites = vec![[0; 3]];
        for (mother, turn) in steps {
            let from: [i32; 3] = *mother.get(&sites);
            let to = [0, 1, 2].map(|axis| from[axis] + NEIGHBOURS[turn][axis]);
            if !sites.contains(&to) {
                sites.push(to);
            }
        }
        body_on(&sites)
    })
}

/// Numbers over many orders of magnitude.
fn scales(orders: std::ops::Range<f64>) -> impl Strategy<Value = f64> {
    orders.prop_map(|order| 10f64.powf(order))
}

fn nutrients() -> impl Strategy<Value = Nutrient> {
    (scales(-3.0..4.0), scales(-6.0..3.0), scales(-2.0..0.0))
        .prop_map(|(demand, kappa, exchange)| Nutrient { demand, kappa, exchange })
}

fn sharings() -> impl Strategy<Value = Sharing> {
    (scales(-1.0..2.0), prop_oneof![Just(0.0), 0.0..1.0])
        .prop_map(|(range_diameters, leak)| Sharing { range_diameters, leak })
}

/// Outputs, a third of them 0.
fn outputs() -> impl Strategy<Value = Vec<f64>> {
    vec(prop_oneof![Just(0.0), 0.0..1.0, 1.0..3.0], CELLS)
}

fn fed(graph: &BodyGraph, nutrient: &Nutrient, guess: f64) -> Vec<f64> {
    let mut u = vec![guess; graph.cells()];
    SteadySolver::default().nutrient(graph, nutrient, &mut u);
    u
}

fn supported(graph: &BodyGraph, sharing: &Sharing, output: &[f64]) -> Vec<f64> {
    let mut support = vec![0.0; graph.cells()];
    SteadySolver::default().support(graph, sharing, &output[..graph.cells()], &mut support);
    support
}

/// `exchange_i (u_i - bath) + sum_j (u_i - u_j)`, and the sum of its terms' sizes.
fn outflow(graph: &BodyGraph, cell: usize, u: &[f64], exchange: f64, bath: f64) -> [f64; 2] {
    let open = exchange * f64::from(graph.open()[cell]);
    let mut net = open * (u[cell] - bath);
    let mut size = open * (u[cell] + bath);
    for j in graph.touching(cell) {
        net += u[cell] - u[*j as usize];
        size += u[cell] + u[*j as usize];
    }
    [net, size]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(128))]

    #[test]
    fn nutrient_is_balanced_in_every_cell(graph in bodies(), nutrient in nutrients()) {
        let u = fed(&graph, &nutrient, 1.0);
        for cell in 0..graph.cells() {
            let [net, size] = outflow(&graph, cell, &u, nutrient.exchange, 1.0);
            let uptake = nutrient.demand * u[cell] / (nutrient.kappa + u[cell]);
            prop_assert!((net + uptake).abs() <= 1e-10 * (size + uptake), "{net} {uptake}");
        }
    }

    #[test]
    fn nutrient_lies_between_nothing_and_the_bath(graph in bodies(), nutrient in nutrients()) {
        let u = fed(&graph, &nutrient, 1.0);
        prop_assert!(u.iter().all(|u| *u > 0.0 && *u <= 1.0), "{u:?}");
        let income = u.iter().map(|u| nutrient.income(*u));
        prop_assert!(income.into_iter().all(|income| income <= 1.0 + 1e-12));
    }

    #[test]
    fn the_guess_does_not_matter(graph in bodies(), nutrient in nutrients(), guess in scales(-9.0..3.0)) {
        let (u, other) = (fed(&graph, &nutrient, 1.0), fed(&graph, &nutrient, guess));
        for (u, other) in u.iter().zip(&other) {
            prop_assert!((u / other - 1.0).abs() < 1e-7, "{u} {other}");
        }
    }

    #[test]
    fn more_demand_leaves_less_everywhere(graph in bodies(), nutrient in nutrients(), more in 1.01..10.0) {
        let demand = more * nutrient.demand;
        let (u, less) = (fed(&graph, &nutrient, 1.0), fed(&graph, &Nutrient { demand, ..nutrient }, 1.0));
        prop_assert!(u.iter().zip(&less).all(|(u, less)| *less <= u * (1.0 + 1e-9)));
    }

    #[test]
    fn waste_is_balanced_in_every_cell(
        graph in bodies(), release in scales(-3.0..4.0), exchange in scales(-2.0..0.0), fed in outputs(),
    ) {
        let waste = Waste { release, exchange };
        let mut w = vec![0.0; graph.cells()];
        SteadySolver::default().waste(&graph, &waste, &fed[..graph.cells()], &mut w);
        for cell in 0..graph.cells() {
            let [net, size] = outflow(&graph, cell, &w, exchange, 0.0);
            let released = release * fed[cell] / (1.0 + w[cell]);
            prop_assert!(w[cell] >= 0.0);
            prop_assert!((net - released).abs() <= 1e-10 * (size + released), "{net} {released}");
        }
    }

    #[test]
    fn support_is_balanced_in_every_cell(graph in bodies(), sharing in sharings(), output in outputs()) {
        let support = supported(&graph, &sharing, &output);
        let a = sharing.range_diameters.powi(2) / 2.0;
        for cell in 0..graph.cells() {
            let [net, size] = outflow(&graph, cell, &support, sharing.leak, 0.0);
            let residual = a * net + support[cell] - output[cell];
            let rounding = 1e-14 * a * size;
            prop_assert!(residual.abs() <= 3e-6 * support[cell] + rounding, "{residual}");
        }
    }

    #[test]
    fn support_of_a_sealed_body_lies_between_least_and_greatest_output(
        graph in bodies(), range_diameters in scales(-1.0..3.0), output in outputs(),
    ) {
        let sharing = Sharing { range_diameters, leak: 0.0 };
        let output = &output[..graph.cells()];
        let support = supported(&graph, &sharing, output);
        let least = output.iter().copied().fold(f64::INFINITY, f64::min);
        let greatest = output.iter().copied().fold(0.0, f64::max);
        let slack = 3e-6 * greatest;
        prop_assert!(support.iter().all(|s| *s >= least - slack && *s <= greatest + slack));
        prop_assert!(greatest == 0.0 || support.iter().all(|s| *s > 0.0), "{support:?}");
        let [all, put_out] = [&support[..], output].map(|values| values.iter().sum::<f64>());
        prop_assert!((all - put_out).abs() <= 1e-10 * put_out);
    }

    #[test]
    fn support_is_linear(
        graph in bodies(), sharing in sharings(), output in outputs(), other in outputs(), factor in 0.1..10.0,
    ) {
        let mixed: Vec<f64> = output.iter().zip(&other).map(|(a, b)| a + factor * b).collect();
        let [mixed, output, other] =
            [mixed, output, other].map(|output| supported(&graph, &sharing, &output));
        for ((mixed, output), other) in mixed.iter().zip(&output).zip(&other) {
            let expected: f64 = output + factor * other;
            prop_assert!((mixed - expected).abs() <= 5e-6 * expected, "{mixed} {expected}");
        }
    }

    #[test]
    fn support_goes_as_well_from_one_cell_to_another_as_back(
        graph in bodies(), sharing in sharings(),
        from in any::<prop::sample::Index>(), to in any::<prop::sample::Index>(),
    ) {
        let n = graph.cells();
        let [from, to] = [from.index(n), to.index(n)];
        let alone = |source: usize| {
            let mut output = vec![0.0; n];
            output[source] = 1.0;
            supported(&graph, &sharing, &output)
        };
        let [there, back] = [alone(from)[to], alone(to)[from]];
        prop_assert!((there - back).abs() <= 5e-6 * there, "{there} {back}");
        prop_assert!(there > 0.0);
    }
}
