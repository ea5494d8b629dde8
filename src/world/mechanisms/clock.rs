//! Time passes in ticks; a tick only batches settlement, all dates within it are exact.

use bevy_ecs::prelude::*;

use crate::world::resources::{Calendar, Clock, Vacancies};

/// Begins the next tick in which something can happen.
///
/// While no site is empty nothing changes before the next event of the calendar, so the ticks up to
/// that one are passed over.
pub fn advance_clock(vacancies: Res<Vacancies>, calendar: Res<Calendar>, mut clock: ResMut<Clock>) {
    if vacancies.0.is_empty()
        && let Some(next_h) = calendar.next_event_h()
    {
        clock.ticks = clock.ticks.max((next_h / clock.tick_h) as u64);
    }
    // Products, not sums: no rounding accumulates over millions of ticks.
    clock.from_h = clock.ticks as f64 * clock.tick_h;
    clock.ticks += 1;
    clock.now_h = clock.ticks as f64 * clock.tick_h;
}
