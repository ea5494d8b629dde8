//! Critical exponents, found through the whole theory, against closed forms.

#![expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "small whole numbers")]

use std::convert::Infallible;

use somadawn::theory::critical::{global_critical, local_critical};
use somadawn::theory::lineage::label_compositions;
use somadawn::theory::{Cue, Model, closed_forms};

use crate::theory_models::{bare_life, only, power, random_fates, rows, unbounded};

const RANDOM_FATES: &str = include_str!("../data/dol_random_fates.csv");

fn sizes() -> Vec<Option<u64>> {
    let mut sizes: Vec<Option<u64>> =
        [2, 3, 4, 5, 8, 10, 16, 20, 32, 50, 64, 100, 317, 1000].into_iter().map(Some).collect();
    sizes.push(None);
    sizes
}

#[test]
fn the_local_threshold_is_n_over_n_minus_1() {
    for n in sizes() {
        let model_at = |a: f64| Ok::<_, Infallible>(random_fates(a, a, n));
        let Ok(found) = local_critical(model_at, 0.6, 3.0);
        let exact = closed_forms::local_threshold(n);
        assert!((found.expect("a change") - exact).abs() < 1e-10, "{n:?} {found:?} {exact}");
    }
}

#[test]
fn the_local_threshold_of_unequal_exponents_is_the_harmonic_mean() {
    for n in [Some(3), Some(20), None] {
        for a in [1.7, 2.5, 5.0] {
            let model_at = |c: f64| Ok::<_, Infallible>(random_fates(a, c, n));
            let Ok(found) = local_critical(model_at, 0.2, 20.0);
            let exact = closed_forms::local_partner(a, n).expect("a partner exists");
            assert!((found.expect("a change") - exact).abs() < 1e-9, "{n:?} {a} {found:?}");
        }
    }
}

/// Bound 40, so that full specialists are pure to the last digit.
#[test]
fn the_global_threshold_of_random_fates_is_that_of_full_specialists() {
    for n in sizes() {
        let model_at = |a: f64| Ok::<_, Infallible>(unbounded(random_fates(a, a, n)));
        let Ok(found) = global_critical(model_at, 0.6, 3.0);
        let exact = closed_forms::global_threshold(n);
        assert!((found.expect("a change") - exact).abs() < 1e-8, "{n:?} {found:?} {exact}");
    }
    for row in rows(RANDOM_FATES) {
        let exact = closed_forms::global_threshold(Some(row[0] as u64));
        assert!((exact - row[3]).abs() < 2e-6);
    }
}

/// At the default bound the purest types are 6e-6 off, which moves the threshold by about 1e-5.
#[test]
fn the_default_bound_moves_the_global_threshold_little() {
    for n in [Some(2), Some(4), Some(64), Some(1000)] {
        let Ok(found) = global_critical(|a| Ok::<_, Infallible>(random_fates(a, a, n)), 0.6, 3.0);
        let shift = found.expect("a change") - closed_forms::global_threshold(n);
        assert!(shift > 0.0 && shift < 2e-5, "{n:?} {shift}");
    }
}

/// Asymmetric division coordinates fates: both thresholds are 1 for 2^k cells.
#[test]
fn the_threshold_of_lineage_is_one() {
    for n in [2, 4, 16, 64, 1024] {
        let model_at = |a: f64| {
            let returns = [power(a), power(a)];
            let model =
                Model::new(bare_life(), returns, only(Cue::Lineage), &label_compositions(n, 1));
            Ok::<_, Infallible>(unbounded(model))
        };
        let Ok(local) = local_critical(model_at, 0.6, 3.0);
        let Ok(global) = global_critical(model_at, 0.6, 3.0);
        assert!((local.expect("a change") - 1.0).abs() < 1e-9, "{n} {local:?}");
        assert!((global.expect("a change") - 1.0).abs() < 1e-8, "{n} {global:?}");
    }
}

/// With several cues the first to be favoured counts; where nothing changes there is no value.
#[test]
fn the_first_cue_decides_and_no_change_is_none() {
    let both = |a: f64| {
        let cues = only(Cue::Lineage).with(Cue::Noise);
        let model = Model::new(bare_life(), [power(a), power(a)], cues, &label_compositions(4, 1));
        Ok::<_, Infallible>(model)
    };
    let Ok(first) = local_critical(both, 0.6, 3.0);
    assert!((first.expect("a change") - 1.0).abs() < 1e-9);
    let Ok(none) = local_critical(both, 1.5, 3.0);
    assert_eq!(none, None);
    let Ok(none) = global_critical(both, 0.3, 0.8);
    assert_eq!(none, None);
    // Read downwards, the same value.
    let Ok(down) = local_critical(both, 3.0, 0.6);
    assert!((down.expect("a change") - 1.0).abs() < 1e-9);
}

#[test]
fn a_value_without_a_model_is_the_callers_error() {
    let broken = |_: f64| Err::<Model, _>("no such scenario");
    assert_eq!(local_critical(broken, 0.0, 1.0), Err("no such scenario"));
}
