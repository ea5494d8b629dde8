//! How fast cells live: the ECS against a hand-written flat loop, and against itself in larger
//! bodies and with longer ticks.
//!
//! `cargo bench --bench life_cycle` measures for about half a minute; run as a test, everything is
//! done once, briefly, to see that both ways still end alike. Times are printed, never judged: whoever
//! compares runs on the same machine looks at the ratios, which are medians over pairs run in turn.

#![expect(clippy::print_stdout, reason = "a benchmark is there to print")]

mod flat_loop;
mod stopwatch;

use flat_loop::FlatLoop;
use somadawn::evolution::seeding::{generator, replicate_seed};
use somadawn::scenario::Settings;
use somadawn::theory::{Programme, ReturnCurve};
use somadawn::world::Population;
use somadawn::world::resources::{Genotype, Ledger};
use stopwatch::Stopwatch;

/// Exponents of the reference case: viability, fecundity.
const EXPONENTS: [f64; 2] = [1.7, 1.3];
/// Bodies that the cost per cell life is compared between, cells.
const SIZES: [usize; 4] = [64, 256, 1024, 4096];

/// How long to measure.
struct Effort {
    /// Generations of the reference case.
    generations: u64,
    /// Pairs, or rounds of several cases.
    rounds: u64,
}

const MEASURE: Effort = Effort { generations: 200, rounds: 9 };
const GLANCE: Effort = Effort { generations: 4, rounds: 1 };

fn main() {
    // `cargo bench` says so; `cargo test` does not.
    let effort = if std::env::args().any(|word| word == "--bench") { MEASURE } else { GLANCE };
    compare_with_flat_loop(&effort);
    compare_sizes(&effort);
    compare_ticks(&effort);
}

/// What one run took.
#[derive(Debug, Clone, Copy)]
struct Cost {
    cell_lives: u64,
    seconds: f64,
}

impl Cost {
    fn ns_per_cell_life(self) -> f64 {
        self.seconds * 1e9 / self.cell_lives as f64
    }
}

fn compare_with_flat_loop(effort: &Effort) {
    let case = Case { adult_cells: 64, generations: effort.generations, ticks_per_generation: 200 };
    let (mut ecs, mut flat) = (Vec::new(), Vec::new());
    // A first run warms caches and clocks up.
    case.run_ecs(0);
    for round in 0..effort.rounds {
        let (cost, world) = case.run_ecs(round);
        ecs.push(cost.ns_per_cell_life());
        let (cost, arrays) = case.run_flat(round);
        flat.push(cost.ns_per_cell_life());
        assert_eq!(world, arrays, "the world and the flat loop have drifted apart");
    }
    let ratios: Vec<f64> = ecs.iter().zip(&flat).map(|(ecs, flat)| ecs / flat).collect();
    println!("reference case: 256 sites, 64 cells, noise, {} generations", effort.generations);
    println!("  {:<34} {}", "ECS", rates(&ecs));
    println!("  {:<34} {}", "flat loop, same end state", rates(&flat));
    println!("  {:<34} {}", "time ECS / flat loop", spread(&ratios));
}

fn compare_sizes(effort: &Effort) {
    let mut costs = vec![Vec::new(); SIZES.len()];
    for round in 0..effort.rounds {
        for (costs, adult_cells) in costs.iter_mut().zip(SIZES) {
            // As many cell lives at each size, but for the few generations that the largest need.
            let generations = (effort.generations * 32 / adult_cells as u64).max(2);
            let case = Case { adult_cells, generations, ticks_per_generation: 200 };
            costs.push(case.run_ecs(round).0.ns_per_cell_life());
        }
    }
    println!("cost per cell life by body size");
    for (size, column) in SIZES.iter().zip(&costs) {
        let ratios: Vec<f64> =
            column.iter().zip(&costs[0]).map(|(cost, at_64)| cost / at_64).collect();
        println!("  {size:>5} cells {:<22} {}  to 64: {}", "", rates(column), spread(&ratios));
    }
}

fn compare_ticks(effort: &Effort) {
    let case = |ticks_per_generation| Case {
        adult_cells: 64,
        generations: effort.generations.div_ceil(2),
        ticks_per_generation,
    };
    let (fine, coarse): (Vec<f64>, Vec<f64>) = (0..effort.rounds)
        .map(|round| [200, 100].map(|ticks| case(ticks).run_ecs(round).0.ns_per_cell_life()))
        .map(|[fine, coarse]| (fine, coarse))
        .unzip();
    let ratios: Vec<f64> = coarse.iter().zip(&fine).map(|(coarse, fine)| coarse / fine).collect();
    println!("ticks of a 100th of a generation");
    println!("  {:<34} {}  to a 200th: {}", "64 cells", rates(&coarse), spread(&ratios));
}

/// A case of the life cycle.
struct Case {
    adult_cells: usize,
    generations: u64,
    ticks_per_generation: u32,
}

/// Where a run ends: counts, and every living genotype.
type End = (Ledger, Vec<Genotype>);

impl Case {
    fn settings(&self) -> Settings {
        let mut settings = Settings::example("reference case");
        settings.body.adult_cells = self.adult_cells;
        let [viability, fecundity] = EXPONENTS.map(|exponent| ReturnCurve::Power { exponent });
        settings.returns.viability.curve = viability;
        settings.returns.fecundity.curve = fecundity;
        settings
    }

    /// The generalist optimum, z* = a / (a + c).
    fn founder() -> Programme {
        Programme::generalist((EXPONENTS[0] / EXPONENTS[1]).ln())
    }

    /// A share of the generalist's generation time: growth and mean adult life, `V / m0`.
    fn tick_h(&self, settings: &Settings) -> f64 {
        let rounds = f64::from(self.adult_cells.next_power_of_two().trailing_zeros());
        let growth_h = rounds * settings.budget.division_cost_eu / settings.budget.income_eu_per_h;
        let viability = (EXPONENTS[0] / (EXPONENTS[0] + EXPONENTS[1])).powf(EXPONENTS[0]);
        let adult_h = viability / settings.life.adult_hazard_per_h;
        (growth_h + adult_h) / f64::from(self.ticks_per_generation)
    }

    fn run_ecs(&self, replicate: u64) -> (Cost, End) {
        let settings = self.settings();
        let rng = generator(replicate_seed(1, 0, replicate));
        let founder = |site| Genotype { programme: Self::founder(), founder: site };
        let mut world = Population::founded(&settings, self.tick_h(&settings), rng, founder);
        let (founders, began) = (world.ledger().cell_lives, Stopwatch::start());
        while world.clock().generation < self.generations as f64 && world.alive() > 0 {
            world.tick();
        }
        let seconds = began.seconds();
        let end = (world.ledger().clone(), world.genotypes().copied().collect());
        (Cost { cell_lives: end.0.cell_lives - founders, seconds }, end)
    }

    fn run_flat(&self, replicate: u64) -> (Cost, End) {
        let settings = self.settings();
        let rng = generator(replicate_seed(1, 0, replicate));
        let founder = |site| Genotype { programme: Self::founder(), founder: site };
        let mut flat = FlatLoop::founded(&settings, self.tick_h(&settings), rng, founder);
        let (founders, began) = (flat.ledger.cell_lives, Stopwatch::start());
        while flat.generation < self.generations as f64 && flat.alive() > 0 {
            flat.tick();
        }
        let seconds = began.seconds();
        let end = (flat.ledger.clone(), flat.genotypes().copied().collect());
        (Cost { cell_lives: end.0.cell_lives - founders, seconds }, end)
    }
}

/// Median rate and the best one.
fn rates(ns: &[f64]) -> String {
    let [best, middle, _] = summary(ns);
    format!(
        "{middle:6.1} ns per cell life, {:5.1} million/s (best {:5.1})",
        1e3 / middle,
        1e3 / best
    )
}

fn spread(ratios: &[f64]) -> String {
    let [low, middle, high] = summary(ratios);
    format!("{middle:.2} ({low:.2} to {high:.2})")
}

/// Least, median and greatest.
fn summary(values: &[f64]) -> [f64; 3] {
    let mut sorted = values.to_vec();
    sorted.sort_by(f64::total_cmp);
    [sorted[0], sorted[sorted.len() / 2], sorted[sorted.len() - 1]]
}
