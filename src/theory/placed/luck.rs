//! Which fates of a body's cells are looked at.

use rand::{Rng, RngExt, SeedableRng};
use rand_xoshiro::Xoshiro256PlusPlus;

/// Cells up to which all fates of a body are summed.
const SUMMED: usize = 8;
/// Cells whose fates a search draws in each of two mirrored halves, for all cells of a body and
/// all draws together; at least one draw of each half.
const SEARCHED: usize = 256;
/// The same for a sketch.
const SKETCHED: usize = 128;
/// The same for the last word.
const JUDGED: usize = 8192;
/// Fewest and most pairs of draws for the last word.
const JUDGED_PAIRS: (usize, usize) = (8, 256);

/// Seeds of draws for search and for judgement: they share none.
const SEARCH_SEED: u64 = 1 << 32;
const JUDGEMENT_SEED: u64 = 2 << 32;

/// Fates of a body's cells.
#[derive(Debug)]
pub(super) enum Luck {
    /// All fates, each with its probability.
    Every,
    /// Drawn ones: a uniform number u for each cell, one draw after the other. A cell reads +1 if
    /// u < p, and in the draw's mirror image if 1 - u < p: the same numbers for every programme, so
    /// that programmes differ by what they do and not by luck (common random numbers), in
    /// antithetic pairs (Hammersley & Morton 1956, Proc. Camb. Phil. Soc. 52:449).
    Drawn(Vec<f64>),
}

impl Luck {
    pub(super) fn for_searching(cells: usize, rank: u64) -> Self {
        Self::drawn(cells, (SEARCHED / cells.max(1)).max(1), SEARCH_SEED + rank)
    }

    pub(super) fn for_sketching(cells: usize, rank: u64) -> Self {
        Self::drawn(cells, (SKETCHED / cells.max(1)).max(1), SEARCH_SEED + rank)
    }

    pub(super) fn for_judging(cells: usize, rank: u64) -> Self {
        Self::drawn(cells, Self::pairs_judged(cells), JUDGEMENT_SEED + rank)
    }

    /// Fates of each body that are judged; none where all are.
    pub(super) fn fates_judged(cells: usize) -> Option<usize> {
        (cells > SUMMED).then(|| 2 * Self::pairs_judged(cells))
    }

    fn pairs_judged(cells: usize) -> usize {
        (JUDGED / cells.max(1)).clamp(JUDGED_PAIRS.0, JUDGED_PAIRS.1)
    }

    fn drawn(cells: usize, pairs: usize, seed: u64) -> Self {
        if cells <= SUMMED {
            return Self::Every;
        }
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(seed);
        Self::Drawn(uniforms(cells * pairs, &mut rng))
    }

    /// Shows every fate of `cells` cells, as which of them read +1, with its weight, for the
    /// probability `p` of +1; the weights sum to 1. Mirrored draws follow each other.
    pub(super) fn for_each(&self, cells: usize, p: f64, mut visit: impl FnMut(&[bool], f64)) {
        let mut plus = vec![false; cells];
        match self {
            Self::Every => {
                for fate in 0..1_u32 << cells {
                    let mut probability = 1.0;
                    for (cell, plus) in plus.iter_mut().enumerate() {
                        *plus = fate >> cell & 1 == 1;
                        probability *= if *plus { p } else { 1.0 - p };
                    }
                    visit(&plus, probability);
                }
            }
            Self::Drawn(uniforms) => {
                let draws = uniforms.chunks_exact(cells.max(1));
                let weight = 0.5 / draws.len() as f64;
                for draw in draws {
                    for mirrored in [false, true] {
                        for (plus, u) in plus.iter_mut().zip(draw) {
                            *plus = if mirrored { 1.0 - u < p } else { *u < p };
                        }
                        visit(&plus, weight);
                    }
                }
            }
        }
    }
}

fn uniforms(count: usize, rng: &mut impl Rng) -> Vec<f64> {
    (0..count).map(|_| rng.random::<f64>()).collect()
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    #[test]
    fn weights_sum_to_one_and_mirrored_draws_are_balanced() {
        for cells in [1, 5, 8, 9, 64, 3000] {
            let (mut weights, mut plus_share) = (0.0, 0.0);
            Luck::for_searching(cells, 3).for_each(cells, 0.5, |plus, weight| {
                weights += weight;
                let count = plus.iter().filter(|plus| **plus).count();
                plus_share += weight * count as f64 / cells as f64;
            });
            assert_relative_eq!(weights, 1.0, max_relative = 1e-12);
            assert_relative_eq!(plus_share, 0.5, max_relative = 1e-12);
        }
    }
}
