//! A tree: a daughter on an empty neighbour site of its mother, drawn at random; nobody is pushed.
//!
//! Trees are not compact, so the grid grows with them.

use rand::Rng;

use super::super::graph::{BodyGraph, SITES_AROUND};
use super::super::lattice::NEIGHBOURS;
use super::contacts::{self, Grid, Water};
use super::{Concentrations, VACANT, pick};

/// Half the edge of the grid to begin with.
const FIRST_HALF: i32 = 8;
/// Layers of places that stay empty around a body.
const MARGIN: i32 = 2;

/// Places of a growing cube.
#[derive(Debug, Clone)]
struct Cube {
    half: i32,
    steps: [i32; SITES_AROUND],
    occupant: Vec<u32>,
}

impl Cube {
    fn of(half: i32) -> Self {
        let side = 2 * half + 1;
        let places = side.unsigned_abs() as usize;
        Self {
            half,
            steps: NEIGHBOURS.map(|[x, y, z]| x + side * (y + side * z)),
            occupant: vec![VACANT; places * places * places],
        }
    }

    fn place(&self, [x, y, z]: [i32; 3]) -> u32 {
        let side = self.side();
        ((x + self.half) + side * ((y + self.half) + side * (z + self.half))).unsigned_abs()
    }

    fn coordinates(&self, place: u32) -> [i32; 3] {
        let (place, side) = (place as i32, self.side());
        [place % side, place / side % side, place / (side * side)].map(|at| at - self.half)
    }
}

impl Grid for Cube {
    fn side(&self) -> i32 {
        2 * self.half + 1
    }

    fn neighbour(&self, place: u32, turn: usize) -> u32 {
        place.wrapping_add_signed(self.steps[turn])
    }

    fn occupant(&self, place: u32) -> u32 {
        self.occupant[place as usize]
    }
}

#[derive(Debug, Clone)]
pub(in crate::tissue) struct Tree {
    cube: Cube,
    places: Vec<u32>,
    at_places: Concentrations,
    water: Water,
    /// Whether there may be empty sites that the water does not reach.
    holes: bool,
}

impl Default for Tree {
    fn default() -> Self {
        let cube = Cube::of(FIRST_HALF);
        let at_places = contacts::bath(cube.occupant.len());
        Self { cube, places: Vec::new(), at_places, water: Water::default(), holes: false }
    }
}

impl Tree {
    /// Founders beyond the first each lie next to a random earlier one.
    pub(super) fn found(&mut self, cells: usize, rng: &mut impl Rng) {
        for place in self.places.drain(..) {
            self.cube.occupant[place as usize] = VACANT;
        }
        self.holes = false;
        self.settle(self.cube.place([0; 3]));
        while self.places.len() < cells {
            let mother = pick(self.places.len(), rng) as u32;
            self.divide(mother, rng);
        }
    }

    pub(super) fn divide(&mut self, mother: u32, rng: &mut impl Rng) -> bool {
        let beside = self.places[mother as usize];
        let mut free = [VACANT; SITES_AROUND];
        let mut count = 0;
        for next in self.cube.neighbours(beside).filter(|next| self.cube.is_vacant(*next)) {
            free[count] = next;
            count += 1;
        }
        if count == 0 {
            return false;
        }
        self.settle(free[pick(count, rng)]);
        true
    }

    fn settle(&mut self, place: u32) {
        contacts::guess(&mut self.at_places, &self.cube, place);
        self.cube.occupant[place as usize] = self.places.len() as u32;
        self.places.push(place);
        self.holes = self.holes || contacts::may_cut(&self.cube, place);
        let reach = self.cube.coordinates(place).map(i32::abs).into_iter().fold(0, i32::max);
        if reach + MARGIN > self.cube.half - 1 {
            self.enlarge();
        }
    }

    fn enlarge(&mut self) {
        let larger = Cube::of(2 * self.cube.half);
        let old = std::mem::replace(&mut self.cube, larger);
        let old_fields =
            std::mem::replace(&mut self.at_places, contacts::bath(self.cube.occupant.len()));
        for (cell, place) in self.places.iter_mut().enumerate() {
            let here = self.cube.place(old.coordinates(*place));
            self.cube.occupant[here as usize] = cell as u32;
            for (new, old) in self.at_places.iter_mut().zip(&old_fields) {
                new[here as usize] = old[*place as usize];
            }
            *place = here;
        }
    }

    pub(super) fn bury(&mut self, numbers: &[u32]) {
        for (place, number) in self.places.iter().zip(numbers) {
            self.cube.occupant[*place as usize] = *number;
        }
        let mut numbers = numbers.iter();
        self.places.retain(|_| numbers.next().is_some_and(|number| *number != VACANT));
        self.holes = true;
    }

    pub(super) fn describe(&mut self, graph: &mut BodyGraph) {
        if self.holes {
            self.water.flood(&self.cube);
        }
        let water = self.holes.then_some(&self.water);
        self.holes = !contacts::add_cells(graph, &self.cube, &self.places, water);
    }

    pub(super) fn recall(&self, fields: &mut Concentrations) {
        contacts::gather(&self.at_places, &self.places, fields);
    }

    pub(super) fn remember(&mut self, fields: &Concentrations) {
        contacts::scatter(fields, &self.places, &mut self.at_places);
    }

    /// The site nearest the mean of the cells' sites, all coordinates rounded to even ones, is the
    /// origin.
    pub(super) fn coordinates(&self) -> Vec<[i32; 3]> {
        let here: Vec<_> = self.places.iter().map(|place| self.cube.coordinates(*place)).collect();
        let centre = [0, 1, 2].map(|axis| {
            let total: i32 = here.iter().map(|at| at[axis]).sum();
            (f64::from(total) / (2.0 * here.len().max(1) as f64)).round() as i32 * 2
        });
        here.iter().map(|at| [0, 1, 2].map(|axis| at[axis] - centre[axis])).collect()
    }
}
