//! Mutual-entropy indices (Gorelick et al. 2004, Am. Nat. 164:677) against worked tables.

use approx::assert_abs_diff_eq;
use ndarray::{Array2, array};
use proptest::prelude::*;
use somadawn::stats::{MutualEntropy, StatsError};

fn assert_indices(work: &Array2<f64>, expected: [f64; 4]) {
    let found = MutualEntropy::of(&work.view()).unwrap();
    assert_abs_diff_eq!(found.mutual, expected[0], epsilon = 1e-10);
    assert_abs_diff_eq!(found.over_tasks(), expected[1], epsilon = 1e-10);
    assert_abs_diff_eq!(found.over_individuals(), expected[2], epsilon = 1e-10);
    assert_abs_diff_eq!(found.over_geometric_mean(), expected[3], epsilon = 1e-10);
}

/// Values computed once by two routes in numpy; the definitions are the paper's.
#[test]
fn worked_tables() {
    assert_indices(
        &array![[8., 2.], [7., 3.], [1., 9.], [0., 10.]],
        [0.313_924_242_3, 0.466_446_954_3, 0.226_448_473_8, 0.325_001_847_5],
    );
    assert_indices(
        &array![[10., 0.], [10., 0.], [0., 10.], [0., 10.]],
        [std::f64::consts::LN_2, 1.0, 0.5, std::f64::consts::FRAC_1_SQRT_2],
    );
    assert_indices(&Array2::eye(3), [1.098_612_288_7, 1.0, 1.0, 1.0]);
    assert_indices(&array![[5., 5.], [3., 3.], [2., 2.]], [0.0; 4]);
    assert_indices(
        &array![[10., 0.], [4., 4.], [0., 2.]],
        [0.333_605_429_8, 0.546_120_355_5, 0.353_639_686_6, 0.439_465_392_7],
    );
    // One germ cell (task 1) and seven soma cells (task 0).
    let one_germ =
        Array2::from_shape_fn((8, 2), |(cell, task)| f64::from((cell == 0) == (task == 1)));
    assert_indices(&one_germ, [0.376_770_161_3, 1.0, 0.181_188_147_7, 0.425_662_011_1]);
}

#[test]
fn nothing_to_divide_counts_as_no_division() {
    assert_indices(&array![[3.], [0.1], [7.7]], [0.0; 4]);
    assert_indices(&array![[0.3, 0.1, 0.2]], [0.0; 4]);
    assert_indices(&Array2::zeros((4, 2)), [0.0; 4]);
    assert_indices(&Array2::zeros((0, 2)), [0.0; 4]);
}

#[test]
fn impossible_work_is_refused() {
    for value in [-1.0, f64::NAN, f64::INFINITY] {
        let work = array![[1.0, 0.0], [1.0, value]];
        let refused = MutualEntropy::of(&work.view());
        assert!(matches!(refused, Err(StatsError::Work { row: 1, column: 1, .. })), "{refused:?}");
    }
}

proptest! {
    #[test]
    fn indices_stay_within_bounds_and_know_no_unit(
        rows in 1usize..30, unit in 1e-3f64..1e3, seed in prop::collection::vec(0.0f64..1.0, 90),
    ) {
        let work = Array2::from_shape_vec((rows, 3), seed[..rows * 3].to_vec()).unwrap();
        let found = MutualEntropy::of(&work.view()).unwrap();
        let scaled = MutualEntropy::of(&(&work * unit).view()).unwrap();
        for (index, same) in [
            (found.over_tasks(), scaled.over_tasks()),
            (found.over_individuals(), scaled.over_individuals()),
            (found.over_geometric_mean(), scaled.over_geometric_mean()),
        ] {
            prop_assert!((0.0..=1.0).contains(&index));
            prop_assert!((index - same).abs() < 1e-9);
        }
        prop_assert!(found.mutual <= found.individuals.min(found.tasks) + 1e-12);
    }
}
