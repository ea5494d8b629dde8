//! The closing report of `evolve`: what it says, and how it looks on a poor terminal.

use std::path::Path;

use somadawn::record::{CensusRow, Prediction, ReplicateRow, Summary, Throughput};
use somadawn::report::chart::{IndexCourse, draw};
use somadawn::report::{Circumstances, EvolveReport, Style, evolve_report};
use somadawn::theory::Verdict;

use crate::record_sample::{censored, census, extinct, onset, prediction};

const UNICODE: Style = Style { colour: false, unicode: true };

/// Every 10 generations up to `end`, D rising from 0 to `top`.
fn rising(replicate: u32, end: u32, top: f64) -> Vec<CensusRow> {
    (0..=end / 10)
        .map(|k| {
            let generation = f64::from(k * 10);
            census(replicate, generation, Some(top * generation / f64::from(end)))
        })
        .collect()
}

fn rows() -> Vec<ReplicateRow> {
    let mut rows: Vec<_> = (0..6u32).map(|k| onset(k, f64::from(400 + 50 * k))).collect();
    rows.extend([extinct(6, 250.0), censored(7)]);
    rows.iter().map(|row| of_size(64.0, 0, row)).collect()
}

/// The same row, but for the size of its bodies.
fn of_size(adult_cells: f64, never_matured: u64, row: &ReplicateRow) -> ReplicateRow {
    ReplicateRow { adult_cells: Some(adult_cells), never_matured, ..row.clone() }
}

fn course() -> Vec<CensusRow> {
    let mut rows: Vec<CensusRow> = (0..6u32).flat_map(|k| rising(k, 1_500, 1.0)).collect();
    rows.extend(rising(6, 250, 0.1));
    rows.extend(rising(7, 1_500, 0.02));
    rows
}

fn report(
    title: &str,
    rows: &[ReplicateRow],
    census: &[CensusRow],
    prediction: Prediction,
    style: Style,
) -> String {
    let throughput = Throughput::new(98_300_000, 8.0, 2);
    let summary = Summary::from_replicates(title, rows, prediction, throughput).unwrap();
    let circumstances = Circumstances {
        sites: 256,
        generations: 1_500.0,
        mutations_per_generation: 25.6,
        mutation_sd: 0.2,
        slope: Some(0.05),
        best_division_index: 0.9,
        onset_index: 0.5,
    };
    let content = EvolveReport {
        summary: &summary,
        rows,
        census,
        replicates_planned: 8,
        adult_cells: 64,
        circumstances,
        folder: Path::new("outputs/two  spaces"),
    };
    evolve_report(&content, style)
}

fn usual(style: Style) -> String {
    report("Lantern algae: work that pays twice", &rows(), &course(), prediction(), style)
}

#[test]
fn the_whole_report() {
    insta::assert_snapshot!(usual(UNICODE));
}

#[test]
fn the_answer_is_in_words() {
    let text = usual(Style::PLAIN);
    for part in [
        "6 of 8 replicates: probability 0.75 (Wilson 0.41 to 0.93)",
        "complete (6 of 7), by noise (7 of 7)",
        "partly: 6 of 8 replicates differentiated",
        "Died out        1 of 8 replicates before an onset",
        "98.3 million cell lives in 8.0 s on 2 threads (12.3 million/s)",
        "outputs/two  spaces\n",
        "hypothesis",
        "biosafety rules",
    ] {
        assert!(text.contains(part), "{part:?} is missing from\n{text}");
    }
}

#[test]
fn a_poor_terminal_gets_ascii_without_colour() {
    let text = usual(Style::PLAIN);
    assert!(text.is_ascii(), "{text}");
    assert!(!text.contains('\x1b'));
    assert!(text.lines().all(|line| line.len() <= 80), "{text}");
    assert!(text.lines().all(|line| line == line.trim_end()), "{text}");
}

#[test]
fn colour_changes_nothing_but_the_colour() {
    let coloured = usual(Style { colour: true, unicode: false });
    let mut bare = String::new();
    for (place, part) in coloured.split('\x1b').enumerate() {
        bare.push_str(if place == 0 { part } else { part.split_once('m').unwrap().1 });
    }
    assert!(coloured.contains("\x1b[33mpartly:\x1b[0m"));
    assert_eq!(bare, usual(Style::PLAIN));
}

#[test]
fn no_onset_and_no_replicate() {
    let null = Prediction { verdict: Verdict::NotFavouredLocally, ..prediction() };
    let text = report("Null", &[censored(0)], &rising(0, 1_500, 0.02), null.clone(), Style::PLAIN);
    assert!(text.contains("none within 1,500 generations"), "{text}");
    assert!(text.contains("yes: no replicate differentiated, as theory says"), "{text}");
    assert!(text.contains("1 of 8 replicates finished"), "{text}");
    assert!(text.contains("alike (1 of 1): cells too alike to tell a route"), "{text}");
    let empty = report("Null", &[], &[], null, Style::PLAIN);
    assert!(empty.contains("no replicate finished"), "{empty}");
    assert!(!empty.contains("NaN") && !empty.contains("inf"), "{empty}");
}

/// Lines on adult size and on colonies that never mature, if there are any.
fn told_of_size(rows: &[ReplicateRow]) -> Vec<String> {
    let text = report("Hungry", rows, &rising(0, 1_500, 0.02), prediction(), Style::PLAIN);
    let is_of_size =
        |line: &&str| line.starts_with("Adult size") || line.starts_with("Never matured");
    text.lines().filter(is_of_size).map(str::to_owned).collect()
}

#[test]
fn bodies_short_of_their_size_are_told() {
    let told = |adult_cells, never_matured| {
        let rows = [0, 1].map(|k| of_size(adult_cells, never_matured, &censored(k)));
        told_of_size(&rows)
    };
    // Means of whole numbers differ from the size by rounding at most.
    assert_eq!(told(64.0, 0), [""; 0]);
    assert_eq!(told(64.0_f64.next_down(), 0), [""; 0]);
    let size = |found| format!("Adult size      adult bodies hold {found} cells on average of 64");
    let stopped = "Never matured   1,234 colonies settled whose growth stops short of adult size";
    assert_eq!(told(60.5, 0), [size("60.5")]);
    assert_eq!(told(63.999, 0), [size("63.999")]);
    assert_eq!(told(64.0, 617), [stopped]);
    assert_eq!(told(60.5, 617), [size("60.5"), stopped.to_owned()]);
    let lone = told_of_size(&[of_size(64.0, 1, &censored(0))]);
    assert_eq!(lone, ["Never matured   1 colony settled whose growth stops short of adult size"]);
    // Nobody was adult at the end.
    let none = ReplicateRow { adult_cells: None, never_matured: 0, ..censored(0) };
    assert_eq!(told_of_size(&[none]), [""; 0]);
}

#[test]
fn a_title_cannot_steer_the_terminal() {
    let text = report("Glow\x1b[2J\nworm", &[], &[], prediction(), Style::PLAIN);
    assert!(text.starts_with("Glow [2J worm\n"), "{text}");
}

#[test]
fn the_chart_shows_median_and_span() {
    let rows = [onset(0, 30.0), censored(1), extinct(2, 10.0)];
    let values = [
        (0, &[0.0, 0.5, 1.0][..]), // ended at its onset: goes on at 1
        (1, &[0.0, 0.25, 0.25, 0.25]),
        (2, &[0.0, 0.75]), // died out: ends
    ];
    let census: Vec<CensusRow> = values
        .iter()
        .flat_map(|(replicate, values)| {
            values.iter().zip([0.0, 10.0, 20.0, 30.0]).map(|(d, g)| census(*replicate, g, Some(*d)))
        })
        .collect();
    let found = IndexCourse::of(&rows, &census).unwrap();
    // Four columns of 7.5 generations; censuses at 0, 10, 20 and 30.
    let spreads: Vec<_> =
        found.columns.iter().flatten().map(|s| (s.lowest, s.median, s.highest)).collect();
    let expected = [(0.0, 0.0, 0.0), (0.25, 0.5, 0.75), (0.25, 0.625, 1.0), (0.25, 0.625, 1.0)];
    assert_eq!(spreads, expected);
    assert_eq!(
        draw(&found, UNICODE),
        "Division index D over generations (▁ = 0, █ = 1; 3 replicates)\n  \
         highest  ▁▇██\n  median   ▁▅▆▆\n  lowest   ▁▃▃▃\n           0 30 generations\n"
    );
}

#[test]
fn a_chart_without_values_is_none() {
    assert_eq!(IndexCourse::of(&[], &[]), None);
    let unknown = [census(0, 0.0, None), census(0, f64::NAN, Some(0.5))];
    assert_eq!(IndexCourse::of(&[], &unknown), None);
    let start = [census(0, 0.0, Some(0.5))];
    let lone = draw(&IndexCourse::of(&[], &start).unwrap(), Style::PLAIN);
    assert!(lone.contains("  D        =\n"), "{lone}");
}
