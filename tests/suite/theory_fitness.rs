//! R0 against brute force: every draw of every cell's fate, every subset of mothers.

#![expect(clippy::float_cmp, reason = "values that are exact by construction")]

use approx::assert_relative_eq;
use somadawn::theory::lineage::label_compositions;
use somadawn::theory::reaction_norm::sigmoid;
use somadawn::theory::{
    CellKind, Composition, Cue, CueSet, LifeHistory, Model, Programme, ReturnCurve, TaskReturn,
};
use statrs::distribution::{Binomial, Discrete};

use crate::theory_models::{bare_life, bodies, only, power, random_fates};

const CELLS: [(i8, bool); 8] =
    [(-1, true), (-1, false), (1, true), (1, true), (-1, true), (1, false), (1, true), (-1, false)];

fn life(extrinsic_hazard_per_h: f64) -> LifeHistory {
    LifeHistory {
        propagule_cells: 1,
        adult_cells: 8,
        propagule_cost_eu: 5.0,
        adult_hazard_per_h: 0.004,
        extrinsic_hazard_per_h,
        juvenile_hazard_per_h: 0.01,
        income_eu_per_h: 1.3,
        upkeep_eu_per_h: 0.1,
        division_cost_eu: 6.0,
        cost_per_unit: 0.03,
    }
}

fn tasks() -> [TaskReturn; 2] {
    let curve = ReturnCurve::sigmoid(0.5, 3.0).expect("legal");
    let viability = TaskReturn { curve, surface_effect: 1.2, interior_effect: 0.4 };
    let curve = ReturnCurve::saturating(0.7).expect("legal");
    [viability, TaskReturn { curve, surface_effect: 0.8, interior_effect: 1.1 }]
}

fn all_cues() -> CueSet {
    Cue::ALL.into_iter().collect()
}

fn programme() -> Programme {
    Programme { baseline: 0.3, responsiveness: [1.7, -0.8, 2.1, 0.0], noise_bias: -0.6 }
}

/// R0 straight from its definition: the mean over all 2^n draws of noise, cell by cell.
fn by_every_draw(
    life: &LifeHistory,
    tasks: &[TaskReturn; 2],
    cells: &[(i8, bool)],
    programme: &Programme,
) -> f64 {
    let n = cells.len();
    let luck = sigmoid(programme.noise_bias);
    let mean_label = cells.iter().map(|c| f64::from(c.0)).sum::<f64>() / n as f64;
    let mean_exposed = cells.iter().filter(|c| c.1).count() as f64 / n as f64;
    let income = 1.0 - life.cost_per_unit * programme.total_responsiveness();
    let mut expected = 0.0;
    for draw in 0..1_u32 << n {
        let (mut v, mut b, mut probability) = (0.0, 0.0, 1.0);
        for (i, &(label, exposed)) in cells.iter().enumerate() {
            let plus = draw >> i & 1 == 1;
            probability *= if plus { luck } else { 1.0 - luck };
            let noise = if plus { 1.0 } else { -1.0 } - (2.0 * luck - 1.0);
            let exposure = f64::from(u8::from(exposed)) - mean_exposed;
            let z = programme.soma_share(&[noise, f64::from(label) - mean_label, exposure, 0.0]);
            v += tasks[0].effect(exposed) * tasks[0].curve.value(income * z) / n as f64;
            b += tasks[1].effect(exposed) * tasks[1].curve.value(income * (1.0 - z));
        }
        let hazard = life.extrinsic_hazard_per_h + life.adult_hazard_per_h / v;
        expected += probability * b * life.income_eu_per_h / (life.propagule_cost_eu * hazard);
    }
    let rounds = (n as f64).log2().ceil();
    let saved = income * life.income_eu_per_h - life.upkeep_eu_per_h;
    expected * (-life.juvenile_hazard_per_h * rounds * life.division_cost_eu / saved).exp()
}

fn composition(cells: &[(i8, bool)]) -> Composition {
    Composition::of(cells.iter().map(|&(label, exposed)| (CellKind { label, exposed }, 1.0)))
}

#[test]
fn r0_is_the_mean_over_every_draw_of_fates() {
    for extrinsic in [0.0, 0.001, 0.05] {
        let life = life(extrinsic);
        let model = Model::new(life.clone(), tasks(), all_cues(), &[(1.0, composition(&CELLS))]);
        let exact = by_every_draw(&life, &tasks(), &CELLS, &programme());
        let found = model.expected_propagules(&programme());
        assert_relative_eq!(found, exact, max_relative = 1e-12);
    }
}

/// n = 7 from 1: 4 cells labelled - + - +, of which each subset of 3 mothers is as likely.
#[test]
fn r0_averages_over_which_mothers_divide_last() {
    let life = LifeHistory { adult_cells: 7, ..life(0.002) };
    let mut programme = programme();
    programme.responsiveness[Cue::Exposure.index()] = 0.0;
    let mut exact = 0.0;
    for spared in [-1, 1, -1, 1] {
        let mut cells = vec![(spared, true)];
        cells.extend([(-1, true), (1, true)].repeat(3));
        exact += 0.25 * by_every_draw(&life, &tasks(), &cells, &programme);
    }
    let cues = only(Cue::Lineage).with(Cue::Noise);
    let model = Model::new(life, tasks(), cues, &label_compositions(7, 1));
    assert_relative_eq!(model.expected_propagules(&programme), exact, max_relative = 1e-12);
}

/// Mean of `B V / (m_ext V + m0)` over every combination of the classes' binomial counts, whose
/// probabilities are the exact ones of the distribution.
fn by_every_count(fates: &[(u64, [f64; 4])], luck: f64, m_ext: f64, m0: f64) -> f64 {
    let cells: u64 = fates.iter().map(|fate| fate.0).sum();
    let mut sums = vec![(1.0, 0.0, 0.0)];
    for (count, [v_plus, b_plus, v_minus, b_minus]) in fates {
        let binomial = Binomial::new(luck, *count).expect("legal");
        let likely = (0..=*count).map(|k| (k as f64, (count - k) as f64, binomial.pmf(k)));
        let likely: Vec<_> = likely.filter(|(_, _, probability)| *probability > 1e-16).collect();
        let add = |(weight, v, b): &(f64, f64, f64)| {
            let (weight, v, b) = (*weight, *v, *b);
            let with = likely.iter().map(move |(plus, minus, probability)| {
                let v = v + plus * v_plus + minus * v_minus;
                (weight * probability, v, b + plus * b_plus + minus * b_minus)
            });
            with.collect::<Vec<_>>()
        };
        sums = sums.iter().flat_map(add).collect();
    }
    let terms = sums.iter().map(|(weight, v, b)| {
        let v = v / cells as f64;
        weight * b * v / (m_ext * v + m0)
    });
    terms.sum()
}

/// Large bodies of several kinds go through Gauss rules, small ones are summed count by count.
#[test]
fn r0_of_large_bodies_is_the_mean_over_every_count() {
    let kinds = [(-1, true), (1, true), (-1, false), (1, false)];
    let bodies: [&[u64]; 5] = [&[600], &[32, 32], &[100, 100], &[40, 30, 24], &[16, 20, 12, 16]];
    for counts in bodies {
        let classes = kinds.iter().zip(counts);
        let classes: Vec<_> = classes.map(|(&(label, exposed), n)| (label, exposed, *n)).collect();
        let kind = |label, exposed| CellKind { label, exposed };
        let body = Composition::of(classes.iter().map(|c| (kind(c.0, c.1), c.2 as f64)));
        // m_ext over m0, and the accuracy that is promised there.
        for (m_ext, tolerance) in [(0.001, 1e-11), (0.02, 1e-10), (1.0, 1e-5)] {
            let life = LifeHistory { extrinsic_hazard_per_h: m_ext, ..bare_life() };
            let life = LifeHistory { adult_hazard_per_h: 0.004, ..life };
            let tasks = [power(1.7), power(1.3)];
            let model = Model::new(life, tasks, all_cues(), &[(1.0, body.clone())]);
            for (noise, noise_bias) in [(0.5, 0.0), (8.0, -1.5), (3.0, 2.5), (3.0, -4.0)] {
                let responsiveness = [noise, 0.9, -0.5, 0.0];
                let programme = Programme { baseline: -0.2, responsiveness, noise_bias };
                let luck = programme.noise_probability();
                let label = body.mean(|kind| f64::from(kind.label));
                let exposure = body.mean(|kind| f64::from(u8::from(kind.exposed)));
                let fate = |c: &(i8, bool, u64)| {
                    let share = |noise: f64| {
                        let place = f64::from(u8::from(c.1)) - exposure;
                        let noise = noise - (2.0 * luck - 1.0);
                        programme.soma_share(&[noise, f64::from(c.0) - label, place, 0.0])
                    };
                    let (plus, minus) = (share(1.0), share(-1.0));
                    let births = |z: f64| (1.0 - z).powf(1.3);
                    (c.2, [plus.powf(1.7), births(plus), minus.powf(1.7), births(minus)])
                };
                let fates: Vec<_> = classes.iter().map(fate).collect();
                let exact = by_every_count(&fates, luck, m_ext, 0.004);
                let found = model.expected_propagules(&programme);
                assert_relative_eq!(found, exact, max_relative = tolerance);
            }
        }
    }
}

/// With cells drawing v and b independently, E[mean v mean b] = E[vb]/n + (1 - 1/n) E[v] E[b].
#[test]
fn r0_of_random_fates_is_the_covariance_identity() {
    let (n, a, c) = (5, 1.4, 2.2);
    let programme =
        Programme { baseline: 0.4, responsiveness: [2.0, 0.0, 0.0, 0.0], noise_bias: 0.7 };
    let luck = programme.noise_probability();
    let share = |noise: f64| programme.soma_share(&[noise - (2.0 * luck - 1.0), 0.0, 0.0, 0.0]);
    let mean = |of: &dyn Fn(f64) -> f64| luck * of(share(1.0)) + (1.0 - luck) * of(share(-1.0));
    let (work, births) = (|z: f64| z.powf(a), |z: f64| (1.0 - z).powf(c));
    let exact = mean(&|z| work(z) * births(z)) / 5.0 + 0.8 * mean(&work) * mean(&births);
    let found = random_fates(a, c, Some(n)).expected_propagules(&programme) / n as f64;
    assert_relative_eq!(found, exact, max_relative = 1e-14);
}

/// mean(v) mean(b) = mean(vb) - Cov(v, b) for the body v = (1, .8, .5, .2, 0),
/// b = (0, .1, .4, .9, 1): 0.24 = 0.092 + 0.148 (after Michod 2006, PNAS 103:9113). Built here
/// from classes of cells with table curves.
#[test]
fn a_body_of_unequal_cells_has_the_product_of_its_means() {
    let v = [1.0_f64, 0.8, 0.5, 0.2, 0.0];
    let b = [0.0, 0.1, 0.4, 0.9, 1.0];
    let mean = |x: &[f64]| x.iter().sum::<f64>() / x.len() as f64;
    let product: Vec<f64> = v.iter().zip(b).map(|(v, b)| v * b).collect();
    let covariance: f64 =
        v.iter().zip(b).map(|(v, b)| (v - mean(&[1.0, 0.8, 0.5, 0.2, 0.0])) * (b - 0.48)).sum();
    assert_relative_eq!(mean(&v) * mean(&b), 0.24, max_relative = 1e-12);
    assert_relative_eq!(mean(&product), 0.092, max_relative = 1e-12);
    assert_relative_eq!(covariance / 5.0, -0.148, max_relative = 1e-12);

    // Soma shares 0.9 and 0.3 by label, linear curves: V = 0.6, B = 2 (0.4) over 2 cells.
    let linear = ReturnCurve::table(&[[0.0, 0.0], [1.0, 1.0]]).expect("legal");
    let task = TaskReturn { curve: linear, surface_effect: 1.0, interior_effect: 1.0 };
    let model = Model::new(
        bare_life(),
        [task.clone(), task],
        only(Cue::Lineage),
        &[(1.0, composition(&[(-1, true), (1, true)]))],
    );
    let logit = somadawn::theory::reaction_norm::logit;
    let (high, low) = (logit(0.9), logit(0.3));
    let mut programme = Programme::generalist(f64::midpoint(high, low));
    programme.responsiveness[Cue::Lineage.index()] = (high - low) / 2.0;
    let found = model.expected_propagules(&programme);
    assert_relative_eq!(found, 0.6 * 0.8, max_relative = 1e-14);
}

#[test]
fn hopeless_programmes_leave_nothing() {
    let model = Model::new(life(0.0), tasks(), all_cues(), &[(1.0, composition(&CELLS))]);
    let mut greedy = programme();
    greedy.responsiveness = [12.0, 12.0, 12.0, 0.0];
    assert_eq!(model.expected_propagules(&greedy), 0.0);
    assert_eq!(model.log_fitness(&greedy), f64::NEG_INFINITY);

    // Taxed below upkeep: alive, but never grown up.
    let mut starving = programme();
    starving.responsiveness = [12.0, 12.0, 7.0, 0.0];
    assert_eq!(model.expected_propagules(&starving), 0.0);

    // No cell of any place yields viability.
    let mut useless = tasks();
    (useless[0].surface_effect, useless[0].interior_effect) = (0.0, 0.0);
    let model = Model::new(life(0.001), useless, all_cues(), &[(1.0, composition(&CELLS))]);
    assert_eq!(model.expected_propagules(&programme()), 0.0);
    assert_eq!(model.generalist().r0, 0.0);

    let nobody = Model::new(life(0.0), tasks(), all_cues(), &[]);
    assert_eq!(nobody.expected_propagules(&programme()), 0.0);
}

/// The limit of large bodies is approached as 1/n.
#[test]
fn endless_bodies_are_the_limit_of_large_ones() {
    let programme =
        Programme { baseline: 0.1, responsiveness: [2.5, 0.0, 0.0, 0.0], noise_bias: 0.0 };
    let endless = random_fates(1.6, 1.2, None).expected_propagules(&programme);
    let gap = |n: u64| {
        random_fates(1.6, 1.2, Some(n)).expected_propagules(&programme) / n as f64 - endless
    };
    assert_relative_eq!(gap(1000) / gap(2000), 2.0, max_relative = 1e-9);
    assert_eq!(bodies(None)[0].1.cells(), 1.0);
}
