//! `predict` prints what theory says, and finds critical values.

use serde_json::Value;

use crate::command_fixture::{Desk, keys};

const POND: &str = "title = \"Pond\"\n[body]\nadult_cells = 64\n\
                    [returns]\nviability.exponent = 1.5\nfecundity.exponent = 1.5";
const EXPONENTS: &str = "returns.viability.exponent,returns.fecundity.exponent";

#[test]
fn a_list_to_read_and_a_json_document() {
    let desk = Desk::with(POND);
    let ran = desk.run(&["predict", "pond.toml"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""));
    assert!(ran.out.contains("verdict                    favoured by disruption"), "{}", ran.out);
    let ran = desk.run(&["predict", "pond.toml", "--json"]);
    let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
    assert_eq!(document["verdict"], "favoured by disruption");
    assert_eq!(document["critical"], Value::Null);
}

/// A pipe gives its text once only.
#[cfg(unix)]
#[test]
fn a_scenario_from_a_pipe_has_critical_values_too() {
    let mut command = assert_cmd::Command::new(env!("CARGO_BIN_EXE_somadawn"));
    let ran = command.args(["predict", "/dev/stdin", "--critical", EXPONENTS, "--json"]);
    let output = ran.write_stdin(POND).output().expect("the program starts");
    assert_eq!(output.status.code(), Some(0), "{output:?}");
    let document: Value = serde_json::from_slice(&output.stdout).expect("one JSON document");
    assert!(document["critical"]["local"].is_f64(), "{document}");
}

fn predict(settings: &[&str]) -> Value {
    let set: Vec<&str> = settings.iter().flat_map(|setting| ["--set", setting]).collect();
    let ran = Desk::with(POND).run(&[&["predict", "pond.toml", "--json"], &set[..]].concat());
    assert_eq!((ran.code, ran.err.as_str()), (0, ""), "{settings:?}");
    serde_json::from_str(&ran.out).expect("one JSON document")
}

#[test]
fn exactly_the_fields_of_the_contract() {
    let document = predict(&["traits.cues=[\"noise\", \"lineage\", \"exposure\"]"]);
    let all = ["best", "critical", "cues", "generalist", "title", "verdict"];
    assert_eq!(keys(&document), all);
    assert_eq!(keys(&document["generalist"]), ["r0", "soma_share"]);
    let best = ["class", "division_index", "r0", "soma_fraction", "traits"];
    assert_eq!(keys(&document["best"]), best);
    let traits = ["baseline", "exposure", "lineage", "noise", "noise_bias"];
    assert_eq!(keys(&document["best"]["traits"]), traits);
    let cues = document["cues"].as_array().expect("a list");
    for (cue, name) in cues.iter().zip(["noise", "lineage", "exposure"]) {
        assert_eq!(keys(cue), ["cue", "curvature", "gradient", "verdict"]);
        assert_eq!(cue["cue"], name);
        assert!(cue["gradient"].is_number() && cue["curvature"].is_number(), "{cue}");
    }
    assert_eq!(cues.len(), 3);
}

/// Bodies in space are a sample: the list and the document say of what.
#[test]
fn spatial_scenarios_say_what_their_numbers_rest_on() {
    let space = format!("{POND}\n[support]\nrange_diameters = 1.5\n");
    let desk = Desk::with(&space);
    let ran = desk.run(&["predict", "pond.toml"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""));
    let line = ran.out.lines().find(|line| line.starts_with("the numbers rest on"));
    let line = line.unwrap_or_else(|| panic!("{}", ran.out));
    assert!(line.contains("bodies grown, 100 % of which matured, 256 random fates each"), "{line}");
    let ran = desk.run(&["predict", "pond.toml", "--json"]);
    let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
    let sampling = ["bodies", "fates", "gain_error", "maturing_share"];
    assert_eq!(keys(&document["sampling"]), sampling);
    assert!(document["sampling"]["gain_error"].as_f64().is_some_and(|error| error > 0.0));
}

/// Where no generalist leaves a propagule, ln R0 has no derivatives.
#[test]
fn numbers_that_do_not_exist_are_null() {
    let document = predict(&[
        "returns.viability.surface_effect=0",
        "returns.viability.interior_effect=0",
        "traits.cues=[\"noise\", \"exposure\"]",
    ]);
    assert_eq!(document["generalist"]["r0"], 0.0);
    for cue in document["cues"].as_array().expect("a list") {
        assert_eq!((&cue["gradient"], &cue["curvature"]), (&Value::Null, &Value::Null));
    }
}

/// With pooled power returns x^a, x^c and no other hazard: z* = a/(a+c), and R0 is
/// `n z^a (1-z)^c / (c_p m0)`.
#[test]
fn generalists_in_closed_form() {
    for (a, c) in [(0.5, 0.5), (1.0, 1.0), (2.5, 2.5), (1.7, 1.3), (0.4, 3.0)] {
        let exponents = [
            format!("returns.viability.exponent={a:?}"),
            format!("returns.fecundity.exponent={c:?}"),
        ];
        let generalist = &predict(&[&exponents[0], &exponents[1]])["generalist"];
        let at = |name: &str| generalist[name].as_f64().expect("a number");
        let z: f64 = a / (a + c);
        approx::assert_abs_diff_eq!(at("soma_share"), z, epsilon = 1e-9);
        let r0 = 64.0 * z.powf(a) * (1.0 - z).powf(c) / (8.0 * 0.005);
        approx::assert_relative_eq!(at("r0"), r0, max_relative = 1e-9);
    }
}

#[test]
fn the_whole_list() {
    let desk = Desk::with(POND);
    let exponents = ["--critical", EXPONENTS];
    let ran = desk.run(&[&["predict", "pond.toml"][..], &exponents].concat());
    assert_eq!((ran.code, ran.err.as_str()), (0, ""));
    insta::assert_snapshot!("the_whole_list", ran.out);
}

/// With equal exponents and random fates in n cells: local `n/(n-1)`, global
/// `1 - log2(1 - 1/n)/2` for full specialists, which the traits' bound of 12 keeps from being pure.
#[test]
fn critical_exponents_of_small_bodies() {
    for n in [4.0_f64, 16.0, 64.0] {
        let cells = format!("body.adult_cells={n}");
        let arguments =
            ["predict", "pond.toml", "--json", "--set", &cells, "--critical", EXPONENTS];
        let ran = Desk::with(POND).run(&arguments);
        let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
        let critical = &document["critical"];
        assert_eq!(keys(critical), ["global", "keys", "local"]);
        let at = |name: &str| critical[name].as_f64().expect("a number");
        approx::assert_abs_diff_eq!(at("local"), n / (n - 1.0), epsilon = 1e-6);
        let global = 1.0 - (1.0 - 1.0 / n).log2() / 2.0;
        approx::assert_abs_diff_eq!(at("global"), global, epsilon = 1e-4);
    }
}

/// With equal exponents and random fates in n cells: local `n/(n-1)`, global
/// `1 - log2(1 - 1/n)/2`, reached but for the traits' bound.
#[test]
fn critical_exponents_of_64_cells() {
    let desk = Desk::with(POND);
    let ran = desk.run(&["predict", "pond.toml", "--json", "--critical", EXPONENTS]);
    let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
    let critical = &document["critical"];
    assert_eq!(critical["keys"][1], "returns.fecundity.exponent");
    let at = |name: &str| critical[name].as_f64().expect("a number");
    assert!((at("local") - 64.0 / 63.0).abs() < 1e-9, "{critical}");
    let global = 1.0 - (63.0_f64 / 64.0).log2() / 2.0;
    assert!((at("global") - global).abs() < 2e-5, "{critical}");
    // No verdict changes above 1.2.
    let between = ["--between", "1.2,2"];
    let above = [&["predict", "pond.toml", "--critical", EXPONENTS][..], &between].concat();
    let ran = desk.run(&above);
    assert_eq!(ran.out.matches("nowhere in the bracket").count(), 2, "{}", ran.out);
}

#[test]
fn questions_without_an_answer_end_with_2() {
    let desk = Desk::with(POND);
    let ask = |further: &[&str]| {
        let ran = desk.run(&[&["predict", "pond.toml", "--critical"], further].concat());
        assert_eq!((ran.code, ran.out.as_str()), (2, ""), "{further:?}");
        ran.err
    };
    assert!(ask(&["returns.viability.exponen"]).contains("did you mean `returns.viability.exp"));
    assert!(ask(&["body.adult_cells"]).contains("`body.adult_cells` is no real number"));
    assert!(ask(&["title"]).contains("`title` is no real number"));
    assert!(ask(&["traits.cost_per_unit"]).contains("give --between LOW,HIGH"));
    let outside = ask(&["returns.viability.exponent", "--between", "-1,2"]);
    assert!(outside.contains("[--critical:1:28]") && outside.contains("out of range"), "{outside}");
}
