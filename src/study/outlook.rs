//! What follows from a scenario before anything is simulated: the `check` command's document.

use serde::Serialize;

use crate::scenario::Settings;
use crate::theory::Cue;

mod bodies;
mod cost;
mod judge;
mod selection;
mod transport;
mod warning;

use bodies::Bodies;
pub use bodies::BodyOutlook;
pub use cost::Cost;
use judge::Scene;
pub use selection::{Pull, Selection};
pub use transport::{LARGEST_LOOKED_AT, SupportOutlook, TransportOutlook, critical_diameter_um};
pub use warning::{Advice, Warning};

/// What follows from a scenario.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Outlook {
    /// The scenario's title.
    pub title: String,
    /// The adult body.
    pub body: BodyOutlook,
    /// Supply by diffusion; null where every cell is fully fed.
    pub transport: Option<TransportOutlook>,
    /// Sharing of support; null where support is pooled.
    pub support: Option<SupportOutlook>,
    /// Times of the generalist's life.
    pub time: TimeOutlook,
    /// Mutations expected among the settlers of one generation, `N * traits * mu`.
    pub mutations_per_generation: f64,
    /// What a run is expected to take.
    pub cost: Cost,
    /// What may disappoint, each with a remedy.
    pub warnings: Vec<Advice>,
}

/// Times of the generalist's life.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct TimeOutlook {
    /// From founding to adulthood, h.
    pub growth_h: f64,
    /// Mean age of a parent at the birth of a propagule, h.
    pub generation_h: f64,
}

impl Outlook {
    /// What follows from `settings`, given what theory says of the generalist and how many
    /// threads a run will have.
    #[must_use]
    pub fn of(settings: &Settings, selection: &Selection, threads: usize) -> Self {
        let bodies = Bodies::of(settings);
        let body = bodies.outlook(settings);
        let transport = TransportOutlook::of(settings, &bodies, &body);
        let support = SupportOutlook::of(settings, &body);
        let Selection { growth_h, generation_h, .. } = *selection;
        let time = TimeOutlook { growth_h, generation_h };
        let scene = Scene { settings, selection, bodies: &bodies, body: &body };
        let warnings = scene.warnings(transport.as_ref(), support.as_ref());
        Self {
            title: settings.title.clone(),
            transport,
            support,
            mutations_per_generation: mutations_per_generation(settings),
            cost: Cost::of(settings, &time, threads),
            time,
            warnings: warnings.iter().map(Warning::advice).collect(),
            body,
        }
    }
}

/// Heritable traits of a scenario: the baseline, one responsiveness per cue, and noise's bias.
#[must_use]
pub fn heritable_traits(settings: &Settings) -> usize {
    let cues = settings.traits.cues;
    1 + cues.iter().count() + usize::from(cues.contains(Cue::Noise))
}

fn mutations_per_generation(settings: &Settings) -> f64 {
    let traits = heritable_traits(settings);
    settings.habitat.sites as f64 * traits as f64 * settings.traits.mutation_probability
}

#[cfg(test)]
mod tests;
