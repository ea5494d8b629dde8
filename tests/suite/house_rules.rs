//! The rules of the house: which room may use which, how long files are, who may print.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};

/// The rooms of `src` from the ground up; a room uses those below it only.
const ROOMS: [&str; 10] = [
    "theory",
    "tissue",
    "stats",
    "scenario",
    "world",
    "record",
    "evolution",
    "study",
    "report",
    "commands",
];

/// Most lines of a file, its tests included.
const MOST_LINES: usize = 500;

/// Most lines of `main.rs`.
const MOST_LINES_OF_MAIN: usize = 60;

struct Source {
    /// Path below the project's folder.
    path: String,
    text: String,
}

impl Source {
    /// The room of the file: the first folder or file name below `src`.
    fn room(&self) -> Option<&str> {
        let below = self.path.strip_prefix("src/")?;
        let room = below.split('/').next()?.trim_end_matches(".rs");
        (!["lib", "main"].contains(&room)).then_some(room)
    }

    /// The lines of code that are neither comments nor tests; tests come last in a file.
    fn code(&self) -> impl Iterator<Item = &str> {
        let is_test = self.path.ends_with("/tests.rs");
        self.text
            .lines()
            .take_while(move |line| !is_test && line.trim() != "#[cfg(test)]")
            .filter(|line| !line.trim_start().starts_with("//"))
    }
}

fn project() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// All Rust files below a folder of the project, sorted.
fn sources(folder: &str) -> Vec<Source> {
    let mut files = Vec::new();
    collect(&project().join(folder), &mut files);
    files.sort();
    assert!(!files.is_empty(), "{folder} holds no Rust files");
    let read = |file: PathBuf| {
        let path = file.strip_prefix(project()).expect("below the project").to_string_lossy();
        let path = path.replace(std::path::MAIN_SEPARATOR, "/");
        Source { path, text: fs::read_to_string(&file).expect("the file can be read") }
    };
    files.into_iter().map(read).collect()
}

fn collect(folder: &Path, files: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).expect("the folder can be read") {
        let path = entry.expect("the entry can be read").path();
        if path.is_dir() {
            collect(&path, files);
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            files.push(path);
        }
    }
}

/// Names that follow `crate::` in a line; those in braces count too.
fn names_from_the_crate(line: &str) -> Vec<&str> {
    let is_name = |c: char| c.is_alphanumeric() || c == '_';
    let after = line.match_indices("crate::").map(|(at, mark)| &line[at + mark.len()..]);
    after
        .flat_map(|rest| match rest.strip_prefix('{') {
            Some(list) => list.split(',').map(str::trim).collect(),
            None => vec![rest],
        })
        .filter_map(|name| name.split(|c| !is_name(c)).next().filter(|name| !name.is_empty()))
        .collect()
}

#[test]
fn names_are_found_however_they_are_written() {
    assert_eq!(names_from_the_crate("use crate::theory::{Cue, Model};"), ["theory"]);
    assert_eq!(names_from_the_crate("use crate::{theory::Cue, stats};"), ["theory", "stats"]);
    assert_eq!(names_from_the_crate("let x = crate::stats::mean(crate::world::x);").len(), 2);
    assert_eq!(names_from_the_crate("let crates = 3;"), [""; 0]);
}

#[test]
fn rooms_use_rooms_below_them_only() {
    let floor = |room: &str| ROOMS.iter().position(|known| *known == room);
    let mut wrong = Vec::new();
    for source in sources("src") {
        let Some(room) = source.room() else { continue };
        let own = floor(room).unwrap_or_else(|| panic!("{} is in no known room", source.path));
        for name in source.code().flat_map(names_from_the_crate) {
            let used = floor(name).unwrap_or_else(|| panic!("{}: crate::{name}", source.path));
            if used > own {
                wrong.push(format!("{} uses {name}", source.path));
            }
        }
    }
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn the_map_of_the_house_is_in_the_crates_own_words() {
    let text = fs::read_to_string(project().join("src/lib.rs")).expect("the file can be read");
    let listed: Vec<&str> = text
        .lines()
        .filter(|line| line.starts_with("//!"))
        .flat_map(|line| line.split("[`").skip(1))
        .filter_map(|rest| rest.split('`').next())
        .collect();
    assert_eq!(listed, ROOMS);
    let declared: BTreeSet<&str> =
        text.lines().filter_map(|line| line.strip_prefix("pub mod ")?.strip_suffix(';')).collect();
    assert_eq!(declared, BTreeSet::from(ROOMS));
}

#[test]
fn files_are_short_and_begin_with_a_sentence() {
    for source in sources("src").into_iter().chain(sources("tests")) {
        let lines = source.text.lines().count();
        assert!(lines <= MOST_LINES, "{} has {lines} lines", source.path);
        if source.path.ends_with("/tests.rs") {
            continue;
        }
        let head: Vec<&str> = source
            .text
            .lines()
            .map_while(|line| line.strip_prefix("//!"))
            .take_while(|line| !line.trim().is_empty())
            .collect();
        let sentence = head.join(" ").trim().to_owned();
        let ends = sentence.ends_with('.') || sentence.ends_with(':');
        assert!(ends && sentence.len() > 10, "{} begins with `{sentence}`", source.path);
    }
    let main = fs::read_to_string(project().join("src/main.rs")).expect("the file can be read");
    assert!(main.lines().count() < MOST_LINES_OF_MAIN, "main.rs is no table of contents");
}

#[test]
fn the_library_does_not_print() {
    for source in sources("src") {
        for line in source.code() {
            for printing in ["print!(", "println!(", "dbg!("] {
                assert!(!line.contains(printing), "{}: {line}", source.path);
            }
        }
    }
}

#[test]
fn no_list_is_walked_in_the_order_of_a_hash() {
    for source in sources("src") {
        for line in source.code() {
            for kind in ["HashMap", "HashSet"] {
                assert!(!line.contains(kind), "{}: {line}", source.path);
            }
        }
    }
}

/// Whether some line of code names the package in a path.
fn uses(sources: &[Source], package: &str) -> bool {
    let name = package.replace('-', "_");
    let paths = [format!("{name}::"), format!("use {name};")];
    let lines = sources.iter().flat_map(|source| source.text.lines());
    lines
        .filter(|line| !line.trim_start().starts_with("//"))
        .any(|line| paths.iter().any(|path| names_path(line, path)))
}

/// Whether `path` stands in the line and does not merely end a longer name.
fn names_path(line: &str, path: &str) -> bool {
    line.match_indices(path).any(|(at, _)| {
        let before = line[..at].chars().next_back();
        path.starts_with("use ")
            || before.is_none_or(|c| !c.is_alphanumeric() && c != '_' && c != ':')
    })
}

#[test]
fn every_package_that_is_named_is_used() {
    let text = fs::read_to_string(project().join("Cargo.toml")).expect("the file can be read");
    let manifest: toml::Table = text.parse().expect("valid TOML");
    let packages = |table: &str| -> Vec<String> {
        manifest[table].as_table().expect("a table").keys().cloned().collect()
    };
    let (src, tests) = (sources("src"), sources("tests"));
    for package in packages("dependencies") {
        assert!(uses(&src, &package), "{package} is not used in src");
    }
    for package in packages("dev-dependencies") {
        assert!(uses(&tests, &package) || uses(&src, &package), "{package} is not used in tests");
    }
    // Those that the program is to be built with, whatever else it takes.
    for package in ["bevy_ecs", "rand", "rand_xoshiro", "ndarray", "serde", "toml", "indicatif"] {
        assert!(packages("dependencies").iter().any(|named| named == package), "{package}");
    }
    assert!(packages("dev-dependencies").iter().any(|named| named == "approx"));
}
