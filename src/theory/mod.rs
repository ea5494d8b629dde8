//! Pure mathematics of the model: return curves, reaction norm, expected lifetime reproduction.
//!
//! Nothing here knows of files, of the ECS or of random populations.

pub mod best;
pub mod body;
pub mod classes;
pub mod closed_forms;
pub mod critical;
pub mod division;
pub mod fitness;
pub mod generalist;
pub mod jet;
pub mod life_history;
pub mod lineage;
pub mod outcome;
pub mod placed;
pub mod quadrature;
pub mod reaction_norm;
pub mod returns;
mod search;
pub mod selection;

pub use best::BestProgramme;
pub use body::{CellKind, Composition, Compositions};
pub use classes::BodyClass;
pub use division::{division_index, division_index_of_classes};
pub use fitness::Model;
pub use generalist::Generalist;
pub use life_history::LifeHistory;
pub use outcome::Outcome;
pub use placed::{PlacedBodies, PlacedBody, PlacedCell, Spread};
pub use reaction_norm::{Cue, CueSet, Programme};
pub use returns::{CurveError, ReturnCurve, TaskReturn};
pub use selection::{CueSelection, Verdict};
