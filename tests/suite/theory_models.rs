//! Models that the theory checks share, and tables they are checked against.

use somadawn::theory::reaction_norm::NOISE_BIAS_BOUND;
use somadawn::theory::{
    CellKind, Composition, Compositions, Cue, CueSet, LifeHistory, Model, ReturnCurve, TaskReturn,
};

/// A task with a power curve, the same inside and at the surface.
pub(crate) fn power(exponent: f64) -> TaskReturn {
    TaskReturn {
        curve: ReturnCurve::power(exponent).expect("legal exponent"),
        surface_effect: 1.0,
        interior_effect: 1.0,
    }
}

/// A life without growth in which R0 is `E[mean v * mean b]` per cell of a unit-cost body:
/// `e0 = c_p = m0 = 1`.
pub(crate) fn bare_life() -> LifeHistory {
    LifeHistory {
        propagule_cells: 1,
        adult_cells: 1,
        propagule_cost_eu: 1.0,
        adult_hazard_per_h: 1.0,
        extrinsic_hazard_per_h: 0.0,
        juvenile_hazard_per_h: 0.0,
        income_eu_per_h: 1.0,
        upkeep_eu_per_h: 0.0,
        division_cost_eu: 1.0,
        cost_per_unit: 0.0,
    }
}

pub(crate) fn only(cue: Cue) -> CueSet {
    CueSet::EMPTY.with(cue)
}

/// Bodies of `n` cells at the surface; `None`: the limit of large bodies, per cell.
pub(crate) fn bodies(n: Option<u64>) -> Compositions {
    let founder = CellKind { label: 0, exposed: true };
    let body = match n {
        Some(n) => Composition::uniform(n),
        None => Composition::endless([(founder, 1.0)]),
    };
    vec![(1.0, body)]
}

/// Power returns, independent random fates.
pub(crate) fn random_fates(a: f64, c: f64, n: Option<u64>) -> Model {
    Model::new(bare_life(), [power(a), power(c)], only(Cue::Noise), &bodies(n))
}

/// Rows of a table of numbers in `tests/data`; cells that are not numbers become NaN.
pub(crate) fn rows(table: &str) -> Vec<Vec<f64>> {
    let mut reader = csv::Reader::from_reader(table.as_bytes());
    let parsed = reader.records().map(|row| {
        let row = row.expect("a row of the table");
        row.iter().map(|cell| cell.parse().unwrap_or(f64::NAN)).collect()
    });
    parsed.collect()
}

/// The same model with bounds so wide that they do not hold the traits back.
pub(crate) fn unbounded(model: Model) -> Model {
    model.with_bounds(40.0, NOISE_BIAS_BOUND)
}
