//! What is asked of a scenario as a whole: its outlook, theory's prediction, a run of replicates.
//!
//! Nothing here knows of the command line.

pub mod outlook;
pub mod prediction;
pub mod run;

pub use prediction::Prediction;
