//! How a body's cells share what they make.

use std::fmt;

use crate::theory::jet::Scalar;

/// A body's operator of support: linear, no entry negative, and symmetric (what cell i has of a
/// unit made by cell j is what j has of a unit made by i).
pub trait Spread: fmt::Debug + Send + Sync {
    /// Sets every cell's support when the cells put out `output` (0 or more), to about a millionth.
    fn spread(&self, output: &[f64], support: &mut [f64]);

    /// The same to about a billionth or better, whatever it takes; entries of `output` may be
    /// negative.
    fn spread_exactly(&self, output: &[f64], support: &mut [f64]);

    /// Support of every cell when cell `source` puts out 1 and the others nothing.
    fn reach(&self, source: usize, support: &mut [f64]) {
        let mut output = vec![0.0; support.len()];
        output[source] = 1.0;
        self.spread(&output, support);
    }
}

/// How exactly support is worked out.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Care {
    /// To about a millionth.
    Quick,
    /// To about a billionth or better.
    Exact,
}

/// Support of every cell for outputs that may be jets: the operator is linear, so it acts on
/// values, slopes and curvatures alike.
pub(super) fn supports<S: Scalar>(spread: &dyn Spread, output: &[S], care: Care) -> Vec<S> {
    let cells = output.len();
    let mut parts = vec![vec![0.0; cells]; S::PARTS];
    let mut made = vec![0.0; cells];
    for (which, support) in parts.iter_mut().enumerate() {
        for (made, output) in made.iter_mut().zip(output) {
            *made = output.part(which);
        }
        if S::PARTS > 1 || care == Care::Exact {
            spread.spread_exactly(&made, support);
        } else {
            spread.spread(&made, support);
        }
    }
    (0..cells).map(|cell| S::of_parts(|which| parts[which][cell])).collect()
}
