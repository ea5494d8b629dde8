//! What is asked of a scenario as a whole: its outlook, theory's prediction, a run of replicates.
//!
//! Nothing here knows of the command line.

pub mod evolve;
pub mod outlook;
pub mod prediction;
pub mod run;
mod start;

pub use outlook::Outlook;
pub use prediction::Prediction;
pub use start::start;
