//! The scenario: what the user writes, checked and complete.
//!
//! A text is parsed into a tree that remembers where everything stands (`tree`), overrides are
//! put into it (`overrides`), unknown keys are noted (`unknown`), every parameter of the one
//! registry is read from it (`registry`, `read`), and what holds between keys is checked
//! (`relations`). All faults are collected (`notes`) and told at once.

mod curve;
pub mod error;
pub mod fault;
mod nearest;
mod notes;
mod overrides;
mod read;
pub mod reference;
pub mod registry;
mod relations;
mod resolved;
pub mod schema;
pub mod settings;
pub mod template;
mod tree;
mod unknown;

pub use error::{Faults, ScenarioError};
pub use fault::{Fault, FaultKind};
pub use nearest::nearest;
pub use overrides::Override;
pub use read::read_text;
pub use settings::Settings;
