//! Why a command could not be done.

use std::fmt;
use std::io;

use miette::Diagnostic;
use thiserror::Error;

use crate::scenario::ScenarioError;

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
    /// The verb is known, but this build cannot do it.
    #[error("`somadawn {verb}` is not built yet")]
    NotBuilt {
        /// The verb.
        verb: &'static str,
    },
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
            Self::Scenario(_) | Self::UnknownTemplate { .. } => 2,
            Self::Output(error) if error.kind() == io::ErrorKind::BrokenPipe => 0,
            Self::NotBuilt { .. } | Self::Output(_) | Self::Json(_) => 1,
        }
    }
}

impl Diagnostic for Failure {
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        match self {
            Self::Scenario(error) => error.help(),
            Self::UnknownTemplate { nearest: Some(name), .. } => {
                Some(Box::new(format!("did you mean `{name}`?")))
            }
            Self::UnknownTemplate { .. } => Some(Box::new("`somadawn template` lists them")),
            _ => None,
        }
    }
}
