//! What `evolve` prints and what it leaves: the contract that other programs read.

use serde_json::Value;
use somadawn::record::{BodyRow, CensusRow, Stage, read_table};

use crate::command_fixture::{Desk, SMALL_POND, keys};

const RESULTS: [&str; 5] =
    ["bodies.parquet", "census.parquet", "manifest.json", "replicates.csv", "summary.json"];

fn lines(desk: &Desk, name: &str) -> Vec<String> {
    let text = std::fs::read_to_string(desk.join(name)).expect("the file can be read");
    text.lines().map(str::to_owned).collect()
}

#[test]
fn a_run_leaves_its_five_files_and_a_lock() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("run", &[]);
    let mut expected = vec![".lock"];
    expected.extend(RESULTS);
    assert_eq!(desk.names("run"), expected);
    let rows = lines(&desk, "run/replicates.csv");
    let columns = "replicate,seed,outcome,onset_generation,end_generation,division_index,\
                   soma_fraction,class,route_noise,route_lineage,route_exposure,route_income,\
                   mean_fitness,adult_cells,never_matured";
    assert_eq!((rows[0].as_str(), rows.len()), (columns, 4));
}

#[test]
fn the_summary_is_printed_as_it_is_stored_with_the_fields_of_the_contract() {
    let desk = Desk::with(SMALL_POND);
    let printed = desk.evolve_into("run", &[]);
    assert_eq!(printed, desk.json("run/summary.json"));
    let all = [
        "extinct",
        "final",
        "never_matured",
        "onset",
        "prediction",
        "replicates",
        "throughput",
        "title",
    ];
    assert_eq!(keys(&printed), all);
    let onset = [
        "count",
        "median_generation",
        "median_high",
        "median_low",
        "probability",
        "wilson_high",
        "wilson_low",
    ];
    assert_eq!(keys(&printed["onset"]), onset);
    let last = [
        "adult_cells",
        "class",
        "division_index",
        "division_index_high",
        "division_index_low",
        "route",
        "soma_fraction",
    ];
    assert_eq!(keys(&printed["final"]), last);
    assert_eq!(keys(&printed["prediction"]), ["class", "verdict"]);
    let throughput = ["cell_lives", "cell_lives_per_second", "threads", "wall_s"];
    assert_eq!(keys(&printed["throughput"]), throughput);
    assert_eq!((&printed["title"], &printed["replicates"]), (&"Pond".into(), &3.into()));
}

#[test]
fn the_manifest_spells_the_scenario_out_and_vouches_for_every_file() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("run", &["--set", "life.propagule_cost_eu=7.5", "--seed", "8"]);
    let manifest = desk.json("run/manifest.json");
    assert_eq!((&manifest["seed"], &manifest["complete"]), (&8.into(), &true.into()));
    let scenario = manifest["scenario"].as_str().expect("a text");
    for line in ["seed = 8", "propagule_cost_eu = 7.5", "division_cost_eu = 8.0", "index = 0.5"] {
        assert!(scenario.lines().any(|found| found == line), "{line} is not in:\n{scenario}");
    }
    let files = manifest["files"].as_array().expect("a list");
    let named: Vec<&str> = files.iter().filter_map(|file| file["name"].as_str()).collect();
    assert_eq!(named, ["replicates.csv", "census.parquet", "bodies.parquet", "summary.json"]);
    for file in files {
        let name = file["name"].as_str().expect("a name");
        let size = std::fs::metadata(desk.join("run").join(name)).expect("the file is there").len();
        assert_eq!(file["bytes"], size, "{name}");
    }
}

#[test]
fn the_report_is_readable_and_carries_no_codes_off_a_terminal() {
    let desk = Desk::with(SMALL_POND);
    let ran = desk.run(&["evolve", "pond.toml"]);
    assert_eq!((ran.code, ran.err.as_str()), (0, ""));
    assert!(!ran.out.contains('\u{1b}'), "{}", ran.out);
    assert!(ran.out.lines().all(|line| line.chars().count() <= 100), "{}", ran.out);
    for saying in
        ["0 of 3 replicates", "Division index", "not favoured", "Agreement", "outputs/pond"]
    {
        assert!(ran.out.contains(saying), "`{saying}` is not in:\n{}", ran.out);
    }
    // The folder is named after the scenario, below where the program was called.
    assert!(desk.join("outputs/pond/summary.json").is_file());
}

#[test]
fn a_finished_run_is_read_and_not_repeated() {
    let desk = Desk::with(SMALL_POND);
    let first = desk.evolve_into("run", &[]);
    let before = desk.files("run");
    assert_eq!(desk.evolve_into("run", &[]), first);
    assert_eq!(desk.files("run"), before);
    // Replaced, it is run anew.
    let again = desk.evolve_into("run", &["--replace"]);
    assert_ne!(again["throughput"]["wall_s"], first["throughput"]["wall_s"]);
    assert_eq!(again["final"], first["final"]);
}

#[test]
fn a_damaged_file_makes_the_run_be_repeated() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("run", &[]);
    let whole = desk.files("run/");
    std::fs::write(desk.join("run/replicates.csv"), "replicate\n").expect("writable");
    desk.evolve_into("run", &[]);
    for name in ["replicates.csv", "census.parquet", "bodies.parquet"] {
        let of = |files: &[(String, Vec<u8>)]| files.iter().find(|f| f.0 == name).cloned();
        assert_eq!(of(&desk.files("run")), of(&whole), "{name}");
    }
}

#[test]
fn seed_and_set_reach_the_run() {
    let desk = Desk::with(SMALL_POND);
    let first = desk.evolve_into("first", &[]);
    let second = desk.evolve_into("second", &["--seed", "4"]);
    assert_ne!(first["final"]["division_index"], second["final"]["division_index"]);
    let same = desk.evolve_into("third", &["--set", "seed=4"]);
    assert_eq!(second["final"], same["final"]);
    assert_eq!(desk.evolve_into("two", &["--set", "run.replicates=2"])["replicates"], 2);
    assert_eq!(lines(&desk, "two/replicates.csv").len(), 3);
    // The first two of three replicates are those of a run of two.
    assert_eq!(lines(&desk, "two/replicates.csv"), lines(&desk, "first/replicates.csv")[..3]);
}

#[test]
fn folders_above_the_runs_are_made() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("shelf/board/run", &[]);
    assert!(desk.join("shelf/board/run/manifest.json").is_file());
}

/// 40 generations, a census every 15: at the start, at 15, at 30, and at the end.
#[test]
fn the_last_census_is_at_the_end() {
    let desk = Desk::with(SMALL_POND);
    desk.evolve_into("run", &["--set", "run.census_every=15"]);
    let census: Vec<CensusRow> = read_table(&desk.join("run/census.parquet")).expect("a table");
    let of = |number| census.iter().filter(move |row| row.replicate == number);
    for number in 0..3 {
        let generations: Vec<f64> = of(number).map(|row| row.generation).collect();
        assert_eq!(generations.len(), 4, "{generations:?}");
        for (generation, due) in generations.iter().zip([0.0, 15.0, 30.0, 40.0]) {
            assert!((due..due + 1.0).contains(generation), "{generations:?}");
        }
    }
    let bodies: Vec<BodyRow> = read_table(&desk.join("run/bodies.parquet")).expect("a table");
    assert!(bodies.iter().any(|row| row.stage == Stage::Start));
    assert!(bodies.iter().any(|row| row.stage == Stage::End));
    assert!(bodies.iter().all(|row| row.stage != Stage::Onset), "nothing differentiated");
}

/// Founders that differentiate from the first: the onset is confirmed by the fifth census, which
/// is at generation 20, and there the replicate ends.
#[test]
fn a_replicate_can_end_once_its_onset_is_confirmed() {
    let desk = Desk::with(SMALL_POND);
    let further =
        ["--set", "run.stop_after_onset=true", "--set", "traits.start.noise=6", "--seed", "1"];
    let summary = desk.evolve_into("run", &further);
    assert_eq!(summary["onset"]["count"], 3);
    assert_eq!(summary["final"]["class"], "complete");
    assert_eq!(summary["final"]["route"], "noise");
    for row in &lines(&desk, "run/replicates.csv")[1..] {
        let fields: Vec<&str> = row.split(',').collect();
        let number = |place: usize| fields[place].parse::<f64>().expect("a number");
        assert_eq!(fields[2], "onset");
        assert!(number(3) < 1.0 && (20.0..21.0).contains(&number(4)), "{row}");
    }
    let bodies: Vec<BodyRow> = read_table(&desk.join("run/bodies.parquet")).expect("a table");
    assert!(bodies.iter().any(|row| row.stage == Stage::Onset));
}

#[test]
fn one_replicate_has_no_interval() {
    let desk = Desk::with(SMALL_POND);
    let summary = desk.evolve_into("run", &["--set", "run.replicates=1"]);
    assert_eq!(summary["replicates"], 1);
    assert!(summary["final"]["division_index"].is_number());
    assert_eq!(summary["final"]["division_index_low"], Value::Null);
    assert_eq!(summary["final"]["division_index_high"], Value::Null);
}
