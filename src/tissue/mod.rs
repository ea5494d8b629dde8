//! A body as sites of a lattice: its geometry, how it grows, which of its cells lie at the surface.
//!
//! Nothing here knows of genotypes or of the ECS.

mod development;
mod draws;
mod exposure;
mod fed;
pub mod fields;
mod graph;
mod growth;
mod lattice;
mod layout;
mod placement;
mod plan;
mod route;
mod steady;

pub use development::{Developer, Development, Ending, GrowthRules};
pub use draws::standard_normal;
pub use exposure::ExposureMap;
pub use fed::largest_fed_cells;
pub use fields::{Fields, Nutrient, Sharing, Waste};
pub use graph::{BodyGraph, SITES_AROUND};
pub use growth::{Arrangement, Growth, Pace};
pub use lattice::{Lattice, NEIGHBOURS, compact_radius_um, site_position_um};
pub use layout::plan_radius_um;
pub use plan::Plan;
pub use steady::SteadySolver;

#[cfg(test)]
mod tests;
