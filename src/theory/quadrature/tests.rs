//! Rules against exact probabilities, moments and textbook nodes.

#![expect(clippy::cast_sign_loss, clippy::cast_possible_wrap, reason = "small whole numbers")]

use approx::assert_relative_eq;
use statrs::distribution::{Binomial, Discrete, Hypergeometric};

use super::*;

fn expectation(rule: &Rule, f: impl Fn(f64) -> f64) -> f64 {
    rule.nodes.iter().zip(&rule.weights).map(|(node, weight)| weight * f(*node)).sum()
}

#[test]
fn binomial_probabilities_are_those_of_the_distribution() {
    for (trials, p) in [(1, 0.5), (8, 0.3), (64, 0.018), (64, 0.982), (300, 0.5)] {
        let rule = Rule::binomial(trials, p);
        let exact = Binomial::new(p, trials).expect("legal");
        for (node, weight) in rule.nodes.iter().zip(&rule.weights) {
            assert_relative_eq!(*weight, exact.pmf(*node as u64), max_relative = 1e-10);
        }
        assert_relative_eq!(expectation(&rule, |_| 1.0), 1.0, max_relative = 1e-14);
    }
    assert_eq!(Rule::binomial(5, 0.5).nodes, [0.0, 1.0, 2.0, 3.0, 4.0, 5.0]);
}

#[test]
fn hypergeometric_probabilities_are_those_of_the_distribution() {
    for (items, marked, draws) in [(8, 4, 3), (64, 32, 28), (64, 32, 63), (2, 1, 1), (10, 5, 10)] {
        let rule = Rule::hypergeometric(items, marked, draws);
        let exact = Hypergeometric::new(items, marked, draws).expect("legal");
        for (node, weight) in rule.nodes.iter().zip(&rule.weights) {
            assert_relative_eq!(*weight, exact.pmf(*node as u64), max_relative = 1e-10);
        }
        let mean = (draws * marked) as f64 / items as f64;
        assert_relative_eq!(expectation(&rule, |k| k), mean, max_relative = 1e-13);
    }
}

/// Nodes of the 3-point Gauss rule for the standard normal limit are 0 and +-sqrt(3); those of a
/// symmetric binomial have the same form with its own fourth moment.
#[test]
fn gauss_rules_have_the_moments_of_the_distribution() {
    for (trials, p, size) in [(10, 0.5, 4), (64, 0.3, 8), (500, 0.1, 12), (4000, 0.5, 24)] {
        let exact = Rule::binomial(trials, p);
        let (mean, sd) = (trials as f64 * p, (trials as f64 * p * (1.0 - p)).sqrt());
        for rule in
            [Rule::gauss_binomial(trials as f64, p, size), exact.clone().thinned(size.min(12))]
        {
            // Moments of higher order feel the tails that the list of values leaves out.
            for power in 0..(2 * size as i32).min(14) {
                let moment = |rule: &Rule| expectation(rule, |k| ((k - mean) / sd).powi(power));
                let scale = expectation(&exact, |k| ((k - mean) / sd).abs().powi(power));
                assert!(
                    (moment(&rule) - moment(&exact)).abs() < 1e-10 * scale,
                    "moment {power} of {trials} {p} {size}: {} {}",
                    moment(&rule),
                    moment(&exact)
                );
            }
        }
    }
}

#[test]
fn a_gauss_rule_with_a_node_per_value_is_the_distribution() {
    let (gauss, exact) = (Rule::gauss_binomial(6.0, 0.3, 7), Rule::binomial(6, 0.3));
    for k in 0..7 {
        assert!((gauss.nodes[k] - exact.nodes[k]).abs() < 1e-12);
        assert!((gauss.weights[k] - exact.weights[k]).abs() < 1e-13);
    }
}

#[test]
fn every_combination_is_visited_with_its_probability() {
    let rules = [Rule::binomial(2, 0.5), Rule::certain(7.0), Rule::binomial(1, 0.25)];
    let (mut visits, mut total, mut mean) = (0, 0.0, 0.0);
    for_each_combination(&rules, |values, weight| {
        visits += 1;
        total += weight;
        mean += weight * values[0] * values[1] * values[2];
    });
    assert_eq!(visits, 6);
    assert_relative_eq!(total, 1.0, max_relative = 1e-14);
    assert_relative_eq!(mean, 1.0 * 7.0 * 0.25, max_relative = 1e-14);
}
