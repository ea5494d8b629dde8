//! Growth keeps bodies compact, every site holds one cell, and exposure is what neighbours say.

use std::collections::BTreeSet;

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::{Growth, Pace};

const PACE: Pace = Pace { net_income_eu_per_h: 1.0, division_cost_eu: 8.0, division_cv: 0.0 };

fn random(seed: u64) -> Xoshiro256PlusPlus {
    Xoshiro256PlusPlus::seed_from_u64(seed)
}

#[test]
fn a_grown_body_fills_whole_shells_before_it_starts_another() {
    for (propagule, adult) in [(1, 1), (1, 2), (1, 13), (3, 20), (1, 64), (1, 100), (1, 1000)] {
        for cv in [0.0, 0.3] {
            let mut growth = Growth::of_clump(propagule, adult);
            let pace = Pace { division_cv: cv, ..PACE };
            let places: BTreeSet<u32> =
                growth.grow(&pace, f64::INFINITY, &mut random(7)).places.iter().copied().collect();
            assert_eq!(places.len(), adult, "two cells share a site");
            let lattice = growth.lattice();
            let full = lattice.shell_ends().iter().rev().find(|end| **end <= adult).unwrap();
            assert!(lattice.order()[..*full].iter().all(|place| places.contains(place)));
            assert!(places.iter().all(|place| lattice.order().contains(place)));
        }
    }
}

#[test]
fn exposure_agrees_with_counting_empty_neighbours() {
    for adult in [1, 12, 13, 55, 64, 300] {
        let mut growth = Growth::of_clump(1, adult);
        let mut rng = random(11);
        for _ in 0..20 {
            let body = growth.grow(&PACE, f64::INFINITY, &mut rng);
            let places = body.places.to_vec();
            let occupied: BTreeSet<u32> = places.iter().copied().collect();
            let counted: Vec<bool> = places
                .iter()
                .map(|&place| growth.lattice().neighbours(place).any(|p| !occupied.contains(&p)))
                .collect();
            assert_eq!(growth.exposed().collect::<Vec<_>>(), counted);
        }
    }
}

#[test]
fn the_cuboctahedron_of_13_cells_has_one_interior_cell() {
    // Cuboctahedral totals 1, 13, 55, 147 (10 d^2 + 2 sites per shell of steps; Conway & Sloane);
    // the ball of 13 sites is the first of them.
    let mut growth = Growth::of_clump(1, 13);
    growth.grow(&PACE, f64::INFINITY, &mut random(3));
    assert_eq!(growth.exposed().filter(|exposed| !exposed).count(), 1);
}

#[test]
fn synchronous_rounds_label_half_the_cells_each_way() {
    let mut growth = Growth::of_clump(1, 64);
    let body = growth.grow(&PACE, f64::INFINITY, &mut random(5));
    assert_eq!(body.labels.iter().filter(|label| **label == 1).count(), 32);
    assert_eq!(body.labels.iter().filter(|label| **label == -1).count(), 32);
    approx::assert_relative_eq!(body.duration_h, 6.0 * 8.0);
}

#[test]
fn a_partial_last_round_leaves_full_reserves_where_nothing_divided() {
    let mut growth = Growth::of_clump(1, 100);
    let body = growth.grow(&PACE, f64::INFINITY, &mut random(5));
    assert_eq!(body.reserves_eu.iter().filter(|eu| **eu > 7.999).count(), 64 - 36);
    approx::assert_relative_eq!(body.duration_h, 7.0 * 8.0);
}

#[test]
fn growth_stops_when_its_time_is_over_and_never_starts_without_income() {
    let mut growth = Growth::of_clump(1, 64);
    let body = growth.grow(&PACE, 20.0, &mut random(5));
    assert_eq!(body.places.len(), 4);
    assert!(body.reserves_eu.iter().all(|eu| (*eu - 4.0).abs() < 1e-5));
    let starved = Pace { net_income_eu_per_h: 0.0, ..PACE };
    assert!(growth.grow(&starved, 100.0, &mut random(5)).duration_h.is_infinite());
}

#[test]
fn varying_costs_keep_the_mean_interval_of_the_first_division() {
    // Mean of the first division time over 4,000 bodies: 8 h, standard error 8 * 0.2 / sqrt(4000).
    let pace = Pace { division_cv: 0.2, ..PACE };
    let mut growth = Growth::of_clump(1, 2);
    let mut rng = random(17);
    let total: f64 =
        (0..4000).map(|_| growth.grow(&pace, f64::INFINITY, &mut rng).duration_h).sum();
    let error = 8.0 * 0.2 / 4000f64.sqrt();
    assert!((total / 4000.0 - 8.0).abs() < 4.0 * error, "mean {}", total / 4000.0);
}

#[test]
fn every_cell_stays_where_the_occupancy_says() {
    // After growth, the cells' own places and the grid's occupants must name each other.
    let mut growth = Growth::of_clump(1, 500);
    let body = growth.grow(&PACE, f64::INFINITY, &mut random(23));
    let distinct: BTreeSet<u32> = body.places.iter().copied().collect();
    assert_eq!(distinct.len(), 500);
    assert_eq!(body.labels.len(), 500);
    assert_eq!(body.reserves_eu.len(), 500);
}
