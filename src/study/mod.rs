//! What is asked of a scenario as a whole.

pub mod outlook;
pub mod prediction;

pub use prediction::Prediction;
