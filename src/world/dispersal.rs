//! Dispersal on a torus: how far from its parent a propagule lands.

use std::f64::consts::{PI, SQRT_2};

use libm::{erfc, exp, sin};

/// Most of the kernel's mass that is cut off per axis, so that less than 1e-12 is lost in all.
const MOST_MASS_CUT: f64 = 2.5e-13;

/// Standard deviation over the torus' side from which on landing is uniform: the shares of sites then
/// differ by less than `2 exp(-2 pi^2 1.3^2) = 7e-15` of their mean.
const UNIFORM_FROM: f64 = 1.3;

/// Standard deviation over the side from which on a share is summed as a cosine series.
const WIDE_FROM: f64 = 0.5;

/// Landing around a parent on a square torus of `side * side` sites.
///
/// The two coordinates of the displacement are independent normal deviates of standard deviation sigma
/// (site widths), each rounded to the nearest site and wrapped: `k(dx, dy) = p(dx) p(dy)`,
/// `p(d) = sum_m Phi((d + m side + 1/2) / sigma) - Phi((d + m side - 1/2) / sigma)`.
#[derive(Debug, Clone, PartialEq)]
pub struct Kernel {
    side: usize,
    sd: f64,
    /// Displacement of the first entry of `shares`, negated.
    reach: usize,
    /// `p` of the displacements `-reach ..`, as many as matter.
    shares: Vec<f64>,
}

impl Kernel {
    /// The kernel of standard deviation `sd_sites` >= 0 (site widths) on a torus of `sites` places, a
    /// square number.
    ///
    /// None where landing is uniform to rounding (`sd_sites` >= 1.3 sides, or infinite). Displacements
    /// along an axis that together hold less than 2.5e-13 are left out: less than 1e-12 in all.
    #[must_use]
    pub fn new(sites: usize, sd_sites: f64) -> Option<Self> {
        let side = sites.isqrt();
        if sd_sites >= UNIFORM_FROM * side as f64 {
            return None;
        }
        let beyond = |reach: usize| erfc((reach as f64 + 0.5) / (sd_sites * SQRT_2));
        let reach = (0..side / 2).find(|reach| beyond(*reach) < MOST_MASS_CUT);
        // As many displacements as the axis has sites, if all matter: on an even side one more to the
        // left than to the right.
        let (reach, width) = reach.map_or((side / 2, side), |reach| (reach, 2 * reach + 1));
        let share = |place: usize| wrapped_share(place.abs_diff(reach), sd_sites, side);
        Some(Self { side, sd: sd_sites, reach, shares: (0..width).map(share).collect() })
    }

    /// Sites along a side.
    #[must_use]
    pub const fn side(&self) -> usize {
        self.side
    }

    /// Standard deviation, site widths.
    #[must_use]
    pub const fn sd_sites(&self) -> f64 {
        self.sd
    }

    /// Displacements that matter, along both axes.
    #[must_use]
    pub const fn window(&self) -> usize {
        self.shares.len() * self.shares.len()
    }

    /// Sites whose propagules can land on `site`, each with the probability that one does.
    pub fn sources(&self, site: usize) -> impl Iterator<Item = (usize, f64)> {
        let (row, column) = (site / self.side, site % self.side);
        self.along(row).flat_map(move |(row, share)| {
            self.along(column).map(move |(column, other)| (row * self.side + column, share * other))
        })
    }

    /// Places along an axis within reach of `place`, and their shares.
    fn along(&self, place: usize) -> impl Iterator<Item = (usize, f64)> {
        let first = place + self.side - self.reach;
        self.shares.iter().enumerate().map(move |(i, share)| ((first + i) % self.side, *share))
    }
}

/// `p(d)` of the wrapped, rounded normal distribution.
fn wrapped_share(d: usize, sd: f64, side: usize) -> f64 {
    let (d, side) = (d as f64, side as f64);
    if sd >= WIDE_FROM * side {
        // Poisson's summation: terms fall as exp(-2 (pi m sigma / side)^2), the fifth below 1e-50.
        let term = |m: f64| {
            let spread = PI * m * sd / side;
            let width = PI * m / side;
            exp(-2.0 * spread * spread) * libm::cos(2.0 * width * d) * sin(width) / width
        };
        return (1.0 + 2.0 * (1_u8..=4).map(|m| term(f64::from(m))).sum::<f64>()) / side;
    }
    // Within 6 sides on both sides lie 11 standard deviations.
    (-6_i8..=6).map(|turn| rounded_share(f64::from(turn).mul_add(side, d).abs(), sd)).sum()
}

/// Probability that a normal deviate rounds to `d` >= 0, by the upper tail, which keeps its digits.
fn rounded_share(d: f64, sd: f64) -> f64 {
    let beyond = |x: f64| 0.5 * erfc(x / (sd * SQRT_2));
    beyond(d - 0.5) - beyond(d + 0.5)
}

#[cfg(test)]
mod tests {
    use rand::SeedableRng;
    use rand_xoshiro::Xoshiro256PlusPlus;

    use super::*;
    use crate::tissue::standard_normal;

    /// The kernel as seen from site 0: every site's share.
    fn spread(sites: usize, sd: f64) -> Vec<f64> {
        let mut shares = vec![0.0; sites];
        for (site, share) in Kernel::new(sites, sd).expect("a local kernel").sources(0) {
            shares[site] += share;
        }
        shares
    }

    #[test]
    fn shares_sum_to_one_and_are_alike_in_all_directions() {
        for side in [2_usize, 3, 10, 31, 64] {
            for sd in [0.0, 0.1, 0.7, 1.5, 4.0, 0.49 * side as f64, 0.51 * side as f64] {
                let Some(kernel) = Kernel::new(side * side, sd) else { continue };
                assert!(kernel.window() <= side * side);
                let shares = spread(side * side, sd);
                approx::assert_abs_diff_eq!(shares.iter().sum::<f64>(), 1.0, epsilon = 1e-12);
                for (site, share) in shares.iter().enumerate() {
                    let (row, column) = (site / side, site % side);
                    let turned = column * side + row;
                    let mirrored = row * side + (side - column) % side;
                    for other in [turned, mirrored] {
                        approx::assert_relative_eq!(*share, shares[other], max_relative = 1e-12);
                    }
                }
            }
        }
    }

    #[test]
    fn both_sums_give_the_same_shares() {
        for side in [4_usize, 9] {
            for d in 0..side {
                let sd = WIDE_FROM * side as f64;
                let (series, images) =
                    (wrapped_share(d, sd, side), wrapped_share(d, sd.next_down(), side));
                approx::assert_relative_eq!(series, images, max_relative = 1e-13);
            }
        }
    }

    #[test]
    fn a_wide_kernel_is_uniform_to_rounding_where_it_is_taken_for_uniform() {
        for side in [2_usize, 10, 100] {
            assert!(Kernel::new(side * side, 1.3 * side as f64).is_none());
            assert!(Kernel::new(side * side, f64::INFINITY).is_none());
            let n = (side * side) as f64;
            for share in spread(side * side, 1.29 * side as f64) {
                assert!((share * n - 1.0).abs() < 3e-14 && (share - 1.0 / n).abs() < 1e-12);
            }
        }
    }

    #[test]
    fn a_huge_torus_is_seen_through_a_window() {
        // 7.3 standard deviations of 1.5 on either side.
        assert_eq!(Kernel::new(1_000_000, 1.5).expect("a local kernel").window(), 23 * 23);
        assert_eq!(Kernel::new(1_000_000, 0.0).expect("a local kernel").window(), 1);
    }

    /// 400,000 deviates per case; shares within 4.9 standard errors (false alarm about 1e-6 a site,
    /// below 1e-3 in all).
    #[test]
    #[expect(clippy::cast_sign_loss, reason = "a remainder is not negative")]
    fn shares_are_those_of_rounded_and_wrapped_normal_deviates() {
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(12);
        for (side, sd) in [(9_usize, 0.7), (8, 1.5), (6, 4.0)] {
            let mut counts = vec![0_u32; side * side];
            let mut place = || {
                let landed = (sd * standard_normal(&mut rng)).round();
                landed.rem_euclid(side as f64) as usize
            };
            for _ in 0..400_000 {
                counts[place() * side + place()] += 1;
            }
            for (count, share) in counts.iter().zip(spread(side * side, sd)) {
                let error = (share * (1.0 - share) / 4e5).sqrt();
                let found = f64::from(*count) / 4e5;
                assert!((found - share).abs() <= 4.9 * error + 1e-6, "{found} for {share}");
            }
        }
    }
}
