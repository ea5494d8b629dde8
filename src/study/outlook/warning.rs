//! What may disappoint in a scenario, and what to do about it.

use serde::Serialize;

use crate::theory::Cue;
use crate::tissue::Plan;

/// Share of propagules above which most count as landing at home.
pub(super) const MOSTLY: f64 = 0.8;

/// Cells of the smallest compact body with an interior cell: a centre and its 12 neighbours.
const LEAST_WITH_INTERIOR: usize = 13;

/// Something that may disappoint.
#[derive(Debug, Clone, PartialEq)]
pub enum Warning {
    /// Exposure matters, but every cell lies at the surface.
    NoInteriorCell {
        /// How the body is built.
        plan: Plan,
        /// Cells of an adult body.
        cells: usize,
    },
    /// A cue reads the same in all cells of every body.
    CueCannotVary {
        /// The cue.
        cue: Cue,
        /// Why.
        because: Sameness,
    },
    /// The body is smaller than those that are known to differentiate by position.
    SmallBody {
        /// How the body is built.
        plan: Plan,
        /// Cells of an adult body.
        cells: usize,
        /// Diameter of the body, or length of a chain, um.
        diameter_um: f64,
    },
    /// In adult bodies some cells earn less than their upkeep.
    BodyStarves {
        /// Cells of an adult body.
        cells: usize,
        /// Cells of the largest body without a starved cell.
        fed: usize,
    },
    /// Adult bodies are fed, but cells starve while they grow.
    GrowthStarves {
        /// How the body is built.
        plan: Plan,
        /// Bodies that were grown to see.
        grown: usize,
        /// Bodies of these that lost cells.
        starving: usize,
        /// Cells that those lost, in the mean.
        starved_cells: f64,
    },
    /// Bodies stop growing short of adult size.
    NeverMatures {
        /// Cells of an adult body.
        cells: usize,
        /// Bodies that were grown to see.
        grown: usize,
        /// Bodies of these that stopped.
        stunted: usize,
        /// Cells at which they stopped, in the mean.
        stopped_at: f64,
    },
    /// Support does not reach across the body.
    HelpFallsShort {
        /// Range of sharing over the body's radius.
        range_over_radius: f64,
    },
    /// Replacing cells costs all that could become propagules.
    TurnoverTooCostly {
        /// Cost of replacements over the germ budget at the start.
        share: f64,
    },
    /// Propagules stay at home, or go anywhere.
    TorusKernel {
        /// Standard deviation of landing, site widths.
        dispersal_sites: f64,
        /// Sites along an edge of the torus.
        side: usize,
        /// Share of propagules that land on their parent's own site.
        home_share: f64,
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

/// Why a cue reads the same in all cells of a body.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sameness {
    /// There is one cell.
    OneCell,
    /// Every cell lies at the surface.
    AllExposed,
    /// No cell divides.
    NoDivision,
    /// No field decides incomes.
    FullyFed,
    /// Fields give every cell the same.
    EqualIncomes,
}

impl Sameness {
    const fn text(self) -> &'static str {
        match self {
            Self::OneCell => "a body is one cell",
            Self::AllExposed => "every cell lies at the surface",
            Self::NoDivision => {
                "propagules are adult at once and no cell is replaced, so none divides"
            }
            Self::FullyFed => "every cell is fully fed",
            Self::EqualIncomes => "every cell's place is as good as any other's",
        }
    }

    const fn remedy(self) -> &'static str {
        match self {
            Self::OneCell => "take it out of traits.cues, or raise body.adult_cells",
            Self::AllExposed => {
                "take it out of traits.cues, or let bodies have an interior (body.plan, \
                 body.adult_cells)"
            }
            Self::NoDivision => "take it out of traits.cues, or lower life.propagule_cells",
            Self::FullyFed => "take it out of traits.cues, or state [nutrient] or [waste]",
            Self::EqualIncomes => {
                "take it out of traits.cues, or choose a body.plan or body.adult_cells whose \
                 cells lie differently"
            }
        }
    }
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
            Self::BodyStarves { .. } | Self::GrowthStarves { .. } => "body-starves",
            Self::NeverMatures { .. } => "never-matures",
            Self::HelpFallsShort { .. } => "help-falls-short",
            Self::TurnoverTooCostly { .. } => "turnover-too-costly",
            Self::TorusKernel { .. } => "torus-kernel",
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
            Self::NoInteriorCell { plan, cells } => format!(
                "exposure matters here, but all of a {} {cells} cells lie at the surface",
                whose(*plan)
            ),
            Self::CueCannotVary { cue, because } => {
                format!("the cue {cue} reads the same in all cells of a body: {}", because.text())
            }
            Self::SmallBody { plan, cells, diameter_um } => format!(
                "a body of {cells} cells, {diameter_um:.0} um {}, is below the 1000 cells or \
                 0.5 mm under which patterned differentiation is commonly held not to occur; \
                 small algae of 64 to 128 cells show it all the same",
                if *plan == Plan::Chain { "long" } else { "across" }
            ),
            Self::BodyStarves { fed: 0, .. } => {
                "even a single cell earns less than its upkeep".to_owned()
            }
            Self::BodyStarves { cells, fed } => format!(
                "bodies of {cells} cells are asked for, but beyond {fed} some cells earn less \
                 than their upkeep and starve while the body grows"
            ),
            Self::GrowthStarves { plan, grown, starving, starved_cells } => format!(
                "an adult body is fed, but {starving} of {grown} lost cells to hunger on the way \
                 ({starved_cells:.1} in the mean){}",
                if *plan == Plan::Shell { ", as a shell grows as a compact body" } else { "" }
            ),
            Self::NeverMatures { cells, grown, stunted, stopped_at } => {
                stunting_text(*cells, [*stunted, *grown], *stopped_at)
            }
            Self::HelpFallsShort { range_over_radius } => format!(
                "support reaches {range_over_radius:.2} of the body's radius: cells further than \
                 that from the nearest helper go without, and a body fails with its least \
                 supported parts"
            ),
            Self::TurnoverTooCostly { share } => format!(
                "replacing dead cells costs {} times what cells have for propagules at the \
                 start, so nothing is left for them",
                if *share <= 100.0 { format!("{share:.2}") } else { "more than 100".to_owned() }
            ),
            Self::TorusKernel { dispersal_sites, side, home_share } => {
                kernel_text(*dispersal_sites, *side, *home_share)
            }
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
            Self::NoInteriorCell { plan: Plan::Clump, cells } if *cells >= LEAST_WITH_INTERIOR => {
                "cells that starved have left holes: feed the body better or lower \
                 budget.upkeep_eu_per_h"
            }
            Self::NoInteriorCell { plan: Plan::Clump, .. } => {
                "raise body.adult_cells to 13 or more"
            }
            Self::NoInteriorCell { .. } => "use body.plan = \"clump\" with 13 cells or more",
            Self::CueCannotVary { because, .. } => because.remedy(),
            Self::SmallBody { .. } => {
                "nothing, if such small bodies are meant; else raise body.adult_cells"
            }
            Self::BodyStarves { .. } | Self::GrowthStarves { .. } | Self::NeverMatures { .. } => {
                "lower body.adult_cells or budget.upkeep_eu_per_h, or feed the body better \
                 ([nutrient], [waste], body.plan)"
            }
            Self::HelpFallsShort { .. } => {
                "raise support.range_diameters or lower body.adult_cells, unless short reach is \
                 the question"
            }
            Self::TurnoverTooCostly { .. } => {
                "lower budget.turnover_per_h or budget.division_cost_eu"
            }
            Self::TorusKernel { home_share, .. } if *home_share > MOSTLY => {
                "raise habitat.dispersal_sites"
            }
            Self::TorusKernel { .. } => {
                "lower habitat.dispersal_sites, raise habitat.sites, or use habitat.layout = \
                 \"mixed\", which is faster"
            }
            Self::GeneralistCannotPersist { .. } => {
                "lower life.adult_hazard_per_h, life.juvenile_hazard_per_h or \
                 life.propagule_cost_eu; in space, also see to food, budget.upkeep_eu_per_h, \
                 support.leak and budget.turnover_per_h"
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

const fn whose(plan: Plan) -> &'static str {
    match plan {
        Plan::Clump => "compact body's",
        Plan::Chain => "chain's",
        Plan::Tree => "tree's",
        Plan::Shell => "shell's",
    }
}

fn stunting_text(cells: usize, [stunted, grown]: [usize; 2], stopped_at: f64) -> String {
    if stunted == grown {
        format!(
            "none of {grown} bodies reached {cells} cells: they stopped growing at about \
             {stopped_at:.0}, so no colony is ever adult"
        )
    } else {
        format!(
            "{stunted} of {grown} bodies stopped growing at about {stopped_at:.0} of {cells} cells: \
             such colonies are never adult"
        )
    }
}

fn kernel_text(dispersal_sites: f64, side: usize, home_share: f64) -> String {
    if home_share > MOSTLY {
        let lost = 100.0 * home_share;
        format!("{lost:.0} % of propagules land on their parent's own site and are lost there")
    } else {
        format!(
            "propagules land {dispersal_sites} sites away on a torus {side} sites wide: as far as \
             anywhere, so kin do not compete"
        )
    }
}

fn rounded_up(x: f64) -> String {
    if x.is_finite() { format!("{:.0}", x.ceil()) } else { "endlessly many".into() }
}
