//! Whether evolution did what theory said, and the reasons given if it did not.

use approx::assert_relative_eq;

use somadawn::record::{Prediction, ReplicateRow, Summary, Throughput};
use somadawn::report::{Agreement, Circumstances, Judgement, Reason};
use somadawn::theory::{BodyClass, Verdict};

use crate::record_sample::{censored, extinct, onset};

/// Plenty of sites, time and mutations.
const AMPLE: Circumstances = Circumstances {
    sites: 1_000,
    generations: 3_000.0,
    mutations_per_generation: 100.0,
    mutation_sd: 0.2,
    slope: Some(0.1),
    best_division_index: 0.9,
    onset_index: 0.5,
};

fn judge(verdict: Verdict, rows: &[ReplicateRow], circumstances: Circumstances) -> Judgement {
    let prediction = Prediction { verdict, class: BodyClass::Complete };
    let throughput = Throughput::new(1, 1.0, 1);
    let summary = Summary::from_replicates("x", rows, prediction, throughput).unwrap();
    Judgement::of(&summary, &circumstances)
}

#[test]
fn evolution_does_what_theory_says() {
    for verdict in [Verdict::FavouredAtOnce, Verdict::FavouredByDisruption] {
        let found = judge(verdict, &[onset(0, 10.0), onset(1, 20.0)], AMPLE);
        assert_eq!(found, Judgement { agreement: Agreement::Full, reasons: vec![] });
    }
    let found = judge(Verdict::NotFavouredLocally, &[censored(0), extinct(1, 5.0)], AMPLE);
    assert_eq!(found.agreement, Agreement::Full);
    assert_eq!(judge(Verdict::FavouredAtOnce, &[], AMPLE).agreement, Agreement::Untested);
}

/// Populations that are gone have not stayed alike: that is no agreement with theory.
#[test]
fn dead_populations_agree_with_nothing() {
    let found = judge(Verdict::NotFavouredLocally, &[extinct(0, 5.0), extinct(1, 9.0)], AMPLE);
    let reasons = vec![Reason::DiedOut { replicates: 2 }];
    assert_eq!(found, Judgement { agreement: Agreement::Untested, reasons });
}

#[test]
fn a_mark_above_the_best_programme_is_the_reason() {
    let low = Circumstances { best_division_index: 0.4, sites: 10, ..AMPLE };
    let found = judge(Verdict::FavouredAtOnce, &[censored(0)], low);
    assert_eq!(found.reasons, [Reason::MarkOutOfReach { best: 0.4, mark: 0.5 }]);
}

#[test]
fn some_or_none_of_the_replicates() {
    let rows = [onset(0, 10.0), censored(1)];
    let partial = judge(Verdict::FavouredAtOnce, &rows, AMPLE);
    assert_eq!(partial.agreement, Agreement::Partial);
    assert_eq!(partial.reasons, [Reason::StillWaiting { replicates: 1 }]);
    assert_eq!(judge(Verdict::NotFavouredLocally, &rows, AMPLE).agreement, Agreement::Partial);
    assert_eq!(judge(Verdict::FavouredAtOnce, &rows[1..], AMPLE).agreement, Agreement::None);
    let against = judge(Verdict::NotFavouredLocally, &rows[..1], AMPLE);
    assert_eq!(against.agreement, Agreement::None);
    assert_eq!(against.reasons, [Reason::Unexplained]);
}

#[test]
fn a_valley_leaves_both_open() {
    for rows in [[onset(0, 1.0)], [censored(0)]] {
        let found = judge(Verdict::Valley, &rows, AMPLE);
        assert_eq!((found.agreement, found.reasons), (Agreement::Either, vec![Reason::Valley]));
    }
}

#[test]
fn a_class_short_of_the_predicted_one_is_under_way() {
    let row = ReplicateRow { class: Some(BodyClass::Partial), ..onset(0, 10.0) };
    let found = judge(Verdict::FavouredAtOnce, &[row], AMPLE);
    assert_eq!(found.agreement, Agreement::Partial);
    assert_eq!(found.reasons, [Reason::StillUnderWay]);
}

/// 3 logits / (N mu sd^2 slope / 2): 3 / (100 * 0.04 * 0.1 / 2) = 15 generations.
#[test]
fn time_needed_follows_the_canonical_equation() {
    assert_relative_eq!(AMPLE.generations_needed().unwrap(), 15.0, max_relative = 1e-12);
    let unknown = Circumstances { slope: None, ..AMPLE };
    assert_eq!(unknown.generations_needed(), None);
    let barren = Circumstances { mutations_per_generation: 0.0, ..AMPLE };
    assert_eq!(barren.generations_needed(), Some(f64::INFINITY));
}

#[test]
fn reasons_come_from_the_circumstances() {
    let absent =
        |circumstances| judge(Verdict::FavouredByDisruption, &[censored(0)], circumstances).reasons;
    assert_eq!(absent(AMPLE), [Reason::Unexplained]);
    let needed = AMPLE.generations_needed();
    assert_eq!(
        absent(Circumstances { generations: 14.0, ..AMPLE }),
        [Reason::TooFewGenerations { generations: 14.0, needed }]
    );
    let barren = Circumstances { mutations_per_generation: 0.0, ..AMPLE };
    assert_eq!(absent(barren), [Reason::TooFewGenerations { generations: 3_000.0, needed: None }]);
    // One step's advantage 0.1 * 0.2 = 0.02 is worth less than 1/N below 50 sites.
    assert_eq!(absent(Circumstances { sites: 49, ..AMPLE }), [Reason::Drift { sites: 49 }]);
    assert_eq!(absent(Circumstances { sites: 51, ..AMPLE }), [Reason::Unexplained]);
    let died = judge(Verdict::FavouredAtOnce, &[extinct(0, 5.0)], AMPLE);
    assert_eq!(died.reasons, [Reason::DiedOut { replicates: 1 }]);
    let present = judge(
        Verdict::NotFavouredLocally,
        &[onset(0, 5.0)],
        Circumstances { sites: 20, slope: None, ..AMPLE },
    );
    assert_eq!(present.reasons, [Reason::Drift { sites: 20 }]);
}
