//! Kaplan-Meier curves with the leukaemia remissions of Freireich et al. (1963, Blood 21:699).

use approx::assert_abs_diff_eq;
use proptest::prelude::*;
use somadawn::stats::{KaplanMeier, Level, Observation, StatsError};

fn rows(file: &str) -> Vec<csv::StringRecord> {
    let path = format!("{}/tests/data/{file}", env!("CARGO_MANIFEST_DIR"));
    let mut reader = csv::Reader::from_path(path).expect("a table of tests/data");
    reader.records().map(|row| row.expect("a row")).collect()
}

fn number(row: &csv::StringRecord, column: usize) -> f64 {
    row[column].parse().expect("a number")
}

fn remissions(group: &str) -> KaplanMeier {
    let observations: Vec<Observation> = rows("freireich_data.csv")
        .iter()
        .filter(|row| &row[0] == group)
        .map(|row| Observation { time: number(row, 1), event: &row[2] == "1" })
        .collect();
    assert_eq!(observations.len(), 21);
    KaplanMeier::fit(&observations).unwrap()
}

fn events_at(times: &[f64]) -> KaplanMeier {
    let all: Vec<_> = times.iter().map(|&time| Observation { time, event: true }).collect();
    KaplanMeier::fit(&all).unwrap()
}

/// Survival and Greenwood errors printed to 12 decimals by lifelines 0.30.3.
#[test]
fn curves_match_the_published_data() {
    let table = rows("km_freireich.csv");
    for group in ["6-MP", "placebo"] {
        let curve = remissions(group);
        let expected: Vec<_> = table.iter().filter(|row| &row[0] == group).collect();
        assert_eq!(curve.steps().len(), expected.len());
        for (step, row) in curve.steps().iter().zip(expected) {
            assert_abs_diff_eq!(step.time, number(row, 1));
            assert_eq!(step.at_risk.to_string(), row[2]);
            assert_eq!(step.events.to_string(), row[3]);
            assert_abs_diff_eq!(step.survival, number(row, 4), epsilon = 1e-10);
            assert_abs_diff_eq!(step.standard_error, number(row, 5), epsilon = 1e-10);
        }
    }
}

/// Ten weeks on 6-MP; statsmodels 0.15.0 (plain) and lifelines 0.30.3 (log-log), 8 decimals.
#[test]
fn pointwise_intervals() {
    let curve = remissions("6-MP");
    let plain = curve.plain_interval(10.0, Level::P95);
    assert_abs_diff_eq!(plain.low, 0.564_099_33, epsilon = 5e-9);
    assert_abs_diff_eq!(plain.high, 0.941_783_03, epsilon = 5e-9);
    let log_log = curve.log_log_interval(12.9, Level::P95).unwrap();
    assert_abs_diff_eq!(log_log.low, 0.503_199_510_800, epsilon = 1e-10);
    assert_abs_diff_eq!(log_log.high, 0.889_361_835_169, epsilon = 1e-10);
    let start = curve.log_log_interval(5.9, Level::P95).unwrap();
    assert_eq!((start.low, start.high), (1.0, 1.0));
    assert_eq!(remissions("placebo").log_log_interval(23.0, Level::P95), None);
}

/// Medians 23 and 8 weeks; limits from lifelines 0.30.3, `median_survival_times` of its log-log
/// band: 13 to infinity and 4 to 11.
#[test]
fn medians_with_intervals() {
    let treated = remissions("6-MP").median(Level::P95);
    assert_eq!((treated.median, treated.low, treated.high), (Some(23.0), Some(13.0), None));
    let placebo = remissions("placebo").median(Level::P95);
    assert_eq!((placebo.median, placebo.low, placebo.high), (Some(8.0), Some(4.0), Some(11.0)));
}

#[test]
fn a_curve_that_stays_high_or_ends_at_once_claims_no_more_than_it_knows() {
    let empty = KaplanMeier::fit(&[]).unwrap();
    assert_eq!(empty.median(Level::P95).median, None);
    assert_abs_diff_eq!(empty.survival(1e9), 1.0);
    let censored = KaplanMeier::fit(&[Observation { time: 5.0, event: false }; 4]).unwrap();
    assert_eq!(censored.median(Level::P95).low, None);
    let at_once = events_at(&[50.0; 8]).median(Level::P95);
    assert_eq!((at_once.median, at_once.low, at_once.high), (Some(50.0), Some(50.0), None));
    // 3/4 x 2/3 = 1/2 must count as a half in spite of rounding.
    assert_eq!(events_at(&[1.0, 2.0, 3.0, 4.0]).median(Level::P95).median, Some(2.0));
}

#[test]
fn impossible_times_are_refused() {
    for value in [-1.0, f64::NAN, f64::INFINITY] {
        let refused = KaplanMeier::fit(&[Observation { time: value, event: true }]);
        assert!(matches!(refused, Err(StatsError::Time { index: 0, .. })));
    }
}

proptest! {
    /// Without censoring the curve is the share still free of the event.
    #[test]
    fn without_censoring_the_curve_counts(times in prop::collection::vec(0u8..30, 1..60)) {
        let times: Vec<f64> = times.into_iter().map(f64::from).collect();
        let curve = events_at(&times);
        for step in curve.steps() {
            let free = times.iter().filter(|time| **time > step.time).count();
            prop_assert!((step.survival - free as f64 / times.len() as f64).abs() < 1e-12);
        }
    }

    #[test]
    fn the_order_of_subjects_does_not_matter(
        mut subjects in prop::collection::vec((0u8..20, any::<bool>()), 1..40),
    ) {
        let fit = |subjects: &[(u8, bool)]| {
            let all: Vec<_> = subjects
                .iter()
                .map(|&(time, event)| Observation { time: f64::from(time), event })
                .collect();
            KaplanMeier::fit(&all).unwrap()
        };
        let curve = fit(&subjects);
        for step in curve.steps() {
            prop_assert!((0.0..=1.0).contains(&step.survival));
            if let Some(interval) = curve.log_log_interval(step.time, Level::P95) {
                prop_assert!(interval.low <= step.survival && step.survival <= interval.high);
            }
        }
        let median = curve.median(Level::P95);
        if let (Some(low), Some(middle)) = (median.low, median.median) {
            prop_assert!(low <= middle);
        }
        subjects.reverse();
        prop_assert_eq!(curve, fit(&subjects));
    }
}
