//! A torus on which propagules land anywhere, by a kernel or without one, is a mixed habitat: drift, fixation, parental age; and runs on a
//! torus are the same whatever the threads.

use statrs::distribution::{ChiSquared, ContinuousCDF};

use super::simulation_drift::{mean_variance, run_to};
use super::simulation_fixation::last_line;
use super::simulation_reproducible::records;
use super::simulation_support::{
    assert_agrees, lottery, mean_and_error, own_refills, population, size, trials,
};
use somadawn::scenario::Settings;
use somadawn::scenario::settings::Layout;
use somadawn::theory::{Cue, CueSet};

/// [`lottery`] on a torus.
pub(crate) fn torus(sites: usize, dispersal_sites: f64) -> Settings {
    let mut settings = lottery(sites);
    settings.habitat.layout = Layout::Torus { dispersal_sites };
    settings
}

/// Wider than any torus here: propagules land as in a mixed habitat.
const ENDLESS: f64 = 1e6;

/// Spread over the side at which sites' chances are alike to 1e-14, but propagules still land by the kernel
/// (from 1.3 on they do as in a mixed habitat).
const WIDEST: f64 = 1.29;

/// `E[S^2] = (N - 1) Vm / 2` as in a mixed habitat (Moran's process with distinct parent and victim, see
/// `simulation_drift`).
#[test]
fn a_neutral_trait_varies_as_in_a_mixed_habitat() {
    let habitat = torus(16, 4.0 * WIDEST);
    let means = trials(211, size(80, 800), |seed| mean_variance(&habitat, 1.0, 40, seed));
    let n = habitat.habitat.sites as f64;
    let expected = (n - 1.0) / 2.0 / (1.0 - own_refills(n));
    assert_agrees("S^2 / Vm", mean_and_error(&means), expected, 0.04);
}

/// Each founder takes over with probability 1/N (chi-square, level 1e-5), after `(N-1)^2 / N` generations
/// on average.
#[test]
fn founders_take_over_as_in_a_mixed_habitat() {
    let habitat = torus(9, 3.0 * WIDEST);
    let count = size(3_000, 30_000);
    let fixed = trials(212, count, |seed| last_line(&habitat, seed, |_| 0.0));
    let mut winners = [0_u32; 9];
    for (line, _) in &fixed {
        winners[*line as usize] += 1;
    }
    let expected = f64::from(count) / 9.0;
    let chi2: f64 = winners.iter().map(|w| (f64::from(*w) - expected).powi(2) / expected).sum();
    let limit = ChiSquared::new(8.0).expect("degrees").inverse_cdf(1.0 - 1e-5);
    assert!(chi2 < limit, "chi-square {chi2} over {limit}: {winners:?}");
    let generations: Vec<f64> = fixed.iter().map(|(_, generation)| *generation).collect();
    let distinct = 64.0 / 9.0 / (1.0 - own_refills(9.0));
    assert_agrees("generations to fixation", mean_and_error(&generations), distinct, 0.015);
}

/// Adults die at a constant hazard of 1e-4 per h and are equally fecund whatever their age, so parents are
/// as old as the living, 10,000 h on average; where their propagules land does not matter.
#[test]
fn parents_are_as_old_as_the_living_however_far_propagules_land() {
    for (seed, sd) in [(213, ENDLESS), (214, 1.0)] {
        let habitat = torus(49, sd);
        let ages = trials(seed, size(60, 600), |seed| {
            let mut population = population(&habitat, seed, |_| 0.0);
            run_to(&mut population, 20.0);
            population.take_parental_age_h();
            run_to(&mut population, 60.0);
            population.take_parental_age_h().expect("settlements")
        });
        assert_agrees(&format!("sd {sd}"), mean_and_error(&ages), 1e4, 0.01);
    }
}

/// All cues, bodies of many cells: every draw of a run on a torus.
#[test]
fn records_on_a_torus_do_not_depend_on_the_number_of_threads() {
    let mut settings = Settings::example("threads on a torus");
    settings.seed = 77;
    settings.habitat.sites = 64;
    settings.habitat.layout = Layout::Torus { dispersal_sites: 1.2 };
    settings.body.adult_cells = 16;
    settings.life.juvenile_hazard_per_h = 0.001;
    settings.traits.cues = CueSet::EMPTY.with(Cue::Noise).with(Cue::Lineage).with(Cue::Exposure);
    settings.traits.mutation_probability = 0.2;
    settings.run.generations = 30;
    settings.run.census_every = 5;
    settings.run.replicates = 6;
    let alone = records(&settings, 1);
    assert!(records(&settings, 2) == alone, "2 threads change the outcome");
    let last = alone[0].census.last().expect("a census");
    assert!(last.relatedness.iter().all(Option::is_some), "{last:?}");
    assert!(alone[0].census != alone[1].census, "replicates are all the same");
    settings.habitat.layout = Layout::Mixed;
    let mixed = records(&settings, 2);
    let all = mixed.iter().flat_map(|record| &record.census);
    assert!(all.clone().all(|row| row.relatedness == [None; 4]));
    assert!(
        all.clone().all(|row| row.adult_cells.is_none_or(|cells| (cells - 16.0).abs() < 1e-12))
    );
}
