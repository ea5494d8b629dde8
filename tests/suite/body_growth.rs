//! Growth event by event: rounds, intervals and hunger worked out by hand, and the same bodies in
//! distribution as growth in rounds gives where no field acts.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use somadawn::tissue::{
    Developer, Development, Ending, Fields, Growth, GrowthRules, Nutrient, Pace, Plan,
};

fn random(seed: u64) -> Xoshiro256PlusPlus {
    Xoshiro256PlusPlus::seed_from_u64(seed)
}

/// A cell earns 1 eu/h at best and divides at 8 eu.
pub(super) fn rules(plan: Plan, propagule_cells: usize, adult_cells: usize) -> GrowthRules {
    GrowthRules {
        plan,
        propagule_cells,
        adult_cells,
        fields: Fields::default(),
        income_eu_per_h: 1.0,
        upkeep_eu_per_h: 0.0,
        division_cost_eu: 8.0,
        division_cv: 0.0,
        starvation_h: 24.0,
    }
}

#[expect(clippy::needless_pass_by_value, reason = "rules are made on the spot")]
pub(super) fn fed(demand: f64, upkeep_eu_per_h: f64, rules: GrowthRules) -> GrowthRules {
    let nutrient = Nutrient { demand, kappa: 0.5, exchange: 1.0 };
    GrowthRules {
        fields: Fields { nutrient: Some(nutrient), waste: None },
        upkeep_eu_per_h,
        ..rules
    }
}

fn grow(rules: GrowthRules, seed: u64) -> Development {
    Developer::new(rules).develop(1.0, &mut random(seed))
}

/// Income of cells that touch only cells of equal concentration and `open` sites:
/// `open (1 - u) = demand u / (kappa + u)`, whose root is found by halving.
fn income_beside(open: f64, demand: f64) -> f64 {
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let u = f64::midpoint(low, high);
        if open * (1.0 - u) > demand * u / (0.5 + u) { low = u } else { high = u }
    }
    low / (0.5 + low) * 1.5
}

fn living(body: &Development) -> usize {
    assert!(body.births_h.is_sorted());
    assert_eq!(body.births_h.len() - body.starved, body.coordinates.len());
    assert_eq!(body.graph.cells(), body.coordinates.len());
    assert_eq!(body.labels.len(), body.coordinates.len());
    assert_eq!(body.reserves_eu.len(), body.coordinates.len());
    assert_eq!(body.incomes.len(), body.coordinates.len());
    body.coordinates.len()
}

#[test]
fn equal_cells_divide_in_rounds() {
    for plan in [Plan::Clump, Plan::Chain, Plan::Shell] {
        let body = grow(rules(plan, 1, 100), 3);
        assert_eq!(body.ending, Ending::Adult(56.0));
        assert_eq!(living(&body), 100);
        for (round, cells) in [(0.0, 1), (8.0, 2), (16.0, 4), (40.0, 32), (48.0, 64), (56.0, 100)] {
            assert_eq!(body.born_by(round), cells);
            assert_eq!(body.born_by(round + 7.9).min(100), cells);
        }
        // In the last round 36 of 64 divide; the others keep their reserves and labels.
        assert_eq!(body.reserves_eu.iter().filter(|eu| **eu > 7.999).count(), 28);
        assert_eq!(body.reserves_eu.iter().filter(|eu| **eu < 0.001).count(), 72);
        assert!(body.incomes.iter().all(|income| *income > 1.0 - 1e-12));
    }
}

#[test]
fn a_body_that_needs_no_division_is_adult_at_once() {
    let body = grow(rules(Plan::Clump, 7, 7), 1);
    assert_eq!((body.ending, living(&body)), (Ending::Adult(0.0), 7));
    assert_eq!(body.labels, [0; 7]);
}

#[test]
fn upkeep_and_tax_slow_growth() {
    let rules = GrowthRules { upkeep_eu_per_h: 0.1, ..rules(Plan::Clump, 1, 2) };
    let body = Developer::new(rules).develop(0.5, &mut random(1));
    let Ending::Adult(hours) = body.ending else { panic!("{:?}", body.ending) };
    approx::assert_relative_eq!(hours, 8.0 / (0.5 - 0.1), max_relative = 1e-12);
}

#[test]
fn first_divisions_come_when_the_nutrient_says() {
    // One cell with 12 open sites, then two with 11 each, alike by symmetry.
    let demand = 6.0;
    let body = grow(fed(demand, 0.05, rules(Plan::Clump, 1, 4)), 2);
    let first_h = 8.0 / (income_beside(12.0, demand) - 0.05);
    let second_h = first_h + 8.0 / (income_beside(11.0, demand) - 0.05);
    for (birth_h, expected) in body.births_h.iter().zip([0.0, first_h, second_h, second_h]) {
        approx::assert_relative_eq!(*birth_h, expected, max_relative = 1e-6);
    }
    assert_eq!(body.born_by(body.births_h[2]), 4, "equal cells divide together");
}

#[test]
fn well_fed_cells_divide_sooner() {
    // Three in a line: the ends have 11 open sites, the middle 10. The ends divide, together.
    for seed in 0..10 {
        let body = grow(fed(6.0, 0.0, rules(Plan::Chain, 3, 5)), seed);
        assert_eq!(body.labels, [-1, 0, -1, 1, 1]);
        assert!(body.reserves_eu[1] > 7.0 && body.reserves_eu[1] < 8.0);
        assert_eq!(body.born_by(body.births_h[3]), 5);
    }
}

#[test]
fn growth_takes_longer_where_cells_share_food() {
    let hours = |demand| match grow(fed(demand, 0.0, rules(Plan::Clump, 1, 128)), 4).ending {
        Ending::Adult(hours) => hours,
        Ending::Stunted(hours) => panic!("stunted after {hours} h"),
    };
    approx::assert_relative_eq!(hours(1e-9), 56.0, max_relative = 1e-6);
    assert!(hours(0.5) > 56.5 && hours(2.0) > hours(0.5) + 1.0);
}

/// What is compared between two ways of growing.
const COMPARED: [&str; 5] = ["duration", "exposed", "exposed daughters", "labels", "saved"];

fn compared(
    duration_h: f64,
    exposed: &[bool],
    labels: &[i8],
    reserves_eu: &[f32],
) -> [f64; COMPARED.len()] {
    let both = exposed.iter().zip(labels);
    [
        duration_h,
        exposed.iter().filter(|exposed| **exposed).count() as f64,
        both.filter(|(exposed, label)| **exposed && **label == 1).count() as f64,
        labels.iter().map(|label| f64::from(*label)).sum(),
        reserves_eu.iter().map(|eu| f64::from(*eu)).sum(),
    ]
}

#[test]
fn without_fields_bodies_are_those_of_growth_in_distribution() {
    // Means of 5 quantities over 3,000 bodies each way; difference within 4.5 of its standard errors
    // (false alarm 7e-6 each, 15 of them 1e-4), or exact where nothing varies.
    const BODIES: usize = 3000;
    for (cells, cv) in [(30, 0.0), (30, 0.2), (50, 0.2)] {
        let pace = Pace { net_income_eu_per_h: 1.0, division_cost_eu: 8.0, division_cv: cv };
        let mut growth = Growth::of_clump(1, cells);
        let mut developer =
            Developer::new(GrowthRules { division_cv: cv, ..rules(Plan::Clump, 1, cells) });
        let (mut rng, mut other) = (random(21), random(22));
        let mut sums = [[[0.0; 2]; COMPARED.len()]; 2];
        for _ in 0..BODIES {
            let body = growth.grow(&pace, f64::INFINITY, &mut rng);
            let (labels, reserves) = (body.labels.to_vec(), body.reserves_eu.to_vec());
            let hours = body.duration_h;
            let exposed: Vec<bool> = growth.exposed().collect();
            let old = compared(hours, &exposed, &labels, &reserves);
            let body = developer.develop(1.0, &mut other);
            let Ending::Adult(hours) = body.ending else { panic!("{:?}", body.ending) };
            let exposed: Vec<bool> = body.graph.empty().iter().map(|empty| *empty > 0).collect();
            let new = compared(hours, &exposed, &body.labels, &body.reserves_eu);
            for (sums, values) in sums.iter_mut().zip([old, new]) {
                for (sum, value) in sums.iter_mut().zip(values) {
                    *sum = [sum[0] + value, sum[1] + value * value];
                }
            }
        }
        for (at, name) in COMPARED.iter().enumerate() {
            let [one, two] = [sums[0][at], sums[1][at]].map(|[sum, squares]| {
                let mean = sum / BODIES as f64;
                (mean, (squares / BODIES as f64 - mean * mean).max(0.0) / BODIES as f64)
            });
            let error = 4.5 * (one.1 + two.1).sqrt() + 1e-6 * one.0.abs();
            assert!((one.0 - two.0).abs() <= error, "{name}: {one:?} and {two:?} at cv {cv}");
        }
    }
}

#[test]
fn the_same_seed_gives_the_same_body() {
    let cut = |body: &Development| {
        let sum: i64 = body
            .coordinates
            .iter()
            .zip(1..)
            .map(|([x, y, z], cell)| cell * i64::from(x + 3 * y + 7 * z))
            .sum();
        let daughters = body.labels.iter().filter(|label| **label == 1).count();
        let eu: f32 = body.reserves_eu.iter().sum();
        let hours = body.births_h.last().copied().unwrap_or(0.0);
        format!("{sum} | {daughters} | {eu:.1} | {hours:.3}")
    };
    let bodies: Vec<String> = [Plan::Clump, Plan::Chain, Plan::Tree, Plan::Shell]
        .into_iter()
        .map(|plan| {
            let rules = GrowthRules { division_cv: 0.2, ..fed(0.5, 0.1, rules(plan, 1, 60)) };
            let mut developer = Developer::new(rules);
            let body = developer.develop(1.0, &mut random(8));
            let again = developer.develop(1.0, &mut random(8));
            assert_eq!(cut(&body), cut(&again), "a developer's memory shows");
            cut(&body)
        })
        .collect();
    insta::assert_snapshot!(bodies.join("\n"), @r"
    -1414 | 31 | 198.5 | 51.814
    4492 | 29 | 169.5 | 55.174
    3584 | 29 | 167.3 | 55.260
    616 | 31 | 198.5 | 51.814
    ");
}
