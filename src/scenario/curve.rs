//! Return curves between the scenario file and the theory.

use crate::theory::ReturnCurve;
use crate::theory::returns::CurveError;

/// The curves that the word `curve` can name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum CurveKind {
    /// `x^a`.
    Power,
    /// `x (1 + K) / (x + K)`.
    Saturating,
    /// `H(x)/H(1)`, `H = x^s / (x^s + K^s)`.
    Sigmoid,
    /// A monotone cubic through points.
    Table,
}

/// A curve as the scenario file states it, its numbers checked.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum CurveSpec {
    /// `x^a`.
    Power {
        /// a.
        exponent: f64,
    },
    /// `x (1 + K) / (x + K)`.
    Saturating {
        /// K.
        half: f64,
    },
    /// `H(x)/H(1)`, `H = x^s / (x^s + K^s)`.
    Sigmoid {
        /// K.
        half: f64,
        /// s.
        steepness: f64,
    },
    /// A monotone cubic through points.
    Table {
        /// The points, x from 0 strictly rising, y never falling.
        points: Vec<[f64; 2]>,
    },
}

/// The curve that `spec` stands for.
///
/// # Errors
///
/// Where theory refuses the numbers.
pub(crate) fn build_curve(spec: &CurveSpec) -> Result<ReturnCurve, CurveError> {
    match spec {
        CurveSpec::Power { exponent } => ReturnCurve::power(*exponent),
        CurveSpec::Saturating { half } => ReturnCurve::saturating(*half),
        CurveSpec::Sigmoid { half, steepness } => ReturnCurve::sigmoid(*half, *steepness),
        CurveSpec::Table { points } => ReturnCurve::table(points),
    }
}

/// What the scenario file says to get `curve`.
pub(crate) fn spec_of(curve: &ReturnCurve) -> CurveSpec {
    match curve {
        ReturnCurve::Power { exponent } => CurveSpec::Power { exponent: *exponent },
        ReturnCurve::Saturating { half } => CurveSpec::Saturating { half: *half },
        ReturnCurve::Sigmoid { half, steepness } => {
            CurveSpec::Sigmoid { half: *half, steepness: *steepness }
        }
        ReturnCurve::Table(table) => CurveSpec::Table { points: table.points().collect() },
    }
}
