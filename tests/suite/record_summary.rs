//! The answer of a run, against numbers worked out apart from it.

use approx::assert_abs_diff_eq;
use serde_json::{Value, json};

use somadawn::record::{Outcome, ReplicateRow, Summary, Throughput};
use somadawn::theory::{BodyClass, Cue, Verdict};

use crate::record_sample::{censored, extinct, onset, prediction};

fn summary(rows: &[ReplicateRow]) -> Summary {
    let throughput = Throughput::new(3_000, 1.5, 2);
    Summary::from_replicates("Lantern algae", rows, prediction(), throughput).unwrap()
}

/// Onsets at 100, 200, 300, 400, 500; one extinct at 250; two censored at 1,500.
fn eight() -> Vec<ReplicateRow> {
    let mut rows: Vec<_> = (0..5u32).map(|k| onset(k, f64::from(100 * (k + 1)))).collect();
    rows.extend([extinct(5, 250.0), censored(6), censored(7)]);
    rows
}

#[test]
fn onset_probability_and_median() {
    let found = summary(&eight());
    assert_eq!((found.replicates, found.onset.count, found.extinct), (8, 5, 1));
    assert_eq!(found.onset.probability, Some(0.625));
    assert_eq!(found.never_matured, 8 * 3);
    // Wilson (1927) for 5 of 8, the formula worked out in Python.
    assert_abs_diff_eq!(found.onset.wilson_low, 0.305_742_394_603, epsilon = 1e-9);
    assert_abs_diff_eq!(found.onset.wilson_high, 0.863_155_714_176, epsilon = 1e-9);
    // By hand: 7/8, 6/8, then 5 at risk (one died out): 6/8 * 4/5 = 0.6, 0.6 * 3/4 = 0.45.
    assert_eq!(found.onset.median_generation, Some(400.0));
    // lifelines 0.30.3, log-log band: its lower limit is at most 1/2 from 100 on, its upper never.
    assert_eq!((found.onset.median_low, found.onset.median_high), (Some(100.0), None));
}

#[test]
fn the_end_is_told_of_those_that_live() {
    let found = summary(&eight()).last;
    // Five times 0.9 and twice 0.02; scipy 1.17.1, stats.t.interval(0.95, 6, mean, sem).
    assert_abs_diff_eq!(found.division_index.unwrap(), 4.54 / 7.0, epsilon = 1e-14);
    assert_abs_diff_eq!(found.division_index_low.unwrap(), 0.251_446_333_942, epsilon = 1e-9);
    assert_eq!(found.division_index_high, Some(1.0));
    assert_eq!(found.soma_fraction, Some(0.5));
    assert_eq!(found.adult_cells, Some(60.5));
    assert_eq!((found.class, found.route), (Some(BodyClass::Complete), Some(Cue::Noise)));
}

#[test]
fn ties_go_to_the_lesser_claim() {
    let found = summary(&[onset(0, 1.0), censored(1)]).last;
    assert_eq!(found.class, Some(BodyClass::Alike));
}

#[test]
fn nothing_known_is_null() {
    for rows in [vec![], vec![extinct(0, 5.0)]] {
        let found = summary(&rows);
        assert_eq!(found.onset.median_generation, None);
        assert_eq!(found.last.division_index, None);
        assert_eq!((found.last.class, found.last.route), (None, None));
    }
    let lone = summary(&[censored(0)]).last;
    assert_eq!((lone.division_index, lone.division_index_low), (Some(0.02), None));
}

#[test]
fn a_generation_that_is_no_number_is_an_error() {
    let row = ReplicateRow { end_generation: f64::NAN, ..censored(0) };
    let throughput = Throughput::new(0, 0.0, 1);
    assert_eq!(throughput.cell_lives_per_second, None);
    assert!(Summary::from_replicates("x", &[row], prediction(), throughput).is_err());
}

/// The document's names are promised to scripts.
#[test]
fn the_document_is_as_promised() {
    let rows = [ReplicateRow { outcome: Outcome::Onset, ..onset(0, 10.0) }];
    let found = serde_json::to_value(summary(&rows)).unwrap();
    let expected = json!({
        "title": "Lantern algae",
        "replicates": 1,
        "onset": {
            "count": 1, "probability": 1.0,
            "wilson_low": found["onset"]["wilson_low"], "wilson_high": 1.0,
            "median_generation": 10.0, "median_low": 10.0, "median_high": Value::Null,
        },
        "extinct": 0,
        "never_matured": 3,
        "final": {
            "division_index": 0.9, "division_index_low": Value::Null,
            "division_index_high": Value::Null, "soma_fraction": 0.5,
            "adult_cells": 60.5, "class": "complete", "route": "noise",
        },
        "prediction": {"verdict": "favoured by disruption", "class": "complete"},
        "throughput": {
            "cell_lives": 3000, "wall_s": 1.5, "threads": 2, "cell_lives_per_second": 2000.0,
        },
    });
    assert_eq!(found, expected);
}

#[test]
fn verdicts_are_known_by_their_words() {
    for verdict in Verdict::ALL {
        assert_eq!(Verdict::from_name(verdict.name()), Some(verdict));
        assert_eq!(serde_json::to_value(verdict).unwrap(), verdict.name());
    }
    assert_eq!(Verdict::from_name("perhaps"), None);
}
