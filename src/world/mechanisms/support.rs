//! Support: what cells receive of the viability task's product, and what the body makes of it.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::tissue::fields::viability;
use crate::tissue::{BodyGraph, Sharing, SteadySolver};
use crate::world::components::{CellCount, Output, Support, Vitals};
use crate::world::nursery::SharedBodies;
use crate::world::resources::{Maturing, Rules};

/// Pools support over each colony that becomes adult: `S_i = mean_j v_j`, so `V = mean_j v_j`; and
/// sums fecundity, `B = sum_i b_i`.
pub fn pool_support(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    mut cells: Query<&Output>,
    mut colonies: Query<(&CellCount, &mut Vitals)>,
) {
    if maturing.0.is_empty() || rules.0.support.is_some() {
        return;
    }
    let outputs = only_table(cells.contiguous_iter_mut());
    let (counts, mut vitals) = only_table(colonies.contiguous_iter_mut());
    let vitals = vitals.bypass_change_detection();
    for &site in &maturing.0 {
        let here = site as usize;
        let body = &outputs[counts[here].rows(here, rules.0.body.adult_cells)];
        [vitals[here].viability, vitals[here].fecundity] = pooled(body);
    }
}

/// Viability and fecundity of a body whose support is pooled.
pub(super) fn pooled(body: &[Output]) -> [f64; 2] {
    let [viability, fecundity] = summed(body);
    [viability / body.len() as f64, fecundity]
}

/// Working memory of local support.
#[derive(Debug)]
pub struct Spreading {
    solver: SteadySolver,
    output: Vec<f64>,
    support: Vec<f64>,
}

impl Default for Spreading {
    fn default() -> Self {
        Self { solver: SteadySolver::working(), output: Vec::new(), support: Vec::new() }
    }
}

/// Spreads support by local transport over each colony that becomes adult, `V = n / sum_i (1/S_i)`
/// (0 if any `S_i` is 0); and sums fecundity, `B = sum_i b_i`.
pub fn spread_support(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    bodies: Res<SharedBodies>,
    mut memory: Local<Spreading>,
    mut cells: Query<(&Output, &mut Support)>,
    mut colonies: Query<(&CellCount, &mut Vitals)>,
) {
    let Some(sharing) = rules.0.sharing() else { return };
    if maturing.0.is_empty() {
        return;
    }
    let (outputs, mut received) = only_table(cells.contiguous_iter_mut());
    let received = received.bypass_change_detection();
    let (counts, mut vitals) = only_table(colonies.contiguous_iter_mut());
    let vitals = vitals.bypass_change_detection();
    for &site in &maturing.0 {
        let here = site as usize;
        let body = bodies.shared_by(here);
        let rows = counts[here].rows(here, rules.0.body.adult_cells);
        let graph = &body.development.graph;
        let body = &outputs[rows.clone()];
        [vitals[here].viability, vitals[here].fecundity] =
            memory.spread(graph, &sharing, body, &mut received[rows]);
    }
}

impl Spreading {
    /// Sets the support that each cell receives; viability and fecundity of the body.
    pub(super) fn spread(
        &mut self,
        graph: &BodyGraph,
        sharing: &Sharing,
        body: &[Output],
        received: &mut [Support],
    ) -> [f64; 2] {
        let Self { solver, output, support } = self;
        output.clear();
        output.extend(body.iter().map(|cell| f64::from(cell.viability)));
        support.resize(output.len(), 0.0);
        solver.support(graph, sharing, output, support);
        for (cell, support) in received.iter_mut().zip(&*support) {
            *cell = Support(*support as f32);
        }
        [viability(support), summed(body)[1]]
    }
}

/// Sums of viability and fecundity outputs, in several strands that the processor adds side by side.
fn summed(body: &[Output]) -> [f64; 2] {
    const STRANDS: usize = 4;
    let mut sums = [[0.0_f64; 2]; STRANDS];
    let (chunks, rest) = body.as_chunks::<STRANDS>();
    for chunk in chunks {
        for (sum, output) in sums.iter_mut().zip(chunk) {
            sum[0] += f64::from(output.viability);
            sum[1] += f64::from(output.fecundity);
        }
    }
    for (sum, output) in sums.iter_mut().zip(rest) {
        sum[0] += f64::from(output.viability);
        sum[1] += f64::from(output.fecundity);
    }
    sums.into_iter().fold([0.0; 2], |total, sum| [total[0] + sum[0], total[1] + sum[1]])
}
