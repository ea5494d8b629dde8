//! The best programme against mixtures found elsewhere and against brute force.

#![expect(clippy::float_cmp, reason = "values that are exact by construction")]
#![expect(clippy::cast_possible_truncation, reason = "small whole numbers")]

use approx::assert_relative_eq;
use somadawn::theory::lineage::label_compositions;
use somadawn::theory::{
    BodyClass, CellKind, Composition, Cue, LifeHistory, Model, Programme, TaskReturn, closed_forms,
};

use crate::theory_models::{bare_life, only, power, random_fates, rows, unbounded};

const UNLIMITED: &str = include_str!("../data/dol_unlimited.csv");

/// Best mixtures of a large body, from a search over pairs of types (table). Wide bounds, so that
/// they do not hold the traits back.
#[test]
fn the_best_mixture_of_a_large_body_is_that_of_the_table() {
    for row in rows(UNLIMITED) {
        let (a, c, best) = (row[0], row[1], row[9]);
        let model = unbounded(random_fates(a, c, None));
        let found = model.best_programme(&model.generalist());
        assert!((found.r0 - best).abs() < 1e-9, "a {a} c {c}: {} not {best}", found.r0);
        assert_eq!(found.outcome.division_index > 0.01, row[8] == 1.0, "a {a} c {c}");
    }
}

/// The table's traits too, for a mixture with a partial specialist: a = 3, c = 0.4, 25.87 % germ
/// (z = 0) beside cells with z = 0.939537.
#[test]
fn unequal_exponents_keep_one_partial_specialist() {
    let model = unbounded(random_fates(3.0, 0.4, None));
    let best = model.best_programme(&model.generalist());
    let p = best.programme.noise_probability();
    let share = |noise: f64| best.programme.soma_share(&[noise - (2.0 * p - 1.0), 0.0, 0.0, 0.0]);
    assert!((share(1.0) - 0.939_537).abs() < 1e-5);
    assert!(share(-1.0) < 1e-6);
    assert!((1.0 - p - 0.258_674).abs() < 1e-5);
    assert!((best.r0 - 0.307_412_398_7).abs() < 1e-9);
    assert_eq!(best.outcome.class, BodyClass::Complete);
    assert!((best.outcome.soma_fraction - p).abs() < 1e-12);
}

/// With exponents alike and above the threshold, full specialists at even odds: (1 - 1/n)/4 per
/// cell. At the default bound of 12 types differ from pure ones by 6e-6.
#[test]
fn random_fates_of_small_bodies_end_in_full_specialists() {
    for n in [2, 3, 4, 8, 64, 1000] {
        let exponent = closed_forms::global_threshold(Some(n)) + 0.1;
        let exact = closed_forms::full_specialist_fitness(Some(n));
        let model = unbounded(random_fates(exponent, exponent, Some(n)));
        let best = model.best_programme(&model.generalist());
        assert_relative_eq!(best.r0 / n as f64, exact, max_relative = 1e-9);
        let model = random_fates(exponent, exponent, Some(n));
        let best = model.best_programme(&model.generalist());
        assert_relative_eq!(best.r0 / n as f64, exact, max_relative = 5e-5);
    }
}

/// Division index of n pure cells at even odds: 1 unless all are of one kind, 1 - 2^(1-n).
#[test]
fn the_expected_division_index_counts_bodies_of_one_kind() {
    for n in [2, 5, 30] {
        let model = unbounded(random_fates(2.0, 2.0, Some(n)));
        let pure =
            Programme { baseline: 0.0, responsiveness: [40.0, 0.0, 0.0, 0.0], noise_bias: 0.0 };
        let outcome = model.outcome(&pure);
        let alike = 0.5_f64.powi(n as i32 - 1);
        assert_relative_eq!(outcome.division_index, 1.0 - alike, max_relative = 1e-12);
        assert_relative_eq!(outcome.soma_fraction, 0.5, max_relative = 1e-12);
        // Two cells are as often alike as not; of equally common classes the least divided stands.
        let expected = if n == 2 { BodyClass::Alike } else { BodyClass::Complete };
        assert_eq!(outcome.class, expected);
    }
}

/// Asymmetric division splits labour without luck: 1/4 per cell in bodies of 2^k, and beats
/// random fates where both can evolve.
#[test]
fn lineage_beats_luck() {
    let cues = only(Cue::Lineage).with(Cue::Noise);
    let model = Model::new(bare_life(), [power(1.5), power(1.5)], cues, &label_compositions(8, 1));
    let model = unbounded(model);
    let best = model.best_programme(&model.generalist());
    assert_relative_eq!(best.r0 / 8.0, 0.25, max_relative = 1e-9);
    assert_relative_eq!(best.outcome.division_index, 1.0, max_relative = 1e-9);
    assert_eq!(best.outcome.class, BodyClass::Complete);
    assert_eq!(best.programme.responsiveness[Cue::Noise.index()], 0.0, "{best:?}");
    assert_eq!(best.programme.noise_bias, 0.0);
}

/// Responsiveness that costs and does not pay is given up altogether.
#[test]
fn a_costly_cue_without_use_is_not_kept() {
    let kind = |exposed| CellKind { label: 0, exposed };
    let body = Composition::of([(kind(true), 40.0), (kind(false), 24.0)]);
    let viability = TaskReturn { interior_effect: 0.1, ..power(1.0) };
    let cues = only(Cue::Exposure).with(Cue::Noise);
    let life = LifeHistory { cost_per_unit: 0.001, ..bare_life() };
    let model = Model::new(life, [viability, power(1.0)], cues, &[(1.0, body)]);
    let best = model.best_programme(&model.generalist());
    let [noise, _, exposure, _] = best.programme.responsiveness;
    assert_eq!(noise, 0.0, "{best:?}");
    assert!(exposure > 1.0, "{best:?}");
}

/// Surface work: with linear returns and viability won only at the surface, the best body has
/// soma at the surface and germ inside. 40 surface and 24 inner cells, all soma outside:
/// V = 40/64, B = 24; by hand, moving surface cells to germ only helps while V B rises.
#[test]
fn work_at_the_surface_sorts_cells_by_place() {
    let kind = |exposed| CellKind { label: 0, exposed };
    let body = Composition::of([(kind(true), 40.0), (kind(false), 24.0)]);
    let viability = TaskReturn { surface_effect: 1.0, interior_effect: 0.0, ..power(1.0) };
    let model =
        Model::new(bare_life(), [viability, power(1.0)], only(Cue::Exposure), &[(1.0, body)]);
    let model = unbounded(model);
    let best = model.best_programme(&model.generalist());
    // Surface share x of soma: V B = (40 x / 64)(24 + 40 (1 - x)), greatest at x = 0.8: 16.
    assert_relative_eq!(best.r0, 16.0, max_relative = 1e-9);
    let z = best.programme.soma_share(&[0.0, 0.0, 24.0 / 64.0, 0.0]);
    assert!((z - 0.8).abs() < 1e-5, "{z}");
    assert_eq!(best.outcome.class, BodyClass::Partial);
}

/// Against a blind grid over all four traits, nothing better is overlooked.
#[test]
fn nothing_on_a_fine_grid_beats_the_best_programme() {
    let cues = only(Cue::Lineage).with(Cue::Noise);
    for (a, c) in [(3.0, 0.45), (1.2, 1.2), (0.6, 2.5)] {
        let model = Model::new(bare_life(), [power(a), power(c)], cues, &label_compositions(6, 1));
        let best = model.best_programme(&model.generalist());
        let levels = |bound: f64, steps: i32| {
            (-steps..=steps).map(move |k| bound * f64::from(k) / f64::from(steps))
        };
        for baseline in levels(12.0, 12) {
            for noise in levels(12.0, 6) {
                for lineage in levels(12.0, 8) {
                    for noise_bias in levels(4.0, 4) {
                        let responsiveness = [noise, lineage, 0.0, 0.0];
                        let programme = Programme { baseline, responsiveness, noise_bias };
                        let r0 = model.expected_propagules(&programme);
                        assert!(r0 <= best.r0 * (1.0 + 1e-12), "{programme:?} {r0} {best:?}");
                    }
                }
            }
        }
    }
}
