//! DEVELOPERS.md describes the house as it is: its rooms in their order, and the systems of a tick in theirs.

use std::path::{Path, PathBuf};

use crate::readme::{DEVELOPERS, table};

/// First cells of the rows of a table, without backticks.
fn first_cells(header: &str) -> Vec<String> {
    let rows = table(DEVELOPERS, header).into_iter();
    rows.map(|row| row[0].trim_matches('`').to_owned()).collect()
}

fn rooms() -> Vec<String> {
    let paths = first_cells("room").into_iter();
    paths.map(|path| path.trim_start_matches("src/").to_owned()).collect()
}

fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).expect("a folder").map(Result::unwrap) {
        let path = entry.path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            found.push(path);
        }
    }
    found
}

#[test]
fn readme_of_developers_lists_every_room() {
    let lib = std::fs::read_to_string("src/lib.rs").expect("it is there");
    let modules = lib.lines().filter_map(|line| line.strip_prefix("pub mod "));
    let mut there: Vec<_> = modules.map(|name| name.trim_end_matches(';').to_owned()).collect();
    let mut told = rooms();
    told.sort();
    there.sort();
    assert_eq!(told, there);
}

#[test]
fn no_room_uses_one_above_it() {
    let rooms = rooms();
    for (place, room) in rooms.iter().enumerate() {
        let files = sources(&Path::new("src").join(room));
        for file in files.into_iter().chain([Path::new("src").join(format!("{room}.rs"))]) {
            let text = std::fs::read_to_string(&file).unwrap_or_default();
            assert!(!text.contains("crate::{"), "{}: write paths out", file.display());
            for used in text.split("crate::").skip(1) {
                let end = used.find(|c: char| !c.is_ascii_lowercase() && c != '_');
                let used = &used[..end.unwrap_or(used.len())];
                let at = rooms.iter().position(|known| known == used);
                assert!(at.is_none_or(|at| at <= place), "{} uses {used}", file.display());
            }
        }
    }
}

#[test]
fn systems_are_told_in_their_order() {
    let text = std::fs::read_to_string("src/world/schedule.rs").expect("it is there");
    let chain = text.split("add_systems(").nth(1).and_then(|rest| rest.split(".chain()").next());
    let lines = chain.expect("one chain").lines().filter_map(|line| line.trim().strip_suffix(','));
    let systems: Vec<_> =
        lines.filter_map(|line| line.split_once("::")).map(|(_, name)| name).collect();
    assert_eq!(systems, first_cells("system"));
}
