//! Where evolution starts, as far as the scenario leaves it to theory.

use super::prediction::model;
use crate::evolution::Start;
use crate::scenario::Settings;
use crate::scenario::settings::{Baseline, Tick};
use crate::theory::{Generalist, Model, Programme};

/// Ticks per generation of the generalist, where the scenario leaves the tick to the program.
///
/// A vacant site waits half a tick longer than it would, which is 0.5 % of a generation: below the
/// 1 % that a tick may change any expected value.
const TICKS_PER_GENERATION: f64 = 100.0;

/// What every replicate of a scenario starts from.
#[must_use]
pub fn start(settings: &Settings) -> Start {
    let model = model(settings);
    let generalist = model.generalist();
    let baseline = match settings.traits.baseline {
        Baseline::Optimum => generalist.baseline,
        Baseline::At(logit) => logit,
    };
    let responsiveness = settings.traits.start;
    let tick_h = match settings.run.tick {
        Tick::Hours(hours) => hours,
        Tick::Auto => auto_tick_h(&model, &generalist),
    };
    Start { programme: Programme { responsiveness, ..Programme::generalist(baseline) }, tick_h }
}

/// A share of the generalist's generation time; of a life at unit viability where no generalist
/// lives.
fn auto_tick_h(model: &Model, generalist: &Generalist) -> f64 {
    let generation_h = model.generation_h(generalist);
    let life = model.life();
    let hazard_per_h = life.extrinsic_hazard_per_h + life.adult_hazard_per_h;
    let whole = if generation_h.is_finite() { generation_h } else { 1.0 / hazard_per_h };
    whole / TICKS_PER_GENERATION
}
