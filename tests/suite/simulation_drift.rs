//! Mutation and drift of an unbounded, neutral trait: the variance the life cycle holds.
//!
//! Each birth mutates with probability mu by a step of variance sigma^2, `Vm = mu sigma^2`. Under
//! Moran's death-birth process with distinct parent and victim `E[S^2] = (N-1) Vm / 2` (S^2 with divisor
//! N - 1): with W the mean squared difference of two colonies, a birth replaces one of a pair with
//! probability 2/N, which then differs by Vm plus what two others differ, unless its parent is the
//! pair's other one: `W = (1 - 2/N) W + (2/N) [Vm + (N-2)/(N-1) W]`. Wright and Fisher's form, N Vm,
//! is about twice that (Lynch & Hill 1986 give its diploid kin); the victim as a possible parent
//! would make it N Vm / 2. The dead parent refills its site once in 10 N here, by its last propagules of the
//! tick, whence a factor `1 / (1 - 1/(10 N))`.

use super::simulation_support::{
    assert_agrees, lottery, mean_and_error, own_refills, population, size, trials,
};
use somadawn::scenario::Settings;
use somadawn::world::Population;

const SD: f64 = 0.02;

/// Mean of S^2 / Vm over `samples` censuses, N generations apart, of one population at equilibrium,
/// which takes of the order of N generations to reach: 6 N are passed first. `habitat` is a lottery.
pub(crate) fn mean_variance(habitat: &Settings, probability: f64, samples: u32, seed: u64) -> f64 {
    let mut settings = habitat.clone();
    settings.traits.mutation_probability = probability;
    settings.traits.mutation_sd = SD;
    settings.traits.bound = 50.0;
    let mut population = population(&settings, seed, |_| 0.0);
    let between = settings.habitat.sites as f64;
    let sum: f64 = (0..samples)
        .map(|sample| {
            run_to(&mut population, (f64::from(sample) + 6.0) * between);
            variance(&mut population)
        })
        .sum();
    sum / f64::from(samples) / (probability * SD * SD)
}

pub(crate) fn run_to(population: &mut Population, generation: f64) {
    while population.clock().generation < generation {
        population.tick();
    }
}

/// S^2 of the baseline over the colonies alive, divisor N - 1.
fn variance(population: &mut Population) -> f64 {
    let values: Vec<f64> = population.genotypes().map(|g| g.programme.baseline).collect();
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    values.iter().map(|x| (x - mean) * (x - mean)).sum::<f64>() / (n - 1.0)
}

/// Means of independent populations give the error, since S^2 is correlated over N generations.
#[test]
fn a_neutral_trait_varies_as_moran_with_distinct_parents_says() {
    for (sites, probability, populations) in [(10, 1.0, 80), (10, 0.2, 80), (20, 1.0, 60)] {
        let count = size(populations, 10 * populations);
        let means =
            trials(201, count, |seed| mean_variance(&lottery(sites), probability, 50, seed));
        let n = sites as f64;
        let expected = (n - 1.0) / 2.0 / (1.0 - own_refills(n));
        let what = format!("S^2 / Vm, N = {sites}, mu = {probability}");
        let (mean, error) = mean_and_error(&means);
        assert_agrees(&what, (mean, error), expected, 0.03);
        // 4.5 standard errors from the truth leaves Wright-Fisher more than 20 away.
        assert!(mean < 0.6 * sites as f64, "no longer told from N Vm: {mean} +- {error}");
    }
}
