//! A push moves each cell by one site at most, leaves the mother where she is and the newcomer next to
//! her, whichever way the path is found.

use rand::seq::SliceRandom;
use rand::{Rng, RngExt, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;

use super::*;

/// A body of `cells` cells that fills the sites of `lattice` in its order.
fn packed(lattice: &Lattice, cells: usize) -> (Crowd, Vec<u32>) {
    let mut crowd = Crowd::on(lattice);
    let places = lattice.order()[..cells].to_vec();
    for (cell, place) in (0..).zip(&places) {
        crowd.put(*place, cell);
    }
    (crowd, places)
}

fn assert_push_is_sound(lattice: &Lattice, newcomer: Newcomer, before: &[u32], after: &[u32]) {
    let apart = |from: u32, to: u32| lattice.steps_between(from, to);
    assert_eq!(after[newcomer.mother as usize], newcomer.beside, "the mother was moved");
    assert_eq!(apart(newcomer.beside, after[newcomer.cell as usize]), 1, "not next to the mother");
    let moved = before.iter().zip(after).filter(|(from, to)| from != to);
    assert!(moved.clone().all(|(from, to)| apart(*from, *to) == 1), "a cell moved too far");
    let shortest = apart(newcomer.beside, newcomer.target).unsigned_abs() as usize;
    assert_eq!(moved.count() + 1, shortest, "the path was not a shortest one");
    let mut filled: Vec<u32> = after.to_vec();
    let mut expected: Vec<u32> = before.iter().copied().chain([newcomer.target]).collect();
    filled.sort_unstable();
    expected.sort_unstable();
    assert_eq!(filled, expected, "the body did not grow by the target");
}

#[test]
fn pushes_in_compact_bodies_shift_a_shortest_path_by_one_site() {
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(31);
    for cells in [1, 2, 7, 13, 40, 55, 63, 300, 1000] {
        let lattice = Lattice::around(cells + 1);
        let mut vacant = lattice.order()[cells..].to_vec();
        for _ in 0..200 {
            vacant.shuffle(&mut rng);
            let (mut crowd, before) = packed(&lattice, cells);
            let mut places = before.clone();
            places.push(VACANT);
            let mother = rng.random_range(0..cells as u32);
            let newcomer = Newcomer {
                cell: cells as u32,
                mother,
                beside: before[mother as usize],
                target: vacant[0],
                ties: rng.next_u32() >> 26,
            };
            crowd.push_in(&lattice, newcomer, &mut places);
            assert_push_is_sound(&lattice, newcomer, &before, &places);
            for (cell, place) in (0..).zip(&places) {
                assert_eq!(crowd.occupant[*place as usize], cell, "crowd and cells disagree");
            }
        }
    }
}

#[test]
fn a_push_finds_its_way_round_a_gap() {
    // A row of cells with its middle missing: the target lies beyond it, the way there leads round.
    let lattice = Lattice::around(200);
    let (mut crowd, mut before) = packed(&lattice, 55);
    let centre = before.iter().position(|place| *place == lattice.order()[0]).unwrap();
    let hole = before.swap_remove(centre);
    crowd.clear(lattice.order());
    for (cell, place) in (0..).zip(&before) {
        crowd.put(*place, cell);
    }
    let opposite = |place: u32| {
        let there = lattice.coordinates(place).map(|c| -c);
        *lattice.order().iter().find(|other| lattice.coordinates(**other) == there).unwrap()
    };
    let mother = 0_u32;
    let across = opposite(before[mother as usize]);
    let end = before.iter().position(|place| *place == across).unwrap();
    before.swap_remove(end);
    crowd.clear(lattice.order());
    for (cell, place) in (0..).zip(&before) {
        crowd.put(*place, cell);
    }
    let mut places = before.clone();
    places.push(VACANT);
    let newcomer =
        Newcomer { cell: before.len() as u32, mother, beside: before[0], target: across, ties: 0 };
    crowd.push_in(&lattice, newcomer, &mut places);
    assert!(places.iter().all(|place| *place != hole));
    assert!(places.contains(&across));
    for (from, to) in before.iter().zip(&places) {
        assert!(lattice.steps_between(*from, *to) <= 1);
    }
}
