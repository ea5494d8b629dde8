//! Contacts on a cubic grid of places: who touches whom, and which empty sites the water reaches.

use super::super::graph::{BodyGraph, SITES_AROUND};
use super::super::lattice::NEIGHBOURS;
use super::{BATH, Concentrations, VACANT};

/// A cube of places around a body; the outermost two layers of the lattice in it are always empty.
pub(super) trait Grid {
    /// Places along an edge, odd; the body's centre lies in the middle.
    fn side(&self) -> i32;
    /// The place next to `place` in direction `turn` of [`NEIGHBOURS`].
    fn neighbour(&self, place: u32, turn: usize) -> u32;
    /// The cell at a place, or [`VACANT`].
    fn occupant(&self, place: u32) -> u32;

    fn neighbours(&self, place: u32) -> impl Iterator<Item = u32> {
        (0..SITES_AROUND).map(move |turn| self.neighbour(place, turn))
    }

    fn is_vacant(&self, place: u32) -> bool {
        self.occupant(place) == VACANT
    }
}

/// Where the water around a body reaches, by flood from outside through empty neighbour sites.
#[derive(Debug, Clone, Default)]
pub(super) struct Water {
    /// Places on the faces of the cube, at which the flood turns back.
    faces: Vec<bool>,
    side: i32,
    reached: Vec<bool>,
    rising: Vec<u32>,
}

impl Water {
    /// Floods the grid anew.
    pub(super) fn flood(&mut self, grid: &impl Grid) {
        self.fit(grid.side());
        self.reached.copy_from_slice(&self.faces);
        // A site in the empty layer: coordinates (1 - half, 1 - half, 0), of even sum.
        let start = 1 + self.side * (1 + self.side * (self.side / 2));
        self.rising.clear();
        self.rising.push(start.unsigned_abs());
        self.reached[start.unsigned_abs() as usize] = true;
        while let Some(here) = self.rising.pop() {
            for next in grid.neighbours(here) {
                if !self.reached[next as usize] && grid.is_vacant(next) {
                    self.reached[next as usize] = true;
                    self.rising.push(next);
                }
            }
        }
    }

    fn fit(&mut self, side: i32) {
        if self.side == side {
            return;
        }
        let outermost = |at: i32| at == 0 || at == side - 1;
        self.side = side;
        self.faces.clear();
        for z in 0..side {
            for y in 0..side {
                let edge = outermost(y) || outermost(z);
                self.faces.extend((0..side).map(|x| edge || outermost(x)));
            }
        }
        self.reached = self.faces.clone();
    }

    fn reaches(&self, place: u32) -> bool {
        self.reached[place as usize]
    }
}

/// Adds the cells at `places` to `graph`; `water` says which empty sites are open where not all are.
/// Returns whether all of them are.
pub(super) fn add_cells(
    graph: &mut BodyGraph,
    grid: &impl Grid,
    places: &[u32],
    water: Option<&Water>,
) -> bool {
    let mut all_open = true;
    for &place in places {
        let mut touching = [VACANT; SITES_AROUND];
        let mut cells = 0;
        for next in grid.neighbours(place) {
            let there = grid.occupant(next);
            touching[cells] = there;
            cells += usize::from(there != VACANT);
        }
        let empty = (SITES_AROUND - cells) as u8;
        let open = water.map_or(empty, |water| {
            grid.neighbours(place)
                .map(|next| u8::from(grid.is_vacant(next) && water.reaches(next)))
                .sum()
        });
        all_open &= open == empty;
        graph.push(touching[..cells].iter().copied(), empty, open);
    }
    all_open
}

/// The bath's concentrations at every one of `places` places.
pub(super) fn bath(places: usize) -> Concentrations {
    BATH.map(|outside| vec![outside; places])
}

/// Guesses at the concentrations of a site that is newly filled: means over its neighbour sites, the
/// bath where these are empty.
pub(super) fn guess(at_places: &mut Concentrations, grid: &impl Grid, place: u32) {
    for (at_places, outside) in at_places.iter_mut().zip(BATH) {
        let around = grid
            .neighbours(place)
            .map(|next| if grid.is_vacant(next) { outside } else { at_places[next as usize] });
        at_places[place as usize] = around.sum::<f64>() / SITES_AROUND as f64;
    }
}

/// Writes the concentrations at the cells' places.
pub(super) fn gather(at_places: &Concentrations, places: &[u32], fields: &mut Concentrations) {
    for (field, at_places) in fields.iter_mut().zip(at_places) {
        field.clear();
        field.extend(places.iter().map(|place| at_places[*place as usize]));
    }
}

/// Keeps the cells' concentrations at their places.
pub(super) fn scatter(fields: &Concentrations, places: &[u32], at_places: &mut Concentrations) {
    for (field, at_places) in fields.iter().zip(at_places) {
        for (place, concentration) in places.iter().zip(field) {
            at_places[*place as usize] = *concentration;
        }
    }
}

/// Which of the neighbours of a site are neighbours of each other: bit by direction.
const ADJACENT: [u16; SITES_AROUND] = adjacent();

const fn adjacent() -> [u16; SITES_AROUND] {
    let mut masks = [0; SITES_AROUND];
    let mut one = 0;
    while one < SITES_AROUND {
        let mut other = 0;
        while other < SITES_AROUND {
            if square_between(NEIGHBOURS[one], NEIGHBOURS[other]) == 2 {
                masks[one] |= 1 << other;
            }
            other += 1;
        }
        one += 1;
    }
    masks
}

const fn square_between(one: [i32; 3], other: [i32; 3]) -> i32 {
    let [x, y, z] = [one[0] - other[0], one[1] - other[1], one[2] - other[2]];
    x * x + y * y + z * z
}

/// Whether a cell at `place` may cut empty sites off from each other: its empty neighbour sites do not
/// hang together among themselves. Only then can it have closed a hole.
pub(super) fn may_cut(grid: &impl Grid, place: u32) -> bool {
    let vacant = |turn: usize| u16::from(grid.is_vacant(grid.neighbour(place, turn))) << turn;
    let empty: u16 = (0..SITES_AROUND).map(vacant).sum();
    let mut joined = empty & empty.wrapping_neg();
    loop {
        let reach = (0..SITES_AROUND)
            .filter(|turn| joined >> turn & 1 == 1)
            .fold(joined, |reach, turn| reach | ADJACENT[turn] & empty);
        if reach == joined {
            return joined != empty;
        }
        joined = reach;
    }
}
