//! What may disappoint in a scenario, and what to do about it.

use serde::Serialize;

use super::{BodyOutlook, Selection, TimeOutlook};
use crate::scenario::Settings;
use crate::scenario::settings::Tick;
use crate::theory::Cue;

/// Body size under which patterned differentiation is not known in nature, cells.
const SMALL_BODY_CELLS: usize = 1000;

/// Body diameter under which patterned differentiation is not known in nature, um.
const SMALL_BODY_UM: f64 = 500.0;

/// Longest tick as a share of a generation: a vacant site waits half a tick longer than it would,
/// which must not change an expected value by more than 1 %.
const LONGEST_TICK: f64 = 0.02;

/// Something that may disappoint.
#[derive(Debug, Clone, PartialEq)]
pub enum Warning {
    /// Exposure matters, but every cell lies at the surface.
    NoInteriorCell {
        /// Cells of an adult body.
        cells: usize,
    },
    /// A cue reads the same in all cells of every body.
    CueCannotVary {
        /// The cue.
        cue: Cue,
        /// Why.
        because: &'static str,
    },
    /// The body is smaller than those that are known to differentiate by position.
    SmallBody {
        /// Cells of an adult body.
        cells: usize,
        /// Diameter of the body, um.
        diameter_um: f64,
    },
    /// The best generalist leaves at most one propagule.
    GeneralistCannotPersist {
        /// Its expected lifetime propagules.
        r0: f64,
    },
    /// Selection on steps towards differentiation is weaker than drift.
    DriftDominates {
        /// Sites.
        sites: usize,
        /// Gain in ln R0 of a typical step.
        advantage: f64,
    },
    /// Selection needs longer than a replicate lasts.
    TooFewGenerations {
        /// Generations of a replicate.
        generations: u64,
        /// Generations that selection needs at least.
        needed: f64,
    },
    /// A replicate has fewer censuses than an onset needs.
    OnsetCannotBeConfirmed {
        /// Censuses of a replicate.
        censuses: u64,
        /// Censuses in a row that an onset needs.
        needed: u32,
    },
    /// Settlement is batched over so long that it bends results.
    TickTooLong {
        /// The tick, h.
        tick_h: f64,
        /// The generalist's generation time, h.
        generation_h: f64,
    },
}

/// A warning as it is shown.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Advice {
    /// Name of the warning.
    pub name: &'static str,
    /// What may disappoint.
    pub text: String,
    /// What to do.
    pub remedy: String,
}

impl Warning {
    /// The warning's name.
    #[must_use]
    pub const fn name(&self) -> &'static str {
        match self {
            Self::NoInteriorCell { .. } => "no-interior-cell",
            Self::CueCannotVary { .. } => "cue-cannot-vary",
            Self::SmallBody { .. } => "small-body",
            Self::GeneralistCannotPersist { .. } => "generalist-cannot-persist",
            Self::DriftDominates { .. } => "drift-dominates",
            Self::TooFewGenerations { .. } => "too-few-generations",
            Self::OnsetCannotBeConfirmed { .. } => "onset-cannot-be-confirmed",
            Self::TickTooLong { .. } => "tick-too-long",
        }
    }

    /// The warning as it is shown.
    #[must_use]
    pub fn advice(&self) -> Advice {
        Advice { name: self.name(), text: self.text(), remedy: self.remedy().to_owned() }
    }

    fn text(&self) -> String {
        match self {
            Self::NoInteriorCell { cells } => format!(
                "exposure matters here, but all of a compact body's {cells} cells lie at the \
                 surface"
            ),
            Self::CueCannotVary { cue, because } => {
                format!("the cue {cue} reads the same in all cells of a body: {because}")
            }
            Self::SmallBody { cells, diameter_um } => format!(
                "a body of {cells} cells, {diameter_um:.0} um across, is below the 1000 cells or \
                 0.5 mm under which patterned differentiation is commonly held not to occur; \
                 small algae of 64 to 128 cells show it all the same"
            ),
            Self::GeneralistCannotPersist { r0 } => format!(
                "the best generalist leaves {r0:.3} propagules in its life, so its population \
                 dies out"
            ),
            Self::DriftDominates { sites, advantage } => format!(
                "a step towards differentiation gains {advantage:.1e} in ln R0, less than drift \
                 moves in {sites} sites (1/N = {:.1e})",
                1.0 / *sites as f64
            ),
            Self::TooFewGenerations { generations, needed } => format!(
                "selection needs at least about {} generations to the onset, a replicate has \
                 {generations}",
                rounded_up(*needed)
            ),
            Self::OnsetCannotBeConfirmed { censuses, needed } => format!(
                "a replicate takes {censuses} censuses, but an onset is confirmed by {needed} in \
                 a row"
            ),
            Self::TickTooLong { tick_h, generation_h } => format!(
                "settlement is batched over {tick_h} h, more than a 50th of the generation time \
                 of {generation_h:.3e} h, so vacant sites wait too long"
            ),
        }
    }

    const fn remedy(&self) -> &'static str {
        match self {
            Self::NoInteriorCell { .. } => "raise body.adult_cells to 13 or more",
            Self::CueCannotVary { .. } => "take it out of traits.cues, or raise body.adult_cells",
            Self::SmallBody { .. } => {
                "nothing, if such small bodies are meant; else raise body.adult_cells"
            }
            Self::GeneralistCannotPersist { .. } => {
                "lower life.adult_hazard_per_h, life.juvenile_hazard_per_h or \
                 life.propagule_cost_eu"
            }
            Self::DriftDominates { .. } => {
                "raise habitat.sites or traits.mutation_sd, and read onsets with care"
            }
            Self::TooFewGenerations { .. } => {
                "raise run.generations, habitat.sites, traits.mutation_probability or \
                 traits.mutation_sd"
            }
            Self::OnsetCannotBeConfirmed { .. } => {
                "raise run.generations, or lower run.census_every or onset.sustained_censuses"
            }
            Self::TickTooLong { .. } => "lower run.tick_h, or leave it \"auto\"",
        }
    }
}

fn rounded_up(x: f64) -> String {
    if x.is_finite() { format!("{:.0}", x.ceil()) } else { "endlessly many".into() }
}

/// All warnings of a scenario.
pub(super) fn warnings(
    settings: &Settings,
    body: &BodyOutlook,
    time: &TimeOutlook,
    selection: &Selection,
) -> Vec<Warning> {
    let mut warnings = body_warnings(settings, body);
    if selection.r0 <= 1.0 || selection.r0.is_nan() {
        warnings.push(Warning::GeneralistCannotPersist { r0: selection.r0 });
    }
    warnings.extend(selection_warning(settings, selection));
    let censuses = settings.run.generations / settings.run.census_every.max(1) + 1;
    let needed = settings.onset.sustained_censuses;
    if censuses < u64::from(needed) {
        warnings.push(Warning::OnsetCannotBeConfirmed { censuses, needed });
    }
    let generation_h = time.generation_h;
    if let Tick::Hours(tick_h) = settings.run.tick
        && tick_h > LONGEST_TICK * generation_h
    {
        warnings.push(Warning::TickTooLong { tick_h, generation_h });
    }
    warnings
}

fn body_warnings(settings: &Settings, body: &BodyOutlook) -> Vec<Warning> {
    let cues = settings.traits.cues;
    let mut warnings = Vec::new();
    if settings.exposure_matters() && body.interior_share <= 0.0 {
        warnings.push(Warning::NoInteriorCell { cells: body.cells });
    }
    for cue in cues.iter() {
        if let Some(because) = why_constant(cue, settings, body) {
            warnings.push(Warning::CueCannotVary { cue, because });
        }
    }
    let diameter_um = 2.0 * body.radius_um;
    if body.cells < SMALL_BODY_CELLS || diameter_um < SMALL_BODY_UM {
        warnings.push(Warning::SmallBody { cells: body.cells, diameter_um });
    }
    warnings
}

/// Why a cue reads the same in all cells of every body, if it does.
fn why_constant(cue: Cue, settings: &Settings, body: &BodyOutlook) -> Option<&'static str> {
    if body.cells == 1 {
        return Some("a body is one cell");
    }
    match cue {
        Cue::Exposure if body.interior_share <= 0.0 => Some("every cell lies at the surface"),
        Cue::Lineage if settings.life.propagule_cells == body.cells => {
            Some("propagules are adult at once, so no cell divides")
        }
        Cue::Income => Some("every cell is fully fed"),
        _ => None,
    }
}

/// Drift or lack of time, where theory finds some cue favoured. Both are judged from where drift
/// alone takes a responsiveness, as disruptive selection is weak at the generalist itself.
fn selection_warning(settings: &Settings, selection: &Selection) -> Option<Warning> {
    let traits = &settings.traits;
    let (sites, sd) = (settings.habitat.sites as f64, traits.mutation_sd);
    let favoured = || selection.pulls.iter().filter(|pull| pull.favoured);
    // Neutral variance of an unbounded trait in overlapping generations, and at the same time
    // the rate of its evolution per unit of d ln R0/dg: N mu sd^2 / 2.
    let rate = sites * traits.mutation_probability * sd * sd / 2.0;
    let start = libm::sqrt(rate).max(sd);
    let advantage = favoured().map(|pull| pull.advantage(start, sd)).max_by(f64::total_cmp)?;
    if sites * advantage < 1.0 {
        return Some(Warning::DriftDominates { sites: settings.habitat.sites, advantage });
    }
    let goal = responsiveness_at(settings.onset.index).min(traits.bound);
    let needed =
        favoured().map(|pull| pull.generations(start, goal, rate)).min_by(f64::total_cmp)?;
    let generations = settings.run.generations;
    (needed > generations as f64).then_some(Warning::TooFewGenerations { generations, needed })
}

/// Responsiveness at which a cue of +-1 gives the division index `index`: `tanh^2(g/2)` is the
/// index of cells at `sigmoid(+-g)`, half each.
fn responsiveness_at(index: f64) -> f64 {
    2.0 * libm::atanh(libm::sqrt(index))
}
