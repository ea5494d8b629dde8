//! Adults release propagules as their stock allows.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::world::components::{HeadStart, PropaguleStock, StockRate, StockSince, StockUntil};
use crate::world::resources::{Clock, EarlierReleases, Released, Vacancies};

/// Counts the propagules that each colony released in this tick, up to its death.
///
/// Propagules that leave while no site is empty are lost, so that ticks without a vacancy cost
/// nothing here.
pub fn release_propagules(
    clock: Res<Clock>,
    vacancies: Res<Vacancies>,
    earlier: Res<EarlierReleases>,
    mut released: ResMut<Released>,
    mut colonies: Query<(&StockSince, &StockUntil, &HeadStart, &StockRate)>,
) {
    released.total = 0;
    if vacancies.0.is_empty() {
        return;
    }
    let (since, until, head_starts, rates) = only_table(colonies.contiguous_iter_mut());
    let Released { by_site, total } = &mut *released;
    let stocks = since.iter().zip(until).zip(head_starts).zip(rates);
    for (count, (((since, until), head_start), rate)) in by_site.iter_mut().zip(stocks) {
        let (since, until, head_start, rate) = (*since, *until, *head_start, *rate);
        let stock = PropaguleStock { since, until, head_start, rate };
        let here = stock.released_between(clock.from_h, clock.now_h);
        *count = here as u32;
        *total += here;
    }
    for (site, count) in &earlier.of_tick {
        let here = &mut by_site[*site as usize];
        *here = here.saturating_add(*count as u32);
        *total += count;
    }
}
