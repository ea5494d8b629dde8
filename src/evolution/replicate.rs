//! One replicate: a population that evolves from census to census.

use super::bodies;
use super::census::{self, CellKinds};
use super::onset::OnsetWatch;
use super::route::routes;
use super::seeding::{generator, replicate_seed};
use crate::record::{BodyRow, CensusRow, Outcome, ReplicateRecord, ReplicateRow, Stage};
use crate::scenario::Settings;
use crate::theory::{BodyClass, Cue, Programme};
use crate::world::Population;
use crate::world::resources::Genotype;

/// What a replicate starts from, where the scenario leaves it to theory.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Start {
    /// The programme that every founder carries.
    pub programme: Programme,
    /// Hours over which settlement is batched.
    pub tick_h: f64,
}

/// Ticks between two looks at whether the run is to stop: a few milliseconds of common scenarios.
const TICKS_BETWEEN_QUESTIONS: u32 = 256;
/// The same where bodies are worked out in space, and a tick can take long.
const TICKS_BETWEEN_QUESTIONS_IN_SPACE: u32 = 4;

/// A replicate under way.
pub struct Replicate<'s> {
    settings: &'s Settings,
    number: u32,
    seed: u64,
    population: Population,
    watch: OnsetWatch,
    censuses: Vec<CensusRow>,
    start_bodies: Vec<BodyRow>,
    onset_bodies: Vec<BodyRow>,
}

impl<'s> Replicate<'s> {
    /// Founds replicate `number` of a plain run.
    #[must_use]
    pub fn found(settings: &'s Settings, start: Start, number: u32) -> Self {
        let seed = replicate_seed(settings.seed, 0, u64::from(number));
        let founder = |site| Genotype::of_founder(start.programme, site);
        let population = Population::founded(settings, start.tick_h, generator(seed), founder);
        Self {
            settings,
            number,
            seed,
            population,
            watch: OnsetWatch::new(&settings.onset),
            censuses: Vec::new(),
            start_bodies: Vec::new(),
            onset_bodies: Vec::new(),
        }
    }

    /// Runs to the next census and takes it; `None` when the replicate is over, or when `stopped`,
    /// asked now and then, says so.
    ///
    /// The first census is taken as soon as there are adults.
    pub fn advance(&mut self, stopped: impl Fn() -> bool) -> Option<&CensusRow> {
        if self.is_over() {
            return None;
        }
        let due = self.next_census_generation();
        let pause = if self.settings.is_spatial() {
            TICKS_BETWEEN_QUESTIONS_IN_SPACE
        } else {
            TICKS_BETWEEN_QUESTIONS
        };
        for ticks in 1_u32.. {
            self.population.tick();
            let first = self.censuses.is_empty() && self.population.adults().next().is_some();
            let reached = self.population.clock().generation >= due;
            if first || reached || self.population.alive() == 0 {
                break;
            }
            // Asked last: a census that is due is never passed over, nor a replicate over without it.
            if ticks.is_multiple_of(pause) && stopped() {
                return None;
            }
        }
        self.take_census();
        self.censuses.last()
    }

    /// Generations so far.
    #[must_use]
    pub fn generation(&self) -> f64 {
        self.population.clock().generation
    }

    /// Cells born so far.
    #[must_use]
    pub fn cell_lives(&self) -> u64 {
        self.population.ledger().cell_lives
    }

    /// Whether the last generation has passed, the population has died out, or onset is confirmed
    /// where the scenario stops there.
    #[must_use]
    pub fn is_over(&self) -> bool {
        let run = &self.settings.run;
        self.population.alive() == 0
            || self.generation() >= run.generations as f64
            || (run.stop_after_onset && self.watch.onset().is_some())
    }

    /// All that the replicate leaves, up to where it has come.
    #[must_use]
    pub fn finish(mut self) -> ReplicateRecord {
        let diameter_um = self.settings.body.cell_diameter_um;
        let end = bodies::sample(&mut self.population, self.number, Stage::End, diameter_um);
        let row = self.row();
        let mut sampled = self.start_bodies;
        if row.onset_generation.is_some() {
            sampled.append(&mut self.onset_bodies);
        }
        sampled.extend(end);
        ReplicateRecord { row, census: self.censuses, bodies: sampled }
    }

    fn next_census_generation(&self) -> f64 {
        let every = self.settings.run.census_every;
        #[expect(clippy::cast_sign_loss, reason = "generations are counted up from 0")]
        let next = (self.generation() / every as f64) as u64 + 1;
        // The last census is at the end, even where that is no multiple of the interval.
        let due = if self.censuses.is_empty() { every } else { next * every };
        due.min(self.settings.run.generations) as f64
    }

    fn take_census(&mut self) {
        let row = census::take(&mut self.population, self.settings, self.number);
        let diameter_um = self.settings.body.cell_diameter_um;
        let mut sample =
            |stage| bodies::sample(&mut self.population, self.number, stage, diameter_um);
        if self.censuses.is_empty() {
            self.start_bodies = sample(Stage::Start);
        }
        if self.watch.see(row.generation, row.division_index) {
            self.onset_bodies = sample(Stage::Onset);
        }
        self.censuses.push(row);
    }

    fn row(&mut self) -> ReplicateRow {
        let last = self.censuses.last().filter(|_| self.population.alive() > 0);
        let (division_index, soma_fraction, adult_cells) = last.map_or((None, None, None), |row| {
            (row.division_index, row.soma_share, row.adult_cells)
        });
        let outcome = match (self.watch.onset(), self.population.alive()) {
            (Some(_), _) => Outcome::Onset,
            (None, 0) => Outcome::Extinct,
            (None, _) => Outcome::Censored,
        };
        let class = self.commonest_class();
        let mean_fitness = self.mean_fitness();
        let shares = routes(self.population.adults(), &self.settings.traits);
        let route = |cue: Cue| {
            shares.filter(|_| self.settings.traits.cues.contains(cue)).map(|s| s[cue.index()])
        };
        ReplicateRow {
            replicate: self.number,
            seed: self.seed,
            outcome,
            onset_generation: self.watch.onset(),
            end_generation: self.generation(),
            division_index,
            soma_fraction,
            class,
            route_noise: route(Cue::Noise),
            route_lineage: route(Cue::Lineage),
            route_exposure: route(Cue::Exposure),
            route_income: route(Cue::Income),
            mean_fitness,
            adult_cells,
            never_matured: self.population.ledger().never_matured,
        }
    }

    /// The commonest class of adult bodies; of equally common ones the less differentiated.
    fn commonest_class(&mut self) -> Option<BodyClass> {
        let mut counts = [0_usize; BodyClass::ALL.len()];
        for body in self.population.adults() {
            counts[CellKinds::of(body.shares, &self.settings.onset).class() as usize] += 1;
        }
        let best = *counts.iter().max()?;
        BodyClass::ALL.into_iter().find(|class| best > 0 && counts[*class as usize] == best)
    }

    /// Mean over adults of the propagules each expects to release, `F / (c_p m)`.
    fn mean_fitness(&mut self) -> Option<f64> {
        let life = &self.settings.life;
        let scale = self.settings.budget.income_eu_per_h / life.propagule_cost_eu;
        let (mut sum, mut adults) = (0.0, 0.0);
        for body in self.population.adults() {
            sum += scale * body.vitals.fecundity / body.vitals.hazard_per_h;
            adults += 1.0;
        }
        (adults > 0.0).then(|| sum / adults)
    }
}
