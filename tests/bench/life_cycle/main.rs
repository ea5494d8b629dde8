//! How fast cells live: the ECS against a hand-written flat loop, and against itself in larger
//! bodies, with shorter ticks, and with fields in and between cells.
//!
//! `cargo bench --bench life_cycle` measures for about half a minute; run as a test, everything is
//! done once, briefly, to see that both ways still end alike. Times are printed, never judged: whoever
//! compares runs on the same machine looks at the ratios, which are medians over pairs run in turn.

#![expect(clippy::print_stdout, reason = "a benchmark is there to print")]

mod flat_loop;
mod stopwatch;

use flat_loop::FlatLoop;
use somadawn::evolution::Start;
use somadawn::evolution::seeding::{generator, replicate_seed};
use somadawn::scenario::Settings;
use somadawn::scenario::settings::{Nutrient, Support};
use somadawn::study::start;
use somadawn::theory::{Cue, ReturnCurve};
use somadawn::world::Population;
use somadawn::world::resources::{Genotype, Ledger};
use stopwatch::Stopwatch;

/// Exponents of the reference case: viability, fecundity.
const EXPONENTS: [f64; 2] = [1.7, 1.3];
/// Bodies that the cost per cell life is compared between, cells.
const SIZES: [usize; 4] = [64, 256, 1024, 4096];
/// Bodies for which space is compared with none, cells.
const SPATIAL_SIZES: [usize; 3] = [64, 512, 4096];

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
    compare_space(&effort);
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
    let case = Case::of(64, effort.generations);
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
    println!("reference case: 256 sites, 64 cells, noise, {} generations", effort.generations);
    println!("  {:<26} {}", "ECS", rates(&ecs));
    println!("  {:<26} {}", "flat loop, same end state", rates(&flat));
    println!("  {:<26} {}", "time ECS / flat loop", spread(&ratios(&ecs, &flat)));
}

fn compare_sizes(effort: &Effort) {
    // As many cell lives at each size, but for the few generations that the largest need.
    let generations = |cells: usize| (effort.generations * 32 / cells as u64).max(2);
    let cases = SIZES.map(|cells| Case::of(cells, generations(cells)));
    let costs = interleaved(&cases, effort.rounds);
    println!("cost per cell life by body size");
    for (size, column) in SIZES.iter().zip(&costs) {
        let to_smallest = spread(&ratios(column, &costs[0]));
        println!("  {:<26} {}  to 64: {to_smallest}", format!("{size} cells"), rates(column));
    }
}

fn compare_ticks(effort: &Effort) {
    let coarse = Case::of(64, effort.generations.div_ceil(2));
    let half = Start { tick_h: coarse.start.tick_h / 2.0, ..coarse.start };
    let fine = Case { start: half, settings: coarse.settings.clone(), ..coarse };
    let costs = interleaved(&[coarse, fine], effort.rounds);
    println!("cost per cell life by tick, 64 cells");
    println!("  {:<26} {}", "100th of a generation", rates(&costs[0]));
    let to_coarse = spread(&ratios(&costs[1], &costs[0]));
    println!("  {:<26} {}  to a 100th: {to_coarse}", "200th of a generation", rates(&costs[1]));
}

/// Local support and a nutrient against pooled support and fully fed cells.
fn compare_space(effort: &Effort) {
    println!("cost per cell life with local support and nutrient");
    for size in SPATIAL_SIZES {
        let generations = (effort.generations * 32 / size as u64).max(2);
        let plain = Case::of(size, generations);
        let spatial = Case::of(size, generations).with_space();
        let costs = interleaved(&[plain, spatial], effort.rounds);
        let to_plain = spread(&ratios(&costs[1], &costs[0]));
        println!("  {:<26} {}  to pooled: {to_plain}", format!("{size} cells"), rates(&costs[1]));
    }
}

/// Costs of each case, ns per cell life, the cases taking turns.
fn interleaved(cases: &[Case], rounds: u64) -> Vec<Vec<f64>> {
    let mut costs = vec![Vec::new(); cases.len()];
    for round in 0..rounds {
        for (costs, case) in costs.iter_mut().zip(cases) {
            costs.push(case.run_ecs(round).0.ns_per_cell_life());
        }
    }
    costs
}

fn ratios(costs: &[f64], others: &[f64]) -> Vec<f64> {
    costs.iter().zip(others).map(|(cost, other)| cost / other).collect()
}

/// A case of the life cycle.
struct Case {
    settings: Settings,
    start: Start,
    generations: u64,
}

/// Where a run ends: counts, and every living genotype.
type End = (Ledger, Vec<Genotype>);

impl Case {
    /// The reference case with bodies of so many cells; all that is not said here has its default.
    fn of(adult_cells: usize, generations: u64) -> Self {
        let mut settings = Settings::example("reference case");
        settings.habitat.sites = 256;
        settings.body.adult_cells = adult_cells;
        settings.traits.cues = [Cue::Noise].into_iter().collect();
        let [viability, fecundity] = EXPONENTS.map(|exponent| ReturnCurve::Power { exponent });
        settings.returns.viability.curve = viability;
        settings.returns.fecundity.curve = fecundity;
        Self { start: start(&settings), settings, generations }
    }

    /// The same with support that reaches two cell diameters and a nutrient that the core lacks.
    fn with_space(mut self) -> Self {
        self.settings.support = Some(Support { range_diameters: 2.0, leak: 0.0 });
        self.settings.nutrient = Some(Nutrient {
            bath_mm: 0.05,
            half_saturation_mm: 0.02,
            uptake_fmol_per_h: 20.0,
            diffusivity_um2_per_s: 500.0,
            exchange: 1.0,
        });
        self.start = start(&self.settings);
        self
    }

    fn run_ecs(&self, replicate: u64) -> (Cost, End) {
        let rng = generator(replicate_seed(1, 0, replicate));
        let founder = |site| Genotype::of_founder(self.start.programme, site);
        let mut world = Population::founded(&self.settings, self.start.tick_h, rng, founder);
        let (founders, began) = (world.ledger().cell_lives, Stopwatch::start());
        while world.clock().generation < self.generations as f64 && world.alive() > 0 {
            world.tick();
        }
        let seconds = began.seconds();
        let end = (world.ledger().clone(), world.genotypes().copied().collect());
        (Cost { cell_lives: end.0.cell_lives - founders, seconds }, end)
    }

    fn run_flat(&self, replicate: u64) -> (Cost, End) {
        let rng = generator(replicate_seed(1, 0, replicate));
        let founder = |site| Genotype::of_founder(self.start.programme, site);
        let mut flat = FlatLoop::founded(&self.settings, self.start.tick_h, rng, founder);
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
