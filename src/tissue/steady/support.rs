//! Support: a linear balance without which no cell's viability can be told.

use super::SteadySolver;
use super::reaction::Supply;
use crate::tissue::graph::BodyGraph;

/// Of the first residual, what is lost in rounding.
const ROUNDING: f64 = 1e-15;

impl SteadySolver {
    /// Solves `a sum_j (S_i - S_j) + a leak open_i S_i + S_i = v_i`, a > 0, v >= 0 and somewhere above
    /// 0; `support` holds v and then S.
    pub(super) fn spread(&mut self, graph: &BodyGraph, a: f64, leak: f64, support: &mut [f64]) {
        let use_rate = a.recip();
        self.take(graph, support, |output| output);
        self.set_conductance(graph, leak);
        self.set_first_residual(use_rate, support);
        if !self.iterate_support(graph, use_rate) {
            self.polish_support(&Supply { output: support, use_rate });
        }
        let share = if leak == 0.0 { mean_ratio(support, &self.linear.x) } else { 1.0 };
        for (support, x) in support.iter_mut().zip(&self.linear.x) {
            *support = share * x;
        }
    }

    /// Starts from support = output, where all residual is what contacts exchange.
    fn set_first_residual(&mut self, use_rate: f64, output: &[f64]) {
        let linear = &mut self.linear;
        linear.x.clear();
        linear.x.extend_from_slice(output);
        linear.residual.resize(output.len(), 0.0);
        self.contacts.sums(&self.field, &mut linear.residual);
        linear.diagonal.clear();
        let cells = linear.residual.iter_mut().zip(&self.conductance).zip(output);
        for ((residual, conductance), output) in cells {
            *residual -= conductance * output;
            linear.diagonal.push(conductance + use_rate);
        }
    }

    /// Says whether support settled at values above 0: no residual above a share of what the cell uses.
    ///
    /// With leak or without, the operator's inverse has row sums of at most 1 (it averages outputs), so
    /// that no residual above a share of the least support anywhere means no error above that share;
    /// support itself in place of the least gives the same for cells with like neighbours.
    fn iterate_support(&mut self, graph: &BodyGraph, use_rate: f64) -> bool {
        let n = self.linear.x.len() as f64;
        let mean = self.linear.x.iter().sum::<f64>() / n;
        let strict = self.precision.support * use_rate;
        // The size at which looking at every cell is first worth its time, and that which rounding
        // leaves: looked at from rest, residuals are of the order of diagonal times output.
        let mut worth_a_look = n * (strict * mean).powi(2) / 6.0;
        let mut settled = false;
        let mut lost = None;
        self.linear.solve(graph, &self.contacts, |size, residual, x| {
            let lost = *lost.get_or_insert(size * ROUNDING * ROUNDING);
            if size > worth_a_look && size > lost {
                return false;
            }
            worth_a_look *= 0.4;
            settled = residual.iter().zip(x).all(|(r, x)| r.abs() <= strict * x && *x > 0.0);
            settled || size <= lost
        });
        settled
    }

    fn polish_support(&mut self, supply: &Supply) {
        let n = supply.output.len();
        for (field, x) in self.field.iter_mut().zip(&self.linear.x) {
            *field = x.max(0.0);
        }
        // Use bounds support even where no bath does.
        self.inflow.clear();
        self.inflow.resize(n, 0.0);
        self.cut_off.clear();
        self.cut_off.resize(n, false);
        self.sweep(supply);
        self.linear.x.copy_from_slice(&self.field[..n]);
    }
}

fn mean_ratio(output: &[f64], support: &[f64]) -> f64 {
    output.iter().sum::<f64>() / support.iter().sum::<f64>()
}
