//! Propagules land, and the first to land on an empty site settles it.

use bevy_ecs::prelude::*;
use rand::{Rng, RngExt};

use super::landing::Landing;
use super::only_table;
use crate::scenario::settings::Layout;
use crate::world::components::{GenotypeId, Lifespan, Output, Vitals};
use crate::world::draws::{mutated, weighted_index};
use crate::world::resources::{
    Clock, GenePool, Genotype, Ledger, Random, Released, Rules, Settler, Settlers, Vacancies,
};

/// Draws which propagules of this tick settle, and what they inherit.
///
/// On a torus a settler starts a new neutral line with probability 1/N, N the number of sites: in a
/// mixed habitat two colonies would then carry the same line half of the time.
#[expect(clippy::too_many_arguments, reason = "a system names everything it touches")]
pub fn settle_propagules(
    rules: Res<Rules>,
    clock: Res<Clock>,
    released: Res<Released>,
    pool: Res<GenePool>,
    mut landing: Local<Option<Landing>>,
    mut random: ResMut<Random>,
    mut vacancies: ResMut<Vacancies>,
    mut settlers: ResMut<Settlers>,
    mut ledger: ResMut<Ledger>,
    mut cells: Query<(&Output, &GenotypeId)>,
    mut colonies: Query<(&Lifespan, &Vitals)>,
) {
    settlers.0.clear();
    let landing = landing.get_or_insert_with(|| Landing::within(&rules.0.habitat));
    let comers = landing.first_comers(&released, &mut vacancies, &mut random.0);
    if comers.is_empty() {
        return;
    }
    let bodies = only_table(cells.contiguous_iter_mut());
    let (lives, vitals) = only_table(colonies.contiguous_iter_mut());
    let marked = rules.0.habitat.layout != Layout::Mixed;
    let sites = rules.0.habitat.sites as u64;
    for (comer, order) in comers.into_iter().zip(ledger.settlements..) {
        let (site, parent) = (comer.site, comer.parent);
        let total = vitals[parent].fecundity;
        let mut genotype = inherited(&rules, &pool, bodies, parent, total, &mut random.0);
        if marked && random.0.random_range(0..sites) == 0 {
            // Founders carry the lines below N.
            genotype.line = sites + order;
        }
        settlers.0.push(Settler { site, genotype });
        ledger.parental_age_h += clock.now_h.min(lives[parent].dies_h) - lives[parent].founded_h;
    }
    ledger.recent_settlements += settlers.0.len() as u64;
}

/// The genotype of a cell of the parent drawn with probability proportional to `b_i`, mutated.
fn inherited(
    rules: &Rules,
    pool: &GenePool,
    (outputs, genotypes): (&[Output], &[GenotypeId]),
    parent: usize,
    total_fecundity: f64,
    rng: &mut impl Rng,
) -> Genotype {
    let n = rules.0.body.adult_cells;
    let body = &outputs[parent * n..(parent + 1) * n];
    let mother = weighted_index(body, |cell| cell.fecundity, total_fecundity, rng);
    let source = pool.0[genotypes[parent * n + mother].0 as usize];
    Genotype { programme: mutated(&source.programme, &rules.0.traits, rng), ..source }
}

/// Gives the sites of this tick's settlers their genotypes and counts the generation on.
pub fn found_colonies(
    rules: Res<Rules>,
    settlers: Res<Settlers>,
    vacancies: Res<Vacancies>,
    mut pool: ResMut<GenePool>,
    mut clock: ResMut<Clock>,
    mut ledger: ResMut<Ledger>,
) {
    for settler in &settlers.0 {
        pool.0[settler.site as usize] = settler.genotype;
    }
    ledger.settlements += settlers.0.len() as u64;
    let alive = rules.0.habitat.sites - vacancies.0.len();
    if alive > 0 {
        clock.generation += settlers.0.len() as f64 / alive as f64;
    }
}
