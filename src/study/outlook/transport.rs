//! What diffusion does to a body: supply of its cells, and reach of its support.

use serde::Serialize;

use super::bodies::{Bodies, BodyOutlook};
use crate::scenario::Settings;
use crate::tissue::{Nutrient, Plan, largest_fed_cells};

/// Cells of the largest body in which hunger is looked for.
pub const LARGEST_LOOKED_AT: usize = 100_000;

/// Supply by diffusion.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TransportOutlook {
    /// Depth to which the bath has to reach (R), um: the radius of the ball of the body's volume for
    /// `clump` and `tree`; half a cell's diameter for `chain` and `shell`, whose cells all touch it.
    pub depth_um: f64,
    /// Thiele modulus of first-order uptake, `R sqrt(k/D)` with `k = q_max / (K V_cell)` (Thiele
    /// 1939); null without nutrient.
    pub thiele_modulus: Option<f64>,
    /// Diameter beyond which a ball's centre is empty if uptake never slackens, um (see
    /// [`critical_diameter_um`]); null without nutrient.
    pub critical_diameter_um: Option<f64>,
    /// Share of the income that diffusion costs, in [0, 1]: over a few adult bodies.
    pub income_lost_share: f64,
    /// Cells of the largest body none of whose cells earns less than its upkeep; null where there is
    /// no larger one of up to [`LARGEST_LOOKED_AT`] cells.
    pub largest_fed_cells: Option<usize>,
}

/// Sharing of support.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SupportOutlook {
    /// Range of sharing over the body's radius.
    pub range_over_radius: f64,
}

impl TransportOutlook {
    /// What diffusion does to bodies of `settings`; none where every cell is fully fed.
    pub(super) fn of(settings: &Settings, bodies: &Bodies, body: &BodyOutlook) -> Option<Self> {
        let fields = settings.fields();
        if !fields.act() {
            return None;
        }
        let diameter_um = settings.body.cell_diameter_um;
        let depth_um = match settings.body.plan {
            Plan::Clump | Plan::Tree => body.radius_um,
            Plan::Chain | Plan::Shell => diameter_um / 2.0,
        };
        let thiele = |nutrient: &Nutrient| nutrient.thiele_modulus(depth_um / diameter_um);
        let critical = |nutrient: &Nutrient| critical_diameter_um(nutrient, diameter_um);
        Some(Self {
            depth_um,
            thiele_modulus: fields.nutrient.as_ref().map(thiele),
            critical_diameter_um: fields.nutrient.as_ref().map(critical),
            income_lost_share: 1.0 - bodies.mean_income,
            largest_fed_cells: largest_fed(settings),
        })
    }
}

impl SupportOutlook {
    /// How far support reaches in bodies of `settings`; none where it is pooled.
    pub(super) fn of(settings: &Settings, body: &BodyOutlook) -> Option<Self> {
        let range_um = |support: &crate::scenario::settings::Support| {
            support.range_diameters * settings.body.cell_diameter_um
        };
        let support = settings.support.as_ref()?;
        Some(Self { range_over_radius: range_um(support) / body.radius_um })
    }
}

/// Without upkeep no income is below it.
fn largest_fed(settings: &Settings) -> Option<usize> {
    if settings.budget.upkeep_eu_per_h <= 0.0 {
        return None;
    }
    largest_fed_cells(&settings.growth_rules(), LARGEST_LOOKED_AT)
}

/// Diameter of the ball whose centre is just reached, um, if every cell takes up `q_max` however
/// little there is: `2 sqrt(6 D C0 / q)`, with q the uptake per volume of a cell's site,
/// `q_max / (d^3 / sqrt 2)` (Hill 1928; Warburg 1923 for slices).
///
/// In the solver's units, where `demand = q_max 2 sqrt(2) / (D d C0)`, that is
/// `2 d sqrt(12 / demand)`.
#[must_use]
pub fn critical_diameter_um(nutrient: &Nutrient, cell_diameter_um: f64) -> f64 {
    2.0 * cell_diameter_um * (12.0 / nutrient.demand).sqrt()
}
