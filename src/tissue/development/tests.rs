//! What solving fields in steps costs in accuracy.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::course::{Course, STEP};
use super::*;
use crate::tissue::Nutrient;

fn rules(cells: usize, demand: f64) -> GrowthRules {
    GrowthRules {
        plan: Plan::Clump,
        propagule_cells: 1,
        adult_cells: cells,
        fields: Fields {
            nutrient: Some(Nutrient { demand, kappa: 0.5, exchange: 1.0 }),
            waste: None,
        },
        income_eu_per_h: 1.0,
        upkeep_eu_per_h: 0.1,
        division_cost_eu: 8.0,
        division_cv: 0.2,
        starvation_h: 24.0,
    }
}

/// Mean duration of growth over some bodies with its standard error, h.
fn mean_duration(rules: &GrowthRules, step: f64, bodies: usize, seed: u64) -> [f64; 2] {
    let mut course = Course::in_steps(rules.clone(), step);
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(seed);
    let durations: Vec<f64> = (0..bodies)
        .map(|_| match course.run(1.0, &mut rng).ending {
            Ending::Adult(hours) | Ending::Stunted(hours) => hours,
        })
        .collect();
    let mean = durations.iter().sum::<f64>() / bodies as f64;
    let square = durations.iter().map(|hours| (hours - mean).powi(2)).sum::<f64>();
    [mean, square.sqrt() / bodies as f64]
}

#[test]
fn solving_in_steps_does_not_change_how_long_growth_takes() {
    // 1,000 bodies of 64 each way; the difference of means within 4.5 of its standard errors (false
    // alarm 7e-6), which is less than 1 % of the mean.
    let rules = rules(64, 0.5);
    let [[always, error], [steps, other]] =
        [(0.0, 1), (STEP, 2)].map(|(step, seed)| mean_duration(&rules, step, 1000, seed));
    let error = 4.5 * error.hypot(other);
    assert!(error < 0.01 * always, "{error} h are too many to tell");
    assert!((always - steps).abs() < error, "{steps} h for {always} h");
}
