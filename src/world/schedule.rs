//! The one place that says in which order things happen within a tick.

use bevy_ecs::prelude::*;
use bevy_ecs::schedule::{LogLevel, ScheduleBuildSettings, SingleThreadedExecutor};

use super::mechanisms::{
    ageing, budgets, clock, cues, growth, maturity, reproduction, settlement, support, turnover,
};

/// The schedule of a tick: a total order; an ambiguous pair of systems is an error when it is built.
#[must_use]
pub fn tick_schedule() -> Schedule {
    let mut schedule = Schedule::default();
    schedule.set_executor(SingleThreadedExecutor::new());
    schedule.set_build_settings(ScheduleBuildSettings {
        ambiguity_detection: LogLevel::Error,
        ..Default::default()
    });
    schedule.add_systems(
        (
            clock::advance_clock,
            maturity::wake_juveniles,
            cues::read_cues,
            budgets::split_budgets,
            turnover::charge_replacements,
            support::pool_support,
            support::spread_support,
            ageing::set_lifespans,
            turnover::replace_cells,
            ageing::bury_colonies,
            reproduction::release_propagules,
            settlement::settle_propagules,
            settlement::found_colonies,
            growth::grow_cells,
        )
            .chain(),
    );
    schedule
}

/// The schedule that grows the founders of a population before its first tick.
#[must_use]
pub fn founding_schedule() -> Schedule {
    let mut schedule = Schedule::default();
    schedule.set_executor(SingleThreadedExecutor::new());
    schedule.add_systems((settlement::found_colonies, growth::grow_cells).chain());
    schedule
}
