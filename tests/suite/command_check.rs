//! `check` derives what follows from a scenario, and warns of what may disappoint, where it may.

use serde_json::Value;

use crate::command_fixture::{Desk, keys};

/// Colonies of 1,000 cells of 100 um, with every cue and linear returns: nothing to warn of.
const CALM_POND: &str = "title = \"Pond\"
[body]
adult_cells = 1000
cell_diameter_um = 100.0
[traits]
cues = [\"noise\", \"lineage\", \"exposure\"]
";

pub(crate) fn check(settings: &[&str]) -> Value {
    let set: Vec<&str> = settings.iter().flat_map(|setting| ["--set", setting]).collect();
    let arguments = [&["check", "pond.toml", "--json"], set.as_slice()].concat();
    let ran = Desk::with(CALM_POND).run(&arguments);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{settings:?}");
    serde_json::from_str(&ran.out).expect("one JSON document")
}

pub(crate) fn warnings(settings: &[&str]) -> Vec<String> {
    let document = check(settings);
    let list = document["warnings"].as_array().expect("a list");
    let text = |value: &Value| value.as_str().expect("a text").to_owned();
    for warning in list {
        assert_eq!(keys(warning), ["name", "remedy", "text"]);
        assert!(!text(&warning["text"]).is_empty() && !text(&warning["remedy"]).is_empty());
    }
    list.iter().map(|warning| text(&warning["name"])).collect()
}

#[test]
fn exactly_the_fields_of_the_contract() {
    let document = check(&[]);
    let all = [
        "body",
        "cost",
        "mutations_per_generation",
        "support",
        "time",
        "title",
        "transport",
        "warnings",
    ];
    assert_eq!(keys(&document), all);
    assert_eq!(keys(&document["body"]), ["cells", "interior_share", "radius_um"]);
    assert_eq!(keys(&document["time"]), ["generation_h", "growth_h"]);
    assert_eq!(keys(&document["cost"]), ["bytes", "cell_lives", "seconds"]);
    for number in
        ["/body/radius_um", "/body/interior_share", "/time/growth_h", "/time/generation_h"]
    {
        assert!(document.pointer(number).is_some_and(Value::is_number), "{number}");
    }
    assert_eq!((&document["transport"], &document["support"]), (&Value::Null, &Value::Null));
}

/// A ball of the lattice's volume per cell, d^3/sqrt(2): R = (3 n d^3 / (4 pi sqrt 2))^(1/3), with
/// the fcc packing fraction pi/sqrt(18) (Conway & Sloane 1999). Growth: ten rounds of 8 h to 1,000
/// cells; a generalist of linear returns lives 1/(0.005 / 0.5) = 100 h.
#[test]
fn radius_and_times_in_closed_form() {
    let document = check(&[]);
    let at = |place: &str| document.pointer(place).and_then(Value::as_f64).expect("a number");
    let packing = std::f64::consts::PI / 18.0_f64.sqrt();
    let radius_um = 100.0 * (1000.0 / (8.0 * packing)).cbrt();
    approx::assert_relative_eq!(at("/body/radius_um"), radius_um, max_relative = 1e-12);
    approx::assert_relative_eq!(at("/time/growth_h"), 80.0, max_relative = 1e-12);
    approx::assert_relative_eq!(at("/time/generation_h"), 180.0, max_relative = 1e-6);
    // Five traits (baseline, three cues, the bias of noise), 256 sites, 0.1 each.
    approx::assert_relative_eq!(at("/mutations_per_generation"), 128.0, max_relative = 1e-12);
}

#[test]
fn nothing_is_said_where_nothing_is_wrong() {
    assert_eq!(warnings(&[]), [""; 0]);
}

/// Each warning is given on its side of its limit, and not on the other.
#[test]
fn each_warning_at_its_limit() {
    let accelerating = ["returns.viability.exponent=1.7", "returns.fecundity.exponent=1.7"];
    let with = |settings: &[&'static str]| [&accelerating, settings].concat();
    let exposure = "traits.cues=[\"exposure\"]";
    let cases: [(&str, Vec<&str>, Vec<&str>); 9] = [
        (
            "no-interior-cell",
            vec!["body.adult_cells=12", exposure],
            vec!["body.adult_cells=13", exposure],
        ),
        (
            "cue-cannot-vary",
            vec!["body.adult_cells=12", exposure],
            vec!["body.adult_cells=13", exposure],
        ),
        (
            "cue-cannot-vary",
            vec!["life.propagule_cells=1000", "traits.cues=[\"lineage\"]"],
            vec!["life.propagule_cells=999", "traits.cues=[\"lineage\"]"],
        ),
        ("small-body", vec!["body.adult_cells=999"], vec!["body.adult_cells=1000"]),
        // 1,000 cells of 45.24 um are 0.5 mm across: 2 R = 11.053 d.
        ("small-body", vec!["body.cell_diameter_um=45.2"], vec!["body.cell_diameter_um=45.3"]),
        // R0 = (n / 4) / (c_p m0) = 250 / (8 m0) for linear returns.
        (
            "generalist-cannot-persist",
            vec!["life.adult_hazard_per_h=31.3"],
            vec!["life.adult_hazard_per_h=31.2"],
        ),
        (
            "drift-dominates",
            with(&["habitat.sites=4", "traits.mutation_sd=0.001"]),
            with(&["habitat.sites=10000"]),
        ),
        (
            "too-few-generations",
            with(&["traits.mutation_probability=0.001", "run.generations=500"]),
            with(&["traits.mutation_probability=0.001", "run.generations=1000"]),
        ),
        // The first census is at the start: 40 generations give five, 30 give four.
        ("onset-cannot-be-confirmed", vec!["run.generations=30"], vec!["run.generations=40"]),
    ];
    for (name, given, not_given) in cases {
        let named = |settings: &[&str]| warnings(settings).iter().any(|found| found == name);
        assert!(named(&given), "{name} is not given with {given:?}: {:?}", warnings(&given));
        assert!(!named(&not_given), "{name} is given with {not_given:?}");
    }
    // A 50th of a generation of 180 h is 3.6 h.
    assert_eq!(warnings(&["run.tick_h=3.7"]), ["tick-too-long"]);
    assert_eq!(warnings(&["run.tick_h=3.5"]), [""; 0]);
}
