//! The time series of a run: one row per replicate and census.

use super::column::{Column, column};
use super::table::TableRow;

/// Heritable traits, in the order of [`CensusRow::trait_mean`] and of the columns.
pub const TRAITS: [&str; 6] = ["baseline", "noise", "lineage", "exposure", "income", "noise_bias"];

/// What one census of one replicate's population counted and measured.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct CensusRow {
    /// Replicate, from 0.
    pub replicate: u32,
    /// Generations since the start: settlements over colonies alive, accumulated.
    pub generation: f64,
    /// Time since the start, h.
    pub time_h: f64,
    /// Colonies alive.
    pub colonies: u32,
    /// Adult colonies.
    pub adults: u32,
    /// D, mean over adult colonies of the division index, 0 to 1; `None` without adults.
    pub division_index: Option<f64>,
    /// Mean mutual-entropy index over adult colonies; `None` without adults.
    pub mutual_entropy: Option<f64>,
    /// Mean soma share z over the cells of adult colonies.
    pub mean_soma_share: Option<f64>,
    /// Share of those cells that are germ.
    pub germ_share: Option<f64>,
    /// Share of those cells that are generalists.
    pub generalist_share: Option<f64>,
    /// Share of those cells that are soma.
    pub soma_share: Option<f64>,
    /// Adult colonies whose cells are alike.
    pub bodies_alike: u32,
    /// Adult colonies with soma or germ beside generalists.
    pub bodies_partial: u32,
    /// Adult colonies of germ and soma.
    pub bodies_complete: u32,
    /// Mean age of the parents of the colonies founded since the last census, h.
    pub parental_age_h: Option<f64>,
    /// Founding lines that still have a living descendant.
    pub founder_lines: u32,
    /// Mean of each trait over the colonies alive, in the order of [`TRAITS`].
    pub trait_mean: [f64; TRAITS.len()],
    /// Variance (divisor n) of each trait over the colonies alive.
    pub trait_variance: [f64; TRAITS.len()],
    /// Mean number of living cells of adult colonies; `None` without adults.
    pub adult_cells: Option<f64>,
    /// Colonies that settled since the start and whose growth stops short of adult size, some of
    /// which may still be growing.
    pub never_matured: u64,
    /// Relatedness of living colonies 1 to 4 sites apart on a torus; `None` in a mixed habitat, where
    /// all colonies carry the same line, or where no such pair lives.
    pub relatedness: [Option<f64>; 4],
}

impl TableRow for CensusRow {
    const TABLE: &'static str = "census";

    fn columns() -> Vec<Column<Self>> {
        counts_and_shares().into_iter().chain(trait_moments()).chain(space()).collect()
    }
}

fn counts_and_shares() -> [Column<CensusRow>; 16] {
    [
        column!(U32, replicate, ""),
        column!(F64, generation, "generations"),
        column!(F64, time_h, "h"),
        column!(U32, colonies, "1"),
        column!(U32, adults, "1"),
        column!(OptionalF64, division_index, "1"),
        column!(OptionalF64, mutual_entropy, "1"),
        column!(OptionalF64, mean_soma_share, "1"),
        column!(OptionalF64, germ_share, "1"),
        column!(OptionalF64, generalist_share, "1"),
        column!(OptionalF64, soma_share, "1"),
        column!(U32, bodies_alike, "1"),
        column!(U32, bodies_partial, "1"),
        column!(U32, bodies_complete, "1"),
        column!(OptionalF64, parental_age_h, "h"),
        column!(U32, founder_lines, "1"),
    ]
}

fn trait_moments() -> [Column<CensusRow>; 2 * TRAITS.len()] {
    [
        column!(F64, trait_mean[0], "logit", "mean_baseline"),
        column!(F64, trait_mean[1], "logit per cue unit", "mean_noise"),
        column!(F64, trait_mean[2], "logit per cue unit", "mean_lineage"),
        column!(F64, trait_mean[3], "logit per cue unit", "mean_exposure"),
        column!(F64, trait_mean[4], "logit per cue unit", "mean_income"),
        column!(F64, trait_mean[5], "logit", "mean_noise_bias"),
        column!(F64, trait_variance[0], "logit^2", "var_baseline"),
        column!(F64, trait_variance[1], "(logit per cue unit)^2", "var_noise"),
        column!(F64, trait_variance[2], "(logit per cue unit)^2", "var_lineage"),
        column!(F64, trait_variance[3], "(logit per cue unit)^2", "var_exposure"),
        column!(F64, trait_variance[4], "(logit per cue unit)^2", "var_income"),
        column!(F64, trait_variance[5], "logit^2", "var_noise_bias"),
    ]
}

/// Columns that came with space; they follow those of earlier versions.
fn space() -> [Column<CensusRow>; 6] {
    [
        column!(OptionalF64, adult_cells, "1"),
        column!(U64, never_matured, "1"),
        column!(OptionalF64, relatedness[0], "1", "relatedness_1"),
        column!(OptionalF64, relatedness[1], "1", "relatedness_2"),
        column!(OptionalF64, relatedness[2], "1", "relatedness_3"),
        column!(OptionalF64, relatedness[3], "1", "relatedness_4"),
    ]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn trait_columns_bear_the_names_of_the_traits() {
        let names: Vec<&str> = trait_moments().iter().map(|column| column.name).collect();
        let means = TRAITS.map(|name| format!("mean_{name}"));
        let variances = TRAITS.map(|name| format!("var_{name}"));
        assert_eq!(names, [means, variances].concat());
    }
}
