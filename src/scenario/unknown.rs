//! Keys that no parameter has, and tables that are no tables.

use super::fault::FaultKind;
use super::nearest::{likeness, nearest};
use super::notes::Notes;
use super::registry::{self, LATER};
use super::tree::{Content, Keys, Node};

/// Likeness of the last names above which a key of another table is offered.
const LIKE_ANOTHER_TABLE: f64 = 0.8;

/// Notes every key of the tree that no parameter has.
pub(crate) fn note_unknown_keys(root: &Keys, notes: &mut Notes) {
    note_in("", root, notes);
}

fn note_in(table: &str, keys: &Keys, notes: &mut Notes) {
    for (name, node) in keys {
        let path = if table.is_empty() { name.clone() } else { format!("{table}.{name}") };
        if registry::entry(&path).is_some() {
            continue;
        }
        if let Some(inside) = first_inside(&path) {
            match &node.content {
                Content::Table(keys) => note_in(&path, keys, notes),
                _ => note_no_table(path, node, inside, notes),
            }
        } else {
            let kind = stranger(table, name, path);
            notes.at(&node.key, kind);
        }
    }
}

/// The first key, relative to the table `path`, of that table.
fn first_inside(path: &str) -> Option<&'static str> {
    registry::entries().iter().find_map(|entry| entry.path().strip_prefix(path)?.strip_prefix('.'))
}

fn note_no_table(path: String, node: &Node, inside: &str, notes: &mut Notes) {
    let (value, found) = (notes.excerpt(node), node.content.kind());
    let kind = FaultKind::NotATable { key: path, value, found, example: inside.to_owned() };
    notes.at(&node.place, kind);
}

fn stranger(table: &str, name: &str, path: String) -> FaultKind {
    if let Some(later) = LATER.iter().find(|later| later.path == path) {
        return FaultKind::NotBuilt { what: path, instead: later.instead.to_owned() };
    }
    let known = names_in(table);
    let nearest = nearest(name, known.iter().copied())
        .map(|near| if table.is_empty() { near.to_owned() } else { format!("{table}.{near}") });
    let key = if name.chars().count() > 64 {
        format!("{}...", path.chars().take(64).collect::<String>())
    } else {
        path
    };
    FaultKind::UnknownKey {
        key,
        nearest: elsewhere(name, nearest.as_deref()).or(nearest),
        known: known.into_iter().map(str::to_owned).collect(),
    }
}

/// Names of the keys and tables directly in `table`.
fn names_in(table: &str) -> Vec<&'static str> {
    let mut names: Vec<&'static str> = Vec::new();
    for entry in registry::entries() {
        let rest = if table.is_empty() {
            Some(entry.path())
        } else {
            entry.path().strip_prefix(table).and_then(|rest| rest.strip_prefix('.'))
        };
        let Some(name) = rest.and_then(|rest| rest.split('.').next()) else { continue };
        if !names.contains(&name) {
            names.push(name);
        }
    }
    names
}

/// The path of a key of another table whose name is much like `name`, and more so than `here`.
fn elsewhere(name: &str, here: Option<&str>) -> Option<String> {
    let last = |path: &str| likeness(name, path.rsplit('.').next().unwrap_or(path));
    let floor = here.map_or(LIKE_ANOTHER_TABLE, |path| last(path).max(LIKE_ANOTHER_TABLE));
    let (likeness, path) = registry::entries()
        .iter()
        .map(|entry| (likeness(name, entry.name()), entry.path()))
        .reduce(|best, next| if next.0 > best.0 { next } else { best })?;
    (likeness > floor).then(|| path.to_owned())
}
