//! Propagules land on sites drawn at random; the first to land on an empty one settles it.

use bevy_ecs::prelude::*;
use rand::seq::index;
use rand::{Rng, RngExt};
use rand_distr::{Binomial, Distribution};

use super::only_table;
use crate::world::components::{GenotypeId, Lifespan, Output, Vitals};
use crate::world::draws::{mutated, weighted_index};
use crate::world::resources::{
    Clock, GenePool, Genotype, Ledger, Random, Released, Rules, Settler, Settlers, Vacancies,
};

/// Draws which propagules of this tick land on empty sites, and what they inherit.
///
/// Of K propagules released over N sites of which E are empty, Binomial(K, E/N) land on an empty
/// one: a random sample without replacement, in random order, each on a random one of the E; who
/// comes second to a site is lost.
#[expect(clippy::too_many_arguments, reason = "a system names everything it touches")]
pub fn settle_propagules(
    rules: Res<Rules>,
    clock: Res<Clock>,
    released: Res<Released>,
    pool: Res<GenePool>,
    mut random: ResMut<Random>,
    mut vacancies: ResMut<Vacancies>,
    mut settlers: ResMut<Settlers>,
    mut ledger: ResMut<Ledger>,
    mut cells: Query<(&Output, &GenotypeId)>,
    mut colonies: Query<(&Lifespan, &Vitals)>,
) {
    settlers.0.clear();
    if released.total == 0 {
        return;
    }
    let landings = landings_on_empty(&rules, &released, &vacancies, &mut random.0);
    if landings.is_empty() {
        return;
    }
    let bodies = only_table(cells.contiguous_iter_mut());
    let (lives, vitals) = only_table(colonies.contiguous_iter_mut());
    let empty = vacancies.0.len();
    for propagule in landings {
        let site = vacancies.0[random.0.random_range(0..empty)];
        if settlers.0.iter().any(|settler| settler.site == site) {
            continue;
        }
        let parent = parent_of(propagule, &released.by_site);
        let total = vitals[parent].fecundity;
        let genotype = inherited(&rules, &pool, bodies, parent, total, &mut random.0);
        settlers.0.push(Settler { site, genotype });
        ledger.parental_age_h += clock.now_h.min(lives[parent].dies_h) - lives[parent].founded_h;
    }
    vacancies.0.retain(|site| !settlers.0.iter().any(|settler| settler.site == *site));
    ledger.recent_settlements += settlers.0.len() as u64;
}

/// Numbers (in 0..K) of the propagules that land on an empty site, in order of arrival.
fn landings_on_empty(
    rules: &Rules,
    released: &Released,
    vacancies: &Vacancies,
    rng: &mut impl Rng,
) -> Vec<u64> {
    let chance = vacancies.0.len() as f64 / rules.0.habitat.sites as f64;
    let Ok(landing) = Binomial::new(released.total, chance) else { return Vec::new() };
    let count = landing.sample(rng);
    index::sample(rng, released.total as usize, count as usize)
        .into_iter()
        .map(|propagule| propagule as u64)
        .collect()
}

/// The site whose colony released the propagule of this number.
fn parent_of(propagule: u64, released: &[u32]) -> usize {
    const BLOCK: usize = 16;
    let mut left = propagule;
    for (block, counts) in released.chunks(BLOCK).enumerate() {
        let in_block: u64 = counts.iter().map(|count| u64::from(*count)).sum();
        if left < in_block {
            for (offset, &count) in counts.iter().enumerate() {
                if left < u64::from(count) {
                    return block * BLOCK + offset;
                }
                left -= u64::from(count);
            }
        }
        left -= in_block;
    }
    0
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
