//! What theory says of a scenario, without simulating a population.
//!
//! The time of growth is that of synchronous rounds, as with `division_cv = 0`, also where division
//! costs vary; the labels that growth leaves are then those of a sample of bodies. Where it matters
//! where in the body a cell lies, theory is told of a sample of bodies cell by cell.

mod bodies;
mod reach;

use std::collections::BTreeMap;

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use serde::Serialize;

use crate::scenario::Settings;
use crate::theory::best::BETTER;
use crate::theory::body::joined;
use crate::theory::critical::{global_critical, local_critical};
use crate::theory::lineage::label_compositions;
use crate::theory::placed::Sample;
use crate::theory::reaction_norm::NOISE_BIAS_BOUND;
use crate::theory::{
    BestProgramme, BodyClass, CellKind, Composition, Compositions, Cue, CueSelection, Generalist,
    LifeHistory, Model, Verdict,
};
use crate::tissue::{Growth, Pace};

/// What `predict --json` prints. Numbers that are not finite are null.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Prediction {
    /// The scenario's title.
    pub title: String,
    /// The best body whose cells are all alike.
    pub generalist: GeneralistPart,
    /// Selection on each enabled cue at that generalist.
    pub cues: Vec<CuePart>,
    /// The best programme over all heritable traits.
    pub best: BestPart,
    /// The overall verdict.
    pub verdict: Verdict,
    /// Where verdicts change, if that was asked for.
    pub critical: Option<CriticalPart>,
    /// What the numbers rest on, where bodies are known cell by cell.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sampling: Option<SamplingPart>,
}

/// What numbers about bodies that are known cell by cell rest on.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct SamplingPart {
    /// Bodies grown.
    pub bodies: usize,
    /// Share of them that matured.
    pub maturing_share: f64,
    /// Random fates drawn per body for the last word on the most promising programme; null where all were
    /// summed, or their mean is known in closed form.
    pub fates: Option<usize>,
    /// Standard error of the best programme's gain in ln R0, from bodies and fates. Where the generalist
    /// stands and this is not 0, some programme looked better, but not by more than four of these.
    pub gain_error: Option<f64>,
    /// Whether it is so.
    #[serde(skip)]
    pub undecided: bool,
}

/// The generalist optimum.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct GeneralistPart {
    /// Soma share of every cell.
    pub soma_share: f64,
    /// Expected propagules per founder.
    pub r0: Option<f64>,
}

/// Selection on one cue.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct CuePart {
    /// The cue's name.
    pub cue: Cue,
    /// First derivative of ln R0 by its responsiveness; null where R0 is 0.
    pub gradient: Option<f64>,
    /// Second derivative.
    pub curvature: Option<f64>,
    /// What they mean.
    pub verdict: Verdict,
}

/// The best programme.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BestPart {
    /// `baseline`, every enabled cue's responsiveness by its name, and `noise_bias` with `noise`.
    pub traits: BTreeMap<&'static str, f64>,
    /// Expected propagules per founder.
    pub r0: Option<f64>,
    /// Expected division index of a body.
    pub division_index: f64,
    /// Expected share of soma cells.
    pub soma_fraction: f64,
    /// Commonest class of body.
    pub class: BodyClass,
}

/// Critical values of one or several keys, moved together.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CriticalPart {
    /// The keys.
    pub keys: Vec<String>,
    /// Where the local verdict changes; null where it does not.
    pub local: Option<f64>,
    /// Where the global verdict changes; null where it does not.
    pub global: Option<f64>,
}

/// A question about critical values.
#[derive(Debug, Clone, PartialEq)]
pub struct CriticalQuery {
    /// Keys that move together.
    pub keys: Vec<String>,
    /// Their value at one end of the bracket, finite.
    pub low: f64,
    /// Their value at the other end, finite.
    pub high: f64,
}

/// What theory says of a scenario.
#[must_use]
pub fn predict(settings: &Settings) -> Prediction {
    let model = model(settings);
    let generalist = model.generalist();
    let selection = model.selection_at(&generalist);
    let best = model.best_programme(&generalist);
    let better_elsewhere = best.outdoes(BETTER);
    Prediction {
        title: settings.title.clone(),
        generalist: generalist_part(&generalist),
        cues: selection.iter().map(cue_part).collect(),
        best: best_part(&best, settings),
        verdict: Model::verdict(&selection, better_elsewhere),
        critical: None,
        sampling: model.placed().map(|bodies| sampling_part(&bodies.sample(), &best)),
    }
}

/// What theory says of a scenario, with the critical values of some keys. `settings_at` is the
/// scenario with those keys at a value (between `query.low` and `query.high`).
///
/// # Errors
/// Whatever `settings_at` returns for a value that makes no scenario.
pub fn predict_with_critical<E>(
    settings: &Settings,
    query: &CriticalQuery,
    mut settings_at: impl FnMut(f64) -> Result<Settings, E>,
) -> Result<Prediction, E> {
    let mut model_at = |value| Ok(model(&settings_at(value)?));
    let local = local_critical(&mut model_at, query.low, query.high)?;
    let global = global_critical(&mut model_at, query.low, query.high)?;
    let critical = CriticalPart { keys: query.keys.clone(), local, global };
    Ok(Prediction { critical: Some(critical), ..predict(settings) })
}

/// The generalist optimum of a scenario, where evolution starts with `baseline = "optimum"`.
#[must_use]
pub fn generalist_of(settings: &Settings) -> Generalist {
    model(settings).generalist()
}

/// What theory needs of a scenario.
#[must_use]
pub fn model(settings: &Settings) -> Model {
    let returns = [settings.returns.viability.clone(), settings.returns.fecundity.clone()];
    let (life, cues) = (life_history(settings), settings.traits.cues);
    let model = if settings.is_spatial() {
        Model::of_placed(life, returns, cues, bodies::placed_bodies(settings))
    } else {
        Model::new(life, returns, cues, &compositions(settings))
    };
    model
        .with_bounds(settings.traits.bound, NOISE_BIAS_BOUND)
        .with_cell_classes(settings.onset.germ_below, settings.onset.soma_above)
}

/// The life of a scenario's colonies.
#[must_use]
pub fn life_history(settings: &Settings) -> LifeHistory {
    LifeHistory {
        propagule_cells: settings.life.propagule_cells as u64,
        adult_cells: settings.body.adult_cells as u64,
        propagule_cost_eu: settings.life.propagule_cost_eu,
        adult_hazard_per_h: settings.life.adult_hazard_per_h,
        extrinsic_hazard_per_h: settings.life.extrinsic_hazard_per_h,
        juvenile_hazard_per_h: settings.life.juvenile_hazard_per_h,
        income_eu_per_h: settings.budget.income_eu_per_h,
        upkeep_eu_per_h: settings.budget.upkeep_eu_per_h,
        division_cost_eu: settings.budget.division_cost_eu,
        cost_per_unit: settings.traits.cost_per_unit,
    }
}

/// Cells grown in all to learn what bodies are like, where chance decides it.
const SAMPLED_CELLS: usize = 1 << 18;

/// Fewest and most bodies grown for that.
const SAMPLED_BODIES: (usize, usize) = (32, 512);

/// Seed of that growth: the same scenario always gets the same prediction.
const SAMPLING_SEED: u64 = 0;

/// Adult bodies of a scenario with their weights: the one place where theory learns what bodies
/// are like.
///
/// Where only labels count and divisions come in rounds they are exact. Where exposure makes a
/// difference, or division costs vary, chance arranges each body anew: a sample of bodies is grown
/// (tens to hundreds, always the same), and expectations are means over it.
#[must_use]
pub fn compositions(settings: &Settings) -> Compositions {
    let labels_vary =
        settings.traits.cues.contains(Cue::Lineage) && settings.budget.division_cv > 0.0;
    if settings.exposure_matters() || labels_vary {
        sampled_compositions(settings)
    } else {
        label_compositions(settings.body.adult_cells as u64, settings.life.propagule_cells as u64)
    }
}

fn sampled_compositions(settings: &Settings) -> Compositions {
    let cells = settings.body.adult_cells;
    let bodies = (SAMPLED_CELLS / cells).clamp(SAMPLED_BODIES.0, SAMPLED_BODIES.1);
    let mut growth = Growth::of_clump(settings.life.propagule_cells, cells);
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(SAMPLING_SEED);
    // How fast a body grows does not matter to how it lies.
    let pace = Pace {
        net_income_eu_per_h: 1.0,
        division_cost_eu: 1.0,
        division_cv: settings.budget.division_cv,
    };
    let mut grow = |_| {
        let labels = growth.grow(&pace, f64::INFINITY, &mut rng).labels.to_vec();
        let kinds = labels.into_iter().zip(growth.exposed());
        (1.0, Composition::of(kinds.map(|(label, exposed)| (CellKind { label, exposed }, 1.0))))
    };
    joined((0..bodies).map(&mut grow))
}

fn generalist_part(generalist: &Generalist) -> GeneralistPart {
    GeneralistPart { soma_share: generalist.soma_share, r0: finite(generalist.r0) }
}

fn cue_part(selection: &CueSelection) -> CuePart {
    CuePart {
        cue: selection.cue,
        gradient: finite(selection.gradient),
        curvature: finite(selection.curvature),
        verdict: selection.verdict(),
    }
}

fn best_part(best: &BestProgramme, settings: &Settings) -> BestPart {
    let mut traits = BTreeMap::from([("baseline", best.programme.baseline)]);
    for cue in settings.traits.cues.iter() {
        traits.insert(cue.name(), best.programme.responsiveness[cue.index()]);
    }
    if settings.traits.cues.contains(Cue::Noise) {
        traits.insert("noise_bias", best.programme.noise_bias);
    }
    BestPart {
        traits,
        r0: finite(best.r0),
        division_index: best.outcome.division_index,
        soma_fraction: best.outcome.soma_fraction,
        class: best.outcome.class,
    }
}

fn sampling_part(sample: &Sample, best: &BestProgramme) -> SamplingPart {
    SamplingPart {
        bodies: sample.bodies,
        maturing_share: sample.maturing,
        fates: if best.gain.draws_fates { sample.fates } else { None },
        gain_error: finite(best.gain.standard_error),
        undecided: best.gain.is_undecided(),
    }
}

fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}

#[cfg(test)]
mod tests;
