//! What the program prints where nothing is wrong with the scenario, and how it ends.

use std::io::Read as _;
use std::process::{Command, Stdio};

use serde_json::Value;

use crate::command_fixture::Desk;

const POND: &str =
    "title = \"Pond\"\n[body]\nadult_cells = 13\n[returns.viability]\nexponent = 2.0";

#[test]
fn check_prints_the_outlook() {
    let ran = Desk::with(POND).run(&["check", "pond.toml"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""));
    for line in ["adult body                 13 cells", "interior cells             7.7 %"] {
        assert!(ran.out.contains(line), "{}", ran.out);
    }
    assert!(ran.out.contains("small-body: "), "{}", ran.out);
}

#[test]
fn check_prints_one_json_document() {
    let ran = Desk::with(POND).run(&["check", "pond.toml", "--json", "--threads", "2"]);
    let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
    let keys = |value: &Value| -> Vec<String> {
        value.as_object().expect("an object").keys().cloned().collect()
    };
    assert_eq!(
        keys(&document),
        [
            "body",
            "cost",
            "mutations_per_generation",
            "support",
            "time",
            "title",
            "transport",
            "warnings"
        ]
    );
    assert_eq!(keys(&document["body"]), ["cells", "interior_share", "radius_um"]);
    assert_eq!(keys(&document["time"]), ["generation_h", "growth_h"]);
    assert_eq!(keys(&document["cost"]), ["bytes", "cell_lives", "seconds"]);
    assert_eq!(keys(&document["warnings"][0]), ["name", "remedy", "text"]);
    assert_eq!(document["transport"], Value::Null);
    // Four rounds of 8 h to 13 cells.
    assert_eq!(document["time"]["growth_h"], 32.0);
}

#[test]
fn a_generalist_that_cannot_persist_is_warned_of() {
    let desk = Desk::with(POND);
    let ran = desk.run(&["check", "pond.toml", "--set", "life.adult_hazard_per_h=100"]);
    assert_eq!(ran.code, 0);
    assert!(ran.out.contains("generalist-cannot-persist: "), "{}", ran.out);
}

#[test]
fn seed_and_set_replace_settings() {
    let desk = Desk::with(POND);
    let ran = desk.run(&[
        "check",
        "pond.toml",
        "--json",
        "--set",
        "body.adult_cells=64",
        "--set",
        "title=Another pond",
        "--seed",
        "5",
    ]);
    let document: Value = serde_json::from_str(&ran.out).expect("one JSON document");
    assert_eq!(document["body"]["cells"], 64);
    assert_eq!(document["title"], "Another pond");
}

#[test]
fn templates_are_listed_and_printed() {
    let desk = Desk::new();
    let list = desk.run(&["template"]);
    assert_eq!((list.code, list.out.lines().count()), (0, 10));
    for line in list.out.lines() {
        let name = line.split_whitespace().next().expect("a name");
        let ran = desk.run(&["template", name]);
        assert_eq!(ran.code, 0);
        std::fs::write(desk.path().join("pond.toml"), ran.out).expect("the folder is writable");
        assert_eq!(desk.run(&["check", "pond.toml"]).code, 0, "{name}");
    }
    let printed = desk.run(&["template", "valley", "--json"]);
    let document: Value = serde_json::from_str(&printed.out).expect("one JSON document");
    assert_eq!(document["name"], "valley");
    assert_eq!(document["text"], desk.run(&["template", "valley"]).out);
    let wrong = desk.run(&["template", "vally"]);
    assert_eq!((wrong.code, wrong.out.as_str()), (2, ""));
    assert!(wrong.err.contains("there is no template `vally`"), "{}", wrong.err);
    assert!(wrong.err.contains("did you mean `valley`?"), "{}", wrong.err);
}

#[test]
fn wrong_command_lines_end_with_2_and_help_with_0() {
    let desk = Desk::with(POND);
    for arguments in [
        &["chekc", "pond.toml"][..],
        &["check"],
        &[],
        &["check", "pond.toml", "--threads", "0"],
        &["check", "pond.toml", "--seed", "-1"],
        &["predict", "pond.toml", "--between", "0,1"],
        &["predict", "pond.toml", "--critical", "seed", "--between", "2,1"],
    ] {
        let ran = desk.run(arguments);
        assert_eq!((ran.code, ran.out.as_str()), (2, ""), "{arguments:?}");
        assert!(!ran.err.is_empty());
    }
    assert_eq!(desk.run(&["--help"]).code, 0);
    assert_eq!(desk.run(&["check", "--help"]).code, 0);
    assert_eq!(desk.run(&["--version"]).code, 0);
}

#[test]
fn a_reader_that_leaves_early_is_no_failure() {
    let mut child = Command::new(env!("CARGO_BIN_EXE_somadawn"))
        .arg("schema")
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    drop(child.stdout.take());
    let mut err = String::new();
    let stderr = child.stderr.as_mut().expect("standard error is piped");
    stderr.read_to_string(&mut err).expect("the program prints text");
    let status = child.wait().expect("the program ends");
    // The pipe may have been closed after a document small enough to fit had gone.
    assert_eq!((status.code(), err.as_str()), (Some(0), ""));
}

#[test]
fn the_stored_reference_page_is_what_the_registry_says() {
    let stored = include_str!("../../configs/REFERENCE.md");
    let ran = Desk::new().run(&["reference"]);
    assert_eq!(ran.code, 0);
    assert!(
        ran.out == stored,
        "configs/REFERENCE.md is stale: cargo run --release -- reference > configs/REFERENCE.md"
    );
}
