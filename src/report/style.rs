//! How a report may look where it is read.

/// What the reader's terminal can show.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Style {
    /// Whether colours may be used.
    pub colour: bool,
    /// Whether characters beyond ASCII may be used.
    pub unicode: bool,
}

impl Style {
    /// No colour, ASCII alone: safe everywhere.
    pub const PLAIN: Self = Self { colour: false, unicode: false };

    /// The style for an output that is a terminal or not, by the environment variables that
    /// `variable` looks up.
    ///
    /// Colour needs a terminal that is not `TERM=dumb`, and no `NO_COLOR` (set and not empty);
    /// characters beyond ASCII need a locale in UTF-8, by the first of `LC_ALL`, `LC_CTYPE` and
    /// `LANG` that is set and not empty.
    #[must_use]
    pub fn from_environment(is_terminal: bool, variable: impl Fn(&str) -> Option<String>) -> Self {
        let set = |name: &str| variable(name).filter(|value| !value.is_empty());
        let locale = ["LC_ALL", "LC_CTYPE", "LANG"].into_iter().find_map(set).unwrap_or_default();
        let locale = locale.to_ascii_lowercase();
        Self {
            colour: is_terminal
                && set("NO_COLOR").is_none()
                && set("TERM").as_deref() != Some("dumb"),
            unicode: locale.contains("utf-8") || locale.contains("utf8"),
        }
    }

    /// `text` in `ink`, or as it is where colours may not be used.
    #[must_use]
    pub fn paint(self, ink: Ink, text: &str) -> String {
        if self.colour { format!("\x1b[{}m{text}\x1b[0m", ink.code()) } else { text.to_owned() }
    }
}

/// What a piece of text means; the words say it too, for those who see no colours.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ink {
    /// A heading.
    Heading,
    /// As expected.
    Good,
    /// To be looked at.
    Doubtful,
    /// Against expectation.
    Bad,
    /// Of less weight.
    Faint,
}

impl Ink {
    /// The number of the terminal's control sequence (ECMA-48, SGR).
    const fn code(self) -> u8 {
        match self {
            Self::Heading => 1,
            Self::Good => 32,
            Self::Doubtful => 33,
            Self::Bad => 31,
            Self::Faint => 2,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn style(is_terminal: bool, variables: &[(&str, &str)]) -> Style {
        Style::from_environment(is_terminal, |name| {
            variables.iter().find(|(key, _)| *key == name).map(|(_, value)| (*value).to_owned())
        })
    }

    #[test]
    fn colour_is_for_terminals_that_want_it() {
        assert!(style(true, &[]).colour);
        assert!(style(true, &[("NO_COLOR", "")]).colour);
        assert!(!style(true, &[("NO_COLOR", "1")]).colour);
        assert!(!style(true, &[("TERM", "dumb")]).colour);
        assert!(!style(false, &[]).colour);
    }

    #[test]
    fn the_locale_decides_on_characters() {
        assert!(style(false, &[("LANG", "en_GB.UTF-8")]).unicode);
        assert!(style(false, &[("LC_ALL", ""), ("LANG", "C.utf8")]).unicode);
        assert!(!style(true, &[("LC_ALL", "C"), ("LANG", "en_GB.UTF-8")]).unicode);
        assert!(!style(true, &[]).unicode);
    }

    #[test]
    fn paint_adds_nothing_where_colours_may_not_be_used() {
        assert_eq!(Style::PLAIN.paint(Ink::Bad, "no"), "no");
        let colourful = Style { colour: true, unicode: false };
        assert_eq!(colourful.paint(Ink::Bad, "no"), "\x1b[31mno\x1b[0m");
    }
}
