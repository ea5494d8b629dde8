//! Overrides from the command line: `key.path=value`, the value in TOML.

use std::sync::Arc;

use miette::NamedSource;
use serde_spanned::Spanned;
use toml::de::DeValue;

use super::fault::{FaultKind, Source};
use super::notes::Notes;
use super::registry;
use super::tree::{Content, Frame, Keys, Node, Origin};

/// A setting that replaces the scenario file's, as `--set key.path=value` gives it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Override {
    option: &'static str,
    text: String,
}

impl Override {
    /// An override as `--set` gives it: `key.path=value`, the value in TOML. A value that is no
    /// TOML and starts with a letter is taken as a text. It is checked when a scenario is read.
    #[must_use]
    pub fn set(text: impl Into<String>) -> Self {
        Self { option: "--set", text: text.into() }
    }

    /// The override that `--seed` gives.
    #[must_use]
    pub fn seed(seed: u64) -> Self {
        Self { option: "--seed", text: format!("seed={seed}") }
    }

    /// The override that sets the number at `key` to the last bit, as asked for by `option`.
    #[must_use]
    pub fn number(option: &'static str, key: &str, value: f64) -> Self {
        Self { option, text: format!("{key}={value:?}") }
    }

    pub(crate) fn source(&self) -> Source {
        Arc::new(NamedSource::new(self.option, self.text.clone()))
    }

    /// Puts this override, the `source`-th source, into the tree; the last of several wins.
    pub(crate) fn apply(&self, source: usize, root: &mut Keys, notes: &mut Notes) {
        let whole = Origin { source, span: 0..self.text.len() };
        let Some((path, value)) = self.text.split_once('=') else {
            return notes.at(&whole, FaultKind::OverrideForm { text: self.text.clone() });
        };
        let names: Vec<_> = path.split('.').map(str::trim).collect();
        if names.iter().any(|name| name.is_empty()) {
            return notes.at(&whole, FaultKind::OverrideForm { text: self.text.clone() });
        }
        let key = Origin { source, span: 0..path.len() };
        if let Some(fault) = table_fault(&names.join("."), value) {
            return notes.at(&key, fault);
        }
        let start = self.text.len() - value.trim_start().len();
        match parse(value.trim()) {
            Ok(parsed) => {
                let mut node = Frame { source, offset: start }.node(&(0..0), &parsed);
                node.key = key;
                insert(root, &names, node);
            }
            Err(error) => {
                let end = self.text.len();
                let span =
                    error.span().map_or(start..end, |span| span.start + start..span.end + start);
                let message = error.message().to_owned();
                notes.at(&Origin { source, span }, FaultKind::Syntax { message });
            }
        }
    }
}

/// The fault of an override that would replace a whole table.
fn table_fault(path: &str, value: &str) -> Option<FaultKind> {
    let inside = registry::entries()
        .iter()
        .find(|entry| entry.path().strip_prefix(path).is_some_and(|rest| rest.starts_with('.')))?;
    Some(FaultKind::NotATable {
        key: path.to_owned(),
        value: value.chars().take(48).collect(),
        found: "given as a whole",
        example: inside.path()[path.len() + 1..].to_owned(),
    })
}

fn parse(value: &str) -> Result<Spanned<DeValue<'_>>, toml::de::Error> {
    DeValue::parse(value).or_else(|error| {
        if value.starts_with(char::is_alphabetic) {
            Ok(Spanned::new(0..value.len(), DeValue::String(value.into())))
        } else {
            Err(error)
        }
    })
}

/// Puts `node` at `names`, making the tables on the way and replacing what is no table.
fn insert(root: &mut Keys, names: &[&str], node: Node) {
    let Some((last, tables)) = names.split_last() else { return };
    let mut keys = root;
    for name in tables {
        let empty = || Node {
            key: node.key.clone(),
            place: node.place.clone(),
            content: Content::Table(Keys::new()),
        };
        let inner = keys.entry((*name).to_owned()).or_insert_with(empty);
        if !matches!(inner.content, Content::Table(_)) {
            *inner = empty();
        }
        let Content::Table(inner) = &mut inner.content else { return };
        keys = inner;
    }
    keys.insert((*last).to_owned(), node);
}
