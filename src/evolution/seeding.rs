//! From a scenario's seed to each replicate's random numbers.
//!
//! `mix(x)` is the first output of `SplitMix64` (Steele, Lea & Flood 2014) started at state x. A
//! replicate's seed is `mix(mix(mix(seed) ^ point) ^ replicate)`; its generator is xoshiro256++
//! (Blackman & Vigna 2021), whose 256 bits of state are four outputs of `SplitMix64` started at that
//! seed. Nothing is ever drawn from the operating system.

use rand::{Rng, SeedableRng};
use rand_xoshiro::{SplitMix64, Xoshiro256PlusPlus};

/// Seed of one replicate of one point of a scenario; a plain run is point 0.
#[must_use]
pub fn replicate_seed(scenario_seed: u64, point: u64, replicate: u64) -> u64 {
    mix(mix(mix(scenario_seed) ^ point) ^ replicate)
}

/// The generator of a replicate with that seed.
#[must_use]
pub fn generator(replicate_seed: u64) -> Xoshiro256PlusPlus {
    Xoshiro256PlusPlus::seed_from_u64(replicate_seed)
}

fn mix(state: u64) -> u64 {
    SplitMix64::from_seed(state.to_le_bytes()).next_u64()
}
