//! Checked settings: typed, complete and immutable; nothing below ever sees a raw number.

use crate::theory::{Cue, CueSet, TaskReturn};
pub use crate::tissue::Plan;
use crate::tissue::fields::{self, bond_conductance};
use crate::tissue::{Fields, GrowthRules, Sharing};

/// Grace of a hungry cell that counts as for ever, h.
const FOR_EVER_H: f64 = 1e6;

/// Everything a scenario states, every default spelled out.
#[derive(Debug, Clone, PartialEq)]
pub struct Settings {
    /// What the scenario is about, in the user's words.
    pub title: String,
    /// Seed from which every random number of the scenario derives.
    pub seed: u64,
    /// Where colonies live.
    pub habitat: Habitat,
    /// The shape and size of an adult colony.
    pub body: Body,
    /// Founding, reproduction and death.
    pub life: Life,
    /// A cell's energy.
    pub budget: Budget,
    /// What the two tasks yield.
    pub returns: Returns,
    /// How far help reaches; none: support is pooled over the colony.
    pub support: Option<Support>,
    /// Food; none: every cell is fully fed.
    pub nutrient: Option<Nutrient>,
    /// Waste; none: there is none.
    pub waste: Option<Waste>,
    /// What is heritable and how it mutates.
    pub traits: Traits,
    /// How long and how often.
    pub run: Run,
    /// When differentiation counts as arisen.
    pub onset: Onset,
}

impl Settings {
    /// Whether a cell's exposure makes any difference to what it does.
    #[must_use]
    pub fn exposure_matters(&self) -> bool {
        self.traits.cues.contains(Cue::Exposure)
            || self.returns.viability.depends_on_place()
            || self.returns.fecundity.depends_on_place()
    }

    /// Fields that decide cells' incomes, in the units of the solver.
    #[must_use]
    pub fn fields(&self) -> Fields {
        let diameter_um = self.body.cell_diameter_um;
        let nutrient = self.nutrient.as_ref().map(|food| {
            let bond = bond_conductance(food.diffusivity_um2_per_s, diameter_um);
            fields::Nutrient {
                demand: food.uptake_fmol_per_h / (bond * food.bath_mm),
                kappa: food.half_saturation_mm / food.bath_mm,
                exchange: food.exchange,
            }
        });
        let waste = self.waste.as_ref().map(|waste| {
            let bond = bond_conductance(waste.diffusivity_um2_per_s, diameter_um);
            let release = waste.release_fmol_per_h / (bond * waste.toxic_mm);
            fields::Waste { release, exchange: waste.exchange }
        });
        Fields { nutrient, waste }
    }

    /// How support is shared; none: it is pooled.
    #[must_use]
    pub fn sharing(&self) -> Option<Sharing> {
        self.support
            .as_ref()
            .map(|support| Sharing { range_diameters: support.range_diameters, leak: support.leak })
    }

    /// All that decides how a body grows.
    #[must_use]
    pub fn growth_rules(&self) -> GrowthRules {
        let grace_h = self.budget.starvation_h;
        GrowthRules {
            plan: self.body.plan,
            propagule_cells: self.life.propagule_cells,
            adult_cells: self.body.adult_cells,
            fields: self.fields(),
            income_eu_per_h: self.budget.income_eu_per_h,
            upkeep_eu_per_h: self.budget.upkeep_eu_per_h,
            division_cost_eu: self.budget.division_cost_eu,
            division_cv: self.budget.division_cv,
            starvation_h: if grace_h >= FOR_EVER_H { f64::INFINITY } else { grace_h },
        }
    }

    /// Whether it matters where in the body a cell lies, beyond its exposure: fields act, help is
    /// local, cells are replaced by neighbours, or the body is no clump.
    #[must_use]
    pub fn is_spatial(&self) -> bool {
        self.body.plan != Plan::Clump
            || self.support.is_some()
            || self.fields().act()
            || self.budget.turnover_per_h > 0.0
    }
}

/// The habitat: places that hold at most one colony each.
#[derive(Debug, Clone, PartialEq)]
pub struct Habitat {
    /// Number of places (N).
    pub sites: usize,
    /// How propagules spread over them.
    pub layout: Layout,
}

/// How propagules spread over the habitat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Layout {
    /// A propagule lands on any site with equal probability.
    Mixed,
    /// Sites lie on a square torus; a propagule lands around its parent by a Gaussian kernel.
    Torus {
        /// Standard deviation of landing along each axis, site widths.
        dispersal_sites: f64,
    },
}

/// The adult body.
#[derive(Debug, Clone, PartialEq)]
pub struct Body {
    /// How a daughter cell is placed.
    pub plan: Plan,
    /// Cells of an adult colony (n).
    pub adult_cells: usize,
    /// Nearest-neighbour distance of the lattice (d), um.
    pub cell_diameter_um: f64,
}

/// The life cycle of a colony.
#[derive(Debug, Clone, PartialEq)]
pub struct Life {
    /// Cells of a propagule.
    pub propagule_cells: usize,
    /// Cost of a propagule (`c_p`), eu.
    pub propagule_cost_eu: f64,
    /// Hazard of an adult colony of unit viability (m0), 1/h.
    pub adult_hazard_per_h: f64,
    /// Hazard no viability lowers (`m_ext`), 1/h.
    pub extrinsic_hazard_per_h: f64,
    /// Hazard of a growing colony, 1/h.
    pub juvenile_hazard_per_h: f64,
}

/// A cell's energy budget.
#[derive(Debug, Clone, PartialEq)]
pub struct Budget {
    /// Income of a fully fed cell (e0), eu/h.
    pub income_eu_per_h: f64,
    /// What a growing cell spends on itself, eu/h.
    pub upkeep_eu_per_h: f64,
    /// Reserve at which a growing cell divides, eu.
    pub division_cost_eu: f64,
    /// Coefficient of variation of that reserve between divisions.
    pub division_cv: f64,
    /// How long a cell lives on an income below its upkeep, h.
    pub starvation_h: f64,
    /// Rate at which an adult's cells die and are replaced by a neighbour's division, 1/h per cell.
    pub turnover_per_h: f64,
}

/// Sharing of the viability task's product by local transport.
#[derive(Debug, Clone, PartialEq)]
pub struct Support {
    /// Range of sharing (lambda), cell diameters; 0: no sharing.
    pub range_diameters: f64,
    /// Share of the exchange at empty neighbour sites that is lost.
    pub leak: f64,
}

/// A nutrient that cells take up and that reaches them by diffusion.
#[derive(Debug, Clone, PartialEq)]
pub struct Nutrient {
    /// Concentration in the bath, mM.
    pub bath_mm: f64,
    /// Concentration at which uptake is half its maximum (K), mM.
    pub half_saturation_mm: f64,
    /// Uptake of a cell at saturation (`q_max`), fmol/h.
    pub uptake_fmol_per_h: f64,
    /// Diffusivity inside the body (D), um^2/s.
    pub diffusivity_um2_per_s: f64,
    /// Conductance to an empty neighbour site, relative to a cell's.
    pub exchange: f64,
}

/// Waste that cells release and that leaves by diffusion.
#[derive(Debug, Clone, PartialEq)]
pub struct Waste {
    /// Release of a cell at full income, fmol/h.
    pub release_fmol_per_h: f64,
    /// Diffusivity inside the body, um^2/s.
    pub diffusivity_um2_per_s: f64,
    /// Concentration at which income is halved (`w_tox`), mM.
    pub toxic_mm: f64,
    /// Conductance to an empty neighbour site, relative to a cell's.
    pub exchange: f64,
}

/// What the two tasks yield.
#[derive(Debug, Clone, PartialEq)]
pub struct Returns {
    /// Returns on the soma budget.
    pub viability: TaskReturn,
    /// Returns on the germ budget.
    pub fecundity: TaskReturn,
}

/// Heritable traits and their mutation.
#[derive(Debug, Clone, PartialEq)]
pub struct Traits {
    /// Cues whose responsiveness can evolve.
    pub cues: CueSet,
    /// Where the baseline g0 starts.
    pub baseline: Baseline,
    /// Where each cue's responsiveness starts, in the order of [`Cue::ALL`].
    pub start: [f64; Cue::COUNT],
    /// Probability that a trait mutates, per trait and propagule.
    pub mutation_probability: f64,
    /// Standard deviation of a mutation's step.
    pub mutation_sd: f64,
    /// Bound of g0 and of every `g_k`: traits stay within +-bound.
    pub bound: f64,
    /// Share of a cell's income lost per unit of summed responsiveness.
    pub cost_per_unit: f64,
}

/// Where the baseline starts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Baseline {
    /// At the generalist optimum of the scenario.
    Optimum,
    /// At this logit.
    At(f64),
}

/// Length and repetition of a run.
#[derive(Debug, Clone, PartialEq)]
pub struct Run {
    /// Generations per replicate.
    pub generations: u64,
    /// Generations between censuses.
    pub census_every: u64,
    /// Replicates.
    pub replicates: u32,
    /// Whether a replicate ends once its onset is confirmed.
    pub stop_after_onset: bool,
    /// Hours over which settlement is batched.
    pub tick: Tick,
}

/// How long settlement is batched.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Tick {
    /// A 100th of the generalist's generation time.
    Auto,
    /// This many hours.
    Hours(f64),
}

/// What counts as onset, and the classes of cells.
#[derive(Debug, Clone, PartialEq)]
pub struct Onset {
    /// Division index D at and above which a population counts as differentiated.
    pub index: f64,
    /// Censuses in a row for which D must stay so.
    pub sustained_censuses: u32,
    /// Soma share below which a cell is germ.
    pub germ_below: f64,
    /// Soma share above which a cell is soma.
    pub soma_above: f64,
}
