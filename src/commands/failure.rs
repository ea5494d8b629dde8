//! Why a command could not be done.

use std::fmt;
use std::io;
use std::path::PathBuf;

use miette::Diagnostic;
use thiserror::Error;

use crate::record::Fault;
use crate::scenario::ScenarioError;
use crate::scenario::registry::entry;
use crate::study::run::RunError;

/// Why a command could not be done.
#[derive(Debug, Error)]
pub enum Failure {
    /// The scenario cannot be read or has faults.
    #[error(transparent)]
    Scenario(#[from] ScenarioError),
    /// There is no template of that name.
    #[error("there is no template `{name}`")]
    UnknownTemplate {
        /// The name as given.
        name: String,
        /// The template's name that is most like it.
        nearest: Option<&'static str>,
    },
    /// A run could not be done.
    #[error(transparent)]
    Run(#[from] RunError),
    /// A signal ended the run early, with what was finished written.
    #[error(
        "stopped: {finished} of {planned} replicates are in {}; the same command goes on with the rest",
        folder.display()
    )]
    Stopped {
        /// Replicates finished.
        finished: usize,
        /// Replicates asked for.
        planned: u32,
        /// Where they are.
        folder: PathBuf,
    },
    /// A critical value is asked for of something that is no number.
    #[error("`{key}` is no real number of this scenario, so it has no critical value")]
    NoCriticalKey {
        /// The key as given.
        key: String,
        /// The number's key that is most like it.
        nearest: Option<&'static str>,
    },
    /// Keys that would move together start from a value that gives no bracket.
    #[error("`{key}` = {value} does not say where to look for a critical value")]
    NoBracket {
        /// The key.
        key: String,
        /// Its value in the scenario.
        value: f64,
    },
    /// The system would not tell of signals.
    #[error("cannot listen for SIGINT and SIGTERM")]
    Signals(#[source] io::Error),
    /// The result could not be printed.
    #[error("cannot write the result")]
    Output(#[from] io::Error),
    /// The result could not be put into JSON.
    #[error("cannot put the result into JSON")]
    Json(#[from] serde_json::Error),
}

impl Failure {
    /// The exit code: 2 where the command line or a file of the user's is wrong, 1 where the
    /// work failed, 0 where the reader of the result has merely gone.
    #[must_use]
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::Scenario(_)
            | Self::UnknownTemplate { .. }
            | Self::NoCriticalKey { .. }
            | Self::NoBracket { .. } => 2,
            Self::Output(error) if error.kind() == io::ErrorKind::BrokenPipe => 0,
            Self::Run(RunError::Record(error)) if error.fault() == Fault::Request => 2,
            Self::Stopped { .. } => 75,
            Self::Run(_) | Self::Signals(_) | Self::Output(_) | Self::Json(_) => 1,
        }
    }
}

impl Diagnostic for Failure {
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        match self {
            Self::Scenario(error) => error.help(),
            Self::NoCriticalKey { key, .. } if entry(key).is_some() => Some(Box::new(format!(
                "the scenario does not have it: state it there or with --set {key}=..."
            ))),
            Self::UnknownTemplate { nearest: Some(name), .. }
            | Self::NoCriticalKey { nearest: Some(name), .. } => {
                Some(Box::new(format!("did you mean `{name}`?")))
            }
            Self::NoBracket { .. } => Some(Box::new("give --between LOW,HIGH")),
            Self::UnknownTemplate { .. } => Some(Box::new("`somadawn template` lists them")),
            _ => None,
        }
    }
}
