//! How divided a body's labour is, in one number.

/// Division index of a body from the soma shares z of its cells:
/// `Var(z) / (zbar (1 - zbar))` with divisor n, in [0, 1]; 0 for cells all alike, 1 for pure germ
/// and pure soma. 0 where the mean share is 0 or 1, and for no cells at all.
#[must_use]
pub fn division_index<I>(shares: I) -> f64
where
    I: IntoIterator,
    I::Item: Into<f64>,
    I::IntoIter: Clone,
{
    let shares = shares.into_iter();
    index_of(shares.map(|z| (z.into(), 1.0)))
}

/// Division index of a body given as classes of like cells, `(soma share, number of cells)`.
#[must_use]
pub fn division_index_of_classes(classes: &[(f64, f64)]) -> f64 {
    index_of(classes.iter().copied())
}

// Two passes: the variance of nearly equal shares must not drown in rounding.
fn index_of(cells: impl Iterator<Item = (f64, f64)> + Clone) -> f64 {
    let (count, total) =
        cells.clone().fold((0.0, 0.0), |(n, sum), (z, weight)| (n + weight, sum + weight * z));
    let mean = total / count;
    let greatest = mean * (1.0 - mean);
    if greatest > 0.0 {
        let squares: f64 = cells.map(|(z, weight)| weight * (z - mean) * (z - mean)).sum();
        (squares / count / greatest).clamp(0.0, 1.0)
    } else {
        // All germ, all soma, or no cells (then the mean is not a number).
        0.0
    }
}

#[cfg(test)]
#[expect(clippy::float_cmp, reason = "values that are exact by construction")]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    #[test]
    fn alike_cells_score_nothing_and_pure_types_one() {
        assert_eq!(division_index([0.3; 7]), 0.0);
        assert_relative_eq!(division_index([0.0, 1.0, 1.0, 1.0]), 1.0, max_relative = 1e-15);
        assert_eq!(division_index([1.0_f64; 4]), 0.0);
        assert_eq!(division_index([0.0_f64; 4]), 0.0);
        assert_eq!(division_index::<[f64; 0]>([]), 0.0);
    }

    /// z = 0.2 and 0.6: mean 0.4, variance 0.04, greatest variance 0.24.
    #[test]
    fn a_hand_computed_body() {
        assert_relative_eq!(division_index([0.2, 0.6]), 1.0 / 6.0, max_relative = 1e-14);
        let classes = [(0.2, 5.0), (0.6, 5.0)];
        assert_relative_eq!(division_index_of_classes(&classes), 1.0 / 6.0, max_relative = 1e-14);
    }

    #[test]
    fn single_precision_cells_are_read_too() {
        assert_relative_eq!(division_index([0.25_f32, 0.75]), 0.25, max_relative = 1e-14);
    }
}
