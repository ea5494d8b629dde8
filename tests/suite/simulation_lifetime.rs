//! What a fixed programme leaves: propagules per founder against R0 of theory, and the length of a
//! generation against the mean life, with ticks that differ tenfold.
//!
//! `R0 = P(reach adulthood) E[ B e0 / (c_p m) ]`, `m = m_ext + m0 / V` (Mylius & Diekmann 1995), worked
//! out here from a list of the bodies that chance makes of one programme.

use std::collections::BTreeSet;

use super::simulation_support::{assert_agrees, mean_and_error, power, size, trials};
use rand::RngExt;
use somadawn::evolution::seeding::generator;
use somadawn::scenario::Settings;
use somadawn::study::prediction;
use somadawn::theory::{Cue, CueSet, Programme};
use somadawn::world::Population;
use somadawn::world::resources::Genotype;

const SITES: usize = 64;
const DEATHS: u64 = 4_000;
const VIABILITY: f64 = 1.4;
const FECUNDITY: f64 = 1.2;

/// A fixed programme in bodies of `cells` cells.
fn scenario(cells: usize, cue: Cue) -> Settings {
    let mut settings = Settings::example("a fixed programme");
    settings.habitat.sites = SITES;
    settings.body.adult_cells = cells;
    settings.returns.viability = power(VIABILITY);
    settings.returns.fecundity = power(FECUNDITY);
    settings.traits.cues = CueSet::EMPTY.with(cue);
    settings.traits.mutation_probability = 0.0;
    settings
}

fn programme(baseline: f64, cue: Cue, responsiveness: f64) -> Programme {
    let mut programme = Programme::generalist(baseline);
    programme.responsiveness[cue.index()] = responsiveness;
    programme
}

/// A body that chance makes of a programme, with its probability.
#[derive(Debug, Clone, Copy)]
struct Body {
    odds: f64,
    viability: f64,
    fecundity: f64,
}

impl Body {
    /// A body of so many cells (`count`) of each soma share.
    fn of(odds: f64, cells: &[(f64, f64)]) -> Self {
        let n: f64 = cells.iter().map(|(count, _)| count).sum();
        let sum = |of: &dyn Fn(f64) -> f64| cells.iter().map(|(count, z)| count * of(*z)).sum();
        let viability: f64 = sum(&|z| z.powf(VIABILITY));
        Self { odds, viability: viability / n, fecundity: sum(&|z| (1.0 - z).powf(FECUNDITY)) }
    }
}

/// Propagules per founder and hours of an average life.
#[derive(Debug, Clone, Copy)]
struct Expected {
    propagules: f64,
    life_h: f64,
}

impl Expected {
    fn of(settings: &Settings, bodies: &[Body]) -> Self {
        let life = &settings.life;
        let growth_h = growth_h(settings);
        let hazard = life.juvenile_hazard_per_h;
        let grown = (-hazard * growth_h).exp();
        let young_h = if hazard > 0.0 { (1.0 - grown) / hazard } else { growth_h };
        let adult_h = |body: &Body| {
            1.0 / (life.extrinsic_hazard_per_h + life.adult_hazard_per_h / body.viability)
        };
        let total: f64 = bodies.iter().map(|body| body.odds).sum();
        let mean = |of: &dyn Fn(&Body) -> f64| {
            bodies.iter().map(|body| body.odds * of(body)).sum::<f64>() / total
        };
        let rate = settings.budget.income_eu_per_h / life.propagule_cost_eu;
        Self {
            propagules: grown * rate * mean(&|body| body.fecundity * adult_h(body)),
            life_h: young_h + grown * mean(&adult_h),
        }
    }
}

/// Rounds of division times the hours that a cell saves for one: `ceil(log2 n) c_d / (e0 - upkeep)`.
fn growth_h(settings: &Settings) -> f64 {
    let budget = &settings.budget;
    let rounds = (settings.body.adult_cells as f64).log2().ceil();
    rounds * budget.division_cost_eu / (budget.income_eu_per_h - budget.upkeep_eu_per_h)
}

/// Lifetime propagules per colony that died, and generations per hour, of one population over
/// [`DEATHS`] deaths.
///
/// Colonies are counted by their death, from when the start is forgotten: neither end then favours
/// long or short lives.
fn measured(settings: &Settings, programme: &Programme, tick_h: f64, seed: u64) -> [f64; 2] {
    let founder = |site| Genotype::of_founder(*programme, site);
    let mut population = Population::founded(settings, tick_h, generator(seed), founder);
    run_to_deaths(&mut population, 5 * SITES as u64);
    let (first, from) = (population.ledger().clone(), population.clock().clone());
    run_to_deaths(&mut population, first.deaths + DEATHS);
    let (last, to) = (population.ledger(), population.clock());
    let propagules = (last.lifetime_propagules - first.lifetime_propagules) as f64;
    let generations = to.generation - from.generation;
    [propagules / (last.deaths - first.deaths) as f64, generations / (to.now_h - from.now_h)]
}

fn run_to_deaths(population: &mut Population, deaths: u64) {
    while population.ledger().deaths < deaths {
        population.tick();
        assert!(population.alive() > 0, "died out");
    }
}

/// Asserts that theory knows R0, and that the simulation has it and the length of a generation, at
/// ticks of a 200th and of a 20th of a life; the error is at most 0.3 % (80 populations of 4,000
/// deaths), so that 1 % would show.
///
/// A colony holds its site from the end of a tick to the end of the tick in which it dies, on average
/// half a tick beyond its death: a generation lasts a mean life and half a tick.
fn check(what: &str, settings: &Settings, programme: &Programme, bodies: &[Body]) {
    let expected = Expected::of(settings, bodies);
    let predicted = prediction::model(settings).expected_propagules(programme);
    approx::assert_relative_eq!(predicted, expected.propagules, max_relative = 2e-4);
    for (seed, share) in [(401, 200.0), (402, 20.0)] {
        let tick_h = expected.life_h / share;
        let runs = trials(seed, size(80, 320), |seed| measured(settings, programme, tick_h, seed));
        let estimate = |at: usize| mean_and_error(&runs.iter().map(|r| r[at]).collect::<Vec<_>>());
        let ticked = format!("{what}, tick {tick_h:.2} h");
        assert_agrees(&format!("{ticked}, R0"), estimate(0), expected.propagules, 0.003);
        let per_h = 1.0 / (expected.life_h + 0.5 * tick_h);
        assert_agrees(&format!("{ticked}, generations per h"), estimate(1), per_h, 0.003);
    }
}

/// Soma share of a cell of `programme` that reads `value` on `cue`, all else being 0.
fn share(programme: &Programme, cue: Cue, value: f64) -> f64 {
    let mut cues = [0.0; Cue::COUNT];
    cues[cue.index()] = value;
    programme.soma_share(&cues)
}

/// Eight cells of strongly random fates, so that bodies differ much: the number of cells that read +1
/// is binomial.
#[test]
fn random_fates_leave_what_theory_expects() {
    let settings = scenario(8, Cue::Noise);
    let mut programme = programme(0.3, Cue::Noise, 2.5);
    programme.noise_bias = 0.4;
    check("noise, n = 8", &settings, &programme, &lucky_bodies(8, &programme));
}

/// With hazards that no soma lowers, before and after adulthood.
#[test]
fn unavoidable_hazards_cost_what_theory_expects() {
    let mut settings = scenario(8, Cue::Noise);
    settings.life.extrinsic_hazard_per_h = 0.004;
    settings.life.juvenile_hazard_per_h = 0.01;
    settings.life.propagule_cost_eu = 2.0;
    settings.budget.upkeep_eu_per_h = 0.2;
    let programme = programme(0.0, Cue::Noise, 2.0);
    check("hazards, n = 8", &settings, &programme, &lucky_bodies(8, &programme));
}

fn lucky_bodies(n: u32, programme: &Programme) -> Vec<Body> {
    let p = programme.noise_probability();
    let mean = 2.0 * p - 1.0;
    let [up, down] = [1.0, -1.0].map(|draw| share(programme, Cue::Noise, draw - mean));
    let mut odds = (1.0 - p).powf(f64::from(n));
    let mut bodies = Vec::new();
    for k in 0..=n {
        let (plus, minus) = (f64::from(k), f64::from(n - k));
        bodies.push(Body::of(odds, &[(plus, up), (minus, down)]));
        odds *= minus / (plus + 1.0) * p / (1.0 - p);
    }
    bodies
}

/// Twelve cells: of 8 cells, half of them daughters, 4 divide in the last round. Of the other 4 as many
/// are daughters, k, as a draw of 4 from 4 + 4: odds 1, 16, 36, 16, 1 in 70. Labels are centred.
#[test]
fn asymmetric_division_with_a_partial_last_round_leaves_what_theory_expects() {
    let settings = scenario(12, Cue::Lineage);
    let programme = programme(-0.2, Cue::Lineage, 1.5);
    let body = |k: f64, odds: f64| {
        let (daughters, mothers) = (4.0 + k, 8.0 - k);
        let mean = (daughters - mothers) / 12.0;
        let [up, down] = [1.0, -1.0].map(|label| share(&programme, Cue::Lineage, label - mean));
        Body::of(odds, &[(daughters, up), (mothers, down)])
    };
    let bodies: Vec<Body> = [1.0, 16.0, 36.0, 16.0, 1.0]
        .into_iter()
        .enumerate()
        .map(|(k, odds)| body(k as f64, odds))
        .collect();
    check("lineage, n = 12", &settings, &programme, &bodies);
}

/// 64 cells whose work pays at the surface only and who read whether they are there. A compact body
/// fills the 55 sites of the first five shells of the face-centred cubic lattice (1 + 12 + 6 + 24 + 12)
/// and 9 of the 24 of the next, any 9 alike; interior cells are those with 12 neighbours.
#[test]
fn cells_that_read_exposure_leave_what_theory_expects() {
    let mut settings = scenario(64, Cue::Exposure);
    settings.returns.viability.interior_effect = 0.0;
    let programme = programme(-0.5, Cue::Exposure, 3.0);
    let mut rng = generator(9);
    let bodies: Vec<Body> = (0..20_000)
        .map(|_| {
            let exposed = f64::from(exposed_cells(&mut rng));
            let [out, inside] = [exposed, 64.0 - exposed];
            let mean = exposed / 64.0;
            let [z_out, z_in] = [1.0, 0.0].map(|e| share(&programme, Cue::Exposure, e - mean));
            let all = Body::of(1.0, &[(out, z_out), (inside, z_in)]);
            Body { viability: out * z_out.powf(VIABILITY) / 64.0, ..all }
        })
        .collect();
    check("exposure, n = 64", &settings, &programme, &bodies);
}

/// Exposed cells of a random compact body of 64 cells.
fn exposed_cells(rng: &mut impl rand::Rng) -> u32 {
    let mut sites: Vec<[i32; 3]> = (0..343)
        .map(|k| [k % 7 - 3, k / 7 % 7 - 3, k / 49 - 3])
        .filter(|[x, y, z]| (x + y + z) % 2 == 0 && x * x + y * y + z * z <= 10)
        .collect();
    sites.sort_by_key(|[x, y, z]| x * x + y * y + z * z);
    assert_eq!(sites.len(), 55 + 24);
    for next in 55..64 {
        let pick = rng.random_range(next..sites.len());
        sites.swap(next, pick);
    }
    let body: BTreeSet<[i32; 3]> = sites[..64].iter().copied().collect();
    let near = |a: &[i32; 3], b: &[i32; 3]| (0..3).map(|k| (a[k] - b[k]).pow(2)).sum::<i32>() == 2;
    let neighbours = |site: &[i32; 3]| body.iter().filter(|other| near(site, other)).count();
    body.iter().filter(|site| neighbours(site) < 12).count() as u32
}
