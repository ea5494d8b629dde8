//! Settled propagules grow by division on their body's lattice.
//!
//! Nothing outside a colony acts on its growth, so its divisions are played at once when it is
//! founded, or a development that was played before is taken; it then sleeps until the date of its
//! adulthood or of its death as a juvenile.

use std::sync::Arc;

use bevy_ecs::prelude::*;
use rand::Rng;

use super::only_table;
use super::plots::{CellColumns, Plot};
use crate::tissue::{Ending, Growth};
use crate::world::components::{
    CellCount, DivisionLabel, Exposed, GenotypeId, Lifespan, Phase, Place, Reserve,
};
use crate::world::draws::exponential;
use crate::world::nursery::{Developments, Nursery, SharedBodies, SharedBody};
use crate::world::resources::{Calendar, Clock, Event, GenePool, Ledger, Random, Rules, Settlers};

type CellQuery<'w, 's> = Query<
    'w,
    's,
    (
        &'static mut Place,
        &'static mut DivisionLabel,
        &'static mut Reserve,
        &'static mut GenotypeId,
        &'static mut Exposed,
    ),
>;

/// Grows every colony founded in this tick and enters its next event in the calendar.
#[expect(clippy::too_many_arguments, reason = "a system names everything it touches")]
pub fn grow_cells(
    rules: Res<Rules>,
    clock: Res<Clock>,
    settlers: Res<Settlers>,
    pool: Res<GenePool>,
    mut random: ResMut<Random>,
    mut nursery: ResMut<Nursery>,
    mut bodies: ResMut<SharedBodies>,
    mut calendar: ResMut<Calendar>,
    mut ledger: ResMut<Ledger>,
    mut cells: CellQuery,
    mut colonies: Query<(&mut Phase, &mut Lifespan, &mut CellCount)>,
) {
    if settlers.0.is_empty() {
        return;
    }
    let (mut places, mut labels, mut reserves, mut genotypes, mut exposed) =
        only_table(cells.contiguous_iter_mut());
    let mut columns = CellColumns {
        places: places.bypass_change_detection(),
        labels: labels.bypass_change_detection(),
        reserves: reserves.bypass_change_detection(),
        genotypes: genotypes.bypass_change_detection(),
        exposed: exposed.bypass_change_detection(),
    };
    let (mut phases, mut lives, mut counts) = only_table(colonies.contiguous_iter_mut());
    let (phases, lives) = (phases.bypass_change_detection(), lives.bypass_change_detection());
    let counts = counts.bypass_change_detection();
    let capacity = rules.0.body.adult_cells;
    for settler in &settlers.0 {
        let site = settler.site as usize;
        let mut plot = Plot { columns: &mut columns, first: site * capacity, site: settler.site };
        let nursling = Nursling {
            rules: &rules,
            genotype: site,
            pool: &pool,
            doom_h: juvenile_doom_h(&rules, &mut random),
        };
        let grown = match &mut *nursery {
            Nursery::Own(growth) => nursling.grow_alone(growth, &mut plot, &mut random.0),
            Nursery::Shared(developments) => {
                let (grown, body) = nursling.take_body(developments, &mut plot, &mut random.0);
                bodies.0[site] = Some(body);
                grown
            }
        };
        let life = dates(clock.now_h, &grown, nursling.doom_h);
        if life.adult_h < life.dies_h {
            calendar.expect_adulthood(Event { at_h: life.adult_h, site: settler.site });
        } else {
            calendar.expect_death(Event { at_h: life.dies_h, site: settler.site });
        }
        phases[site] = Phase::Growing;
        lives[site] = life;
        counts[site] = CellCount(grown.cells);
        ledger.cell_lives += grown.births;
        ledger.never_matured += u64::from(grown.is_stunted(nursling.doom_h));
    }
}

/// Hours from settlement to death as a juvenile, were the colony never to mature.
fn juvenile_doom_h(rules: &Rules, random: &mut Random) -> f64 {
    let hazard_per_h = rules.0.life.juvenile_hazard_per_h;
    if hazard_per_h > 0.0 { exponential(&mut random.0) / hazard_per_h } else { f64::INFINITY }
}

/// What comes of a propagule's growth, at its adulthood or its doom.
#[derive(Debug, Clone, Copy)]
struct Grown {
    /// Hours to adulthood; infinite if that is never reached.
    adult_h: f64,
    /// Hours until growth has stopped short of adult size; infinite if it never does.
    stopped_h: f64,
    /// Cells that live then.
    cells: u32,
    /// Cells that were born until then, founders among them.
    births: u64,
}

impl Grown {
    /// Whether the colony lives to see its growth stop short of adult size.
    fn is_stunted(&self, doom_h: f64) -> bool {
        self.stopped_h.is_finite() && self.stopped_h < doom_h
    }
}

/// Dates of a colony that settles now; the death of one that matures is drawn at adulthood.
///
/// A colony whose growth has stopped short of adult size leaves nobody: it gives up its site then, if it
/// has not died as a juvenile before.
fn dates(now_h: f64, grown: &Grown, doom_h: f64) -> Lifespan {
    let matures = grown.adult_h.is_finite() && grown.adult_h < doom_h;
    let adult_h = if matures { now_h + grown.adult_h } else { f64::INFINITY };
    let dies_h = if matures { f64::INFINITY } else { now_h + doom_h.min(grown.stopped_h) };
    Lifespan { founded_h: now_h, adult_h, dies_h }
}

/// A propagule that has settled.
struct Nursling<'a> {
    rules: &'a Rules,
    genotype: usize,
    pool: &'a GenePool,
    doom_h: f64,
}

impl Nursling<'_> {
    /// Grows a body of its own on its plot.
    fn grow_alone(
        &self,
        growth: &mut Growth,
        plot: &mut Plot<'_, '_>,
        rng: &mut impl Rng,
    ) -> Grown {
        let pace = self.rules.pace(&self.pool.0[self.genotype].programme);
        let body = growth.grow(&pace, self.doom_h, rng);
        let (cells, adult_h) = (body.places.len() as u32, body.duration_h);
        plot.house(&body);
        if adult_h < self.doom_h {
            plot.mark_surface(growth.exposed());
        }
        let stopped_h = match (adult_h.is_finite(), pace.net_income_eu_per_h < 0.0) {
            (true, _) => f64::INFINITY,
            // Its cells live on as long as hungry cells do, or live on without ever dividing.
            (false, true) => self.rules.0.budget.starvation_h,
            (false, false) => 0.0,
        };
        Grown { adult_h, stopped_h, cells, births: u64::from(cells) }
    }

    /// Takes a body from the shared developments to its plot.
    fn take_body(
        &self,
        developments: &mut Developments,
        plot: &mut Plot<'_, '_>,
        rng: &mut impl Rng,
    ) -> (Grown, Arc<SharedBody>) {
        let kept = self.rules.kept_share(&self.pool.0[self.genotype].programme);
        let (body, slowness) = developments.draw(kept, rng);
        let development = &body.development;
        let (adult_h, stopped_h) = match development.ending {
            Ending::Adult(hours) => (hours * slowness, f64::INFINITY),
            Ending::Stunted(hours) => (f64::INFINITY, hours * slowness),
        };
        let births = if adult_h.min(stopped_h) < self.doom_h {
            development.births_h.len()
        } else {
            development.born_by(self.doom_h / slowness)
        };
        if adult_h < self.doom_h {
            plot.furnish(development);
        }
        let cells = development.coordinates.len() as u32;
        (Grown { adult_h, stopped_h, cells, births: births as u64 }, body)
    }
}
