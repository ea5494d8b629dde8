//! Sampled bodies: the cells of a few adult colonies, for looking at.

use crate::record::{BodyRow, Stage};
use crate::world::{ColonyView, Population};

/// Adult colonies sampled at a stage; sites being alike, the first in site order serve.
const SAMPLED_BODIES: usize = 3;

/// Rows for the cells of a few adult colonies.
pub(super) fn sample(
    population: &mut Population,
    replicate: u32,
    stage: Stage,
    cell_diameter_um: f64,
) -> Vec<BodyRow> {
    let generation = population.clock().generation;
    population
        .adults()
        .take(SAMPLED_BODIES)
        .flat_map(|body| cells(body, cell_diameter_um))
        .map(|row| BodyRow { replicate, stage, generation, ..row })
        .collect()
}

fn cells(body: ColonyView<'_>, cell_diameter_um: f64) -> Vec<BodyRow> {
    let row = |cell: usize| {
        let [x, y, z] = body.position_um(cell, cell_diameter_um);
        BodyRow {
            replicate: 0,
            stage: Stage::End,
            generation: 0.0,
            site: body.site as u32,
            cell: cell as u32,
            x_um: x as f32,
            y_um: y as f32,
            z_um: z as f32,
            soma_share: body.shares[cell].0,
            income_eu_per_h: body.budgets[cell].soma_eu_per_h + body.budgets[cell].germ_eu_per_h,
            support: body.support(cell),
            exposed: body.exposed[cell].0,
            label: body.labels[cell].0,
        }
    };
    (0..body.shares.len()).map(row).collect()
}
