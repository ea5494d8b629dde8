//! What is asked of a scenario as a whole.

pub mod outlook;
