//! Pure mathematics of the model: return curves, reaction norm, expected lifetime reproduction.
//!
//! Nothing here knows of files, of the ECS or of random populations.

pub mod reaction_norm;
pub mod returns;

pub use reaction_norm::{Cue, CueSet, Programme};
pub use returns::{ReturnCurve, TaskReturn};
