//! Every wrong scenario ends with exit code 2 and a message per fault that names file, place,
//! key, value and what to do; nothing panics and nothing is silently ignored.

use crate::command_fixture::{Desk, refuses};

#[test]
fn unknown_keys_and_tables_with_the_nearest_known_one() {
    refuses(
        "[habitat]\nsite = 8",
        &[
            "unknown key `habitat.site`",
            "[pond.toml:3:1]",
            "site = 8",
            "did you mean `habitat.sites`?",
        ],
    );
    refuses("adult_cells = 8", &["unknown key `adult_cells`", "did you mean `body.adult_cells`?"]);
    refuses("[bodies]\nadult_cells = 8", &["unknown key `bodies`", "did you mean `body`?"]);
    refuses("[run]\nqqqqqq = 8", &["unknown key `run.qqqqqq`", "generations, census_every"]);
}

#[test]
fn values_of_another_type() {
    refuses("seed = \"one\"", &["`seed` = \"one\" is a text; it must be a whole number", ":2:8]"]);
    refuses(
        "[body]\nadult_cells = 64.0",
        &["`body.adult_cells` = 64.0 is a number with a decimal point; it must be a whole number"],
    );
    refuses("[run]\nstop_after_onset = 1", &["it must be true or false"]);
    refuses("[traits]\ncues = \"noise\"", &["it must be a list of any of \"noise\""]);
    refuses("body = 3", &["`body` = 3 is a whole number, but `body` is a table"]);
    refuses("[habitat.sites]\nx = 1", &["`habitat.sites`", "is a table; it must be a whole"]);
    refuses("seed = 1979-05-27", &["is a date or time"]);
}

#[test]
fn values_out_of_range() {
    for (text, saying) in [
        ("[habitat]\nsites = 1", "`habitat.sites` = 1 is out of range; it must be a whole number"),
        ("[body]\nadult_cells = -64", "`body.adult_cells` = -64 is out of range"),
        ("[body]\nadult_cells = 1_000_000_000", "`body.adult_cells` = 1_000_000_000 is out of"),
        ("[returns.viability]\nexponent = 0", "must be a number above 0, at most 20"),
        ("[returns.fecundity]\nexponent = -1.5", "`returns.fecundity.exponent` = -1.5 is out of"),
        ("[body]\ncell_diameter_um = 0.0", "`body.cell_diameter_um` = 0.0 is out of range"),
        ("[life]\nadult_hazard_per_h = 0", "`life.adult_hazard_per_h` = 0 is out of range"),
        ("[traits]\nmutation_probability = 1.5", "must be a number from 0 to 1"),
        ("seed = -1", "`seed` = -1 is out of range"),
        ("seed = 9223372036854775808", "`seed` = 9223372036854775808 is out of range"),
        ("seed = 0xfffffffffffffffffffffffffffffffffffffffff", "`seed` = 0xffff"),
        ("[onset]\nsoma_above = 1", "must be a number above 0, below 1"),
    ] {
        refuses(text, &[saying]);
    }
}

#[test]
fn numbers_that_are_not_finite() {
    for value in ["nan", "-nan", "inf", "-inf", "1e999"] {
        let text = format!("[life]\nadult_hazard_per_h = {value}");
        refuses(&text, &[&format!("`life.adult_hazard_per_h` = {value} is not a finite number")]);
    }
}

#[test]
fn keys_that_do_not_fit_each_other() {
    refuses(
        "[body]\nadult_cells = 2\n[life]\npropagule_cells = 4",
        &["`body.adult_cells` = 2 must be at least `life.propagule_cells` = 4", ":3:15]"],
    );
    refuses(
        "[budget]\nupkeep_eu_per_h = 1",
        &["`budget.upkeep_eu_per_h` = 1 must be below `budget.income_eu_per_h` = 1"],
    );
    refuses("[onset]\ngerm_below = 0.9", &["must be below `onset.soma_above` = 0.9"]);
    // The default of census_every clashes with what the user wrote: point at that.
    refuses(
        "[run]\ngenerations = 5",
        &["`run.census_every` = 10 must be at most `run.generations` = 5", ":3:15]"],
    );
    refuses(
        "[traits]\nbound = 2\nbaseline = 5\nstart = { noise = -3.0 }",
        &[
            "`traits.baseline` = 5 must be within plus or minus `traits.bound` = 2",
            "`traits.start.noise` = -3 must be within plus or minus `traits.bound` = 2",
        ],
    );
    refuses(
        "[habitat]\nsites = 1_000_000\n[body]\nadult_cells = 1000",
        &[
            "1000000 x 1000 = 1000000000 cells; at most 100000000 can be held",
            "use fewer sites or smaller bodies",
        ],
    );
}

#[test]
fn cues_and_their_starts() {
    refuses(
        "[traits]\ncues = [\"noise\", \"lineage\", \"noise\"]",
        &["`traits.cues` names \"noise\" twice", ":3:29]"],
    );
    refuses("[traits]\ncues = [\"nois\"]", &["did you mean \"noise\"?"]);
    refuses(
        "[traits]\nstart = { lineage = 1.0 }",
        &["`traits.start.lineage` is set, but the cue lineage is not among `traits.cues`"],
    );
    refuses("[traits.start]\nnoize = 1.0", &["did you mean `traits.start.noise`?"]);
}

#[test]
fn parameters_of_another_curve() {
    refuses(
        "[returns.viability]\nhalf = 0.3",
        &[
            "`returns.viability.half` belongs to curve = \"saturating\" or \"sigmoid\"",
            "but here returns.viability.curve = \"power\"",
        ],
    );
    refuses(
        "[returns.fecundity]\ncurve = \"sigmoid\"\nexponent = 2",
        &["`returns.fecundity.exponent` belongs to curve = \"power\""],
    );
    refuses(
        "[returns.fecundity]\ncurve = \"table\"",
        &["`returns.fecundity.points` is missing", "add `points = [[0.0, 0.0], [1.0, 1.0]]`"],
    );
    refuses("[returns.fecundity]\ncurve = \"powder\"", &["did you mean \"power\"?"]);
}

#[test]
fn points_of_a_measured_curve() {
    for (points, saying) in [
        ("[[0, 0]]", "1 points; there must be 2 to 1000"),
        ("[[0, 0], 3]", "point 2 = 3 is not a pair of numbers"),
        ("[[0, 0], [1, 2, 3]]", "point 2 = [1, 2, 3] is not a pair"),
        ("[[0, 0], [1, nan]]", "x and y must be finite numbers, 0 or more"),
        ("[[0, -1], [1, 1]]", "point 1 = [0, -1]: x and y must be"),
        ("[[0.5, 0], [1, 1]]", "the first point's x is 0.5, but it must be 0"),
        ("[[0, 0], [1, 1], [1, 2]]", "the x of point 3 must be greater"),
        ("[[0, 0], [1, 1], [2, 0.5]]", "the y of point 3 must not be less"),
    ] {
        let text = format!("[returns.viability]\ncurve = \"table\"\npoints = {points}");
        refuses(&text, &["`returns.viability.points`: ", saying, ":4:"]);
    }
}

#[test]
fn later_work_is_named_and_not_ignored() {
    for (text, saying) in [
        ("[scan]\nreplicates = 2", "`scan` is not built yet"),
        ("[[scan.axis]]\nkeys = []", "`scan` is not built yet"),
        ("[traits]\ncues = [\"neighbours\"]", "`traits.cues = \"neighbours\"` is not built yet"),
        ("[traits.start]\nneighbours = 1.0", "`traits.start.neighbours` is not built yet"),
    ] {
        refuses(text, &[saying, "[pond.toml:"]);
    }
}

#[test]
fn space_out_of_range() {
    for (text, saying) in [
        ("[support]\nrange_diameters = -1", "`support.range_diameters` = -1 is out of range"),
        (
            "[support]\nleak = 1.5",
            "`support.leak` = 1.5 is out of range; it must be a number from 0",
        ),
        ("[nutrient]\nbath_mM = 0", "`nutrient.bath_mM` = 0 is out of range"),
        ("[nutrient]\nhalf_saturation_mM = 0", "`nutrient.half_saturation_mM` = 0 is out of"),
        ("[nutrient]\nuptake_fmol_per_h = 0", "must be a number from 0.000000001 to 1000000000"),
        ("[nutrient]\ndiffusivity_um2_per_s = 0", "`nutrient.diffusivity_um2_per_s` = 0 is out"),
        ("[nutrient]\nexchange = inf", "`nutrient.exchange` = inf is not a finite number"),
        ("[waste]\nrelease_fmol_per_h = 0", "`waste.release_fmol_per_h` = 0 is out of range"),
        ("[waste]\ntoxic_mM = 0.0", "`waste.toxic_mM` = 0.0 is out of range"),
        ("[waste]\nexchange = -1", "`waste.exchange` = -1 is out of range"),
        ("[budget]\nstarvation_h = -1", "`budget.starvation_h` = -1 is out of range"),
        ("[budget]\nturnover_per_h = 10.1", "`budget.turnover_per_h` = 10.1 is out of range"),
        ("[budget]\nturnover_per_h = nan", "`budget.turnover_per_h` = nan is not a finite number"),
    ] {
        refuses(text, &[saying, "[pond.toml:3:"]);
    }
    refuses("[support]\nrange = 2", &["unknown key", "did you mean `support.range_diameters`?"]);
    refuses("[suport]\nleak = 0", &["unknown key `suport`", "did you mean `support`?"]);
    refuses("waste = true", &["`waste` = true is true or false, but `waste` is a table"]);
    refuses("[nutrient]\nbath_mm = 1", &["did you mean `nutrient.bath_mM`?"]);
    refuses("[body]\nplan = \"ball\"", &["must be \"clump\", \"chain\", \"tree\" or \"shell\""]);
}

#[test]
fn a_torus_is_a_square() {
    let torus = "[habitat]\nlayout = \"torus\"\n";
    refuses(
        &format!("{torus}sites = 250"),
        &[
            "`habitat.sites` = 250 is no square number",
            "the nearest squares are 225 and 256",
            "[pond.toml:4:9]",
        ],
    );
    refuses(&format!("{torus}dispersal_sites = 0"), &["must be a number above 0"]);
    refuses(
        "[habitat]\ndispersal_sites = 2",
        &[
            "`habitat.dispersal_sites` belongs to layout = \"torus\"",
            "but here habitat.layout = \"mixed\"",
        ],
    );
    // A faulty number of sites is told once.
    let message = refuses(&format!("{torus}sites = 3"), &["`habitat.sites` = 3 is out of range"]);
    assert!(!message.contains("square number"), "{message}");
}

#[test]
fn files_that_are_no_scenario() {
    Desk::with("").refuses(&[], &["scenario `pond.toml` has a fault", "`title` is missing"]);
    Desk::with([0x89, b'P', 0xff, 0xfe]).refuses(&[], &["`pond.toml` is not a text file (byte 0"]);
    Desk::with("title = \"\0\"").refuses(&[], &["`pond.toml` is not a text file (byte 9"]);
    Desk::with(vec![b'#'; 1 << 21]).refuses(&[], &["more than 1048576 bytes"]);
    Desk::new().refuses(&[], &["there is no scenario file `pond.toml`", "help: give the path"]);
    let desk = Desk::new();
    std::fs::create_dir(desk.path().join("pond.toml")).expect("the folder is writable");
    desk.refuses(&[], &["`pond.toml` is a folder, not a scenario file"]);
    let below_a_file = Desk::with("title = \"Pond\"").run(&["check", "pond.toml/pond.toml"]);
    assert_eq!(below_a_file.code, 2);
    assert!(
        below_a_file.err.contains("cannot read scenario file `pond.toml/pond.toml`\n  because: ")
    );
    refuses("title = \"again\"", &["not valid TOML: duplicate key", "[pond.toml:2:"]);
}

#[test]
fn every_fault_of_a_file_is_told_at_once() {
    let text = "[habitat]\nsites = 1\nsize = 3\n[body]\nadult_cells = -5\n[life]\n\
                adult_hazard_per_h = nan\n[traits]\ncues = [\"noise\", \"noise\"]\n[scan]\n\
                replicates = 0";
    let message = refuses(text, &["has 6 faults"]);
    insta::assert_snapshot!("six_faults", message);
    let message = refuses("seed = \n[body\nadult_cells = 0\n[habitat]\nsites = 1", &[]);
    insta::assert_snapshot!("syntax_and_range", message);
}

#[test]
fn many_faults_and_endless_lines_stay_readable() {
    let many = (0..5000).map(|key| format!("key_{key} = 1")).collect::<Vec<_>>().join("\n");
    let message = refuses(&many, &["has 5000 faults", "4900 more faults are not shown"]);
    assert!(message.len() < 100_000);
    let message = refuses(&format!("x = \"{}\"", "y".repeat(100_000)), &["unknown key `x`", "2:1"]);
    assert!(message.len() < 1000);
    let message = refuses(&format!("x = {}1", "[".repeat(100_000)), &["not valid TOML"]);
    assert!(message.len() < 50_000);
    let dotted = format!("{} = 1", vec!["a"; 50_000].join("."));
    assert!(refuses(&dotted, &["not valid TOML: recursion limit"]).len() < 1000);
}

#[test]
fn wrong_overrides_show_their_own_text() {
    let desk = Desk::with("title = \"Pond\"");
    let refuses = |setting: &str, sayings: &[&str]| desk.refuses(&["--set", setting], sayings);
    refuses("body.adult_cells=0", &["[--set:1:18]", "body.adult_cells=0", "is out of range"]);
    refuses("body.adult_cell=8", &["unknown key", "did you mean `body.adult_cells`?"]);
    refuses("body.adult_cells", &["`body.adult_cells` is not of the form key.path=value"]);
    refuses("=3", &["is not of the form key.path=value"]);
    refuses("body..plan=3", &["is not of the form key.path=value"]);
    refuses("body={ adult_cells = 8 }", &["`body` is a table", "set its keys one by one"]);
    refuses("traits.cues=[\"noise\"", &["not valid TOML", "[--set:1:"]);
    refuses("traits.cues=noise", &["`traits.cues` = noise is a text; it must be a list"]);
    refuses("life.adult_hazard_per_h=nan", &["= nan is not a finite number"]);
    refuses("support.leak=1.5", &["`support.leak` = 1.5 is out of range"]);
    refuses("support={}", &["`support` is a table", "set its keys one by one"]);
    refuses("scan.replicates=2", &["`scan` is not built yet"]);
    let seed =
        desk.refuses(&["--seed", "18446744073709551615"], &["`seed` = 18446744073709551615"]);
    assert!(seed.contains("[--seed:1:6]"), "{seed}");
    // Faults of the file and of several overrides come together.
    let both = Desk::with("title = \"Pond\"\n[habitat]\nsites = 2");
    both.refuses(&["--set", "seed=x", "--set", "body.plan=bush"], &["has 3 faults"]);
}
