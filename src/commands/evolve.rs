//! `somadawn evolve SCENARIO`: replicates of the evolving population, and the report.

use std::io::{IsTerminal, stdout};
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::AtomicBool;

use clap::Args;
use signal_hook::consts::{SIGINT, SIGTERM};
use signal_hook::flag;

use super::output::{print, print_json};
use super::progress::Progress;
use super::{Common, Failure, ScenarioFile};
use crate::report::{Circumstances, EvolveReport, Style, evolve_report};
use crate::scenario::Settings;
use crate::study::evolve::{Evolve, Evolved};
use crate::study::prediction::{CuePart, Prediction};
use crate::theory::Verdict;

/// Arguments of `evolve`.
#[derive(Debug, Args)]
pub struct Arguments {
    /// The scenario.
    #[command(flatten)]
    pub scenario: ScenarioFile,
    /// Folder for the run [default: outputs/ and the scenario file's stem]
    #[arg(long, value_name = "DIR")]
    pub out: Option<PathBuf>,
    /// Replace what an earlier run left in the folder
    #[arg(long)]
    pub replace: bool,
}

impl Arguments {
    /// The folder of the run.
    #[must_use]
    pub fn folder(&self) -> PathBuf {
        let default = || {
            let stem = self.scenario.path.file_stem();
            PathBuf::from("outputs").join(stem.unwrap_or("scenario".as_ref()))
        };
        self.out.clone().unwrap_or_else(default)
    }
}

pub(super) fn run(arguments: &Arguments, common: &Common) -> Result<(), Failure> {
    let settings = arguments.scenario.load(common)?;
    let folder = arguments.folder();
    let stop = stop_on_signals()?;
    let progress = Progress::of(&settings, common.quiet);
    let evolve = Evolve {
        settings: &settings,
        folder: &folder,
        replace: arguments.replace,
        threads: common.threads(),
        stop: &stop,
        watcher: &progress,
    };
    let evolved = evolve.run();
    progress.clear();
    let evolved = evolved?;
    if common.json {
        print_json(&evolved.summary)?;
    } else {
        print(&report(&settings, &evolved, &folder))?;
    }
    if evolved.complete {
        return Ok(());
    }
    let (finished, planned) = (evolved.rows.len(), settings.run.replicates);
    Err(Failure::Stopped { finished, planned, folder })
}

/// A flag that the first SIGINT or SIGTERM sets; a second ends the program at once.
fn stop_on_signals() -> Result<Arc<AtomicBool>, Failure> {
    let stop = Arc::new(AtomicBool::new(false));
    for signal in [SIGINT, SIGTERM] {
        flag::register_conditional_shutdown(signal, 1, Arc::clone(&stop))
            .and_then(|_| flag::register(signal, Arc::clone(&stop)))
            .map_err(Failure::Signals)?;
    }
    Ok(stop)
}

fn report(settings: &Settings, evolved: &Evolved, folder: &Path) -> String {
    let style = Style::from_environment(stdout().is_terminal(), |name| std::env::var(name).ok());
    evolve_report(
        &EvolveReport {
            summary: &evolved.summary,
            rows: &evolved.rows,
            census: &evolved.census,
            replicates_planned: settings.run.replicates,
            adult_cells: settings.body.adult_cells,
            circumstances: circumstances(settings, &evolved.prediction),
            folder,
        },
        style,
    )
}

fn circumstances(settings: &Settings, prediction: &Prediction) -> Circumstances {
    let steepness = |cue: &CuePart| match cue.verdict {
        Verdict::FavouredAtOnce => cue.gradient.map(f64::abs),
        Verdict::FavouredByDisruption => cue.curvature,
        Verdict::NotFavouredLocally | Verdict::Valley => None,
    };
    Circumstances {
        sites: settings.habitat.sites,
        generations: settings.run.generations as f64,
        mutations_per_generation: settings.habitat.sites as f64
            * settings.traits.mutation_probability,
        mutation_sd: settings.traits.mutation_sd,
        best_division_index: prediction.best.division_index,
        onset_index: settings.onset.index,
        slope: prediction.cues.iter().filter_map(steepness).max_by(f64::total_cmp),
    }
}
