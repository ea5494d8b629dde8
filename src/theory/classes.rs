//! Classes of bodies by what their cells specialise in.

use std::fmt;

use serde::{Deserialize, Serialize};

/// How far a body's cells are specialised.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum BodyClass {
    /// All cells of one kind: only germ, only soma, or only generalists.
    Alike,
    /// Soma or germ beside generalists.
    Partial,
    /// Germ and soma, generalists under 5 %.
    Complete,
}

/// Share of generalists below which germ and soma make a body `complete`.
pub const FEW_GENERALISTS: f64 = 0.05;

impl BodyClass {
    /// All classes, from the least specialised to the most.
    pub const ALL: [Self; 3] = [Self::Alike, Self::Partial, Self::Complete];

    /// The class of a body with so many germ, soma and generalist cells (or shares of them).
    #[must_use]
    pub fn of(germ: f64, soma: f64, generalists: f64) -> Self {
        let kinds = [germ, soma, generalists].into_iter().filter(|count| *count > 0.0).count();
        let cells = germ + soma + generalists;
        if kinds < 2 {
            Self::Alike
        } else if germ > 0.0 && soma > 0.0 && generalists < FEW_GENERALISTS * cells {
            Self::Complete
        } else {
            Self::Partial
        }
    }

    /// The class's name in tables and reports.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Alike => "alike",
            Self::Partial => "partial",
            Self::Complete => "complete",
        }
    }
}

impl fmt::Display for BodyClass {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_body_is_classed_by_the_kinds_it_holds() {
        assert_eq!(BodyClass::of(0.0, 0.0, 64.0), BodyClass::Alike);
        assert_eq!(BodyClass::of(0.0, 64.0, 0.0), BodyClass::Alike);
        assert_eq!(BodyClass::of(0.0, 1.0, 63.0), BodyClass::Partial);
        assert_eq!(BodyClass::of(2.0, 0.0, 62.0), BodyClass::Partial);
        assert_eq!(BodyClass::of(32.0, 32.0, 0.0), BodyClass::Complete);
        assert_eq!(BodyClass::of(48.0, 48.0, 4.0), BodyClass::Complete);
        assert_eq!(BodyClass::of(47.0, 48.0, 5.0), BodyClass::Partial);
    }
}
