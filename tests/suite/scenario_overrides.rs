//! Overrides go through the same reader as the file, and win over it.

#![expect(clippy::float_cmp, reason = "numbers must come through to the last bit")]

use somadawn::scenario::{Override, Settings};
use somadawn::theory::{Cue, ReturnCurve};

const POND: &str = "title = \"Pond\"\nseed = 3\n[traits]\nstart = { noise = 2.0 }\n";

fn with(overrides: &[Override]) -> Settings {
    Settings::from_toml_str("pond", POND, overrides).expect("sound overrides")
}

fn set(texts: &[&str]) -> Settings {
    with(&texts.iter().map(|text| Override::set(*text)).collect::<Vec<_>>())
}

#[test]
fn values_are_toml_and_words_need_no_quotes() {
    let settings = set(&[
        "title=Two ponds, one path = water",
        " body.adult_cells = 0x20 ",
        "habitat.layout=mixed",
        "traits.cues=[\"noise\", 'lineage']",
        "traits.start.lineage=-1",
        "run.stop_after_onset=true",
    ]);
    assert_eq!(settings.title, "Two ponds, one path = water");
    assert_eq!(settings.body.adult_cells, 32);
    assert!(settings.traits.cues.contains(Cue::Lineage));
    assert!(settings.run.stop_after_onset);
    // One cue's start leaves the other's alone; a whole table replaces it.
    assert_eq!(settings.traits.start, [2.0, -1.0, 0.0, 0.0]);
    let cues = "traits.cues=[\"noise\", \"lineage\"]";
    assert_eq!(set(&[cues, "traits.start={ lineage = 1 }"]).traits.start, [0.0, 1.0, 0.0, 0.0]);
}

#[test]
fn the_last_of_several_wins() {
    assert_eq!(set(&["seed=4", "seed=5"]).seed, 5);
    assert_eq!(with(&[Override::set("seed=4"), Override::seed(6)]).seed, 6);
    assert_eq!(set(&[]).seed, 3);
}

#[test]
fn numbers_are_passed_exactly() {
    for value in [0.1 + 0.2, 1.0, 1e-3, 19.999_999_999_999_996] {
        let settings = with(&[Override::number("--set", "returns.viability.exponent", value)]);
        assert_eq!(settings.returns.viability.curve, ReturnCurve::Power { exponent: value });
    }
    // Negative numbers and those that are not finite reach the checks as well.
    let wrong = [Override::number("--set", "returns.viability.exponent", f64::NAN)];
    assert!(Settings::from_toml_str("pond", POND, &wrong).is_err());
}
