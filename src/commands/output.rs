//! Results to standard output.

use std::io::{self, Write, stdout};

use serde::Serialize;

use super::Failure;

/// Prints `text`.
///
/// # Errors
///
/// When standard output cannot be written to.
pub(super) fn print(text: &str) -> Result<(), io::Error> {
    let mut out = stdout().lock();
    out.write_all(text.as_bytes())?;
    out.flush()
}

/// Prints `document` as JSON.
///
/// # Errors
///
/// When it cannot be put into JSON, or standard output cannot be written to.
pub(super) fn print_json<T: Serialize>(document: &T) -> Result<(), Failure> {
    let mut text = serde_json::to_string_pretty(document)?;
    text.push('\n');
    Ok(print(&text)?)
}
