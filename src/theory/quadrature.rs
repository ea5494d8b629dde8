//! Rules that turn an expectation into a short sum: whole distributions of counts where they are
//! small, Gauss quadrature for them where they are not (Golub & Welsch 1969, Math. Comp. 23:221).

/// Values with weights that sum to 1: `E[f(X)] ~ sum_k weight_k f(node_k)`.
#[derive(Debug, Clone, PartialEq)]
pub struct Rule {
    /// Values, ascending.
    pub nodes: Vec<f64>,
    /// Their weights, all positive.
    pub weights: Vec<f64>,
}

/// Share of the mode's probability below which a value of a count is left out.
const NEGLIGIBLE: f64 = 1e-20;

impl Rule {
    /// The rule of a number that is surely `value`.
    #[must_use]
    pub fn certain(value: f64) -> Self {
        Self { nodes: vec![value], weights: vec![1.0] }
    }

    /// A binomial count of `trials` with success probability `p` in (0, 1), value by value.
    #[must_use]
    pub fn binomial(trials: u64, p: f64) -> Self {
        let n = trials as f64;
        let odds = p / (1.0 - p);
        let mode = ((n + 1.0) * p).floor().min(n);
        Self::from_ratios(mode, |k| (n - k) / (k + 1.0) * odds)
    }

    /// The number of marked items among `draws` from `items`, `marked` of which are marked
    /// (without replacement), value by value. `draws` and `marked` are at most `items`.
    #[must_use]
    pub fn hypergeometric(items: u64, marked: u64, draws: u64) -> Self {
        let (n, m, d) = (items as f64, marked as f64, draws as f64);
        let mode =
            ((d + 1.0) * (m + 1.0) / (n + 2.0)).floor().clamp((d + m - n).max(0.0), m.min(d));
        Self::from_ratios(mode, |k| (m - k) * (d - k) / ((k + 1.0) * (n - m - d + k + 1.0)))
    }

    /// A distribution over integers, from `ratio(k) = P(k + 1) / P(k)`, worked out from the mode
    /// both ways. The support ends where the ratio (or its inverse) is 0.
    fn from_ratios(mode: f64, ratio: impl Fn(f64) -> f64) -> Self {
        let mut below = Vec::new();
        let (mut k, mut weight) = (mode, 1.0);
        loop {
            weight /= ratio(k - 1.0);
            k -= 1.0;
            // Below the support the inverse ratio is negative, infinite or not a number.
            let within = k >= 0.0 && weight > NEGLIGIBLE && weight.is_finite();
            if !within {
                break;
            }
            below.push((k, weight));
        }
        let mut values: Vec<(f64, f64)> = below.into_iter().rev().collect();
        (k, weight) = (mode, 1.0);
        while weight > NEGLIGIBLE {
            values.push((k, weight));
            weight *= ratio(k);
            k += 1.0;
        }
        let total: f64 = values.iter().map(|(_, weight)| weight).sum();
        Self {
            nodes: values.iter().map(|(k, _)| *k).collect(),
            weights: values.iter().map(|(_, weight)| weight / total).collect(),
        }
    }

    /// Gauss rule of `size` nodes for a binomial count (Krawtchouk polynomials): exact for
    /// polynomials of degree up to `2 size - 1`. `trials` need not be whole, but at least
    /// `size - 1`.
    #[must_use]
    pub fn gauss_binomial(trials: f64, p: f64, size: usize) -> Self {
        let recurrence = (0..size).map(|k| {
            let k = k as f64;
            let centre = p * (trials - k) + (1.0 - p) * k;
            (centre, k * p * (1.0 - p) * (trials - k + 1.0))
        });
        gauss(&recurrence.collect::<Vec<_>>())
    }

    /// Gauss rule of `size` nodes with the same first `2 size` moments as this rule (Stieltjes
    /// procedure; Gautschi 2004). The rule itself where it has no more nodes than that.
    #[must_use]
    pub fn thinned(self, size: usize) -> Self {
        if self.nodes.len() <= size {
            return self;
        }
        let mean = |values: &[f64]| -> f64 {
            values.iter().zip(&self.weights).map(|(value, weight)| value * weight).sum()
        };
        let mut recurrence = Vec::with_capacity(size);
        let (mut before, mut current) = (vec![0.0; self.nodes.len()], vec![1.0; self.nodes.len()]);
        let mut norm_before = 1.0;
        for order in 0..size {
            let squares: Vec<f64> = current.iter().map(|value| value * value).collect();
            let norm = mean(&squares);
            let moments: Vec<f64> = squares.iter().zip(&self.nodes).map(|(s, x)| s * x).collect();
            let centre = mean(&moments) / norm;
            let spread = if order == 0 { 0.0 } else { norm / norm_before };
            recurrence.push((centre, spread));
            let next = (0..current.len())
                .map(|i| (self.nodes[i] - centre) * current[i] - spread * before[i])
                .collect();
            before = std::mem::replace(&mut current, next);
            norm_before = norm;
        }
        gauss(&recurrence)
    }
}

/// Nodes and weights from the recurrence `p_{k+1} = (x - a_k) p_k - b_k p_{k-1}` of monic
/// orthogonal polynomials: eigenvalues of the Jacobi matrix, squared first components of its
/// eigenvectors. Pairs are `(a_k, b_k)`, `b_0` not used.
fn gauss(recurrence: &[(f64, f64)]) -> Rule {
    let size = recurrence.len();
    let mut diagonal: Vec<f64> = recurrence.iter().map(|(a, _)| *a).collect();
    let mut off: Vec<f64> = recurrence.iter().skip(1).map(|(_, b)| b.max(0.0).sqrt()).collect();
    off.push(0.0);
    let mut first = vec![0.0; size];
    first[0] = 1.0;
    diagonalise(&mut diagonal, &mut off, &mut first);
    let mut pairs: Vec<(f64, f64)> =
        diagonal.into_iter().zip(first.into_iter().map(|c| c * c)).collect();
    pairs.retain(|(_, weight)| *weight > 0.0);
    pairs.sort_unstable_by(|left, right| left.0.total_cmp(&right.0));
    let total: f64 = pairs.iter().map(|(_, weight)| weight).sum();
    Rule {
        nodes: pairs.iter().map(|(node, _)| *node).collect(),
        weights: pairs.iter().map(|(_, weight)| weight / total).collect(),
    }
}

/// Implicit QL iteration on a symmetric tridiagonal matrix (Martin & Wilkinson 1968), carrying
/// only the eigenvectors' first components along.
fn diagonalise(diagonal: &mut [f64], off: &mut [f64], first: &mut [f64]) {
    const SWEEPS: usize = 60;
    for low in 0..diagonal.len() {
        for _ in 0..SWEEPS {
            let negligible = |m: usize| {
                let scale = diagonal[m].abs() + diagonal[m + 1].abs();
                off[m].abs() <= f64::EPSILON * scale
            };
            let high = (low..diagonal.len() - 1).find(|m| negligible(*m));
            let high = high.unwrap_or(diagonal.len() - 1);
            if high == low {
                break;
            }
            chase(diagonal, off, first, low, high);
        }
    }
}

/// One QL sweep on rows `low..=high`.
fn chase(diagonal: &mut [f64], off: &mut [f64], first: &mut [f64], low: usize, high: usize) {
    let half = (diagonal[low + 1] - diagonal[low]) / (2.0 * off[low]);
    let root = libm::hypot(half, 1.0);
    let shift = half + root.copysign(half);
    let mut bulge = diagonal[high] - diagonal[low] + off[low] / shift;
    let (mut sine, mut cosine, mut carried) = (1.0, 1.0, 0.0);
    for row in (low..high).rev() {
        let f = sine * off[row];
        let b = cosine * off[row];
        let length = libm::hypot(f, bulge);
        off[row + 1] = length;
        if length == 0.0 {
            diagonal[row + 1] -= carried;
            off[high] = 0.0;
            return;
        }
        sine = f / length;
        cosine = bulge / length;
        let base = diagonal[row + 1] - carried;
        let turn = (diagonal[row] - base) * sine + 2.0 * cosine * b;
        carried = sine * turn;
        diagonal[row + 1] = base + carried;
        bulge = cosine * turn - b;
        let upper = first[row + 1];
        first[row + 1] = sine * first[row] + cosine * upper;
        first[row] = cosine * first[row] - sine * upper;
    }
    diagonal[low] -= carried;
    off[low] = bulge;
    off[high] = 0.0;
}

/// Calls `visit(values, probability)` for every combination of the rules' independent numbers.
pub(super) fn for_each_combination(rules: &[Rule], mut visit: impl FnMut(&[f64], f64)) {
    let mut place = vec![0; rules.len()];
    let mut values: Vec<f64> = rules.iter().map(|rule| rule.nodes[0]).collect();
    loop {
        let weight = rules.iter().zip(&place).map(|(rule, k)| rule.weights[*k]).product();
        visit(&values, weight);
        let mut digit = 0;
        loop {
            let Some(rule) = rules.get(digit) else { return };
            place[digit] = (place[digit] + 1) % rule.nodes.len();
            values[digit] = rule.nodes[place[digit]];
            if place[digit] > 0 {
                break;
            }
            digit += 1;
        }
    }
}

#[cfg(test)]
mod tests;
