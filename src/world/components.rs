//! What a cell and a colony consist of.
//!
//! All cells share one bundle and are spawned once, in site order, so the cells of site `s` are rows
//! `s * n .. (s + 1) * n` of the one table of cells; colonies likewise are rows of theirs. A dead
//! colony's rows are overwritten by the next.

use bevy_ecs::prelude::*;

/// Where a cell lies in its colony's body: a place of the body's lattice.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Place(pub u32);

/// What its last division made a cell: -1 mother, +1 daughter, 0 never divided.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct DivisionLabel(pub i8);

/// What a cell has saved for its next division, eu.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Reserve(pub f32);

/// Which entry of the gene pool a cell carries.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct GenotypeId(pub u32);

/// Whether a cell has an empty neighbour site.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Exposed(pub bool);

/// The noise cue as drawn: +1 or -1, 0 where the cue is not in use.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct NoiseDraw(pub i8);

/// Soma share z of a cell's income.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct SomaShare(pub f32);

/// How a cell splits its income e, eu/h: soma budget `s = e z`, germ budget `g = e (1 - z)`.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Budget {
    /// Spent on the colony's viability, eu/h.
    pub soma_eu_per_h: f32,
    /// Spent on the colony's fecundity, eu/h.
    pub germ_eu_per_h: f32,
}

/// What a cell's budgets yield (dimensionless).
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Output {
    /// Viability output `v_i`.
    pub viability: f32,
    /// Fecundity output `b_i`.
    pub fecundity: f32,
}

/// Everything a cell is made of.
#[derive(Bundle, Debug, Clone, Copy, Default)]
pub struct CellBundle {
    /// Where it lies.
    pub place: Place,
    /// What its last division made it.
    pub label: DivisionLabel,
    /// What it has saved.
    pub reserve: Reserve,
    /// Whose genes it carries.
    pub genotype: GenotypeId,
    /// Whether it lies at the surface.
    pub exposed: Exposed,
    /// Its luck.
    pub noise: NoiseDraw,
    /// Its fate.
    pub share: SomaShare,
    /// Its budgets.
    pub budget: Budget,
    /// Its yields.
    pub output: Output,
}

/// Where a colony stands in its life; a dead colony leaves its site empty.
#[derive(Component, Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Phase {
    /// Nobody lives here.
    #[default]
    Empty,
    /// A propagule has settled and grows.
    Growing,
    /// Grown up, differentiated, reproducing.
    Adult,
}

/// The dates of the colony that lives on a site, or that last lived there, h.
#[derive(Component, Debug, Clone, Copy)]
pub struct Lifespan {
    /// Settlement.
    pub founded_h: f64,
    /// Adulthood; infinite if it is never reached.
    pub adult_h: f64,
    /// Death; infinite while it is not drawn yet.
    pub dies_h: f64,
}

impl Default for Lifespan {
    fn default() -> Self {
        Self { founded_h: 0.0, adult_h: f64::INFINITY, dies_h: 0.0 }
    }
}

/// Cells a colony holds, living or until its site is settled anew.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct CellCount(pub u32);

/// Body means by which an adult's cues are centred.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct CueMeans {
    /// Expectation of the noise cue, `2p - 1`.
    pub noise: f64,
    /// Mean division label.
    pub lineage: f64,
    /// Share of exposed cells.
    pub exposure: f64,
}

/// What an adult's cells achieve together (dimensionless), and the hazard that follows.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Vitals {
    /// Viability V.
    pub viability: f64,
    /// Fecundity `B = sum_i b_i`.
    pub fecundity: f64,
    /// Hazard `m = m_ext + m0 / V`, 1/h.
    pub hazard_per_h: f64,
}

/// An adult's stock for propagules, counted in propagules.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct PropaguleStock {
    /// Stock at adulthood, uniform on [0, 1), so that a life releases `rate * length` on average.
    pub head_start: f64,
    /// Growth of the stock, propagules per h.
    pub per_hour: f64,
}

impl PropaguleStock {
    /// Propagules released within `hours` of adulthood.
    #[must_use]
    pub fn released_within(&self, hours: f64) -> u64 {
        // A cast towards zero is a floor here, and several times as fast.
        (self.head_start + self.per_hour * hours) as i64 as u64
    }
}

/// Everything a site's colony is made of.
#[derive(Bundle, Debug, Clone, Copy, Default)]
pub struct ColonyBundle {
    /// Where it stands in its life.
    pub phase: Phase,
    /// Its dates.
    pub lifespan: Lifespan,
    /// Its size.
    pub cells: CellCount,
    /// How its cues are centred.
    pub cue_means: CueMeans,
    /// What it achieves.
    pub vitals: Vitals,
    /// What it releases.
    pub stock: PropaguleStock,
}
