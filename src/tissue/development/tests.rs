//! Timing of developments (to be replaced).
use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::course::Course;
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

#[test]
#[ignore = "timing"]
fn timing() {
    for (cells, demand) in
        [(64, 0.1), (64, 0.5), (512, 0.02), (512, 0.1), (4096, 0.005), (4096, 0.03)]
    {
        let mut course = Course::under(rules(cells, demand));
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(1);
        let n = (20_000 / cells).max(2);
        let clock = std::time::Instant::now();
        let mut last = None;
        for _ in 0..n {
            last = Some(course.run(1.0, &mut rng));
        }
        let us = clock.elapsed().as_secs_f64() * 1e6 / (n * cells) as f64;
        let last = last.unwrap();
        eprintln!(
            "{cells} {demand}: {us:.2} us/cell {:?} starved {} min income {}",
            last.ending,
            last.starved,
            last.incomes.iter().copied().fold(9.0, f64::min)
        );
    }
}
