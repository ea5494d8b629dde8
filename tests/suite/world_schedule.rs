//! The schedule of a tick is a total order: whatever could be ordered two ways is refused.

use bevy_ecs::prelude::*;
use somadawn::world::resources::{Ledger, Random, Vacancies};
use somadawn::world::schedule::{founding_schedule, tick_schedule};

#[test]
fn the_schedules_hold_no_ambiguous_pair() {
    for mut schedule in [tick_schedule(), founding_schedule()] {
        schedule.initialize(&mut World::new()).expect("no pair of systems is ambiguous");
    }
}

/// Detection is on: a system that touches what others touch, and says not when, is an error.
#[test]
fn an_unordered_system_that_conflicts_is_refused() {
    fn draw(_: ResMut<Random>) {}
    fn count(_: Res<Ledger>, _: ResMut<Vacancies>) {}
    let mut drawing = tick_schedule();
    drawing.add_systems(draw);
    assert!(drawing.initialize(&mut World::new()).is_err());
    let mut counting = tick_schedule();
    counting.add_systems(count);
    assert!(counting.initialize(&mut World::new()).is_err());
}
