//! What a cell does, given what it reads and earns: the reaction norm and the two returns.
//!
//! `z_i = sigmoid(g0 + sum_k g_k cue_k(i))`, `s = e z`, `g = e (1 - z)`, `v_i = h_i v(s_i / e0)`,
//! `b_i = k_i b(g_i / e0)`.

use crate::scenario::settings::Returns;
use crate::theory::{Cue, Programme, ReturnCurve};
use crate::world::components::{Budget, Output, SomaShare};
use crate::world::resources::Rules;

/// What a cell does, given what it reads.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Fate {
    pub(super) share: SomaShare,
    pub(super) budget: Budget,
    pub(super) output: Output,
}

impl Fate {
    /// The fate of a cell that reads `cues` (centred), lies at the surface or not, and earns
    /// `income` relative to e0, after tax.
    pub(super) fn of(
        rules: &Rules,
        programme: &Programme,
        cues: &[f64; Cue::COUNT],
        surface: bool,
        income: f64,
    ) -> Self {
        let z = programme.soma_share(cues);
        let full = rules.0.budget.income_eu_per_h;
        let income = income * full;
        let (soma, germ) = (income * z, income * (1.0 - z));
        let returns = &rules.0.returns;
        let viability = returns.viability.value(soma / full, surface);
        let fecundity = returns.fecundity.value(germ / full, surface);
        Self {
            share: SomaShare(z as f32),
            budget: Budget { soma_eu_per_h: soma as f32, germ_eu_per_h: germ as f32 },
            output: Output { viability: viability as f32, fecundity: fecundity as f32 },
        }
    }

    /// The fate of a cell that reads the same but earns `income` times as much, where returns are
    /// powers: `v(x e) = v(x) v(e)`.
    pub(super) fn scaled(&self, income: f32, [viability, fecundity]: [f32; 2]) -> Self {
        Self {
            share: self.share,
            budget: Budget {
                soma_eu_per_h: self.budget.soma_eu_per_h * income,
                germ_eu_per_h: self.budget.germ_eu_per_h * income,
            },
            output: Output {
                viability: self.output.viability * viability,
                fecundity: self.output.fecundity * fecundity,
            },
        }
    }
}

/// What the incomes of a body's cells do to their returns.
#[derive(Debug, Clone, PartialEq)]
pub enum IncomeFactors {
    /// Every cell is fully fed.
    Alike,
    /// Returns are powers: a cell's income, and the factors of its viability and fecundity, per cell.
    Powers(Vec<(f32, [f32; 2])>),
    /// Returns are to be worked out cell by cell.
    Each,
}

impl IncomeFactors {
    /// What `incomes` (relative to e0) do to `returns`.
    #[must_use]
    pub fn of(incomes: &[f64], returns: &Returns) -> Self {
        use ReturnCurve::Power;
        if incomes.iter().all(|income| income.total_cmp(&1.0).is_eq()) {
            return Self::Alike;
        }
        match [&returns.viability.curve, &returns.fecundity.curve] {
            [Power { exponent: a }, Power { exponent: c }] => {
                let factor = |income: &f64| {
                    (*income as f32, [*a, *c].map(|exponent| libm::pow(*income, exponent) as f32))
                };
                Self::Powers(incomes.iter().map(factor).collect())
            }
            _ => Self::Each,
        }
    }
}
