//! Settled propagules grow by division on their body's lattice.
//!
//! Nothing outside a colony acts on its growth, so its divisions are played at once when it is
//! founded; it then sleeps until the date of its adulthood or of its death as a juvenile.

use bevy_ecs::prelude::*;

use super::only_table;
use crate::tissue::Arrangement;
use crate::world::components::{
    CellCount, DivisionLabel, Exposed, GenotypeId, Lifespan, Phase, Place, Reserve,
};
use crate::world::draws::exponential;
use crate::world::resources::{
    Calendar, Clock, Event, GenePool, Ledger, Nursery, Random, Rules, Settlers,
};

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
        let pace = rules.pace(&pool.0[site].programme);
        let doom_h = juvenile_doom_h(&rules, &mut random);
        let body = nursery.0.grow(&pace, doom_h, &mut random.0);
        let (held, grown_h) = (body.places.len() as u32, body.duration_h);
        columns.house(site * capacity, settler.site, &body);
        let life = dates(clock.now_h, grown_h, doom_h);
        if life.adult_h < life.dies_h {
            columns.mark_surface(site * capacity, nursery.0.exposed());
        }
        if life.adult_h < life.dies_h {
            calendar.expect_adulthood(Event { at_h: life.adult_h, site: settler.site });
        } else {
            calendar.expect_death(Event { at_h: life.dies_h, site: settler.site });
        }
        phases[site] = Phase::Growing;
        lives[site] = life;
        counts[site] = CellCount(held);
        ledger.cell_lives += u64::from(held);
    }
}

/// Hours from settlement to death as a juvenile, were the colony never to mature.
fn juvenile_doom_h(rules: &Rules, random: &mut Random) -> f64 {
    let hazard_per_h = rules.0.life.juvenile_hazard_per_h;
    if hazard_per_h > 0.0 { exponential(&mut random.0) / hazard_per_h } else { f64::INFINITY }
}

/// Dates of a colony that settles now; the death of one that matures is drawn at adulthood.
///
/// A colony that can neither grow up nor die as a juvenile starves at once.
fn dates(now_h: f64, grown_h: f64, doom_h: f64) -> Lifespan {
    let matures = grown_h.is_finite() && grown_h < doom_h;
    let adult_h = if matures { now_h + grown_h } else { f64::INFINITY };
    let dies_h = match (matures, doom_h.is_finite()) {
        (true, _) => f64::INFINITY,
        (false, true) => now_h + doom_h,
        (false, false) => now_h,
    };
    Lifespan { founded_h: now_h, adult_h, dies_h }
}

/// The columns of cells that growth writes.
struct CellColumns<'w> {
    places: &'w mut [Place],
    labels: &'w mut [DivisionLabel],
    reserves: &'w mut [Reserve],
    genotypes: &'w mut [GenotypeId],
    exposed: &'w mut [Exposed],
}

impl CellColumns<'_> {
    /// Writes a grown body into the rows from `first` on.
    fn house(&mut self, first: usize, genotype: u32, body: &Arrangement<'_>) {
        let rows = first..first + body.places.len();
        for (row, place) in self.places[rows.clone()].iter_mut().zip(body.places) {
            *row = Place(*place);
        }
        for (row, label) in self.labels[rows.clone()].iter_mut().zip(body.labels) {
            *row = DivisionLabel(*label);
        }
        for (row, reserve) in self.reserves[rows.clone()].iter_mut().zip(body.reserves_eu) {
            *row = Reserve(*reserve);
        }
        self.genotypes[rows].fill(GenotypeId(genotype));
    }

    fn mark_surface(&mut self, first: usize, surface: impl Iterator<Item = bool>) {
        for (row, exposed) in self.exposed[first..].iter_mut().zip(surface) {
            *row = Exposed(exposed);
        }
    }
}
