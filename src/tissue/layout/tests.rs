//! Layouts by hand and against brute force on coordinates.

use std::collections::{BTreeMap, BTreeSet};

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::super::graph::BodyGraph;
use super::super::lattice::NEIGHBOURS;
use super::super::plan::Plan;
use super::{Layout, VACANT, pick, shell};

type Site = [i32; 3];

fn random(seed: u64) -> Xoshiro256PlusPlus {
    Xoshiro256PlusPlus::seed_from_u64(seed)
}

fn around(site: Site) -> [Site; 12] {
    NEIGHBOURS.map(|step| [0, 1, 2].map(|axis| site[axis] + step[axis]))
}

fn square(site: Site) -> i32 {
    site.iter().map(|at| at * at).sum()
}

fn graph_of(layout: &mut Layout) -> BodyGraph {
    let mut graph = BodyGraph::with_capacity(0);
    layout.describe(&mut graph);
    graph
}

/// Buries some of `cells` cells: their new numbers.
fn numbers(cells: usize, dead: &[usize]) -> Vec<u32> {
    let mut living = 0;
    (0..cells)
        .map(|cell| {
            if dead.contains(&cell) {
                return VACANT;
            }
            living += 1;
            living - 1
        })
        .collect()
}

fn grown(plan: Plan, cells: usize, seed: u64) -> Layout {
    let mut layout = Layout::of(plan, cells);
    let rng = &mut random(seed);
    layout.found(1, rng);
    let mut held = 1;
    while held < cells {
        let mother = pick(held, rng) as u32;
        held += usize::from(layout.divide(mother, rng));
    }
    layout
}

/// Empty sites that water reaches, by flood within a box around the body.
fn flooded(cells: &BTreeSet<Site>) -> BTreeSet<Site> {
    let reach = cells.iter().flatten().map(|at| at.abs()).max().unwrap_or(0) + 2;
    let start = [reach, reach, 0];
    let mut wet = BTreeSet::from([start]);
    let mut rising = vec![start];
    while let Some(here) = rising.pop() {
        for next in around(here) {
            let inside = next.iter().all(|at| at.abs() <= reach);
            if inside && !cells.contains(&next) && wet.insert(next) {
                rising.push(next);
            }
        }
    }
    wet
}

/// Holds a layout's graph against its coordinates. A chain cannot enclose anything.
fn assert_described(layout: &mut Layout) {
    let graph = graph_of(layout);
    let sites = layout.coordinates();
    let cell_at: BTreeMap<Site, u32> = sites.iter().copied().zip(0..).collect();
    assert_eq!(cell_at.len(), sites.len(), "two cells share a site");
    let is_chain = matches!(layout, Layout::Chain(_));
    let wet = (!is_chain).then(|| flooded(&cell_at.keys().copied().collect()));
    let is_open =
        |site: &Site| wet.as_ref().map_or(!cell_at.contains_key(site), |wet| wet.contains(site));
    for (cell, site) in sites.iter().enumerate() {
        let expected: BTreeSet<u32> =
            around(*site).iter().filter_map(|next| cell_at.get(next).copied()).collect();
        let found: BTreeSet<u32> = graph.touching(cell).iter().copied().collect();
        assert_eq!(found, expected);
        assert_eq!(graph.empty()[cell] as usize, 12 - expected.len());
        let open = around(*site).iter().filter(|next| is_open(next)).count();
        assert_eq!(graph.open()[cell] as usize, open, "open sites of cell {cell}");
    }
}

#[test]
fn graphs_agree_with_coordinates_through_births_and_deaths() {
    // 20 bodies of each plan; in each, 300 divisions between which a tenth of the cells dies 10 times.
    for plan in [Plan::Clump, Plan::Chain, Plan::Tree] {
        for seed in 0..20 {
            let rng = &mut random(seed);
            let mut layout = Layout::of(plan, 300);
            layout.found(3, rng);
            let mut held = 3;
            for turn in 0..300 {
                if held == 300 || held == 0 {
                    break;
                }
                held += usize::from(layout.divide(pick(held, rng) as u32, rng));
                if turn % 30 == 29 {
                    let dead: Vec<usize> = (0..held).filter(|_| pick(10, rng) == 0).collect();
                    layout.bury(&numbers(held, &dead));
                    held -= dead.len();
                }
                if turn % 10 == 0 || turn % 30 == 29 {
                    assert_described(&mut layout);
                }
            }
        }
    }
}

#[test]
fn a_clump_fills_the_nearest_sites_and_pushes_nobody_off_the_lattice() {
    for cells in [2, 13, 55, 100] {
        let layout = grown(Plan::Clump, cells, 5);
        let squares: BTreeSet<i32> = layout.coordinates().into_iter().map(square).collect();
        let largest = squares.last().copied().unwrap_or(0);
        let nearer = layout.coordinates().into_iter().filter(|site| square(*site) < largest);
        let range = -largest..=largest;
        let sites = range.clone().flat_map(|x| range.clone().map(move |y| (x, y)));
        let all: usize = sites
            .flat_map(|(x, y)| range.clone().map(move |z| [x, y, z]))
            .filter(|site| site.iter().sum::<i32>() % 2 == 0 && square(*site) < largest)
            .count();
        assert_eq!(nearer.count(), all, "a hole in a body of {cells}");
    }
}

#[test]
fn a_hole_at_a_clumps_centre_is_still_water_until_the_next_division_fills_it() {
    let mut layout = grown(Plan::Clump, 13, 3);
    let centre = layout.coordinates().iter().position(|site| *site == [0; 3]).unwrap();
    layout.bury(&numbers(13, &[centre]));
    let graph = graph_of(&mut layout);
    // The cuboctahedron's corners touch 4 corners and the centre; 7 sites lie outside.
    assert_eq!(graph.empty(), [8; 12]);
    assert_eq!(graph.open(), [7; 12]);
    assert!(layout.divide(0, &mut random(1)));
    assert!(layout.coordinates().contains(&[0; 3]));
    assert_eq!(graph_of(&mut layout).open().iter().map(|open| u32::from(*open)).sum::<u32>(), 84);
}

#[test]
fn a_tree_cell_with_twelve_neighbours_waits_for_a_death() {
    let rng = &mut random(2);
    let mut layout = Layout::of(Plan::Tree, 20);
    layout.found(1, rng);
    for _ in 0..12 {
        assert!(layout.divide(0, rng));
    }
    let before = layout.coordinates();
    assert!(!layout.divide(0, rng));
    assert_eq!(layout.coordinates(), before);
    layout.bury(&numbers(13, &[7]));
    assert!(layout.divide(0, rng));
    let mut after = before;
    let freed = after.remove(7);
    after.push(freed);
    assert_eq!(layout.coordinates(), after, "the only free site is the one freed");
}

#[test]
fn tree_cells_stay_where_they_were_born_next_to_their_mothers() {
    // 2,000 divisions, far beyond the first grid; sites are compared as differences.
    let rng = &mut random(11);
    let mut layout = Layout::of(Plan::Tree, 2000);
    layout.found(1, rng);
    let mut mothers = vec![0];
    while mothers.len() < 2000 {
        let mother = pick(mothers.len(), rng);
        if layout.divide(mother as u32, rng) {
            mothers.push(mother);
        }
    }
    let sites = layout.coordinates();
    for (cell, mother) in mothers.iter().enumerate().skip(1) {
        let [here, there] = [sites[cell], sites[*mother]];
        assert_eq!(square([0, 1, 2].map(|axis| here[axis] - there[axis])), 2);
    }
    assert!(sites.iter().flatten().any(|at| at.abs() > 8));
}

#[test]
fn a_chains_daughters_lie_on_either_side_and_the_rest_shifts() {
    // 2 cells; the first divides. On the right: 0 2 1, on the left: 2 0 1, each with probability 1/2.
    // 1,000 draws; 4.9 standard errors (false alarm 1e-6).
    let rng = &mut random(4);
    let mut right = 0;
    for _ in 0..1000 {
        let mut layout = Layout::of(Plan::Chain, 10);
        layout.found(2, rng);
        layout.divide(0, rng);
        let line = along(&layout);
        match line[..] {
            [-1, 1, 0] => right += 1,
            [0, 1, -1] => {}
            _ => panic!("{line:?}"),
        }
    }
    let off = f64::from(right - 500).abs();
    assert!(off < 4.9 * 250_f64.sqrt(), "{right} of 1000 on the right");
}

#[test]
fn a_gap_in_a_chain_takes_up_the_shift() {
    // 0 1 2 3 4 loses 2 and is renumbered 0 1 _ 2 3.
    let rng = &mut random(9);
    let (mut filled, mut shifted) = (0, 0);
    for _ in 0..40 {
        let mut layout = Layout::of(Plan::Chain, 10);
        layout.found(5, rng);
        layout.bury(&numbers(5, &[2]));
        assert_eq!(along(&layout), [-2, -1, 1, 2]);
        let graph = graph_of(&mut layout);
        assert_eq!(graph.touching(1), [0]);
        assert_eq!(graph.empty(), [11; 4]);
        layout.divide(0, rng);
        match along(&layout)[..] {
            // Right: 0 4 1 2 3, the gap is gone.
            [-2, 0, 1, 2, -1] => filled += 1,
            // Left: 4 0 1 _ 2 3.
            [-1, 0, 2, 3, -2] => shifted += 1,
            ref other => panic!("{other:?}"),
        }
    }
    assert!(filled > 5 && shifted > 5, "{filled} filled, {shifted} shifted");
}

/// Where each cell lies along the line.
fn along(chain: &Layout) -> Vec<i32> {
    let sites = chain.coordinates();
    assert!(sites.iter().all(|[x, y, z]| x == y && *z == 0), "off the line");
    sites.iter().map(|site| site[0]).collect()
}

#[test]
fn shells_are_surfaces_at_every_size_and_connected_at_nearly_all() {
    let larger = [600, 1000, 2000, 4096, 20_000];
    let mut broken = Vec::new();
    for cells in (1..=500).chain(larger) {
        let sites = shell::shell_sites(cells);
        let distinct: BTreeSet<&Site> = sites.iter().collect();
        assert_eq!(distinct.len(), cells);
        let graph = shell::shell_graph(cells);
        assert!(graph.empty().iter().all(|empty| *empty > 0), "interior cells of {cells}");
        let open = open_sites_of_parts(&graph);
        assert!(open.iter().all(|open| *open > 0), "a part of {cells} is cut off from the water");
        if open.len() > 1 {
            broken.push(cells);
        }
    }
    // Sizes at which some sites nearest the sphere touch none of the others.
    let expected: Vec<usize> = (70..=73).chain(302..=309).chain(419..=427).collect();
    assert_eq!(broken, expected);
}

/// Open sites next to each connected part of a body.
fn open_sites_of_parts(graph: &BodyGraph) -> Vec<u32> {
    let mut seen = vec![false; graph.cells()];
    let mut parts = Vec::new();
    for start in 0..graph.cells() {
        if std::mem::replace(&mut seen[start], true) {
            continue;
        }
        let mut open = 0;
        let mut rising = vec![start];
        while let Some(here) = rising.pop() {
            open += u32::from(graph.open()[here]);
            for next in graph.touching(here) {
                if !std::mem::replace(&mut seen[*next as usize], true) {
                    rising.push(*next as usize);
                }
            }
        }
        parts.push(open);
    }
    parts
}
