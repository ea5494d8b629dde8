//! The reference page of the scenario file, in Markdown.

use std::fmt::Write as _;

use super::registry::words::one_of;
use super::registry::{self, Described};

const HEAD: &str = "\
# The scenario file

A TOML file. Every key but `title` has a default; an unknown key, a wrong type or a value out of
range is an error, and all errors of a file are told at once. `somadawn template full` prints a
scenario with every key, `somadawn schema` a JSON Schema for your editor. Any key can be replaced
for one command with `--set key.path=value`.

This page is made by `somadawn reference`; do not edit it.
";

/// The reference page, made from the registry.
#[must_use]
pub fn page() -> String {
    let mut page = HEAD.to_owned();
    let mut table = None;
    for entry in registry::entries() {
        if table != Some(entry.table()) {
            table = Some(entry.table());
            open_table(&mut page, entry.table());
        }
        // Writing to a string cannot fail.
        let _ = writeln!(page, "{}", row(*entry));
    }
    page
}

fn open_table(page: &mut String, path: &str) {
    let head = match registry::table(path) {
        Some(table) => format!("## `[{path}]`\n\n{}.", table.description()),
        None => "## At the top".to_owned(),
    };
    let _ = write!(
        page,
        "\n{head}\n\n| key | default | unit | meaning | allowed |\n|---|---|---|---|---|\n"
    );
}

fn row(entry: &dyn Described) -> String {
    let default = if entry.required() {
        "must be given".to_owned()
    } else {
        format!("`{}`", entry.default_value())
    };
    let condition = entry.condition().map_or_else(String::new, |condition| {
        format!("; only with `{}` {}", condition.sibling, one_of(condition.words.iter().copied()))
    });
    let unit = if entry.unit() == "none" { "" } else { entry.unit() };
    let (name, meaning, allowed) = (entry.name(), entry.meaning(), entry.allowed());
    format!("| `{name}` | {default} | {unit} | {meaning}{condition} | {allowed} |")
}
