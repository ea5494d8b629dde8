//! What the tests that run the simulation share: sizes, small populations, estimates, oracles.

use rayon::prelude::*;
use somadawn::evolution::seeding::{generator, replicate_seed};
use somadawn::scenario::Settings;
use somadawn::theory::{CueSet, Programme, ReturnCurve, TaskReturn};
use somadawn::world::Population;
use somadawn::world::resources::Genotype;

/// `short` in everyday runs, `long` with `SOMADAWN_LONG=1`; assertions are the same.
pub(crate) fn size(short: u32, long: u32) -> u32 {
    if std::env::var("SOMADAWN_LONG").is_ok_and(|value| value == "1") { long } else { short }
}

/// Results of independent trials, run on all cores; trial i is seeded from (`seed`, i).
pub(crate) fn trials<T: Send>(seed: u64, count: u32, trial: impl Fn(u64) -> T + Sync) -> Vec<T> {
    (0..count).into_par_iter().map(|i| trial(replicate_seed(seed, 0, u64::from(i)))).collect()
}

/// Mean and its standard error over independent values.
pub(crate) fn mean_and_error(values: &[f64]) -> (f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    let variance = values.iter().map(|x| (x - mean) * (x - mean)).sum::<f64>() / (n - 1.0);
    (mean, (variance / n).sqrt())
}

/// Asserts that an estimate lies within 4.5 standard errors of `expected` (a false alarm in 7e-6
/// of seeds) and that the error is at most `resolution` of `expected`, so that the check bites.
pub(crate) fn assert_agrees(what: &str, (mean, error): (f64, f64), expected: f64, resolution: f64) {
    let apart = (mean - expected) / error;
    let told = format!("{what}: {mean:.6} +- {error:.6}, expected {expected:.6} ({apart:+.2} SE)");
    assert!(error <= resolution * expected.abs(), "too noisy to tell: {told}");
    assert!(apart.abs() <= 4.5, "{told}");
}

/// A return curve that yields 1 whatever is invested.
pub(crate) fn flat() -> TaskReturn {
    let curve = ReturnCurve::table(&[[0.0, 1.0], [1.0, 1.0]]).expect("two points");
    TaskReturn { curve, surface_effect: 1.0, interior_effect: 1.0 }
}

/// The return `x^exponent` at every place.
pub(crate) fn power(exponent: f64) -> TaskReturn {
    let curve = ReturnCurve::power(exponent).expect("a positive exponent");
    TaskReturn { curve, surface_effect: 1.0, interior_effect: 1.0 }
}

/// Hours between two releases of a colony of fecundity 1 in [`lottery`].
const RELEASE_H: f64 = 1.0;

/// Colonies of one cell that never grow, all equally fit, on `sites` sites: adults die at 1e-4 per
/// hour and release a propagule per hour, so that a vacancy is filled again within about an hour of
/// a life of 10,000. Settlement is then a death-birth Moran process (Moran 1958) in continuous time.
pub(crate) fn lottery(sites: usize) -> Settings {
    let mut settings = Settings::example("lottery for sites");
    settings.habitat.sites = sites;
    settings.body.adult_cells = 1;
    settings.life.propagule_cells = 1;
    settings.life.propagule_cost_eu = RELEASE_H;
    settings.life.adult_hazard_per_h = 1e-4;
    settings.life.extrinsic_hazard_per_h = 0.0;
    settings.life.juvenile_hazard_per_h = 0.0;
    settings.budget.income_eu_per_h = 1.0;
    settings.returns.viability = flat();
    settings.returns.fecundity = flat();
    settings.traits.cues = CueSet::EMPTY;
    settings.traits.mutation_probability = 0.0;
    settings.traits.cost_per_unit = 0.0;
    settings
}

/// Ticks for [`lottery`], short beside the hour that a refill takes.
pub(crate) const TICK_H: f64 = RELEASE_H / 5.0;

/// Share of vacancies that the dead parent refills: propagules that it released in the tick of its
/// death, before it died, find its own site empty. They are `TICK_H / (2 RELEASE_H)` on average, and each
/// lands there with probability 1/N.
pub(crate) fn own_refills(sites: f64) -> f64 {
    0.5 * TICK_H / RELEASE_H / sites
}

/// A population whose site s starts with baseline `baseline(s)`, marked as founder s.
pub(crate) fn population(
    settings: &Settings,
    seed: u64,
    baseline: impl Fn(u32) -> f64,
) -> Population {
    Population::founded(settings, TICK_H, generator(seed), |site| {
        Genotype::of_founder(Programme::generalist(baseline(site)), site)
    })
}

/// Death-birth Moran process with two types.
///
/// With i mutants of N, deaths at `d_m`, `d_r` per head and fecundities `f_m`, `f_r`, where the dead count
/// with a weight w among the parents of those who refill their site:
/// `T+(i) = d_r (N-i) i f_m / (i f_m + (N-i-1+w) f_r)`, `T-(i) = d_m i (N-i) f_r / ((i-1+w) f_m + (N-i) f_r)`.
/// In continuous time w is 0: parent and victim are distinct. (With w = 1 it is the plain form.)
#[derive(Debug, Clone, Copy)]
pub(crate) struct DeathBirth {
    pub(crate) sites: u32,
    /// Fecundity of the mutant over the resident's.
    pub(crate) fecundity: f64,
    /// Death rate of the mutant over the resident's.
    pub(crate) mortality: f64,
    /// Weight of the dead.
    pub(crate) dead: f64,
}

impl DeathBirth {
    /// The process in continuous time.
    pub(crate) const fn exact(sites: u32, fecundity: f64, mortality: f64) -> Self {
        Self { sites, fecundity, mortality, dead: 0.0 }
    }

    /// The process as batched by [`TICK_H`].
    pub(crate) fn batched(sites: u32, fecundity: f64, mortality: f64) -> Self {
        let n = f64::from(sites);
        Self { dead: own_refills(n) * (n - 1.0), ..Self::exact(sites, fecundity, mortality) }
    }

    /// Probability that `start` mutants take over, by the product formula for birth-death chains
    /// (Ewens 2004): `sum_{k<i} prod_{j<=k} T-(j)/T+(j) / sum_{k<N} (the same)`.
    pub(crate) fn fixation(self, start: u32) -> f64 {
        let (n, f, dead) = (f64::from(self.sites), self.fecundity, self.dead);
        let (mut product, mut sum, mut reached) = (1.0, 1.0, 1.0);
        for j in 1..self.sites {
            let i = f64::from(j);
            let up = (n - i) * i * f / (i * f + (n - i - 1.0 + dead));
            let down = self.mortality * i * (n - i) / ((i - 1.0 + dead) * f + (n - i));
            product *= down / up;
            sum += product;
            if j < start {
                reached += product;
            }
        }
        reached / sum
    }
}

/// Fixation in the plain Moran process, `(1 - r^-i) / (1 - r^-N)` (Moran 1958; Ewens 2004).
pub(crate) fn moran_fixation(r: f64, start: f64, sites: f64) -> f64 {
    if (r - 1.0).abs() < 1e-12 {
        return start / sites;
    }
    (1.0 - r.powf(-start)) / (1.0 - r.powf(-sites))
}
