use approx::assert_relative_eq;

use super::bodies::compact_interior_share;
use super::*;
use crate::scenario::Override;

fn settings(overrides: &[&str]) -> Settings {
    let overrides: Vec<_> = overrides.iter().map(|text| Override::set(*text)).collect();
    Settings::from_toml_str("test", "title = 'pond'", &overrides).expect("sound overrides")
}

fn selection(r0: f64, pulls: &[Pull]) -> Selection {
    let (growth_h, generation_h) = (48.0, 148.0);
    Selection { soma_share: 0.5, r0, growth_h, generation_h, pulls: pulls.to_vec() }
}

fn names(settings: &Settings, selection: &Selection) -> Vec<&'static str> {
    let outlook = Outlook::of(settings, selection, 1);
    outlook.warnings.iter().map(|advice| advice.name).collect()
}

/// Sites that fill balls of the lattice (OEIS A119869): 1, 13, 19, 43, 55.
#[test]
fn interior_cells_of_whole_balls() {
    // 13: the centre alone has all twelve neighbours. 55 = 1 + 12 + 6 + 24 + 12 sites: the
    // neighbours of the inner 13 are within distance^2 4 of the centre, so 13 are interior.
    assert_relative_eq!(compact_interior_share(12), 0.0);
    assert_relative_eq!(compact_interior_share(13), 1.0 / 13.0);
    assert_relative_eq!(compact_interior_share(55), 13.0 / 55.0);
    assert_relative_eq!(compact_interior_share(1), 0.0);
    // 64 cells: of the 24 sites of the fifth shell 9 are taken at random. At least the inner 13
    // stay interior, and at most 42 sites have all neighbours within six shells.
    let share = 64.0 * compact_interior_share(64);
    assert!((13.0..43.0).contains(&share), "{share}");
}

#[test]
fn times_follow_the_life_cycle() {
    // 64 cells from 1: six rounds of 8 h. Best generalist of linear returns: z = 1/2, V = 1/2,
    // hazard 0.01 per h.
    let times = |overrides: &[&str]| {
        let settings = settings(overrides);
        Outlook::of(&settings, &Selection::of(&settings), 1).time
    };
    assert_relative_eq!(times(&[]).growth_h, 48.0);
    assert_relative_eq!(times(&[]).generation_h, 148.0, max_relative = 1e-9);
    let sized = |n: &str, p: &str| times(&[n, p]).growth_h;
    assert_relative_eq!(sized("body.adult_cells=65", "life.propagule_cells=1"), 56.0);
    assert_relative_eq!(sized("body.adult_cells=64", "life.propagule_cells=64"), 0.0);
    assert_relative_eq!(sized("body.adult_cells=9", "life.propagule_cells=4"), 16.0);
    // Only viability at the surface: half of it is lost where half of the cells are interior.
    let set = ["body.adult_cells=512", "returns.viability.interior_effect=0"];
    let interior = compact_interior_share(512);
    let set = settings(&set);
    let selection = Selection::of(&set);
    let hazard = 0.005 / ((1.0 - interior) * selection.soma_share);
    // Two samples of bodies, grown and founded: their shares of interior cells differ by chance.
    assert_relative_eq!(selection.generation_h, 72.0 + 1.0 / hazard, max_relative = 0.01);
}

#[test]
fn supply_and_cost_are_products() {
    let outlook = Outlook::of(&settings(&["run.generations=100"]), &selection(9.0, &[]), 2);
    // Baseline, noise and its bias, each 256 x 0.1.
    assert_relative_eq!(outlook.mutations_per_generation, 76.8);
    assert_relative_eq!(outlook.cost.cell_lives, 256.0 * 64.0 * 100.0 * 8.0);
    assert_relative_eq!(outlook.cost.seconds, outlook.cost.cell_lives / 2e7);
    // Ticks of a millionth of a generation take time of their own.
    let ticking = settings(&["run.generations=100", "run.tick_h=148e-6"]);
    let slower = Outlook::of(&ticking, &selection(9.0, &[]), 2);
    let ticks = slower.cost.seconds - outlook.cost.seconds;
    assert!(ticks > outlook.cost.seconds, "{ticks} s");
    // Local support and fields slow a run down.
    let local = settings(&["run.generations=100", "support.leak=0"]);
    assert!(Outlook::of(&local, &selection(9.0, &[]), 2).cost.seconds > outlook.cost.seconds);
}

/// Adults live for 100 h of the generation of 148 h, so that 0.02 per h replaces each cell twice; half of
/// the draws of luck come out as they were, and so does a quarter of the labels.
#[test]
fn replacements_are_births_that_take_time() {
    let cost = |overrides: &[&str]| {
        let overrides = [&["run.generations=100", "run.replicates=1"], overrides].concat();
        Outlook::of(&settings(&overrides), &selection(9.0, &[]), 1).cost
    };
    let (still, grown) = (cost(&[]), 256.0 * 64.0 * 100.0);
    let extra = |cues: &str, local: bool| {
        let cues = format!("traits.cues=[{cues}]");
        let with = if local { vec!["support.leak=0", &cues] } else { vec![cues.as_str()] };
        let found = cost(&[&with[..], &["budget.turnover_per_h=0.02"]].concat());
        assert_relative_eq!(found.cell_lives, 3.0 * grown);
        (found.seconds - cost(&with).seconds) / (2.0 * grown)
    };
    assert_relative_eq!(still.cell_lives, grown);
    assert_relative_eq!(extra("'exposure'", true), 1e-7, max_relative = 1e-9);
    assert_relative_eq!(extra("'noise'", false), 1e-7 + 32.0 * 1e-8, max_relative = 1e-9);
    let all = "'noise','lineage','exposure'";
    assert_relative_eq!(extra(all, true), 1e-7 + 56.0 * 1.1e-7, max_relative = 1e-9);
    // Where the generalist never dies or never grows up no generation passes, so nothing is added.
    let endless = Selection { generation_h: f64::INFINITY, ..selection(9.0, &[]) };
    let turning = settings(&["budget.turnover_per_h=0.02"]);
    let never = Outlook::of(&turning, &endless, 1).cost;
    assert_eq!(never, Outlook::of(&settings(&[]), &endless, 1).cost);
}

/// A tax on responsiveness decides who starves where upkeep must be met from what fields leave.
#[test]
fn developments_that_cannot_be_shared_take_time() {
    let seconds = |overrides: &[&str]| {
        let fed = ["run.generations=100", "nutrient.exchange=1"];
        let settings = settings(&[&fed[..], overrides].concat());
        let cost = Outlook::of(&settings, &selection(9.0, &[]), 1).cost;
        cost.seconds / cost.cell_lives
    };
    let (tax, upkeep) = ("traits.cost_per_unit=0.01", "budget.upkeep_eu_per_h=0.1");
    let shared = seconds(&[]);
    assert!(shared < 1e-6, "{shared}");
    assert_relative_eq!(seconds(&[tax]), shared);
    assert_relative_eq!(seconds(&[upkeep]), shared);
    assert_relative_eq!(seconds(&[tax, upkeep, "traits.cues=[]"]), shared);
    assert_relative_eq!(seconds(&[tax, upkeep]), 5e-6);
}

#[test]
fn warnings_name_what_will_disappoint() {
    let calm = settings(&["body.adult_cells=100000", "habitat.sites=256"]);
    assert!(names(&calm, &selection(5.0, &[])).is_empty());
    assert_eq!(
        names(&settings(&["body.adult_cells=8", "traits.cues=['exposure']"]), &selection(5.0, &[])),
        ["no-interior-cell", "cue-cannot-vary", "small-body"]
    );
    assert_eq!(
        names(&settings(&[]), &selection(1.0, &[])),
        ["small-body", "generalist-cannot-persist"]
    );
    let short = settings(&["run.generations=20"]);
    assert_eq!(names(&short, &selection(5.0, &[])), ["small-body", "onset-cannot-be-confirmed"]);
}

#[test]
fn drift_and_time_are_weighed_only_where_a_cue_is_favoured() {
    let pull =
        |gradient, curvature, favoured| Pull { cue: Cue::Noise, gradient, curvature, favoured };
    let weigh = |pull| names(&settings(&[]), &selection(5.0, &[pull]));
    assert_eq!(weigh(pull(0.0, -1.0, false)), ["small-body"]);
    assert_eq!(weigh(pull(0.0, 1e-3, true)), ["small-body", "drift-dominates"]);
    assert_eq!(weigh(pull(0.0, 0.5, true)), ["small-body"]);
    let slow = settings(&["traits.mutation_probability=0.0001"]);
    let names = names(&slow, &selection(5.0, &[pull(0.0, 0.5, true)]));
    assert_eq!(names, ["small-body", "too-few-generations"]);
}

#[test]
fn growth_towards_a_goal_solves_its_equation() {
    // Gradient alone: distance over speed. Curvature alone: ln(goal/start) / (rate curvature).
    let pull = |gradient, curvature| Pull { cue: Cue::Noise, gradient, curvature, favoured: true };
    assert_relative_eq!(pull(0.5, 0.0).generations(0.0, 2.0, 0.1), 40.0);
    let expected = 10_f64.ln() / 0.05;
    assert_relative_eq!(pull(0.0, 0.5).generations(0.2, 2.0, 0.1), expected, max_relative = 1e-12);
}
