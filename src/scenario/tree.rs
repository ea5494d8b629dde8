//! A scenario text as a tree whose every key and value remembers where it was written.

use std::collections::BTreeMap;
use std::ops::Range;

use serde_spanned::Spanned;
use toml::de::{DeTable, DeValue};

/// The keys of a table, in alphabetical order.
pub(crate) type Keys = BTreeMap<String, Node>;

/// Where something was written: which source, and which bytes of it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(crate) struct Origin {
    /// 0 for the file, i for the i-th override.
    pub(crate) source: usize,
    /// Bytes of that source.
    pub(crate) span: Range<usize>,
}

/// A key with its value.
#[derive(Debug, Clone)]
pub(crate) struct Node {
    /// Where the key stands.
    pub(crate) key: Origin,
    /// Where the value stands.
    pub(crate) place: Origin,
    /// The value.
    pub(crate) content: Content,
}

/// A TOML value.
#[derive(Debug, Clone)]
pub(crate) enum Content {
    /// A table, inline or not.
    Table(Keys),
    /// An array.
    Array(Vec<Node>),
    /// A string.
    Text(String),
    /// An integer; one beyond 128 bits is held at their end.
    Integer(i128),
    /// A float; one beyond the range of doubles is infinite.
    Real(f64),
    /// A boolean.
    Flag(bool),
    /// A date or a time, which no key takes.
    Moment,
}

impl Content {
    /// What kind of value this is, in words.
    pub(crate) const fn kind(&self) -> &'static str {
        match self {
            Self::Table(_) => "a table",
            Self::Array(_) => "a list",
            Self::Text(_) => "a text",
            Self::Integer(_) => "a whole number",
            Self::Real(_) => "a number with a decimal point",
            Self::Flag(_) => "true or false",
            Self::Moment => "a date or time",
        }
    }
}

/// Where a parsed text stands in its source.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Frame {
    /// Number of the source.
    pub(crate) source: usize,
    /// Byte of the source at which the parsed text starts.
    pub(crate) offset: usize,
}

impl Frame {
    fn origin(self, span: &Range<usize>) -> Origin {
        Origin { source: self.source, span: span.start + self.offset..span.end + self.offset }
    }

    /// The tree of a parsed table.
    pub(crate) fn keys(self, table: &DeTable<'_>) -> Keys {
        let node = |(key, value): (&Spanned<_>, &Spanned<DeValue<'_>>)| {
            let name: &std::borrow::Cow<'_, str> = key.get_ref();
            (name.to_string(), self.node(&key.span(), value))
        };
        table.iter().map(node).collect()
    }

    /// The tree of a parsed value whose key stands at `key`.
    pub(crate) fn node(self, key: &Range<usize>, value: &Spanned<DeValue<'_>>) -> Node {
        Node {
            key: self.origin(key),
            place: self.origin(&value.span()),
            content: self.content(value.get_ref()),
        }
    }

    fn content(self, value: &DeValue<'_>) -> Content {
        match value {
            DeValue::Table(table) => Content::Table(self.keys(table)),
            DeValue::Array(items) => {
                Content::Array(items.iter().map(|item| self.node(&item.span(), item)).collect())
            }
            DeValue::String(text) => Content::Text(text.to_string()),
            DeValue::Integer(digits) => Content::Integer(integer(digits.as_str(), digits.radix())),
            DeValue::Float(digits) => Content::Real(digits.as_str().parse().unwrap_or(f64::NAN)),
            DeValue::Boolean(flag) => Content::Flag(*flag),
            DeValue::Datetime(_) => Content::Moment,
        }
    }
}

fn integer(digits: &str, radix: u32) -> i128 {
    let end = if digits.starts_with('-') { i128::MIN } else { i128::MAX };
    i128::from_str_radix(digits, radix).unwrap_or(end)
}
