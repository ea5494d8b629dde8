//! Rate of evolution under a constant selection gradient, mutations being rare (N mu <= 0.02).
//!
//! Canonical equation (Dieckmann & Law 1996): `dg/dt = (1/2) N mu sigma^2 beta` per generation, beta
//! the gradient of ln R0. It takes small steps, a large N and a fixation probability that is
//! linear in the advantage. Without these, mutations fix one by one at
//! `dg/dt = N mu E[ step rho(step) ]`, rho being the exact fixation probability of one mutant.

use super::simulation_support::{
    DeathBirth, assert_agrees, lottery, mean_and_error, moran_fixation, population, power, size,
    trials,
};
use somadawn::scenario::Settings;
use somadawn::world::Population;

/// `E[x rho(exp(beta sigma x))] / (beta sigma)`, x standard normal: the rate over `N mu sigma^2 beta`,
/// which the canonical equation takes for 1/2. Trapezoid rule over +-9, exact to rounding.
fn rate_factor(sigma_beta: f64, rho: impl Fn(f64) -> f64) -> f64 {
    let step = 0.01;
    let mean: f64 = (-900..=900)
        .map(|k| {
            let x = f64::from(k) * step;
            x * rho((sigma_beta * x).exp()) * (-0.5 * x * x).exp()
        })
        .sum();
    mean * step / (2.0 * std::f64::consts::PI).sqrt() / sigma_beta
}

/// Outside values: the factor of the plain Moran process, Gaussian steps.
#[test]
fn the_substitution_integral_agrees_with_known_factors() {
    for (sites, sigma_beta, factor) in [
        (20.0, 0.05, 0.469_803_32),
        (100.0, 0.001, 0.494_987_76),
        (100.0, 0.01, 0.493_864_72),
        (100.0, 0.05, 0.480_510_13),
    ] {
        let found = rate_factor(sigma_beta, |r| moran_fixation(r, 1.0, sites));
        approx::assert_relative_eq!(found, factor, max_relative = 1e-7);
    }
}

/// For small steps the life cycle's factor is (N-2)/(2N), the canonical equation's 1/2 for large N: beta
/// times the variance among the N-1 possible parents of a vacancy, which at neutrality is
/// (N-2)/(N-1) of the (N-1) Vm / 2 of all N.
#[test]
fn the_life_cycle_obeys_the_canonical_equation_for_large_populations() {
    for sites in [10_u32, 100, 1000] {
        let n = f64::from(sites);
        let exact = |r| DeathBirth::exact(sites, r, 1.0).fixation(1);
        let factor = rate_factor(1e-4 / n, exact);
        approx::assert_relative_eq!(factor, 0.5 * (n - 2.0) / n, max_relative = 1e-5);
    }
}

const SITES: u32 = 6;
const PROBABILITY: f64 = 0.02 / SITES as f64;
const BURN_IN: f64 = 40.0;
const GENERATIONS: f64 = 200.0;

/// Change of the mean baseline per generation, once mutations have had time to fix.
///
/// Far above 0 the germ share is `exp(-g0)`, so that ln B falls by `exponent` per unit of g0 wherever
/// g0 is (to 1e-4 at g0 = 9).
fn rate_of_change(settings: &Settings, seed: u64) -> f64 {
    let mut population = population(settings, seed, |_| START);
    let before = mean_at(&mut population, BURN_IN);
    let after = mean_at(&mut population, BURN_IN + GENERATIONS);
    assert!(after > 9.0, "too far down for a constant gradient: {after}");
    (after - before) / GENERATIONS
}

const START: f64 = 18.0;

fn mean_at(population: &mut Population, generation: f64) -> f64 {
    while population.clock().generation < generation {
        population.tick();
    }
    let values: Vec<f64> = population.genotypes().map(|g| g.programme.baseline).collect();
    values.iter().sum::<f64>() / values.len() as f64
}

#[test]
fn a_trait_under_selection_evolves_at_the_rate_of_the_canonical_equation() {
    let (gradient, sd) = (0.8, 0.5);
    let mut settings = lottery(SITES as usize);
    settings.returns.fecundity = power(gradient);
    settings.life.propagule_cost_eu = (-gradient * START).exp();
    settings.traits.mutation_probability = PROBABILITY;
    settings.traits.mutation_sd = sd;
    settings.traits.bound = 50.0;
    let rates = trials(301, size(1_500, 20_000), |seed| rate_of_change(&settings, seed));
    let (mean, error) = mean_and_error(&rates);
    let canonical = -f64::from(SITES) * PROBABILITY * sd * sd * gradient;
    let factor = (mean / canonical, error / canonical.abs());
    let exact = rate_factor(sd * gradient, |r| DeathBirth::batched(SITES, r, 1.0).fixation(1));
    assert_agrees("rate / (N mu sigma^2 beta)", factor, exact, 0.06);
}
