//! A population of colonies: an ECS world and the schedule that moves it.

use bevy_ecs::prelude::*;
use rand_xoshiro::Xoshiro256PlusPlus;

use super::components::{
    Budget, CellBundle, CellCount, ColonyBundle, DivisionLabel, Exposed, NoiseDraw, Output, Phase,
    Place, SomaShare, Support, Vitals,
};
use super::mechanisms::only_table;
use super::nursery::{Nursery, SharedBodies, SharedBody};
use super::resources::{
    Calendar, Clock, EarlierReleases, GenePool, Genotype, Ledger, Maturing, Random, Released,
    Rules, Settler, Settlers, Vacancies,
};
use super::schedule::{founding_schedule, tick_schedule};
use crate::scenario::Settings;
use crate::tissue::site_position_um;

type CellQuery = QueryState<(
    &'static Place,
    &'static DivisionLabel,
    &'static Exposed,
    &'static NoiseDraw,
    &'static SomaShare,
    &'static Budget,
    &'static Output,
    &'static Support,
)>;

/// One evolving population: its world, its schedule and the queries that look at it.
pub struct Population {
    world: World,
    schedule: Schedule,
    cells: CellQuery,
    colonies: QueryState<(&'static Phase, &'static CellCount, &'static Vitals)>,
    adult_cells: usize,
}

/// An adult colony, for looking at.
#[derive(Clone, Copy)]
pub struct ColonyView<'w> {
    /// Its site.
    pub site: usize,
    /// What it inherited.
    pub genotype: &'w Genotype,
    /// What its cells achieve.
    pub vitals: &'w Vitals,
    nursery: &'w Nursery,
    /// Its body, where colonies share bodies.
    pub body: Option<&'w SharedBody>,
    places: &'w [Place],
    /// What its last division made each cell.
    pub labels: &'w [DivisionLabel],
    /// Which cells are exposed.
    pub exposed: &'w [Exposed],
    /// Each cell's luck.
    pub noise: &'w [NoiseDraw],
    /// Each cell's soma share.
    pub shares: &'w [SomaShare],
    /// How each cell splits its income.
    pub budgets: &'w [Budget],
    /// What each cell yields.
    pub outputs: &'w [Output],
    support: Option<&'w [Support]>,
}

impl ColonyView<'_> {
    /// Position of a cell relative to the body's centre, um.
    #[must_use]
    pub fn position_um(&self, cell: usize, cell_diameter_um: f64) -> [f64; 3] {
        let site = match (self.nursery, self.body) {
            (_, Some(body)) => body.development.coordinates[cell],
            (Nursery::Own(growth), _) => {
                growth.lattice().coordinates(self.places[cell].0).map(i32::from)
            }
            (Nursery::Shared(_), None) => [0; 3],
        };
        site_position_um(site, cell_diameter_um)
    }

    /// The income cue of a cell, `(e_i - mean e) / mean e`.
    #[must_use]
    pub fn income_cue(&self, cell: usize) -> f64 {
        self.body.map_or(0.0, |body| body.income_cue(cell))
    }

    /// What a cell receives of the viability task's product.
    #[must_use]
    pub fn support(&self, cell: usize) -> f32 {
        self.support.map_or(self.vitals.viability as f32, |support| support[cell].0)
    }
}

impl Population {
    /// A population with a propagule on every site at hour 0, site s carrying `founder(s)`;
    /// settlement is batched over `tick_h` > 0 hours.
    #[must_use]
    pub fn founded(
        settings: &Settings,
        tick_h: f64,
        rng: Xoshiro256PlusPlus,
        founder: impl Fn(u32) -> Genotype,
    ) -> Self {
        let sites = settings.habitat.sites;
        let adult_cells = settings.body.adult_cells;
        let mut world = World::new();
        world.spawn_batch((0..sites * adult_cells).map(|_| CellBundle::default()));
        world.spawn_batch((0..sites).map(|_| ColonyBundle::default()));
        let genotypes: Vec<Genotype> = (0..sites as u32).map(founder).collect();
        let settlers = (0..).zip(&genotypes).map(|(site, g)| Settler { site, genotype: *g });
        world.insert_resource(Settlers(settlers.collect()));
        world.insert_resource(GenePool(genotypes));
        world.insert_resource(Rules(settings.clone()));
        world.insert_resource(Random(rng));
        let nursery = Nursery::of(settings);
        let shared = if matches!(nursery, Nursery::Shared(_)) { sites } else { 0 };
        world.insert_resource(SharedBodies(vec![None; shared]));
        world.insert_resource(nursery);
        world.insert_resource(Clock { tick_h, ticks: 0, from_h: 0.0, now_h: 0.0, generation: 0.0 });
        world.insert_resource(Released { by_site: vec![0; sites], total: 0 });
        world.init_resource::<Calendar>();
        world.init_resource::<Maturing>();
        world.init_resource::<Vacancies>();
        world.init_resource::<EarlierReleases>();
        world.init_resource::<Ledger>();
        founding_schedule().run(&mut world);
        world.resource_mut::<Clock>().generation = 0.0;
        let &Ledger { cell_lives, never_matured, .. } = world.resource::<Ledger>();
        *world.resource_mut::<Ledger>() = Ledger { cell_lives, never_matured, ..Ledger::default() };
        Self {
            cells: QueryState::new(&mut world),
            colonies: QueryState::new(&mut world),
            schedule: tick_schedule(),
            world,
            adult_cells,
        }
    }

    /// Lets one tick pass.
    pub fn tick(&mut self) {
        self.schedule.run(&mut self.world);
    }

    /// Hours since the start and generations so far.
    #[must_use]
    pub fn clock(&self) -> &Clock {
        self.world.resource::<Clock>()
    }

    /// What was counted so far.
    #[must_use]
    pub fn ledger(&self) -> &Ledger {
        self.world.resource::<Ledger>()
    }

    /// Mean age of parents at the settlements since the last call, h; none if nothing settled.
    pub fn take_parental_age_h(&mut self) -> Option<f64> {
        let mut ledger = self.world.resource_mut::<Ledger>();
        let (age_h, count) = (ledger.parental_age_h, ledger.recent_settlements);
        (ledger.parental_age_h, ledger.recent_settlements) = (0.0, 0);
        (count > 0).then(|| age_h / count as f64)
    }

    /// Colonies alive, growing ones among them.
    #[must_use]
    pub fn alive(&self) -> usize {
        let rules = self.world.resource::<Rules>();
        rules.0.habitat.sites - self.world.resource::<Vacancies>().0.len()
    }

    /// Genotypes of all colonies alive, in site order.
    pub fn genotypes(&mut self) -> impl Iterator<Item = &Genotype> {
        let (phases, _, _) = only_table(self.colonies.contiguous_iter(&self.world));
        let pool = &self.world.resource::<GenePool>().0;
        pool.iter().zip(phases).filter(|(_, phase)| **phase != Phase::Empty).map(|(g, _)| g)
    }

    /// Line of the colony on every site, none where a site is empty.
    pub fn lines(&mut self) -> impl Iterator<Item = Option<u64>> {
        let (phases, _, _) = only_table(self.colonies.contiguous_iter(&self.world));
        let pool = &self.world.resource::<GenePool>().0;
        pool.iter().zip(phases).map(|(g, phase)| (*phase != Phase::Empty).then_some(g.line))
    }

    /// Adult colonies in site order.
    pub fn adults(&mut self) -> impl Iterator<Item = ColonyView<'_>> {
        let (phases, counts, vitals) = only_table(self.colonies.contiguous_iter(&self.world));
        let (places, labels, exposed, noise, shares, budgets, outputs, support) =
            only_table(self.cells.contiguous_iter(&self.world));
        let pool = &self.world.resource::<GenePool>().0;
        let nursery = self.world.resource::<Nursery>();
        let bodies = self.world.resource::<SharedBodies>();
        let local = self.world.resource::<Rules>().0.support.is_some();
        let capacity = self.adult_cells;
        let adult = (0..pool.len()).filter(|site| phases[*site] == Phase::Adult);
        adult.map(move |site| {
            let rows = counts[site].rows(site, capacity);
            ColonyView {
                site,
                genotype: &pool[site],
                vitals: &vitals[site],
                nursery,
                body: bodies.of(site),
                places: &places[rows.clone()],
                labels: &labels[rows.clone()],
                exposed: &exposed[rows.clone()],
                noise: &noise[rows.clone()],
                shares: &shares[rows.clone()],
                budgets: &budgets[rows.clone()],
                outputs: &outputs[rows.clone()],
                support: local.then(|| &support[rows]),
            }
        })
    }
}
