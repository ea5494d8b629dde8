//! Placed bodies against closed forms and by-hand cases: unequal incomes, the reach of help, growth,
//! replacements.

use approx::assert_relative_eq;
use somadawn::theory::critical::local_critical;
use somadawn::theory::{
    CellKind, Composition, Cue, LifeHistory, Model, PlacedBodies, PlacedBody, Programme, Verdict,
};

use crate::theory_models::{only, power, random_fates};
use crate::theory_space_models::{Table, adult, bare_life_of, earning, of_body};

const INCOMES: [f64; 7] = [1.0, 0.93, 0.7, 0.7, 0.41, 0.12, 0.0];

fn noisy(g: f64) -> Programme {
    Programme { baseline: 0.2, responsiveness: [g, 0.0, 0.0, 0.0], noise_bias: -0.4 }
}

/// With pooled returns `(e z)^a`, `(e (1-z))^c` and cue k, `d ln R0 / dg` at the optimum `z = a/(a+c)`
/// is `ac/(a+c) (<k>_a - <k>_c)`, where `<k>_p` is the mean of the cue weighted by `e^p`: both tasks pull
/// alike at each cell if a = c, and the steeper one pulls at the richer cells.
#[test]
fn unequal_incomes_favour_position_only_where_exponents_differ() {
    let mean = INCOMES.iter().sum::<f64>() / 7.0;
    let weighted = |p: f64| {
        let weights: Vec<f64> = INCOMES.iter().map(|e| e.powf(p)).collect();
        let sum: f64 = weights.iter().zip(INCOMES).map(|(w, e)| w * (e - mean) / mean).sum();
        sum / weights.iter().sum::<f64>()
    };
    let income_at = |a: f64, c: f64| {
        let model = of_body([a, c], only(Cue::Income), adult(earning(&INCOMES), None));
        let generalist = model.generalist();
        assert!((generalist.soma_share - a / (a + c)).abs() < 1e-12);
        let selection = model.selection_at(&generalist)[0];
        let best = model.best_programme(&generalist);
        (selection, Model::verdict(&[selection], best.outdoes(1e-6)))
    };
    for a in [0.3, 0.6, 0.95] {
        let (income, verdict) = income_at(a, a);
        assert!(income.gradient.abs() < 1e-12, "{income:?}");
        assert!(income.curvature < -1e-4, "{income:?}");
        assert_eq!(verdict, Verdict::NotFavouredLocally);
    }
    for (a, c) in [(0.9, 0.6), (0.6, 0.9), (1.4, 0.7), (0.5, 2.0)] {
        let (income, verdict) = income_at(a, c);
        let exact = a * c / (a + c) * (weighted(a) - weighted(c));
        assert_relative_eq!(income.gradient, exact, max_relative = 1e-9);
        assert!(exact * (a - c) > 0.0, "rich cells do what accelerates more");
        assert_eq!(verdict, Verdict::FavouredAtOnce);
    }
}

/// In a sealed body whose cells are alike up to symmetry every cell's logit moves `ln(B V)` at second
/// order by `(2 k^2 (1 - tau) - k) / n`, `k = ac/(a+c)`, `tau = tr(M^2) / n` with M the operator of
/// support: noise is favoured iff `1/a + 1/c < 2 (1 - tau)`. Pooled, tau = 1/n; without reach, 1.
///
/// m cells that all touch have `M = (1 + a L)^-1` with L's eigenvalues 0 and m (m - 1 times), so that
/// `tau = (1 + (m - 1) / (1 + m a)^2) / m`, `a = range^2 / 2`.
#[test]
fn the_reach_of_help_sets_the_local_threshold() {
    for (cells, range) in [(2_usize, 1.0), (3, 1.3), (4, 0.8), (4, 2.0), (4, 1e4)] {
        let m = cells as f64;
        let a = range * range / 2.0;
        let tau = (1.0 + (m - 1.0) / (1.0 + m * a).powi(2)) / m;
        let model_at = |exponents| {
            let body = adult(earning(&vec![1.0; cells]), Some(Table::of_huddle(cells, range)));
            of_body(exponents, only(Cue::Noise), body)
        };
        for [v, b] in [[1.8, 1.4], [0.9, 0.6], [3.0, 5.0]] {
            let model = model_at([v, b]);
            let noise = model.selection_at(&model.generalist())[0];
            let k = v * b / (v + b);
            let exact = 2.0 * k * k * (1.0 - tau) - k;
            // Each logit is perturbed by g, so the sum of the n terms is the curvature.
            assert_relative_eq!(noise.curvature, exact, max_relative = 1e-9);
            assert!(noise.gradient.abs() < 1e-12);
        }
        let found = local_critical(|a| Ok::<_, ()>(model_at([a, a])), 0.5, 12.0);
        let threshold = found.expect("all exponents are legal").expect("a change");
        assert_relative_eq!(threshold, 1.0 / (1.0 - tau), max_relative = 1e-8);
    }
}

/// Without reach every cell lives by its own work: noise is worse than nothing at any exponents (tau =
/// 1 above), and a body with a cell that does none does not live.
#[test]
fn without_reach_no_body_can_divide_labour() {
    let body = || adult(earning(&[1.0; 6]), Some(Table::of_chain(6, 0.0)));
    for a in [0.7, 1.5, 4.0] {
        let model = of_body([a, a], only(Cue::Noise), body()).with_bounds(800.0, 4.0);
        let generalist = model.generalist();
        let noise = model.selection_at(&generalist)[0];
        assert_relative_eq!(noise.curvature, -a / 2.0, max_relative = 1e-9);
        assert_eq!(noise.verdict(), Verdict::NotFavouredLocally);
        let mut pure = Programme::generalist(0.0);
        pure.responsiveness[Cue::Noise.index()] = 800.0;
        // Only bodies of soma alone live, and these bear nothing.
        assert!(model.expected_propagules(&pure) < 1e-300);
        assert_eq!(model.best_programme(&generalist).programme, generalist.programme());
    }
    let pooled = of_body([1.5, 1.5], only(Cue::Noise), adult(earning(&[1.0; 6]), None));
    assert_eq!(
        pooled.selection_at(&pooled.generalist())[0].verdict(),
        Verdict::FavouredByDisruption
    );
}

/// Placed bodies with alike incomes and pooled support are those of [`Composition`], whatever the
/// hazards; far reach is pooled support, up to terms of order (cells / range)^2.
#[test]
fn pooled_bodies_are_the_same_in_both_accounts() {
    let cells = 7;
    for m_ext in [0.0, 0.3] {
        let life = LifeHistory { extrinsic_hazard_per_h: m_ext, ..bare_life_of(cells) };
        let returns = || [power(1.7), power(1.2)];
        let counted = Model::new(
            life.clone(),
            returns(),
            only(Cue::Noise),
            &[(1.0, Composition::uniform(cells as u64))],
        );
        let placed = |spread| {
            let bodies = PlacedBodies::new([(1.0, adult(earning(&[1.0; 7]), spread))], 0.0);
            Model::of_placed(life.clone(), returns(), only(Cue::Noise), bodies)
        };
        let far = placed(Some(Table::of_chain(cells, 1e4)));
        for (model, tolerance) in [(placed(None), 1e-12), (far, 3e-6)] {
            for g in [0.0, 0.7, 3.0, 9.0] {
                assert_relative_eq!(
                    model.expected_propagules(&noisy(g)),
                    counted.expected_propagules(&noisy(g)),
                    max_relative = tolerance
                );
            }
            let (one, other) = (model.generalist(), counted.generalist());
            assert_relative_eq!(one.soma_share, other.soma_share, max_relative = tolerance);
            let (one, other) = (model.selection_at(&one)[0], counted.selection_at(&other)[0]);
            assert_relative_eq!(one.curvature, other.curvature, max_relative = 3.0 * tolerance);
            let outcome = [&model, &counted].map(|model| model.outcome(&noisy(3.0)));
            let [one, other] = outcome;
            assert_relative_eq!(one.division_index, other.division_index, max_relative = 1e-12);
            assert_relative_eq!(one.soma_fraction, other.soma_fraction, max_relative = 1e-12);
            assert_eq!(one.class, other.class);
        }
    }
}

/// In closed form, however many cells: random fates of 64 cells with pooled support.
#[test]
fn pooled_bodies_of_many_cells_need_no_draws() {
    let model = of_body([1.5, 1.5], only(Cue::Noise), adult(earning(&[1.0; 64]), None));
    let counted = random_fates(1.5, 1.5, Some(64));
    let found = model.expected_propagules(&noisy(4.0));
    assert_relative_eq!(found, counted.expected_propagules(&noisy(4.0)), max_relative = 1e-12);
    let best = model.best_programme(&model.generalist());
    let expected = counted.best_programme(&counted.generalist());
    assert_relative_eq!(best.r0, expected.r0, max_relative = 1e-9);
    assert!(best.gain.standard_error == 0.0 && best.outdoes(1e-6));
}

/// By hand: 2 linear cells of z = 1/2, B = 1 and V = 1/2, so 1/2 propagule where all mature at once. Of
/// 4 bodies drawn, 1 never matures, 1 takes 30 h and 2 take 20 h under a hazard of 0.01/h.
#[test]
fn growth_and_maturing_enter_body_by_body() {
    let body = |growth_h| PlacedBody { growth_h, ..adult(earning(&[1.0, 1.0]), None) };
    let life = LifeHistory {
        propagule_cells: 1,
        juvenile_hazard_per_h: 0.01,
        upkeep_eu_per_h: 0.2,
        division_cost_eu: 16.0,
        cost_per_unit: 0.1,
        ..bare_life_of(2)
    };
    let bodies = [(1.0, body(None)), (1.0, body(Some(30.0))), (2.0, body(Some(20.0)))];
    let bodies = PlacedBodies::new(bodies, 0.0);
    let cues = only(Cue::Exposure);
    let model = Model::of_placed(life.clone(), [power(1.0), power(1.0)], cues, bodies);
    let survival = f64::midpoint(0.5 * (-0.3_f64).exp(), (-0.2_f64).exp());
    let alike = Programme::generalist(0.0);
    assert_relative_eq!(model.expected_propagules(&alike), 0.5 * survival, max_relative = 1e-13);
    assert_relative_eq!(model.growth_h().expect("some mature"), 70.0 / 3.0, max_relative = 1e-13);
    let generation_h = model.generation_h(&model.generalist());
    assert_relative_eq!(generation_h, 70.0 / 3.0 + 0.5, max_relative = 1e-9);

    // Taxed by a fifth, fully fed cells save 0.6 eu/h for 0.8, however long the body takes. Both B and V
    // fall by a fifth.
    let mut taxed = alike;
    taxed.responsiveness[Cue::Exposure.index()] = 2.0;
    let survival = |hours: f64| (-0.01 * hours).exp();
    let exact = 0.32 * f64::midpoint(0.5 * survival(30.0 * 0.8 / 0.6), survival(20.0 * 0.8 / 0.6));
    assert_relative_eq!(model.expected_propagules(&taxed), exact, max_relative = 1e-13);

    // A tax that takes what bodies save.
    taxed.responsiveness[Cue::Exposure.index()] = 8.0;
    assert!(model.expected_propagules(&taxed) <= 0.0);
    let nobody = PlacedBodies::new([(3.0, body(None))], 0.0);
    let nobody = Model::of_placed(life, [power(1.0), power(1.0)], cues, nobody);
    let generalist = nobody.generalist();
    assert!(generalist.r0 <= 0.0 && nobody.generation_h(&generalist).is_infinite());
    assert!(nobody.selection_at(&generalist)[0].gradient.is_nan());
    assert!(!nobody.best_programme(&generalist).outdoes(1e-6));
}

/// By hand: linear cells of incomes 1 and 1/2, z = 1/2: B = 3/4, V = 3/8. The one round of
/// 16 eu in 30 h is 16/30 eu/h saved of 22/30 earned; taxed by a fifth, 29/75 saved.
#[test]
fn unequally_fed_bodies_grow_as_if_in_rounds() {
    let life = LifeHistory {
        propagule_cells: 1,
        juvenile_hazard_per_h: 0.01,
        upkeep_eu_per_h: 0.2,
        division_cost_eu: 16.0,
        cost_per_unit: 0.1,
        ..bare_life_of(2)
    };
    let body = PlacedBody { growth_h: Some(30.0), ..adult(earning(&[1.0, 0.5]), None) };
    let bodies = PlacedBodies::new([(1.0, body)], 0.0);
    let returns = [power(1.0), power(1.0)];
    let model = Model::of_placed(life, returns, only(Cue::Exposure), bodies);
    let mut taxed = Programme::generalist(0.0);
    let untaxed = 0.75 * 0.375 * (-0.3_f64).exp();
    assert_relative_eq!(model.expected_propagules(&taxed), untaxed, max_relative = 1e-13);
    taxed.responsiveness[Cue::Exposure.index()] = 2.0;
    let exact = 0.64 * 0.75 * 0.375 * (-0.01_f64 * 16.0 / (29.0 / 75.0)).exp();
    assert_relative_eq!(model.expected_propagules(&taxed), exact, max_relative = 1e-13);
}

/// By hand: propagules of adult size, whose hungry cells die after 24 h, so that 2 linear cells of z = 1/2
/// are left, B = 1 and V = 1/2. Under a hazard of 0.01/h exp(-0.24) of them live to see it, taxed or
/// not.
#[test]
fn bodies_that_need_not_grow_may_wait_for_hungry_cells_to_die() {
    let life = LifeHistory { juvenile_hazard_per_h: 0.01, cost_per_unit: 0.1, ..bare_life_of(3) };
    let body = PlacedBody { growth_h: Some(24.0), ..adult(earning(&[1.0; 2]), None) };
    let bodies = PlacedBodies::new([(1.0, body)], 0.0);
    let returns = [power(1.0), power(1.0)];
    let model = Model::of_placed(life, returns, only(Cue::Exposure), bodies);
    let mut programme = Programme::generalist(0.0);
    let exact = 0.5 * (-0.24_f64).exp();
    assert_relative_eq!(model.expected_propagules(&programme), exact, max_relative = 1e-13);
    programme.responsiveness[Cue::Exposure.index()] = 2.0;
    assert_relative_eq!(model.expected_propagules(&programme), 0.64 * exact, max_relative = 1e-13);
}

/// By hand: 4 linear cells of income 2 with z = 1/4, gamma = 3/4 and 4 gammas in all, 6 eu/h; cells are
/// replaced at 0.02/h for 10 eu, 0.8 eu/h for all 4: 13/15 of every budget is left. With V = 1/4
/// and births (13/15 0.75)^2 each.
#[test]
fn replacements_are_paid_from_all_germ_budgets() {
    let life = LifeHistory { income_eu_per_h: 2.0, division_cost_eu: 10.0, ..bare_life_of(4) };
    let bodies = |turnover| PlacedBodies::new([(1.0, adult(earning(&[1.0; 4]), None))], turnover);
    let model = |turnover| {
        let returns = [power(1.0), power(2.0)];
        Model::of_placed(life.clone(), returns, only(Cue::Noise), bodies(turnover))
    };
    let quarter = Programme::generalist(-(3.0_f64.ln()));
    let exact = 2.0 * 4.0 * (13.0 / 15.0 * 0.75_f64).powi(2) * 0.25;
    let found = model(0.02).expected_propagules(&quarter);
    assert_relative_eq!(found, exact, max_relative = 1e-13);
    // Replacing costs more than the germ line earns: 10 * 0.16 * 4 = 6.4 of 6 eu/h.
    assert!(model(0.16).expected_propagules(&quarter) <= 0.0);
    // At the exponent 1 of fecundity the optimum is that of z (1 - z - t), t = tau c_div / e0 = 0.1.
    let linear =
        Model::of_placed(life.clone(), [power(1.0), power(1.0)], only(Cue::Noise), bodies(0.02));
    assert_relative_eq!(linear.generalist().soma_share, 0.45, max_relative = 1e-9);
}

/// By hand, as above, but only 3 of the 4 cells touch another: 0.6 eu/h of 6, so that 0.9 of every budget is
/// left. A cell by itself has nobody to pay for.
#[test]
fn only_cells_that_touch_another_are_paid_for() {
    let propagules = |cells: usize, cells_in_contact: usize| {
        let life =
            LifeHistory { income_eu_per_h: 2.0, division_cost_eu: 10.0, ..bare_life_of(cells) };
        let body = adult(earning(&vec![1.0; cells]), None);
        let bodies = PlacedBodies::new([(1.0, PlacedBody { cells_in_contact, ..body })], 0.02);
        let model = Model::of_placed(life, [1.0, 2.0].map(power), only(Cue::Noise), bodies);
        model.expected_propagules(&Programme::generalist(-(3.0_f64.ln())))
    };
    let exact = 2.0 * 4.0 * (0.9 * 0.75_f64).powi(2) * 0.25;
    assert_relative_eq!(propagules(4, 3), exact, max_relative = 1e-13);
    assert_relative_eq!(propagules(1, 0), 2.0 * 0.5625 * 0.25, max_relative = 1e-13);
}

/// By hand: of n bodies drawn half are alike and gain d, half leave nothing, with the mean gain d/2 and the
/// standard error `d/2 / sqrt(n - 1)`: the share of R0 that is gained is sqrt(n - 1) of its errors, whether
/// the others have no cells or never mature. Of 10 that is 3, too few to be sure; d being 3 times what
/// generalists leave (V = 1/2 and B = 1 for V = 1/4 and B = 1/2), the error is then all of R0.
#[test]
fn bodies_that_leave_nothing_are_part_of_the_spread() {
    let cells = || {
        let kinds = [1, -1].map(|label| CellKind { label, exposed: true });
        kinds.map(|kind| somadawn::theory::PlacedCell { kind, income: 1.0 }).to_vec()
    };
    let lost = |cells| PlacedBody { growth_h: None, ..adult(cells, None) };
    for lost in [lost(cells()), lost(Vec::new())] {
        let best_of = |n: f64| {
            let bodies = [(n / 2.0, adult(cells(), None)), (n / 2.0, lost.clone())];
            let bodies = PlacedBodies::new(bodies, 0.0);
            let returns = [power(2.0), power(2.0)];
            let model = Model::of_placed(bare_life_of(2), returns, only(Cue::Lineage), bodies);
            let generalist = model.generalist();
            (model.best_programme(&generalist), generalist)
        };
        let (best, _) = best_of(100.0);
        let gained = 1.0 - (-best.gain.ln_r0).exp();
        assert!(gained > 0.5 && !best.gain.is_undecided(), "{best:?}");
        assert_relative_eq!(
            gained / best.gain.standard_error,
            99.0_f64.sqrt(),
            max_relative = 1e-9
        );

        let (best, generalist) = best_of(10.0);
        assert_eq!((best.programme, best.r0), (generalist.programme(), generalist.r0));
        assert!(best.gain.is_undecided() && !best.outdoes(0.0), "{best:?}");
        assert_relative_eq!(best.gain.standard_error, 1.0, max_relative = 1e-3);
    }
}

/// A mixed sample of differently labelled bodies: the cue is centred in each body by itself.
#[test]
fn labels_are_read_cell_by_cell() {
    let kinds = |labels: &[i8]| {
        let kind = |label: &i8| CellKind { label: *label, exposed: true };
        labels.iter().map(kind).collect::<Vec<_>>()
    };
    let placed = |labels: &[i8]| {
        let cells = kinds(labels).into_iter();
        let cells = cells.map(|kind| somadawn::theory::PlacedCell { kind, income: 1.0 });
        adult(cells.collect(), None)
    };
    let counted = |labels: &[i8]| Composition::of(kinds(labels).into_iter().map(|k| (k, 1.0)));
    let (one, other) = ([1, -1, 1, 1], [-1, 1, -1, 1]);
    let cues = only(Cue::Lineage);
    let returns = || [power(1.3), power(0.8)];
    let bodies = PlacedBodies::new([(3.0, placed(&one)), (1.0, placed(&other))], 0.0);
    let placed = Model::of_placed(bare_life_of(4), returns(), cues, bodies);
    let bodies = [(0.75, counted(&one)), (0.25, counted(&other))];
    let counted = Model::new(bare_life_of(4), returns(), cues, &bodies);
    let (generalist, expected) = (placed.generalist(), counted.generalist());
    assert_relative_eq!(generalist.r0, expected.r0, max_relative = 1e-13);
    let best = [placed.best_programme(&generalist), counted.best_programme(&expected)];
    assert_relative_eq!(best[0].r0, best[1].r0, max_relative = 1e-10);
    let selection = [&placed, &counted].map(|model| model.selection_at(&expected)[0]);
    assert_relative_eq!(selection[0].curvature, selection[1].curvature, max_relative = 1e-10);
}
