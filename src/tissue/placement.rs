//! Where a daughter goes: next to its mother, pushing cells along a shortest lattice path towards
//! the vacant site nearest the body's centre.

use super::lattice::Lattice;
use super::route::{PACE, Routes, StepTable, step_table};

/// Marks a place of the grid that holds no cell.
pub(super) const VACANT: u32 = u32::MAX;

/// Who stands where in the body that is growing.
#[derive(Debug, Clone)]
pub(super) struct Crowd {
    occupant: Vec<u32>,
    routes: Routes,
    /// Scratch of the search that serves where no straight path stays inside the body.
    came_from: Vec<u32>,
    /// The path of the push at hand, `length` places long, to the target. It may linger on the
    /// mother's place before it sets out.
    path: Vec<u32>,
    /// Who stands on each place of the path.
    shoved: Vec<u32>,
    length: usize,
}

/// A daughter to be placed.
#[derive(Debug, Clone, Copy)]
pub(super) struct Newcomer {
    /// Its number.
    pub(super) cell: u32,
    /// The number of its mother.
    pub(super) mother: u32,
    /// The place of its mother.
    pub(super) beside: u32,
    /// The empty place that the push ends at.
    pub(super) target: u32,
    /// Random bits that decide between equally short paths.
    pub(super) ties: u32,
}

impl Crowd {
    pub(super) fn on(lattice: &Lattice) -> Self {
        let longest = 2 * lattice.span() + 2 + PACE;
        Self {
            occupant: vec![VACANT; lattice.grid_len()],
            routes: Routes::up_to(lattice.span()),
            came_from: Vec::new(),
            path: vec![VACANT; longest],
            shoved: vec![VACANT; longest],
            length: 0,
        }
    }

    pub(super) fn occupied(&self, place: u32) -> bool {
        self.occupant[place as usize] != VACANT
    }

    /// Empties the places that the last body may have held.
    pub(super) fn clear(&mut self, places: &[u32]) {
        for &place in places {
            self.occupant[place as usize] = VACANT;
        }
    }

    /// Puts `cell` on the empty `place`.
    pub(super) fn put(&mut self, place: u32, cell: u32) {
        self.occupant[place as usize] = cell;
    }

    /// Puts a newcomer next to its mother, shifting every cell on a shortest path from there to the
    /// target by one site; `places` (place of each cell) follows.
    #[inline]
    pub(super) fn push_in(&mut self, lattice: &Lattice, newcomer: Newcomer, places: &mut [u32]) {
        // While its mother's place is the newcomer's, a path that lingers there does no harm.
        self.occupant[newcomer.beside as usize] = newcomer.cell;
        if !self.go_straight(lattice, newcomer) {
            self.go_round(lattice, newcomer);
        }
        let mut moved = newcomer.cell;
        let (path, _) = self.path[..self.length].as_chunks::<PACE>();
        let (shoved, _) = self.shoved[..self.length].as_chunks::<PACE>();
        for (path, shoved) in path.iter().zip(shoved) {
            for (&place, &there) in path.iter().zip(shoved) {
                places[moved as usize] = place;
                self.occupant[place as usize] = moved;
                moved = there;
            }
        }
        self.occupant[newcomer.beside as usize] = newcomer.mother;
    }

    /// Finds the straightest shortest path; `false` where that leaves the body.
    #[inline]
    fn go_straight(&mut self, lattice: &Lattice, newcomer: Newcomer) -> bool {
        let (legs, steps) = legs_between(lattice, newcomer);
        let kinds = self.routes.between(legs);
        let mut here = newcomer.beside;
        let mut gaps = 0;
        let (path, _) = self.path.as_chunks_mut::<PACE>();
        let (shoved, _) = self.shoved.as_chunks_mut::<PACE>();
        for ((path, shoved), kinds) in path.iter_mut().zip(shoved).zip(kinds) {
            for ((place, there), &kind) in path.iter_mut().zip(shoved).zip(kinds) {
                here = here.wrapping_add_signed(steps[usize::from(kind & 7)]);
                *there = self.occupant[here as usize];
                *place = here;
                gaps += u32::from(*there == VACANT);
            }
        }
        self.length = kinds.len() * PACE;
        // The target is a gap of its own.
        gaps == 1
    }

    /// Finds a shortest path through occupied sites: step by step, or by searching where that ends
    /// in a dead end.
    #[cold]
    fn go_round(&mut self, lattice: &Lattice, newcomer: Newcomer) {
        if !self.find_way(lattice, newcomer) {
            self.search_path(lattice, newcomer);
        }
        // Round up to whole paces.
        let lingering = self.length.next_multiple_of(PACE) - self.length;
        self.length += lingering;
        self.path.resize(self.path.len().max(self.length), VACANT);
        self.shoved.resize(self.path.len(), VACANT);
        self.path[..self.length].rotate_right(lingering);
        self.path[..lingering].fill(newcomer.beside);
        for (there, place) in self.shoved.iter_mut().zip(&self.path[..self.length]) {
            *there = self.occupant[*place as usize];
        }
    }

    /// Finds a shortest path step by step through occupied sites; `false` at a dead end.
    fn find_way(&mut self, lattice: &Lattice, newcomer: Newcomer) -> bool {
        let goal = newcomer.target;
        let mut here = newcomer.beside;
        self.length = 0;
        while here != goal {
            let nearer = lattice.steps_between(here, goal) - 1;
            let next = (0..12)
                .map(|turn| lattice.neighbour(here, (turn + newcomer.ties as usize) % 12))
                .find(|&next| {
                    (next == goal || self.occupied(next))
                        && lattice.steps_between(next, goal) == nearer
                });
            let Some(next) = next else { return false };
            self.path[self.length] = next;
            self.length += 1;
            here = next;
        }
        true
    }

    /// Breadth-first search through occupied places, shortest inside the body.
    fn search_path(&mut self, lattice: &Lattice, newcomer: Newcomer) {
        let Newcomer { beside, target, ties, .. } = newcomer;
        self.came_from.clear();
        self.came_from.resize(self.occupant.len(), VACANT);
        self.came_from[beside as usize] = beside;
        let mut queue = std::collections::VecDeque::from([beside]);
        while self.came_from[target as usize] == VACANT
            && let Some(here) = queue.pop_front()
        {
            for turn in 0..12 {
                let next = lattice.neighbour(here, (turn + ties as usize) % 12);
                let open = self.came_from[next as usize] == VACANT;
                if open && (next == target || self.occupied(next)) {
                    self.came_from[next as usize] = here;
                    queue.push_back(next);
                }
            }
        }
        let mut found = Vec::new();
        let mut here = target;
        while here != beside {
            found.push(here);
            here = self.came_from[here as usize];
        }
        self.length = found.len();
        self.path.resize(self.path.len().max(self.length), VACANT);
        for (place, &step) in self.path.iter_mut().zip(found.iter().rev()) {
            *place = step;
        }
    }
}

/// The legs of a displacement in falling order, and the grid difference of each kind of step.
///
/// Along an axis without difference the leg points outwards, since routes lag on short legs: that is
/// how a path that must go sideways stays among cells. Equal legs are ordered by the random bits.
#[inline]
fn legs_between(lattice: &Lattice, newcomer: Newcomer) -> ([usize; 3], StepTable) {
    let start = lattice.coordinates(newcomer.beside);
    let goal = lattice.coordinates(newcomer.target);
    let strides = lattice.strides();
    let mut towards = [0_i32; 4];
    let mut keys = [0_u32; 3];
    for axis in 0..3 {
        let (from, to) = (i32::from(start[axis]), i32::from(goal[axis]));
        let heading = if from == to { to } else { to - from };
        towards[axis] = if heading < 0 { -strides[axis] } else { strides[axis] };
        let rank = newcomer.ties >> (2 * axis) & 3;
        keys[axis] = (to - from).unsigned_abs() << 4 | rank << 2 | axis as u32;
    }
    let [x, y, z] = keys;
    let (x, y) = (x.max(y), x.min(y));
    let (y, z) = (y.max(z), y.min(z));
    let (x, y) = (x.max(y), x.min(y));
    let legs = [x, y, z].map(|key| (key >> 4) as usize);
    (legs, step_table([x, y, z].map(|key| towards[(key & 3) as usize])))
}
