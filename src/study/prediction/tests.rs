//! The `predict` document of plain scenarios.

use std::convert::Infallible;
use std::time::Instant;

use approx::assert_relative_eq;

use super::*;
use crate::scenario::settings::Returns;
use crate::theory::{Cue, CueSet, ReturnCurve, TaskReturn, closed_forms};

fn settings(a: f64, c: f64, cues: &[Cue]) -> Settings {
    let task = |exponent| TaskReturn {
        curve: ReturnCurve::Power { exponent },
        surface_effect: 1.0,
        interior_effect: 1.0,
    };
    let mut settings = Settings::example("Lantern algae of the Ostrel ponds");
    settings.returns = Returns { viability: task(a), fecundity: task(c) };
    settings.traits.cues = cues.iter().copied().collect::<CueSet>();
    settings
}

/// By hand: linear returns, 64 cells of z = 1/2: B = 32, V = 1/2, R0 = 32 / (8 * 0.005 / 0.5).
#[test]
fn r0_has_the_units_of_the_scenario() {
    let prediction = predict(&settings(1.0, 1.0, &[Cue::Noise]));
    assert_relative_eq!(prediction.generalist.soma_share, 0.5, max_relative = 1e-14);
    assert_relative_eq!(prediction.generalist.r0.expect("finite"), 400.0, max_relative = 1e-13);
}

#[test]
fn verdicts_follow_the_exponents() {
    let verdict = |a: f64, c: f64, cues: &[Cue]| predict(&settings(a, c, cues)).verdict;
    assert_eq!(verdict(1.5, 1.5, &[Cue::Noise]).name(), "favoured by disruption");
    assert_eq!(verdict(0.8, 0.8, &[Cue::Noise]).name(), "not favoured locally");
    // Between 1.01136 (global) and 1.01587 (local) for 64 cells.
    assert_eq!(verdict(1.0136, 1.0136, &[Cue::Noise]).name(), "valley");
    assert_eq!(verdict(3.0, 0.4, &[Cue::Noise]).name(), "valley");
    assert_eq!(
        verdict(1.0136, 1.0136, &[Cue::Noise, Cue::Lineage]).name(),
        "favoured by disruption"
    );
    assert_eq!(verdict(0.8, 0.8, &[]).name(), "not favoured locally");
}

#[test]
fn the_document_has_exactly_the_promised_form() {
    let mut scenario = settings(1.5, 1.5, &[Cue::Noise, Cue::Lineage]);
    let json = serde_json::to_value(predict(&scenario)).expect("serialises");
    let keys = |value: &serde_json::Value| -> Vec<String> {
        value.as_object().map(|map| map.keys().cloned().collect()).unwrap_or_default()
    };
    assert_eq!(keys(&json), ["best", "critical", "cues", "generalist", "title", "verdict"]);
    assert_eq!(keys(&json["generalist"]), ["r0", "soma_share"]);
    assert_eq!(keys(&json["cues"][0]), ["cue", "curvature", "gradient", "verdict"]);
    let best = ["class", "division_index", "r0", "soma_fraction", "traits"];
    assert_eq!(keys(&json["best"]), best);
    assert_eq!(keys(&json["best"]["traits"]), ["baseline", "lineage", "noise", "noise_bias"]);
    assert!(json["critical"].is_null());
    assert_eq!(json["best"]["class"], "complete");

    // A colony whose cells eat all they earn never grows up.
    scenario.budget.upkeep_eu_per_h = 1.0;
    let prediction = predict(&scenario);
    assert_eq!(prediction.generalist.r0, Some(0.0));
    assert_eq!((prediction.cues[0].gradient, prediction.cues[0].curvature), (None, None));
    assert_eq!(prediction.verdict.name(), "not favoured locally");
}

#[test]
fn critical_exponents_are_reported_with_their_keys() {
    let scenario = settings(1.5, 1.5, &[Cue::Noise]);
    let query = CriticalQuery {
        keys: vec!["returns.viability.exponent".into(), "returns.fecundity.exponent".into()],
        low: 0.7,
        high: 1.6,
    };
    let at = |value: f64| Ok::<_, Infallible>(settings(value, value, &[Cue::Noise]));
    let Ok(prediction) = predict_with_critical(&scenario, &query, at);
    let critical = prediction.critical.expect("asked for");
    assert_eq!(critical.keys, query.keys);
    let local = critical.local.expect("a change");
    assert!((local - closed_forms::local_threshold(Some(64))).abs() < 1e-9);
    // The default bound keeps specialists 6e-6 from pure.
    let global = critical.global.expect("a change");
    assert!((global - closed_forms::global_threshold(Some(64))).abs() < 2e-5);
}

/// The promise is far under 100 ms and 2 s; the test leaves room for a busy machine.
#[test]
fn a_prediction_is_quick() {
    let scenario = settings(1.7, 1.3, &[Cue::Noise]);
    let start = Instant::now();
    let _ = predict(&scenario);
    let plain = start.elapsed();
    let query = CriticalQuery { keys: vec![], low: 0.7, high: 1.6 };
    let at = |value: f64| Ok::<_, Infallible>(settings(value, value, &[Cue::Noise]));
    let Ok(_) = predict_with_critical(&scenario, &query, at);
    let critical = start.elapsed().checked_sub(plain).expect("later");
    assert!(plain.as_millis() < 500 && critical.as_millis() < 6000, "{plain:?} {critical:?}");
}
