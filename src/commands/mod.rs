//! The command line: one file per verb, each arguments -> one call into the library -> printing.

use std::path::PathBuf;

use clap::{Args, Parser, Subcommand};

use crate::scenario::{Override, ScenarioError, Settings, read_text};

mod check;
pub mod evolve;
pub mod exit;
mod failure;
mod output;
pub mod predict;
mod progress;
mod reference;
mod schema;
mod template;

pub use failure::Failure;

/// Evolves colonies of cells, and says whether, when and how they divide into germ and soma.
#[derive(Debug, Parser)]
#[command(name = "somadawn", version, about, max_term_width = 100)]
pub struct Cli {
    /// The verb.
    #[command(subcommand)]
    pub verb: Verb,
    /// Options that every verb takes.
    #[command(flatten)]
    pub common: Common,
}

/// What can be done.
#[derive(Debug, Subcommand)]
pub enum Verb {
    /// Print a commented scenario to start from; without a name, list them
    Template(template::Arguments),
    /// Read a scenario, and print what follows from it
    Check(check::Arguments),
    /// Print what theory says of a scenario
    Predict(predict::Arguments),
    /// Evolve replicate populations of a scenario, and report
    Evolve(evolve::Arguments),
    /// Print the JSON Schema of the scenario file
    Schema,
    /// Print the reference page of the scenario file
    #[command(hide = true)]
    Reference,
}

/// Options that every verb takes.
#[derive(Debug, Clone, Default, Args)]
pub struct Common {
    /// Replace a setting of the scenario, its value in TOML (repeatable)
    #[arg(long = "set", value_name = "KEY=VALUE", global = true)]
    pub set: Vec<String>,
    /// Replace the scenario's seed
    #[arg(long, value_name = "N", global = true)]
    pub seed: Option<u64>,
    /// Threads to use [default: all the machine has]
    #[arg(long, value_name = "N", global = true, value_parser = parse_threads)]
    pub threads: Option<usize>,
    /// Print the result as one JSON document
    #[arg(long, global = true)]
    pub json: bool,
    /// Print no progress
    #[arg(long, short, global = true)]
    pub quiet: bool,
}

/// The scenario that a verb works on.
#[derive(Debug, Clone, Args)]
pub struct ScenarioFile {
    /// Scenario file (TOML)
    #[arg(value_name = "SCENARIO")]
    pub path: PathBuf,
}

impl Common {
    /// What the options replace in a scenario; `--seed` comes last, so it wins.
    #[must_use]
    pub fn overrides(&self) -> Vec<Override> {
        self.set.iter().map(Override::set).chain(self.seed.map(Override::seed)).collect()
    }

    /// Threads to use.
    #[must_use]
    pub fn threads(&self) -> usize {
        let machine = || std::thread::available_parallelism().map_or(1, std::num::NonZero::get);
        self.threads.unwrap_or_else(machine)
    }
}

impl ScenarioFile {
    /// The settings of the scenario, with what the options replace in it.
    ///
    /// # Errors
    ///
    /// As [`Settings::load`].
    pub fn load(&self, common: &Common) -> Result<Settings, ScenarioError> {
        Settings::load(&self.path, &common.overrides())
    }

    /// The scenario's text, for reading it again with other overrides.
    ///
    /// # Errors
    ///
    /// As [`read_text`].
    pub fn text(&self) -> Result<String, ScenarioError> {
        read_text(&self.path)
    }

    /// What messages call the scenario.
    #[must_use]
    pub fn name(&self) -> String {
        self.path.display().to_string()
    }
}

fn parse_threads(text: &str) -> Result<usize, String> {
    match text.parse() {
        Ok(threads @ 1..=1024) => Ok(threads),
        _ => Err("must be a whole number from 1 to 1024".to_owned()),
    }
}

/// Does what the command line asks for.
///
/// # Errors
///
/// When a file or an option is wrong, or the work fails; [`Failure`] tells which.
pub fn run(cli: &Cli) -> Result<(), Failure> {
    let common = &cli.common;
    match &cli.verb {
        Verb::Template(arguments) => template::run(arguments, common),
        Verb::Check(arguments) => check::run(arguments, common),
        Verb::Predict(arguments) => predict::run(arguments, common),
        Verb::Evolve(arguments) => evolve::run(arguments, common),
        Verb::Schema => schema::run(),
        Verb::Reference => reference::run(),
    }
}
