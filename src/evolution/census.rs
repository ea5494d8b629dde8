//! The census: what a population looks like at one moment.

use std::collections::BTreeSet;

use ndarray::{Array2, Axis};

use super::relatedness::relatedness;
use crate::record::{CensusRow, TRAITS};
use crate::scenario::Settings;
use crate::scenario::settings::{Layout, Onset};
use crate::stats::MutualEntropy;
use crate::theory::{BodyClass, Programme, division_index};
use crate::world::components::SomaShare;
use crate::world::{ColonyView, Population};

/// Counts and measures the population.
pub(super) fn take(population: &mut Population, settings: &Settings, replicate: u32) -> CensusRow {
    let mut row = CensusRow {
        replicate,
        generation: population.clock().generation,
        time_h: population.clock().now_h,
        parental_age_h: population.take_parental_age_h(),
        never_matured: population.ledger().never_matured,
        ..CensusRow::default()
    };
    survey_bodies(&mut row, population.adults(), &settings.onset);
    survey_genotypes(&mut row, population);
    if settings.habitat.layout != Layout::Mixed {
        row.relatedness = relatedness(&population.lines().collect::<Vec<_>>());
    }
    row
}

fn survey_bodies<'w>(
    row: &mut CensusRow,
    adults: impl Iterator<Item = ColonyView<'w>>,
    onset: &Onset,
) {
    let mut cells = CellKinds::default();
    let (mut index, mut entropy, mut share) = (0.0, 0.0, 0.0);
    for body in adults {
        row.adults += 1;
        let kinds = CellKinds::of(body.shares, onset);
        match kinds.class() {
            BodyClass::Alike => row.bodies_alike += 1,
            BodyClass::Partial => row.bodies_partial += 1,
            BodyClass::Complete => row.bodies_complete += 1,
        }
        cells.add(&kinds);
        index += division_index(body.shares.iter().map(|z| z.0));
        entropy += mutual_entropy(body.shares);
        share += body.shares.iter().map(|z| f64::from(z.0)).sum::<f64>();
    }
    if row.adults > 0 {
        let (adults, total) = (f64::from(row.adults), cells.total());
        row.division_index = Some(index / adults);
        row.mutual_entropy = Some(entropy / adults);
        row.mean_soma_share = Some(share / total);
        row.adult_cells = Some(total / adults);
        row.germ_share = Some(cells.germ / total);
        row.soma_share = Some(cells.soma / total);
        row.generalist_share = Some(cells.generalists / total);
    }
}

fn survey_genotypes(row: &mut CensusRow, population: &mut Population) {
    let mut founders = BTreeSet::new();
    let mut values = Vec::new();
    for genotype in population.genotypes() {
        founders.insert(genotype.founder);
        values.extend(trait_values(&genotype.programme));
        row.colonies += 1;
    }
    row.founder_lines = founders.len() as u32;
    let Ok(table) = Array2::from_shape_vec((row.colonies as usize, TRAITS.len()), values) else {
        return;
    };
    if let Some(means) = table.mean_axis(Axis(0)) {
        let variances = table.var_axis(Axis(0), 0.0);
        for (column, (mean, variance)) in means.iter().zip(&variances).enumerate() {
            (row.trait_mean[column], row.trait_variance[column]) = (*mean, *variance);
        }
    }
}

/// A programme's traits in the order of [`TRAITS`].
fn trait_values(programme: &Programme) -> [f64; TRAITS.len()] {
    let [noise, lineage, exposure, income] = programme.responsiveness;
    [programme.baseline, noise, lineage, exposure, income, programme.noise_bias]
}

/// How many cells of a body, or of many, are germ, soma and generalists.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct CellKinds {
    pub(super) germ: f64,
    pub(super) soma: f64,
    pub(super) generalists: f64,
}

impl CellKinds {
    pub(super) fn of(shares: &[SomaShare], onset: &Onset) -> Self {
        let count = |holds: &dyn Fn(f64) -> bool| {
            shares.iter().filter(|z| holds(f64::from(z.0))).count() as f64
        };
        let germ = count(&|z| z < onset.germ_below);
        let soma = count(&|z| z > onset.soma_above);
        Self { germ, soma, generalists: shares.len() as f64 - germ - soma }
    }

    pub(super) fn class(&self) -> BodyClass {
        BodyClass::of(self.germ, self.soma, self.generalists)
    }

    fn add(&mut self, other: &Self) {
        self.germ += other.germ;
        self.soma += other.soma;
        self.generalists += other.generalists;
    }

    fn total(&self) -> f64 {
        self.germ + self.soma + self.generalists
    }
}

/// Mutual entropy of cells and tasks over the entropy of tasks (Gorelick et al. 2004): each cell's
/// time on the two tasks is z and 1 - z.
fn mutual_entropy(shares: &[SomaShare]) -> f64 {
    let table = Array2::from_shape_fn((shares.len(), 2), |(cell, task)| {
        let z = f64::from(shares[cell].0);
        if task == 0 { z } else { 1.0 - z }
    });
    // Shares lie in [0, 1], so the table is never refused.
    MutualEntropy::of(&table.view()).map_or(0.0, |entropy| entropy.over_tasks())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::theory::Cue;

    #[test]
    #[expect(clippy::float_cmp, reason = "values are copied, not computed")]
    fn traits_stand_in_the_order_of_their_columns() {
        let mut programme = Programme::generalist(1.0);
        for cue in Cue::ALL {
            programme.responsiveness[cue.index()] = 10.0 + cue.index() as f64;
            assert_eq!(TRAITS[1 + cue.index()], cue.name());
        }
        programme.noise_bias = 2.0;
        assert_eq!(trait_values(&programme), [1.0, 10.0, 11.0, 12.0, 13.0, 2.0]);
    }
}
