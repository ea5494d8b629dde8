//! How a run goes, on standard error: bars on a terminal, a plain line now and then elsewhere.

use std::collections::BTreeMap;
use std::fmt;
use std::io::{IsTerminal, Write, stderr};
use std::sync::{Mutex, MutexGuard, PoisonError};
use std::time::{Duration, Instant};

use indicatif::{MultiProgress, ProgressBar, ProgressState, ProgressStyle};

use crate::record::{CensusRow, ReplicateRow};
use crate::scenario::Settings;
use crate::study::run::Watcher;

/// Time between two plain lines.
const PLAIN_LINE_EVERY: Duration = Duration::from_secs(30);

/// Shows the generations that pass.
pub(super) struct Progress {
    generations: u64,
    replicates: u32,
    /// `None` where nothing is to be shown.
    display: Option<Display>,
    state: Mutex<State>,
}

enum Display {
    Bars { all: MultiProgress, overall: ProgressBar },
    Lines,
}

struct State {
    began: Instant,
    last_line: Instant,
    finished: u32,
    reached: BTreeMap<u32, u64>,
    bars: BTreeMap<u32, ProgressBar>,
}

impl Progress {
    /// Progress of a run of `settings`; silent where `quiet`.
    pub(super) fn of(settings: &Settings, quiet: bool) -> Self {
        let generations = settings.run.generations;
        let replicates = settings.run.replicates;
        let display = (!quiet).then(|| {
            if stderr().is_terminal() {
                let all = MultiProgress::new();
                let whole = generations.saturating_mul(u64::from(replicates));
                let overall = all.add(ProgressBar::new(whole));
                overall.set_style(style(
                    "all {bar:24} {pos}/{len} generations, {rate}, {eta} left, {msg}",
                ));
                Display::Bars { all, overall }
            } else {
                Display::Lines
            }
        });
        let now = Instant::now();
        let state = State {
            began: now,
            last_line: now,
            finished: 0,
            reached: BTreeMap::new(),
            bars: BTreeMap::new(),
        };
        Self { generations, replicates, display, state: Mutex::new(state) }
    }

    /// Takes the bars off the screen.
    pub(super) fn clear(&self) {
        if let Some(Display::Bars { overall, .. }) = &self.display {
            self.state().bars.values().for_each(ProgressBar::finish_and_clear);
            overall.finish_and_clear();
        }
    }

    fn state(&self) -> MutexGuard<'_, State> {
        self.state.lock().unwrap_or_else(PoisonError::into_inner)
    }

    fn note(&self, replicate: u32, generation: f64) {
        let mut state = self.state();
        #[expect(clippy::cast_sign_loss, reason = "generations are counted up from 0")]
        let reached = (generation as u64).min(self.generations);
        state.reached.insert(replicate, reached);
        match &self.display {
            Some(Display::Bars { all, overall }) => {
                overall.set_position(state.reached.values().sum());
                overall.set_message(format!("{}/{} replicates", state.finished, self.replicates));
                let bar =
                    state.bars.entry(replicate).or_insert_with(|| self.add_bar(all, replicate));
                bar.set_position(reached);
            }
            Some(Display::Lines) if state.last_line.elapsed() >= PLAIN_LINE_EVERY => {
                state.last_line = Instant::now();
                self.say(&state);
            }
            Some(Display::Lines) | None => {}
        }
    }

    fn add_bar(&self, all: &MultiProgress, replicate: u32) -> ProgressBar {
        // Added first: a bar on its own would draw over the others.
        let bar = all.add(ProgressBar::new(self.generations));
        bar.set_style(style("{prefix} {bar:24} {pos}/{len} generations, {rate}, {eta} left"));
        bar.set_prefix(format!("replicate {replicate}"));
        bar
    }

    /// One plain line.
    fn say(&self, state: &State) {
        let done: u64 = state.reached.values().sum();
        let whole = self.generations.saturating_mul(u64::from(self.replicates));
        let rate = done as f64 / state.began.elapsed().as_secs_f64();
        let left = (whole - done.min(whole)) as f64 / rate.max(f64::MIN_POSITIVE);
        // Progress that cannot be shown is no reason to stop.
        let _ = writeln!(
            stderr().lock(),
            "{done} of {whole} generations, {}/{} replicates finished, {rate:.0} generations/s, \
             about {left:.0} s left",
            state.finished,
            self.replicates,
        );
    }
}

fn style(template: &str) -> ProgressStyle {
    ProgressStyle::with_template(template)
        .unwrap_or_else(|_| ProgressStyle::default_bar())
        .with_key("rate", |state: &ProgressState, text: &mut dyn fmt::Write| {
            // Writing to a string cannot fail.
            let _ = write!(text, "{:.0} generations/s", state.per_sec());
        })
}

impl Watcher for Progress {
    fn at_census(&self, census: &CensusRow) {
        self.note(census.replicate, census.generation);
    }

    fn at_end(&self, row: &ReplicateRow) {
        let mut state = self.state();
        state.finished += 1;
        if let Some(bar) = state.bars.remove(&row.replicate) {
            bar.finish_and_clear();
        }
        // A replicate that stopped early has done all that it was to do.
        state.reached.insert(row.replicate, self.generations);
        if let Some(Display::Bars { overall, .. }) = &self.display {
            overall.set_position(state.reached.values().sum());
            overall.set_message(format!("{}/{} replicates", state.finished, self.replicates));
        }
    }
}
