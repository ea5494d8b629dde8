//! Propagules land on sites drawn at random; the first to land on an empty one settles it.

use bevy_ecs::prelude::*;
use rand::seq::index;
use rand::{Rng, RngExt};

use super::only_table;
use crate::world::components::{GenotypeId, Lifespan, Output, Vitals};
use crate::world::draws::{geometric, mutated, weighted_index};
use crate::world::resources::{
    Clock, GenePool, Genotype, Ledger, Random, Released, Rules, Settler, Settlers, Vacancies,
};

/// Draws which propagules of this tick land on empty sites, and what they inherit.
///
/// Every propagule lands on a random site, and settles it if it is empty; who comes second to a site
/// is lost. They come in random order, so those that settle are a random sample without replacement.
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
    let sites = rules.0.habitat.sites;
    let taken = take_sites(released.total, sites, &mut vacancies, &mut random.0);
    if taken.is_empty() {
        return;
    }
    let bodies = only_table(cells.contiguous_iter_mut());
    let (lives, vitals) = only_table(colonies.contiguous_iter_mut());
    let parents = parents(taken.len(), &released, &mut random.0);
    for (site, parent) in taken.into_iter().zip(parents) {
        let total = vitals[parent].fecundity;
        let genotype = inherited(&rules, &pool, bodies, parent, total, &mut random.0);
        settlers.0.push(Settler { site, genotype });
        ledger.parental_age_h += clock.now_h.min(lives[parent].dies_h) - lives[parent].founded_h;
    }
    ledger.recent_settlements += settlers.0.len() as u64;
}

/// The empty sites that are settled, which are vacant no longer.
///
/// Propagules land one after the other, each on a random one of N sites. While f sites are free, the
/// next to settle is the G-th to come, G geometric with chance f/N: only settlers are drawn, not the
/// billions that a long tick may bring.
fn take_sites(
    propagules: u64,
    sites: usize,
    vacancies: &mut Vacancies,
    rng: &mut impl Rng,
) -> Vec<u32> {
    let mut free = vacancies.0.len();
    let mut left = propagules as f64;
    while free > 0 {
        left -= geometric(free as f64 / sites as f64, rng);
        if left < 0.0 {
            break;
        }
        let landed = rng.random_range(0..free);
        free -= 1;
        vacancies.0.swap(landed, free);
    }
    let taken = vacancies.0.split_off(free);
    if !taken.is_empty() {
        vacancies.0.sort_unstable();
    }
    taken
}

/// The parents of `count` propagules drawn from all that were released, in site order; the draw
/// does not depend on who lands where.
fn parents(count: usize, released: &Released, rng: &mut impl Rng) -> Vec<usize> {
    let mut propagules = index::sample(rng, released.total as usize, count).into_vec();
    propagules.sort_unstable();
    let mut counts = (0..).zip(&released.by_site);
    let (mut parent, mut passed) = (0, 0);
    let parent_of = |propagule: usize| {
        while passed <= propagule {
            let Some((site, &count)) = counts.next() else { break };
            (parent, passed) = (site, passed + count as usize);
        }
        parent
    };
    propagules.into_iter().map(parent_of).collect()
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
