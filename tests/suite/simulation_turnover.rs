//! Turnover of adults' cells: their number, what they cost, what a colony whose cells change leaves, labels, luck.
//!
//! The oracle of a colony of two cells is its Markov chain: k of them have a noise of +1, and at the rate
//! 2 tau a random one draws it anew. With `m_k` the hazard and `F_k` the growth of the stock in state k,
//! the rest of its life and what it leaves solve `x_k = (y_k + 2 tau sum_j P_kj x_j) / (m_k + 2 tau)` with
//! `y_k` = 1 and `F_k / c_p`.

use super::simulation_support::{
    assert_agrees, flat, mean_and_error, population as lottery_population, power, size, trials,
};
use somadawn::evolution::seeding::generator;
use somadawn::scenario::Settings;
use somadawn::theory::{Cue, CueSet, Programme};
use somadawn::world::Population;
use somadawn::world::resources::Genotype;

const TURNOVER_PER_H: f64 = 0.01;
const VIABILITY: f64 = 1.4;
const FECUNDITY: f64 = 1.2;

/// Colonies that are adult when they settle, of `cells` cells.
fn scenario(cells: usize, cues: CueSet) -> Settings {
    let mut settings = Settings::example("turnover");
    settings.habitat.sites = 64;
    settings.body.adult_cells = cells;
    settings.life.propagule_cells = cells;
    settings.life.propagule_cost_eu = 4.0;
    settings.life.adult_hazard_per_h = 0.002;
    settings.life.extrinsic_hazard_per_h = 0.001;
    settings.life.juvenile_hazard_per_h = 0.0;
    settings.budget.turnover_per_h = TURNOVER_PER_H;
    settings.budget.division_cost_eu = 6.0;
    settings.budget.income_eu_per_h = 1.0;
    settings.returns.viability = power(VIABILITY);
    settings.returns.fecundity = power(FECUNDITY);
    settings.traits.cues = cues;
    settings.traits.mutation_probability = 0.0;
    settings
}

fn populated(settings: &Settings, programme: Programme, tick_h: f64, seed: u64) -> Population {
    let founder = |site| Genotype::of_founder(programme, site);
    Population::founded(settings, tick_h, generator(seed), founder)
}

/// Propagules and replacements per colony that died, and the mean life in h, over 3,000 deaths.
fn measured(settings: &Settings, programme: Programme, tick_h: f64, seed: u64) -> [f64; 3] {
    let run_to = |population: &mut Population, deaths: u64| {
        while population.ledger().deaths < deaths {
            population.tick();
            assert!(population.alive() > 0, "died out");
        }
    };
    let mut population = populated(settings, programme, tick_h, seed);
    run_to(&mut population, 320);
    let (first, from) = (population.ledger().clone(), population.clock().clone());
    run_to(&mut population, first.deaths + 3_000);
    let (last, to) = (population.ledger(), population.clock());
    let deaths = (last.deaths - first.deaths) as f64;
    let propagules = (last.lifetime_propagules - first.lifetime_propagules) as f64;
    let replacements = (last.replacements - first.replacements) as f64;
    let generations = to.generation - from.generation;
    [propagules / deaths, replacements / deaths, (to.now_h - from.now_h) / generations]
}

fn assert_measured(settings: &Settings, programme: Programme, seed: u64, expected: [f64; 3]) {
    for tick_h in [0.5, 5.0] {
        let found = trials(seed, size(24, 240), |seed| measured(settings, programme, tick_h, seed));
        for (place, what) in ["propagules", "replacements", "hours of life"].iter().enumerate() {
            let values: Vec<f64> = found.iter().map(|found| found[place]).collect();
            let what = format!("{what}, ticks of {tick_h} h");
            assert_agrees(&what, mean_and_error(&values), expected[place], 0.01);
        }
    }
}

/// By hand: `V = z^a`, `m = m_ext + m0 / V`, each germ budget times `1 - tau c_div / (e (1 - z))`, `tau n / m`
/// replacements.
#[test]
fn where_cells_are_alike_turnover_only_costs() {
    const CELLS: usize = 4;
    let settings = scenario(CELLS, CueSet::EMPTY);
    let z = 0.6_f64;
    let programme = Programme::generalist((z / (1.0 - z)).ln());
    let hazard = 0.001 + 0.002 / z.powf(VIABILITY);
    let left = 1.0 - TURNOVER_PER_H * 6.0 / (1.0 - z);
    let fecundity = CELLS as f64 * (left * (1.0 - z)).powf(FECUNDITY);
    let mut population = populated(&settings, programme, 1.0, 1);
    population.tick();
    for adult in population.adults() {
        approx::assert_relative_eq!(adult.vitals.hazard_per_h, hazard, max_relative = 1e-6);
        approx::assert_relative_eq!(adult.vitals.fecundity, fecundity, max_relative = 1e-6);
    }
    let replacements = TURNOVER_PER_H * CELLS as f64 / hazard;
    let expected = [fecundity / 4.0 / hazard, replacements, 1.0 / hazard];
    assert_measured(&settings, programme, 301, expected);
}

/// Life and offspring of two cells, from the chain; start: both draw.
fn two_cells(settings: &Settings, g0: f64, responsiveness: f64) -> [f64; 3] {
    let shares = [-1.0, 1.0].map(|noise| 1.0 / (1.0 + (-(g0 + responsiveness * noise)).exp()));
    let tau = settings.budget.turnover_per_h;
    let state = |plus: usize| {
        let zs = [shares[usize::from(plus > 0)], shares[usize::from(plus > 1)]];
        let viability = zs.iter().map(|z| z.powf(VIABILITY)).sum::<f64>() / 2.0;
        let germ: f64 = zs.iter().map(|z| 1.0 - z).sum();
        let left = (1.0 - 2.0 * tau * settings.budget.division_cost_eu / germ).max(0.0);
        let births = zs.iter().map(|z| (left * (1.0 - z)).powf(FECUNDITY)).sum::<f64>();
        let life = &settings.life;
        let hazard = life.extrinsic_hazard_per_h + life.adult_hazard_per_h / viability;
        (hazard, births / life.propagule_cost_eu)
    };
    let states = [state(0), state(1), state(2)];
    // A random cell draws anew: from k, a + is lost with probability k/2 / 2, won with (2-k)/2 / 2.
    let next = |k: usize, x: &[f64; 3]| {
        let (down, up) = (k as f64 / 4.0, (2 - k) as f64 / 4.0);
        let below = if k > 0 { down * x[k - 1] } else { 0.0 };
        let above = if k < 2 { up * x[k + 1] } else { 0.0 };
        below + above + (1.0 - down - up) * x[k]
    };
    let solve = |reward: &dyn Fn(usize) -> f64| {
        let mut x = [0.0; 3];
        for _ in 0..20_000 {
            x = [0, 1, 2]
                .map(|k| (reward(k) + 2.0 * tau * next(k, &x)) / (states[k].0 + 2.0 * tau));
        }
        0.25 * x[0] + 0.5 * x[1] + 0.25 * x[2]
    };
    let life_h = solve(&|_| 1.0);
    [solve(&|k| states[k].1), 2.0 * tau * life_h, life_h]
}

/// Colonies whose hazard and stock change at every draw: rates of replacement slower than, like and faster
/// than death.
#[test]
fn a_colony_whose_cells_change_lives_and_leaves_what_its_chain_says() {
    let (g0, responsiveness) = (0.2, 1.4);
    let mut programme = Programme::generalist(g0);
    programme.responsiveness[Cue::Noise.index()] = responsiveness;
    for (seed, turnover_per_h) in [(302, 0.002), (303, 0.01), (304, 0.04)] {
        let mut settings = scenario(2, CueSet::EMPTY.with(Cue::Noise));
        settings.budget.turnover_per_h = turnover_per_h;
        let expected = two_cells(&settings, g0, responsiveness);
        let mut unchanging = settings.clone();
        unchanging.budget.turnover_per_h = 0.0;
        let at_rest = two_cells(&unchanging, g0, responsiveness);
        assert!((expected[0] / at_rest[0] - 1.0).abs() > 0.02, "{expected:?} {at_rest:?}");
        assert_measured(&settings, programme, seed, expected);
    }
}

/// Colonies of 13 cells that hardly ever die, replaced for 10 / tau: 48 populations of 64 colonies.
fn old_colonies(cues: CueSet, noise_bias: f64) -> Vec<Population> {
    let mut settings = scenario(13, cues);
    settings.life.extrinsic_hazard_per_h = 1e-12;
    settings.life.adult_hazard_per_h = 1e-12;
    settings.returns.viability = flat();
    let mut programme = Programme::generalist(0.0);
    programme.noise_bias = noise_bias;
    trials(305, 48, |seed| {
        let mut population = populated(&settings, programme, 10.0, seed);
        while population.clock().now_h < 10.0 / TURNOVER_PER_H {
            population.tick();
        }
        population
    })
}

/// Replacements of 64 colonies that do not die are Poisson of mean `tau n N T`: mean and variance over 48
/// populations within 4.5 standard errors, those of the variance `sqrt(2 / 47)` of it.
#[test]
fn replacements_are_poisson() {
    let counts: Vec<f64> = old_colonies(CueSet::EMPTY, 0.0)
        .iter()
        .map(|population| {
            assert_eq!(population.ledger().deaths, 0);
            population.ledger().replacements as f64 / population.clock().now_h * 1_000.0
        })
        .collect();
    let expected = TURNOVER_PER_H * 13.0 * 64.0 * 1_000.0;
    let (mean, error) = mean_and_error(&counts);
    assert_agrees("replacements", (mean, error), expected, 0.003);
    let variance = error * error * 48.0;
    assert!((variance / expected - 1.0).abs() < 4.5 * (2.0_f64 / 47.0).sqrt(), "{variance}");
}

/// A cell becomes a daughter when it is replaced, at tau, and a mother when a neighbour chooses it, at tau times
/// the sum of 1 / degree over neighbours. In the cuboctahedron (a centre of degree 12, around it 12 cells of
/// degree 5, each by the centre and 4 of its like) daughters are therefore `1 / (1 + 12/5)` = 5/17 of
/// centres and `1 / (1 + 4/5 + 1/12)` of the others. Luck is drawn anew from the same odds.
#[test]
fn labels_and_luck_come_to_rest_where_their_chains_do() {
    let bias = 0.8;
    let cues = CueSet::EMPTY.with(Cue::Noise).with(Cue::Lineage);
    let (mut centre, mut around, mut luck) = (Vec::new(), Vec::new(), Vec::new());
    for mut population in old_colonies(cues, bias) {
        for adult in population.adults() {
            let daughter = |cell: usize| f64::from(u8::from(adult.labels[cell].0 == 1));
            let (inner, outer): (Vec<usize>, Vec<usize>) =
                (0..13).partition(|cell| !adult.exposed[*cell].0);
            assert_eq!(inner.len(), 1);
            centre.push(daughter(inner[0]));
            around.push(outer.iter().map(|cell| daughter(*cell)).sum::<f64>() / 12.0);
            let plus = adult.noise.iter().filter(|noise| noise.0 == 1).count();
            luck.push(plus as f64 / 13.0);
        }
    }
    assert_agrees("daughters at the centre", mean_and_error(&centre), 5.0 / 17.0, 0.05);
    let expected = 1.0 / (1.0 + 4.0 / 5.0 + 1.0 / 12.0);
    assert_agrees("daughters around it", mean_and_error(&around), expected, 0.01);
    let p = 1.0 / (1.0 + (-bias).exp());
    assert_agrees("lucky cells", mean_and_error(&luck), p, 0.01);
    // Independent of one another: the variance of a share of 13 cells, within 4.5 standard errors.
    let count = luck.len() as f64;
    let (_, error) = mean_and_error(&luck);
    let variance = error * error * count * 13.0 / (p * (1.0 - p));
    assert!((variance - 1.0).abs() < 4.5 * (2.0 / count).sqrt(), "{variance}");
}

/// A cell by itself has nobody to replace it: it pays nothing, as theory says, and leaves
/// `(1 - z)^c / c_p / m` propagules.
#[test]
fn a_single_cell_pays_for_no_replacement() {
    let mut settings = scenario(1, CueSet::EMPTY);
    settings.budget.turnover_per_h = 10.0;
    let z = 0.6_f64;
    let programme = Programme::generalist((z / (1.0 - z)).ln());
    let fecundity = (1.0 - z).powf(FECUNDITY);
    let hazard = 0.001 + 0.002 / z.powf(VIABILITY);
    let mut population = populated(&settings, programme, 1.0, 1);
    for _ in 0..500 {
        population.tick();
    }
    assert!(population.alive() > 0 && population.ledger().deaths > 50);
    assert_eq!(population.ledger().replacements, 0);
    for adult in population.adults() {
        approx::assert_relative_eq!(adult.vitals.fecundity, fecundity, max_relative = 1e-6);
    }
    let theory = somadawn::study::prediction::model(&settings).expected_propagules(&programme);
    approx::assert_relative_eq!(theory, fecundity / 4.0 / hazard, max_relative = 1e-12);
}

/// Without turnover nothing is replaced.
#[test]
fn nothing_is_replaced_where_there_is_no_turnover() {
    let mut settings = super::simulation_support::lottery(16);
    settings.budget.turnover_per_h = 0.0;
    let mut population = lottery_population(&settings, 3, |_| 0.0);
    while population.ledger().deaths < 50 {
        population.tick();
    }
    assert_eq!(population.ledger().replacements, 0);
}
