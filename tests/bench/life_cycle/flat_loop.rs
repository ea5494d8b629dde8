//! The life cycle of the reference case as a plain loop over flat arrays: what the ECS is measured
//! against.
//!
//! It draws the same random numbers in the same order as the world, so that both must end with the
//! same counts and the same genotypes. It knows one case only: noise cue, pooled support, propagules
//! of one genotype, no juvenile hazard. Bodies grow by the same code (`tissue`), since placement on
//! the lattice has nothing to do with how colonies are stored.

#![expect(clippy::cast_sign_loss, reason = "hours and probabilities are never negative")]

use std::cmp::Reverse;
use std::collections::BinaryHeap;

use rand::seq::index;
use rand::{Rng, RngExt};
use rand_xoshiro::Xoshiro256PlusPlus;

use somadawn::scenario::Settings;
use somadawn::theory::{Cue, Programme};
use somadawn::tissue::{Growth, Pace};
use somadawn::world::components::{HeadStart, PropaguleStock, StockRate, StockSince, StockUntil};
use somadawn::world::draws::{exponential, geometric, mutated, weighted_index};
use somadawn::world::resources::{Event, Genotype, Ledger};

/// One site's colony, or what the last one left.
#[derive(Debug, Clone, Copy)]
struct Colony {
    adult: bool,
    empty: bool,
    founded_h: f64,
    adult_h: f64,
    dies_h: f64,
    viability: f64,
    fecundity: f64,
}

/// Stocks for propagules, one array per number: all sites are gone through at every tick.
#[derive(Debug, Clone)]
struct Stocks {
    since_h: Vec<f64>,
    until_h: Vec<f64>,
    head_start: Vec<f64>,
    per_h: Vec<f64>,
}

impl Stocks {
    fn none(sites: usize) -> Self {
        let zeros = || vec![0.0; sites];
        Self { since_h: zeros(), until_h: zeros(), head_start: zeros(), per_h: zeros() }
    }

    fn of(&self, site: usize) -> PropaguleStock {
        PropaguleStock {
            since: StockSince(self.since_h[site]),
            until: StockUntil(self.until_h[site]),
            head_start: HeadStart(self.head_start[site]),
            rate: StockRate(self.per_h[site]),
        }
    }
}

/// Cells as one array per property, each site's cells side by side.
#[derive(Debug, Clone)]
struct Cells {
    places: Vec<u32>,
    labels: Vec<i8>,
    reserves_eu: Vec<f32>,
    genotypes: Vec<u32>,
    exposed: Vec<bool>,
    noise: Vec<i8>,
    shares: Vec<f32>,
    budgets: Vec<[f32; 2]>,
    viability: Vec<f32>,
    fecundity: Vec<f32>,
}

impl Cells {
    fn blank(count: usize) -> Self {
        Self {
            places: vec![0; count],
            labels: vec![0; count],
            reserves_eu: vec![0.0; count],
            genotypes: vec![0; count],
            exposed: vec![false; count],
            noise: vec![0; count],
            shares: vec![0.0; count],
            budgets: vec![[0.0; 2]; count],
            viability: vec![0.0; count],
            fecundity: vec![0.0; count],
        }
    }
}

/// The whole population.
pub(crate) struct FlatLoop {
    settings: Settings,
    rng: Xoshiro256PlusPlus,
    growth: Growth,
    cells: Cells,
    colonies: Vec<Colony>,
    stocks: Stocks,
    genotypes: Vec<Genotype>,
    adulthoods: BinaryHeap<Reverse<Event>>,
    deaths: BinaryHeap<Reverse<Event>>,
    vacancies: Vec<u32>,
    released: Vec<u32>,
    maturing: Vec<usize>,
    settlers: Vec<(usize, Genotype)>,
    tick_h: f64,
    ticks: u64,
    /// Generations so far.
    pub(crate) generation: f64,
    /// What was counted so far.
    pub(crate) ledger: Ledger,
}

impl FlatLoop {
    /// A propagule of `founder(s)` on every site s.
    pub(crate) fn founded(
        settings: &Settings,
        tick_h: f64,
        rng: Xoshiro256PlusPlus,
        founder: impl Fn(u32) -> Genotype,
    ) -> Self {
        let (sites, n) = (settings.habitat.sites, settings.body.adult_cells);
        let nobody = Colony {
            adult: false,
            empty: true,
            founded_h: 0.0,
            adult_h: 0.0,
            dies_h: 0.0,
            viability: 0.0,
            fecundity: 0.0,
        };
        let mut flat = Self {
            rng,
            growth: Growth::of_clump(settings.life.propagule_cells, n),
            cells: Cells::blank(sites * n),
            colonies: vec![nobody; sites],
            stocks: Stocks::none(sites),
            genotypes: (0..sites as u32).map(&founder).collect(),
            adulthoods: BinaryHeap::new(),
            deaths: BinaryHeap::new(),
            vacancies: Vec::new(),
            released: vec![0; sites],
            maturing: Vec::new(),
            settlers: (0..sites).map(|site| (site, founder(site as u32))).collect(),
            tick_h,
            ticks: 0,
            generation: 0.0,
            ledger: Ledger::default(),
            settings: settings.clone(),
        };
        flat.grow(0.0);
        flat
    }

    /// Colonies alive, growing ones among them.
    pub(crate) fn alive(&self) -> usize {
        self.genotypes.len() - self.vacancies.len()
    }

    /// Lets one tick pass.
    pub(crate) fn tick(&mut self) {
        if self.vacancies.is_empty() {
            let next_h = [&self.adulthoods, &self.deaths]
                .into_iter()
                .filter_map(|queue| queue.peek().map(|next| next.0.at_h))
                .fold(f64::INFINITY, f64::min);
            self.ticks = self.ticks.max((next_h / self.tick_h) as u64);
        }
        let from_h = self.ticks as f64 * self.tick_h;
        self.ticks += 1;
        let now_h = self.ticks as f64 * self.tick_h;
        self.mature(now_h);
        self.bury(now_h);
        self.settlers.clear();
        if !self.vacancies.is_empty() {
            let released = self.release(from_h, now_h);
            self.settle(released, now_h);
            if self.alive() > 0 {
                self.generation += self.settlers.len() as f64 / self.alive() as f64;
            }
            self.grow(now_h);
        }
    }

    /// Genotypes of all colonies alive, in site order.
    pub(crate) fn genotypes(&self) -> impl Iterator<Item = &Genotype> {
        let alive = self.genotypes.iter().zip(&self.colonies).filter(|(_, colony)| !colony.empty);
        alive.map(|(genotype, _)| genotype)
    }

    fn mature(&mut self, now_h: f64) {
        self.maturing.clear();
        while let Some(event) = due(&mut self.adulthoods, now_h) {
            self.maturing.push(event.site as usize);
        }
        for turn in 0..self.maturing.len() {
            self.differentiate(self.maturing[turn]);
        }
        for &site in &self.maturing {
            let (life, colony) = (&self.settings.life, &mut self.colonies[site]);
            colony.adult = true;
            let hazard = life.extrinsic_hazard_per_h + life.adult_hazard_per_h / colony.viability;
            colony.dies_h = colony.adult_h + exponential(&mut self.rng) / hazard;
            self.stocks.since_h[site] = colony.adult_h;
            self.stocks.until_h[site] = colony.dies_h;
            self.stocks.head_start[site] = self.rng.random::<f64>() - 0.5;
            let income = self.settings.budget.income_eu_per_h;
            self.stocks.per_h[site] = colony.fecundity * income / life.propagule_cost_eu;
            self.deaths.push(Reverse(Event { at_h: colony.dies_h, site: site as u32 }));
        }
    }

    /// Draws every cell's luck and works out what it makes of it.
    fn differentiate(&mut self, site: usize) {
        let n = self.settings.body.adult_cells;
        let programme = &self.genotypes[site].programme;
        let p = programme.noise_probability();
        let threshold = (p * 4_294_967_296.0) as u64;
        let rows = site * n..(site + 1) * n;
        for pair in self.cells.noise[rows.clone()].chunks_mut(2) {
            let random = self.rng.next_u64();
            let halves = [random >> 32, random & 0xffff_ffff];
            for (draw, half) in pair.iter_mut().zip(halves) {
                *draw = if half < threshold { 1 } else { -1 };
            }
        }
        let fates = [-1.0, 1.0].map(|luck| self.fate(programme, luck - (2.0 * p - 1.0)));
        let mut sums = [0.0_f64; 2];
        for row in rows {
            let fate = &fates[usize::from(self.cells.noise[row] > 0)];
            self.cells.shares[row] = fate[0];
            self.cells.budgets[row] = [fate[1], fate[2]];
            self.cells.viability[row] = fate[3];
            self.cells.fecundity[row] = fate[4];
            sums[0] += f64::from(fate[3]);
            sums[1] += f64::from(fate[4]);
        }
        self.colonies[site].viability = sums[0] / n as f64;
        self.colonies[site].fecundity = sums[1];
    }

    /// Soma share, soma and germ budget, viability and fecundity output of a cell with that luck.
    fn fate(&self, programme: &Programme, luck: f64) -> [f32; 5] {
        let mut cues = [0.0; Cue::COUNT];
        cues[Cue::Noise.index()] = luck;
        let z = programme.soma_share(&cues);
        let full = self.settings.budget.income_eu_per_h;
        let (soma, germ) = (full * z, full * (1.0 - z));
        let returns = &self.settings.returns;
        let viability = returns.viability.value(soma / full, false);
        let fecundity = returns.fecundity.value(germ / full, false);
        [z, soma, germ, viability, fecundity].map(|value| value as f32)
    }

    fn bury(&mut self, now_h: f64) {
        let before = self.vacancies.len();
        while let Some(event) = due(&mut self.deaths, now_h) {
            let site = event.site as usize;
            let colony = &mut self.colonies[site];
            self.ledger.lifetime_propagules +=
                self.stocks.of(site).released_between(colony.adult_h, colony.dies_h);
            (colony.adult, colony.empty) = (false, true);
            self.ledger.deaths += 1;
            self.vacancies.push(event.site);
        }
        if self.vacancies.len() > before {
            self.vacancies.sort_unstable();
        }
    }

    /// Counts the propagules of each site between two dates, and all of them.
    fn release(&mut self, from_h: f64, to_h: f64) -> u64 {
        let mut total = 0;
        let Stocks { since_h, until_h, head_start, per_h } = &self.stocks;
        let stocks = since_h.iter().zip(until_h).zip(head_start).zip(per_h);
        for (count, (((since_h, until_h), head_start), per_h)) in
            self.released.iter_mut().zip(stocks)
        {
            let stock = PropaguleStock {
                since: StockSince(*since_h),
                until: StockUntil(*until_h),
                head_start: HeadStart(*head_start),
                rate: StockRate(*per_h),
            };
            let here = stock.released_between(from_h, to_h);
            *count = here as u32;
            total += here;
        }
        total
    }

    fn settle(&mut self, released: u64, now_h: f64) {
        let sites = self.genotypes.len() as f64;
        let (empty, mut free) = (self.vacancies.len(), self.vacancies.len());
        let mut left = released as f64;
        while released > 0 && free > 0 {
            left -= geometric(free as f64 / sites, &mut self.rng);
            if left < 0.0 {
                break;
            }
            let landed = self.rng.random_range(0..free);
            free -= 1;
            self.vacancies.swap(landed, free);
        }
        if free == empty {
            return;
        }
        let released = released as usize;
        let mut propagules = index::sample(&mut self.rng, released, empty - free).into_vec();
        propagules.sort_unstable();
        let (mut parent, mut passed) = (0, self.released[0] as usize);
        for (turn, propagule) in propagules.into_iter().enumerate() {
            while passed <= propagule {
                parent += 1;
                passed += self.released[parent] as usize;
            }
            let genotype = self.inherited(parent);
            self.settlers.push((self.vacancies[free + turn] as usize, genotype));
            let colony = &self.colonies[parent];
            self.ledger.parental_age_h += now_h.min(colony.dies_h) - colony.founded_h;
        }
        self.vacancies.truncate(free);
        self.vacancies.sort_unstable();
        self.ledger.recent_settlements += self.settlers.len() as u64;
        self.ledger.settlements += self.settlers.len() as u64;
    }

    /// What a propagule of the colony on site `parent` inherits.
    fn inherited(&mut self, parent: usize) -> Genotype {
        let n = self.settings.body.adult_cells;
        let body = &self.cells.fecundity[parent * n..(parent + 1) * n];
        let total = self.colonies[parent].fecundity;
        let mother = weighted_index(body, |fecundity| *fecundity, total, &mut self.rng);
        let source = self.genotypes[self.cells.genotypes[parent * n + mother] as usize];
        let programme = mutated(&source.programme, &self.settings.traits, &mut self.rng);
        Genotype { programme, ..source }
    }

    /// Grows the bodies of this tick's settlers.
    fn grow(&mut self, now_h: f64) {
        let (budget, n) = (&self.settings.budget, self.settings.body.adult_cells);
        let pace = Pace {
            net_income_eu_per_h: budget.income_eu_per_h - budget.upkeep_eu_per_h,
            division_cost_eu: budget.division_cost_eu,
            division_cv: budget.division_cv,
        };
        for &(site, genotype) in &self.settlers {
            self.genotypes[site] = genotype;
            let body = self.growth.grow(&pace, f64::INFINITY, &mut self.rng);
            let (rows, adult_h) = (site * n..(site + 1) * n, now_h + body.duration_h);
            self.cells.places[rows.clone()].copy_from_slice(body.places);
            self.cells.labels[rows.clone()].copy_from_slice(body.labels);
            self.cells.reserves_eu[rows.clone()].copy_from_slice(body.reserves_eu);
            self.cells.genotypes[rows.clone()].fill(site as u32);
            for (exposed, surface) in self.cells.exposed[rows].iter_mut().zip(self.growth.exposed())
            {
                *exposed = surface;
            }
            let colony = &mut self.colonies[site];
            (colony.empty, colony.founded_h) = (false, now_h);
            (colony.adult_h, colony.dies_h) = (adult_h, f64::INFINITY);
            self.adulthoods.push(Reverse(Event { at_h: adult_h, site: site as u32 }));
            self.ledger.cell_lives += n as u64;
        }
    }
}

/// The next event of a queue that is due.
fn due(queue: &mut BinaryHeap<Reverse<Event>>, now_h: f64) -> Option<Event> {
    let first = queue.peek().filter(|next| next.0.at_h <= now_h)?.0;
    queue.pop();
    Some(first)
}
