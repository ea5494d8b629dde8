//! One file per mechanism: its systems and how they join the schedule.
#![allow(
    clippy::needless_pass_by_value,
    reason = "a system gets its parameters from the schedule by value"
)]

pub mod ageing;
pub mod budgets;
pub mod clock;
pub mod cues;
pub mod growth;
pub mod landing;
pub mod maturity;
mod plots;
pub mod reproduction;
pub mod settlement;
pub mod support;
pub mod turnover;
pub(super) mod yields;

use bevy_ecs::query::QueryNotDenseError;

/// The one table that holds all entities of a query.
///
/// # Panics
/// When entities of the query were spawned with different bundles, which the world never does.
pub(super) fn only_table<T>(tables: Result<impl Iterator<Item = T>, QueryNotDenseError>) -> T {
    let table = tables.ok().and_then(|mut tables| tables.next());
    table.expect("all cells, and all colonies, are spawned at once with one bundle")
}
