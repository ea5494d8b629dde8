//! Student t intervals against scipy 1.17.1 and the printed table of t.

use approx::{assert_abs_diff_eq, assert_relative_eq};
use proptest::prelude::*;
use somadawn::stats::{Level, MeanEstimate, StatsError, quantile};

#[test]
fn t_quantiles_match_the_table() {
    let p99 = Level::new(0.99).unwrap();
    // scipy.stats.t.ppf(0.975, df) and (0.995, df); 12.706, 4.303, 2.776, 2.262, 2.045 in print.
    for (freedom, at_95, at_99) in [
        (1.0, 12.706_204_736_174_694, 63.656_741_162_871_526),
        (2.0, 4.302_652_729_749_462, 9.924_843_200_918_287),
        (4.0, 2.776_445_105_197_793_4, 4.604_094_871_349_992),
        (9.0, 2.262_157_162_798_205, 3.249_835_541_592_126),
        (29.0, 2.045_229_642_132_703, 2.756_385_903_670_605),
        (1000.0, 1.962_339_080_826_408_3, 2.580_754_698_065_951),
    ] {
        let found = quantile::student_two_sided(Level::P95, freedom);
        assert_relative_eq!(found, at_95, max_relative = 1e-11);
        assert_relative_eq!(quantile::student_two_sided(p99, freedom), at_99, max_relative = 1e-11);
    }
}

#[test]
fn interval_of_five_values() {
    // scipy.stats.t.interval(0.95, 4, loc=mean, scale=sem) of the same values.
    let found = MeanEstimate::of(&[0.91, 0.87, 0.95, 0.89, 0.93], Level::P95).unwrap().unwrap();
    let interval = found.interval.unwrap();
    assert_eq!(found.n, 5);
    assert_abs_diff_eq!(found.mean, 0.91, epsilon = 1e-15);
    assert_abs_diff_eq!(interval.low, 0.870_735_136_770_448_8, epsilon = 1e-12);
    assert_abs_diff_eq!(interval.high, 0.949_264_863_229_551_1, epsilon = 1e-12);
}

#[test]
fn few_values_say_less_and_non_finite_ones_are_refused() {
    assert_eq!(MeanEstimate::of(&[], Level::P95), Ok(None));
    let one = MeanEstimate::of(&[0.25], Level::P95).unwrap().unwrap();
    assert_eq!((one.n, one.mean, one.interval), (1, 0.25, None));
    let alike = MeanEstimate::of(&[2.0, 2.0, 2.0], Level::P95).unwrap().unwrap();
    let interval = alike.interval.unwrap();
    assert_eq!((interval.low, interval.high), (2.0, 2.0));
    let refused = MeanEstimate::of(&[1.0, f64::INFINITY], Level::P95);
    assert_eq!(refused, Err(StatsError::NotFinite { index: 1, value: f64::INFINITY }));
}

proptest! {
    #[test]
    fn interval_is_centred_and_moves_with_the_data(
        values in prop::collection::vec(-100.0f64..100.0, 2..40), shift in -100.0f64..100.0,
    ) {
        let found = MeanEstimate::of(&values, Level::P95).unwrap().unwrap();
        let interval = found.interval.unwrap();
        prop_assert!((interval.low.midpoint(interval.high) - found.mean).abs() < 1e-9);
        let moved: Vec<f64> = values.iter().map(|value| value + shift).collect();
        let moved = MeanEstimate::of(&moved, Level::P95).unwrap().unwrap();
        prop_assert!((moved.mean - found.mean - shift).abs() < 1e-9);
        prop_assert!((moved.interval.unwrap().low - interval.low - shift).abs() < 1e-8);
    }
}
