//! One word out of a few, and lists of cues.

use serde_json::json;

use crate::theory::{Cue, CueSet};

use super::super::fault::FaultKind;
use super::super::nearest::nearest;
use super::super::notes::Notes;
use super::super::tree::{Content, Node};
use super::domain::{Domain, wrong_type};

/// One word out of a few.
#[derive(Debug)]
pub(crate) struct Words<T: 'static> {
    /// The words and what they stand for.
    pub(crate) words: &'static [(&'static str, T)],
    /// Words of later versions.
    pub(crate) later: &'static [&'static str],
}

impl<T> Words<T> {
    fn names(&self) -> impl Iterator<Item = &'static str> {
        self.words.iter().map(|(name, _)| *name)
    }
}

impl<T: Copy + PartialEq + Sync + 'static> Domain for Words<T> {
    type Value = T;
    type Plain = T;

    fn value(&self, plain: T) -> T {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<T> {
        let Content::Text(text) = &node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        let known = self.words.iter().find(|(name, _)| name == text);
        if known.is_none() {
            let kind = unknown_word(key, text, node, &self.allowed(), self.later, notes, || {
                nearest(text, self.names()).map(str::to_owned)
            });
            notes.at(&node.place, kind);
        }
        known.map(|(_, value)| *value)
    }

    fn write(&self, value: &T) -> toml::Value {
        self.words.iter().find(|(_, known)| known == value).map_or("", |(name, _)| name).into()
    }

    fn allowed(&self) -> String {
        one_of(self.names())
    }

    fn schema(&self) -> serde_json::Value {
        json!({ "enum": self.names().collect::<Vec<_>>() })
    }
}

fn unknown_word(
    key: &str,
    text: &str,
    node: &Node,
    allowed: &str,
    later: &[&str],
    notes: &Notes,
    nearest: impl FnOnce() -> Option<String>,
) -> FaultKind {
    let value = notes.excerpt(node);
    if later.contains(&text) {
        let what = format!("{key} = {value}");
        return FaultKind::NotBuilt { what, instead: format!("it can be {allowed} for now") };
    }
    FaultKind::UnknownWord { key: key.into(), value, allowed: allowed.into(), nearest: nearest() }
}

/// `"a"`, `"a" or "b"`, `"a", "b" or "c"`.
pub(crate) fn one_of(names: impl Iterator<Item = &'static str>) -> String {
    let quoted: Vec<_> = names.map(|name| format!("\"{name}\"")).collect();
    match quoted.split_last() {
        None => String::new(),
        Some((last, [])) => last.clone(),
        Some((last, others)) => format!("{} or {last}", others.join(", ")),
    }
}

/// A list of cues, each at most once.
#[derive(Debug)]
pub(crate) struct CueList {
    /// The cues that are built.
    pub(crate) built: &'static [Cue],
    /// Names of cues of later versions.
    pub(crate) later: &'static [&'static str],
}

impl CueList {
    pub(crate) fn names(&self) -> impl Iterator<Item = &'static str> {
        self.built.iter().map(|cue| cue.name())
    }

    fn read_item(&self, key: &str, item: &Node, notes: &mut Notes) -> Option<Cue> {
        let allowed = one_of(self.names());
        let Content::Text(text) = &item.content else {
            let kind = wrong_type(key, item, format!("a list of {allowed}"), notes);
            notes.at(&item.place, kind);
            return None;
        };
        let cue = self.built.iter().copied().find(|cue| cue.name() == text);
        if cue.is_none() {
            let kind = unknown_word(key, text, item, &allowed, self.later, notes, || {
                nearest(text, self.names()).map(str::to_owned)
            });
            notes.at(&item.place, kind);
        }
        cue
    }
}

impl Domain for CueList {
    type Value = CueSet;
    type Plain = &'static [Cue];

    fn value(&self, plain: &'static [Cue]) -> CueSet {
        plain.iter().copied().collect()
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<CueSet> {
        let Content::Array(items) = &node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        let mut set = CueSet::EMPTY;
        for item in items {
            let Some(cue) = self.read_item(key, item, notes) else { continue };
            if set.contains(cue) {
                let kind = FaultKind::NamedTwice { key: key.into(), value: notes.excerpt(item) };
                notes.at(&item.place, kind);
            }
            set = set.with(cue);
        }
        // A faulty list still tells which cues its good items enable, so that later checks do
        // not report what merely follows.
        Some(set)
    }

    fn write(&self, value: &CueSet) -> toml::Value {
        value.iter().map(Cue::name).collect::<Vec<_>>().into()
    }

    fn allowed(&self) -> String {
        format!("a list of any of {}, each at most once", one_of(self.names()))
    }

    fn schema(&self) -> serde_json::Value {
        let names: Vec<_> = self.names().collect();
        json!({ "type": "array", "items": { "enum": names }, "uniqueItems": true })
    }
}
