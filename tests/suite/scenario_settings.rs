//! From text to settings and back.

#![expect(clippy::float_cmp, reason = "numbers must come through to the last bit")]

use serde_json::Value;
use somadawn::scenario::registry::{entries, tables};
use somadawn::scenario::schema::schema;
use somadawn::scenario::settings::{Baseline, Layout, Nutrient, Plan, Support, Tick, Waste};
use somadawn::scenario::{Fault, FaultKind, Override, ScenarioError, Settings};
use somadawn::theory::{Cue, CueSet, ReturnCurve};

fn read(text: &str) -> Result<Settings, ScenarioError> {
    Settings::from_toml_str("pond", text, &[])
}

fn faults(text: &str) -> Vec<Fault> {
    match read(text) {
        Err(ScenarioError::Faulty(faults)) => faults.faults,
        other => panic!("no faults but {other:?}"),
    }
}

/// Every default of the scenario file, as its description gives them.
#[test]
fn defaults_are_those_of_the_scenario_file() {
    let settings = read("title = \"Pond\"").expect("a title is enough");
    assert_eq!(settings.seed, 1);
    assert_eq!((settings.habitat.sites, settings.habitat.layout), (256, Layout::Mixed));
    let body = &settings.body;
    assert_eq!((body.plan, body.adult_cells, body.cell_diameter_um), (Plan::Clump, 64, 10.0));
    let life = &settings.life;
    assert_eq!((life.propagule_cells, life.propagule_cost_eu), (1, 8.0));
    assert_eq!((life.adult_hazard_per_h, life.extrinsic_hazard_per_h), (0.005, 0.0));
    assert_eq!(life.juvenile_hazard_per_h, 0.0);
    let budget = &settings.budget;
    assert_eq!((budget.income_eu_per_h, budget.upkeep_eu_per_h), (1.0, 0.0));
    assert_eq!((budget.division_cost_eu, budget.division_cv), (8.0, 0.0));
    assert_eq!((budget.starvation_h, budget.turnover_per_h), (24.0, 0.0));
    assert_eq!((&settings.support, &settings.nutrient, &settings.waste), (&None, &None, &None));
    for task in [&settings.returns.viability, &settings.returns.fecundity] {
        assert_eq!(task.curve, ReturnCurve::Power { exponent: 1.0 });
        assert_eq!((task.surface_effect, task.interior_effect), (1.0, 1.0));
    }
    let traits = &settings.traits;
    assert_eq!(traits.cues, CueSet::EMPTY.with(Cue::Noise));
    assert_eq!((traits.baseline, traits.start), (Baseline::Optimum, [0.0; Cue::COUNT]));
    assert_eq!((traits.mutation_probability, traits.mutation_sd), (0.1, 0.2));
    assert_eq!((traits.bound, traits.cost_per_unit), (12.0, 0.0));
    let run = &settings.run;
    assert_eq!((run.generations, run.census_every, run.replicates), (1500, 10, 8));
    assert_eq!((run.stop_after_onset, run.tick), (false, Tick::Auto));
    let onset = &settings.onset;
    assert_eq!((onset.index, onset.sustained_censuses), (0.5, 5));
    assert_eq!((onset.germ_below, onset.soma_above), (0.1, 0.9));
}

const ALL_KEYS: &str = r#"
title = "Every key \"quoted\" and µ"
seed = 9223372036854775807
[habitat]
sites = 100
layout = "torus"
dispersal_sites = 0.75
[body]
plan = "tree"
adult_cells = 33
cell_diameter_um = 7
[life]
propagule_cells = 2
propagule_cost_eu = 0.1
adult_hazard_per_h = 1e-5
extrinsic_hazard_per_h = 3e-4
juvenile_hazard_per_h = 2e-7
[budget]
income_eu_per_h = 2.5
upkeep_eu_per_h = 0.3
division_cost_eu = 9.75
division_cv = 0.1
starvation_h = 0
turnover_per_h = 1e-4
[returns]
viability = { curve = "power", exponent = 1.7000000000000002, surface_effect = 2 }
fecundity.exponent = 0.3
fecundity.interior_effect = 0
[support]
range_diameters = 0
leak = 0.25
[nutrient]
bath_mM = 0.25
half_saturation_mM = 1e-3
uptake_fmol_per_h = 3
diffusivity_um2_per_s = 2100
exchange = 0.3
[waste]
release_fmol_per_h = 4.5
diffusivity_um2_per_s = 700
toxic_mM = 2
exchange = 0.9
[traits]
cues = ["exposure", "lineage", "income"]
baseline = -0.5
start = { lineage = 1.5 }
mutation_probability = 0
mutation_sd = 0
bound = 30
cost_per_unit = 0.01
[run]
generations = 70
census_every = 7
replicates = 3
stop_after_onset = true
tick_h = 0.25
[onset]
index = 1
sustained_censuses = 2
germ_below = 0.2
soma_above = 0.8
"#;

#[test]
fn settings_survive_being_spelled_out() {
    let settings = read(ALL_KEYS).expect("it has no fault");
    assert_eq!(settings.traits.start[Cue::Lineage.index()], 1.5);
    assert_eq!(settings.run.tick, Tick::Hours(0.25));
    assert_eq!(settings.habitat.layout, Layout::Torus { dispersal_sites: 0.75 });
    assert_eq!(settings.body.plan, Plan::Tree);
    assert_eq!((settings.budget.starvation_h, settings.budget.turnover_per_h), (0.0, 1e-4));
    assert_eq!(settings.support, Some(Support { range_diameters: 0.0, leak: 0.25 }));
    let nutrient = settings.nutrient.as_ref().expect("stated");
    assert_eq!((nutrient.bath_mm, nutrient.half_saturation_mm), (0.25, 1e-3));
    assert_eq!((nutrient.uptake_fmol_per_h, nutrient.diffusivity_um2_per_s), (3.0, 2100.0));
    assert_eq!(nutrient.exchange, 0.3);
    let waste = settings.waste.as_ref().expect("stated");
    assert_eq!((waste.release_fmol_per_h, waste.diffusivity_um2_per_s), (4.5, 700.0));
    assert_eq!((waste.toxic_mm, waste.exchange), (2.0, 0.9));
    assert_eq!(read(&settings.to_toml()).expect("spelled out"), settings);
    // The manifest stores the same as JSON; from there it becomes TOML again.
    let json = serde_json::to_string(&settings).expect("tables become JSON");
    let table: toml::Table = serde_json::from_str(&json).expect("JSON becomes tables");
    assert_eq!(read(&table.to_string()).expect("from JSON"), settings);
}

#[test]
fn every_curve_is_read_and_spelled_out() {
    let curve = |viability: &str| {
        let text = format!("title = 'x'\n[returns]\nviability = {{ {viability} }}");
        let settings = read(&text).unwrap_or_else(|error| panic!("{viability}: {error:?}"));
        assert_eq!(read(&settings.to_toml()).expect("spelled out"), settings);
        settings.returns.viability.curve
    };
    let saturating = ReturnCurve::Saturating { half: 0.25 };
    assert_eq!(curve("curve = 'saturating', half = 0.25"), saturating);
    let sigmoid = ReturnCurve::Sigmoid { half: 0.5, steepness: 4.0 };
    assert_eq!(curve("curve = 'sigmoid'"), sigmoid);
    let points = [[0.0, 0.1], [0.5, 0.1], [2.0, 1.5]];
    let table = ReturnCurve::table(&points).expect("a curve");
    assert_eq!(curve("curve = 'table', points = [[0, 0.1], [0.5, 0.1], [2, 1.5]]"), table);
    let steep = ReturnCurve::Sigmoid { half: 1e6, steepness: 100.0 };
    assert_eq!(curve("curve = 'sigmoid', half = 1e6, steepness = 100"), steep);
    assert_eq!(steep.value(1.0), 1.0);
}

/// A scenario spells out every key of the tables it has, but for those whose condition fails.
#[test]
fn every_key_is_spelled_out() {
    let all = ["support.leak=0", "nutrient.exchange=1", "waste.exchange=1"].map(Override::set);
    let fields = Settings::from_toml_str("x", "title = 'x'", &all).expect("sound overrides");
    for (settings, every_table) in [(Settings::example("x"), false), (fields, true)] {
        let spelled = settings.spelled_out();
        for entry in entries() {
            let default = ["power", "mixed"];
            let applies =
                entry.condition().is_none_or(|c| default.iter().any(|word| c.words.contains(word)));
            let optional = tables().iter().any(|t| t.path == entry.table() && t.absent.is_some());
            let stated = spelled.iter().any(|(path, _)| *path == entry.path());
            assert_eq!(stated, applies && (every_table || !optional), "{}", entry.path());
        }
        let paths: Vec<_> = spelled.iter().map(|(path, _)| *path).collect();
        let registered = entries().iter().map(|entry| entry.path());
        assert_eq!(paths, registered.filter(|path| paths.contains(path)).collect::<Vec<_>>());
    }
}

/// An optional table is on when it is stated, empty or not, or any key of it is; and it leaves no
/// trace where it is not.
#[test]
fn stating_an_optional_table_switches_it_on() {
    let bare = read("title = 'x'").expect("a title is enough");
    let spelled = bare.to_toml();
    for table in tables().iter().filter(|table| table.absent.is_some()) {
        assert!(!spelled.contains(table.path), "{}", table.path);
        let stated = read(&format!("title = 'x'\n[{}]", table.path)).expect("an empty table");
        let inline = read(&format!("title = 'x'\n{} = {{}}", table.path)).expect("the same");
        let key = entries().iter().find(|entry| entry.table() == table.path).expect("it has keys");
        let set = Override::set(format!("{}={}", key.path(), key.default_value()));
        let overridden = Settings::from_toml_str("x", "title = 'x'", &[set]).expect("the default");
        assert_ne!(stated, bare, "{}", table.path);
        assert_eq!((&stated, &stated), (&inline, &overridden), "{}", table.path);
        assert!(stated.to_toml().contains(&format!("[{}]", table.path)));
        assert_eq!(read(&stated.to_toml()).expect("spelled out"), stated);
    }
    let text = "title = 'x'\n[support]\n[nutrient]\n[waste]\n[habitat]\nlayout = 'torus'";
    let settings = read(text).expect("empty tables");
    assert_eq!(settings.support, Some(Support { range_diameters: 2.0, leak: 0.0 }));
    let nutrient = Nutrient {
        bath_mm: 0.05,
        half_saturation_mm: 0.02,
        uptake_fmol_per_h: 20.0,
        diffusivity_um2_per_s: 500.0,
        exchange: 1.0,
    };
    assert_eq!(settings.nutrient, Some(nutrient));
    let waste = Waste {
        release_fmol_per_h: 20.0,
        diffusivity_um2_per_s: 500.0,
        toxic_mm: 0.05,
        exchange: 1.0,
    };
    assert_eq!(settings.waste, Some(waste));
    assert_eq!(settings.habitat.layout, Layout::Torus { dispersal_sites: 1.5 });
}

#[test]
fn every_plan_is_read() {
    for (word, plan) in [
        ("clump", Plan::Clump),
        ("chain", Plan::Chain),
        ("tree", Plan::Tree),
        ("shell", Plan::Shell),
    ] {
        let settings = read(&format!("title = 'x'\n[body]\nplan = '{word}'")).expect("a plan");
        assert_eq!(settings.body.plan, plan);
        assert_eq!(read(&settings.to_toml()).expect("spelled out"), settings);
    }
}

#[test]
fn faults_know_their_line_and_column() {
    let text = "title = \"Pond\"\r\n\n[habitat]\nsites = 3 # µµ\n";
    let faults = faults(text);
    assert_eq!(faults.len(), 1);
    assert_eq!(faults[0].place(), Some(("pond", 4, 9)));
    assert!(matches!(&faults[0].kind, FaultKind::OutOfRange { key, value, .. }
        if key == "habitat.sites" && value == "3"));
}

#[test]
fn a_faulty_value_causes_no_further_faults() {
    // Neither the default that stands in for 0 nor the missing cue is held against other keys.
    assert_eq!(faults("title='x'\n[body]\nadult_cells=0\n[life]\npropagule_cells=100").len(), 1);
    assert_eq!(faults("title='x'\n[traits]\ncues='x'\nstart={lineage=1}").len(), 1);
    assert_eq!(faults("title='x'\n[returns.viability]\ncurve='x'\nhalf=1").len(), 1);
}

#[test]
fn whole_numbers_do_for_real_ones_and_minus_zero_is_zero() {
    let settings = read("title='x'\n[traits]\nbaseline=-0.0\nbound=4").expect("no fault");
    assert!(matches!(settings.traits.baseline, Baseline::At(zero) if zero.is_sign_positive()));
    assert_eq!(settings.traits.bound, 4.0);
}

/// The schema against its own standard's simplest demands, and against the registry.
#[test]
fn the_schema_closes_every_table_and_describes_every_key() {
    let schema = schema();
    assert_eq!(schema["$schema"], "https://json-schema.org/draft/2020-12/schema");
    assert_eq!(schema["required"], serde_json::json!(["title"]));
    assert_eq!(schema["additionalProperties"], false);
    for entry in entries() {
        let mut place = &schema;
        for name in entry.path().split('.') {
            assert_eq!(place["additionalProperties"], false, "{}", entry.path());
            place = &place["properties"][name];
        }
        assert!(place["description"].as_str().is_some_and(|text| text.contains(entry.meaning())));
        if !entry.required() {
            let default = serde_json::to_value(entry.default_value()).expect("it becomes JSON");
            assert_eq!(place["default"], default, "{}", entry.path());
        }
    }
    let condition = &schema["properties"]["returns"]["properties"]["viability"];
    let half = &condition["dependentSchemas"]["half"];
    assert_eq!(half["required"], serde_json::json!(["curve"]));
    assert_ne!(condition["dependentSchemas"]["exponent"]["properties"], Value::Null);
}
