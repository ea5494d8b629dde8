//! Where a daughter goes: next to its mother, pushing cells along a shortest lattice path towards
//! the vacant site nearest the body's centre.

use super::lattice::Lattice;
use super::route::{Compass, PACE, Routes};

/// Marks a place of the grid that holds no cell.
const VACANT: u32 = u32::MAX;

/// The bit by which [`VACANT`] differs from every cell's number.
const VACANT_BIT: u32 = 31;

/// Who stands where in the body that is growing.
#[derive(Debug, Clone)]
pub(super) struct Crowd {
    occupant: Vec<u32>,
    compass: Compass,
    routes: Routes,
    /// Scratch of the searches that serve where no straight path stays inside the body.
    way: Vec<u32>,
    came_from: Vec<u32>,
    /// The path of the push at hand, `paces` long, to the target. It may linger on the mother's
    /// place before it sets out.
    path: Vec<[Stop; PACE]>,
    paces: usize,
}

/// A place on a path and who stands there.
#[derive(Debug, Clone, Copy)]
struct Stop {
    place: u32,
    there: u32,
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
        let stop = Stop { place: VACANT, there: VACANT };
        Self {
            occupant: vec![VACANT; lattice.grid_len()],
            compass: Compass::on_grid(lattice.strides()),
            routes: Routes::up_to(lattice.span()),
            way: Vec::new(),
            came_from: Vec::new(),
            path: vec![[stop; PACE]; 2 * lattice.span() / PACE + 1],
            paces: 0,
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

    /// Who stands on a place; `u32::MAX` where nobody does.
    pub(super) fn occupant(&self, place: u32) -> u32 {
        self.occupant[place as usize]
    }

    /// Puts `cell` on a place, or takes whoever stood there away (`u32::MAX`).
    pub(super) fn replace(&mut self, place: u32, cell: u32) {
        self.occupant[place as usize] = cell;
    }

    /// Whether a path as short as the lattice allows leads through cells from a newcomer's mother to
    /// its target.
    pub(super) fn reaches(&mut self, lattice: &Lattice, newcomer: Newcomer) -> bool {
        self.go_straight(lattice, newcomer) || self.find_way(lattice, newcomer)
    }

    /// Puts a newcomer next to its mother, shifting every cell on a shortest path from there to the
    /// target by one site; `places` (place of each cell) follows.
    #[expect(
        clippy::inline_always,
        reason = "growth is a tenth faster, and all of a pooled run is growth"
    )]
    #[inline(always)]
    pub(super) fn push_in(&mut self, lattice: &Lattice, newcomer: Newcomer, places: &mut [u32]) {
        // While its mother's place is the newcomer's, a path that lingers there does no harm.
        self.occupant[newcomer.beside as usize] = newcomer.cell;
        if !self.go_straight(lattice, newcomer) {
            self.go_round(lattice, newcomer);
        }
        let mut moved = newcomer.cell;
        for stops in &self.path[..self.paces] {
            for stop in stops {
                places[moved as usize] = stop.place;
                self.occupant[stop.place as usize] = moved;
                moved = stop.there;
            }
        }
        self.occupant[newcomer.beside as usize] = newcomer.mother;
    }

    /// Finds the straightest shortest path; `false` where that leaves the body.
    #[expect(
        clippy::inline_always,
        reason = "growth is a tenth faster, and all of a pooled run is growth"
    )]
    #[inline(always)]
    fn go_straight(&mut self, lattice: &Lattice, newcomer: Newcomer) -> bool {
        let Bearing { legs, order, turns } = bearing(lattice, newcomer);
        let steps = self.compass.steps(order, turns);
        let kinds = self.routes.between(legs);
        let mut here = newcomer.beside;
        let mut gaps = 0;
        for (stops, kinds) in self.path.iter_mut().zip(kinds) {
            for (stop, &kind) in stops.iter_mut().zip(kinds) {
                here = here.wrapping_add_signed(steps[usize::from(kind & 7)]);
                let there = self.occupant[here as usize];
                *stop = Stop { place: here, there };
                gaps += there >> VACANT_BIT;
            }
        }
        self.paces = kinds.len();
        // The target is a gap of its own.
        gaps == 1
    }

    /// Finds a shortest path through occupied sites: step by step, or by searching where that comes
    /// to a dead end.
    #[cold]
    fn go_round(&mut self, lattice: &Lattice, newcomer: Newcomer) {
        if !self.find_way(lattice, newcomer) {
            self.search_way(lattice, newcomer);
        }
        let lingering = self.way.len().next_multiple_of(PACE) - self.way.len();
        self.way.splice(..0, std::iter::repeat_n(newcomer.beside, lingering));
        let (paces, _) = self.way.as_chunks::<PACE>();
        let stop = |place: u32| Stop { place, there: self.occupant[place as usize] };
        let (here, longer) = paces.split_at(paces.len().min(self.path.len()));
        for (stops, places) in self.path.iter_mut().zip(here) {
            *stops = places.map(stop);
        }
        self.path.extend(longer.iter().map(|places| places.map(stop)));
        self.paces = paces.len();
    }

    /// Finds a shortest path step by step through occupied sites; `false` at a dead end.
    fn find_way(&mut self, lattice: &Lattice, newcomer: Newcomer) -> bool {
        let goal = newcomer.target;
        let mut here = newcomer.beside;
        self.way.clear();
        while here != goal {
            let nearer = lattice.steps_between(here, goal) - 1;
            let next = (0..12)
                .map(|turn| lattice.neighbour(here, (turn + newcomer.ties as usize) % 12))
                .find(|&next| {
                    (next == goal || self.occupied(next))
                        && lattice.steps_between(next, goal) == nearer
                });
            let Some(next) = next else { return false };
            self.way.push(next);
            here = next;
        }
        true
    }

    /// Breadth-first search through occupied places, shortest inside the body.
    fn search_way(&mut self, lattice: &Lattice, newcomer: Newcomer) {
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
        self.way.clear();
        let mut here = target;
        while here != beside {
            self.way.push(here);
            here = self.came_from[here as usize];
        }
        self.way.reverse();
    }
}

/// Where a target lies as seen from a mother.
struct Bearing {
    /// Absolute coordinate differences in falling order.
    legs: [usize; 3],
    /// Which axis has the longer leg, see [`Compass::steps`].
    order: usize,
    /// Which axes are walked backwards: bit by axis.
    turns: usize,
}

/// Along an axis without difference the leg points outwards, since routes lag on short legs: that is
/// how a path that must go sideways stays among cells. Equal legs are ordered by the random bits.
#[inline]
fn bearing(lattice: &Lattice, newcomer: Newcomer) -> Bearing {
    let start = lattice.coordinates(newcomer.beside).map(i32::from);
    let goal = lattice.coordinates(newcomer.target).map(i32::from);
    let ways = [0, 1, 2].map(|axis| goal[axis] - start[axis]);
    let turns = [0, 1, 2].map(|axis| {
        let heading = if ways[axis] == 0 { goal[axis] } else { ways[axis] };
        usize::from(heading < 0) << axis
    });
    let legs = ways.map(i32::unsigned_abs);
    let [x, y, z] = [0, 1, 2].map(|axis| legs[axis] << 2 | newcomer.ties >> (2 * axis) & 3);
    let order = usize::from(x >= y) | usize::from(y >= z) << 1 | usize::from(x >= z) << 2;
    let long = legs[0].max(legs[1]).max(legs[2]);
    let short = legs[0].min(legs[1]).min(legs[2]);
    let middle = legs[0] + legs[1] + legs[2] - long - short;
    Bearing {
        legs: [long, middle, short].map(|leg| leg as usize),
        order,
        turns: turns[0] | turns[1] | turns[2],
    }
}

#[cfg(test)]
mod tests;
