//! Return curves: what a task yields for a share of a fully fed cell's budget.
//!
//! Outside their domain [0, inf) curves are not defined; a NaN stays a NaN.

mod monotone_cubic;

pub use monotone_cubic::{MonotoneCubic, TableError};

use super::jet::{Jet, Scalar};

/// A return curve on x in [0, inf), x being a budget over `income_eu_per_h`.
#[derive(Debug, Clone, PartialEq)]
pub enum ReturnCurve {
    /// `x^a`: accelerating for a > 1, diminishing for a < 1.
    Power {
        /// Exponent a > 0.
        exponent: f64,
    },
    /// `x (1 + K) / (x + K)`: diminishing, normalised so that 1 yields 1.
    Saturating {
        /// Half-saturation K > 0.
        half: f64,
    },
    /// `H(x) / H(1)` with `H(x) = x^n / (x^n + K^n)` (Hill 1910), normalised so that 1 yields 1.
    Sigmoid {
        /// Half-saturation K > 0.
        half: f64,
        /// Steepness n > 0.
        steepness: f64,
    },
    /// Monotone cubic through the user's points.
    Table(MonotoneCubic),
}

/// Why a curve cannot be made.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum CurveError {
    /// A parameter is not a positive, finite number.
    #[error("`{parameter}` is {value}; it must be a finite number above 0")]
    NotPositive {
        /// Name of the parameter in a scenario.
        parameter: &'static str,
        /// The value given.
        value: f64,
    },
    /// The points of a table do not make a curve.
    #[error(transparent)]
    Table(#[from] TableError),
}

impl ReturnCurve {
    /// The power curve `x^exponent`.
    ///
    /// # Errors
    /// [`CurveError::NotPositive`] unless `exponent` is finite and above 0.
    pub fn power(exponent: f64) -> Result<Self, CurveError> {
        Ok(Self::Power { exponent: positive("exponent", exponent)? })
    }

    /// The saturating curve with half-saturation `half`.
    ///
    /// # Errors
    /// [`CurveError::NotPositive`] unless `half` is finite and above 0.
    pub fn saturating(half: f64) -> Result<Self, CurveError> {
        Ok(Self::Saturating { half: positive("half", half)? })
    }

    /// The sigmoid curve with half-saturation `half` and steepness `steepness`.
    ///
    /// # Errors
    /// [`CurveError::NotPositive`] unless both are finite and above 0.
    pub fn sigmoid(half: f64, steepness: f64) -> Result<Self, CurveError> {
        let (half, steepness) = (positive("half", half)?, positive("steepness", steepness)?);
        Ok(Self::Sigmoid { half, steepness })
    }

    /// The monotone cubic through `points`.
    ///
    /// # Errors
    /// [`CurveError::Table`], see [`MonotoneCubic::through`].
    pub fn table(points: &[[f64; 2]]) -> Result<Self, CurveError> {
        Ok(Self::Table(MonotoneCubic::through(points)?))
    }

    /// The return at `x` >= 0 (dimensionless).
    #[must_use]
    pub fn value(&self, x: f64) -> f64 {
        match self {
            Self::Power { exponent } => libm::pow(x, *exponent),
            Self::Saturating { half } => x * (1.0 + half) / (x + half),
            Self::Sigmoid { half, steepness } => sigmoid(x, *half, *steepness),
            Self::Table(table) => table.value(x),
        }
    }

    /// The return at `x` >= 0 with its first and second derivative by x.
    ///
    /// At x = 0 the derivatives are the limits from the right, which are infinite for a power or
    /// steepness below 1 (the second one below 2). A table's second derivative jumps at its
    /// points; there it is that of the piece to the right.
    #[must_use]
    pub fn jet(&self, x: f64) -> Jet {
        match self {
            Self::Power { exponent } => power_jet(x, *exponent),
            Self::Saturating { half } => {
                let (sum, scale) = (x + half, (1.0 + half) * half);
                Jet {
                    value: x * (1.0 + half) / sum,
                    slope: scale / (sum * sum),
                    curvature: -2.0 * scale / (sum * sum * sum),
                }
            }
            Self::Sigmoid { half, steepness } => sigmoid_jet(x, *half, *steepness),
            Self::Table(table) => table.jet(x),
        }
    }

    /// The return at a number or a jet.
    #[must_use]
    pub fn at<S: Scalar>(&self, x: S) -> S {
        x.lift(|x| self.value(x), |x| self.jet(x))
    }
}

fn positive(parameter: &'static str, value: f64) -> Result<f64, CurveError> {
    if value.is_finite() && value > 0.0 {
        Ok(value)
    } else {
        Err(CurveError::NotPositive { parameter, value })
    }
}

fn power_jet(x: f64, a: f64) -> Jet {
    let bend = a * (a - 1.0);
    Jet {
        value: libm::pow(x, a),
        slope: a * monomial(x, a - 1.0),
        // A straight line has no bend at x = 0 either, where the power is infinite.
        curvature: if bend == 0.0 { 0.0 } else { bend * monomial(x, a - 2.0) },
    }
}

/// `x^p` with the limit from the right at x = 0.
fn monomial(x: f64, p: f64) -> f64 {
    if p == 0.0 { 1.0 } else { libm::pow(x, p) }
}

/// `H(x)/H(1) = (1 + K^n) / (1 + (K/x)^n) = x^n (1 + K^-n) / (1 + (x/K)^n)`: the form that no
/// power of K can drive out of range, for K up to 1 and above.
fn sigmoid(x: f64, half: f64, steepness: f64) -> f64 {
    if half <= 1.0 {
        (1.0 + libm::pow(half, steepness)) / (1.0 + libm::pow(half / x, steepness))
    } else {
        let scale = 1.0 + libm::pow(half, -steepness);
        libm::pow(x, steepness) * scale / (1.0 + libm::pow(x / half, steepness))
    }
}

/// For y = H/H(1): y' = n y (1 - H)/x and y'' = y' (n (1 - 2H) - 1)/x.
fn sigmoid_jet(x: f64, half: f64, steepness: f64) -> Jet {
    let ratio = libm::pow(half / x, steepness);
    if x == 0.0 || ratio.is_infinite() {
        return sigmoid_jet_near_zero(x, half, steepness);
    }
    let value = sigmoid(x, half, steepness);
    let (reached, rest) = (1.0 / (1.0 + ratio), 1.0 / (1.0 + 1.0 / ratio));
    let slope = steepness * value * rest / x;
    Jet { value, slope, curvature: slope * (steepness * (rest - reached) - 1.0) / x }
}

/// y ~ (1 + K^-n) x^n to leading order; the next term, -(x/K)^n times that, counts at n = 1 only.
fn sigmoid_jet_near_zero(x: f64, half: f64, steepness: f64) -> Jet {
    let scale = (1.0 + libm::pow(half, -steepness)).min(f64::MAX);
    let lead = power_jet(x, steepness) * scale;
    let next = if steepness - 1.0 == 0.0 { 2.0 * scale / half } else { 0.0 };
    Jet { curvature: lead.curvature - next, ..lead }
}

/// One task's return: the curve, and how a cell's position scales it.
#[derive(Debug, Clone, PartialEq)]
pub struct TaskReturn {
    /// The return curve.
    pub curve: ReturnCurve,
    /// Factor for surface cells.
    pub surface_effect: f64,
    /// Factor for interior cells.
    pub interior_effect: f64,
}

impl TaskReturn {
    /// The factor for a cell of that exposure.
    #[must_use]
    pub const fn effect(&self, exposed: bool) -> f64 {
        if exposed { self.surface_effect } else { self.interior_effect }
    }

    /// The return at `x` >= 0 of a cell of that exposure: `effect * curve(x)`.
    #[must_use]
    pub fn value(&self, x: f64, exposed: bool) -> f64 {
        self.effect(exposed) * self.curve.value(x)
    }

    /// Whether surface and interior cells yield differently.
    #[must_use]
    pub fn depends_on_place(&self) -> bool {
        self.surface_effect.total_cmp(&self.interior_effect).is_ne()
    }
}

#[cfg(test)]
mod tests;
