//! The ECS: cells and colonies as entities, one file per mechanism, one schedule.
//!
//! Nothing here knows of files or of replicates.

pub mod components;
pub mod dispersal;
pub mod draws;
pub mod mechanisms;
pub mod nursery;
pub mod population;
pub mod resources;
pub mod schedule;

pub use population::{ColonyView, Population};
