//! Intervals of a probability from counts.

use super::quantile;
use super::{Interval, Level, StatsError};

/// Wilson's score interval of a probability from `successes` in `trials`.
///
/// `[2x + z^2 -+ z sqrt(z^2 + 4x(1 - x/n))] / (2(n + z^2))` (Wilson 1927), z the two-sided normal
/// quantile. The lower limit is exactly 0 at x = 0, the upper exactly 1 at x = n. Without trials
/// nothing is known: [0, 1], which is also the formula's value.
///
/// # Errors
/// [`StatsError::Successes`] if `successes > trials`.
pub fn wilson(successes: u64, trials: u64, level: Level) -> Result<Interval, StatsError> {
    check(successes, trials)?;
    let (x, n) = (successes as f64, trials as f64);
    let z = quantile::normal_two_sided(level);
    let z2 = z * z;
    let failures = (trials - successes) as f64;
    let spread = if trials == 0 { z2 } else { z2 + 4.0 * x * (failures / n) };
    let half = z * spread.sqrt();
    let limit = |sign: f64| (2.0 * x + z2 + sign * half) / (2.0 * (n + z2));
    Ok(Interval {
        low: if successes == 0 { 0.0 } else { limit(-1.0) },
        high: if successes == trials { 1.0 } else { limit(1.0) },
    })
}

/// Clopper and Pearson's exact interval of a probability from `successes` in `trials`.
///
/// `beta(alpha/2; x, n - x + 1)` to `beta(1 - alpha/2; x + 1, n - x)`, beta the quantile function
/// (Clopper & Pearson 1934); 0 and 1 where the shape vanishes. Covers the truth at least as often
/// as the level says, for every n.
///
/// # Errors
/// [`StatsError::Successes`] if `successes > trials`.
pub fn clopper_pearson(successes: u64, trials: u64, level: Level) -> Result<Interval, StatsError> {
    check(successes, trials)?;
    let x = successes as f64;
    let failures = (trials - successes) as f64;
    let low = match successes {
        0 => 0.0,
        _ => quantile::beta(level.tail(), x, failures + 1.0),
    };
    // Mirrored, so that the upper limit is found as accurately as the lower.
    let high = match trials - successes {
        0 => 1.0,
        _ => 1.0 - quantile::beta(level.tail(), failures, x + 1.0),
    };
    Ok(Interval { low, high })
}

const fn check(successes: u64, trials: u64) -> Result<(), StatsError> {
    if successes > trials {
        return Err(StatsError::Successes { successes, trials });
    }
    Ok(())
}
