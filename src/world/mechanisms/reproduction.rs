//! Adults release propagules as their stock allows.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::world::components::{Lifespan, PropaguleStock};
use crate::world::resources::{Clock, Released, Vacancies};

/// Counts the propagules that each colony released in this tick, up to its death.
///
/// Propagules that leave while no site is empty are lost, so that ticks without a vacancy cost
/// nothing here.
pub fn release_propagules(
    clock: Res<Clock>,
    vacancies: Res<Vacancies>,
    mut released: ResMut<Released>,
    mut colonies: Query<(&Lifespan, &PropaguleStock)>,
) {
    released.total = 0;
    if vacancies.0.is_empty() {
        return;
    }
    let (lives, stocks) = only_table(colonies.contiguous_iter_mut());
    let Released { by_site, total } = &mut *released;
    for ((count, life), stock) in by_site.iter_mut().zip(lives).zip(stocks) {
        *count = released_between(life, stock, clock.from_h, clock.now_h);
        *total += u64::from(*count);
    }
}

fn released_between(life: &Lifespan, stock: &PropaguleStock, from_h: f64, to_h: f64) -> u32 {
    // Dates of a colony that is not adult in this tick make both ends equal.
    let ends = [from_h, to_h].map(|hour| hour.min(life.dies_h).max(life.adult_h) - life.adult_h);
    // Nor does one that never matures release anything: its hours are not numbers.
    if ends[1].total_cmp(&ends[0]).is_le() || ends[1].is_nan() {
        return 0;
    }
    let [before, after] = ends.map(|hours| stock.released_within(hours));
    (after - before) as u32
}
