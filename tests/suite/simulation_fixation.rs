//! Who takes over: neutral founders alike, fitter types as the death-birth Moran process says.
//!
//! The life cycle, with adults that die at a constant hazard and sites refilled by lottery from
//! propagules of the living, is a Moran process in continuous time in which the dead parent cannot
//! refill its own site. Ticks let it do so once in 10 N, which the oracle knows. What it does not know
//! is too small to be seen here: since stocks release at regular intervals, the first of a few
//! releases is a little more often than its share that of the more fecund type (by summing over the
//! phases of the stocks: 0.3096 instead of 0.3080 for a fecundity of 1.5 at N = 10, less for larger N).

use statrs::distribution::{ChiSquared, ContinuousCDF};

use super::simulation_support::{
    DeathBirth, assert_agrees, flat, lottery, mean_and_error, moran_fixation, own_refills,
    population, power, size, trials,
};
use somadawn::scenario::Settings;
use somadawn::world::Population;

const SITES: u32 = 10;

/// Runs until one founder line is left: which one, and the generation.
pub(crate) fn last_line(
    settings: &Settings,
    seed: u64,
    baseline: impl Fn(u32) -> f64,
) -> (u32, f64) {
    let mut population = population(settings, seed, baseline);
    loop {
        until_settlement(&mut population);
        let generation = population.clock().generation;
        let mut lines = population.genotypes().map(|genotype| genotype.founder);
        let Some(first) = lines.next() else { continue };
        if lines.all(|line| line == first) {
            return (first, generation);
        }
    }
}

/// Whether the founders on sites 0..`mutants` take over from the others.
fn takes_over(settings: &Settings, seed: u64, mutants: u32, baselines: [f64; 2]) -> bool {
    let mut population = population(settings, seed, |site| baselines[usize::from(site >= mutants)]);
    loop {
        until_settlement(&mut population);
        let mut winners = population.genotypes().map(|genotype| genotype.founder < mutants);
        let Some(first) = winners.next() else { continue };
        if winners.all(|winner| winner == first) {
            return first;
        }
    }
}

/// Each of N equally fit founders takes over with probability 1/N (Moran 1958), chi-square with
/// N - 1 degrees of freedom, false-alarm rate 1e-5; and this takes `(N-1)^2 / N` generations on
/// average where parent and victim are distinct (each pair of lines meets at `2 / (N (N-1))` per
/// birth), 8.1 for N = 10, not the N - 1 = 9 of a process where the victim may refill its site;
/// one birth in 10 N, the dead parent's own, changes nothing.
#[test]
fn equally_fit_founders_take_over_alike() {
    let settings = lottery(SITES as usize);
    let count = size(4_000, 40_000);
    let fixed = trials(101, count, |seed| last_line(&settings, seed, |_| 0.0));
    let mut winners = [0_u32; SITES as usize];
    for (line, _) in &fixed {
        winners[*line as usize] += 1;
    }
    let expected = f64::from(count) / f64::from(SITES);
    let chi2: f64 = winners.iter().map(|w| (f64::from(*w) - expected).powi(2) / expected).sum();
    let limit = ChiSquared::new(f64::from(SITES) - 1.0).expect("degrees").inverse_cdf(1.0 - 1e-5);
    assert!(chi2 < limit, "chi-square {chi2} over {limit}: {winners:?}");
    let generations: Vec<f64> = fixed.iter().map(|(_, generation)| *generation).collect();
    let n = f64::from(SITES);
    let distinct = (n - 1.0) * (n - 1.0) / n / (1.0 - own_refills(n));
    assert_agrees("generations to fixation", mean_and_error(&generations), distinct, 0.012);
}

/// Half of the founders, marked, take over in half of the trials: i/N (Moran 1958).
#[test]
fn half_of_the_founders_take_over_in_half_of_the_trials() {
    let settings = lottery(SITES as usize);
    let fixed = trials(102, size(4_000, 40_000), |seed| takes_over(&settings, seed, 5, [0.0, 0.0]));
    assert_agrees("5 of 10 marked", frequency(&fixed), 0.5, 0.02);
}

/// A mutant against residents: soma shares of both, and how far its odds are resolved.
struct Rivalry {
    mutant: f64,
    resident: f64,
    trials: u32,
    resolution: f64,
}

/// Simulated fixation of one mutant, where V = z (if `viability` pays) and B = 1 - z, against the
/// death-birth process with the ratios of fecundity and mortality that these imply.
fn check_takeover(seed: u64, viability_pays: bool, rivalry: &Rivalry) {
    let mut settings = lottery(SITES as usize);
    settings.returns.fecundity = power(1.0);
    settings.returns.viability = if viability_pays { power(1.0) } else { flat() };
    let baselines = [rivalry.mutant, rivalry.resident].map(logit);
    let fixed = trials(seed, size(rivalry.trials, 10 * rivalry.trials), |seed| {
        takes_over(&settings, seed, 1, baselines)
    });
    let mortality = if viability_pays { rivalry.resident / rivalry.mutant } else { 1.0 };
    let fecundity = (1.0 - rivalry.mutant) / (1.0 - rivalry.resident);
    let oracle = DeathBirth::batched(SITES, fecundity, mortality);
    let what = format!("fecundity x {fecundity:.3}, mortality x {mortality:.3}");
    assert_agrees(&what, frequency(&fixed), oracle.fixation(1), rivalry.resolution);
}

/// Mutants that differ in fecundity only.
#[test]
fn a_mutant_of_other_fecundity_takes_over_as_the_death_birth_process_says() {
    let fitter = Rivalry { mutant: 0.25, resident: 0.5, trials: 5_000, resolution: 0.025 };
    check_takeover(103, false, &fitter);
    let less_fit = Rivalry { mutant: 0.6, resident: 0.5, trials: 6_000, resolution: 0.08 };
    check_takeover(104, false, &less_fit);
}

/// Mutants that live longer or shorter as well, so that T+ and T- differ by deaths too.
#[test]
fn a_mutant_of_other_mortality_takes_over_as_the_death_birth_process_says() {
    let lavish = Rivalry { mutant: 0.5, resident: 0.7, trials: 5_000, resolution: 0.04 };
    check_takeover(105, true, &lavish);
    let frugal = Rivalry { mutant: 0.5, resident: 0.3, trials: 5_000, resolution: 0.04 };
    check_takeover(106, true, &frugal);
}

/// What the plain Moran formula with r = ratio of R0 misses at N = 10 (r = 1.5 by fecundity alone:
/// 0.339 for 0.308), and that the two agree as N grows, and exactly for types that are neutral or
/// differ in mortality only.
#[test]
fn the_death_birth_process_tends_to_the_plain_moran_form() {
    let apart = |sites: u32, fecundity: f64, mortality: f64| {
        let exact = DeathBirth::exact(sites, fecundity, mortality).fixation(1);
        exact / moran_fixation(fecundity / mortality, 1.0, f64::from(sites)) - 1.0
    };
    approx::assert_abs_diff_eq!(apart(10, 1.5, 1.0), -0.092, epsilon = 5e-4);
    for (fecundity, mortality) in [(1.5, 1.0), (0.9, 0.7), (2.0, 1.2)] {
        let gaps = [10, 100, 1000].map(|sites| apart(sites, fecundity, mortality).abs());
        assert!(gaps[1] < 0.15 * gaps[0] && gaps[2] < 0.15 * gaps[1], "{gaps:?}");
    }
    approx::assert_abs_diff_eq!(apart(10, 1.0, 0.8), 0.0, epsilon = 1e-12);
    for start in [1, 5] {
        let neutral = DeathBirth::exact(10, 1.0, 1.0).fixation(start);
        approx::assert_relative_eq!(neutral, f64::from(start) / 10.0, max_relative = 1e-12);
    }
}

/// The plain Moran formula against its table (linear solve of the chain, outside values).
#[test]
fn the_plain_moran_form_agrees_with_the_solved_chain() {
    for (sites, r, value) in [
        (10.0, 0.9, 0.059_482_214_754_2),
        (10.0, 1.1, 0.147_950_358_984),
        (10.0, 2.0, 0.500_488_758_553),
        (100.0, 1.01, 0.015_708_656_559_8),
    ] {
        approx::assert_relative_eq!(moran_fixation(r, 1.0, sites), value, max_relative = 1e-10);
    }
}

fn until_settlement(population: &mut Population) {
    let settled = population.ledger().settlements;
    while population.ledger().settlements == settled {
        population.tick();
    }
}

fn frequency(outcomes: &[bool]) -> (f64, f64) {
    let values: Vec<f64> = outcomes.iter().map(|yes| f64::from(u8::from(*yes))).collect();
    mean_and_error(&values)
}

fn logit(share: f64) -> f64 {
    (share / (1.0 - share)).ln()
}
