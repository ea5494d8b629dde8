//! What replacements cost.

use approx::assert_relative_eq;
use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::*;
use crate::scenario::Settings;
use crate::world::nursery::Developments;

/// By hand: three cells with 0.5 eu/h each for germ, two of which touch: `0.01 * 2 * 6 = 0.12` of 1.5 eu/h
/// go to replacements, so that 0.92 of each budget is left, 0.46 eu/h.
#[test]
fn only_cells_that_touch_another_are_paid_for() {
    let mut settings = Settings::example("a broken chain");
    settings.body.adult_cells = 3;
    settings.budget.turnover_per_h = 0.01;
    settings.budget.division_cost_eu = 6.0;
    settings.budget.income_eu_per_h = 1.0;
    let (body, _) =
        Developments::of(&settings).draw(1.0, &mut Xoshiro256PlusPlus::seed_from_u64(1));
    let half = Budget { soma_eu_per_h: 0.5, germ_eu_per_h: 0.5 };
    let rules =
        [ReturnCurve::power(1.2).expect("legal"), ReturnCurve::saturating(0.4).expect("legal")]
            .map(|curve| {
                settings.returns.fecundity.curve = curve;
                Rules(settings.clone())
            });
    for rules in &rules {
        let births = |germ: f64| rules.0.returns.fecundity.value(germ, true) as f32;
        for (cells_in_contact, left) in [(3, 0.44), (2, 0.46), (0, 0.5)] {
            let body = SharedBody { cells_in_contact, ..(*body).clone() };
            let mut outputs = [Output { viability: 0.3, fecundity: births(0.5) }; 3];
            charge(rules, &body, &[half; 3], &[Exposed(true); 3], &mut outputs);
            for output in outputs {
                assert_relative_eq!(output.fecundity, births(left), max_relative = 1e-6);
            }
        }
    }
}
