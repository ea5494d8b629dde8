//! How large a body can be before food does not reach all of its cells.

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::development::GrowthRules;
use super::graph::BodyGraph;
use super::layout::{Layout, shell_graph};
use super::plan::Plan;
use super::steady::SteadySolver;

/// Seed of the body that stands for all: its growth is random where its plan is.
const SEED: u64 = 1;

/// Cells of the largest body of up to `most` cells none of whose cells has an income, untaxed, below
/// upkeep; 0 if a single cell starves. None where even `most` cells are all fed.
///
/// The body is the plan's typical one: sites in order of distance for `clump`, the line for `chain`, one
/// that grew at random for `tree`, the adult's sphere for `shell` (which grows as a clump, so that some
/// of its cells may be hungry on the way). Found by doubling, then by bisection: where hunger comes and
/// goes with single cells, it is one of the sizes at which it comes.
#[must_use]
pub fn largest_fed_cells(rules: &GrowthRules, most: usize) -> Option<usize> {
    let mut measure = Ruler::of(rules, most);
    let (mut fed, mut hungry) = (0, 1);
    while measure.all_fed(hungry) {
        if hungry == most {
            return None;
        }
        (fed, hungry) = (hungry, most.min(2 * hungry));
    }
    while hungry - fed > 1 {
        let middle = usize::midpoint(fed, hungry);
        if measure.all_fed(middle) {
            fed = middle;
        } else {
            hungry = middle;
        }
    }
    Some(fed)
}

/// Measures bodies of growing size.
struct Ruler<'a> {
    rules: &'a GrowthRules,
    layout: Layout,
    solver: SteadySolver,
    u: Vec<f64>,
    w: Vec<f64>,
    most: usize,
}

impl<'a> Ruler<'a> {
    fn of(rules: &'a GrowthRules, most: usize) -> Self {
        Self {
            rules,
            layout: Layout::of(rules.plan, most),
            solver: SteadySolver::default(),
            u: vec![1.0; most],
            w: vec![0.0; most],
            most,
        }
    }

    /// Whether no cell of the body of `cells` cells is hungry.
    fn all_fed(&mut self, cells: usize) -> bool {
        debug_assert!(cells <= self.most, "a body of {cells} cells");
        let graph = self.body(cells);
        let mut incomes = vec![1.0; cells];
        let fields = [&mut self.u[..cells], &mut self.w[..cells]];
        self.solver.incomes(&graph, &self.rules.fields, fields, &mut incomes);
        let GrowthRules { income_eu_per_h, upkeep_eu_per_h, .. } = self.rules;
        incomes.iter().all(|income| income * income_eu_per_h >= *upkeep_eu_per_h)
    }

    /// Founders alone make the body of each plan but the shell.
    fn body(&mut self, cells: usize) -> BodyGraph {
        if self.rules.plan == Plan::Shell {
            return shell_graph(cells);
        }
        let mut graph = BodyGraph::with_capacity(cells);
        self.layout.found(cells, &mut Xoshiro256PlusPlus::seed_from_u64(SEED));
        self.layout.describe(&mut graph);
        graph
    }
}
