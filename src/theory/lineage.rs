//! Labels that synchronous division rounds leave in an adult body.

use super::body::{CellKind, Composition, Compositions};
use super::quadrature::Rule;

/// Compositions kept of a body whose last round is partial; more are thinned to a Gauss rule.
const COMPOSITIONS: usize = 9;

/// Division rounds from `propagule_cells` to `adult_cells`: whole ones, and how many mothers
/// divide in the last, partial one (0 where there is none). Both numbers are at least 1.
#[must_use]
pub const fn rounds(adult_cells: u64, propagule_cells: u64) -> (u32, u64) {
    let (mut cells, mut whole) = (propagule_cells, 0);
    while cells <= adult_cells / 2 {
        cells *= 2;
        whole += 1;
    }
    (whole, adult_cells.saturating_sub(cells))
}

/// Labels of an adult body, all cells at the surface, with their probabilities.
///
/// In a whole round every cell is relabelled: half mothers (-1), half daughters (+1). In a last,
/// partial round the mothers are a uniformly random subset, so that the number of undivided cells
/// that keep +1 is hypergeometric. Founders that never divide keep 0.
#[must_use]
pub fn label_compositions(adult_cells: u64, propagule_cells: u64) -> Compositions {
    let (whole, dividing) = rounds(adult_cells, propagule_cells);
    let before = adult_cells.saturating_sub(dividing);
    let undivided = before.saturating_sub(dividing);
    let relabelled = dividing as f64;
    let body = |mothers, founders, daughters| {
        let kind = |label| CellKind { label, exposed: true };
        Composition::of([(kind(-1), mothers), (kind(0), founders), (kind(1), daughters)])
    };
    if whole == 0 {
        return vec![(1.0, body(relabelled, undivided as f64, relabelled))];
    }
    let kept = Rule::hypergeometric(before, before / 2, undivided).thinned(COMPOSITIONS);
    let compose = |(daughters, weight): (f64, f64)| {
        let mothers = undivided as f64 - daughters;
        (weight, body(relabelled + mothers, 0.0, relabelled + daughters))
    };
    kept.nodes.into_iter().zip(kept.weights).map(compose).collect()
}

#[cfg(test)]
#[expect(clippy::float_cmp, reason = "values that are exact by construction")]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    #[test]
    fn rounds_double_the_body() {
        assert_eq!(rounds(64, 1), (6, 0));
        assert_eq!(rounds(65, 1), (6, 1));
        assert_eq!(rounds(127, 1), (6, 63));
        assert_eq!(rounds(5, 4), (0, 1));
        assert_eq!(rounds(12, 3), (2, 0));
        assert_eq!(rounds(1, 1), (0, 0));
    }

    #[test]
    fn whole_rounds_leave_half_mothers_and_half_daughters() {
        let bodies = label_compositions(64, 1);
        assert_eq!(bodies.len(), 1);
        let counts: Vec<f64> = bodies[0].1.classes().iter().map(|(_, count)| *count).collect();
        assert_eq!(counts, [32.0, 32.0]);
        assert_eq!(label_compositions(3, 3), [(1.0, Composition::uniform(3))]);
    }

    /// n = 7 from 1: 4 cells with labels -1 +1 -1 +1, 3 of them divide. Enumerating the 4
    /// subsets of size 3: the undivided cell is a daughter in 2 of 4.
    #[test]
    fn a_partial_round_is_enumerated() {
        let bodies = label_compositions(7, 1);
        let found: Vec<(f64, Vec<f64>)> = bodies
            .iter()
            .map(|(weight, body)| (*weight, body.classes().iter().map(|class| class.1).collect()))
            .collect();
        assert_eq!(found, [(0.5, vec![4.0, 3.0]), (0.5, vec![3.0, 4.0])]);
    }

    /// Every subset of mothers of n = 13 (8 cells, 5 divide) counted one by one.
    #[test]
    fn a_partial_round_agrees_with_every_subset_of_mothers() {
        let bodies = label_compositions(13, 1);
        for daughters in 0..=3_u32 {
            let subsets = (0..256_u32).filter(|mothers| mothers.count_ones() == 5);
            let like = subsets.filter(|mothers| (!mothers & 0b0000_1111).count_ones() == daughters);
            let share = like.count() as f64 / 56.0;
            let found = bodies.iter().find(|(_, body)| {
                body.classes().last().is_some_and(|class| class.1 == 5.0 + f64::from(daughters))
            });
            assert_relative_eq!(found.expect("possible").0, share, max_relative = 1e-14);
        }
    }

    #[test]
    fn a_large_partial_body_is_thinned_to_the_same_moments() {
        let bodies = label_compositions(3000, 1);
        assert_eq!(bodies.len(), 9);
        let mean: f64 =
            bodies.iter().map(|(w, body)| w * body.mean(|kind| kind.label.into())).sum();
        assert!(mean.abs() < 1e-12);
        for (_, body) in &bodies {
            assert_relative_eq!(body.cells(), 3000.0, max_relative = 1e-13);
        }
    }
}
