//! The one place where errors are printed and exit codes are chosen.

use std::fmt;
use std::io::{IsTerminal, Write, stderr};
use std::process::ExitCode;

use miette::{Diagnostic, GraphicalReportHandler, GraphicalTheme};

use super::Failure;
use crate::scenario::{Fault, Faults, ScenarioError};

/// Most faults that are shown one by one.
const MOST_FAULTS: usize = 100;

/// Prints what clap says of the command line (help is no error), and gives the exit code.
#[must_use]
pub fn usage(error: &clap::Error) -> ExitCode {
    // Nothing can be done where not even this can be printed.
    let _ = error.print();
    u8::try_from(error.exit_code()).map_or(ExitCode::from(2), ExitCode::from)
}

/// Prints a failure, every cause in its chain included, and gives the exit code.
#[must_use]
pub fn failure(failure: &Failure) -> ExitCode {
    let code = failure.exit_code();
    if code != 0 {
        let handler = handler(stderr().is_terminal(), no_color());
        // Nothing can be done where not even this can be printed.
        let _ = write!(stderr().lock(), "{}", Shown { failure, handler });
    }
    ExitCode::from(code)
}

fn no_color() -> bool {
    std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty())
}

/// Colours and line drawings on a terminal, plain ASCII elsewhere.
fn handler(terminal: bool, no_color: bool) -> GraphicalReportHandler {
    let theme = match (terminal, no_color) {
        (false, _) => GraphicalTheme::none(),
        (true, true) => GraphicalTheme::unicode_nocolor(),
        (true, false) => GraphicalTheme::unicode(),
    };
    // Off a terminal lines stay whole, so that they can be searched.
    GraphicalReportHandler::new_themed(theme).with_width(100).with_wrap_lines(terminal)
}

/// The text of a failure.
struct Shown<'a> {
    failure: &'a Failure,
    handler: GraphicalReportHandler,
}

impl fmt::Display for Shown<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        writeln!(f, "error: {}", self.failure)?;
        if let Failure::Scenario(ScenarioError::Faulty(faults)) = self.failure {
            return self.faults(faults, f);
        }
        let mut told = self.failure.to_string();
        let mut cause = std::error::Error::source(self.failure);
        while let Some(error) = cause {
            // Some messages hold their cause already.
            let because = error.to_string();
            if !told.contains(&because) {
                writeln!(f, "  because: {because}")?;
            }
            told = because;
            cause = error.source();
        }
        self.failure.help().map_or(Ok(()), |help| writeln!(f, "  help: {help}"))
    }
}

impl Shown<'_> {
    fn faults(&self, faults: &Faults, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for fault in faults.faults.iter().take(MOST_FAULTS) {
            writeln!(f)?;
            if fault.is_drawable() {
                self.handler.render_report(f, fault)?;
            } else {
                show_plainly(fault, f)?;
            }
        }
        match faults.faults.len().saturating_sub(MOST_FAULTS) {
            0 => Ok(()),
            more => writeln!(f, "\n{more} more faults are not shown"),
        }
    }
}

/// A fault without the lines around it.
fn show_plainly(fault: &Fault, f: &mut fmt::Formatter<'_>) -> fmt::Result {
    writeln!(f, "  x {fault}")?;
    if let Some((name, line, column)) = fault.place() {
        writeln!(f, "   at {name}:{line}:{column}")?;
    }
    fault.kind.remedy().map_or(Ok(()), |remedy| writeln!(f, "  help: {remedy}"))
}
