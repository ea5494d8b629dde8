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
    let (from_h, to_h) = (from_h.max(life.adult_h), to_h.min(life.dies_h));
    if to_h <= from_h {
        return 0;
    }
    let already = if from_h > life.adult_h { stock.released_within(from_h - life.adult_h) } else { 0.0 };
    (stock.released_within(to_h - life.adult_h) - already) as u32
}
