//! Bodies told cell by cell: where chance or the fields arrange them, a sample.

use std::sync::{Arc, Mutex};

use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::reach::Reach;
use crate::scenario::Settings;
use crate::theory::{CellKind, Cue, PlacedBodies, PlacedBody, PlacedCell, Spread};
use crate::tissue::{BodyGraph, Developer, Development, Ending, Sharing, SteadySolver};

/// Cells grown in all to learn what bodies are like.
const SAMPLED_CELLS: usize = 2048;
/// Fewest and most bodies grown for that.
const SAMPLED_BODIES: (usize, usize) = (6, 64);
/// Seed of that growth: the same scenario always gets the same prediction.
const SAMPLING_SEED: u64 = 0;

/// Adult bodies of a scenario cell by cell: a sample of developments without a tax on responsiveness,
/// always the same, in which like ones are told once with their number.
///
/// Cells are told in the order of their coordinates, so that chains, say, are all alike.
pub(super) fn placed_bodies(settings: &Settings) -> PlacedBodies {
    let cells = settings.body.adult_cells.max(1);
    let wanted = (SAMPLED_CELLS / cells).clamp(SAMPLED_BODIES.0, SAMPLED_BODIES.1);
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(SAMPLING_SEED);
    let mut developer = Developer::new(settings.growth_rules());
    let mut known: Vec<(f64, Arranged)> = Vec::new();
    for _ in 0..wanted {
        let arranged = Arranged::of(&developer.develop(1.0, &mut rng), settings);
        match known.iter_mut().find(|(_, other)| *other == arranged) {
            Some((number, _)) => *number += 1.0,
            None => known.push((1.0, arranged)),
        }
    }
    let sharing = settings.sharing();
    let solver = Arc::new(Mutex::new(SteadySolver::default()));
    let placed = |(number, body): (f64, Arranged)| (number, body.placed(sharing, &solver));
    let bodies: Vec<(f64, PlacedBody)> = known.into_iter().map(placed).collect();
    PlacedBodies::new(bodies, settings.budget.turnover_per_h)
}

/// A body as far as it makes a difference in its scenario.
#[derive(PartialEq)]
struct Arranged {
    cells: Vec<PlacedCell>,
    cells_in_contact: usize,
    growth_h: Option<f64>,
    /// Who touches whom, where support is local.
    graph: Option<BodyGraph>,
}

impl Arranged {
    fn of(development: &Development, settings: &Settings) -> Self {
        let Development { coordinates, labels, incomes, graph, ending, .. } = development;
        let labels_matter = settings.traits.cues.contains(Cue::Lineage);
        let exposure_matters = settings.exposure_matters();
        let cell = |cell: usize| PlacedCell {
            kind: CellKind {
                label: if labels_matter { labels[cell] } else { 0 },
                exposed: graph.empty()[cell] > 0 || !exposure_matters,
            },
            income: incomes[cell],
        };
        let growth_h = match ending {
            Ending::Adult(hours) => Some(*hours),
            Ending::Stunted(_) => None,
        };
        let mut order: Vec<usize> = (0..coordinates.len()).collect();
        let local = settings.support.is_some() && growth_h.is_some();
        if local {
            order.sort_unstable_by_key(|cell| coordinates[*cell]);
        } else {
            // Incomes are positive, so that their bits sort as they do.
            order.sort_unstable_by_key(|i| (cell(*i).kind, cell(*i).income.to_bits()));
        }
        let cells_in_contact = graph.cells_in_contact();
        let graph = local.then(|| reordered(graph, &order));
        Self { cells: order.into_iter().map(cell).collect(), cells_in_contact, growth_h, graph }
    }

    fn placed(self, sharing: Option<Sharing>, solver: &Arc<Mutex<SteadySolver>>) -> PlacedBody {
        let spread = self.graph.zip(sharing).map(|(graph, sharing)| {
            let reach: Arc<dyn Spread> = Arc::new(Reach::new(graph, sharing, Arc::clone(solver)));
            reach
        });
        let Self { cells, cells_in_contact, growth_h, .. } = self;
        PlacedBody { cells, cells_in_contact, growth_h, spread }
    }
}

/// The same graph with its cells in another order.
fn reordered(graph: &BodyGraph, order: &[usize]) -> BodyGraph {
    let mut rank = vec![0; order.len()];
    for (new, old) in order.iter().enumerate() {
        rank[*old] = new as u32;
    }
    let mut reordered = BodyGraph::with_capacity(order.len());
    for old in order {
        let mut touching: Vec<u32> =
            graph.touching(*old).iter().map(|next| rank[*next as usize]).collect();
        touching.sort_unstable();
        reordered.push(touching, graph.empty()[*old], graph.open()[*old]);
    }
    reordered
}
