//! One number per cue, as a table with the cues' names.

use serde_json::json;

use crate::theory::Cue;

use super::super::fault::FaultKind;
use super::super::nearest::nearest;
use super::super::notes::Notes;
use super::super::tree::{Content, Node};
use super::domain::{Domain, wrong_type};
use super::numbers::Real;

/// One number per cue; a cue that is not named has 0.
#[derive(Debug)]
pub(crate) struct PerCue {
    /// The cues that are built.
    pub(crate) built: &'static [Cue],
    /// Names of cues of later versions.
    pub(crate) later: &'static [&'static str],
    /// What each number may be.
    pub(crate) number: Real,
}

impl PerCue {
    fn unknown(&self, key: &str, name: &str) -> FaultKind {
        let full = format!("{key}.{name}");
        let names = || self.built.iter().map(|cue| cue.name());
        if self.later.contains(&name) {
            let instead =
                format!("the cues are {} for now", names().collect::<Vec<_>>().join(", "));
            return FaultKind::NotBuilt { what: full, instead };
        }
        let nearest = nearest(name, names()).map(|name| format!("{key}.{name}"));
        FaultKind::UnknownKey { key: full, nearest, known: names().map(str::to_owned).collect() }
    }
}

impl Domain for PerCue {
    type Value = [f64; Cue::COUNT];
    type Plain = [f64; Cue::COUNT];

    fn value(&self, plain: Self::Plain) -> Self::Value {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<Self::Value> {
        let Content::Table(keys) = &node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        let mut values = [0.0; Cue::COUNT];
        for (name, item) in keys {
            let Some(cue) = self.built.iter().find(|cue| cue.name() == name) else {
                notes.at(&item.key, self.unknown(key, name));
                continue;
            };
            let number = self.number.read(&format!("{key}.{name}"), item, notes);
            values[cue.index()] = number.unwrap_or(0.0);
        }
        Some(values)
    }

    fn write(&self, value: &Self::Value) -> toml::Value {
        let named = self.built.iter().filter(|cue| value[cue.index()] != 0.0);
        let table: toml::Table =
            named.map(|cue| (cue.name().to_owned(), value[cue.index()].into())).collect();
        table.into()
    }

    fn allowed(&self) -> String {
        let example = self.built.first().map_or("noise", |cue| cue.name());
        format!("a table from cue to number, such as {{ {example} = 1.0 }}, each {}", {
            self.number.allowed()
        })
    }

    fn schema(&self) -> serde_json::Value {
        let properties: serde_json::Map<_, _> =
            self.built.iter().map(|cue| (cue.name().to_owned(), self.number.schema())).collect();
        json!({ "type": "object", "properties": properties, "additionalProperties": false })
    }
}
