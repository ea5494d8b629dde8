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
fn mean_duration(rules: &GrowthRules, step: f64, bodies: usize) -> [f64; 2] {
    let mut course = Course::in_steps(rules.clone(), step);
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(1);
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
#[ignore = "measures; to be read"]
fn steps() {
    for (cells, demand, bodies) in [(64, 0.5, 4000), (200, 0.3, 400)] {
        for step in [0.0, 0.02, 0.04, 0.08, 0.16] {
            let clock = std::time::Instant::now();
            let [mean, error] = mean_duration(&rules(cells, demand), step, bodies);
            let us = clock.elapsed().as_secs_f64() * 1e6 / (bodies * cells) as f64;
            eprintln!("{cells} {step}: {mean:.4} +- {error:.4} h, {us:.2} us/cell");
        }
    }
    let _ = STEP;
}
