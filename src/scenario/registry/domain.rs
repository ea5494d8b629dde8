//! What a parameter may be: how its values are read, described and written.

use super::super::fault::FaultKind;
use super::super::notes::Notes;
use super::super::tree::{Content, Node};

/// A set of allowed values.
pub(crate) trait Domain: Sync + 'static {
    /// What the settings hold.
    type Value;
    /// The same in a form that a constant can hold.
    type Plain: Copy + Sync + 'static;

    /// The value that a constant stands for.
    fn value(&self, plain: Self::Plain) -> Self::Value;
    /// Reads the value of `key`; notes every fault and gives nothing if there is one.
    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<Self::Value>;
    /// The value as TOML; reading it gives the same value.
    fn write(&self, value: &Self::Value) -> toml::Value;
    /// What is allowed, in words.
    fn allowed(&self) -> String;
    /// What is allowed, as JSON Schema.
    fn schema(&self) -> serde_json::Value;
}

/// The fault of a value of another type.
pub(crate) fn wrong_type(key: &str, node: &Node, allowed: String, notes: &Notes) -> FaultKind {
    let (value, found) = (notes.excerpt(node), node.content.kind());
    FaultKind::WrongType { key: key.into(), value, found, allowed }
}

/// A text of one line.
#[derive(Debug)]
pub(crate) struct Text {
    /// Most characters.
    pub(crate) longest: usize,
}

impl Domain for Text {
    type Value = String;
    type Plain = &'static str;

    fn value(&self, plain: &'static str) -> String {
        plain.to_owned()
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<String> {
        let Content::Text(text) = &node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        let fits = !text.trim().is_empty()
            && text.chars().count() <= self.longest
            && !text.chars().any(char::is_control);
        if !fits {
            let value = notes.excerpt(node);
            let kind = FaultKind::OutOfRange { key: key.into(), value, allowed: self.allowed() };
            notes.at(&node.place, kind);
        }
        fits.then(|| text.clone())
    }

    fn write(&self, value: &String) -> toml::Value {
        value.as_str().into()
    }

    fn allowed(&self) -> String {
        format!("a text in quotes, one line of 1 to {} characters", self.longest)
    }

    fn schema(&self) -> serde_json::Value {
        serde_json::json!({ "type": "string", "minLength": 1, "maxLength": self.longest })
    }
}

/// Yes or no.
#[derive(Debug)]
pub(crate) struct Flag;

impl Domain for Flag {
    type Value = bool;
    type Plain = bool;

    fn value(&self, plain: bool) -> bool {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<bool> {
        if let Content::Flag(flag) = node.content {
            return Some(flag);
        }
        notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
        None
    }

    fn write(&self, value: &bool) -> toml::Value {
        (*value).into()
    }

    fn allowed(&self) -> String {
        "true or false".into()
    }

    fn schema(&self) -> serde_json::Value {
        serde_json::json!({ "type": "boolean" })
    }
}
