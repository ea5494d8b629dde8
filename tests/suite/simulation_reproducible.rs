//! The same scenario and seed give the same records, whatever the threads, today and tomorrow.

use std::sync::atomic::AtomicBool;

use somadawn::evolution::Replicate;
use somadawn::record::{ReplicateRecord, Stage};
use somadawn::scenario::Settings;
use somadawn::scenario::settings::{Layout, Nutrient, Support, Waste};
use somadawn::study::run::{Replicates, Unwatched};
use somadawn::study::start;
use somadawn::theory::{Cue, CueSet};

/// All cues, varied division costs, every hazard: a short run in which each draw is made.
fn scenario() -> Settings {
    let mut settings = Settings::example("everything at once");
    settings.seed = 2_024;
    settings.habitat.sites = 40;
    settings.body.adult_cells = 30;
    settings.life.propagule_cells = 2;
    settings.life.extrinsic_hazard_per_h = 0.001;
    settings.life.juvenile_hazard_per_h = 0.001;
    settings.budget.division_cv = 0.2;
    settings.returns.viability.interior_effect = 0.5;
    settings.traits.cues = CueSet::EMPTY.with(Cue::Noise).with(Cue::Lineage).with(Cue::Exposure);
    settings.traits.mutation_probability = 0.2;
    settings.traits.cost_per_unit = 0.01;
    settings.run.generations = 30;
    settings.run.census_every = 5;
    settings.run.replicates = 9;
    settings
}

/// The same with all that space adds: fields, hunger, local support, replaced cells, a torus, and a tax
/// by which colonies differ in how they grow.
fn scenario_in_space() -> Settings {
    let mut settings = scenario();
    settings.habitat.sites = 36;
    settings.habitat.layout = Layout::Torus { dispersal_sites: 1.2 };
    settings.budget.upkeep_eu_per_h = 0.3;
    settings.budget.turnover_per_h = 0.002;
    settings.support = Some(Support { range_diameters: 1.5, leak: 0.1 });
    settings.nutrient = Some(Nutrient {
        bath_mm: 0.05,
        half_saturation_mm: 0.02,
        uptake_fmol_per_h: 900.0,
        diffusivity_um2_per_s: 500.0,
        exchange: 0.8,
    });
    settings.waste = Some(Waste {
        release_fmol_per_h: 100.0,
        diffusivity_um2_per_s: 500.0,
        toxic_mm: 0.05,
        exchange: 0.8,
    });
    settings.traits.cues = settings.traits.cues.with(Cue::Income);
    settings.run.generations = 15;
    settings
}

pub(crate) fn records(settings: &Settings, threads: usize) -> Vec<ReplicateRecord> {
    let numbers: Vec<u32> = (0..settings.run.replicates).collect();
    let stop = AtomicBool::new(false);
    let mut records = Vec::new();
    Replicates { settings, start: start(settings), threads, stop: &stop, watcher: &Unwatched }
        .run(&numbers, |record| {
            records.push(record);
            Ok(())
        })
        .expect("threads can be had and nothing is written");
    records.sort_by_key(|record| record.row.replicate);
    records
}

/// Rows, censuses and sampled bodies, compared in full.
#[test]
fn records_do_not_depend_on_the_number_of_threads() {
    for settings in [scenario(), scenario_in_space()] {
        let alone = records(&settings, 1);
        assert_eq!(alone.len(), 9);
        assert!(alone.iter().all(|record| record.census.len() >= 3 && !record.bodies.is_empty()));
        for threads in [2, 7] {
            assert!(records(&settings, threads) == alone, "{threads} threads change the outcome");
        }
        assert!(alone[0].census != alone[1].census, "replicates are all the same");
    }
}

/// Whoever asks a replicate to stop may let it go on: it then leaves what it leaves undisturbed. Of 1,000
/// censuses several fall due just as it asks whether to stop.
#[test]
fn a_replicate_told_to_stop_again_and_again_passes_no_census_over() {
    let mut settings = Settings::example("interrupted");
    settings.habitat.sites = 16;
    settings.body.adult_cells = 2;
    settings.run.generations = 1000;
    settings.run.census_every = 20;
    let start = start(&settings);
    for number in 0..20 {
        let whole = Replicate::found(&settings, start, number);
        let halting = Replicate::found(&settings, start, number);
        let [whole, halting] = [(whole, false), (halting, true)].map(|(mut replicate, stop)| {
            while !replicate.is_over() {
                replicate.advance(|| stop);
            }
            replicate.finish()
        });
        assert!(whole == halting, "replicate {number}");
    }
}

/// Value stability: what these seeds gave when the test was written. A change that alters them alters
/// results of every run, and is to be named in the changelog.
#[test]
fn values_of_fixed_seeds_are_pinned() {
    let settings = scenario();
    let found: Vec<String> = records(&settings, 2).iter().take(2).map(digest).collect();
    insta::assert_snapshot!(found.join("\n"));
}

#[test]
fn values_of_fixed_seeds_in_space_are_pinned() {
    let settings = scenario_in_space();
    let found: Vec<String> = records(&settings, 2).iter().take(2).map(digest).collect();
    insta::assert_snapshot!(found.join("\n"));
}

/// The last census and the first body of a replicate, every digit.
fn digest(record: &ReplicateRecord) -> String {
    let last = record.census.last().expect("a census");
    let end = record.bodies.iter().filter(|body| body.stage == Stage::End);
    let cells: Vec<String> = end
        .take(5)
        .map(|c| format!("  {} {} {} {}", c.x_um, c.y_um, c.soma_share, c.label))
        .collect();
    format!(
        "replicate {}, seed {}\nend {:?} h {:?}\nD {:?} mean z {:?}\nparental age {:?}\n\
         traits {:?}\nvariances {:?}\nfitness {:?}\n{}",
        record.row.replicate,
        record.row.seed,
        record.row.end_generation,
        last.time_h,
        record.row.division_index,
        last.mean_soma_share,
        last.parental_age_h,
        last.trait_mean,
        last.trait_variance,
        record.row.mean_fitness,
        cells.join("\n"),
    )
}
