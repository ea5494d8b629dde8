//! A chain: cells in a straight line, a daughter on a random side of its mother.
//!
//! The line runs along [1, 1, 0]. The cells on the daughter's side shift outwards by one site, those
//! beyond the first gap that a death has left do not: they are not pushed.

use rand::Rng;

use super::super::graph::{BodyGraph, SITES_AROUND};
use super::{BATH, Concentrations, VACANT};

const LEFT: usize = 0;
const RIGHT: usize = 1;

/// Cells linked to those next to them in the line: a division costs the same anywhere.
#[derive(Debug, Clone, Default)]
pub(in crate::tissue) struct Chain {
    /// The next cell to the left and to the right of each cell, [`VACANT`] beyond the ends.
    next: Vec<[u32; 2]>,
    /// Empty sites between each cell and the next one to its right.
    gaps: Vec<u32>,
    /// Sum of `gaps`.
    gap_sites: usize,
    fields: Concentrations,
}

impl Chain {
    pub(super) fn found(&mut self, cells: usize) {
        let end = |at: usize| if at < cells { at as u32 } else { VACANT };
        self.next.clear();
        self.next.extend((0..cells).map(|at| [end(at.wrapping_sub(1)), end(at + 1)]));
        self.gaps.clear();
        self.gaps.resize(cells, 0);
        self.gap_sites = 0;
        self.fields = BATH.map(|outside| vec![outside; cells]);
    }

    pub(super) fn divide(&mut self, mother: u32, rng: &mut impl Rng) -> bool {
        let side = (rng.next_u32() >> 31) as usize;
        self.close_gap(mother, side);
        let daughter = self.next.len() as u32;
        let beyond = self.next[mother as usize][side];
        let mut links = [mother; 2];
        links[side] = beyond;
        self.next.push(links);
        self.next[mother as usize][side] = daughter;
        if beyond != VACANT {
            self.next[beyond as usize][1 - side] = daughter;
        }
        // What is left of a gap next to the mother now lies beyond the daughter.
        let gap = if side == RIGHT { std::mem::take(&mut self.gaps[mother as usize]) } else { 0 };
        self.gaps.push(gap);
        for field in &mut self.fields {
            field.push(field[mother as usize]);
        }
        true
    }

    /// Takes a site from the first gap on a side of a cell, which the shift fills.
    fn close_gap(&mut self, cell: u32, side: usize) {
        let mut here = cell;
        while self.gap_sites > 0 {
            let next = self.next[here as usize][side];
            if next == VACANT {
                return;
            }
            let left = if side == RIGHT { here } else { next };
            if self.gaps[left as usize] > 0 {
                self.gaps[left as usize] -= 1;
                self.gap_sites -= 1;
                return;
            }
            here = next;
        }
    }

    pub(super) fn bury(&mut self, numbers: &[u32]) {
        for cell in (0..numbers.len()).filter(|cell| numbers[*cell] == VACANT) {
            self.unlink(cell);
        }
        let renumbered = |next: u32| if next == VACANT { VACANT } else { numbers[next as usize] };
        let living = (0..numbers.len()).filter(|cell| numbers[*cell] != VACANT);
        for (number, cell) in living.enumerate() {
            self.next[number] = self.next[cell].map(renumbered);
            self.gaps[number] = self.gaps[cell];
            for field in &mut self.fields {
                field[number] = field[cell];
            }
        }
        let living = numbers.iter().filter(|number| **number != VACANT).count();
        self.next.truncate(living);
        self.gaps.truncate(living);
        for field in &mut self.fields {
            field.truncate(living);
        }
        self.gap_sites = self.gaps.iter().map(|gap| *gap as usize).sum();
    }

    fn unlink(&mut self, cell: usize) {
        let [left, right] = self.next[cell];
        if right != VACANT {
            self.next[right as usize][LEFT] = left;
        }
        if left != VACANT {
            let gap = self.gaps[left as usize] + 1 + self.gaps[cell];
            self.gaps[left as usize] = if right == VACANT { 0 } else { gap };
            self.next[left as usize][RIGHT] = right;
        }
    }

    pub(super) fn describe(&self, graph: &mut BodyGraph) {
        for (cell, [left, right]) in self.next.iter().enumerate() {
            let at_left = *left != VACANT && self.gaps[*left as usize] == 0;
            let at_right = *right != VACANT && self.gaps[cell] == 0;
            let touching = at_left.then_some(*left).into_iter().chain(at_right.then_some(*right));
            let empty = SITES_AROUND as u8 - u8::from(at_left) - u8::from(at_right);
            graph.push(touching, empty, empty);
        }
    }

    pub(super) fn recall(&self, fields: &mut Concentrations) {
        fields.clone_from(&self.fields);
    }

    pub(super) fn remember(&mut self, fields: &Concentrations) {
        self.fields.clone_from(fields);
    }

    /// The middle of the line (the site left of it, if even) is the origin.
    pub(super) fn coordinates(&self) -> Vec<[i32; 3]> {
        let mut at = vec![0; self.next.len()];
        let mut site = 0;
        let mut here = self.next.iter().position(|next| next[LEFT] == VACANT);
        let mut last = 0;
        while let Some(cell) = here {
            (at[cell], last) = (site, site);
            site += 1 + self.gaps[cell] as i32;
            let next = self.next[cell][RIGHT];
            here = (next != VACANT).then_some(next as usize);
        }
        at.into_iter().map(|site| [site - last / 2, site - last / 2, 0]).collect()
    }
}
