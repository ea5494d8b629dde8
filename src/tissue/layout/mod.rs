//! Where the cells of a growing body lie: one layout for each body plan.
//!
//! Concentrations belong to sites: cells that are pushed move through them. A layout therefore keeps
//! the last solution of each field by site and guesses at a site that is newly filled.

mod chain;
mod clump;
mod contacts;
mod shell;
mod tree;

use rand::Rng;

use super::graph::BodyGraph;
use super::lattice::compact_radius_um;
use super::plan::Plan;
use chain::Chain;
use clump::Clump;
use shell::Shell;
pub(super) use shell::shell_graph;
use shell::shell_radius_diameters;
use tree::Tree;

/// Marks a place without a cell, or a cell that is no more.
pub(super) const VACANT: u32 = u32::MAX;

/// Relative concentrations of nutrient and waste in the bath: first guesses.
const BATH: [f64; 2] = [1.0, 0.0];

/// Concentrations of nutrient and waste, an entry per cell or per place.
pub(super) type Concentrations = [Vec<f64>; 2];

/// The sites of a growing body's cells, numbered in order of birth.
#[derive(Debug, Clone)]
pub(super) enum Layout {
    Clump(Box<Clump>),
    Chain(Chain),
    Tree(Tree),
    Shell(Box<Shell>),
}

impl Layout {
    /// The layout of bodies of at most `most` cells.
    pub(super) fn of(plan: Plan, most: usize) -> Self {
        match plan {
            Plan::Clump => Self::Clump(Box::new(Clump::of(most))),
            Plan::Chain => Self::Chain(Chain::default()),
            Plan::Tree => Self::Tree(Tree::default()),
            Plan::Shell => Self::Shell(Box::new(Shell::of(most))),
        }
    }

    /// Begins a new body with `cells` founders.
    pub(super) fn found(&mut self, cells: usize, rng: &mut impl Rng) {
        match self {
            Self::Clump(clump) => clump.found(cells, rng),
            Self::Chain(chain) => chain.found(cells),
            Self::Tree(tree) => tree.found(cells, rng),
            Self::Shell(shell) => shell.found(cells, rng),
        }
    }

    /// Places a daughter of `mother`, the next cell by number; `false` where there is no room for it.
    pub(super) fn divide(&mut self, mother: u32, rng: &mut impl Rng) -> bool {
        match self {
            Self::Clump(clump) => clump.divide(mother, rng),
            Self::Chain(chain) => chain.divide(mother, rng),
            Self::Tree(tree) => tree.divide(mother, rng),
            Self::Shell(shell) => shell.divide(mother, rng),
        }
    }

    /// Frees the sites of dead cells and renumbers the others: `numbers` holds each cell's new number,
    /// [`VACANT`] for the dead.
    pub(super) fn bury(&mut self, numbers: &[u32]) {
        match self {
            Self::Clump(clump) => clump.bury(numbers),
            Self::Chain(chain) => chain.bury(numbers),
            Self::Tree(tree) => tree.bury(numbers),
            Self::Shell(shell) => shell.bury(numbers),
        }
    }

    /// Takes the shape of an adult.
    pub(super) fn mature(&mut self) {
        if let Self::Shell(shell) = self {
            shell.mature();
        }
    }

    /// Makes `graph` that of the body as it is.
    pub(super) fn describe(&mut self, graph: &mut BodyGraph) {
        graph.clear();
        match self {
            Self::Clump(clump) => clump.describe(graph),
            Self::Chain(chain) => chain.describe(graph),
            Self::Tree(tree) => tree.describe(graph),
            Self::Shell(shell) => shell.describe(graph),
        }
    }

    /// Writes each cell's concentrations as last solved, or a guess.
    pub(super) fn recall(&self, fields: &mut Concentrations) {
        match self {
            Self::Clump(clump) => clump.recall(fields),
            Self::Chain(chain) => chain.recall(fields),
            Self::Tree(tree) => tree.recall(fields),
            Self::Shell(shell) => shell.recall(fields),
        }
    }

    /// Keeps the concentrations at the cells' sites.
    pub(super) fn remember(&mut self, fields: &Concentrations) {
        match self {
            Self::Clump(clump) => clump.remember(fields),
            Self::Chain(chain) => chain.remember(fields),
            Self::Tree(tree) => tree.remember(fields),
            Self::Shell(shell) => shell.remember(fields),
        }
    }

    /// Lattice coordinates of the cells relative to the body's centre.
    pub(super) fn coordinates(&self) -> Vec<[i32; 3]> {
        match self {
            Self::Clump(clump) => clump.coordinates(),
            Self::Chain(chain) => chain.coordinates(),
            Self::Tree(tree) => tree.coordinates(),
            Self::Shell(shell) => shell.coordinates(),
        }
    }
}

/// A random number in `0..choices` by multiply-and-shift (bias below choices / 2^32), the same on
/// every machine.
pub(super) fn pick(choices: usize, rng: &mut impl Rng) -> usize {
    ((u64::from(rng.next_u32()) * choices as u64) >> 32) as usize
}

#[cfg(test)]
mod tests;

/// Typical radius of a body of `cells` cells, um: of the ball of the body's volume for `clump` and
/// `tree`, half the length for `chain`, and of the sphere on which the cells lie for `shell`,
/// `d sqrt(n sqrt(3) / (8 pi))`.
#[must_use]
pub fn plan_radius_um(plan: Plan, cells: usize, cell_diameter_um: f64) -> f64 {
    match plan {
        Plan::Clump | Plan::Tree => compact_radius_um(cells, cell_diameter_um),
        Plan::Chain => cells as f64 * cell_diameter_um / 2.0,
        Plan::Shell => shell_radius_diameters(cells) * cell_diameter_um,
    }
}
