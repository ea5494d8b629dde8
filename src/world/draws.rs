//! Random draws that several mechanisms make, the same on every machine.

use rand::{Rng, RngExt};

use crate::theory::reaction_norm::NOISE_BIAS_BOUND;
use crate::theory::{Cue, Programme};
use crate::tissue::standard_normal;

use crate::scenario::settings::Traits;

/// An exponential deviate of mean 1.
pub fn exponential(rng: &mut impl Rng) -> f64 {
    // 1 - u lies in (0, 1].
    -libm::log(1.0 - rng.random::<f64>())
}

/// How many trials it takes to the first success, each of chance `p` in (0, 1]: at least 1.
pub fn geometric(p: f64, rng: &mut impl Rng) -> f64 {
    (exponential(rng) / -libm::log1p(-p)).ceil().max(1.0)
}

/// `value` folded back into `[-bound, bound]` at both walls.
#[must_use]
pub fn reflected(value: f64, bound: f64) -> f64 {
    if value.abs() <= bound {
        return value;
    }
    let period = 4.0 * bound;
    let phase = libm::fmod(value + bound, period);
    let phase = if phase < 0.0 { phase + period } else { phase };
    if phase <= 2.0 * bound { phase - bound } else { 3.0 * bound - phase }
}

/// A propagule's programme: each trait of its parent's mutates with `mutation_probability` by a
/// normal step of `mutation_sd`, reflected at the trait's bounds.
///
/// Traits are the baseline, the responsiveness to each cue in use and, with the noise cue, its bias.
pub fn mutated(parent: &Programme, traits: &Traits, rng: &mut impl Rng) -> Programme {
    let mut child = *parent;
    let mut mutate = |value: &mut f64, bound: f64| {
        if rng.random::<f64>() < traits.mutation_probability {
            let step: f64 = standard_normal(rng);
            *value = reflected(*value + traits.mutation_sd * step, bound);
        }
    };
    mutate(&mut child.baseline, traits.bound);
    for cue in traits.cues.iter() {
        mutate(&mut child.responsiveness[cue.index()], traits.bound);
    }
    if traits.cues.contains(Cue::Noise) {
        mutate(&mut child.noise_bias, NOISE_BIAS_BOUND);
    }
    child
}

/// Index of an item drawn with probability proportional to its weight; the weights sum to `total` > 0
/// up to rounding.
pub fn weighted_index<T>(
    items: &[T],
    weight: impl Fn(&T) -> f32,
    total: f64,
    rng: &mut impl Rng,
) -> usize {
    const BLOCK: usize = 32;
    let mut left = rng.random::<f64>() * total;
    for (block, chunk) in items.chunks(BLOCK).enumerate() {
        let in_block = f64::from(chunk.iter().map(&weight).sum::<f32>());
        if left < in_block {
            for (offset, item) in chunk.iter().enumerate() {
                left -= f64::from(weight(item));
                if left < 0.0 {
                    return block * BLOCK + offset;
                }
            }
        }
        left -= in_block;
    }
    // Rounding can leave a crumb at the end: it falls to the last item with any weight.
    items.iter().rposition(|item| weight(item) > 0.0).unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::SeedableRng;
    use rand_xoshiro::Xoshiro256PlusPlus;

    #[test]
    fn reflection_folds_at_both_walls() {
        for (value, folded) in
            [(0.3, 0.3), (1.2, 0.8), (-1.2, -0.8), (3.5, -0.5), (5.0, 1.0), (-7.25, 0.75)]
        {
            approx::assert_abs_diff_eq!(reflected(value, 1.0), folded, epsilon = 1e-12);
        }
    }

    #[test]
    #[expect(clippy::float_cmp, reason = "waiting times are whole numbers")]
    fn waiting_times_are_geometric() {
        // 100,000 draws of chance 0.3: shares of 1, 2, 3 and more trials within 4.9 standard errors.
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(6);
        let draws: Vec<f64> = (0..100_000).map(|_| geometric(0.3, &mut rng)).collect();
        for (trials, p) in [(1.0, 0.3), (2.0, 0.21), (3.0, 0.147), (7.0, 0.035_294_7)] {
            let share = draws.iter().filter(|draw| **draw == trials).count() as f64 / 1e5;
            let error: f64 = (p * (1.0 - p) / 1e5_f64).sqrt();
            assert!((share - p).abs() < 4.9 * error, "{trials}: {share}");
        }
        assert!((0..1000).all(|_| geometric(1.0, &mut rng) == 1.0));
    }

    #[test]
    fn weighted_draws_follow_their_weights() {
        // 100,000 draws; 4.9 standard errors of each frequency (false alarm about 1e-6 a cell).
        let weights: Vec<f32> = (0..70).map(|i| if i % 3 == 0 { 0.0 } else { i as f32 }).collect();
        let total: f64 = weights.iter().map(|w| f64::from(*w)).sum();
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(4);
        let mut counts = [0_u32; 70];
        for _ in 0..100_000 {
            counts[weighted_index(&weights, |w| *w, total, &mut rng)] += 1;
        }
        for (count, weight) in counts.iter().zip(&weights) {
            let p = f64::from(*weight) / total;
            let error = (p * (1.0 - p) / 100_000.0).sqrt();
            assert!((f64::from(*count) / 100_000.0 - p).abs() <= 4.9 * error);
        }
    }
}
