//! `somadawn evolve SCENARIO`: replicates of the evolving population, and the report.

use std::path::PathBuf;

use clap::Args;

use super::{Common, Failure, ScenarioFile};

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
    arguments.scenario.load(common)?;
    Err(Failure::NotBuilt { verb: "evolve" })
}
