//! What theory says of spatial scenarios as a whole: limits of reach, starved bodies, unequal incomes,
//! and documents without holes.

use approx::assert_relative_eq;
use proptest::prelude::*;
use somadawn::scenario::Settings;
use somadawn::scenario::settings::{Nutrient, Plan, Support, Waste};
use somadawn::study::prediction::{Prediction, model, predict};
use somadawn::theory::{Cue, CueSet, Programme, Verdict};

use crate::theory_models::{only, power};

fn ponds(cells: usize, exponents: [f64; 2], cues: CueSet) -> Settings {
    let mut settings = Settings::example("Lantern algae of the Ostrel ponds");
    settings.body.adult_cells = cells;
    [settings.returns.viability, settings.returns.fecundity] = exponents.map(power);
    settings.traits.cues = cues;
    settings
}

fn scarce(uptake_fmol_per_h: f64) -> Nutrient {
    Nutrient {
        bath_mm: 0.05,
        half_saturation_mm: 0.02,
        uptake_fmol_per_h,
        diffusivity_um2_per_s: 500.0,
        exchange: 1.0,
    }
}

/// Cells fed alike, exponents alike: at the generalist R0 does not know of reach, and the curvature for
/// noise is `k (2 k (1 - tau) - 1)`, `k = a/2`, with tau from 1 (without reach) to 1/n (far reach).
#[test]
fn reach_runs_from_each_cell_for_itself_to_pooled() {
    let (n, a) = (64, 1.4);
    let pooled = model(&ponds(n, [a, a], only(Cue::Noise)));
    let expected = pooled.generalist();
    let curvature = |tau: f64| a / 2.0 * (a * (1.0 - tau) - 1.0);
    let at = |range_diameters: f64| {
        let mut settings = ponds(n, [a, a], only(Cue::Noise));
        settings.support = Some(Support { range_diameters, leak: 0.0 });
        let model = model(&settings);
        let generalist = model.generalist();
        assert_relative_eq!(generalist.r0, expected.r0, max_relative = 1e-9);
        assert_relative_eq!(generalist.soma_share, 0.5, max_relative = 1e-7);
        model.selection_at(&generalist)[0].curvature
    };
    assert_relative_eq!(at(0.0), curvature(1.0), max_relative = 1e-9);
    // The body is 5 cells across, so that tau - 1/n is of order (5 / range)^4.
    assert_relative_eq!(at(1e4), curvature(1.0 / 64.0), max_relative = 1e-7);
    let between = [0.0, 0.5, 1.0, 2.0, 4.0, 1e4].map(at);
    assert!(between.is_sorted(), "{between:?}");
}

/// The steady solver's reach in a chain is that of elimination: a chain of 6 cells, known to the last
/// digit whatever its order of growth.
#[test]
fn a_chain_is_one_body_whose_reach_is_solved() {
    let mut settings = ponds(6, [1.7, 1.3], only(Cue::Noise));
    settings.body.plan = Plan::Chain;
    settings.support = Some(Support { range_diameters: 1.2, leak: 0.0 });
    let model = model(&settings);
    let life = somadawn::study::prediction::life_history(&settings);
    let table = crate::theory_space_models::Table::of_chain(6, 1.2);
    let cells = crate::theory_space_models::earning(&[1.0; 6]);
    let growth_h = model.growth_h();
    let body = somadawn::theory::PlacedBody {
        growth_h,
        ..crate::theory_space_models::adult(cells, Some(table))
    };
    let exact = somadawn::theory::Model::of_placed(
        life,
        [power(1.7), power(1.3)],
        only(Cue::Noise),
        somadawn::theory::PlacedBodies::new([(1.0, body)], 0.0),
    );
    let (generalist, expected) = (model.generalist(), exact.generalist());
    assert_relative_eq!(generalist.r0, expected.r0, max_relative = 1e-11);
    let [found, wanted] = [&model, &exact].map(|model| model.selection_at(&expected)[0]);
    assert_relative_eq!(found.curvature, wanted.curvature, max_relative = 1e-9);
    let best = [model.best_programme(&generalist), exact.best_programme(&expected)];
    assert_relative_eq!(best[0].r0, best[1].r0, max_relative = 1e-9);
    assert!(best[0].gain.standard_error <= 1e-12 * best[0].r0, "one body, all fates");
}

#[test]
fn where_food_is_scarce_inside_unequal_exponents_favour_position() {
    let verdict = |a: f64, c: f64| {
        let mut settings = ponds(64, [a, c], only(Cue::Income));
        settings.nutrient = Some(scarce(2000.0));
        predict(&settings)
    };
    for (a, c) in [(0.9, 0.5), (0.5, 0.9)] {
        let prediction = verdict(a, c);
        assert_eq!(prediction.verdict, Verdict::FavouredAtOnce);
        let gradient = prediction.cues[0].gradient.expect("a number");
        assert!(gradient * (a - c) > 0.0, "{prediction:?}");
    }
    let alike = verdict(0.7, 0.7);
    assert_eq!(alike.verdict, Verdict::NotFavouredLocally);
    assert!(alike.cues[0].gradient.expect("a number").abs() < 1e-9);
    assert!(alike.cues[0].curvature.expect("a number") < 0.0);
    let sampling = alike.sampling.expect("bodies are grown");
    assert!(sampling.bodies >= 6 && sampling.maturing_share >= 1.0 && sampling.fates.is_none());
}

/// Fully fed cells that keep the share s of their incomes take `(1 - u) / (s - u)` times as long, however
/// their divisions come: under a hazard as many times lower, a taxed propagule grows up as often as an
/// untaxed one, and linear B and V each are s times theirs. Trees of 12 cells, costs of division varying,
/// u = 0.2, s = 0.7, a cue that all cells read alike.
#[test]
fn a_tax_slows_fully_fed_bodies_alike() {
    let mut settings = ponds(12, [1.0, 1.0], only(Cue::Exposure));
    settings.body.plan = Plan::Tree;
    settings.budget.division_cv = 0.4;
    settings.budget.upkeep_eu_per_h = 0.2;
    settings.traits.cost_per_unit = 0.1;
    settings.life.juvenile_hazard_per_h = 0.02;
    let untaxed = model(&settings);
    let in_rounds = untaxed.life().growth_h(1.0).expect("saves");
    assert!((untaxed.growth_h().expect("grows") / in_rounds - 1.0).abs() > 0.01);
    let mut programme = Programme::generalist(0.3);
    let expected = 0.49 * untaxed.expected_propagules(&programme);
    settings.life.juvenile_hazard_per_h *= 0.5 / 0.8;
    programme.responsiveness[Cue::Exposure.index()] = 3.0;
    let found = model(&settings).expected_propagules(&programme);
    assert_relative_eq!(found, expected, max_relative = 1e-12);
}

/// Where no body matures nothing is left, and what does not exist is null.
#[test]
fn bodies_that_starve_leave_nothing() {
    let mut settings = ponds(200, [1.0, 1.0], only(Cue::Noise).with(Cue::Income));
    settings.nutrient = Some(scarce(20_000.0));
    settings.budget.upkeep_eu_per_h = 0.6;
    let prediction = predict(&settings);
    let sampling = prediction.sampling.expect("bodies are grown");
    assert!(sampling.maturing_share <= 0.0, "{sampling:?}");
    assert!(prediction.generalist.r0.expect("a number") <= 0.0);
    assert_eq!(prediction.verdict, Verdict::NotFavouredLocally);
    assert!(prediction.cues.iter().all(|cue| cue.gradient.is_none() && cue.curvature.is_none()));
    assert_whole(&prediction);
}

/// Numbers that must be there are, and lie where they can.
fn assert_whole(prediction: &Prediction) {
    let document = serde_json::to_value(prediction).expect("serialises");
    for (part, key) in
        [("generalist", "soma_share"), ("best", "division_index"), ("best", "soma_fraction")]
    {
        let share = document[part][key].as_f64();
        assert!(share.is_some_and(|share| (0.0..=1.0).contains(&share)), "{document}");
    }
    for part in ["generalist", "best"] {
        assert!(document[part]["r0"].as_f64().is_some_and(|r0| r0 >= 0.0), "{document}");
    }
    let traits = document["best"]["traits"].as_object().expect("traits");
    assert!(traits.values().all(serde_json::Value::is_f64), "{document}");
    let generalist = prediction.generalist.r0.expect("a number");
    assert!(prediction.best.r0.expect("a number") >= generalist * (1.0 - 1e-6), "{document}");
    for cue in &prediction.cues {
        assert!(generalist <= 0.0 || cue.gradient.is_some(), "{document}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(10))]

    #[test]
    fn predictions_have_no_holes(
        cells in 2_usize..14,
        plan in prop::sample::select(vec![Plan::Clump, Plan::Chain, Plan::Tree, Plan::Shell]),
        exponents in [0.4..3.0_f64, 0.4..3.0],
        (range_diameters, leak) in (0.0..6.0_f64, 0.0..1.0_f64),
        (uptake, release) in (10.0..3000.0_f64, 1.0..3000.0_f64),
        (local, fed, wasting, hazards) in any::<(bool, bool, bool, bool)>(),
        turnover_per_h in prop::sample::select(vec![0.0, 0.001, 0.3]),
        cue in prop::sample::select(vec![Cue::Noise, Cue::Lineage, Cue::Exposure, Cue::Income]),
    ) {
        let mut settings = ponds(cells, exponents, only(cue));
        settings.body.plan = plan;
        settings.support = local.then_some(Support { range_diameters, leak });
        settings.nutrient = (!fed).then(|| scarce(uptake));
        settings.waste = wasting.then_some(Waste {
            release_fmol_per_h: release,
            diffusivity_um2_per_s: 500.0,
            toxic_mm: 0.05,
            exchange: 1.0,
        });
        settings.budget.turnover_per_h = turnover_per_h;
        settings.budget.upkeep_eu_per_h = 0.3;
        if hazards {
            settings.life.extrinsic_hazard_per_h = 0.002;
            settings.life.juvenile_hazard_per_h = 0.001;
            settings.traits.cost_per_unit = 0.01;
        }
        assert_whole(&predict(&settings));
    }
}
