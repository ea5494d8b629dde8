//! The driver of one replicate: founding, running from census to census, watching, onset.
//!
//! Nothing here knows of the command line.

mod bodies;
mod census;
mod onset;
mod relatedness;
mod replicate;
mod route;
pub mod seeding;

pub use onset::OnsetWatch;
pub use replicate::{Replicate, Start};
