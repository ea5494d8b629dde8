//! A body as sites of a lattice: its geometry, how it grows, which of its cells lie at the surface.
//!
//! Nothing here knows of genotypes or of the ECS.

mod draws;
mod exposure;
mod growth;
mod lattice;
mod placement;
mod route;

pub use draws::standard_normal;
pub use exposure::ExposureMap;
pub use growth::{Arrangement, Growth, Pace};
pub use lattice::{Lattice, NEIGHBOURS, compact_radius_um};

#[cfg(test)]
mod tests;
