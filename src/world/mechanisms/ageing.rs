//! Hazard, lifespan and death.

use bevy_ecs::prelude::*;
use rand::RngExt;

use super::only_table;
use crate::world::components::{Lifespan, Phase, PropaguleStock, Vitals};
use crate::world::draws::exponential;
use crate::world::resources::{Calendar, Clock, Event, Ledger, Maturing, Random, Rules, Vacancies};

/// Draws the lifespan of every new adult and starts its stock.
///
/// The colony dies when its integrated hazard passes an Exp(1) draw; its hazard is constant here,
/// `m = m_ext + m0 / V` per h, so that is `draw / m` hours after adulthood. Its stock for propagules
/// grows by `B e0 / c_p` propagules per h.
pub fn set_lifespans(
    rules: Res<Rules>,
    maturing: Res<Maturing>,
    mut random: ResMut<Random>,
    mut calendar: ResMut<Calendar>,
    mut colonies: Query<(&mut Vitals, &mut Lifespan, &mut PropaguleStock)>,
) {
    if maturing.0.is_empty() {
        return;
    }
    let (mut vitals, mut lives, mut stocks) = only_table(colonies.contiguous_iter_mut());
    let (vitals, lives) = (vitals.bypass_change_detection(), lives.bypass_change_detection());
    let stocks = stocks.bypass_change_detection();
    let life = &rules.0.life;
    for &site in &maturing.0 {
        let here = site as usize;
        let hazard_per_h =
            life.extrinsic_hazard_per_h + life.adult_hazard_per_h / vitals[here].viability;
        vitals[here].hazard_per_h = hazard_per_h;
        lives[here].dies_h = lives[here].adult_h + exponential(&mut random.0) / hazard_per_h;
        let income = rules.0.budget.income_eu_per_h;
        stocks[here] = PropaguleStock {
            head_start: random.0.random(),
            per_hour: vitals[here].fecundity * income / life.propagule_cost_eu,
        };
        calendar.expect_death(Event { at_h: lives[here].dies_h, site });
    }
}

/// Empties the sites whose colonies die in this tick.
pub fn bury_colonies(
    clock: Res<Clock>,
    mut calendar: ResMut<Calendar>,
    mut vacancies: ResMut<Vacancies>,
    mut ledger: ResMut<Ledger>,
    mut colonies: Query<(&mut Phase, &Lifespan, &PropaguleStock)>,
) {
    let Some(mut event) = calendar.next_death(clock.now_h) else { return };
    let (mut phases, lives, stocks) = only_table(colonies.contiguous_iter_mut());
    let phases = phases.bypass_change_detection();
    loop {
        let here = event.site as usize;
        let life = &lives[here];
        if phases[here] == Phase::Adult {
            ledger.lifetime_propagules += stocks[here].released_within(life.dies_h - life.adult_h);
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
