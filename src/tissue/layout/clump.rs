//! A clump: a daughter next to its mother, cells pushed along a shortest path through cells towards the
//! vacant site nearest the body's centre.
//!
//! Of the empty sites that touch a cell the daughter's division fills one nearest the centre, drawn at
//! random among equals: a new outermost site, or one that a death has freed. Where deaths have cut the
//! body into parts, it is the nearest one that can be reached through cells.

use rand::Rng;

use super::super::graph::{BodyGraph, SITES_AROUND};
use super::super::lattice::Lattice;
use super::super::placement::{Crowd, Newcomer};
use super::contacts::{self, Grid, Water};
use super::{Concentrations, VACANT, pick};

/// Marks places beyond the sites that a body may fill.
const NO_SHELL: u16 = u16::MAX;

#[derive(Debug, Clone)]
pub(in crate::tissue) struct Clump {
    ground: Ground,
    frontier: Frontier,
    search: Search,
    places: Vec<u32>,
    at_places: Concentrations,
    water: Water,
    /// Whether there may be empty sites that the water does not reach.
    holes: bool,
    /// Whether cells have died in this body: then straight paths may lead nowhere.
    torn: bool,
}

/// The lattice and who stands where on it.
#[derive(Debug, Clone)]
struct Ground {
    lattice: Lattice,
    crowd: Crowd,
}

impl Grid for Ground {
    fn side(&self) -> i32 {
        self.lattice.side()
    }

    fn neighbour(&self, place: u32, turn: usize) -> u32 {
        self.lattice.neighbour(place, turn)
    }

    fn occupant(&self, place: u32) -> u32 {
        self.crowd.occupant(place)
    }
}

impl Clump {
    /// Clumps of up to `most` cells.
    pub(super) fn of(most: usize) -> Self {
        let lattice = Lattice::around(most);
        let crowd = Crowd::on(&lattice);
        let places = lattice.grid_len();
        Self {
            frontier: Frontier::of(&lattice),
            ground: Ground { lattice, crowd },
            search: Search::default(),
            places: Vec::with_capacity(most),
            at_places: contacts::bath(places),
            water: Water::default(),
            holes: false,
            torn: false,
        }
    }

    /// Founders lie on the sites nearest the centre.
    pub(super) fn found(&mut self, cells: usize, rng: &mut impl Rng) {
        self.ground.crowd.clear(self.ground.lattice.order());
        self.frontier.clear();
        self.places.clear();
        (self.holes, self.torn) = (false, false);
        let centre = self.ground.lattice.order()[0];
        self.place_founder(centre);
        while self.places.len() < cells {
            let Some(target) = self.frontier.draw(&self.ground, rng) else { return };
            self.place_founder(target);
        }
    }

    fn place_founder(&mut self, place: u32) {
        contacts::guess(&mut self.at_places, &self.ground, place);
        self.ground.crowd.put(place, self.places.len() as u32);
        self.places.push(place);
        self.frontier.fill(&self.ground, place);
    }

    pub(super) fn divide(&mut self, mother: u32, rng: &mut impl Rng) -> bool {
        let Some(target) = self.frontier.draw(&self.ground, rng) else { return false };
        let beside = self.places[mother as usize];
        let ties = rng.next_u32() >> 26;
        let cell = self.places.len() as u32;
        let newcomer = Newcomer { cell, mother, beside, target, ties };
        let Ground { lattice, crowd } = &mut self.ground;
        self.places.push(VACANT);
        let filled = if !self.torn || crowd.reaches(lattice, newcomer) {
            contacts::guess(&mut self.at_places, &self.ground, target);
            let Ground { lattice, crowd } = &mut self.ground;
            crowd.push_in(lattice, newcomer, &mut self.places);
            target
        } else if let Some(end) =
            self.search.find(&self.ground, &self.frontier, newcomer, rng.next_u32())
        {
            contacts::guess(&mut self.at_places, &self.ground, end);
            self.shift(newcomer);
            end
        } else {
            self.places.pop();
            return false;
        };
        self.frontier.fill(&self.ground, filled);
        // A body without deaths has no pocket that its next cell could close.
        self.holes = self.holes || self.torn && contacts::may_cut(&self.ground, filled);
        true
    }

    /// Shifts the cells on the path found by one site, the newcomer first.
    fn shift(&mut self, newcomer: Newcomer) {
        let mut moved = newcomer.cell;
        for &place in self.search.path.iter().rev() {
            self.places[moved as usize] = place;
            let next = self.ground.occupant(place);
            self.ground.crowd.replace(place, moved);
            moved = next;
        }
    }

    pub(super) fn bury(&mut self, numbers: &[u32]) {
        for (&place, &number) in self.places.iter().zip(numbers) {
            self.ground.crowd.replace(place, number);
            if number == VACANT {
                self.frontier.free(&self.ground, place);
            }
        }
        let mut numbers = numbers.iter();
        self.places.retain(|_| numbers.next().is_some_and(|number| *number != VACANT));
        (self.holes, self.torn) = (true, true);
    }

    pub(super) fn describe(&mut self, graph: &mut BodyGraph) {
        if self.holes {
            self.water.flood(&self.ground);
        }
        let water = self.holes.then_some(&self.water);
        self.holes = !contacts::add_cells(graph, &self.ground, &self.places, water);
    }

    pub(super) fn recall(&self, fields: &mut Concentrations) {
        contacts::gather(&self.at_places, &self.places, fields);
    }

    pub(super) fn remember(&mut self, fields: &Concentrations) {
        contacts::scatter(fields, &self.places, &mut self.at_places);
    }

    pub(super) fn coordinates(&self) -> Vec<[i32; 3]> {
        let lattice = &self.ground.lattice;
        self.places.iter().map(|place| lattice.coordinates(*place).map(i32::from)).collect()
    }
}

/// The empty sites that touch a cell, counted by shell (sites equally far from the centre).
#[derive(Debug, Clone)]
struct Frontier {
    /// Cells that touch each place.
    touching: Vec<u8>,
    shell_of: Vec<u16>,
    counts: Vec<u32>,
    /// No shell below holds any.
    lowest: usize,
}

impl Frontier {
    fn of(lattice: &Lattice) -> Self {
        let mut shell_of = vec![NO_SHELL; lattice.grid_len()];
        let mut start = 0;
        for (shell, &end) in lattice.shell_ends().iter().enumerate() {
            for &place in &lattice.order()[start..end] {
                shell_of[place as usize] = shell as u16;
            }
            start = end;
        }
        let shells = lattice.shell_ends().len();
        Self { touching: vec![0; lattice.grid_len()], shell_of, counts: vec![0; shells], lowest: 0 }
    }

    fn clear(&mut self) {
        self.touching.fill(0);
        self.counts.fill(0);
        self.lowest = 0;
    }

    /// Takes note of a cell that now fills an empty place.
    fn fill(&mut self, ground: &Ground, place: u32) {
        if self.touching[place as usize] > 0 {
            self.lose(place);
        }
        for next in ground.neighbours(place) {
            self.touching[next as usize] += 1;
            if self.touching[next as usize] == 1 && ground.is_vacant(next) {
                self.gain(next);
            }
        }
    }

    /// Takes note of a cell that is gone from its place.
    fn free(&mut self, ground: &Ground, place: u32) {
        for next in ground.neighbours(place) {
            self.touching[next as usize] -= 1;
            if self.touching[next as usize] == 0 && ground.is_vacant(next) {
                self.lose(next);
            }
        }
        if self.touching[place as usize] > 0 {
            self.gain(place);
        }
    }

    fn gain(&mut self, place: u32) {
        let shell = usize::from(self.shell_of[place as usize]);
        if let Some(count) = self.counts.get_mut(shell) {
            *count += 1;
            self.lowest = self.lowest.min(shell);
        }
    }

    fn lose(&mut self, place: u32) {
        let shell = usize::from(self.shell_of[place as usize]);
        if let Some(count) = self.counts.get_mut(shell) {
            *count -= 1;
        }
    }

    /// A random one of those nearest the centre.
    fn draw(&mut self, ground: &Ground, rng: &mut impl Rng) -> Option<u32> {
        let below = self.counts[self.lowest..].iter().position(|count| *count > 0)?;
        self.lowest += below;
        let chosen = pick(self.counts[self.lowest] as usize, rng);
        let ends = ground.lattice.shell_ends();
        let start = if self.lowest == 0 { 0 } else { ends[self.lowest - 1] };
        let shell = &ground.lattice.order()[start..ends[self.lowest]];
        shell.iter().copied().filter(|place| self.holds(ground, *place)).nth(chosen)
    }

    fn holds(&self, ground: &Ground, place: u32) -> bool {
        self.touching[place as usize] > 0 && ground.is_vacant(place)
    }
}

/// Breadth-first search through cells, for bodies with holes or in parts.
#[derive(Debug, Clone, Default)]
struct Search {
    /// The place before each place on the way there, valid where `seen` holds this search's number.
    came_from: Vec<u32>,
    seen: Vec<u32>,
    number: u32,
    queue: Vec<u32>,
    /// The path found, backwards: from its end to the site next to the mother.
    path: Vec<u32>,
}

impl Search {
    /// Finds the shortest path from a newcomer's mother to its target, or else to the nearest to the
    /// centre of the empty sites that can be reached; returns its end.
    fn find(
        &mut self,
        ground: &Ground,
        frontier: &Frontier,
        newcomer: Newcomer,
        random: u32,
    ) -> Option<u32> {
        self.begin(ground, newcomer.beside);
        let first = random as usize % SITES_AROUND;
        let mut best: Option<u32> = None;
        let mut at = 0;
        while at < self.queue.len() && best != Some(newcomer.target) {
            let here = self.queue[at];
            at += 1;
            for turn in 0..SITES_AROUND {
                let next = ground.neighbour(here, (first + turn) % SITES_AROUND);
                if self.seen[next as usize] == self.number {
                    continue;
                }
                self.seen[next as usize] = self.number;
                self.came_from[next as usize] = here;
                if !ground.is_vacant(next) {
                    self.queue.push(next);
                } else if next == newcomer.target || frontier.is_nearer(next, best) {
                    best = Some(next);
                }
            }
        }
        self.trace(newcomer.beside, best?);
        best
    }

    fn begin(&mut self, ground: &Ground, start: u32) {
        let places = ground.lattice.grid_len();
        if self.number == u32::MAX || self.seen.len() != places {
            self.came_from = vec![VACANT; places];
            self.seen = vec![0; places];
            self.number = 0;
        }
        self.number += 1;
        self.seen[start as usize] = self.number;
        self.queue.clear();
        self.queue.push(start);
    }

    fn trace(&mut self, start: u32, end: u32) {
        self.path.clear();
        let mut here = end;
        while here != start {
            self.path.push(here);
            here = self.came_from[here as usize];
        }
    }
}

impl Frontier {
    /// Whether an empty place lies nearer the centre than another; the first found of equals stays.
    fn is_nearer(&self, place: u32, other: Option<u32>) -> bool {
        let shell = self.shell_of[place as usize];
        shell != NO_SHELL && other.is_none_or(|other| shell < self.shell_of[other as usize])
    }
}
