//! Space within the body: what colonies with local support and unequal incomes leave, against sums over
//! all fates of a body small enough for that; and what evolves where incomes differ.

use super::simulation_support::{assert_agrees, mean_and_error, power, size, trials};
use somadawn::evolution::seeding::generator;
use somadawn::scenario::Settings;
use somadawn::scenario::settings::{Nutrient, Support};
use somadawn::study::{prediction, start};
use somadawn::theory::{Cue, CueSet, Programme, Verdict};
use somadawn::tissue::Ending;
use somadawn::world::Population;
use somadawn::world::components::Output;
use somadawn::world::nursery::{Developments, SharedBody};
use somadawn::world::resources::Genotype;

const VIABILITY: f64 = 1.4;
const FECUNDITY: f64 = 1.2;

/// Colonies of 13 cells: the first two shells of the lattice, a centre with 12 cells around it, each of
/// which touches the centre, 4 of its like and 7 empty sites (Conway & Sloane: the cuboctahedron).
const CELLS: usize = 13;

fn scenario(cue: Cue) -> Settings {
    let mut settings = Settings::example("a fixed programme in space");
    settings.habitat.sites = 64;
    settings.body.adult_cells = CELLS;
    settings.returns.viability = power(VIABILITY);
    settings.returns.fecundity = power(FECUNDITY);
    settings.traits.cues = CueSet::EMPTY.with(cue);
    settings.traits.mutation_probability = 0.0;
    settings.nutrient = Some(scarce_nutrient());
    settings.support = Some(Support { range_diameters: 1.5, leak: 0.2 });
    settings
}

fn scarce_nutrient() -> Nutrient {
    Nutrient {
        bath_mm: 0.05,
        half_saturation_mm: 0.02,
        uptake_fmol_per_h: 300.0,
        diffusivity_um2_per_s: 500.0,
        exchange: 1.0,
    }
}

/// Food that the surface takes most of: incomes within 55 cells vary between 3 % and half of e0.
fn starving_nutrient() -> Nutrient {
    Nutrient { uptake_fmol_per_h: 5_000.0, ..scarce_nutrient() }
}

/// Whether two cells of the 13 touch: cell 0 is the centre, the others are its 12 neighbours in the
/// lattice, whose coordinates are the permutations of (+-1, +-1, 0).
fn touching() -> [[bool; CELLS]; CELLS] {
    let mut sites = vec![[0_i32; 3]];
    for x in -1..=1 {
        for y in -1..=1 {
            for z in -1..=1_i32 {
                if x * x + y * y + z * z == 2 {
                    sites.push([x, y, z]);
                }
            }
        }
    }
    let apart = |a: [i32; 3], b: [i32; 3]| (0..3).map(|k| (a[k] - b[k]).pow(2)).sum::<i32>();
    std::array::from_fn(|i| std::array::from_fn(|j| apart(sites[i], sites[j]) == 2))
}

/// Incomes of the centre and of the others relative to a cell bathed directly. With bonds of
/// conductance `G = D d / (2 sqrt 2)`, at the centre `12 G (u0 - u1) + q(u0) = 0` and around it
/// `G (u1 - u0) + 7 G (u1 - 1) + q(u1) = 0`; found by halving u0 until the second holds.
fn incomes_by_hand(food: &Nutrient) -> [f64; 2] {
    // um^2/s to um^2/h, and 1 mM = 1e-3 fmol/um^3.
    let bond = food.diffusivity_um2_per_s * 3600.0 * 10.0 / 8f64.sqrt() * 1e-3 * food.bath_mm;
    let kappa = food.half_saturation_mm / food.bath_mm;
    let uptake = |u: f64| food.uptake_fmol_per_h / bond * u / (kappa + u);
    let around = |centre: f64| centre + uptake(centre) / 12.0;
    let excess = |centre: f64| {
        let u = around(centre);
        (u - centre) + 7.0 * (u - 1.0) + uptake(u)
    };
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..200 {
        let middle = f64::midpoint(low, high);
        if excess(middle) > 0.0 { high = middle } else { low = middle }
    }
    [low, around(low)].map(|u| u / (kappa + u) * (1.0 + kappa))
}

/// Rows of the inverse of `a (sum_j (S_i - S_j) + leak open_i S_i) + S_i = v_i`, by elimination.
fn support_operator(sharing: &Support) -> [[f64; CELLS]; CELLS] {
    let a = sharing.range_diameters * sharing.range_diameters / 2.0;
    let touch = touching();
    let mut rows: Vec<Vec<f64>> = (0..CELLS)
        .map(|i| {
            let degree = touch[i].iter().filter(|t| **t).count() as f64;
            let own = 1.0 + a * (degree + sharing.leak * (12.0 - degree));
            let left = (0..CELLS).map(|j| match (i == j, touch[i][j]) {
                (true, _) => own,
                (_, true) => -a,
                _ => 0.0,
            });
            left.chain((0..CELLS).map(|j| f64::from(u8::from(i == j)))).collect()
        })
        .collect();
    for pivot in 0..CELLS {
        let scale = rows[pivot][pivot];
        rows[pivot].iter_mut().for_each(|x| *x /= scale);
        let base = rows[pivot].clone();
        for (i, row) in rows.iter_mut().enumerate().filter(|(i, _)| *i != pivot) {
            assert_ne!(i, pivot);
            let factor = row[pivot];
            row.iter_mut().zip(&base).for_each(|(x, b)| *x -= factor * b);
        }
    }
    std::array::from_fn(|i| std::array::from_fn(|j| rows[i][CELLS + j]))
}

/// `E[ B e0 / (c_p (m_ext + m0 / V)) ]` over all 2^13 fates, `V = n / sum_i 1/S_i`.
fn propagules_by_hand(settings: &Settings, programme: &Programme) -> f64 {
    let incomes = incomes_by_hand(settings.nutrient.as_ref().expect("a nutrient"));
    let income = |cell: usize| incomes[usize::from(cell > 0)];
    let operator = support_operator(settings.support.as_ref().expect("local support"));
    let mean_income = (incomes[0] + 12.0 * incomes[1]) / 13.0;
    let p = programme.noise_probability();
    let yields = |cell: usize, draw: f64| {
        let mut cues = [0.0; Cue::COUNT];
        cues[Cue::Noise.index()] = draw - (2.0 * p - 1.0);
        cues[Cue::Income.index()] = (income(cell) - mean_income) / mean_income;
        let z = programme.soma_share(&cues);
        [(income(cell) * z).powf(VIABILITY), (income(cell) * (1.0 - z)).powf(FECUNDITY)]
    };
    let table: Vec<[[f64; 2]; 2]> = (0..CELLS).map(|i| [yields(i, -1.0), yields(i, 1.0)]).collect();
    let life = &settings.life;
    (0..1_usize << CELLS)
        .map(|fates| {
            let draws: [usize; CELLS] = std::array::from_fn(|i| fates >> i & 1);
            let odds: f64 = draws.iter().map(|d| if *d == 1 { p } else { 1.0 - p }).product();
            let output: [f64; CELLS] = std::array::from_fn(|i| table[i][draws[i]][0]);
            let fecundity: f64 = (0..CELLS).map(|i| table[i][draws[i]][1]).sum();
            let support =
                operator.map(|row| row.iter().zip(output).map(|(m, v)| m * v).sum::<f64>());
            let viability = CELLS as f64 / support.iter().map(|s| 1.0 / s).sum::<f64>();
            let hazard = life.extrinsic_hazard_per_h + life.adult_hazard_per_h / viability;
            odds * fecundity / (hazard * life.propagule_cost_eu)
        })
        .sum()
}

/// Lifetime propagules per colony that died, from when the start is forgotten.
fn measured(settings: &Settings, programme: &Programme, seed: u64) -> f64 {
    let founder = |site| Genotype::of_founder(*programme, site);
    let tick_h = start(settings).tick_h;
    let mut population = Population::founded(settings, tick_h, generator(seed), founder);
    let mut run_to = |deaths: u64| {
        while population.ledger().deaths < deaths {
            population.tick();
            assert!(population.alive() > 0, "died out");
        }
        population.ledger().clone()
    };
    let first = run_to(300);
    let last = run_to(first.deaths + 2_000);
    (last.lifetime_propagules - first.lifetime_propagules) as f64
        / (last.deaths - first.deaths) as f64
}

/// Theory within the error of its own sample of fates, stated as 1 %, and the simulation within 4.5
/// standard errors (80 populations of 2,000 deaths, error at most 0.5 %) of the sum over all fates.
fn check(what: &str, settings: &Settings, programme: &Programme) {
    let expected = propagules_by_hand(settings, programme);
    let predicted = prediction::model(settings).expected_propagules(programme);
    approx::assert_relative_eq!(predicted, expected, max_relative = 0.01);
    let runs = trials(611, size(80, 320), |seed| measured(settings, programme, seed));
    assert_agrees(what, mean_and_error(&runs), expected, 0.005);
}

#[test]
fn random_fates_with_local_support_leave_what_all_fates_sum_to() {
    let settings = scenario(Cue::Noise);
    let mut programme = Programme::generalist(0.3);
    programme.responsiveness[Cue::Noise.index()] = 1.5;
    programme.noise_bias = 0.4;
    check("noise, 13 cells in space", &settings, &programme);
}

#[test]
fn cells_that_read_their_income_leave_what_theory_expects() {
    let mut settings = scenario(Cue::Income);
    settings.life.extrinsic_hazard_per_h = 0.002;
    let mut programme = Programme::generalist(-0.2);
    programme.responsiveness[Cue::Income.index()] = 2.0;
    let expected = propagules_by_hand(&settings, &programme);
    let predicted = prediction::model(&settings).expected_propagules(&programme);
    approx::assert_relative_eq!(predicted, expected, max_relative = 1e-6);
    check("income, 13 cells in space", &settings, &programme);
}

/// The population of a fixed scenario once it has adults.
fn adults_of(settings: &Settings) -> Population {
    let mut programme = Programme::generalist(0.1);
    programme.responsiveness[Cue::Noise.index()] = 2.0;
    let founder = |site| Genotype::of_founder(programme, site);
    let mut population = Population::founded(settings, 1.0, generator(21), founder);
    while population.adults().next().is_none() {
        population.tick();
    }
    population
}

#[test]
fn help_that_reaches_everywhere_is_pooled_and_help_that_reaches_nobody_is_ones_own() {
    let mut settings = scenario(Cue::Noise);
    for (range_diameters, far) in [(1e4, true), (0.0, false)] {
        settings.support = Some(Support { range_diameters, leak: 0.0 });
        let mut population = adults_of(&settings);
        for colony in population.adults() {
            let outputs = || colony.outputs.iter().map(|cell| f64::from(cell.viability));
            let pooled = outputs().sum::<f64>() / CELLS as f64;
            let alone = CELLS as f64 / outputs().map(f64::recip).sum::<f64>();
            let expected = if far { pooled } else { alone };
            approx::assert_relative_eq!(colony.vitals.viability, expected, max_relative = 1e-6);
            for (cell, own) in outputs().enumerate() {
                let expected = if far { pooled } else { own };
                let found = f64::from(colony.support(cell));
                approx::assert_relative_eq!(found, expected, max_relative = 1e-6);
            }
        }
    }
}

#[test]
fn incomes_of_cells_are_those_found_by_hand() {
    let settings = scenario(Cue::Noise);
    let expected = incomes_by_hand(&scarce_nutrient());
    let mut population = adults_of(&settings);
    for colony in population.adults() {
        for (cell, budget) in colony.budgets.iter().enumerate() {
            let at_centre = !colony.exposed[cell].0;
            let found = f64::from(budget.soma_eu_per_h + budget.germ_eu_per_h);
            let expected = expected[usize::from(!at_centre)];
            approx::assert_relative_eq!(found, expected, max_relative = 1e-6);
        }
    }
}

/// Means over bodies that are shared by 32 colonies, and by one, of the share of income and of the time
/// of growth: they come from one distribution. 4,000 draws either way; the error of the shared mean is
/// that of the 125 + 32 bodies that it holds; 4 standard errors.
#[test]
fn shared_developments_are_draws_like_any_other() {
    let mut settings = scenario(Cue::Noise);
    settings.body.adult_cells = 40;
    settings.budget.division_cv = 0.2;
    let traits = |body: &SharedBody| {
        let Ending::Adult(hours) = body.development.ending else {
            panic!("a body that never matured")
        };
        let labels = body.development.labels.iter().map(|label| f64::from(*label)).sum::<f64>();
        [body.mean_income, hours, labels]
    };
    let sample = |shared_by: usize, seed: u64| -> Vec<[f64; 3]> {
        let mut rng = generator(seed);
        let mut developments = Developments::of(&settings).shared_by(shared_by);
        (0..4_000).map(|_| traits(&developments.draw(1.0, &mut rng).0)).collect()
    };
    let (own, shared) = (sample(1, 71), sample(32, 72));
    for at in 0..3 {
        let [(own, own_error), (shared, _)] = [&own, &shared]
            .map(|sample| mean_and_error(&sample.iter().map(|body| body[at]).collect::<Vec<_>>()));
        let spread = own_error * 4_000_f64.sqrt();
        let error = own_error.hypot(spread / 157_f64.sqrt());
        assert!(spread > 0.0 && (own - shared).abs() < 4.0 * error, "{own} {shared} +- {error}");
    }
}

/// Bodies whose core starves at once never come to 55 cells: every colony gives up its site when its
/// growth has stopped, or dies before, and the population dies out, with a juvenile hazard or without.
#[test]
fn colonies_that_cannot_grow_up_are_counted_and_give_up_their_sites() {
    for juvenile_hazard_per_h in [0.0, 1e-9] {
        let mut settings = scenario(Cue::Noise);
        settings.body.adult_cells = 55;
        settings.nutrient = Some(starving_nutrient());
        settings.budget.upkeep_eu_per_h = 0.3;
        settings.budget.starvation_h = 0.0;
        settings.life.juvenile_hazard_per_h = juvenile_hazard_per_h;
        let founder = |site| Genotype::of_founder(Programme::generalist(0.0), site);
        let mut population = Population::founded(&settings, 5.0, generator(31), founder);
        for _ in 0..2_000 {
            population.tick();
        }
        assert_eq!(population.alive(), 0);
        assert_eq!(population.ledger().never_matured, settings.habitat.sites as u64);
    }
}

/// Grown to 55 cells in little more than the grace of their hungry cells, bodies lose the core after.
#[test]
fn adults_whose_core_has_starved_live_on_what_is_left() {
    let mut settings = scenario(Cue::Noise);
    settings.body.adult_cells = 55;
    settings.support = None;
    settings.nutrient = Some(starving_nutrient());
    settings.budget.upkeep_eu_per_h = 0.1;
    settings.budget.starvation_h = 200.0;
    let mut population = adults_of(&settings);
    for colony in population.adults() {
        let cells = colony.outputs.len();
        assert!((20..55).contains(&cells), "{cells} cells");
        let income = colony.budgets.iter().map(|b| b.soma_eu_per_h + b.germ_eu_per_h);
        assert!(income.min_by(f32::total_cmp).is_some_and(|least| least >= 0.1 - 1e-6));
        let sum = |of: &dyn Fn(&Output) -> f32| -> f64 {
            colony.outputs.iter().map(|cell| f64::from(of(cell))).sum()
        };
        let viability = sum(&|cell| cell.viability) / cells as f64;
        approx::assert_relative_eq!(colony.vitals.viability, viability, max_relative = 1e-12);
        let fecundity = sum(&|cell| cell.fecundity);
        approx::assert_relative_eq!(colony.vitals.fecundity, fecundity, max_relative = 1e-12);
    }
}

/// Mean responsiveness to income after 200 generations.
fn evolved(exponents: [f64; 2], seed: u64) -> f64 {
    let mut settings = scenario(Cue::Income);
    let [a, c] = exponents;
    settings.habitat.sites = 128;
    settings.body.adult_cells = 55;
    settings.support = None;
    settings.nutrient = Some(starving_nutrient());
    settings.returns.viability = power(a);
    settings.returns.fecundity = power(c);
    settings.traits.mutation_probability = 0.1;
    settings.traits.mutation_sd = 0.3;
    let start = start(&settings);
    let founder = |site| Genotype::of_founder(start.programme, site);
    let mut population = Population::founded(&settings, start.tick_h, generator(seed), founder);
    while population.clock().generation < 200.0 {
        population.tick();
    }
    let traits: Vec<f64> = population
        .genotypes()
        .map(|genotype| genotype.programme.responsiveness[Cue::Income.index()])
        .collect();
    traits.iter().sum::<f64>() / traits.len() as f64
}

/// Unequal incomes, pooled power returns: with equal exponents below 1 `ln R0` is level in the
/// responsiveness to income and bends down, with unequal ones it slopes (from `R0 ~ V B` and the chain
/// rule: slope `a c / (a + c) (C_a - C_c)`, `C_x = sum cue_i e_i^x / sum e_i^x`, which has the sign of a - c).
/// 32 populations each; means 4.5 standard errors from 0, or not.
#[test]
fn a_difference_by_income_evolves_only_where_exponents_differ() {
    let sampled = |exponents, seed| {
        let runs = trials(seed, size(32, 96), |seed| evolved(exponents, seed));
        mean_and_error(&runs)
    };
    let (level, level_error) = sampled([0.7, 0.7], 81);
    assert!(level.abs() < 4.5 * level_error, "{level} +- {level_error}");
    for (exponents, sign) in [([0.95, 0.4], 1.0), ([0.4, 0.95], -1.0)] {
        let (mean, error) = sampled(exponents, 82);
        assert!(sign * mean > 4.5 * error, "{exponents:?}: {mean} +- {error}");
        assert!(sign * mean > 3.0 * level.abs(), "{exponents:?}: {mean}, equal: {level}");
    }
}

#[test]
fn theory_says_the_same_of_incomes() {
    for (exponents, verdict) in [
        ([0.7, 0.7], Verdict::NotFavouredLocally),
        ([0.95, 0.4], Verdict::FavouredAtOnce),
        ([0.4, 0.95], Verdict::FavouredAtOnce),
    ] {
        let mut settings = scenario(Cue::Income);
        settings.body.adult_cells = 55;
        settings.support = None;
        settings.nutrient = Some(starving_nutrient());
        settings.returns.viability = power(exponents[0]);
        settings.returns.fecundity = power(exponents[1]);
        assert_eq!(prediction::predict(&settings).verdict, verdict, "{exponents:?}");
    }
}
