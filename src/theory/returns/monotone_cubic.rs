//! Monotone piecewise cubic interpolation (Fritsch & Carlson 1980, SIAM J. Numer. Anal. 17:238).

use crate::theory::jet::Jet;

/// A non-decreasing curve through given points, once continuously differentiable.
#[derive(Debug, Clone, PartialEq)]
pub struct MonotoneCubic {
    knots: Vec<Knot>,
}

#[derive(Debug, Clone, Copy, PartialEq)]
struct Knot {
    x: f64,
    y: f64,
    slope: f64,
}

/// Why points do not make a return curve. Points are counted from 1.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum TableError {
    /// Fewer than two points.
    #[error("`points` has {count} point(s); a curve needs at least 2")]
    TooFew {
        /// Points given.
        count: usize,
    },
    /// A coordinate is infinite or not a number.
    #[error("point {point} of `points` is [{x}, {y}]; coordinates must be finite")]
    NotFinite {
        /// The point's place.
        point: usize,
        /// Its investment.
        x: f64,
        /// Its return.
        y: f64,
    },
    /// The curve does not start where nothing is invested.
    #[error("`points` starts at x = {x}; the first point must be at x = 0")]
    Start {
        /// Investment of the first point.
        x: f64,
    },
    /// Investments do not increase.
    #[error("point {point} of `points` is at x = {x}; x must increase from point to point")]
    Order {
        /// The point's place.
        point: usize,
        /// Its investment.
        x: f64,
    },
    /// A return is negative.
    #[error("point {point} of `points` has y = {y}; returns must be 0 or more")]
    Negative {
        /// The point's place.
        point: usize,
        /// Its return.
        y: f64,
    },
    /// Returns decrease.
    #[error("point {point} of `points` has y = {y}, less than the point before; y must not fall")]
    Falling {
        /// The point's place.
        point: usize,
        /// Its return.
        y: f64,
    },
}

impl MonotoneCubic {
    /// The curve through `points`, each `[investment, return]`; equal returns (flat stretches,
    /// even a wholly flat curve) are allowed.
    ///
    /// # Errors
    /// [`TableError`] unless there are two points or more, finite, the first at x = 0, x strictly
    /// increasing, y at least 0 and never falling.
    pub fn through(points: &[[f64; 2]]) -> Result<Self, TableError> {
        if points.len() < 2 {
            return Err(TableError::TooFew { count: points.len() });
        }
        for (index, &[x, y]) in points.iter().enumerate() {
            check_point(index, x, y, index.checked_sub(1).map(|before| points[before]))?;
        }
        let slopes = monotone_slopes(points);
        let knots = points.iter().zip(slopes).map(|(&[x, y], slope)| Knot { x, y, slope });
        Ok(Self { knots: knots.collect() })
    }

    /// The points the curve goes through.
    pub fn points(&self) -> impl Iterator<Item = [f64; 2]> {
        self.knots.iter().map(|knot| [knot.x, knot.y])
    }

    /// The curve at `x` >= 0; beyond the last point it goes on as a straight line.
    #[must_use]
    pub fn value(&self, x: f64) -> f64 {
        self.jet(x).value
    }

    /// The curve at `x` >= 0 with its first two derivatives.
    #[must_use]
    pub fn jet(&self, x: f64) -> Jet {
        let next = self.knots.partition_point(|knot| knot.x <= x).max(1);
        let left = self.knots[next - 1];
        match self.knots.get(next) {
            Some(right) => hermite(left, *right, x),
            None => {
                Jet { value: left.y + left.slope * (x - left.x), slope: left.slope, curvature: 0.0 }
            }
        }
    }
}

fn check_point(index: usize, x: f64, y: f64, before: Option<[f64; 2]>) -> Result<(), TableError> {
    let point = index + 1;
    if !x.is_finite() || !y.is_finite() {
        return Err(TableError::NotFinite { point, x, y });
    }
    if y < 0.0 {
        return Err(TableError::Negative { point, y });
    }
    match before {
        None if x != 0.0 => Err(TableError::Start { x }),
        Some([x_before, _]) if x <= x_before => Err(TableError::Order { point, x }),
        Some([_, y_before]) if y < y_before => Err(TableError::Falling { point, y }),
        _ => Ok(()),
    }
}

/// Slopes at the points: means of the neighbouring secants, shrunk into the circle of radius 3
/// (in units of the secant) in which a cubic is sure to be monotone.
fn monotone_slopes(points: &[[f64; 2]]) -> Vec<f64> {
    let secants: Vec<f64> =
        points.windows(2).map(|w| (w[1][1] - w[0][1]) / (w[1][0] - w[0][0])).collect();
    let mut slopes: Vec<f64> = Vec::with_capacity(points.len());
    slopes.push(secants[0]);
    slopes.extend(secants.windows(2).map(|pair| f64::midpoint(pair[0], pair[1])));
    slopes.push(secants[secants.len() - 1]);
    for (k, &secant) in secants.iter().enumerate() {
        if secant == 0.0 {
            (slopes[k], slopes[k + 1]) = (0.0, 0.0);
            continue;
        }
        let length = libm::hypot(slopes[k] / secant, slopes[k + 1] / secant);
        if length > 3.0 {
            slopes[k] *= 3.0 / length;
            slopes[k + 1] *= 3.0 / length;
        }
    }
    slopes
}

/// The cubic with the given values and slopes at both ends.
fn hermite(left: Knot, right: Knot, x: f64) -> Jet {
    let h = right.x - left.x;
    let t = (x - left.x) / h;
    let secant = (right.y - left.y) / h;
    // y = y0 + h t (s0 + t (c2 + t c3))
    let c3 = left.slope + right.slope - 2.0 * secant;
    let c2 = 3.0 * secant - 2.0 * left.slope - right.slope;
    Jet {
        value: left.y + h * t * (left.slope + t * (c2 + t * c3)),
        slope: left.slope + t * (2.0 * c2 + 3.0 * t * c3),
        curvature: (2.0 * c2 + 6.0 * t * c3) / h,
    }
}
