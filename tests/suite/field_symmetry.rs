//! Fields where symmetry or a limit says what they are: equal sites, sealed bodies, no reach and
//! endless reach, bodies in parts.

#![expect(clippy::float_cmp, reason = "values that must be the very same")]

use std::collections::BTreeMap;

use somadawn::tissue::fields::viability;
use somadawn::tissue::{BodyGraph, Nutrient, Sharing, SteadySolver, Waste};

use crate::field_fixture::{ball, body_on, chain};

/// Sites of a hollow body: those of a ball whose squared distance from the middle (coordinate units)
/// lies in a range.
fn shell(cells: usize, squares: std::ops::RangeInclusive<i32>) -> Vec<[i32; 3]> {
    let square = |site: &[i32; 3]| site.iter().map(|c| c * c).sum::<i32>();
    ball(cells).into_iter().filter(|site| squares.contains(&square(site))).collect()
}

/// The cubic group changes the order and the signs of coordinates: what it leaves of a site.
fn orbit(site: &[i32; 3]) -> [i32; 3] {
    let mut orbit = site.map(i32::abs);
    orbit.sort_unstable();
    orbit
}

/// Asserts that sites of one orbit have one value.
fn assert_symmetric(sites: &[[i32; 3]], field: &[f64]) {
    let mut first: BTreeMap<[i32; 3], f64> = BTreeMap::new();
    for (site, value) in sites.iter().zip(field) {
        let expected = *first.entry(orbit(site)).or_insert(*value);
        approx::assert_relative_eq!(*value, expected, max_relative = 1e-10);
    }
}

#[test]
fn equal_sites_of_shells_and_balls_have_equal_values() {
    let mut solver = SteadySolver::default();
    // The cuboctahedron of 12 cells, a shell two cells thick, a ball.
    for sites in [shell(13, 2..=2), shell(600, 20..=34), ball(300)] {
        let graph = body_on(&sites);
        let mut u = vec![1.0; sites.len()];
        solver.nutrient(&graph, &Nutrient { demand: 0.7, kappa: 0.2, exchange: 0.4 }, &mut u);
        assert_symmetric(&sites, &u);
        let mut w = vec![0.0; sites.len()];
        solver.waste(&graph, &Waste { release: 0.5, exchange: 0.4 }, &u, &mut w);
        assert_symmetric(&sites, &w);
        // An output that is the same over each orbit.
        let output: Vec<f64> =
            sites.iter().map(|site| f64::from(orbit(site)[2].pow(2) % 5) + 0.1).collect();
        let mut support = output.clone();
        for leak in [0.0, 0.5] {
            let sharing = Sharing { range_diameters: 1.5, leak };
            solver.support(&graph, &sharing, &output, &mut support);
            assert_symmetric(&sites, &support);
        }
    }
}

#[test]
fn the_twelve_cells_around_a_site_are_fed_alike() {
    // Each touches 4 others of equal value: 8 x (u - 1) + demand u / (kappa + u) = 0, here
    // 8 (u - 1) + 4 u / (1 + u) = 0, that is 2 u^2 + u - 2 = 0.
    let graph = body_on(&shell(13, 2..=2));
    let mut u = vec![0.3; 12];
    let nutrient = Nutrient { demand: 4.0, kappa: 1.0, exchange: 1.0 };
    SteadySolver::default().nutrient(&graph, &nutrient, &mut u);
    for u in u {
        approx::assert_relative_eq!(u, (17f64.sqrt() - 1.0) / 4.0, max_relative = 1e-12);
    }
}

/// Outputs of unlike size, some 0.
fn outputs(n: usize) -> Vec<f64> {
    (0..n).map(|cell| (cell * cell % 7) as f64).collect()
}

fn supported(graph: &BodyGraph, range_diameters: f64, leak: f64, output: &[f64]) -> Vec<f64> {
    let mut support = vec![f64::NAN; output.len()];
    let sharing = Sharing { range_diameters, leak };
    SteadySolver::default().support(graph, &sharing, output, &mut support);
    support
}

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

#[test]
fn a_sealed_body_keeps_all_its_support() {
    for sites in
        [ball(2), ball(55), ball(900), ball(5000), chain(64), chain(1000), shell(900, 40..=60)]
    {
        let graph = body_on(&sites);
        let output = outputs(sites.len());
        for range in [0.0, 1e-9, 0.1, 0.5, 2.0, 7.0, 50.0, 1e3, 1e4] {
            let support = supported(&graph, range, 0.0, &output);
            approx::assert_relative_eq!(mean(&support), mean(&output), max_relative = 1e-10);
        }
    }
}

#[test]
fn without_reach_cells_have_what_they_put_out() {
    let output = outputs(200);
    for sites in [ball(200), chain(200)] {
        let graph = body_on(&sites[..200]);
        assert_eq!(supported(&graph, 0.0, 0.0, &output), output);
        assert_eq!(supported(&graph, 0.0, 0.7, &output), output);
    }
    // A differentiated body has cells that put out nothing.
    assert_eq!(viability(&output), 0.0);
}

#[test]
fn endless_reach_pools_support() {
    for sites in [ball(13), ball(201), chain(20)] {
        let output = outputs(sites.len());
        let support = supported(&body_on(&sites), 1e4, 0.0, &output);
        let pooled = mean(&output);
        for support in &support {
            approx::assert_relative_eq!(*support, pooled, max_relative = 1e-6);
        }
        approx::assert_relative_eq!(viability(&support), pooled, max_relative = 1e-6);
    }
}

#[test]
fn viability_is_ruled_by_the_least_supported_cell() {
    // By hand: 3 / (1/1 + 1/2 + 1/0.1) = 3 / 11.5.
    approx::assert_relative_eq!(viability(&[1.0, 2.0, 0.1]), 3.0 / 11.5, max_relative = 1e-15);
    assert_eq!(viability(&[1.0, 0.0]), 0.0);
    assert!(viability(&[1.0, f64::NAN]).is_nan());
}

#[test]
fn a_germ_cell_within_reach_of_soma_lives() {
    // One cell of a ball puts out nothing: support above 0 at any reach, and the more the farther.
    let graph = body_on(&ball(201));
    let mut output = vec![1.0; graph.cells()];
    output[0] = 0.0;
    let ranges = [0.05, 0.1, 0.3, 1.0, 3.0];
    let at_middle = ranges.map(|range| supported(&graph, range, 0.0, &output)[0]);
    assert!(at_middle[0] > 0.0 && at_middle.is_sorted(), "{at_middle:?}");
}

/// Two chains of four cells far from each other.
fn two_parts() -> BodyGraph {
    let far = chain(4).into_iter().map(|[x, y, z]| [x + 50, y, z]);
    body_on(&chain(4).into_iter().chain(far).collect::<Vec<_>>())
}

#[test]
fn a_part_without_a_source_has_no_support() {
    let output = [0.0, 3.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0];
    for (range, leak) in [(0.1, 0.0), (2.0, 0.0), (100.0, 0.2)] {
        let support = supported(&two_parts(), range, leak, &output);
        assert!(support[..4].iter().all(|support| *support > 0.0), "{support:?}");
        assert_eq!(support[4..], [0.0; 4]);
        assert_eq!(viability(&support), 0.0);
    }
    assert_eq!(supported(&two_parts(), 2.0, 0.0, &[0.0; 8]), [0.0; 8]);
}

/// A chain in the water and a pair of cells that it does not reach.
fn enclosed_pair() -> BodyGraph {
    let mut graph = BodyGraph::default();
    for cell in 0..3_u32 {
        let touching = [cell.checked_sub(1), (cell < 2).then_some(cell + 1)];
        let count = touching.iter().flatten().count() as u8;
        graph.push(touching.into_iter().flatten(), 12 - count, 12 - count);
    }
    graph.push([4], 11, 0);
    graph.push([3], 11, 0);
    graph
}

#[test]
fn a_part_that_no_bath_reaches_starves() {
    let mut solver = SteadySolver::default();
    let graph = enclosed_pair();
    let mut u = [0.5; 5];
    solver.nutrient(&graph, &Nutrient { demand: 1.0, kappa: 0.5, exchange: 1.0 }, &mut u);
    assert!(u[..3].iter().all(|u| *u > 0.5 && *u < 1.0), "{u:?}");
    assert_eq!(u[3..], [0.0; 2]);
    // Nobody eats: the water's concentration in its reach, the guess beyond.
    let mut u = [0.5, 0.5, 0.5, 0.25, 0.125];
    solver.nutrient(&graph, &Nutrient { demand: 0.0, kappa: 0.5, exchange: 1.0 }, &mut u);
    for u in &u[..3] {
        approx::assert_relative_eq!(*u, 1.0, max_relative = 1e-10);
    }
    assert_eq!(u[3..], [0.25, 0.125]);
    let mut w = [0.0; 5];
    solver.waste(&graph, &Waste { release: 1.0, exchange: 1.0 }, &[1.0; 5], &mut w);
    assert!(w[..3].iter().all(|w| *w > 0.0 && w.is_finite()), "{w:?}");
    assert_eq!(w[3..], [f64::INFINITY; 2]);
    // No exchange at all: nobody is fed.
    let mut u = [0.5; 5];
    solver.nutrient(&graph, &Nutrient { demand: 1.0, kappa: 0.5, exchange: 0.0 }, &mut u);
    assert_eq!(u, [0.0; 5]);
}

#[test]
fn what_is_no_number_makes_no_number() {
    let mut solver = SteadySolver::default();
    let graph = body_on(&chain(3));
    let nan = |field: &[f64]| field.iter().all(|value| value.is_nan());
    for (range, leak, first) in [
        (f64::NAN, 0.0, 1.0),
        (f64::INFINITY, 0.0, 1.0),
        (1.0, -1.0, 1.0),
        (1.0, 0.0, f64::NAN),
        (1.0, 0.0, -1.0),
    ] {
        assert!(nan(&supported(&graph, range, leak, &[first, 1.0, 1.0])));
    }
    for (demand, kappa) in [(f64::NAN, 1.0), (1.0, f64::INFINITY), (1.0, 0.0), (-1.0, 1.0)] {
        let mut u = [1.0; 3];
        solver.nutrient(&graph, &Nutrient { demand, kappa, exchange: 1.0 }, &mut u);
        assert!(nan(&u));
    }
    let mut w = [0.0; 3];
    let waste = Waste { release: 1.0, exchange: 1.0 };
    solver.waste(&graph, &waste, &[1.0, f64::INFINITY, 1.0], &mut w);
    assert!(nan(&w));
    // A guess may be anything.
    let nutrient = Nutrient { demand: 1.0, kappa: 0.5, exchange: 1.0 };
    let (mut from_bath, mut from_nothing) = ([1.0; 3], [f64::NAN, -3.0, f64::INFINITY]);
    solver.nutrient(&graph, &nutrient, &mut from_bath);
    solver.nutrient(&graph, &nutrient, &mut from_nothing);
    assert_eq!(from_bath, from_nothing);
}
