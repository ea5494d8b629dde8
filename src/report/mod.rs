//! Reports, drawn from records only.

pub mod agreement;
pub mod chart;
pub mod screen;
pub mod style;
mod words;

pub use agreement::{Agreement, Circumstances, Judgement, Reason};
pub use screen::{EvolveReport, evolve_report};
pub use style::Style;
