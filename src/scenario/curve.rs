//! Return curves between the scenario file and the theory.

use crate::theory::returns::TableError;
use crate::theory::{CurveError, ReturnCurve};

use super::fault::{FaultKind, PointsProblem};

/// Points that a table may have, at most.
pub(crate) const MOST_POINTS: usize = 1000;

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
/// Where theory refuses its numbers.
pub(crate) fn build_curve(spec: &CurveSpec, path: &str) -> Result<ReturnCurve, FaultKind> {
    let curve = match spec {
        CurveSpec::Power { exponent } => ReturnCurve::power(*exponent),
        CurveSpec::Saturating { half } => ReturnCurve::saturating(*half),
        CurveSpec::Sigmoid { half, steepness } => ReturnCurve::sigmoid(*half, *steepness),
        CurveSpec::Table { points } => ReturnCurve::table(points),
    };
    curve.map_err(|error| fault(error, path))
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

fn fault(error: CurveError, path: &str) -> FaultKind {
    match error {
        CurveError::NotPositive { parameter, value } => FaultKind::OutOfRange {
            key: format!("{path}.{parameter}"),
            value: value.to_string(),
            allowed: "a finite number above 0".into(),
        },
        CurveError::TooSteep { half, steepness } => FaultKind::OutOfRange {
            key: format!("{path}.half"),
            value: half.to_string(),
            allowed: format!("small enough that half^{steepness} stays below 1e300"),
        },
        CurveError::Table(error) => {
            FaultKind::Points { key: format!("{path}.points"), problem: points_problem(&error) }
        }
    }
}

fn points_problem(error: &TableError) -> PointsProblem {
    let coordinate = |number, value| PointsProblem::Coordinate { number, value };
    match error {
        TableError::TooFew { count } => PointsProblem::Count { count: *count, most: MOST_POINTS },
        TableError::NotFinite { point, x, y } => coordinate(*point, format!("[{x}, {y}]")),
        TableError::Negative { point, y } => coordinate(*point, y.to_string()),
        TableError::Start { x } => PointsProblem::Start { x: x.to_string() },
        TableError::Order { point, .. } => PointsProblem::XNotRising { number: *point },
        TableError::Falling { point, .. } => PointsProblem::YFalling { number: *point },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_curve_is_built_and_written_back() {
        let specs = [
            CurveSpec::Power { exponent: 1.7 },
            CurveSpec::Saturating { half: 0.4 },
            CurveSpec::Sigmoid { half: 0.5, steepness: 4.0 },
            CurveSpec::Table { points: vec![[0.0, 0.1], [0.5, 0.2], [1.0, 1.0]] },
        ];
        for spec in specs {
            let curve = build_curve(&spec, "returns.viability").expect("legal");
            assert_eq!(spec_of(&curve), spec);
        }
    }

    #[test]
    fn numbers_that_theory_refuses_are_faults_of_their_key() {
        let steep = CurveSpec::Sigmoid { half: 1e6, steepness: 100.0 };
        let fault = build_curve(&steep, "returns.viability").expect_err("overflows");
        assert!(
            fault.to_string().starts_with("`returns.viability.half` = 1000000 is out of range")
        );
        let flat = CurveSpec::Table { points: vec![[0.0, 1.0], [1.0, 0.5]] };
        let fault = build_curve(&flat, "returns.fecundity").expect_err("falls");
        assert!(fault.to_string().starts_with("`returns.fecundity.points`: the y of point 2"));
    }
}
