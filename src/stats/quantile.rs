//! Quantiles of the normal, beta and Student t distributions.
//!
//! Each is the root of its distribution function, bracketed and bisected until the bracket holds no
//! further number; the distribution functions use `libm` alone, so a limit in a result file has the
//! same bits on every machine.

use super::Level;

/// Quantile of the standard normal distribution at `p` in (0, 1), within about 1e-15.
///
/// At `p` <= 0 it is negative, at `p` >= 1 positive infinity.
#[must_use]
pub fn normal(p: f64) -> f64 {
    if p > 0.5 {
        return -normal(1.0 - p);
    }
    if p <= 0.0 {
        return f64::NEG_INFINITY;
    }
    let cdf = |x: f64| 0.5 * libm::erfc(-x / std::f64::consts::SQRT_2);
    root_of_increasing(cdf, p, -40.0, 0.0)
}

/// Half-width in standard deviations of a two-sided normal interval: 1.96 at 95 %.
#[must_use]
pub fn normal_two_sided(level: Level) -> f64 {
    -normal(level.tail())
}

/// Quantile of the beta distribution with shapes `a`, `b` > 0 at `p` in [0, 1].
#[must_use]
pub fn beta(p: f64, a: f64, b: f64) -> f64 {
    if p <= 0.0 {
        return 0.0;
    }
    if p >= 1.0 {
        return 1.0;
    }
    root_of_increasing(|x| incomplete_beta(x, a, b), p, 0.0, 1.0)
}

/// Half-width in standard errors of a two-sided Student t interval with `freedom` > 0 degrees.
///
/// `t = sqrt(freedom x / (1 - x))`, x the quantile at `level` of a beta distribution with shapes
/// 1/2 and freedom/2, since `t^2 / (freedom + t^2)` is so distributed.
#[must_use]
pub fn student_two_sided(level: Level, freedom: f64) -> f64 {
    let x = beta(level.value(), 0.5, freedom / 2.0);
    (freedom * x / (1.0 - x)).sqrt()
}

/// Regularised incomplete beta function `I_x(a, b)`, x in [0, 1], a and b > 0.
///
/// Continued fraction (Abramowitz & Stegun 1964, 26.5.8) by the modified Lentz method (Thompson &
/// Barnett 1986); relative error below 1e-12 for shapes up to 1e4.
#[must_use]
pub fn incomplete_beta(x: f64, a: f64, b: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    if x >= 1.0 {
        return 1.0;
    }
    // The fraction converges fast below the mean only; above it the mirror image does.
    if x > (a + 1.0) / (a + b + 2.0) {
        return 1.0 - incomplete_beta_below_mean(1.0 - x, b, a);
    }
    incomplete_beta_below_mean(x, a, b)
}

fn incomplete_beta_below_mean(x: f64, a: f64, b: f64) -> f64 {
    let ln_front = a * libm::log(x) + b * libm::log1p(-x) - ln_beta(a, b);
    libm::exp(ln_front) / a * beta_fraction(x, a, b)
}

fn ln_beta(a: f64, b: f64) -> f64 {
    libm::lgamma(a) + libm::lgamma(b) - libm::lgamma(a + b)
}

fn beta_fraction(x: f64, a: f64, b: f64) -> f64 {
    const TINY: f64 = 1e-300;
    // Convergence takes O(sqrt(max(a, b))) steps, so the cap is never met by shapes below 1e8.
    const STEPS: u32 = 20_000;
    let away_from_zero = |value: f64| if value.abs() < TINY { TINY } else { value };
    let mut numerator = 1.0;
    let mut inverse = 1.0 / away_from_zero(1.0 - (a + b) * x / (a + 1.0));
    let mut fraction = inverse;
    for step in 1..=STEPS {
        let m = f64::from(step);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        let mut factor = 1.0;
        for coefficient in [even, odd] {
            inverse = 1.0 / away_from_zero(1.0 + coefficient * inverse);
            numerator = away_from_zero(1.0 + coefficient / numerator);
            factor = inverse * numerator;
            fraction *= factor;
        }
        if (factor - 1.0).abs() < 1e-16 {
            break;
        }
    }
    fraction
}

/// Where the increasing function `f` reaches `target` between `low` and `high`.
fn root_of_increasing(f: impl Fn(f64) -> f64, target: f64, mut low: f64, mut high: f64) -> f64 {
    // 1,100 halvings exhaust even the subnormal numbers below a bracket that starts at 0.
    for _ in 0..1_100 {
        let middle = low + (high - low) / 2.0;
        if middle <= low || middle >= high {
            break;
        }
        if f(middle) < target {
            low = middle;
        } else {
            high = middle;
        }
    }
    low + (high - low) / 2.0
}
