//! Growing colonies become adult.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::world::components::Phase;
use crate::world::resources::{Calendar, Clock, Maturing};

/// Lists the colonies that become adult in this tick and marks them adult.
pub fn wake_juveniles(
    clock: Res<Clock>,
    mut calendar: ResMut<Calendar>,
    mut maturing: ResMut<Maturing>,
    mut colonies: Query<&mut Phase>,
) {
    maturing.0.clear();
    while let Some(event) = calendar.next_adulthood(clock.now_h) {
        maturing.0.push(event.site);
    }
    if !maturing.0.is_empty() {
        let mut phases = only_table(colonies.contiguous_iter_mut());
        let phases = phases.bypass_change_detection();
        for &site in &maturing.0 {
            phases[site as usize] = Phase::Adult;
        }
    }
}
