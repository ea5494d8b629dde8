//! Support: what cells receive of the viability task's product, and what the body makes of it.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::world::components::{Output, Vitals};
use crate::world::resources::{Maturing, Rules};

/// Pools support over each colony that becomes adult: `S_i = mean_j v_j`, so `V = mean_j v_j`; and
/// sums fecundity, `B = sum_i b_i`.
pub fn pool_support(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    mut cells: Query<&Output>,
    mut colonies: Query<&mut Vitals>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let outputs = only_table(cells.contiguous_iter_mut());
    let mut vitals = only_table(colonies.contiguous_iter_mut());
    let vitals = vitals.bypass_change_detection();
    let n = rules.0.body.adult_cells;
    for &site in &maturing.0 {
        let body = &outputs[site as usize * n..(site as usize + 1) * n];
        let [viability, fecundity] = summed(body);
        vitals[site as usize].viability = viability / n as f64;
        vitals[site as usize].fecundity = fecundity;
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
