//! Cues are read once, when a colony becomes adult.

use bevy_ecs::prelude::*;
use rand::Rng;

use super::only_table;
use crate::theory::Cue;
use crate::world::components::{CellCount, CueMeans, DivisionLabel, Exposed, NoiseDraw};
use crate::world::resources::{GenePool, Maturing, Random, Rules};

/// Draws each cell's luck and finds the means by which the other cues are centred.
pub fn read_cues(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    pool: Res<GenePool>,
    mut random: ResMut<Random>,
    mut cells: Query<(&DivisionLabel, &Exposed, &mut NoiseDraw)>,
    mut colonies: Query<(&CellCount, &mut CueMeans)>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let (labels, exposed, mut draws) = only_table(cells.contiguous_iter_mut());
    let draws = draws.bypass_change_detection();
    let (counts, mut means) = only_table(colonies.contiguous_iter_mut());
    let means = means.bypass_change_detection();
    let cues = rules.0.traits.cues;
    let capacity = rules.0.body.adult_cells;
    for &site in &maturing.0 {
        let rows = counts[site as usize].rows(site as usize, capacity);
        let n = rows.len();
        let mean = &mut means[site as usize];
        if cues.contains(Cue::Noise) {
            let p = pool.0[site as usize].programme.noise_probability();
            draw_noise(&mut draws[rows.clone()], p, &mut random.0);
            mean.noise = 2.0 * p - 1.0;
        }
        if cues.contains(Cue::Lineage) {
            mean.lineage = mean_label(&labels[rows.clone()]);
        }
        if cues.contains(Cue::Exposure) {
            let count = exposed[rows].iter().filter(|cell| cell.0).count();
            mean.exposure = count as f64 / n as f64;
        }
    }
}

/// Mean division label of a body.
pub(super) fn mean_label(labels: &[DivisionLabel]) -> f64 {
    let sum: i64 = labels.iter().map(|label| i64::from(label.0)).sum();
    sum as f64 / labels.len() as f64
}

/// +1 with probability `p` to a resolution of 2^-32, else -1, independently for each cell.
pub(super) fn draw_noise(draws: &mut [NoiseDraw], p: f64, rng: &mut impl Rng) {
    #[expect(clippy::cast_sign_loss, reason = "a probability is at least 0")]
    let threshold = (p * 4_294_967_296.0) as u64;
    let sign = |bits: u64| NoiseDraw(if bits < threshold { 1 } else { -1 });
    let (pairs, last) = draws.as_chunks_mut::<2>();
    for pair in pairs {
        let random = rng.next_u64();
        *pair = [sign(random >> 32), sign(random & 0xffff_ffff)];
    }
    for draw in last {
        *draw = sign(rng.next_u64() >> 32);
    }
}
