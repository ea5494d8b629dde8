//! The command line program: arguments in, one call into the library, a result or an error out.

use std::process::ExitCode;

use clap::Parser;
use somadawn::commands::{self, Cli};

fn main() -> ExitCode {
    let cli = match Cli::try_parse() {
        Ok(cli) => cli,
        Err(usage) => return commands::exit::usage(&usage),
    };
    match commands::run(&cli) {
        Ok(()) => ExitCode::SUCCESS,
        Err(failure) => commands::exit::failure(&failure),
    }
}
