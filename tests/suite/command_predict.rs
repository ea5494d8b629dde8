//! `predict` prints what theory says, and finds critical values.

use serde_json::Value;

use crate::command_fixture::Desk;

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
