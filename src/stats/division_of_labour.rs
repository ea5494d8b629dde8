//! Division of labour as mutual entropy of individuals and tasks (Gorelick, Bertram, Killeen &
//! Fewell 2004, Am. Nat. 164:677).

use ndarray::ArrayView2;

use super::StatsError;

/// Entropies below this are rounding noise of a margin with one member.
const NO_ENTROPY: f64 = 1e-12;

/// Entropies (nats) of a table of work, rows individuals, columns tasks.
///
/// With `p_ij` the table over its total, `H_individuals` and `H_tasks` are the entropies of its
/// margins and `I = H_individuals + H_tasks - H_joint` what knowing the individual tells of the
/// task. The three indices divide I by different denominators and applied papers differ in which
/// they mean, so each is named here by its denominator. All lie in [0, 1]; 0/0 (a single task or a
/// single individual: nothing to divide) counts as 0, no division.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MutualEntropy {
    /// Mutual entropy I of individuals and tasks, at least 0.
    pub mutual: f64,
    /// Entropy of the individuals' shares of all work.
    pub individuals: f64,
    /// Entropy of the tasks' shares of all work.
    pub tasks: f64,
}

impl MutualEntropy {
    /// The entropies of `work` (any unit; entries at least 0). A table without work has none.
    ///
    /// # Errors
    /// [`StatsError::Work`] names the first entry that is negative, NaN or infinite.
    pub fn of(work: &ArrayView2<'_, f64>) -> Result<Self, StatsError> {
        if let Some(((row, column), value)) =
            work.indexed_iter().find(|(_, value)| !(value.is_finite() && **value >= 0.0))
        {
            return Err(StatsError::Work { row, column, value: *value });
        }
        let total: f64 = work.iter().sum();
        if total <= 0.0 {
            return Ok(Self { mutual: 0.0, individuals: 0.0, tasks: 0.0 });
        }
        let entropy_of_sums = |sums: ndarray::Array1<f64>| entropy(sums.iter(), total);
        let individuals = entropy_of_sums(work.sum_axis(ndarray::Axis(1)));
        let tasks = entropy_of_sums(work.sum_axis(ndarray::Axis(0)));
        let joint = entropy(work.iter(), total);
        Ok(Self { mutual: (individuals + tasks - joint).max(0.0), individuals, tasks })
    }

    /// `I / H_tasks`: 1 when every individual does one task only.
    #[must_use]
    pub fn over_tasks(&self) -> f64 {
        self.over(self.tasks)
    }

    /// `I / H_individuals`: 1 when every task is done by one individual only.
    #[must_use]
    pub fn over_individuals(&self) -> f64 {
        self.over(self.individuals)
    }

    /// `I / sqrt(H_individuals H_tasks)`: 1 when individuals and tasks pair off.
    #[must_use]
    pub fn over_geometric_mean(&self) -> f64 {
        self.over((self.individuals * self.tasks).sqrt())
    }

    fn over(&self, denominator: f64) -> f64 {
        // A geometric mean can look sizeable although one margin has a single member.
        if self.individuals.min(self.tasks) < NO_ENTROPY {
            0.0
        } else {
            (self.mutual / denominator).clamp(0.0, 1.0)
        }
    }
}

/// `-sum p ln p` of parts of `total`; a part of 0 adds nothing.
fn entropy<'a>(parts: impl Iterator<Item = &'a f64>, total: f64) -> f64 {
    parts
        .map(|part| part / total)
        .filter(|p| *p > 0.0)
        .map(|p| -p * libm::log(p))
        .sum::<f64>()
        .max(0.0)
}
