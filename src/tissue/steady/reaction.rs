//! What cells do to the field around them: a rate that rises with the concentration, ever less so.

use crate::tissue::fields::{Nutrient, Waste};

/// A cell's own part in a field's balance `conductance u - inflow + rate(u) = 0`.
///
/// Rates are concave and rise with u; below 0 they are continued along their tangent at 0.
pub(super) trait Reaction {
    /// Rate at concentration `u`, and its slope.
    fn rate(&self, cell: usize, u: f64) -> [f64; 2];

    /// The concentration at or above 0 that balances an inflow at or above 0.
    fn balance(&self, cell: usize, conductance: f64, inflow: f64) -> f64;
}

impl Reaction for Nutrient {
    fn rate(&self, _: usize, u: f64) -> [f64; 2] {
        let Self { demand, kappa, .. } = *self;
        if u < 0.0 {
            return [demand / kappa * u, demand / kappa];
        }
        let whole = kappa + u;
        [demand * u / whole, demand * kappa / (whole * whole)]
    }

    fn balance(&self, _: usize, conductance: f64, inflow: f64) -> f64 {
        let Self { demand, kappa, .. } = *self;
        // The positive root of s u + demand u / (kappa + u) = r, without subtracting near equals.
        let b = conductance * kappa + demand - inflow;
        let root = (b * b + 4.0 * conductance * inflow * kappa).sqrt();
        if b > 0.0 { 2.0 * inflow * kappa / (b + root) } else { (root - b) / (2.0 * conductance) }
    }
}

/// Cells that release waste.
pub(super) struct Release<'a> {
    pub(super) waste: &'a Waste,
    /// What each cell would earn without waste.
    pub(super) fed: &'a [f64],
}

impl Reaction for Release<'_> {
    fn rate(&self, cell: usize, w: f64) -> [f64; 2] {
        let source = self.waste.release * self.fed[cell];
        if w < 0.0 {
            return [source * (w - 1.0), source];
        }
        let dampened = source / (1.0 + w);
        [-dampened, dampened / (1.0 + w)]
    }

    fn balance(&self, cell: usize, conductance: f64, inflow: f64) -> f64 {
        // The root of s w - source / (1 + w) = r at or above r / s.
        let source = self.waste.release * self.fed[cell];
        let b = conductance - inflow;
        let root = (b * b + 4.0 * conductance * (source + inflow)).sqrt();
        if b > 0.0 {
            2.0 * (source + inflow) / (b + root)
        } else {
            (root - b) / (2.0 * conductance)
        }
    }
}

/// Support: cells put it out at a given rate, and use it up in proportion to what there is.
pub(super) struct Supply<'a> {
    /// Put out by each cell, over the conductance of a bond.
    pub(super) output: &'a [f64],
    /// Used up at support 1, over the conductance of a bond.
    pub(super) use_rate: f64,
}

impl Reaction for Supply<'_> {
    fn rate(&self, cell: usize, support: f64) -> [f64; 2] {
        [self.use_rate * (support - self.output[cell]), self.use_rate]
    }

    fn balance(&self, cell: usize, conductance: f64, inflow: f64) -> f64 {
        (inflow + self.use_rate * self.output[cell]) / (conductance + self.use_rate)
    }
}
