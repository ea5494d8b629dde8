//! Hunger: who starves and when, what it leaves, bodies that cease to grow, and that all of it ends.

use std::collections::{BTreeMap, BTreeSet};

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use somadawn::tissue::{
    Developer, Development, Ending, GrowthRules, NEIGHBOURS, Plan, Waste, largest_fed_cells,
    plan_radius_um,
};

use super::body_growth::{fed, rules};

const PLANS: [Plan; 4] = [Plan::Clump, Plan::Chain, Plan::Tree, Plan::Shell];

fn grow(rules: GrowthRules, seed: u64) -> Development {
    Developer::new(rules).develop(1.0, &mut Xoshiro256PlusPlus::seed_from_u64(seed))
}

/// Holds what every development must be, against its coordinates and the nutrient's balance.
fn assert_sound(body: &Development, rules: &GrowthRules) {
    let cells = body.coordinates.len();
    assert!(body.births_h.is_sorted());
    assert_eq!(body.births_h.len() - body.starved, cells, "births less deaths are the living");
    assert_eq!([body.labels.len(), body.reserves_eu.len(), body.incomes.len()], [cells; 3]);
    assert!(cells <= rules.adult_cells);
    let site_of: BTreeMap<[i32; 3], usize> = body.coordinates.iter().copied().zip(0..).collect();
    assert_eq!(site_of.len(), cells, "two cells share a site");
    for (cell, site) in body.coordinates.iter().enumerate() {
        assert_eq!(site.iter().sum::<i32>() % 2, 0, "off the lattice");
        let around = NEIGHBOURS.map(|step| [0, 1, 2].map(|axis| site[axis] + step[axis]));
        let expected: BTreeSet<usize> =
            around.iter().filter_map(|next| site_of.get(next).copied()).collect();
        let found: BTreeSet<usize> =
            body.graph.touching(cell).iter().map(|cell| *cell as usize).collect();
        assert_eq!(found, expected);
        assert_eq!(usize::from(body.graph.empty()[cell]), 12 - found.len());
        assert!(body.graph.open()[cell] <= body.graph.empty()[cell]);
    }
    assert!(body.reserves_eu.iter().all(|eu| *eu >= 0.0));
    assert!(body.incomes.iter().all(|income| (0.0..=1.0 + 1e-9).contains(income)));
    if let (Some(nutrient), None) = (&rules.fields.nutrient, &rules.fields.waste) {
        assert_balanced(body, nutrient.demand);
    }
}

/// What flows in at open sites is taken up, to 1e-6 of it (kappa 0.5, exchange 1).
fn assert_balanced(body: &Development, demand: f64) {
    let (mut inflow, mut uptake) = (0.0, 0.0);
    for (income, open) in body.incomes.iter().zip(body.graph.open()) {
        let share = income / 1.5;
        inflow += f64::from(*open) * (1.0 - 0.5 * share / (1.0 - share));
        uptake += demand * share;
    }
    assert!((inflow - uptake).abs() <= 1e-6 * uptake.max(1e-9), "{inflow} in, {uptake} taken");
}

/// The cuboctahedron of 13, whose centre earns less than upkeep and whose corners earn more.
fn thirteen(starvation_h: f64) -> GrowthRules {
    GrowthRules { starvation_h, ..fed(12.0, 0.45, rules(Plan::Clump, 13, 13)) }
}

#[test]
fn a_starved_centre_leaves_still_water() {
    let untouched = grow(GrowthRules { upkeep_eu_per_h: 0.0, ..thirteen(24.0) }, 1);
    let (centre, corners): (Vec<_>, Vec<_>) = untouched
        .coordinates
        .iter()
        .zip(&untouched.incomes)
        .partition(|(site, _)| **site == [0; 3]);
    assert!(*centre[0].1 < 0.45 && corners.iter().all(|(_, income)| **income > 0.45));
    let body = grow(thirteen(24.0), 1);
    assert_eq!((body.ending, body.starved, body.coordinates.len()), (Ending::Adult(24.0), 1, 12));
    assert_eq!(body.graph.empty(), [8; 12]);
    assert_eq!(body.graph.open(), [7; 12]);
    assert_sound(&body, &thirteen(24.0));
    // What the centre took is now the others'.
    let least = body.incomes.iter().copied().fold(f64::INFINITY, f64::min);
    assert!(corners.iter().all(|(_, income)| **income < least));
}

#[test]
fn grace_may_be_nothing_or_for_ever() {
    let at_once = grow(thirteen(0.0), 1);
    assert_eq!((at_once.ending, at_once.starved), (Ending::Adult(0.0), 1));
    let never = grow(thirteen(f64::INFINITY), 1);
    assert_eq!((never.ending, never.starved), (Ending::Adult(0.0), 0));
}

#[test]
fn a_body_without_net_income_never_grows() {
    let even = GrowthRules { upkeep_eu_per_h: 1.0, ..rules(Plan::Tree, 3, 9) };
    let body = grow(even, 1);
    assert_eq!((body.ending, body.coordinates.len()), (Ending::Stunted(0.0), 3));
    let hungry = GrowthRules { upkeep_eu_per_h: 1.1, ..rules(Plan::Clump, 3, 9) };
    let body = grow(hungry.clone(), 1);
    assert_eq!((body.ending, body.starved), (Ending::Stunted(24.0), 3));
    assert_sound(&body, &hungry);
    let patient = GrowthRules { starvation_h: f64::INFINITY, ..hungry };
    assert_eq!(grow(patient, 1).ending, Ending::Stunted(0.0));
}

#[test]
fn a_clump_grows_until_as_many_have_starved_as_it_held() {
    for seed in 0..5 {
        let rules = GrowthRules { division_cv: 0.2, ..fed(3.0, 0.4, rules(Plan::Clump, 1, 1000)) };
        let body = grow(rules.clone(), seed);
        let Ending::Stunted(hours) = body.ending else { panic!("{:?}", body.ending) };
        assert!(hours > 24.0);
        assert!(body.starved >= body.coordinates.len());
        assert_sound(&body, &rules);
        let fed = largest_fed_cells(&rules, 1000).expect("some starve");
        assert!(body.births_h.len() > fed, "grew past the size at which all are fed");
    }
}

#[test]
fn plans_grow_with_all_fields_on() {
    for plan in PLANS {
        for (cells, demand) in [(2, 0.5), (20, 0.5), (150, 0.2)] {
            let rules =
                GrowthRules { division_cv: 0.1, ..fed(demand, 0.05, rules(plan, 1, cells)) };
            let body = grow(rules.clone(), 7);
            assert!(matches!(body.ending, Ending::Adult(_)), "{plan:?}: {:?}", body.ending);
            assert_eq!((body.starved, body.coordinates.len()), (0, cells));
            assert_sound(&body, &rules);
            let mut wasteful = rules;
            wasteful.fields.waste = Some(Waste { release: 0.2, exchange: 1.0 });
            let poisoned = grow(wasteful.clone(), 7);
            assert_sound(&poisoned, &wasteful);
            let mean = |body: &Development| body.incomes.iter().sum::<f64>() / cells as f64;
            assert!(mean(&poisoned) < mean(&body), "{plan:?} of {cells}");
        }
    }
}

#[test]
fn an_adult_shell_is_fed_where_a_clump_starves() {
    let rules = |plan| GrowthRules { starvation_h: 200.0, ..fed(3.0, 0.45, rules(plan, 1, 100)) };
    let shell = grow(rules(Plan::Shell), 3);
    assert_eq!(shell.starved, 0);
    assert!(shell.graph.empty().iter().all(|empty| *empty > 0));
    assert!(shell.graph.empty().iter().zip(shell.graph.open()).any(|(empty, open)| empty > open));
    assert_sound(&shell, &rules(Plan::Shell));
    assert!(grow(rules(Plan::Clump), 3).starved > 0);
}

#[test]
fn every_development_ends() {
    // 4 plans x 5 graces x 5 demands x 5 shares, among them nonsense.
    for plan in PLANS {
        for starvation_h in [0.0, 1e-3, 24.0, 1e300, f64::INFINITY] {
            for demand in [1e-3, 0.3, 3.0, 100.0, 1e6] {
                let rules = GrowthRules { starvation_h, ..fed(demand, 0.2, rules(plan, 2, 30)) };
                let mut developer = Developer::new(rules.clone());
                let mut rng = Xoshiro256PlusPlus::seed_from_u64(13);
                for share in [1.0, 0.5, 0.0, f64::NAN, f64::INFINITY] {
                    assert_sound(&developer.develop(share, &mut rng), &rules);
                }
            }
        }
    }
}

#[test]
fn the_largest_fed_body_is_the_last_before_one_starves() {
    for (plan, demand, upkeep) in [
        (Plan::Clump, 3.0, 0.45),
        (Plan::Clump, 12.0, 0.45),
        (Plan::Tree, 6.0, 0.4),
        (Plan::Chain, 10.0, 0.751),
        (Plan::Shell, 6.0, 0.6),
    ] {
        let rules = fed(demand, upkeep, rules(plan, 1, 2000));
        let fed = largest_fed_cells(&rules, 2000).unwrap_or(2000);
        assert!((1..2000).contains(&fed), "{plan:?}: {fed}");
        let hungry = |cells: usize| {
            let rules = GrowthRules { propagule_cells: cells, adult_cells: cells, ..rules.clone() };
            let untouched = GrowthRules { starvation_h: f64::INFINITY, ..rules };
            grow(untouched, 1).incomes.iter().filter(|income| **income < upkeep).count()
        };
        assert_eq!(hungry(fed), 0, "{plan:?} of {fed}");
        assert!(hungry(fed + 1) > 0, "{plan:?} of {fed} + 1");
    }
    assert_eq!(largest_fed_cells(&rules(Plan::Clump, 1, 10), 5000), None);
    assert_eq!(largest_fed_cells(&fed(0.5, 1.01, rules(Plan::Clump, 1, 10)), 5000), Some(0));
}

#[test]
fn radii_follow_plans() {
    // Ball: 3 n d^3 / (4 pi sqrt 2) cubed root; sphere: 100 cells, sqrt(100 sqrt 3 / (8 pi)) = 2.6252.
    let ball = (3.0 * 1000.0 / (4.0 * std::f64::consts::PI * 2.0_f64.sqrt())).cbrt() * 10.0;
    for plan in [Plan::Clump, Plan::Tree] {
        approx::assert_relative_eq!(plan_radius_um(plan, 1000, 10.0), ball, max_relative = 1e-12);
    }
    approx::assert_relative_eq!(plan_radius_um(Plan::Chain, 31, 10.0), 155.0);
    approx::assert_relative_eq!(plan_radius_um(Plan::Shell, 100, 10.0), 26.252, epsilon = 1e-3);
}

#[test]
fn long_chains_fit() {
    let body = grow(rules(Plan::Chain, 1, 100_000), 1);
    let [first, last] = [
        body.coordinates.iter().map(|site| site[0]).min(),
        body.coordinates.iter().map(|site| site[0]).max(),
    ];
    assert_eq!((first, last), (Some(-49_999), Some(50_000)));
}
