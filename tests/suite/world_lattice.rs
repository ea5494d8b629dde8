//! The lattice of bodies against facts on the face-centred cubic lattice (Conway & Sloane, Sphere
//! Packings, Lattices and Groups).

use std::collections::{BTreeMap, BTreeSet};

use somadawn::tissue::{Lattice, compact_radius_um};

/// Rows `n, sites at distance^2 = n, sites up to there` (OEIS A004015, A119869), distances in units of
/// the nearest-neighbour distance.
fn shells() -> Vec<[usize; 3]> {
    let table = include_str!("../data/fcc_shells.csv");
    let row = |line: &str| {
        let cell = |at: usize| line.split(',').nth(at).and_then(|text| text.parse().ok());
        [cell(0), cell(2), cell(3)].map(|count| count.expect("a whole number"))
    };
    table.lines().skip(1).map(row).collect()
}

fn largest() -> (Lattice, usize) {
    let cells = shells().last().expect("rows")[2];
    (Lattice::around(cells), cells)
}

fn square(lattice: &Lattice, place: u32) -> usize {
    let sum: i32 = lattice.coordinates(place).map(|c| i32::from(c) * i32::from(c)).iter().sum();
    assert_eq!(sum % 2, 0, "off the lattice");
    usize::try_from(sum / 2).expect("a square")
}

#[test]
fn shells_hold_the_known_numbers_of_sites() {
    let (lattice, cells) = largest();
    let mut counts = BTreeMap::new();
    for &place in lattice.order() {
        *counts.entry(square(&lattice, place)).or_insert(0) += 1;
    }
    for [n, sites, _] in shells() {
        assert_eq!(counts.get(&n).copied().unwrap_or(0), sites, "at distance^2 {n}");
    }
    assert_eq!(lattice.order().len(), cells);
    let distinct: BTreeSet<&u32> = lattice.order().iter().collect();
    assert_eq!(distinct.len(), cells, "a site is listed twice");
}

/// Order by distance, and an end wherever a shell that is not empty is full (n = 14 has no site).
#[test]
fn shells_end_where_cumulative_numbers_say() {
    let (lattice, _) = largest();
    let squares: Vec<usize> =
        lattice.order().iter().map(|place| square(&lattice, *place)).collect();
    assert!(squares.is_sorted());
    let full: Vec<usize> = shells().iter().filter(|row| row[1] > 0).map(|row| row[2]).collect();
    assert_eq!(lattice.shell_ends(), full);
}

/// Kissing number 12: as many sites at distance 1, which are the neighbours that the lattice lists,
/// around any site; and none nearer.
#[test]
fn every_site_touches_twelve() {
    let (lattice, _) = largest();
    let inner: Vec<u32> = lattice.order()[..201].to_vec();
    for place in inner {
        let here = lattice.position_um(place, 1.0);
        let distance = |other: u32| {
            let there = lattice.position_um(other, 1.0);
            here.iter().zip(there).map(|(a, b)| (a - b).powi(2)).sum::<f64>().sqrt()
        };
        let touching: BTreeSet<u32> =
            lattice.order().iter().copied().filter(|o| (distance(*o) - 1.0).abs() < 1e-9).collect();
        let listed: BTreeSet<u32> = lattice.neighbours(place).collect();
        assert_eq!(touching, listed);
        assert_eq!(listed.len(), 12);
        let nearer = lattice.order().iter().filter(|o| distance(**o) < 1.0 - 1e-9);
        assert_eq!(nearer.count(), 1, "only the site itself");
    }
}

/// Packing fraction pi / sqrt(18) = 0.74048 (Kepler; Hales 2005): the balls of all sites within a sphere
/// over its volume, the error falling with its radius; and as the radius of a compact body implies.
#[test]
fn cells_fill_the_known_share_of_space() {
    const PACKING: f64 = 0.740_480_489_693_061_1;
    let cells = 100_000;
    let lattice = Lattice::around(cells);
    let outermost = lattice.order()[lattice.order().len() - 1];
    let radius = (square(&lattice, outermost) as f64).sqrt();
    let counted = lattice.order().len() as f64 * 0.125 / radius.powi(3);
    approx::assert_relative_eq!(counted, PACKING, max_relative = 0.005);
    let implied = cells as f64 * 0.125 / compact_radius_um(cells, 1.0).powi(3);
    approx::assert_relative_eq!(implied, PACKING, max_relative = 1e-12);
}
