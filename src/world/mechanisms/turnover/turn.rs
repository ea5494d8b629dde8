//! What changes when an adult's viability and fecundity do: its hazard, its death and its stock.

use crate::world::components::{HeadStart, PropaguleStock, StockSince, StockUntil, Vitals};
use crate::world::mechanisms::ageing::{hazard_per_h, stock_rate};
use crate::world::resources::{Clock, Rules};

/// What an adult's change of viability and fecundity alters.
#[derive(Debug, Clone, Copy)]
pub(super) struct Turn {
    pub(super) stock: PropaguleStock,
    pub(super) vitals: Vitals,
    /// When the colony dies as things stand, h.
    pub(super) dies_h: f64,
}

/// Propagules that left between two changes of a stock's growth.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Left {
    /// All of them.
    pub(super) of_piece: u64,
    /// Those of the tick at hand.
    pub(super) of_tick: u64,
}

impl Turn {
    /// From `at_h` on the colony achieves `[V, B]`; what its stock released since the last change.
    pub(super) fn take(
        &mut self,
        rules: &Rules,
        clock: &Clock,
        at_h: f64,
        [viability, fecundity]: [f64; 2],
    ) -> Left {
        let hazard_left = (self.dies_h - at_h) * self.vitals.hazard_per_h;
        let hazard_per_h = hazard_per_h(&rules.0.life, viability);
        self.vitals = Vitals { viability, fecundity, hazard_per_h };
        let length_h = hazard_left / hazard_per_h;
        self.dies_h = at_h + length_h;
        let old = self.stock;
        let left = Left {
            of_piece: old.released_between(old.since.0, at_h),
            of_tick: old.released_between(clock.from_h, at_h),
        };
        self.stock = PropaguleStock {
            since: StockSince(at_h),
            until: StockUntil(self.dies_h),
            head_start: HeadStart(old.left_over(at_h)),
            rate: stock_rate(rules, fecundity, length_h, clock.tick_h),
        };
        left
    }
}

#[cfg(test)]
mod tests {
    use approx::assert_relative_eq;

    use super::*;
    use crate::scenario::Settings;
    use crate::world::components::StockRate;

    /// By hand: hazard 0.02 per h, due to die at hour 100; at hour 39 there are 61 * 0.02 of its draw left,
    /// which V = 0.1 and m0 = 0.004 spend at 0.04 per h. Its stock grew by 0.31 per h from 0.2 at hour 10.
    #[test]
    fn the_hazard_left_is_spent_at_the_new_rate_and_the_stock_goes_on() {
        let mut settings = Settings::example("a turn");
        settings.life.adult_hazard_per_h = 0.004;
        settings.life.extrinsic_hazard_per_h = 0.0;
        settings.life.propagule_cost_eu = 8.0;
        settings.budget.income_eu_per_h = 1.0;
        let rules = Rules(settings);
        let clock = Clock { tick_h: 5.0, ticks: 8, from_h: 35.0, now_h: 40.0, generation: 0.0 };
        let stock = PropaguleStock {
            since: StockSince(10.0),
            until: StockUntil(100.0),
            head_start: HeadStart(0.2),
            rate: StockRate(0.31),
        };
        let vitals = Vitals { viability: 0.2, fecundity: 2.48, hazard_per_h: 0.02 };
        let mut turn = Turn { stock, vitals, dies_h: 100.0 };
        let left = turn.take(&rules, &clock, 39.0, [0.1, 4.0]);
        // At hour 39 the stock is 0.2 + 0.31 * 29 = 9.19, at hour 35 it is 7.95.
        assert_eq!(left, Left { of_piece: 9, of_tick: 1 });
        assert_relative_eq!(turn.dies_h, 39.0 + 61.0 * 0.02 / 0.04, max_relative = 1e-14);
        assert_relative_eq!(turn.vitals.hazard_per_h, 0.04);
        let PropaguleStock { since, until, head_start, rate } = turn.stock;
        assert_relative_eq!(head_start.0, 0.19, max_relative = 1e-12);
        assert_relative_eq!(rate.0, 0.5);
        assert_relative_eq!(since.0, 39.0);
        assert_relative_eq!(until.0, turn.dies_h);
    }
}
