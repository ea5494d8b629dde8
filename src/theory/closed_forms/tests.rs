//! Closed forms against tables computed elsewhere (`tests/data/dol_unlimited.csv` by maximisation
//! over mixtures, `dol_random_fates.csv` by brute force over two-point distributions), and against
//! each other.

#![expect(clippy::float_cmp, reason = "values that are exact by construction")]
#![expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "small whole numbers")]

use approx::assert_relative_eq;

use super::*;

const UNLIMITED: &str = include_str!("../../../tests/data/dol_unlimited.csv");
const RANDOM_FATES: &str = include_str!("../../../tests/data/dol_random_fates.csv");

fn rows(table: &str) -> Vec<Vec<f64>> {
    let mut reader = csv::Reader::from_reader(table.as_bytes());
    reader
        .records()
        .map(|row| {
            row.expect("a row").iter().map(|cell| cell.parse().unwrap_or(f64::NAN)).collect()
        })
        .collect()
}

#[test]
fn optimum_fitness_and_conditions_agree_with_the_table() {
    for row in rows(UNLIMITED) {
        let (a, c) = (row[0], row[1]);
        assert!((generalist_optimum(a, c) - row[3]).abs() < 1e-10);
        assert!((generalist_fitness(a, c) - row[4]).abs() < 1e-10);
        // On the threshold itself (harmonic mean 1) rounding decides: the table has both signs.
        if (row[2] - 1.0).abs() > 1e-9 {
            assert_eq!(dispersion_is_favoured(a, c, None), row[5] == 1.0, "a {a} c {c}");
        }
        assert_eq!(full_specialists_win(a, c, None), row[6] == 1.0, "a {a} c {c}");
        assert_eq!(some_mixture_wins(a, c), row[8] == 1.0, "a {a} c {c}");
    }
}

#[test]
fn thresholds_of_random_fates_agree_with_the_table() {
    for row in rows(RANDOM_FATES) {
        let n = Some(row[0] as u64);
        assert!((local_threshold(n) - row[1]).abs() < 1e-10);
        assert!((global_threshold(n) - row[2]).abs() < 1e-10);
        // Brute force is good to 6 digits, and told to as many.
        assert!((global_threshold(n) - row[3]).abs() < 2e-6);
        assert!((coordinated_threshold(n) - row[4]).abs() < 1e-10);
    }
}

#[test]
fn thresholds_are_where_the_conditions_turn() {
    for n in [Some(2), Some(3), Some(10), Some(64), Some(1000)] {
        let local = local_threshold(n);
        assert!(dispersion_gain(local, local, n).abs() < 1e-12);
        let global = global_threshold(n);
        assert_relative_eq!(
            generalist_fitness(global, global),
            full_specialist_fitness(n),
            max_relative = 1e-12
        );
        assert!(global < local);
        let c = local_partner(2.5, n).expect("2.5 has a partner");
        assert!(dispersion_gain(2.5, c, n).abs() < 1e-12);
    }
    assert_eq!(local_partner(0.5, None), None);
    assert_eq!(local_threshold(None), 1.0);
    assert_eq!(global_threshold(None), 1.0);
}

/// Columns of the published-style table for unequal exponents: c above which any mixture, full
/// specialists, and dispersion win beside exponent a (computed by root finding elsewhere).
#[test]
fn unequal_exponents_have_three_thresholds() {
    let table = [
        (1.2, 0.684_324_64, 0.844_748_83, 0.857_142_86),
        (1.5, 0.500_000_00, 0.708_952_84, 0.750_000_00),
        (2.0, 0.375_959_47, 0.587_630_75, 0.666_666_67),
        (3.0, 0.282_671_92, 0.475_040_80, 0.600_000_00),
        (5.0, 0.218_413_11, 0.384_892_96, 0.555_555_56),
        (10.0, 0.169_231_37, 0.308_480_09, 0.526_315_79),
    ];
    let digits = 1e-8;
    for (a, any, full, local) in table {
        assert!(some_mixture_wins(a, any + digits) && !some_mixture_wins(a, any - digits));
        assert!(full_specialists_win(a, full + digits, None));
        assert!(!full_specialists_win(a, full - digits, None));
        assert!((local_partner(a, None).expect("a > 1/2") - local).abs() < digits);
    }
}

/// Second-order gain against a symmetric split of half the cells (numeric value at (2, 0.7) from
/// a finite difference: 0.520697; exact 0.520714).
#[test]
fn the_gain_of_dispersion_is_its_second_order_term() {
    assert_relative_eq!(dispersion_gain(2.0, 0.7, None), 0.520_714, max_relative = 1e-6);
    let (a, c, step) = (1.6, 1.3, 1e-4);
    let z = generalist_optimum(a, c);
    let mean = |f: &dyn Fn(f64) -> f64| f64::midpoint(f(z - step), f(z + step));
    let (work, births) = (|z: f64| z.powf(a), |z: f64| (1.0 - z).powf(c));
    let fitness = mean(&|z| work(z) * births(z)) / 5.0 + 0.8 * mean(&work) * mean(&births);
    let gain = (fitness / generalist_fitness(a, c) - 1.0) * 2.0 / (step * step);
    assert_relative_eq!(gain, dispersion_gain(a, c, Some(5)), max_relative = 1e-5);
}
