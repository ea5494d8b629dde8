//! Whole numbers, real numbers, and real numbers with a word in their place.

use serde_json::json;

use super::super::fault::FaultKind;
use super::super::nearest::nearest;
use super::super::notes::Notes;
use super::super::tree::{Content, Node};
use super::domain::{Domain, wrong_type};

/// Whole numbers from `least` to `most`, both allowed; neither exceeds what TOML can hold.
#[derive(Debug)]
pub(crate) struct Whole {
    /// The least.
    pub(crate) least: u64,
    /// The most.
    pub(crate) most: u64,
}

impl Domain for Whole {
    type Value = u64;
    type Plain = u64;

    fn value(&self, plain: u64) -> u64 {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<u64> {
        let Content::Integer(number) = node.content else {
            notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
            return None;
        };
        let inside = u64::try_from(number).ok().filter(|n| (self.least..=self.most).contains(n));
        if inside.is_none() {
            let value = notes.excerpt(node);
            let kind = FaultKind::OutOfRange { key: key.into(), value, allowed: self.allowed() };
            notes.at(&node.place, kind);
        }
        inside
    }

    fn write(&self, value: &u64) -> toml::Value {
        i64::try_from(*value).unwrap_or(i64::MAX).into()
    }

    fn allowed(&self) -> String {
        format!("a whole number from {} to {}", self.least, self.most)
    }

    fn schema(&self) -> serde_json::Value {
        json!({ "type": "integer", "minimum": self.least, "maximum": self.most })
    }
}

/// An end of a range.
#[derive(Debug, Clone, Copy)]
pub(crate) enum End {
    /// The end itself is allowed.
    Closed(f64),
    /// The end itself is not allowed.
    Open(f64),
}

/// Real numbers between two ends; never NaN or infinite.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Real {
    /// The lower end.
    pub(crate) low: End,
    /// The upper end.
    pub(crate) high: End,
}

impl Real {
    /// Numbers from `low` to `high`, both allowed.
    pub(crate) const fn from_to(low: f64, high: f64) -> Self {
        Self { low: End::Closed(low), high: End::Closed(high) }
    }

    /// Numbers above `low`, up to `high` which is allowed.
    pub(crate) const fn above_to(low: f64, high: f64) -> Self {
        Self { low: End::Open(low), high: End::Closed(high) }
    }

    /// Numbers above `low` and below `high`.
    pub(crate) const fn between(low: f64, high: f64) -> Self {
        Self { low: End::Open(low), high: End::Open(high) }
    }

    fn contains(self, x: f64) -> bool {
        let above = match self.low {
            End::Closed(low) => x >= low,
            End::Open(low) => x > low,
        };
        let below = match self.high {
            End::Closed(high) => x <= high,
            End::Open(high) => x < high,
        };
        above && below
    }
}

impl Domain for Real {
    type Value = f64;
    type Plain = f64;

    fn value(&self, plain: f64) -> f64 {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<f64> {
        #[expect(clippy::cast_precision_loss, reason = "64 is meant as 64.0")]
        let number = match node.content {
            Content::Real(number) => number,
            Content::Integer(number) => number as f64,
            _ => {
                notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
                return None;
            }
        };
        if self.contains(number) {
            // Minus zero means zero, and must not reach signs or tables.
            return Some(number + 0.0);
        }
        let (key, value, allowed) = (key.into(), notes.excerpt(node), self.allowed());
        let kind = if number.is_finite() {
            FaultKind::OutOfRange { key, value, allowed }
        } else {
            FaultKind::NotFinite { key, value, allowed }
        };
        notes.at(&node.place, kind);
        None
    }

    fn write(&self, value: &f64) -> toml::Value {
        (*value).into()
    }

    fn allowed(&self) -> String {
        match (self.low, self.high) {
            (End::Closed(low), End::Closed(high)) => format!("a number from {low} to {high}"),
            (End::Open(low), End::Closed(high)) => format!("a number above {low}, at most {high}"),
            (End::Closed(low), End::Open(high)) => format!("a number from {low}, below {high}"),
            (End::Open(low), End::Open(high)) => format!("a number above {low}, below {high}"),
        }
    }

    fn schema(&self) -> serde_json::Value {
        let (low_name, low) = match self.low {
            End::Closed(low) => ("minimum", low),
            End::Open(low) => ("exclusiveMinimum", low),
        };
        let (high_name, high) = match self.high {
            End::Closed(high) => ("maximum", high),
            End::Open(high) => ("exclusiveMaximum", high),
        };
        json!({ "type": "number", low_name: low, high_name: high })
    }
}

/// A number, or one word that stands for a number the program finds.
#[derive(Debug)]
pub(crate) struct RealOr {
    /// The word.
    pub(crate) word: &'static str,
    /// What the word means.
    pub(crate) means: &'static str,
    /// The numbers allowed.
    pub(crate) number: Real,
}

/// A value of [`RealOr`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum WordOr {
    /// The word.
    Word,
    /// A number.
    Number(f64),
}

impl Domain for RealOr {
    type Value = WordOr;
    type Plain = WordOr;

    fn value(&self, plain: WordOr) -> WordOr {
        plain
    }

    fn read(&self, key: &str, node: &Node, notes: &mut Notes) -> Option<WordOr> {
        match &node.content {
            Content::Text(text) if text == self.word => Some(WordOr::Word),
            Content::Text(text) => {
                let near = nearest(text, [self.word]).map(str::to_owned);
                let (key, value, allowed) = (key.into(), notes.excerpt(node), self.allowed());
                let kind = FaultKind::UnknownWord { key, value, allowed, nearest: near };
                notes.at(&node.place, kind);
                None
            }
            Content::Real(_) | Content::Integer(_) => {
                self.number.read(key, node, notes).map(WordOr::Number)
            }
            _ => {
                notes.at(&node.place, wrong_type(key, node, self.allowed(), notes));
                None
            }
        }
    }

    fn write(&self, value: &WordOr) -> toml::Value {
        match value {
            WordOr::Word => self.word.into(),
            WordOr::Number(number) => (*number).into(),
        }
    }

    fn allowed(&self) -> String {
        format!("\"{}\" ({}) or {}", self.word, self.means, self.number.allowed())
    }

    fn schema(&self) -> serde_json::Value {
        json!({ "anyOf": [{ "const": self.word }, self.number.schema()] })
    }
}
