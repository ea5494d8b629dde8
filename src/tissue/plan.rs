//! Body plans: how a daughter cell is placed.

use super::lattice::compact_radius_um;
use super::layout::shell_radius_diameters;

/// How a daughter cell is placed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Plan {
    /// Next to its mother, pushing cells towards the vacant site nearest the body's centre: the body
    /// stays compact.
    Clump,
    /// Next to its mother in a line, shifting the rest: every cell is surface.
    Chain,
    /// Only on an empty neighbour site of its mother; a mother without one cannot divide.
    Tree,
    /// Compact growth; at adulthood the cells lie on the lattice sites nearest a sphere's surface:
    /// every cell is surface.
    Shell,
}

/// Typical radius of a body of `cells` cells, um: of the ball of the body's volume for `clump` and
/// `tree`, half the length for `chain`, and of the sphere on which the cells lie for `shell`,
/// `d sqrt(n sqrt(3) / (8 pi))`.
#[must_use]
pub fn plan_radius_um(plan: Plan, cells: usize, cell_diameter_um: f64) -> f64 {
    match plan {
        Plan::Clump | Plan::Tree => compact_radius_um(cells, cell_diameter_um),
        Plan::Chain => cells as f64 * cell_diameter_um / 2.0,
        Plan::Shell => shell_radius_diameters(cells) * cell_diameter_um,
    }
}
