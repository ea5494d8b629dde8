//! Time passes in ticks; a tick only batches settlement, all dates within it are exact.

use bevy_ecs::prelude::*;

use crate::world::resources::Clock;

/// Begins the next tick.
pub fn advance_clock(mut clock: ResMut<Clock>) {
    clock.ticks += 1;
    clock.from_h = clock.now_h;
    // A product, not a sum: no rounding accumulates over millions of ticks.
    clock.now_h = clock.ticks as f64 * clock.tick_h;
}
