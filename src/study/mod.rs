//! Whole studies of a scenario.

pub mod prediction;

pub use prediction::Prediction;
