//! Time passes in ticks; a tick only batches settlement, all dates within it are exact.

use bevy_ecs::prelude::*;

use crate::world::resources::{Calendar, Clock, Vacancies};

/// Begins the next tick in which something can happen.
///
/// While no site is empty nothing changes before the next event of the calendar, so the ticks up to
/// that one are passed over.
pub fn advance_clock(vacancies: Res<Vacancies>, calendar: Res<Calendar>, mut clock: ResMut<Clock>) {
    let next_h = calendar.next_event_h().filter(|_| vacancies.0.is_empty());
    if let Some(next_h) = next_h {
        #[expect(clippy::cast_sign_loss, reason = "events lie after hour 0")]
        let whole = (next_h / clock.tick_h) as u64;
        clock.ticks = clock.ticks.max(whole);
    }
    // Products, not sums: no rounding accumulates over millions of ticks.
    clock.from_h = (clock.ticks as f64 * clock.tick_h).max(clock.now_h);
    clock.ticks = clock.ticks.saturating_add(1);
    // Beyond 2^53 ticks rounding would hold time still: it goes on at least as far as numbers tell
    // apart, and as the event that is waited for.
    let least_h = clock.from_h.next_up().max(next_h.unwrap_or(0.0));
    clock.now_h = (clock.ticks as f64 * clock.tick_h).max(least_h);
}
