//! `somadawn reference`: the reference page of the scenario file, which the project stores.

use super::Failure;
use super::output::print;
use crate::scenario::reference::page;

pub(super) fn run() -> Result<(), Failure> {
    Ok(print(&page())?)
}
