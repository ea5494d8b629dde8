//! Results that can be written down: pooled power returns `v = z^a`, `b = (1 - z)^c`, no extrinsic
//! and no juvenile hazard, so that fitness is `W = mean(v) mean(b)` of a body.
//!
//! The whole of [`crate::theory`] must reproduce them. `n` is the number of cells of a body, `None`
//! a body so large that luck averages out. Exponents are finite and above 0, n at least 2.
//! Background: Michod 2006 (PNAS 103:9113), Rueffler, Hermisson & Wagner 2012 (PNAS 109:E326),
//! Cooper & West 2018 (Nat. Ecol. Evol. 2:1161); the finite-n forms are derived here.

/// Soma share of the best generalist: `z* = a / (a + c)`.
#[must_use]
pub fn generalist_optimum(a: f64, c: f64) -> f64 {
    a / (a + c)
}

/// Fitness of the best generalist: `W* = a^a c^c / (a + c)^(a + c)`.
#[must_use]
pub fn generalist_fitness(a: f64, c: f64) -> f64 {
    viability_of_generalist(a, c) * viability_of_generalist(c, a)
}

/// `(a / (a + c))^a`, the viability of the best generalist (its fecundity with a and c swapped).
fn viability_of_generalist(a: f64, c: f64) -> f64 {
    libm::pow(generalist_optimum(a, c), a)
}

/// Fitness gained by dispersion around the best generalist: `W/W* - 1 = K Var(z) / 2` to second
/// order, `K = (a + c)^2 (2 - 1/a - 1/c - 2/n)`, cells drawing their fates independently.
#[must_use]
pub fn dispersion_gain(a: f64, c: f64, n: Option<u64>) -> f64 {
    let sum = a + c;
    sum * sum * (2.0 * coordination(n) - 1.0 / a - 1.0 / c)
}

/// Whether independent random fates around the best generalist are favoured:
/// `1/a + 1/c < 2 (1 - 1/n)`; for large bodies, harmonic mean of the exponents above 1.
#[must_use]
pub fn dispersion_is_favoured(a: f64, c: f64, n: Option<u64>) -> bool {
    dispersion_gain(a, c, n) > 0.0
}

/// Exponent c above which dispersion is favoured beside exponent a:
/// `c = 1 / (2 (1 - 1/n) - 1/a)`, `None` where no c suffices.
#[must_use]
pub fn local_partner(a: f64, n: Option<u64>) -> Option<f64> {
    let room = 2.0 * coordination(n) - 1.0 / a;
    (room > 0.0).then(|| 1.0 / room)
}

/// Exponent a = c above which independent random fates are favoured around the best generalist:
/// `n / (n - 1)`.
#[must_use]
pub fn local_threshold(n: Option<u64>) -> f64 {
    1.0 / coordination(n)
}

/// Exponent a = c above which some independent random fates beat the best generalist:
/// `1 - log2(1 - 1/n) / 2`, reached by full specialists in equal shares.
#[must_use]
pub fn global_threshold(n: Option<u64>) -> f64 {
    1.0 - 0.5 * libm::log2(coordination(n))
}

/// Exponent a = c above which a fixed split into germ and soma beats the best generalist: 1 for
/// an even number of cells, `1 - log4(1 - 1/n^2)` for an odd one.
#[must_use]
pub fn coordinated_threshold(n: Option<u64>) -> f64 {
    match n {
        Some(n) if n % 2 == 1 => 1.0 - 0.5 * libm::log2(1.0 - 1.0 / (n * n) as f64),
        _ => 1.0,
    }
}

/// Fitness of full specialists in equal shares, drawn independently: `(1 - 1/n) / 4`.
#[must_use]
pub fn full_specialist_fitness(n: Option<u64>) -> f64 {
    0.25 * coordination(n)
}

/// Whether full specialists in equal shares beat the best generalist:
/// `a^a c^c / (a + c)^(a + c) < (1 - 1/n) / 4`. Sufficient for some mixture to do so, and
/// necessary only for a = c.
#[must_use]
pub fn full_specialists_win(a: f64, c: f64, n: Option<u64>) -> bool {
    generalist_fitness(a, c) < full_specialist_fitness(n)
}

/// Whether some mixture of cells beats the best generalist in a large body:
/// `min{ (a/(a+c))^a, (c/(a+c))^c } < 1/2`.
///
/// The attainable pairs (V, B) are the convex hull of the curve (v(z), b(z)); the generalist is
/// the greatest V B on it iff `max_z [v(z)/v* + b(z)/b*] <= 2`, whose maximum is at an end or z*.
#[must_use]
pub fn some_mixture_wins(a: f64, c: f64) -> bool {
    viability_of_generalist(a, c).min(viability_of_generalist(c, a)) < 0.5
}

/// `1 - 1/n`: the share of pairs of cells that are two different cells.
fn coordination(n: Option<u64>) -> f64 {
    n.map_or(1.0, |n| 1.0 - 1.0 / n as f64)
}

#[cfg(test)]
mod tests;
