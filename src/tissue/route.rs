//! Shortest lattice paths, straight as the lattice allows, looked up by displacement.
//!
//! With `a >= b >= c` the absolute coordinate differences in falling order, a step changes two
//! coordinates by one, so the distance in steps is `max(a, (a + b + c) / 2)`.

/// Kinds of steps that a route is made of, as differences along its longest, middle and shortest leg.
const KINDS: [[i32; 3]; 5] = [[1, 1, 0], [1, 0, 1], [0, 1, 1], [1, -1, 0], [1, 0, -1]];

/// Routes are walked this many steps at a time: nearly all pushes in bodies of up to a hundred cells
/// take one pace, which the processor can foresee.
pub(super) const PACE: usize = 4;

/// The kind of step that stays where it is.
const LINGER: u8 = 7;

/// Grid differences of the kinds of steps; padded to a power of two so that look-ups need no check.
pub(super) type StepTable = [i32; 8];

/// What the kinds of steps mean on a grid, for each order of the axes by their legs and each
/// direction along them.
#[derive(Debug, Clone)]
pub(super) struct Compass {
    tables: [StepTable; 64],
}

impl Compass {
    /// The compass of a grid whose places differ by `strides` per unit step along x, y and z.
    pub(super) fn on_grid(strides: [i32; 3]) -> Self {
        let tables = std::array::from_fn(|index| {
            let (order, turns) = (index >> 3, index & 7);
            let [x_to_y, y_to_z, x_to_z] = [0, 1, 2].map(|bit| order >> bit & 1);
            // How many axes have a longer leg; orders that contradict themselves are never asked for.
            let ranks = [2 - x_to_y - x_to_z, x_to_y + 1 - y_to_z, y_to_z + x_to_z];
            let mut units = [0; 3];
            for axis in 0..3 {
                let backwards = turns >> axis & 1 == 1;
                units[ranks[axis]] = if backwards { -strides[axis] } else { strides[axis] };
            }
            let [a, b, c] = units;
            [a + b, a + c, b + c, a - b, a - c, 0, 0, 0]
        });
        Self { tables }
    }

    /// The step table where bits 0, 1 and 2 of `order` say that the leg along x is at least as long as
    /// that along y, y as z, and x as z, and bits 0, 1 and 2 of `turns` that x, y and z fall.
    #[inline]
    pub(super) const fn steps(&self, order: usize, turns: usize) -> &StepTable {
        &self.tables[(order << 3 | turns) & 63]
    }
}

/// Step sequences for every displacement between two sites of a body.
#[derive(Debug, Clone)]
pub(super) struct Routes {
    paces: Vec<[u8; PACE]>,
    /// Start and end of each displacement's paces, by the displacement's rank.
    bounds: Vec<[u32; 2]>,
    /// Rank of the first displacement of each longest leg.
    first_ranks: Vec<usize>,
}

impl Routes {
    /// Routes between sites whose coordinates differ by at most `span`.
    pub(super) fn up_to(span: usize) -> Self {
        let (mut paces, mut bounds, mut first_ranks) = (Vec::new(), Vec::new(), Vec::new());
        for long in 0..=span {
            first_ranks.push(bounds.len());
            for middle in 0..=long {
                for short in 0..=middle {
                    let start = paces.len() as u32;
                    if (long + middle + short) % 2 == 0 {
                        let steps = straightest([long, middle, short].map(|leg| leg as i32));
                        paces.extend(in_paces(&steps));
                    }
                    bounds.push([start, paces.len() as u32]);
                }
            }
        }
        Self { paces, bounds, first_ranks }
    }

    /// Kinds of steps for differences `long >= middle >= short`, in whole paces: routes linger at
    /// their start as long as it takes.
    #[inline]
    pub(super) fn between(&self, [long, middle, short]: [usize; 3]) -> &[[u8; PACE]] {
        let rank = self.first_ranks[long] + middle * (middle + 1) / 2 + short;
        let [start, end] = self.bounds[rank];
        &self.paces[start as usize..end as usize]
    }
}

/// The same steps in whole paces, with as much lingering before them as that takes.
fn in_paces(steps: &[u8]) -> Vec<[u8; PACE]> {
    let lingering = steps.len().next_multiple_of(PACE) - steps.len();
    let kinds: Vec<u8> =
        std::iter::repeat_n(LINGER, lingering).chain(steps.iter().copied()).collect();
    kinds.as_chunks().0.to_vec()
}

/// Steps of the shortest path that keeps closest to the straight line.
///
/// Among equally close sites it takes the one that lags on the shorter legs: where these lead
/// outwards, that keeps the path inside the body.
fn straightest(goal: [i32; 3]) -> Vec<u8> {
    let length = steps_apart([0; 3], goal);
    let mut here = [0; 3];
    let mut steps = Vec::new();
    for taken in 1..=length {
        let share = f64::from(taken) / f64::from(length);
        let nearest = KINDS
            .iter()
            .enumerate()
            .map(|(kind, step)| (kind, [0, 1, 2].map(|leg| here[leg] + step[leg])))
            .filter(|(_, site)| steps_apart(*site, goal) == length - taken)
            .map(|(kind, site)| {
                let off_line: f64 = site
                    .iter()
                    .zip(goal)
                    .map(|(at, end)| (f64::from(*at) - share * f64::from(end)).powi(2))
                    .sum();
                (off_line + LAG_WEIGHT * f64::from(site[1] + site[2]), kind, site)
            })
            .min_by(|one, other| one.0.total_cmp(&other.0));
        if let Some((_, kind, site)) = nearest {
            steps.push(kind as u8);
            here = site;
        }
    }
    steps
}

/// How much lagging on the shorter legs counts beside the distance from the line.
const LAG_WEIGHT: f64 = 1e-3;

/// Distance in steps: `max(a, b, c, (a + b + c) / 2)` of the absolute differences.
fn steps_apart(from: [i32; 3], to: [i32; 3]) -> i32 {
    let legs = [0, 1, 2].map(|leg| (from[leg] - to[leg]).abs());
    let half: i32 = legs.iter().sum::<i32>() / 2;
    legs.into_iter().fold(half, i32::max)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_route_is_as_long_as_the_lattice_distance_and_ends_where_it_should() {
        let routes = Routes::up_to(16);
        for long in 0..=16_usize {
            for middle in 0..=long {
                for short in (0..=middle).filter(|short| (long + middle + short) % 2 == 0) {
                    let kinds = routes.between([long, middle, short]).as_flattened();
                    let first = kinds.iter().position(|kind| *kind != LINGER);
                    let steps = &kinds[first.unwrap_or(kinds.len())..];
                    assert!(kinds.len() < steps.len() + PACE);
                    assert_eq!(steps.len(), long.max((long + middle + short) / 2));
                    let end = steps.iter().fold([0; 3], |end: [i32; 3], &kind| {
                        [0, 1, 2].map(|leg| end[leg] + KINDS[usize::from(kind)][leg])
                    });
                    assert_eq!(end, [long as i32, middle as i32, short as i32]);
                }
            }
        }
    }
}
