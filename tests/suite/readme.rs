//! README's commands, tables and links hold: what it tells the reader to type can be typed, and every
//! scenario, command and column is told.

use std::path::Path;

use clap::{CommandFactory as _, Parser as _};
use somadawn::commands::Cli;
use somadawn::record::table::TableRow as _;
use somadawn::record::{BodyRow, CensusRow, TRAITS};
use somadawn::scenario::Settings;

use crate::record_sample::censored;

pub(crate) const README: &str = include_str!("../../README.md");
pub(crate) const DEVELOPERS: &str = include_str!("../../DEVELOPERS.md");
/// A file that README has the reader write.
const READERS_OWN: &str = "mine.toml";

/// Cells of the rows of the table under the header that begins with `first` column's name.
pub(crate) fn table(text: &str, first: &str) -> Vec<Vec<String>> {
    let header = format!("| {first} |");
    let lines = text.lines().skip_while(|line| !line.starts_with(&header)).skip(2);
    let rows = lines.take_while(|line| line.starts_with('|'));
    let rows: Vec<_> = rows.map(cells).collect();
    assert!(!rows.is_empty(), "no table `{first}`");
    rows
}

fn cells(line: &str) -> Vec<String> {
    line.trim_matches('|').split(" | ").map(|cell| cell.trim().to_owned()).collect()
}

/// Words after `$ cargo run --release -- ` of every line to type, up to a redirection.
fn typed() -> Vec<Vec<&'static str>> {
    let lines = README.lines().filter_map(|line| line.strip_prefix("$ cargo run --release -- "));
    let words = lines.map(|line| line.split('>').next().unwrap_or_default());
    words.map(|line| line.split_whitespace().collect()).collect()
}

/// Whether a name is that of a TOML file.
pub(crate) fn is_scenario(name: &str) -> bool {
    Path::new(name).extension().is_some_and(|extension| extension == "toml")
}

#[test]
fn every_command_to_type_is_taken() {
    let typed = typed();
    assert_eq!(typed[0], ["evolve", "configs/accelerating-returns.toml"]);
    assert!(typed.len() >= 6);
    for words in typed {
        let line = [&["somadawn"], words.as_slice()].concat();
        let cli = Cli::try_parse_from(&line).unwrap_or_else(|error| panic!("{line:?}: {error}"));
        for file in words.iter().filter(|word| is_scenario(word) && **word != READERS_OWN) {
            Settings::load(Path::new(file), &cli.common.overrides())
                .unwrap_or_else(|error| panic!("{line:?}: {error:?}"));
        }
    }
}

#[test]
fn exactly_two_commands_set_up() {
    let section = README.split("\n## Set up\n").nth(1).and_then(|rest| rest.split("\n## ").next());
    let section = section.expect("a section `Set up`");
    let typed: Vec<_> = section.lines().filter(|line| line.starts_with("$ ")).collect();
    assert_eq!(
        typed,
        [
            "$ cargo run --release -- evolve configs/accelerating-returns.toml",
            "$ cargo test --release"
        ]
    );
    let version = format!("Rust {}", env!("CARGO_PKG_RUST_VERSION"));
    assert!(section.contains(&version), "README does not say {version}");
}

#[test]
fn every_command_and_option_is_told() {
    let told: Vec<_> = table(README, "command").into_iter().map(|row| row[0].clone()).collect();
    let built = Cli::command();
    let verbs: Vec<_> = built.get_subcommands().filter(|verb| !verb.is_hide_set()).collect();
    assert_eq!(told.len(), verbs.len(), "{told:?}");
    for verb in verbs {
        let name = verb.get_name();
        assert!(told.iter().any(|cell| cell.trim_matches('`').split(' ').next() == Some(name)));
        for option in verb.get_arguments().filter_map(clap::Arg::get_long) {
            assert!(README.contains(&format!("--{option}")), "{name} --{option}");
        }
    }
    for option in built.get_arguments().filter_map(clap::Arg::get_long) {
        assert!(["help", "version"].contains(&option) || README.contains(&format!("`--{option}")));
    }
}

#[test]
fn every_column_is_told() {
    let named = |name: &str| README.contains(&format!("`{name}`"));
    let bodies = BodyRow::columns().into_iter().map(|column| column.name);
    let moment = |name: &&str| {
        ["mean_", "var_"]
            .iter()
            .any(|m| TRAITS.map(|t| format!("{m}{t}")).contains(&name[..].into()))
    };
    let census = CensusRow::columns().into_iter().map(|column| column.name);
    for name in bodies.chain(census.filter(|name| !moment(name))) {
        assert!(named(name), "column `{name}`");
    }
    let mut writer = csv::Writer::from_writer(Vec::new());
    writer.serialize(censored(0)).expect("a row");
    let text = writer.into_inner().expect("in memory");
    let text = String::from_utf8(text).expect("text");
    for name in text.lines().next().expect("a header").split(',') {
        assert!(named(name), "column `{name}`");
    }
}

#[test]
fn every_link_and_every_path_leads_somewhere() {
    for (page, text) in [("README.md", README), ("DEVELOPERS.md", DEVELOPERS)] {
        let links = text.split("](").skip(1).filter_map(|rest| rest.split(')').next());
        let quoted = text.split('`').skip(1).step_by(2);
        let paths = quoted.filter(|word| {
            ["src/", "tests/", "configs/"].iter().any(|room| word.starts_with(room))
                && !word.contains(['*', '<', ' ', '\n'])
        });
        for path in links.chain(paths) {
            assert!(Path::new(path).exists(), "{page} names `{path}`");
        }
    }
}
