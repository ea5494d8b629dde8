//! Critical values: where verdicts change as a parameter moves.

use super::fitness::Model;

/// How hard a change of the local and the global verdict is looked for.
const LOCAL: Effort = Effort { looks: 48, halvings: 48 };
const GLOBAL: Effort = Effort { looks: 16, halvings: 28 };
/// The same where bodies are placed, which are grown anew at each value.
const LOCAL_PLACED: Effort = Effort { looks: 16, halvings: 30 };
const GLOBAL_PLACED: Effort = Effort { looks: 8, halvings: 16 };

/// How hard a change is looked for.
#[derive(Clone, Copy)]
struct Effort {
    /// Points at which the bracket is looked at, to find the first change.
    looks: u32,
    /// Halvings of the interval with the change; about 48 lead to the last digits of a double.
    halvings: u32,
}

impl Effort {
    const fn on(model: &Model, [known, placed]: [Self; 2]) -> Self {
        if model.placed().is_some() { placed } else { known }
    }
}

/// Gain in ln R0 from which a differentiated programme counts as better, when locating where it
/// becomes so.
const JUST_BETTER: f64 = 1e-11;

impl Model {
    /// Whether a little responsiveness to any cue is favoured at the generalist optimum.
    #[must_use]
    pub fn is_favoured_locally(&self) -> bool {
        let generalist = self.generalist();
        self.selection_at(&generalist).iter().any(super::selection::CueSelection::is_favoured)
    }

    /// Whether differentiation is favoured at all: locally, or because the best programme is
    /// differentiated and beats the generalist.
    #[must_use]
    pub fn is_favoured_globally(&self) -> bool {
        let generalist = self.generalist();
        let local = self.selection_at(&generalist);
        local.iter().any(super::selection::CueSelection::is_favoured)
            || self.best_programme(&generalist).outdoes(JUST_BETTER)
    }
}

/// The value between `low` and `high` at which the local verdict changes (any cue comes to be, or
/// ceases to be, favoured at the generalist optimum); `None` where it does not. With several
/// changes, the one nearest `low`.
///
/// # Errors
/// Whatever `model_at` returns for a value it cannot make a model of.
pub fn local_critical<E>(
    mut model_at: impl FnMut(f64) -> Result<Model, E>,
    low: f64,
    high: f64,
) -> Result<Option<f64>, E> {
    let first = model_at(low)?;
    let (start, effort) = (first.is_favoured_locally(), Effort::on(&first, [LOCAL, LOCAL_PLACED]));
    let test = |value| Ok(model_at(value)?.is_favoured_locally());
    first_change(test, start, [low, high], effort)
}

/// The value between `low` and `high` at which the global verdict changes (whether any
/// differentiated programme beats the generalist); `None` where it does not. With several
/// changes, the one nearest `low`.
///
/// # Errors
/// Whatever `model_at` returns for a value it cannot make a model of.
pub fn global_critical<E>(
    mut model_at: impl FnMut(f64) -> Result<Model, E>,
    low: f64,
    high: f64,
) -> Result<Option<f64>, E> {
    let first = model_at(low)?;
    let effort = Effort::on(&first, [GLOBAL, GLOBAL_PLACED]);
    let start = first.is_favoured_globally();
    let test = |value| Ok(model_at(value)?.is_favoured_globally());
    first_change(test, start, [low, high], effort)
}

/// Bisects the first of `looks` equal intervals over which `test` changes from `start`, what it is at
/// the low end.
fn first_change<E>(
    mut test: impl FnMut(f64) -> Result<bool, E>,
    start: bool,
    [low, high]: [f64; 2],
    Effort { looks, halvings }: Effort,
) -> Result<Option<f64>, E> {
    let mut before = low;
    for look in 1..=looks {
        let share = f64::from(look) / f64::from(looks);
        let here = if look == looks { high } else { low + share * (high - low) };
        if test(here)? != start {
            let (mut same, mut changed) = (before, here);
            for _ in 0..halvings {
                let middle = f64::midpoint(same, changed);
                if test(middle)? == start {
                    same = middle;
                } else {
                    changed = middle;
                }
            }
            return Ok(Some(f64::midpoint(same, changed)));
        }
        before = here;
    }
    Ok(None)
}
