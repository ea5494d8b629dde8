//! Development: one body's growth from propagule to adult, as the fields allow it.

use rand::Rng;

use super::fields::Fields;
use super::graph::BodyGraph;
use super::growth::{Growth, Pace};
use super::plan::Plan;
use super::steady::SteadySolver;

/// All that decides how a body grows.
#[derive(Debug, Clone, PartialEq)]
pub struct GrowthRules {
    /// How daughters are placed.
    pub plan: Plan,
    /// Cells of a propagule, at least 1.
    pub propagule_cells: usize,
    /// Births that make a body adult, founders counted (n).
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
    /// Lattice coordinates of each cell (units of `d / sqrt(2)`) relative to the body's centre.
    pub coordinates: Vec<[i16; 3]>,
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
    /// Cells born within so many hours.
    #[must_use]
    pub fn born_by(&self, hours: f64) -> usize {
        self.births_h.partition_point(|birth_h| *birth_h <= hours)
    }
}

/// Grows bodies by the same rules, in the same working memory.
#[derive(Debug, Clone)]
pub struct Developer {
    rules: GrowthRules,
    growth: Growth,
    solver: SteadySolver,
}

impl Developer {
    /// A developer of bodies that grow by `rules`.
    #[must_use]
    pub fn new(rules: GrowthRules) -> Self {
        let growth = Growth::of_clump(rules.propagule_cells, rules.adult_cells);
        Self { rules, growth, solver: SteadySolver::default() }
    }

    /// Grows a body whose cells' incomes are `income_share` of what the fields give (1: untaxed).
    pub fn develop(&mut self, income_share: f64, rng: &mut impl Rng) -> Development {
        let rules = &self.rules;
        let pace = Pace {
            net_income_eu_per_h: income_share * rules.income_eu_per_h - rules.upkeep_eu_per_h,
            division_cost_eu: rules.division_cost_eu,
            division_cv: rules.division_cv,
        };
        let body = self.growth.grow(&pace, f64::INFINITY, rng);
        let (places, labels) = (body.places.to_vec(), body.labels.to_vec());
        let (reserves_eu, duration_h) = (body.reserves_eu.to_vec(), body.duration_h);
        let lattice = self.growth.lattice();
        let mut graph = BodyGraph::with_capacity(places.len());
        for place in &places {
            let touching: Vec<u32> = lattice
                .neighbours(*place)
                .filter_map(|next| places.iter().position(|p| *p == next).map(|i| i as u32))
                .collect();
            let empty = 12 - touching.len() as u8;
            graph.push(touching, empty, empty);
        }
        let mut incomes = vec![1.0; places.len()];
        let (mut u, mut w) = (incomes.clone(), incomes.clone());
        self.solver.incomes(&graph, &rules.fields, [&mut u, &mut w], &mut incomes);
        Development {
            ending: Ending::Adult(duration_h),
            coordinates: places.iter().map(|p| lattice.coordinates(*p).map(i16::from)).collect(),
            births_h: vec![0.0; places.len()],
            labels,
            reserves_eu,
            incomes,
            graph,
            starved: 0,
        }
    }
}
