//! README's results are those of real runs. `SOMADAWN_BLESS=1 cargo test --release readme_` writes them
//! anew after a change that alters results; with `SOMADAWN_LONG=1` as well, all scenarios are run.

use std::process::Command;

use serde_json::Value;
use somadawn::scenario::Settings;
use tempfile::TempDir;

use crate::readme::{README, is_scenario, table};

/// Whether an environment variable says 1.
fn asked(name: &str) -> bool {
    std::env::var(name).is_ok_and(|value| value == "1")
}

/// What the program prints in a UTF-8 locale.
fn run(arguments: &[&str]) -> String {
    let mut command = Command::new(env!("CARGO_BIN_EXE_somadawn"));
    let output = command.args(arguments).env("LC_ALL", "C.UTF-8").output().expect("it starts");
    assert!(output.status.success(), "{arguments:?}: {output:?}");
    String::from_utf8(output.stdout).expect("text")
}

fn json(arguments: &[&str]) -> Value {
    serde_json::from_str(&run(&[arguments, &["--json"]].concat())).expect("one JSON document")
}

/// `README` with each pair's first text replaced by its second; as they must be equal, a difference
/// is a fault, unless they are to be written anew.
fn settle(pairs: &[(String, String)]) {
    if asked("SOMADAWN_BLESS") {
        let text = std::fs::read_to_string("README.md").expect("README is there");
        let text = pairs.iter().fold(text, |text, (told, found)| text.replace(told, found));
        std::fs::write("README.md", text).expect("README can be written");
        return;
    }
    for (told, found) in pairs {
        assert!(told == found, "README says\n{told}\nbut the program says\n{found}");
    }
}

/// All but the lines that differ from machine to machine.
fn comparable(report: &str) -> Vec<&str> {
    report.lines().filter(|line| !line.starts_with("Speed") && !line.starts_with("Files")).collect()
}

#[test]
fn readme_first_result_is_what_the_first_command_prints() {
    let folder = TempDir::new().expect("a temporary folder");
    let out = folder.path().join("run");
    let out = out.to_str().expect("text");
    let found = run(&["evolve", "configs/accelerating-returns.toml", "--quiet", "--out", out]);
    let told = README.split("```text\n").nth(1).and_then(|rest| rest.split("```").next());
    let told = told.expect("a first result");
    if comparable(told) != comparable(&found) {
        settle(&[(told.to_owned(), found.replace(out, "outputs/accelerating-returns"))]);
    }
}

/// The rows of the table of scenarios, each with its scenario's name.
fn scenarios() -> Vec<(String, Vec<String>)> {
    let name = |cell: &str| cell.split('`').nth(1).map(str::to_owned);
    let rows = table(README, "scenario").into_iter();
    rows.map(|row| (name(&row[0]).expect("a name in backticks"), row)).collect()
}

fn path(name: &str) -> String {
    format!("configs/{name}.toml")
}

#[test]
fn readme_table_lists_every_config() {
    let mut told: Vec<_> = scenarios().into_iter().map(|(name, _)| path(&name)).collect();
    let files = std::fs::read_dir("configs").expect("configs is there").map(Result::unwrap);
    let files = files.map(|file| file.path().to_string_lossy().into_owned());
    let mut there: Vec<_> = files.filter(|file| is_scenario(file)).collect();
    told.sort();
    there.sort();
    assert_eq!(told, there);
}

/// Verdict, class of the best programme and its gain in R0, where it gains.
fn theory(prediction: &Value) -> String {
    let word = |value: &Value| value.as_str().expect("a word").to_owned();
    let r0 = |part: &str| prediction[part]["r0"].as_f64().expect("a number");
    let gain = 100.0 * (r0("best") / r0("generalist") - 1.0);
    let gain = if gain < 0.5 { String::new() } else { format!(", R0 +{gain:.0} %") };
    let class = word(&prediction["best"]["class"]);
    format!("{}; best bodies {class}{gain}", word(&prediction["verdict"]))
}

#[test]
fn readme_states_what_theory_says() {
    let pairs = scenarios()
        .into_iter()
        .map(|(name, row)| (row[2].clone(), theory(&json(&["predict", &path(&name)]))));
    settle(&pairs.collect::<Vec<_>>());
}

/// A count of generations with a comma between thousands.
fn generations(value: f64) -> String {
    let whole = value.round();
    let (thousands, rest) = ((whole / 1000.0).floor(), whole % 1000.0);
    if thousands > 0.0 { format!("{thousands},{rest:03}") } else { format!("{rest}") }
}

/// Onsets with their interval, median or length, final D, class and route.
fn simulation(summary: &Value, length: u64) -> String {
    let onset = &summary["onset"];
    let number = |name: &str| onset[name].as_f64();
    let interval = |low: Option<f64>, high: Option<f64>, text: fn(f64) -> String| {
        let end = |value: Option<f64>| value.map_or_else(|| "no limit".to_owned(), text);
        format!("({} to {})", end(low), end(high))
    };
    let share = interval(number("wilson_low"), number("wilson_high"), |x| format!("{x:.2}"));
    let when = number("median_generation").map_or_else(
        || format!(" in {} generations", generations(length as f64)),
        |median| {
            let limits = interval(number("median_low"), number("median_high"), generations);
            format!(", median generation {} {limits}", generations(median))
        },
    );
    let last = &summary["final"];
    let class = last["class"].as_str().expect("a class");
    let route = last["route"].as_str().filter(|_| class != "alike");
    let route = route.map_or_else(String::new, |route| format!(", by {route}"));
    let index = last["division_index"].as_f64().expect("a number");
    let count = format!("{} of {}", onset["count"], summary["replicates"]);
    format!("{count} {share}{when}; D {index:.2}, {class}{route}")
}

/// One scenario, the quickest; all of them in the long form, which takes a minute or a few.
#[test]
fn readme_states_what_evolution_did() {
    let folder = TempDir::new().expect("a temporary folder");
    let chosen = |name: &str| asked("SOMADAWN_LONG") || name == "asymmetric-division";
    let pairs = scenarios().into_iter().filter(|(name, _)| chosen(name)).map(|(name, row)| {
        let out = folder.path().join(&name);
        let out = out.to_str().expect("text");
        let summary = json(&["evolve", &path(&name), "--quiet", "--out", out]);
        let settings = Settings::load(path(&name).as_ref(), &[]).expect("no faults");
        (row[3].clone(), simulation(&summary, settings.run.generations))
    });
    settle(&pairs.collect::<Vec<_>>());
}
