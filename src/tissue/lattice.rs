//! The face-centred cubic lattice around a body's centre.
//!
//! Sites are integer triples with an even sum; a site's 12 nearest neighbours differ by +-1 in two
//! coordinates, so that the nearest-neighbour distance d is `sqrt(2)` coordinate units and
//! `distance^2 = (x^2 + y^2 + z^2) / 2` in units of d^2 (Conway & Sloane, Sphere Packings, Lattices
//! and Groups).

use std::f64::consts::{PI, SQRT_2};

/// Coordinate differences of the 12 nearest neighbours of a site.
pub const NEIGHBOURS: [[i32; 3]; 12] = [
    [1, 1, 0],
    [1, -1, 0],
    [-1, 1, 0],
    [-1, -1, 0],
    [1, 0, 1],
    [1, 0, -1],
    [-1, 0, 1],
    [-1, 0, -1],
    [0, 1, 1],
    [0, 1, -1],
    [0, -1, 1],
    [0, -1, -1],
];

/// Sites kept free around the largest body, so that a neighbour of a cell is always on the grid.
const MARGIN: i32 = 2;

/// The lattice sites that a body of limited size can touch, each known by its place on a cubic grid.
#[derive(Debug, Clone)]
pub struct Lattice {
    side: i32,
    /// Places in order of distance from the centre, whole shells only.
    order: Vec<u32>,
    /// Ends of the shells (sites of equal distance) within `order`.
    shell_ends: Vec<usize>,
    coordinates: Vec<[i8; 3]>,
    neighbour_steps: [i32; 12],
}

impl Lattice {
    /// The lattice around the centre of a body of up to `cells` >= 1 cells.
    ///
    /// # Panics
    /// When the body is so large that a coordinate passes 127 (over 4 million cells).
    #[must_use]
    pub fn around(cells: usize) -> Self {
        let (shells, reach) = whole_shells(cells.max(1));
        let side = 2 * (reach + MARGIN) + 1;
        assert!(reach + MARGIN <= i32::from(i8::MAX), "a body of {cells} cells is off the grid");
        let place = |[x, y, z]: [i32; 3]| {
            let half = reach + MARGIN;
            ((x + half) + side * ((y + half) + side * (z + half))).unsigned_abs()
        };
        let order = shells.iter().flatten().map(|site| place(*site)).collect();
        let shell_ends = shells
            .iter()
            .scan(0, |end, shell| {
                *end += shell.len();
                Some(*end)
            })
            .collect();
        Self {
            side,
            order,
            shell_ends,
            coordinates: grid_coordinates(reach + MARGIN),
            neighbour_steps: NEIGHBOURS.map(|[x, y, z]| x + side * (y + side * z)),
        }
    }

    /// Places in order of distance from the centre; the sites of one shell are in lexical order.
    #[must_use]
    pub fn order(&self) -> &[u32] {
        &self.order
    }

    /// Ends of the shells of equal distance within [`Self::order`].
    #[must_use]
    pub fn shell_ends(&self) -> &[usize] {
        &self.shell_ends
    }

    /// Number of places of the grid, occupied or not.
    #[must_use]
    pub fn grid_len(&self) -> usize {
        self.coordinates.len()
    }

    /// Lattice coordinates of a place (coordinate units of `d / sqrt(2)`).
    #[must_use]
    pub fn coordinates(&self, place: u32) -> [i8; 3] {
        self.coordinates[place as usize]
    }

    /// Position of a place relative to the body's centre, um.
    #[must_use]
    pub fn position_um(&self, place: u32, cell_diameter_um: f64) -> [f64; 3] {
        site_position_um(self.coordinates(place).map(i32::from), cell_diameter_um)
    }

    /// The 12 places next to `place`.
    pub fn neighbours(&self, place: u32) -> impl Iterator<Item = u32> {
        self.neighbour_steps.iter().map(move |step| place.wrapping_add_signed(*step))
    }

    /// The neighbour of `place` in direction `turn` of [`NEIGHBOURS`].
    #[must_use]
    pub fn neighbour(&self, place: u32, turn: usize) -> u32 {
        place.wrapping_add_signed(self.neighbour_steps[turn])
    }

    /// Distance of two places in steps from neighbour to neighbour, were the lattice empty.
    pub(super) fn steps_between(&self, from: u32, to: u32) -> i32 {
        let (a, b) = (self.coordinates(from), self.coordinates(to));
        let legs = [0, 1, 2].map(|axis| (i32::from(a[axis]) - i32::from(b[axis])).abs());
        let total: i32 = legs.iter().sum();
        legs.into_iter().fold(total / 2, i32::max)
    }

    /// The largest difference of a coordinate between two sites of a body.
    pub(super) const fn span(&self) -> usize {
        (self.side - 1 - 2 * MARGIN).unsigned_abs() as usize
    }

    /// Places along an edge of the grid.
    pub(super) const fn side(&self) -> i32 {
        self.side
    }

    /// Difference of grid places per unit step along each axis.
    pub(super) const fn strides(&self) -> [i32; 3] {
        [1, self.side, self.side * self.side]
    }
}

/// Whole shells around the centre until they hold `cells` sites, and the largest coordinate in them.
fn whole_shells(cells: usize) -> (Vec<Vec<[i32; 3]>>, i32) {
    let mut reach = 1;
    loop {
        // Within a cube of half-width `reach`, shells up to distance^2 = reach^2 are complete.
        let mut sites = Vec::new();
        for x in -reach..=reach {
            for y in -reach..=reach {
                for z in -reach..=reach {
                    let square = x * x + y * y + z * z;
                    if (x + y + z) % 2 == 0 && square <= reach * reach {
                        sites.push((square, [x, y, z]));
                    }
                }
            }
        }
        if sites.len() >= cells {
            sites.sort_unstable();
            return cut_into_shells(&sites, cells);
        }
        reach += 1;
    }
}

fn cut_into_shells(sites: &[(i32, [i32; 3])], cells: usize) -> (Vec<Vec<[i32; 3]>>, i32) {
    let mut shells: Vec<Vec<[i32; 3]>> = Vec::new();
    let mut held = 0;
    for shell in sites.chunk_by(|a, b| a.0 == b.0) {
        if held >= cells {
            break;
        }
        held += shell.len();
        shells.push(shell.iter().map(|(_, site)| *site).collect());
    }
    let reach = shells.iter().flatten().flatten().map(|c| c.abs()).max().unwrap_or(0);
    (shells, reach)
}

fn grid_coordinates(half: i32) -> Vec<[i8; 3]> {
    let axis = || (-half..=half).map(|c| i8::try_from(c).unwrap_or(i8::MAX));
    axis().flat_map(|z| axis().flat_map(move |y| axis().map(move |x| [x, y, z]))).collect()
}

/// Position of the site with those coordinates, um; a coordinate unit is `d / sqrt(2)`.
#[must_use]
pub fn site_position_um(site: [i32; 3], cell_diameter_um: f64) -> [f64; 3] {
    site.map(|c| f64::from(c) * cell_diameter_um / SQRT_2)
}

/// Radius of the ball whose volume is that of `cells` lattice sites, um.
///
/// A site takes `d^3 / sqrt(2)`, so `R = (3 n d^3 / (4 pi sqrt(2)))^(1/3)`.
#[must_use]
pub fn compact_radius_um(cells: usize, cell_diameter_um: f64) -> f64 {
    libm::cbrt(3.0 * cells as f64 / (4.0 * PI * SQRT_2)) * cell_diameter_um
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_site_of_a_body_has_its_twelve_neighbours_at_distance_one() {
        let lattice = Lattice::around(200);
        for &place in lattice.order() {
            let here = lattice.coordinates(place).map(i32::from);
            let mut count = 0;
            for next in lattice.neighbours(place) {
                let there = lattice.coordinates(next).map(i32::from);
                let square: i32 = here.iter().zip(there).map(|(a, b)| (a - b) * (a - b)).sum();
                assert_eq!(square, 2);
                count += 1;
            }
            assert_eq!(count, 12);
        }
    }

    #[test]
    fn a_ball_of_one_cell_volume_is_packed_to_pi_over_sqrt_18() {
        // Volume of a cell's own ball over the volume of its site: pi / sqrt(18).
        let site_radius = compact_radius_um(1, 10.0);
        let packing = (5.0 / site_radius).powi(3);
        approx::assert_relative_eq!(packing, PI / 18f64.sqrt(), max_relative = 1e-14);
    }
}
