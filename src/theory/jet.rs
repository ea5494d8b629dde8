//! Second-order jets: a value with its first and second derivative along one direction.
//!
//! Fitness is written once, for any [`Scalar`]; run on [`Jet`]s it yields exact derivatives
//! (forward-mode differentiation, Griewank & Walther 2008).

use std::ops::{Add, Div, Mul, Neg, Sub};

/// A number that arithmetic and smooth functions can be applied to: `f64` or [`Jet`].
pub trait Scalar:
    Copy
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
    + Mul<f64, Output = Self>
{
    /// The number `value`, which does not vary.
    fn constant(value: f64) -> Self;

    /// The number itself, without derivatives.
    fn value(self) -> f64;

    /// How many numbers it is made of: the value, and derivatives if it has any.
    const PARTS: usize;

    /// One of these numbers: value, slope, curvature.
    fn part(self, which: usize) -> f64;

    /// The number made of these parts.
    fn of_parts(part: impl Fn(usize) -> f64) -> Self;

    /// Whether the number is 0 and does not vary.
    fn is_zero(self) -> bool;

    /// Magnitude. At 0 it is taken one-sidedly, in the direction in which the number moves.
    #[must_use]
    fn abs(self) -> Self;

    /// `f(self)`, `f` being given as a function and as its jet by its own argument.
    #[must_use]
    fn lift(self, f: impl FnOnce(f64) -> f64, jet: impl FnOnce(f64) -> Jet) -> Self;

    /// `exp(self)`.
    #[must_use]
    fn exp(self) -> Self {
        self.lift(libm::exp, |x| {
            let e = libm::exp(x);
            Jet { value: e, slope: e, curvature: e }
        })
    }

    /// `ln(self)`: -inf at 0, with derivatives that are not numbers.
    #[must_use]
    fn ln(self) -> Self {
        self.lift(libm::log, |x| {
            let r = x.recip();
            Jet { value: libm::log(x), slope: r, curvature: -r * r }
        })
    }

    /// The logistic function `1 / (1 + exp(-self))`.
    #[must_use]
    fn sigmoid(self) -> Self {
        self.lift(super::reaction_norm::sigmoid, |x| {
            let s = super::reaction_norm::sigmoid(x);
            let rest = super::reaction_norm::sigmoid(-x);
            Jet { value: s, slope: s * rest, curvature: s * rest * (rest - s) }
        })
    }
}

impl Scalar for f64 {
    fn constant(value: f64) -> Self {
        value
    }

    fn value(self) -> f64 {
        self
    }

    const PARTS: usize = 1;

    fn part(self, _which: usize) -> f64 {
        self
    }

    fn of_parts(part: impl Fn(usize) -> f64) -> Self {
        part(0)
    }

    fn is_zero(self) -> bool {
        self == 0.0
    }

    fn abs(self) -> Self {
        f64::abs(self)
    }

    fn lift(self, f: impl FnOnce(f64) -> f64, _jet: impl FnOnce(f64) -> Jet) -> Self {
        f(self)
    }
}

/// A value with its first two derivatives along one direction.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Jet {
    /// The value.
    pub value: f64,
    /// First derivative.
    pub slope: f64,
    /// Second derivative.
    pub curvature: f64,
}

impl Jet {
    /// The variable itself, at `value`, moving with speed `slope` along the direction.
    #[must_use]
    pub const fn variable(value: f64, slope: f64) -> Self {
        Self { value, slope, curvature: 0.0 }
    }
}

impl Scalar for Jet {
    fn constant(value: f64) -> Self {
        Self::variable(value, 0.0)
    }

    fn value(self) -> f64 {
        self.value
    }

    const PARTS: usize = 3;

    fn part(self, which: usize) -> f64 {
        [self.value, self.slope, self.curvature][which]
    }

    fn of_parts(part: impl Fn(usize) -> f64) -> Self {
        Self { value: part(0), slope: part(1), curvature: part(2) }
    }

    fn is_zero(self) -> bool {
        self.value == 0.0 && self.slope == 0.0 && self.curvature == 0.0
    }

    fn abs(self) -> Self {
        let falling = self.value < 0.0 || (self.value == 0.0 && self.slope < 0.0);
        if falling { -self } else { self }
    }

    fn lift(self, _f: impl FnOnce(f64) -> f64, jet: impl FnOnce(f64) -> Jet) -> Self {
        let outer = jet(self.value);
        if self.slope == 0.0 && self.curvature == 0.0 {
            // A constant stays one even where the outer slope is infinite (x^a, a < 1, at 0).
            return Self::constant(outer.value);
        }
        Self {
            value: outer.value,
            slope: outer.slope * self.slope,
            curvature: outer.curvature * self.slope * self.slope + outer.slope * self.curvature,
        }
    }
}

impl Add for Jet {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self {
            value: self.value + other.value,
            slope: self.slope + other.slope,
            curvature: self.curvature + other.curvature,
        }
    }
}

impl Neg for Jet {
    type Output = Self;
    fn neg(self) -> Self {
        Self { value: -self.value, slope: -self.slope, curvature: -self.curvature }
    }
}

impl Sub for Jet {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Mul for Jet {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self {
            value: self.value * other.value,
            slope: self.slope * other.value + self.value * other.slope,
            curvature: self.curvature * other.value
                + 2.0 * self.slope * other.slope
                + self.value * other.curvature,
        }
    }
}

impl Mul<f64> for Jet {
    type Output = Self;
    fn mul(self, factor: f64) -> Self {
        Self {
            value: self.value * factor,
            slope: self.slope * factor,
            curvature: self.curvature * factor,
        }
    }
}

#[expect(clippy::suspicious_arithmetic_impl, reason = "a / b is a times the reciprocal of b")]
impl Div for Jet {
    type Output = Self;
    fn div(self, other: Self) -> Self {
        self * other.lift(f64::recip, reciprocal)
    }
}

/// The jet of 1/x by x.
fn reciprocal(x: f64) -> Jet {
    let r = x.recip();
    Jet { value: r, slope: -r * r, curvature: 2.0 * r * r * r }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    /// f(x) = exp(x) ln(x) / (x x - 3) at x = 2, differentiated by hand.
    #[test]
    fn a_composite_has_the_derivatives_of_calculus() {
        let x = Jet::variable(2.0, 1.0);
        let f = x.exp() * x.ln() / (x * x - Jet::constant(3.0));
        let (e, l) = (2.0_f64.exp(), 2.0_f64.ln());
        // With N = e^x ln x, D = x^2 - 3 = 1: N' = e^x (ln x + 1/x), N'' = e^x (ln x + 2/x - 1/x^2).
        let (n0, n1, n2) = (e * l, e * (l + 0.5), e * (l + 1.0 - 0.25));
        let (d0, d1, d2) = (1.0, 4.0, 2.0);
        let first = (n1 * d0 - n0 * d1) / (d0 * d0);
        let second = n2 / d0 - 2.0 * n1 * d1 / (d0 * d0) - n0 * d2 / (d0 * d0)
            + 2.0 * n0 * d1 * d1 / (d0 * d0 * d0);
        assert_relative_eq!(f.value, n0 / d0, max_relative = 1e-14);
        assert_relative_eq!(f.slope, first, max_relative = 1e-14);
        assert_relative_eq!(f.curvature, second, max_relative = 1e-14);
    }

    #[test]
    fn the_magnitude_at_zero_follows_the_direction() {
        assert_relative_eq!(Jet::variable(0.0, -1.0).abs().slope, 1.0);
        assert_relative_eq!(Jet::variable(0.0, 2.0).abs().slope, 2.0);
        assert_relative_eq!(Jet::variable(-3.0, 1.0).abs().slope, -1.0);
    }

    #[test]
    fn a_constant_stays_constant_where_the_outer_slope_is_infinite() {
        let steep = |_| Jet { value: 0.0, slope: f64::INFINITY, curvature: f64::NEG_INFINITY };
        assert!(Jet::constant(0.0).lift(|x| x, steep).is_zero());
    }
}
