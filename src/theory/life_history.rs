//! The life of a colony as far as fitness depends on it: growth, survival, reproduction.

use super::jet::Scalar;
use super::lineage::rounds;

/// Rates and costs of a colony's life.
#[derive(Debug, Clone, PartialEq)]
pub struct LifeHistory {
    /// Cells of a propagule, at least 1.
    pub propagule_cells: u64,
    /// Cells of an adult colony (n), at least `propagule_cells`.
    pub adult_cells: u64,
    /// Cost of a propagule (`c_p`), eu.
    pub propagule_cost_eu: f64,
    /// Hazard of an adult colony of unit viability (m0), 1/h.
    pub adult_hazard_per_h: f64,
    /// Hazard no viability lowers (`m_ext`), 1/h.
    pub extrinsic_hazard_per_h: f64,
    /// Hazard of a growing colony, 1/h.
    pub juvenile_hazard_per_h: f64,
    /// Income of a fully fed cell (e0), eu/h.
    pub income_eu_per_h: f64,
    /// What a growing cell spends on itself, eu/h.
    pub upkeep_eu_per_h: f64,
    /// Cost of a division, eu.
    pub division_cost_eu: f64,
    /// Share of a cell's income lost per unit of summed responsiveness.
    pub cost_per_unit: f64,
}

impl LifeHistory {
    /// Income of a cell relative to e0: `max(0, 1 - cost_per_unit sum_k |g_k|)`.
    #[must_use]
    pub fn relative_income<S: Scalar>(&self, total_responsiveness: S) -> S {
        let income = S::constant(1.0) - total_responsiveness * self.cost_per_unit;
        if income.value() > 0.0 { income } else { S::constant(0.0) }
    }

    /// Hours from propagule to adult colony for cells that earn `income` eu/h, `None` if they
    /// never get there.
    ///
    /// Cells divide in step (`division_cv = 0`): each round takes
    /// `division_cost / (income - upkeep)`, and there are `ceil(log2(n / propagule_cells))`.
    #[must_use]
    pub fn growth_h<S: Scalar>(&self, income: S) -> Option<S> {
        let spent = self.rounds_cost_eu();
        if spent == 0.0 {
            return Some(S::constant(0.0));
        }
        let saved = income - S::constant(self.upkeep_eu_per_h);
        let grows = saved.value() > 0.0;
        grows.then(|| S::constant(spent) / saved)
    }

    /// What a cell saves for divisions from propagule to adult if cells divide in step, eu.
    #[must_use]
    pub fn rounds_cost_eu(&self) -> f64 {
        let (whole, dividing) = rounds(self.adult_cells, self.propagule_cells);
        let rounds = f64::from(whole) + f64::from(u8::from(dividing > 0));
        rounds * self.division_cost_eu
    }

    /// Probability that a propagule becomes an adult colony, `exp(-juvenile_hazard growth_h)`;
    /// 0 where cells cannot save.
    #[must_use]
    pub fn survival_to_adulthood<S: Scalar>(&self, income: S) -> S {
        match self.growth_h(income) {
            Some(hours) => (hours * -self.juvenile_hazard_per_h).exp(),
            None => S::constant(0.0),
        }
    }
}

#[cfg(test)]
#[expect(clippy::float_cmp, reason = "values that are exact by construction")]
mod tests {
    use approx::assert_relative_eq;

    use super::*;

    fn life() -> LifeHistory {
        LifeHistory {
            propagule_cells: 1,
            adult_cells: 64,
            propagule_cost_eu: 8.0,
            adult_hazard_per_h: 0.005,
            extrinsic_hazard_per_h: 0.0,
            juvenile_hazard_per_h: 0.001,
            income_eu_per_h: 1.0,
            upkeep_eu_per_h: 0.2,
            division_cost_eu: 8.0,
            cost_per_unit: 0.25,
        }
    }

    /// 6 rounds of 8 / 0.8 h.
    #[test]
    fn growth_takes_a_round_per_doubling() {
        let hours = life().growth_h(1.0).expect("grows");
        assert_relative_eq!(hours, 60.0, max_relative = 1e-14);
        let partial = LifeHistory { adult_cells: 65, ..life() };
        assert_relative_eq!(partial.growth_h(1.0).expect("grows"), 70.0, max_relative = 1e-14);
        let survival = life().survival_to_adulthood(1.0);
        assert_relative_eq!(survival, (-0.06_f64).exp(), max_relative = 1e-14);
    }

    #[test]
    fn a_cell_that_cannot_save_never_grows_up() {
        assert_eq!(life().growth_h(0.2), None);
        assert_eq!(life().survival_to_adulthood(0.1), 0.0);
        let born_adult = LifeHistory { propagule_cells: 64, ..life() };
        assert_eq!(born_adult.growth_h(0.0), Some(0.0));
    }

    #[test]
    fn responsiveness_is_taxed_down_to_nothing() {
        assert_relative_eq!(life().relative_income(2.0), 0.5);
        assert_eq!(life().relative_income(5.0), 0.0);
    }
}
