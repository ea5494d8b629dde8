//! Development: one body's growth from propagule to adult, as the fields allow it.
//!
//! These are the rules; times are exact but for the fields, which follow the body in small steps.
//!
//! 1. A cell saves `income_share e0 income_i - upkeep` per hour, its reserve staying between 0 and what
//!    its next division costs, `division_cost (1 + cv N(0,1))`, at least a hundredth of the mean. It
//!    divides when it has that much; mother and daughter then start with nothing and a new cost each.
//!    Divisions at equal times happen in random order.
//! 2. A cell without room for a daughter (see [`Plan`]) keeps its reserve and divides as soon as a
//!    death makes room.
//! 3. Fields are steady: incomes are solved anew before time goes on, once the body has gained a
//!    sixteenth of its cells by division since the last time (in bodies of up to 16 cells: after every
//!    division), and after every death. Concentrations belong to sites; until the next
//!    solution cells keep their incomes, and a daughter has its mother's.
//! 4. A cell is hungry while its income is below its upkeep, and dies when it has been so for
//!    `starvation_h` without a break. Its site is free again. Cells whose time is over together die
//!    together.
//! 5. A body that holds `adult_cells` living cells has grown up: divisions end for good. A `shell` takes
//!    its shape. The body waits until no cell is hungry any more, those dying whose time is over; then
//!    it is adult, perhaps with fewer cells. If cells never die of hunger (`starvation_h` infinite), it
//!    is adult at once.
//! 6. A body that can grow no more is stunted: nobody can ever divide, nor die and so make room; or as
//!    many cells have starved since its size last reached a new maximum as it held then; or nobody is
//!    left. Every development ends, since births between two maxima are as limited as deaths.
//!
//! Without fields all incomes are 1, nothing is solved, and divisions of cells with equal costs fall
//! into rounds as they do in [`Growth`](super::Growth).

mod cells;
mod course;

use rand::Rng;

use super::fields::Fields;
use super::graph::BodyGraph;
use super::plan::Plan;
use course::Course;

/// All that decides how a body grows.
#[derive(Debug, Clone, PartialEq)]
pub struct GrowthRules {
    /// How daughters are placed.
    pub plan: Plan,
    /// Cells of a propagule, at least 1.
    pub propagule_cells: usize,
    /// Living cells at which a body has grown up (n).
    pub adult_cells: usize,
    /// What decides cells' incomes.
    pub fields: Fields,
    /// Income of a fully fed cell (e0), eu/h.
    pub income_eu_per_h: f64,
    /// What a growing cell spends on itself, eu/h.
    pub upkeep_eu_per_h: f64,
    /// Mean reserve at which a cell divides, eu.
    pub division_cost_eu: f64,
    /// Coefficient of variation of that reserve.
    pub division_cv: f64,
    /// How long a cell lives on an income below its upkeep, h.
    pub starvation_h: f64,
}

/// How a development ended.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Ending {
    /// The body was adult after so many hours.
    Adult(f64),
    /// The body ceased to grow for good, short of adult size, after so many hours (0 if it never
    /// could).
    Stunted(f64),
}

/// A body's whole growth. Entry i of each list belongs to cell i.
#[derive(Debug, Clone, PartialEq)]
pub struct Development {
    /// How it ended.
    pub ending: Ending,
    /// Lattice coordinates of each cell (units of `d / sqrt(2)`) relative to the body's centre. A
    /// chain of 100,000 cells does not fit into 16 bits.
    pub coordinates: Vec<[i32; 3]>,
    /// What its last division made each cell: -1 mother, +1 daughter, 0 never divided.
    pub labels: Vec<i8>,
    /// What each cell has saved, eu.
    pub reserves_eu: Vec<f32>,
    /// Income of each cell of the final body relative to e0, before the tax on responsiveness.
    pub incomes: Vec<f64>,
    /// Who touches whom in the final body.
    pub graph: BodyGraph,
    /// When each cell was born, h from founding, ascending; founders at 0. Cells that starved are
    /// among them.
    pub births_h: Vec<f64>,
    /// Cells that starved on the way.
    pub starved: usize,
}

impl Development {
    /// Mean income of the final body's cells relative to e0, before tax; 0 without cells.
    #[must_use]
    pub fn mean_income(&self) -> f64 {
        // A sum of nothing is -0.
        (self.incomes.iter().sum::<f64>() + 0.0) / self.incomes.len().max(1) as f64
    }

    /// Cells born within so many hours.
    #[must_use]
    pub fn born_by(&self, hours: f64) -> usize {
        self.births_h.partition_point(|birth_h| *birth_h <= hours)
    }
}

/// Grows bodies by the same rules, in the same working memory.
#[derive(Debug, Clone)]
pub struct Developer {
    course: Course,
}

impl Developer {
    /// A developer of bodies that grow by `rules`.
    #[must_use]
    pub fn new(rules: GrowthRules) -> Self {
        Self { course: Course::under(rules) }
    }

    /// Grows a body whose cells' incomes are `income_share` of what the fields give (1: untaxed).
    ///
    /// At a share that is not a number nothing grows.
    pub fn develop(&mut self, income_share: f64, rng: &mut impl Rng) -> Development {
        self.course.run(income_share, rng)
    }
}

#[cfg(test)]
mod tests;
