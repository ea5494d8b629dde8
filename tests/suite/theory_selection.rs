//! The generalist optimum and selection at it, against closed forms.

#![expect(clippy::float_cmp, reason = "values that are exact by construction")]

use approx::assert_relative_eq;
use somadawn::theory::lineage::label_compositions;
use somadawn::theory::{
    CellKind, Composition, Cue, LifeHistory, Model, Programme, ReturnCurve, TaskReturn, Verdict,
    closed_forms,
};

use crate::theory_models::{bare_life, bodies, only, power, random_fates, rows};

const UNLIMITED: &str = include_str!("../data/dol_unlimited.csv");

#[test]
fn the_generalist_optimum_is_the_closed_form() {
    for row in rows(UNLIMITED) {
        let (a, c) = (row[0], row[1]);
        let generalist = random_fates(a, c, None).generalist();
        let (z, w) =
            (closed_forms::generalist_optimum(a, c), closed_forms::generalist_fitness(a, c));
        assert!((generalist.soma_share - z).abs() < 1e-13, "{a} {c} {}", generalist.soma_share);
        assert_relative_eq!(generalist.r0, w, max_relative = 1e-13);
        assert!((generalist.soma_share - row[3]).abs() < 1e-10);
        assert!((generalist.r0 - row[4]).abs() < 1e-10);
    }
}

/// Curvature of ln R0 by g at 0: the logit's variance g^2 gives Var(z) = g^2 (z (1 - z))^2, and
/// the mean logit being held, the shift of the mean of z costs nothing at the optimum; so it is
/// `dispersion_gain (z (1 - z))^2`.
#[test]
fn curvature_of_random_fates_is_the_closed_form() {
    for n in [Some(2), Some(3), Some(7), Some(64), Some(1000), None] {
        for (a, c) in [(1.5, 1.5), (2.0, 0.7), (0.8, 0.8), (3.0, 0.4), (1.1, 1.3)] {
            let model = random_fates(a, c, n);
            let noise = model.selection_at(&model.generalist())[0];
            let z = closed_forms::generalist_optimum(a, c);
            let exact = closed_forms::dispersion_gain(a, c, n) * (z * (1.0 - z)).powi(2);
            assert!((noise.curvature - exact).abs() < 1e-11, "{n:?} {a} {c}");
            assert_eq!(noise.gradient, 0.0);
            if exact.abs() < 1e-9 {
                continue; // on the threshold itself rounding decides
            }
            let expected = if closed_forms::dispersion_is_favoured(a, c, n) {
                Verdict::FavouredByDisruption
            } else {
                Verdict::NotFavouredLocally
            };
            assert_eq!(noise.verdict(), expected);
        }
    }
}

/// A fixed split is coordinated: no 1/n (closed form with n endless), for any number of cells.
#[test]
fn curvature_by_lineage_has_no_luck_in_it() {
    for n in [2, 8, 64, 100, 777] {
        let model = Model::new(
            bare_life(),
            [power(1.4), power(1.1)],
            only(Cue::Lineage),
            &label_compositions(n, 1),
        );
        let lineage = model.selection_at(&model.generalist())[0];
        let z = closed_forms::generalist_optimum(1.4, 1.1);
        // Var(label) over a body, averaged over bodies: 1 - mean^2.
        let spread: f64 = model
            .bodies()
            .iter()
            .map(|(weight, body)| {
                let mean = body.mean(|kind| f64::from(kind.label));
                weight * (1.0 - mean * mean)
            })
            .sum();
        let exact = closed_forms::dispersion_gain(1.4, 1.1, None) * (z * (1.0 - z)).powi(2);
        assert_relative_eq!(lineage.curvature, exact * spread, max_relative = 1e-10);
        assert!(lineage.gradient.abs() < 1e-13);
    }
}

fn uneven_body() -> Vec<(f64, Composition)> {
    let kind = |exposed| CellKind { label: 0, exposed };
    vec![(1.0, Composition::of([(kind(true), 40.0), (kind(false), 24.0)]))]
}

/// Every derivative against central differences of R0 itself, with all that can bend it.
#[test]
fn derivatives_agree_with_finite_differences() {
    let life = LifeHistory {
        extrinsic_hazard_per_h: 0.4,
        juvenile_hazard_per_h: 0.05,
        adult_cells: 64,
        ..bare_life()
    };
    let viability = TaskReturn {
        curve: ReturnCurve::sigmoid(0.6, 2.5).expect("legal"),
        surface_effect: 1.3,
        interior_effect: 0.6,
    };
    let cues = only(Cue::Exposure).with(Cue::Noise);
    let model = Model::new(life, [viability, power(0.9)], cues, &uneven_body());
    let generalist = model.generalist();
    for selection in model.selection_at(&generalist) {
        let fitness = |g: f64| {
            let mut programme = generalist.programme();
            programme.responsiveness[selection.cue.index()] = g;
            model.log_fitness(&programme)
        };
        let h = 1e-3;
        let first =
            (8.0 * (fitness(h) - fitness(-h)) - fitness(2.0 * h) + fitness(-2.0 * h)) / (12.0 * h);
        let second = (16.0 * (fitness(h) + fitness(-h))
            - fitness(2.0 * h)
            - fitness(-2.0 * h)
            - 30.0 * fitness(0.0))
            / (12.0 * h * h);
        assert!((first - selection.gradient).abs() < 1e-9, "{first} {selection:?}");
        assert!((second - selection.curvature).abs() < 1e-7, "{second} {selection:?}");
    }
}

/// Work that pays more at the surface makes exposure favoured at once, whatever the exponents.
#[test]
fn uneven_places_favour_exposure_at_once() {
    for exponent in [0.5, 1.0, 2.0] {
        let viability = TaskReturn { surface_effect: 1.0, interior_effect: 0.2, ..power(exponent) };
        let model = Model::new(
            bare_life(),
            [viability, power(exponent)],
            only(Cue::Exposure),
            &uneven_body(),
        );
        let exposure = model.selection_at(&model.generalist())[0];
        assert_eq!(exposure.verdict(), Verdict::FavouredAtOnce);
        assert!(exposure.gradient > 0.0);
    }
    let even =
        Model::new(bare_life(), [power(0.7), power(0.9)], only(Cue::Exposure), &uneven_body());
    let exposure = even.selection_at(&even.generalist())[0];
    assert!(exposure.gradient.abs() < 1e-14);
    assert_eq!(exposure.verdict(), Verdict::NotFavouredLocally);
}

/// A costly cue is worse at first order (ln R0 falls by cost (a + c) per unit of g), so never
/// favoured by disruption; where place pays more than it costs, it is favoured at once.
#[test]
fn cost_puts_a_kink_at_the_generalist() {
    let life = LifeHistory { cost_per_unit: 0.01, ..bare_life() };
    let taxed =
        Model::new(life.clone(), [power(2.0), power(2.0)], only(Cue::Noise), &bodies(Some(64)));
    let noise = taxed.selection_at(&taxed.generalist())[0];
    assert_relative_eq!(noise.gradient, -0.04, max_relative = 1e-12);
    assert_eq!(noise.verdict(), Verdict::NotFavouredLocally);

    let fecundity = TaskReturn { surface_effect: 1.0, interior_effect: 0.2, ..power(1.0) };
    let place = Model::new(life, [power(1.0), fecundity], only(Cue::Exposure), &uneven_body());
    let exposure = place.selection_at(&place.generalist())[0];
    assert!(exposure.gradient < 0.0, "germ belongs at the surface here");
    assert_eq!(exposure.verdict(), Verdict::FavouredAtOnce);
    let mut programme = place.generalist().programme();
    programme.responsiveness[Cue::Exposure.index()] = -1e-6;
    let slope = (place.log_fitness(&programme) - place.generalist().r0.ln()) / -1e-6;
    assert_relative_eq!(exposure.gradient, slope, max_relative = 1e-4);
}

/// Flat curves make all programmes equally fit: no selection, and the generalist stays at 1/2.
#[test]
fn flat_curves_are_neutral() {
    let flat = TaskReturn {
        curve: ReturnCurve::table(&[[0.0, 1.0], [1.0, 1.0]]).expect("legal"),
        ..power(1.0)
    };
    let cues = only(Cue::Noise).with(Cue::Lineage);
    let model = Model::new(bare_life(), [flat.clone(), flat], cues, &label_compositions(16, 1));
    let generalist = model.generalist();
    assert_eq!((generalist.baseline, generalist.soma_share), (0.0, 0.5));
    for cue in model.selection_at(&generalist) {
        assert_eq!((cue.gradient, cue.curvature), (0.0, 0.0));
        assert_eq!(cue.verdict(), Verdict::NotFavouredLocally);
    }
    let best = model.best_programme(&generalist);
    assert_eq!(best.programme, generalist.programme());
}

/// Where only germ pays, the optimum lies at the bound.
#[test]
fn an_optimum_at_the_bound_is_found_there() {
    let flat = TaskReturn {
        curve: ReturnCurve::table(&[[0.0, 1.0], [1.0, 1.0]]).expect("legal"),
        ..power(1.0)
    };
    let model = Model::new(bare_life(), [flat, power(1.0)], only(Cue::Noise), &bodies(Some(16)));
    let generalist = model.generalist();
    assert_eq!(generalist.baseline, -12.0);
    let best = model.best_programme(&generalist);
    assert!(best.r0 <= generalist.r0 * (1.0 + 1e-9));
    assert!(best.outcome.division_index < 0.01);
    assert!(model.expected_propagules(&Programme::generalist(0.0)) < generalist.r0);
}
