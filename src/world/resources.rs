//! What mechanisms share: the clock, the calendar of events, the gene pool, the rules.

use std::cmp::Reverse;
use std::collections::BinaryHeap;

use bevy_ecs::prelude::*;
use rand_xoshiro::Xoshiro256PlusPlus;

use crate::scenario::Settings;
use crate::theory::Programme;
use crate::tissue::Pace;

/// The scenario, as the mechanisms read it.
#[derive(Resource, Debug, Clone)]
pub struct Rules(pub Settings);

impl Rules {
    /// Share of their income that cells of a programme keep from the tax on responsiveness:
    /// `max(0, 1 - cost_per_unit * sum_k |g_k|)`.
    #[must_use]
    pub fn kept_share(&self, programme: &Programme) -> f64 {
        (1.0 - self.0.traits.cost_per_unit * programme.total_responsiveness()).max(0.0)
    }

    /// Income of a fully fed cell of a programme after tax, eu/h.
    #[must_use]
    pub fn taxed_income_eu_per_h(&self, programme: &Programme) -> f64 {
        self.0.budget.income_eu_per_h * self.kept_share(programme)
    }

    /// How fast the cells of a programme save while they grow.
    #[must_use]
    pub fn pace(&self, programme: &Programme) -> Pace {
        let budget = &self.0.budget;
        Pace {
            net_income_eu_per_h: self.taxed_income_eu_per_h(programme) - budget.upkeep_eu_per_h,
            division_cost_eu: budget.division_cost_eu,
            division_cv: budget.division_cv,
        }
    }
}

/// The replicate's one source of randomness.
#[derive(Resource, Debug, Clone)]
pub struct Random(pub Xoshiro256PlusPlus);

/// The hours of the tick at hand, and generations so far.
#[derive(Resource, Debug, Clone)]
pub struct Clock {
    /// Length of a tick, h.
    pub tick_h: f64,
    /// Ticks begun.
    pub ticks: u64,
    /// Start of the tick, h.
    pub from_h: f64,
    /// End of the tick, h.
    pub now_h: f64,
    /// Settlements over colonies alive, accumulated.
    pub generation: f64,
}

/// A site's next event and when it comes; ties go by site.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Event {
    /// When, h.
    pub at_h: f64,
    /// Where.
    pub site: u32,
}

impl Eq for Event {}

impl Ord for Event {
    fn cmp(&self, other: &Self) -> std::cmp::Ordering {
        self.at_h.total_cmp(&other.at_h).then(self.site.cmp(&other.site))
    }
}

impl PartialOrd for Event {
    fn partial_cmp(&self, other: &Self) -> Option<std::cmp::Ordering> {
        Some(self.cmp(other))
    }
}

/// Events to come, in order of time: a colony sleeps until its next one.
#[derive(Resource, Debug, Clone, Default)]
pub struct Calendar {
    adulthoods: BinaryHeap<Reverse<Event>>,
    deaths: BinaryHeap<Reverse<Event>>,
    replacements: BinaryHeap<Reverse<Event>>,
}

impl Calendar {
    /// Notes that the colony of `event.site` will be adult then.
    pub fn expect_adulthood(&mut self, event: Event) {
        self.adulthoods.push(Reverse(event));
    }

    /// Notes that the colony of `event.site` will die then.
    pub fn expect_death(&mut self, event: Event) {
        self.deaths.push(Reverse(event));
    }

    /// Notes that a cell of the colony of `event.site` will be replaced then.
    pub fn expect_replacement(&mut self, event: Event) {
        self.replacements.push(Reverse(event));
    }

    /// When the next event is due, h; none when nobody is alive.
    #[must_use]
    pub fn next_event_h(&self) -> Option<f64> {
        let first = |queue: &BinaryHeap<Reverse<Event>>| queue.peek().map(|next| next.0.at_h);
        let all = [&self.adulthoods, &self.deaths, &self.replacements];
        all.into_iter().filter_map(first).reduce(f64::min)
    }

    /// The next colony to be adult by `now_h`.
    pub fn next_adulthood(&mut self, now_h: f64) -> Option<Event> {
        pop_due(&mut self.adulthoods, now_h)
    }

    /// The next colony to be dead by `now_h`.
    pub fn next_death(&mut self, now_h: f64) -> Option<Event> {
        pop_due(&mut self.deaths, now_h)
    }

    /// The next colony with a cell to be replaced by `now_h`.
    pub fn next_replacement(&mut self, now_h: f64) -> Option<Event> {
        pop_due(&mut self.replacements, now_h)
    }
}

fn pop_due(queue: &mut BinaryHeap<Reverse<Event>>, now_h: f64) -> Option<Event> {
    if queue.peek().is_some_and(|Reverse(event)| event.at_h <= now_h) {
        queue.pop().map(|Reverse(event)| event)
    } else {
        None
    }
}

/// What a propagule inherits.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Genotype {
    /// The developmental programme.
    pub programme: Programme,
    /// Which founder of the population it descends from.
    pub founder: u32,
    /// Neutral marker that never recurs; on a torus a settler now and then starts a new one.
    pub line: u64,
}

impl Genotype {
    /// What the propagule that founds site `site` of a population carries: a line of its own.
    #[must_use]
    pub fn of_founder(programme: Programme, site: u32) -> Self {
        Self { programme, founder: site, line: u64::from(site) }
    }
}

/// The genotypes cells carry; while bodies are clonal, entry s belongs to the colony of site s.
#[derive(Resource, Debug, Clone)]
pub struct GenePool(pub Vec<Genotype>);

/// Sites whose colonies became adult in this tick, in order of time.
#[derive(Resource, Debug, Clone, Default)]
pub struct Maturing(pub Vec<u32>);

/// Sites without a colony, in ascending order.
#[derive(Resource, Debug, Clone, Default)]
pub struct Vacancies(pub Vec<u32>);

/// Propagules each site's colony released in this tick, and their sum.
#[derive(Resource, Debug, Clone, Default)]
pub struct Released {
    /// Per site.
    pub by_site: Vec<u32>,
    /// Over all sites.
    pub total: u64,
}

/// Propagules that adults released before the last change of their stock's growth; none where cells
/// are not replaced.
#[derive(Resource, Debug, Clone, Default)]
pub struct EarlierReleases {
    /// Since the colony's adulthood, by site.
    pub of_life: Vec<u64>,
    /// In this tick: sites and numbers, a site as often as its stock changed.
    pub of_tick: Vec<(u32, u64)>,
}

impl EarlierReleases {
    /// Nothing has been released in this tick yet; there are so many sites.
    pub fn begin_tick(&mut self, sites: usize) {
        self.of_tick.clear();
        self.of_life.resize(sites, 0);
    }
}

/// A propagule that has found an empty site.
#[derive(Debug, Clone, Copy)]
pub struct Settler {
    /// Where it settles.
    pub site: u32,
    /// What it inherits.
    pub genotype: Genotype,
}

/// Propagules that settle in this tick.
#[derive(Resource, Debug, Clone, Default)]
pub struct Settlers(pub Vec<Settler>);

/// Counts kept for censuses and tests.
#[derive(Resource, Debug, Clone, Default, PartialEq)]
pub struct Ledger {
    /// Cells born so far, founders of bodies among them.
    pub cell_lives: u64,
    /// Propagules that settled.
    pub settlements: u64,
    /// Colonies that died.
    pub deaths: u64,
    /// Cells of adults that were replaced.
    pub replacements: u64,
    /// Colonies that settled and whose growth stops short of adult size.
    pub never_matured: u64,
    /// Propagules released over their whole life by colonies that died.
    pub lifetime_propagules: u64,
    /// Parents' ages at the settlements since the last census, h.
    pub parental_age_h: f64,
    /// Settlements since the last census.
    pub recent_settlements: u64,
}
