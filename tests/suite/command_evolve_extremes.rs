//! Scenarios at the edges of what is allowed: each must end soon, by itself, with an answer that
//! makes sense.

use serde_json::Value;

use crate::command_fixture::{Desk, SMALL_POND};

const ALL_CUES: &str = "traits.cues=[\"noise\", \"lineage\", \"exposure\"]";

/// Evolves the small pond with these settings, and gives the summary and the replicates' outcomes.
/// Whatever the settings, no replicate is lost and every number is one.
fn evolve(desk: &Desk, settings: &[&str]) -> (Value, Vec<String>) {
    let set: Vec<&str> = settings.iter().flat_map(|setting| ["--set", setting]).collect();
    let summary = desk.evolve_into("run", &[&["--replace"], set.as_slice()].concat());
    let table = std::fs::read_to_string(desk.join("run/replicates.csv")).expect("readable");
    let outcomes: Vec<String> = table
        .lines()
        .skip(1)
        .map(|row| row.split(',').nth(2).expect("an outcome").to_owned())
        .collect();
    assert!(!table.contains("NaN") && !table.contains("inf"), "{settings:?}: {table}");
    assert_eq!(summary["replicates"], outcomes.len(), "{settings:?}");
    let count = |name: &str| outcomes.iter().filter(|outcome| *outcome == name).count();
    assert_eq!(summary["extinct"], count("extinct"), "{settings:?}");
    assert_eq!(summary["onset"]["count"], count("onset"), "{settings:?}");
    let index = summary["final"]["division_index"].as_f64();
    assert!(index.is_none_or(|index| (0.0..=1.0).contains(&index)), "{settings:?}: {summary}");
    (summary, outcomes)
}

/// Populations that live: a division index is known at the end, and nobody died out.
fn lives(desk: &Desk, settings: &[&str]) -> Value {
    let (summary, outcomes) = evolve(desk, settings);
    assert!(outcomes.iter().all(|outcome| outcome != "extinct"), "{settings:?}: {outcomes:?}");
    assert!(summary["final"]["division_index"].is_number(), "{settings:?}: {summary}");
    summary
}

/// Populations that die out, all of them: a result, not a failure.
fn dies_out(desk: &Desk, settings: &[&str]) {
    let (summary, outcomes) = evolve(desk, settings);
    assert_eq!(outcomes, ["extinct"; 3], "{settings:?}");
    assert_eq!(summary["final"]["division_index"], Value::Null, "{settings:?}");
    assert_eq!(summary["final"]["class"], Value::Null, "{settings:?}");
    assert_eq!(summary["onset"]["probability"], 0.0, "{settings:?}");
}

#[test]
fn the_fewest_sites_and_the_smallest_bodies() {
    let desk = Desk::with(SMALL_POND);
    lives(&desk, &["habitat.sites=4"]);
    for cells in 2..=13 {
        lives(&desk, &[&format!("body.adult_cells={cells}"), ALL_CUES]);
    }
    // One cell is alike with itself, and no route leads anywhere.
    let summary = lives(&desk, &["body.adult_cells=1", ALL_CUES]);
    assert_eq!(summary["final"]["division_index"], 0.0);
    assert_eq!(summary["final"]["class"], "alike");
    assert_eq!(summary["final"]["route"], Value::Null);
    // Rare deaths of all of four one-celled colonies at once are allowed here.
    evolve(&desk, &["body.adult_cells=1", "habitat.sites=4"]);
}

#[test]
fn propagules_as_large_as_adults_and_almost() {
    let desk = Desk::with(SMALL_POND);
    for cells in [15, 16] {
        lives(&desk, &[&format!("life.propagule_cells={cells}"), ALL_CUES]);
    }
    lives(&desk, &["life.propagule_cells=16", "budget.division_cv=1", ALL_CUES]);
}

#[test]
fn populations_that_cannot_persist() {
    let desk = Desk::with(SMALL_POND);
    // R0 = F / (c_p m) = 8 / (8 x 0.9 / 0.5) = 0.56 for the generalist of 16 cells, z = 1/2.
    dies_out(&desk, &["life.adult_hazard_per_h=0.9"]);
    dies_out(&desk, &["life.adult_hazard_per_h=1e6"]);
    dies_out(&desk, &["life.extrinsic_hazard_per_h=1e6"]);
    dies_out(&desk, &["life.juvenile_hazard_per_h=1e6"]);
    dies_out(&desk, &["life.propagule_cost_eu=1e6"]);
    dies_out(&desk, &["budget.income_eu_per_h=1e-300"]);
    // A tax above the income: nobody grows up.
    dies_out(&desk, &["traits.cost_per_unit=1", "traits.start.noise=2"]);
}

/// V = 0 is an infinite hazard, B = 0 a life without propagules.
#[test]
fn bodies_that_do_one_task_only() {
    let desk = Desk::with(SMALL_POND);
    for task in ["viability", "fecundity"] {
        let effects = ["surface", "interior"].map(|s| format!("returns.{task}.{s}_effect=0"));
        dies_out(&desk, &[&effects[0], &effects[1]]);
    }
    dies_out(&desk, &["traits.bound=50", "traits.baseline=-50", "returns.viability.exponent=20"]);
    dies_out(&desk, &["traits.bound=50", "traits.baseline=50", "returns.fecundity.exponent=20"]);
}

#[test]
fn extreme_variation() {
    let desk = Desk::with(SMALL_POND);
    lives(&desk, &["budget.division_cv=1", ALL_CUES]);
    lives(&desk, &["budget.division_cv=1e-300"]);
    lives(&desk, &["traits.mutation_sd=50", "traits.mutation_probability=1"]);
    lives(&desk, &["traits.mutation_sd=0"]);
    lives(&desk, &["traits.mutation_probability=0"]);
    lives(&desk, &["traits.bound=1e-300", "traits.baseline=0"]);
    lives(&desk, &["life.juvenile_hazard_per_h=0.02"]);
}

/// Rates of release that let billions of propagules land on 16 sites in a tick.
#[test]
fn floods_of_propagules() {
    let desk = Desk::with(SMALL_POND);
    lives(&desk, &["life.propagule_cost_eu=1e-6"]);
    lives(&desk, &["life.adult_hazard_per_h=1e-9"]);
    lives(&desk, &["budget.income_eu_per_h=1e6"]);
    lives(&desk, &["returns.viability.surface_effect=1e6"]);
    lives(&desk, &["returns.fecundity.surface_effect=1e6", "life.propagule_cost_eu=1e-3"]);
}

#[test]
fn ticks_that_are_too_long_or_too_short() {
    let desk = Desk::with(SMALL_POND);
    // Each tick is thousands of lives long: what settled last is not grown up at a census.
    let (summary, _) = evolve(&desk, &["run.tick_h=1e6"]);
    assert_eq!(summary["extinct"], 0);
    assert_eq!(summary["final"]["division_index"], Value::Null);
    let ran = desk.evolve(&["--set", "run.tick_h=1e6", "--out", "report"]);
    assert!(ran.out.contains("no colony was adult at the end"), "{}", ran.out);
    lives(&desk, &["run.tick_h=1e-2", "run.generations=5"]);
    desk.refuses(&["--set", "run.tick_h=1e-300"], &["`run.tick_h` = 1e-300 is out of range"]);
    let ran = desk.run(&["check", "pond.toml", "--set", "run.tick_h=1e6"]);
    assert!(ran.out.contains("tick-too-long: "), "{}", ran.out);
}

#[test]
fn growth_that_takes_far_longer_than_adult_life() {
    let desk = Desk::with(SMALL_POND);
    let (summary, _) = evolve(&desk, &["budget.upkeep_eu_per_h=0.999999"]);
    assert_eq!(summary["extinct"], 0);
    let ran = desk.evolve(&["--set", "budget.upkeep_eu_per_h=0.999999", "--out", "report"]);
    assert_eq!(ran.code, 0);
    assert!(!ran.out.contains("no population was left"), "{}", ran.out);
}

#[test]
fn extreme_curves() {
    let desk = Desk::with(SMALL_POND);
    for (settings, why) in [
        (&["returns.viability.exponent=1e-300", "returns.fecundity.exponent=1e-300"][..], "flat"),
        (&["returns.viability.curve=saturating", "returns.viability.half=1e-300"], "a step"),
        (&["returns.viability.curve=saturating", "returns.viability.half=1e6"], "linear"),
        (&["returns.fecundity.curve=table", "returns.fecundity.points=[[0, 1], [1, 1]]"], "flat"),
        (&["returns.fecundity.curve=table", "returns.fecundity.points=[[0, 0], [1, 1e9]]"], "high"),
    ] {
        let summary = lives(&desk, settings);
        assert!(summary["prediction"]["verdict"].is_string(), "{why}");
    }
    // Lives of 1e300 h, and more propagules than can be counted.
    lives(
        &desk,
        &["returns.viability.curve=table", "returns.viability.points=[[0, 0], [1, 1e300]]"],
    );
    for points in ["[[0, 0], [1, 1e300]]", "[[0, 0], [1e-300, 1]]"] {
        let points = format!("returns.fecundity.points={points}");
        lives(&desk, &["returns.fecundity.curve=table", &points]);
    }
    for settings in [
        &["returns.viability.exponent=20", "returns.fecundity.exponent=20"][..],
        &["returns.viability.curve=sigmoid", "returns.viability.steepness=100"],
    ] {
        evolve(&desk, settings);
    }
}

#[test]
fn the_shortest_and_strictest_watches() {
    let desk = Desk::with(SMALL_POND);
    lives(&desk, &["run.generations=1", "run.census_every=1"]);
    lives(&desk, &["run.census_every=40"]);
    let (_, outcomes) = evolve(&desk, &["onset.index=1e-300", "onset.sustained_censuses=1"]);
    assert_eq!(outcomes, ["onset"; 3]);
    let (_, outcomes) = evolve(&desk, &["onset.index=1e-300", "onset.sustained_censuses=1000000"]);
    assert_eq!(outcomes, ["censored"; 3]);
}
