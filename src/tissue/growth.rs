//! Growth by division: when cells divide, where daughters go, and the labels divisions leave.
//!
//! Every cell saves its net income and divides when its reserve reaches the cost of a division; the
//! reserve is then spent and the daughter starts with none. Where all cells earn alike and costs do
//! not vary, divisions fall into rounds; otherwise each cell divides in its own time.

use std::cmp::Reverse;
use std::collections::BinaryHeap;

use rand::Rng;

use super::draws::standard_normal;
use super::exposure::ExposureMap;
use super::lattice::Lattice;
use super::placement::{Crowd, Newcomer};

/// Least cost of a division as a share of its mean, where costs vary.
pub(super) const LEAST_COST_SHARE: f64 = 0.01;

/// Label of a cell that its last division made a mother.
const MOTHER: i8 = -1;
/// Label of a cell that its last division made a daughter.
const DAUGHTER: i8 = 1;

/// How fast cells save and what a division takes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pace {
    /// Income less upkeep of a growing cell, eu/h; at or below 0 nothing grows.
    pub net_income_eu_per_h: f64,
    /// Mean reserve at which a cell divides, eu.
    pub division_cost_eu: f64,
    /// Coefficient of variation of that reserve, drawn anew for each division.
    pub division_cv: f64,
}

impl Pace {
    fn division_interval_h(&self) -> f64 {
        self.division_cost_eu / self.net_income_eu_per_h
    }
}

/// A body as growth left it; entry i of each slice belongs to cell i.
#[derive(Debug, Clone, Copy)]
pub struct Arrangement<'a> {
    /// Where each cell lies.
    pub places: &'a [u32],
    /// What its last division made it: -1 mother, +1 daughter, 0 never divided.
    pub labels: &'a [i8],
    /// What it has saved, eu.
    pub reserves_eu: &'a [f32],
    /// Time from founding to this state, h; infinite when the body can never reach adult size.
    pub duration_h: f64,
}

/// Grows compact bodies one after the other in the same working memory.
#[derive(Debug, Clone)]
pub struct Growth {
    lattice: Lattice,
    exposure: ExposureMap,
    crowd: Crowd,
    adult_cells: usize,
    propagule_cells: usize,
    /// Sites by distance from the centre; of the shell being filled, those still vacant come last.
    targets: Vec<u32>,
    /// The shell being filled, and where it ends among the sites.
    shell: usize,
    shell_end: usize,
    /// Cells of the body so far; entries of the following beyond it are leftovers.
    held: usize,
    places: Vec<u32>,
    labels: Vec<i8>,
    reserves_eu: Vec<f32>,
    divided_at_h: Vec<f64>,
    mothers: Vec<u32>,
}

impl Growth {
    /// Growth of a `clump` from `propagule_cells` to `adult_cells` cells, 1 <= propagule <= adult.
    #[must_use]
    pub fn of_clump(propagule_cells: usize, adult_cells: usize) -> Self {
        let lattice = Lattice::around(adult_cells);
        Self {
            exposure: ExposureMap::of_compact_body(&lattice, adult_cells),
            crowd: Crowd::on(&lattice),
            adult_cells,
            propagule_cells,
            targets: lattice.order().to_vec(),
            shell: 0,
            shell_end: 0,
            held: 0,
            places: vec![0; adult_cells],
            labels: vec![0; adult_cells],
            reserves_eu: vec![0.0; adult_cells],
            divided_at_h: vec![0.0; adult_cells],
            mothers: Vec::with_capacity(adult_cells),
            lattice,
        }
    }

    /// The lattice the bodies lie on.
    #[must_use]
    pub const fn lattice(&self) -> &Lattice {
        &self.lattice
    }

    /// Grows a body from its propagule until it is adult or `until_h` has passed.
    pub fn grow(&mut self, pace: &Pace, until_h: f64, rng: &mut impl Rng) -> Arrangement<'_> {
        self.found(rng);
        let duration_h = if self.propagule_cells == self.adult_cells {
            0.0
        } else if pace.net_income_eu_per_h.is_nan() || pace.net_income_eu_per_h <= 0.0 {
            f64::INFINITY
        } else if pace.division_cv > 0.0 {
            self.divide_one_by_one(pace, until_h, rng)
        } else {
            self.divide_in_rounds(pace, until_h, rng)
        };
        Arrangement {
            places: &self.places[..self.held],
            labels: &self.labels[..self.held],
            reserves_eu: &self.reserves_eu[..self.held],
            duration_h,
        }
    }

    /// Whether each cell of the body last grown to adult size is exposed, in the order of cells.
    pub fn exposed(&self) -> impl Iterator<Item = bool> {
        self.places[..self.held]
            .iter()
            .map(|&place| self.exposure.exposed(&self.lattice, place, |p| self.crowd.occupied(p)))
    }

    fn found(&mut self, rng: &mut impl Rng) {
        self.crowd.clear(self.lattice.order());
        self.targets.copy_from_slice(self.lattice.order());
        (self.shell, self.shell_end) = (0, self.lattice.shell_ends()[0]);
        self.held = self.propagule_cells;
        self.labels[..self.held].fill(0);
        self.reserves_eu.fill(0.0);
        for cell in 0..self.propagule_cells {
            let (target, _) = self.draw_target(cell, upper_half(rng.next_u64()));
            self.crowd.put(target, cell as u32);
            self.places[cell] = target;
        }
    }

    fn divide_in_rounds(&mut self, pace: &Pace, until_h: f64, rng: &mut impl Rng) -> f64 {
        let interval_h = pace.division_interval_h();
        let mut now_h = 0.0;
        while self.held < self.adult_cells {
            if now_h + interval_h > until_h {
                self.save(pace, until_h - now_h);
                return until_h;
            }
            now_h += interval_h;
            self.divide_a_round(pace, rng);
        }
        now_h
    }

    /// All cells divide at once, in random order; in the last round only as many as are needed.
    fn divide_a_round(&mut self, pace: &Pace, rng: &mut impl Rng) {
        let before = self.held;
        let dividing = before.min(self.adult_cells - before);
        self.mothers.clear();
        self.mothers.extend(0..before as u32);
        for turn in 0..dividing {
            let random = rng.next_u64();
            let (pick, _) = below(lower_half(random), before - turn);
            self.mothers.swap(turn, turn + pick);
            self.place_daughter(self.mothers[turn], upper_half(random));
        }
        self.labels[before..self.held].fill(DAUGHTER);
        if dividing == before {
            self.labels[..before].fill(MOTHER);
            return;
        }
        for &mother in &self.mothers[..dividing] {
            self.labels[mother as usize] = MOTHER;
        }
        for &idle in &self.mothers[dividing..] {
            self.reserves_eu[idle as usize] = pace.division_cost_eu as f32;
        }
    }

    fn divide_one_by_one(&mut self, pace: &Pace, until_h: f64, rng: &mut impl Rng) -> f64 {
        let mut queue = BinaryHeap::with_capacity(self.adult_cells);
        self.divided_at_h.fill(0.0);
        for cell in 0..self.held as u32 {
            queue.push(Reverse(Division::drawn(cell, 0.0, pace, rng)));
        }
        let mut now_h = 0.0;
        while self.held < self.adult_cells {
            let Some(Reverse(next)) = queue.pop() else { break };
            if next.at_h > until_h {
                now_h = until_h;
                break;
            }
            now_h = next.at_h;
            let daughter = self.held as u32;
            self.place_daughter(next.mother, upper_half(rng.next_u64()));
            self.labels[next.mother as usize] = MOTHER;
            self.labels[daughter as usize] = DAUGHTER;
            for cell in [next.mother, daughter] {
                self.divided_at_h[cell as usize] = now_h;
                queue.push(Reverse(Division::drawn(cell, now_h, pace, rng)));
            }
        }
        for (reserve, since_h) in self.reserves_eu.iter_mut().zip(&self.divided_at_h) {
            *reserve = ((now_h - since_h) * pace.net_income_eu_per_h) as f32;
        }
        now_h
    }

    /// Puts a daughter of `mother` in next to it.
    #[inline]
    fn place_daughter(&mut self, mother: u32, random: u32) {
        let daughter = self.held;
        let (target, ties) = self.draw_target(daughter, random);
        let beside = self.places[mother as usize];
        let newcomer = Newcomer { cell: daughter as u32, mother, beside, target, ties };
        self.crowd.push_in(&self.lattice, newcomer, &mut self.places);
        self.held += 1;
    }

    /// A random vacant site of those nearest the centre, and random bits to spare.
    #[inline]
    fn draw_target(&mut self, held: usize, random: u32) -> (u32, u32) {
        if held == self.shell_end {
            self.shell += 1;
            self.shell_end = self.lattice.shell_ends()[self.shell];
        }
        let (pick, ties) = below(random, self.shell_end - held);
        let vacant = &mut self.targets[held..self.shell_end];
        let target = vacant[pick];
        vacant[pick] = vacant[0];
        (target, ties)
    }

    /// Adds what every cell saves in `hours` without dividing.
    fn save(&mut self, pace: &Pace, hours: f64) {
        for reserve in &mut self.reserves_eu[..self.held] {
            *reserve += (hours * pace.net_income_eu_per_h) as f32;
        }
    }
}

/// A division to come; equal times are ordered by a random draw, then by cell.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Division {
    at_h: f64,
    tie: u32,
    mother: u32,
}

impl Division {
    fn drawn(mother: u32, now_h: f64, pace: &Pace, rng: &mut impl Rng) -> Self {
        let deviate = standard_normal(rng);
        let share = (1.0 + pace.division_cv * deviate).max(LEAST_COST_SHARE);
        let at_h = now_h + share * pace.division_interval_h();
        Self { at_h, tie: rng.next_u32(), mother }
    }
}

impl Eq for Division {}

impl Ord for Division {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        let ties = (self.tie, self.mother).cmp(&(other.tie, other.mother));
        self.at_h.total_cmp(&other.at_h).then(ties)
    }
}

impl PartialOrd for Division {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}

const fn upper_half(random: u64) -> u32 {
    (random >> 32) as u32
}

const fn lower_half(random: u64) -> u32 {
    random as u32
}

/// A draw from `0..choices` out of 32 random bits by multiply-and-shift (bias below choices / 2^32),
/// and six bits of what is left over for ties.
const fn below(random: u32, choices: usize) -> (usize, u32) {
    let product = random as u64 * choices as u64;
    let rest = product & 0xffff_ffff;
    ((product >> 32) as usize, (rest >> 26) as u32)
}
