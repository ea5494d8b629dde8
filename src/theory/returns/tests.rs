//! Return curves: normalised, monotone, differentiated right, and strict about their parameters.

#![expect(clippy::float_cmp, reason = "values that are exact by construction")]

use approx::assert_relative_eq;
use proptest::prelude::*;

use super::*;

fn any_curve() -> impl Strategy<Value = ReturnCurve> {
    prop_oneof![
        (0.05..6.0).prop_map(|exponent| ReturnCurve::Power { exponent }),
        (0.01..10.0).prop_map(|half| ReturnCurve::Saturating { half }),
        (0.01..30.0, 0.3..20.0)
            .prop_map(|(half, steepness)| ReturnCurve::Sigmoid { half, steepness }),
        proptest::collection::vec((0.05..0.7, 0.0..1.0), 1..7).prop_map(|steps| {
            let mut points = vec![[0.0, 0.0]];
            for (dx, dy) in steps {
                let [x, y] = points[points.len() - 1];
                points.push([x + dx, y + dy]);
            }
            ReturnCurve::table(&points).expect("increasing points")
        }),
    ]
}

proptest! {
    #[test]
    fn curves_never_fall(curve in any_curve(), x in 0.0..2.0, step in 1e-6..1.0) {
        prop_assert!(curve.value(x + step) >= curve.value(x) - 1e-14);
        prop_assert!(curve.value(x) >= 0.0);
        prop_assert!(curve.jet(x + step).slope >= -1e-12);
    }

    #[test]
    fn a_jet_has_the_value_and_the_slope_of_finite_differences(
        curve in any_curve(), x in 0.05..2.0,
    ) {
        let jet = curve.jet(x);
        prop_assert!((jet.value - curve.value(x)).abs() <= 1e-14 * jet.value.max(1.0));
        // Central difference; its error is h^2 f'''/6 + eps f/h, and a table's f'' may jump.
        let h = 1e-5;
        let slope = (curve.value(x + h) - curve.value(x - h)) / (2.0 * h);
        let scale = 1.0 + jet.slope.abs() + jet.curvature.abs();
        let jump = if matches!(curve, ReturnCurve::Table(_)) { 1e-2 } else { 1e-6 };
        prop_assert!((slope - jet.slope).abs() < jump * scale, "{slope} {}", jet.slope);
        if !matches!(curve, ReturnCurve::Table(_)) {
            let bend = (curve.jet(x + h).slope - curve.jet(x - h).slope) / (2.0 * h);
            prop_assert!((bend - jet.curvature).abs() < 1e-5 * (1.0 + jet.curvature.abs() / x));
        }
    }
}

#[test]
fn curves_with_a_formula_yield_one_at_one_and_nothing_at_zero() {
    for curve in [
        ReturnCurve::power(1.7).expect("legal"),
        ReturnCurve::saturating(0.4).expect("legal"),
        ReturnCurve::sigmoid(0.5, 4.0).expect("legal"),
    ] {
        assert_relative_eq!(curve.value(1.0), 1.0, max_relative = 1e-15);
        assert_relative_eq!(curve.value(0.0), 0.0);
    }
}

/// Hand-computed: H(0.5) = 1/2, H(1) = 16/17 at K = 1/2, n = 4.
#[test]
fn known_values() {
    let sigmoid = ReturnCurve::sigmoid(0.5, 4.0).expect("legal");
    assert_relative_eq!(sigmoid.value(0.5), 0.5 * 17.0 / 16.0, max_relative = 1e-15);
    let saturating = ReturnCurve::saturating(0.5).expect("legal");
    assert_relative_eq!(saturating.value(0.5), 0.75, max_relative = 1e-15);
    assert_relative_eq!(saturating.jet(0.0).slope, 3.0, max_relative = 1e-15);
}

#[test]
fn derivatives_at_zero_are_the_limits() {
    let jet = ReturnCurve::Power { exponent: 2.0 }.jet(0.0);
    assert_eq!((jet.slope, jet.curvature), (0.0, 2.0));
    let jet = ReturnCurve::Power { exponent: 0.5 }.jet(0.0);
    assert_eq!((jet.slope, jet.curvature), (f64::INFINITY, f64::NEG_INFINITY));
    // x (1 + K)/(x + K) is the sigmoid of steepness 1.
    let (hill, plain) = (
        ReturnCurve::Sigmoid { half: 0.4, steepness: 1.0 }.jet(0.0),
        ReturnCurve::Saturating { half: 0.4 }.jet(0.0),
    );
    assert_relative_eq!(hill.slope, plain.slope, max_relative = 1e-14);
    assert_relative_eq!(hill.curvature, plain.curvature, max_relative = 1e-14);
}

#[test]
fn a_table_goes_through_its_points_and_on_in_a_straight_line() {
    let points = [[0.0, 0.1], [0.3, 0.2], [0.4, 0.9], [1.0, 1.0]];
    let curve = ReturnCurve::table(&points).expect("legal");
    for [x, y] in points {
        assert_relative_eq!(curve.value(x), y, max_relative = 1e-14);
    }
    let end = curve.jet(1.0);
    assert_relative_eq!(curve.value(3.0), 1.0 + 2.0 * end.slope, max_relative = 1e-14);
    // Between points a monotone curve stays between their values (Fritsch & Carlson 1980).
    for step in 0..=100 {
        let y = curve.value(0.3 + 0.1 * f64::from(step) / 100.0);
        assert!((0.2..=0.9).contains(&y), "{y}");
    }
}

/// Straight points make a straight line, and a quadratic's inner slopes are exact on a grid.
#[test]
fn a_table_reproduces_a_line() {
    let curve = ReturnCurve::table(&[[0.0, 1.0], [0.2, 1.4], [1.0, 3.0]]).expect("legal");
    for x in [0.0, 0.1, 0.5, 0.99, 7.0] {
        assert_relative_eq!(curve.value(x), 1.0 + 2.0 * x, max_relative = 1e-14);
        assert!(curve.jet(x).curvature.abs() < 1e-12);
    }
}

#[test]
fn a_flat_table_is_a_neutral_curve() {
    let curve = ReturnCurve::table(&[[0.0, 1.0], [1.0, 1.0]]).expect("legal");
    for x in [0.0, 0.5, 1.0, 2.0] {
        assert_eq!(curve.jet(x), Jet::constant(1.0));
    }
}

#[test]
fn illegal_parameters_are_named_with_their_value() {
    for value in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        let error = ReturnCurve::power(value).expect_err("illegal");
        assert!(error.to_string().starts_with("`exponent` is "), "{error}");
        assert!(ReturnCurve::saturating(value).is_err());
        assert!(ReturnCurve::sigmoid(value, 2.0).is_err());
        assert!(ReturnCurve::sigmoid(2.0, value).is_err());
    }
}

/// Far above its half-saturation a sigmoid is a power curve, far below it is flat at 1.
#[test]
fn a_sigmoid_has_a_value_however_extreme_its_parameters() {
    let steep = ReturnCurve::sigmoid(1e6, 100.0).expect("legal");
    assert_relative_eq!(steep.value(0.9), 0.9_f64.powi(100), max_relative = 1e-12);
    assert_relative_eq!(steep.jet(0.9).slope, 100.0 * 0.9_f64.powi(99), max_relative = 1e-12);
    assert_eq!(steep.jet(0.0), Jet::constant(0.0));
    let early = ReturnCurve::sigmoid(1e-6, 100.0).expect("legal");
    assert_eq!(early.value(0.5), 1.0);
    assert_eq!(early.value(0.0), 0.0);
    assert_eq!(early.jet(0.0), Jet::constant(0.0));
}

#[test]
fn illegal_tables_say_which_point_is_at_fault() {
    let fault = |points: &[[f64; 2]]| MonotoneCubic::through(points).expect_err("illegal");
    assert_eq!(fault(&[[0.0, 0.0]]), TableError::TooFew { count: 1 });
    assert_eq!(fault(&[[0.1, 0.0], [1.0, 1.0]]), TableError::Start { x: 0.1 });
    assert_eq!(fault(&[[0.0, 0.0], [0.0, 1.0]]), TableError::Order { point: 2, x: 0.0 });
    assert_eq!(fault(&[[0.0, 0.5], [1.0, 0.4]]), TableError::Falling { point: 2, y: 0.4 });
    assert_eq!(fault(&[[0.0, -0.5], [1.0, 0.4]]), TableError::Negative { point: 1, y: -0.5 });
    let broken = fault(&[[0.0, 0.0], [1.0, f64::NAN]]);
    assert!(matches!(broken, TableError::NotFinite { point: 2, .. }));
}
