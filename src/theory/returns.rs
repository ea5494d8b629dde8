//! Return curves: what a task yields for a share of a fully fed cell's budget.

/// A return curve on x in [0, inf), x being a budget over `income_eu_per_h`.
#[derive(Debug, Clone, PartialEq)]
pub enum ReturnCurve {
    /// `x^a`: accelerating for a > 1, diminishing for a < 1.
    Power {
        /// Exponent a > 0.
        exponent: f64,
    },
}

impl ReturnCurve {
    /// The return at `x` >= 0 (dimensionless).
    #[must_use]
    pub fn value(&self, x: f64) -> f64 {
        match self {
            Self::Power { exponent } => libm::pow(x, *exponent),
        }
    }
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
