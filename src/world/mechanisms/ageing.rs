//! Hazard, lifespan and death.

use bevy_ecs::prelude::*;
use rand::RngExt;

use super::only_table;
use crate::scenario::settings::Life;
use crate::world::components::{
    HeadStart, Lifespan, Phase, PropaguleStock, StockRate, StockSince, StockUntil, Vitals,
};
use crate::world::draws::exponential;
use crate::world::resources::{
    Calendar, Clock, EarlierReleases, Event, Ledger, Maturing, Random, Rules, Vacancies,
};

/// Least hazard that is told from none, 1/h: where returns overflow to an infinite viability, a
/// life must still end at a finite hour.
const LEAST_HAZARD_PER_H: f64 = 1e-300;

/// Most propagules of a life that the stock can count one by one.
const MOST_PROPAGULES_OF_A_LIFE: f64 = (1_u64 << 50) as f64;

/// Most propagules of a colony in a tick; each of millions of sites may release as many.
const MOST_PROPAGULES_OF_A_TICK: f64 = (1_u64 << 31) as f64;

/// Draws the lifespan of every new adult and starts its stock.
///
/// The colony dies when its integrated hazard passes an Exp(1) draw; its hazard is constant until a cell is replaced,
/// `m = m_ext + m0 / V` per h, so that is `draw / m` hours after adulthood. Its stock for propagules
/// grows by `B e0 / c_p` propagules per h, as far as they can be counted.
pub fn set_lifespans(
    rules: Res<Rules>,
    clock: Res<Clock>,
    maturing: Res<Maturing>,
    mut random: ResMut<Random>,
    mut calendar: ResMut<Calendar>,
    mut colonies: Query<(&mut Vitals, &mut Lifespan)>,
    mut stocks: Query<(&mut StockSince, &mut StockUntil, &mut HeadStart, &mut StockRate)>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let (mut vitals, mut lives) = only_table(colonies.contiguous_iter_mut());
    let (vitals, lives) = (vitals.bypass_change_detection(), lives.bypass_change_detection());
    let (mut since, mut until, mut head_starts, mut rates) =
        only_table(stocks.contiguous_iter_mut());
    let (since, until) = (since.bypass_change_detection(), until.bypass_change_detection());
    let head_starts = head_starts.bypass_change_detection();
    let rates = rates.bypass_change_detection();
    let life = &rules.0.life;
    let is_replacing = rules.0.budget.turnover_per_h > 0.0;
    for &site in &maturing.0 {
        let here = site as usize;
        let hazard_per_h = hazard_per_h(life, vitals[here].viability);
        vitals[here].hazard_per_h = hazard_per_h;
        let length_h = exponential(&mut random.0) / hazard_per_h;
        lives[here].dies_h = lives[here].adult_h + length_h;
        since[here] = StockSince(lives[here].adult_h);
        until[here] = StockUntil(lives[here].dies_h);
        head_starts[here] = HeadStart(random.0.random::<f64>() - 0.5);
        rates[here] = stock_rate(&rules, vitals[here].fecundity, length_h, clock.tick_h);
        // Where cells are replaced, hazards change: `replace_cells` then says when a colony dies.
        if !is_replacing {
            calendar.expect_death(Event { at_h: lives[here].dies_h, site });
        }
    }
}

/// Hazard of an adult, `m = m_ext + m0 / V`, 1/h.
pub(super) fn hazard_per_h(life: &Life, viability: f64) -> f64 {
    let hazard_per_h = life.extrinsic_hazard_per_h + life.adult_hazard_per_h / viability;
    hazard_per_h.max(LEAST_HAZARD_PER_H)
}

/// Growth of a stock over the `length_h` that a colony has to live, `B e0 / c_p`, as far as it can be
/// counted.
pub(super) fn stock_rate(rules: &Rules, fecundity: f64, length_h: f64, tick_h: f64) -> StockRate {
    let income = rules.0.budget.income_eu_per_h;
    let per_hour = fecundity * income / rules.0.life.propagule_cost_eu;
    let countable = (MOST_PROPAGULES_OF_A_LIFE / length_h).min(MOST_PROPAGULES_OF_A_TICK / tick_h);
    StockRate(per_hour.min(countable))
}

/// Empties the sites whose colonies die in this tick.
pub fn bury_colonies(
    clock: Res<Clock>,
    mut calendar: ResMut<Calendar>,
    mut vacancies: ResMut<Vacancies>,
    mut ledger: ResMut<Ledger>,
    mut earlier: ResMut<EarlierReleases>,
    mut colonies: Query<(&mut Phase, &StockSince, &StockUntil, &HeadStart, &StockRate)>,
) {
    let Some(mut event) = calendar.next_death(clock.now_h) else { return };
    let (mut phases, since, until, head_starts, rates) = only_table(colonies.contiguous_iter_mut());
    let phases = phases.bypass_change_detection();
    loop {
        let here = event.site as usize;
        if phases[here] == Phase::Adult {
            let (since, until) = (since[here], until[here]);
            let (head_start, rate) = (head_starts[here], rates[here]);
            let stock = PropaguleStock { since, until, head_start, rate };
            ledger.lifetime_propagules += stock.released_between(since.0, until.0);
            ledger.lifetime_propagules += earlier.of_life.get_mut(here).map_or(0, std::mem::take);
        }
        phases[here] = Phase::Empty;
        vacancies.0.push(event.site);
        ledger.deaths += 1;
        match calendar.next_death(clock.now_h) {
            Some(next) => event = next,
            None => break,
        }
    }
    vacancies.0.sort_unstable();
}
