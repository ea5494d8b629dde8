//! Deterministic maximisation within bounds, without derivatives.

/// A place with its value.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Summit {
    pub(super) at: Vec<f64>,
    pub(super) value: f64,
}

/// Bounds of each coordinate, `(lower, upper)`.
pub(super) type Bounds = [(f64, f64)];

/// A function to be maximised; it returns -inf, never NaN, where it has no value.
pub(super) trait Height: Fn(&[f64]) -> f64 {}
impl<F: Fn(&[f64]) -> f64> Height for F {}

/// Climbs from `start` with a simplex whose edges are `scale` times the bounds' width
/// (Nelder & Mead 1965, Comput. J. 7:308), every point being moved into the bounds. Ends after
/// `patience` evaluations per coordinate, or when the simplex is flat and small.
pub(super) fn climb(
    height: &impl Height,
    bounds: &Bounds,
    start: &[f64],
    scale: f64,
    patience: usize,
) -> Summit {
    let mut simplex = first_simplex(height, bounds, start, scale);
    let worst = simplex.len() - 1;
    let mut left = patience * bounds.len();
    while left > 0 && !has_settled(&simplex, bounds) {
        simplex.sort_by(|a, b| b.value.total_cmp(&a.value));
        let centre = centroid(&simplex[..worst]);
        let probe = |reach: f64| {
            let far = &simplex[worst].at;
            let at = centre.iter().zip(far).map(|(c, w)| c + reach * (c - w)).collect();
            measured(height, bounds, at)
        };
        let reflected = probe(1.0);
        left = left.saturating_sub(2);
        let better = if reflected.value > simplex[0].value {
            let expanded = probe(2.0);
            Some(if expanded.value > reflected.value { expanded } else { reflected })
        } else if reflected.value > simplex[worst - 1].value {
            Some(reflected)
        } else {
            let outside = reflected.value > simplex[worst].value;
            let contracted = probe(if outside { 0.5 } else { -0.5 });
            let bar = if outside { reflected.value } else { simplex[worst].value };
            (contracted.value > bar).then_some(contracted)
        };
        if let Some(summit) = better {
            simplex[worst] = summit;
        } else {
            shrink(height, bounds, &mut simplex);
            left = left.saturating_sub(worst);
        }
    }
    simplex.sort_by(|a, b| b.value.total_cmp(&a.value));
    simplex.swap_remove(0)
}

/// Refines a summit: tries each coordinate at its bounds, then steps along the axes, halving the
/// step from `scale` times the bounds' width down to 1e-9 of it. Ends after `patience` evaluations
/// per coordinate at the latest (on a bent ridge steps along axes only creep).
pub(super) fn polish(
    height: &impl Height,
    bounds: &Bounds,
    mut best: Summit,
    scale: f64,
    patience: usize,
) -> Summit {
    for (axis, (lower, upper)) in bounds.iter().enumerate() {
        for edge in [*lower, *upper] {
            try_at(height, &mut best, axis, edge);
        }
    }
    let mut step = scale;
    let mut left = patience * bounds.len();
    while step > 1e-9 && left > 0 {
        let mut moved = false;
        for (axis, (lower, upper)) in bounds.iter().enumerate() {
            for direction in [step, -step] {
                let to = best.at[axis] + direction * (upper - lower);
                moved |= try_at(height, &mut best, axis, to.clamp(*lower, *upper));
                left = left.saturating_sub(1);
            }
        }
        if !moved {
            step *= 0.5;
        }
    }
    best
}

/// Moves the summit along an axis if it is higher there by more than rounding.
fn try_at(height: &impl Height, best: &mut Summit, axis: usize, to: f64) -> bool {
    let mut at = best.at.clone();
    at[axis] = to;
    let value = height(&at);
    let higher = value > best.value + 1e-14 * (1.0 + best.value.abs());
    if higher {
        *best = Summit { at, value };
    }
    higher
}

fn measured(height: &impl Height, bounds: &Bounds, mut at: Vec<f64>) -> Summit {
    for (x, (lower, upper)) in at.iter_mut().zip(bounds) {
        *x = x.clamp(*lower, *upper);
    }
    let value = height(&at);
    Summit { at, value }
}

fn first_simplex(height: &impl Height, bounds: &Bounds, start: &[f64], scale: f64) -> Vec<Summit> {
    let mut simplex = vec![measured(height, bounds, start.to_vec())];
    for (axis, (lower, upper)) in bounds.iter().enumerate() {
        let step = scale * (upper - lower);
        let mut at = start.to_vec();
        // Away from the bound, so that the simplex does not start flat against it.
        at[axis] += if at[axis] + step > *upper { -step } else { step };
        simplex.push(measured(height, bounds, at));
    }
    simplex
}

fn centroid(points: &[Summit]) -> Vec<f64> {
    let mut centre = vec![0.0; points[0].at.len()];
    for point in points {
        for (sum, x) in centre.iter_mut().zip(&point.at) {
            *sum += x / points.len() as f64;
        }
    }
    centre
}

fn shrink(height: &impl Height, bounds: &Bounds, simplex: &mut [Summit]) {
    let best = simplex[0].at.clone();
    for point in &mut simplex[1..] {
        let at = point.at.iter().zip(&best).map(|(x, b)| f64::midpoint(*x, *b)).collect();
        *point = measured(height, bounds, at);
    }
}

fn has_settled(simplex: &[Summit], bounds: &Bounds) -> bool {
    let first = &simplex[0];
    let flat = simplex.iter().all(|p| (p.value - first.value).abs() <= 1e-15 * first.value.abs());
    let small = simplex.iter().all(|p| {
        let gaps = p.at.iter().zip(&first.at).zip(bounds);
        gaps.into_iter().all(|((x, y), (lower, upper))| (x - y).abs() <= 1e-8 * (upper - lower))
    });
    small || (flat && first.value.is_finite())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_bent_valley_is_climbed_to_its_top() {
        // Rosenbrock 1960, upside down; its top is at (1, 1).
        let height = |x: &[f64]| {
            -(1.0 - x[0]) * (1.0 - x[0]) - 100.0 * (x[1] - x[0] * x[0]) * (x[1] - x[0] * x[0])
        };
        let bounds = [(-5.0, 5.0), (-5.0, 5.0)];
        let top = climb(&height, &bounds, &[-1.2, 1.0], 0.1, 400);
        let top = polish(&height, &bounds, top, 1e-3, 200);
        assert!((top.at[0] - 1.0).abs() < 1e-6 && (top.at[1] - 1.0).abs() < 1e-6, "{top:?}");
    }

    #[test]
    fn a_top_at_the_bound_is_reached_exactly() {
        let height = |x: &[f64]| x[0] - (x[1] - 0.3) * (x[1] - 0.3);
        let bounds = [(-1.0, 2.0), (-4.0, 4.0)];
        let top =
            polish(&height, &bounds, climb(&height, &bounds, &[0.0, 0.0], 0.1, 200), 1e-3, 200);
        assert_eq!(top.at[0].total_cmp(&2.0), std::cmp::Ordering::Equal);
        assert!((top.at[1] - 0.3).abs() < 1e-7);
    }
}
