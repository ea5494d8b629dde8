//! The parameters of the two tasks' return curves: the same seven keys for each.

use super::super::super::curve::CurveKind;
use super::super::points::Points;
use super::super::{Condition, Parameter};
use super::{Real, Words};

/// The keys of one task.
#[derive(Debug)]
pub(crate) struct TaskParameters {
    /// Which curve.
    pub(crate) curve: Parameter<Words<CurveKind>>,
    /// Exponent of `power`.
    pub(crate) exponent: Parameter<Real>,
    /// Half-saturation of `saturating` and `sigmoid`.
    pub(crate) half: Parameter<Real>,
    /// Steepness of `sigmoid`.
    pub(crate) steepness: Parameter<Real>,
    /// Points of `table`.
    pub(crate) points: Parameter<Points>,
    /// Factor for surface cells.
    pub(crate) surface_effect: Parameter<Real>,
    /// Factor for interior cells.
    pub(crate) interior_effect: Parameter<Real>,
}

impl TaskParameters {
    /// Paths of the keys that shape the curve.
    pub(crate) const fn paths(&self) -> [&'static str; 5] {
        [self.curve.path, self.exponent.path, self.half.path, self.steepness.path, self.points.path]
    }
}

const fn only_for(words: &'static [&'static str]) -> Condition {
    Condition { sibling: "curve", words }
}

const fn effect(path: &'static str, meaning: &'static str) -> Parameter<Real> {
    let domain = Real::from_to(0.0, 1e6);
    Parameter {
        path,
        unit: "none",
        meaning,
        domain,
        default: 1.0,
        required: false,
        condition: None,
    }
}

macro_rules! task_parameters {
    ($table:literal) => {
        TaskParameters {
            curve: Parameter {
                path: concat!($table, ".curve"),
                unit: "none",
                meaning: "Shape of the return on x, the budget over a fully fed cell's income: \
                          power x^a; saturating x(1+K)/(x+K); sigmoid H(x)/H(1) with \
                          H = x^s/(x^s+K^s); table: through points",
                domain: Words {
                    words: &[
                        ("power", CurveKind::Power),
                        ("saturating", CurveKind::Saturating),
                        ("sigmoid", CurveKind::Sigmoid),
                        ("table", CurveKind::Table),
                    ],
                    later: &[],
                },
                default: CurveKind::Power,
                required: false,
                condition: None,
            },
            exponent: Parameter {
                path: concat!($table, ".exponent"),
                unit: "none",
                meaning: "Exponent a: above 1 returns accelerate, below 1 they diminish",
                domain: Real::above_to(0.0, 20.0),
                default: 1.0,
                required: false,
                condition: Some(only_for(&["power"])),
            },
            half: Parameter {
                path: concat!($table, ".half"),
                unit: "none",
                meaning: "K, where x/(x+K) or H reaches a half",
                domain: Real::above_to(0.0, 1e6),
                default: 0.5,
                required: false,
                condition: Some(only_for(&["saturating", "sigmoid"])),
            },
            steepness: Parameter {
                path: concat!($table, ".steepness"),
                unit: "none",
                meaning: "s, how sharply the sigmoid rises at K",
                domain: Real::above_to(0.0, 100.0),
                default: 4.0,
                required: false,
                condition: Some(only_for(&["sigmoid"])),
            },
            points: Parameter {
                path: concat!($table, ".points"),
                unit: "none",
                meaning: "Measured returns as [x, y]; joined by a monotone cubic, \
                          linear beyond the last",
                domain: Points { most: 1000 },
                default: &[[0.0, 0.0], [1.0, 1.0]],
                required: true,
                condition: Some(only_for(&["table"])),
            },
            surface_effect: effect(
                concat!($table, ".surface_effect"),
                "Factor by which the return of a surface cell is multiplied",
            ),
            interior_effect: effect(
                concat!($table, ".interior_effect"),
                "Factor by which the return of an interior cell is multiplied",
            ),
        }
    };
}

/// Returns on the soma budget.
pub(crate) static VIABILITY: TaskParameters = task_parameters!("returns.viability");
/// Returns on the germ budget.
pub(crate) static FECUNDITY: TaskParameters = task_parameters!("returns.fecundity");
