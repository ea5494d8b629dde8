//! Random draws, the same on every machine.

use rand::{Rng, RngExt};

/// A standard normal deviate by the polar method (Marsaglia & Bray 1964, SIAM Review 6:260).
pub fn standard_normal(rng: &mut impl Rng) -> f64 {
    loop {
        let [x, y] = [(); 2].map(|()| 2.0 * rng.random::<f64>() - 1.0);
        let square = x * x + y * y;
        if square < 1.0 && square > 0.0 {
            return x * (-2.0 * libm::log(square) / square).sqrt();
        }
    }
}

#[cfg(test)]
mod tests {
    use rand::SeedableRng;
    use rand_xoshiro::Xoshiro256PlusPlus;

    use super::*;

    #[test]
    fn deviates_have_the_moments_and_the_tails_of_the_normal_distribution() {
        // 200,000 draws; 4.9 standard errors (false alarm about 1e-6 each).
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(8);
        let draws: Vec<f64> = (0..200_000).map(|_| standard_normal(&mut rng)).collect();
        let mean = |of: &dyn Fn(f64) -> f64| draws.iter().map(|x| of(*x)).sum::<f64>() / 2e5;
        // Of x, x^2 and x^4 the variances are 1, 2 and 96.
        for (found, expected, variance) in [
            (mean(&|x| x), 0.0, 1.0),
            (mean(&|x| x * x), 1.0, 2.0),
            (mean(&|x| x.powi(4)), 3.0, 96.0),
            (mean(&|x| f64::from(u8::from(x > 1.959_963_984_540_054))), 0.025, 0.025 * 0.975),
        ] {
            let error = (variance / 2e5_f64).sqrt();
            assert!((found - expected).abs() < 4.9 * error, "{found} for {expected}");
        }
    }
}
