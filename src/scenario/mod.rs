//! The scenario: what the user writes, checked and complete.

pub mod settings;

pub use settings::Settings;
