//! `somadawn schema`: the JSON Schema of the scenario file.

use super::Failure;
use super::output::print_json;
use crate::scenario::schema::schema;

pub(super) fn run() -> Result<(), Failure> {
    print_json(&schema())
}
