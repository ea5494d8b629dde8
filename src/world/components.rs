//! What a cell and a colony consist of.
//!
//! All cells share one bundle and are spawned once, in site order, so the cells of site `s` are rows
//! `s * n .. (s + 1) * n` of the one table of cells; colonies likewise are rows of theirs. A dead
//! colony's rows are overwritten by the next.

use std::ops::Range;

use bevy_ecs::prelude::*;

/// Where a cell lies in its colony's body: a place of the body's lattice, or the cell's number in a
/// shared body.
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

/// What a cell receives of the viability task's product where support is local; where it is pooled,
/// the colony's viability says the same for all cells.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct Support(pub f32);

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
    /// What it receives.
    pub support: Support,
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

impl CellCount {
    /// Rows of the cells of the colony of `site`, where each site has room for `capacity` cells.
    #[must_use]
    pub const fn rows(self, site: usize, capacity: usize) -> Range<usize> {
        site * capacity..site * capacity + self.0 as usize
    }
}

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

/// When a colony's stock for propagules begins to grow as it does: its adulthood, or the last
/// replacement of a cell, h.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct StockSince(pub f64);

/// When a colony's stock for propagules ceases to grow: its death, h.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct StockUntil(pub f64);

/// Stock at that time, in propagules. At adulthood it is uniform on [-1/2, 1/2), so that a life, whose
/// propagules are counted to the nearest whole one, releases `rate * length` on average; later it is
/// what is left over.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct HeadStart(pub f64);

/// Growth of the stock, propagules per h.
#[derive(Component, Debug, Clone, Copy, Default)]
pub struct StockRate(pub f64);

/// A colony's stock for propagules, from the adulthood (or the last replacement of a cell) of the last
/// adult that lived on its site.
///
/// One column per number, since all sites are gone through at every tick.
#[derive(Bundle, Debug, Clone, Copy, Default)]
pub struct PropaguleStock {
    /// Adulthood, or the last replacement.
    pub since: StockSince,
    /// Death.
    pub until: StockUntil,
    /// What there is then.
    pub head_start: HeadStart,
    /// Its growth.
    pub rate: StockRate,
}

impl PropaguleStock {
    /// Propagules released from `from_h` to `to_h`, of which only the adult life counts.
    ///
    /// Before the first adulthood on a site `since` and `until` are equal, and nothing is released.
    #[must_use]
    #[inline]
    pub const fn released_between(&self, from_h: f64, to_h: f64) -> u64 {
        whole(self.at(to_h)).wrapping_sub(whole(self.at(from_h)))
    }

    /// What the stock holds at `hour` beyond whole propagules, between -1/2 and 1/2: the stock of one
    /// that goes on from there.
    #[must_use]
    pub fn left_over(&self, hour: f64) -> f64 {
        let level = self.at(hour);
        level - level.round_ties_even()
    }

    /// The stock at `hour` of all that life has put into it, in propagules.
    #[inline]
    const fn at(&self, hour: f64) -> f64 {
        let Self { since, until, head_start, rate } = self;
        // Plain comparisons: `f64::min` and `max` mind numbers that are none, which do not occur here.
        let hour = if hour < until.0 { hour } else { until.0 };
        let hour = if hour > since.0 { hour } else { since.0 };
        head_start.0 + rate.0 * (hour - since.0)
    }
}

/// The whole number nearest to `x`, |x| < 2^51, up to a constant that falls out of differences.
///
/// At 3 * 2^51 neighbouring floating-point numbers are 1 apart and have neighbouring bits: an addition
/// rounds, without the cast that keeps the processor from taking several sites at once.
#[inline]
const fn whole(x: f64) -> u64 {
    (x + 6_755_399_441_055_744.0).to_bits()
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_stock_counts_its_growth_to_the_nearest_propagule_within_adult_life() {
        let stock = PropaguleStock {
            since: StockSince(10.0),
            until: StockUntil(20.0),
            head_start: HeadStart(-0.4),
            rate: StockRate(0.7),
        };
        // At 20 h the stock is -0.4 + 7.0 = 6.6.
        assert_eq!(stock.released_between(0.0, 100.0), 7);
        assert_eq!(stock.released_between(0.0, 10.0), 0);
        assert_eq!(stock.released_between(20.0, 30.0), 0);
        // -0.4 + 0.7 * 1.2 = 0.44 and -0.4 + 0.7 * 1.4 = 0.58.
        assert_eq!(stock.released_between(0.0, 11.2), 0);
        assert_eq!(stock.released_between(11.2, 11.4), 1);
        assert_eq!(PropaguleStock::default().released_between(0.0, 5.0), 0);
    }

    #[test]
    fn a_life_cut_into_ticks_releases_what_it_releases_at_once() {
        let stock = PropaguleStock {
            since: StockSince(1e6),
            until: StockUntil(1e6 + 300.0),
            head_start: HeadStart(0.3),
            rate: StockRate(4.321),
        };
        let hours = |tick: u32| 999_990.0 + f64::from(tick) * 0.37;
        let in_ticks: u64 =
            (0..1000).map(|tick| stock.released_between(hours(tick), hours(tick + 1))).sum();
        // 0.3 + 4.321 * 300 = 1296.6.
        assert_eq!(in_ticks, 1297);
    }
}
