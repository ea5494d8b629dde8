//! Nutrient in compact bodies against continuous spheres: effectiveness, centre and surface of
//! first-order uptake (Thiele 1939; Aris 1957; with a film, Crank 1975), the critical size of
//! zero-order uptake (Hill 1928; Warburg 1923), and Michaelis-Menten uptake (boundary value problem
//! solved elsewhere by two methods that agree to 1e-13, `tests/data/mm_sphere.csv`).
//!
//! A well stirred bath is met a third of a cell diameter beyond the surface, so that errors vanish in
//! proportion to the cell diameter d over the body's radius R; limits are those of quadratics in d/R
//! fitted to bodies of seven sizes.

#![expect(
    clippy::float_cmp,
    reason = "rows of tables are looked up by the number that is written there"
)]

use somadawn::tissue::fields::{biot_number, exchange_of};
use somadawn::tissue::{Nutrient, SteadySolver};

use crate::field_fixture::{Ball, limit, numbers, observed_order};

const FIRST_ORDER: &str = include_str!("../data/thiele_first_order.csv");
const ZERO_ORDER: &str = include_str!("../data/zero_order.csv");
const MICHAELIS_MENTEN: &str = include_str!("../data/mm_sphere.csv");

/// Cells of the bodies, at least.
const SIZES: [usize; 7] = [400, 800, 1500, 3000, 6000, 12_000, 24_000];

/// Bodies of all sizes, and d/R of each.
fn bodies(sizes: &[usize]) -> (Vec<Ball>, Vec<f64>) {
    let balls: Vec<Ball> = sizes.iter().map(|cells| Ball::of(*cells)).collect();
    let spacing = balls.iter().map(|ball| ball.radius.recip()).collect();
    (balls, spacing)
}

/// Solves from the bath's concentration and checks the range, `0 < u <= 1`.
fn solved(solver: &mut SteadySolver, ball: &Ball, nutrient: &Nutrient) -> Vec<f64> {
    let mut u = vec![1.0; ball.graph.cells()];
    solver.nutrient(&ball.graph, nutrient, &mut u);
    assert!(u.iter().all(|u| *u > 0.0 && *u <= 1.0), "{nutrient:?}");
    u
}

fn mean(values: impl ExactSizeIterator<Item = f64>) -> f64 {
    let count = values.len() as f64;
    values.sum::<f64>() / count
}

/// Nutrient of which cells take up in proportion to its concentration: kappa far above the bath.
fn first_order(ball: &Ball, phi: f64, exchange: f64) -> Nutrient {
    let kappa = 1e9;
    let demand = 2.0 * kappa * (phi / ball.radius).powi(2);
    let nutrient = Nutrient { demand, kappa, exchange };
    approx::assert_relative_eq!(nutrient.thiele_modulus(ball.radius), phi, max_relative = 1e-12);
    nutrient
}

/// Mean and middle of the field in each body.
fn effectiveness_and_centre(balls: &[Ball], nutrient: impl Fn(&Ball) -> Nutrient) -> [Vec<f64>; 2] {
    let mut solver = SteadySolver::default();
    let mut ends = [Vec::new(), Vec::new()];
    for ball in balls {
        let nutrient = nutrient(ball);
        let u = solved(&mut solver, ball, &nutrient);
        ends[0].push(mean(u.iter().map(|u| nutrient.income(*u))));
        ends[1].push(u[0]);
    }
    ends
}

fn errors(values: &[f64], exact: f64) -> Vec<f64> {
    values.iter().map(|value| value / exact - 1.0).collect()
}

#[test]
fn first_order_uptake_approaches_the_closed_form_of_a_sphere() {
    let (balls, spacing) = bodies(&SIZES);
    for row in numbers(FIRST_ORDER).iter().filter(|row| [1.0, 2.0, 5.0].contains(&row[0])) {
        let (phi, exact) = (row[0], [row[1], row[2]]);
        let found = effectiveness_and_centre(&balls, |ball| first_order(ball, phi, 1.0));
        for (values, exact) in found.iter().zip(exact) {
            approx::assert_relative_eq!(limit(&spacing, values), exact, max_relative = 0.01);
            let errors = errors(values, exact);
            // Of first order; at phi = 5 the depth to which nutrient goes is but a few cells in the
            // smaller bodies, and the order still on its way there (0.95 and 0.65).
            let order = observed_order(&spacing, &errors);
            let band = if phi < 5.0 { 0.9..1.1 } else { 0.6..1.1 };
            assert!(band.contains(&order), "phi {phi}: order {order}");
            assert!(errors.last().map(|error| error.abs()) < Some(0.08), "phi {phi}: {errors:?}");
        }
    }
}

#[test]
fn a_film_of_biot_number_five_gives_its_closed_form_without_extrapolation() {
    let (balls, spacing) = bodies(&SIZES);
    for row in numbers(FIRST_ORDER).iter().filter(|row| [1.0, 2.0, 5.0].contains(&row[0])) {
        let (phi, exact) = (row[0], [row[8], row[10]]);
        let film = |ball: &Ball| first_order(ball, phi, exchange_of(5.0, ball.radius));
        let found = effectiveness_and_centre(&balls, film);
        for (values, exact) in found.iter().zip(exact) {
            approx::assert_relative_eq!(limit(&spacing, values), exact, max_relative = 0.01);
            let largest = &values[values.len() - 1];
            approx::assert_relative_eq!(*largest, exact, max_relative = 0.005);
        }
        // The surface value follows from the balance of the film, c_s = 1 - eta phi^2 / (3 Bi).
        let surface = 1.0 - limit(&spacing, &found[0]) * phi * phi / 15.0;
        approx::assert_relative_eq!(surface, row[9], max_relative = 0.01);
    }
}

#[test]
fn the_film_that_a_stirred_bath_leaves_explains_most_of_the_error() {
    // Effectiveness with Bi = 3 R/d: 1/eta_total = 1/eta + phi^2/(3 Bi), of the same source.
    let (balls, _) = bodies(&[3000, 12_000]);
    for row in numbers(FIRST_ORDER).iter().filter(|row| [1.0, 2.0].contains(&row[0])) {
        let (phi, bare) = (row[0], row[1]);
        let found = effectiveness_and_centre(&balls, |ball| first_order(ball, phi, 1.0));
        for (ball, value) in balls.iter().zip(&found[0]) {
            let biot = biot_number(1.0, ball.radius);
            let filmed = (bare.recip() + phi * phi / (3.0 * biot)).recip();
            let [with, without] = [filmed, bare].map(|exact| (value / exact - 1.0).abs());
            assert!(with < 0.2 * without, "phi {phi}: {with} against {without}");
        }
    }
}

/// Square root of A/6 at which the middle of the body comes to the concentration kappa.
fn critical_size(solver: &mut SteadySolver, ball: &Ball, kappa: f64) -> f64 {
    let mut u = vec![1.0; ball.graph.cells()];
    let [mut fed, mut starved] = [3.0_f64, 9.0];
    for _ in 0..16 {
        let a = f64::midpoint(fed, starved);
        let demand = 2.0 * a / ball.radius.powi(2);
        solver.nutrient(&ball.graph, &Nutrient { demand, kappa, exchange: 1.0 }, &mut u);
        if u[0] > kappa { fed = a } else { starved = a }
    }
    (f64::midpoint(fed, starved) / 6.0).sqrt()
}

#[test]
fn the_largest_body_that_zero_order_uptake_feeds_approaches_the_closed_form() {
    // The centre of a sphere comes to 0 at A = q R^2 / (D C0) = 6 (table: sphere_c_centre, 1 - A/6).
    assert!(numbers(ZERO_ORDER).iter().any(|row| row[0] == 6.0 && row[1] == 0.0));
    let (balls, spacing) = bodies(&SIZES[..6]);
    let mut solver = SteadySolver::default();
    let sizes: Vec<f64> = balls.iter().map(|ball| critical_size(&mut solver, ball, 1e-5)).collect();
    let order = observed_order(&spacing, &errors(&sizes, 1.0));
    approx::assert_relative_eq!(limit(&spacing, &sizes), 1.0, max_relative = 0.03);
    assert!((0.7..1.1).contains(&order), "order {order}");
    assert!(sizes.is_sorted(), "{sizes:?}");
}

#[test]
fn zero_order_uptake_beyond_the_critical_size_feeds_a_rim() {
    // Effectiveness with an anoxic core; kappa small, exchange 2 puts the bath at the surface itself.
    let (balls, spacing) = bodies(&SIZES);
    for row in numbers(ZERO_ORDER).iter().filter(|row| [8.0, 10.0, 20.0].contains(&row[0])) {
        let (a, exact) = (row[0], row[3]);
        let [eta, centre] = effectiveness_and_centre(&balls, |ball| Nutrient {
            demand: 2.0 * a / ball.radius.powi(2),
            kappa: 1e-6,
            exchange: 2.0,
        });
        approx::assert_relative_eq!(limit(&spacing, &eta), exact, max_relative = 0.01);
        assert!(centre.iter().all(|u| *u < 1e-6), "{centre:?}");
    }
}

#[test]
fn michaelis_menten_uptake_approaches_the_boundary_value_problem() {
    let (balls, spacing) = bodies(&SIZES);
    for row in numbers(MICHAELIS_MENTEN) {
        let [a, kappa] = [row[0], row[1]];
        if a > 30.0 || ![0.01, 0.1, 1.0, 10.0].contains(&kappa) {
            continue;
        }
        let [eta, centre] =
            effectiveness_and_centre(&balls, |ball| michaelis_menten(ball, a, kappa));
        approx::assert_relative_eq!(limit(&spacing, &eta), row[4], max_relative = 0.01);
        if row[3] > 0.01 {
            // Of the bath; where a core runs empty the middle is told from its logarithm instead.
            approx::assert_abs_diff_eq!(limit(&spacing, &centre), row[3], epsilon = 0.01);
        } else {
            let logs: Vec<f64> = centre.iter().map(|u| u.ln()).collect();
            approx::assert_relative_eq!(limit(&spacing, &logs), row[3].ln(), max_relative = 0.1);
        }
    }
}

#[test]
fn a_rim_of_a_few_cells_needs_larger_bodies() {
    // At A = 100 about an eighth of the radius is fed, one to three cells. How whole shells of sites
    // round off a ball then matters by some 0.3 % from one body to the next, which comes to about 1 % in
    // the limit of twelve.
    let larger = |cells: &usize| Some(cells * 13 / 10);
    let sizes: Vec<usize> = std::iter::successors(Some(2000), larger).take(12).collect();
    let (balls, spacing) = bodies(&sizes);
    for row in numbers(MICHAELIS_MENTEN).iter().filter(|row| row[0] == 100.0 && row[1] <= 1.0) {
        let film = |ball: &Ball| michaelis_menten(ball, 100.0, row[1]);
        let [eta, centre] = effectiveness_and_centre(&balls, film);
        approx::assert_relative_eq!(limit(&spacing, &eta), row[4], max_relative = 0.02);
        // The middle holds as little as 3e-37 of the bath: its logarithm is compared.
        let logs: Vec<f64> = centre.iter().map(|u| u.ln()).collect();
        approx::assert_relative_eq!(limit(&spacing, &logs), row[3].ln(), max_relative = 0.1);
    }
}

fn michaelis_menten(ball: &Ball, a: f64, kappa: f64) -> Nutrient {
    Nutrient { demand: 2.0 * a / ball.radius.powi(2), kappa, exchange: 1.0 }
}
