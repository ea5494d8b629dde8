//! Binomial intervals against Newcombe (1998) and tables from two independent libraries.

use approx::assert_abs_diff_eq;
use proptest::prelude::*;
use somadawn::stats::{Level, StatsError, clopper_pearson, quantile, wilson};

/// Columns `x, n, wilson_lo, wilson_hi, ..., clopper_pearson_lo, clopper_pearson_hi, ...`, printed
/// to 10 decimals by statsmodels 0.15.0; Wilson limits of the first four rows are also Newcombe's
/// (1998, Stat. Med. 17:857) to 4 decimals.
fn table() -> Vec<Vec<f64>> {
    let mut reader = csv::Reader::from_path(concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/data/binomial_intervals.csv"
    ))
    .expect("the table of intervals");
    reader
        .records()
        .map(|row| row.expect("a row").iter().map(|cell| cell.parse().expect("a number")).collect())
        .collect()
}

fn count(value: f64) -> u64 {
    format!("{value:.0}").parse().expect("a count")
}

#[test]
fn intervals_match_the_reference_table() {
    let rows = table();
    assert_eq!(rows.len(), 8);
    for row in rows {
        let (x, n) = (count(row[0]), count(row[1]));
        let score = wilson(x, n, Level::P95).unwrap();
        assert_abs_diff_eq!(score.low, row[2], epsilon = 1e-9);
        assert_abs_diff_eq!(score.high, row[3], epsilon = 1e-9);
        let exact = clopper_pearson(x, n, Level::P95).unwrap();
        assert_abs_diff_eq!(exact.low, row[6], epsilon = 1e-9);
        assert_abs_diff_eq!(exact.high, row[7], epsilon = 1e-9);
    }
}

#[test]
fn limits_at_the_ends_are_exact() {
    for n in [1, 7, 20, 100_000] {
        assert_eq!(wilson(0, n, Level::P95).unwrap().low.to_bits(), 0f64.to_bits());
        assert_eq!(wilson(n, n, Level::P95).unwrap().high.to_bits(), 1f64.to_bits());
        assert_eq!(clopper_pearson(0, n, Level::P95).unwrap().low.to_bits(), 0f64.to_bits());
        assert_eq!(clopper_pearson(n, n, Level::P95).unwrap().high.to_bits(), 1f64.to_bits());
    }
    // Closed form at x = 0: 1 - (alpha/2)^(1/n).
    let expected = 1.0 - libm::pow(0.025, 1.0 / 12.0);
    let found = clopper_pearson(0, 12, Level::P95).unwrap().high;
    assert_abs_diff_eq!(found, expected, epsilon = 1e-13);
}

#[test]
fn without_trials_everything_is_possible_and_nonsense_is_refused() {
    for interval in [wilson(0, 0, Level::P95).unwrap(), clopper_pearson(0, 0, Level::P95).unwrap()]
    {
        assert_abs_diff_eq!(interval.low, 0.0);
        assert_abs_diff_eq!(interval.high, 1.0);
    }
    let refused = Err(StatsError::Successes { successes: 3, trials: 2 });
    assert_eq!(wilson(3, 2, Level::P95), refused);
    assert_eq!(clopper_pearson(3, 2, Level::P95), refused);
    for level in [0.0, 1.0, -0.5, f64::NAN, f64::INFINITY] {
        assert!(matches!(Level::new(level), Err(StatsError::Level { .. })));
    }
}

#[test]
fn quantiles_match_another_library() {
    // scipy 1.17.1: stats.norm.ppf, stats.beta.ppf, stats.t.ppf.
    let p99 = Level::new(0.99).unwrap();
    assert_abs_diff_eq!(
        quantile::normal_two_sided(Level::P95),
        1.959_963_984_540_054,
        epsilon = 2e-15
    );
    assert_abs_diff_eq!(quantile::normal_two_sided(p99), 2.575_829_303_548_900_4, epsilon = 5e-15);
    assert_abs_diff_eq!(quantile::normal(1e-10), -6.361_340_902_404_056, epsilon = 1e-13);
    for (p, a, b, expected) in [
        (0.3, 0.5, 0.5, 0.206_107_373_853_763_4),
        (0.1, 2.0, 3.0, 0.142_559_316_710_030_72),
        (0.975, 40.0, 700.0, 0.071_440_689_648_993_83),
        (0.2, 0.1, 5.0, 1.364_071_360_783_554_4e-8),
    ] {
        assert_abs_diff_eq!(quantile::beta(p, a, b), expected, epsilon = 1e-12);
    }
}

proptest! {
    #[test]
    fn intervals_hold_the_estimate_and_mirror(n in 1u64..5_000, share in 0.0f64..=1.0) {
        let x = count((share * n as f64).floor());
        for interval in [wilson, clopper_pearson] {
            let found = interval(x, n, Level::P95).unwrap();
            let mirrored = interval(n - x, n, Level::P95).unwrap();
            let estimate = x as f64 / n as f64;
            prop_assert!(0.0 <= found.low && found.low <= estimate);
            prop_assert!(estimate <= found.high && found.high <= 1.0);
            prop_assert!((found.low - (1.0 - mirrored.high)).abs() < 1e-12);
        }
    }

    /// statrs computes the same function by its own code.
    #[test]
    fn incomplete_beta_agrees_with_statrs(a in 0.1f64..500.0, b in 0.1f64..500.0, x in 0.0f64..=1.0) {
        let expected = statrs::function::beta::beta_reg(a, b, x);
        prop_assert!((quantile::incomplete_beta(x, a, b) - expected).abs() < 1e-10);
    }
}
