//! Return curves between the scenario file and the theory.

use crate::theory::ReturnCurve;

use super::fault::FaultKind;

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

/// The curve that `spec`, found at the table `path`, stands for.
///
/// # Errors
///
/// Where theory has no such curve, or refuses its points.
pub(crate) fn build_curve(spec: &CurveSpec, path: &str) -> Result<ReturnCurve, FaultKind> {
    match spec {
        CurveSpec::Power { exponent } => Ok(ReturnCurve::Power { exponent: *exponent }),
        CurveSpec::Saturating { .. } => Err(not_built(path, "saturating")),
        CurveSpec::Sigmoid { .. } => Err(not_built(path, "sigmoid")),
        CurveSpec::Table { .. } => Err(not_built(path, "table")),
    }
}

/// What the scenario file says to get `curve`.
pub(crate) fn spec_of(curve: &ReturnCurve) -> CurveSpec {
    match curve {
        ReturnCurve::Power { exponent } => CurveSpec::Power { exponent: *exponent },
    }
}

fn not_built(path: &str, word: &str) -> FaultKind {
    let what = format!("{path}.curve = \"{word}\"");
    FaultKind::NotBuilt { what, instead: "it can be \"power\" for now".into() }
}
