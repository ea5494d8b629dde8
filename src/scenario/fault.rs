//! What can be wrong with a scenario, and where it was written.

use std::fmt;
use std::sync::Arc;

use miette::{Diagnostic, LabeledSpan, NamedSource, SourceCode};
use thiserror::Error;

use crate::theory::returns::CurveError;

/// A text that was read, with the name it goes by: the file's path, or the option that gave it.
pub type Source = Arc<NamedSource<String>>;

/// What is wrong. Every kind names the key and the value, and [`FaultKind::remedy`] the way out.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum FaultKind {
    /// The text is no TOML.
    #[error("not valid TOML: {message}")]
    Syntax {
        /// What the TOML reader says.
        message: String,
    },
    /// More syntax errors than are worth reading.
    #[error("{count} more places are not valid TOML")]
    MoreSyntax {
        /// How many.
        count: usize,
    },
    /// No such key.
    #[error("unknown key `{key}`")]
    UnknownKey {
        /// The key as written, with its table.
        key: String,
        /// The known key that is most like it.
        nearest: Option<String>,
        /// The keys its table has.
        known: Vec<String>,
    },
    /// A key, table or word that later versions will know.
    #[error("`{what}` is not built yet")]
    NotBuilt {
        /// The key, or the key and its value.
        what: String,
        /// What can be had now.
        instead: String,
    },
    /// A table was given a plain value.
    #[error("`{key}` = {value} is {found}, but `{key}` is a table")]
    NotATable {
        /// The table.
        key: String,
        /// What was written.
        value: String,
        /// What kind of value that is.
        found: &'static str,
        /// One of the table's keys.
        example: String,
    },
    /// A value of another type.
    #[error("`{key}` = {value} is {found}; it must be {allowed}")]
    WrongType {
        /// The key.
        key: String,
        /// What was written.
        value: String,
        /// What kind of value that is.
        found: &'static str,
        /// What is allowed.
        allowed: String,
    },
    /// NaN or infinity.
    #[error("`{key}` = {value} is not a finite number; it must be {allowed}")]
    NotFinite {
        /// The key.
        key: String,
        /// What was written.
        value: String,
        /// What is allowed.
        allowed: String,
    },
    /// A value outside its range.
    #[error("`{key}` = {value} is out of range; it must be {allowed}")]
    OutOfRange {
        /// The key.
        key: String,
        /// What was written.
        value: String,
        /// What is allowed.
        allowed: String,
    },
    /// A word that is none of the allowed ones.
    #[error("`{key}` = {value} is no known word; it must be {allowed}")]
    UnknownWord {
        /// The key.
        key: String,
        /// What was written.
        value: String,
        /// What is allowed.
        allowed: String,
        /// The allowed word that is most like it.
        nearest: Option<String>,
    },
    /// A key without a default is absent.
    #[error("`{key}` is missing")]
    Missing {
        /// The key.
        key: String,
        /// What to write, as TOML.
        example: String,
        /// Why it is needed.
        because: String,
    },
    /// An item of a list stands there twice.
    #[error("`{key}` names {value} twice")]
    NamedTwice {
        /// The key.
        key: String,
        /// The repeated item.
        value: String,
    },
    /// A key that only means something with another value of its sibling.
    #[error("`{key}` belongs to {owners}, but here {actual}")]
    Misplaced {
        /// The key.
        key: String,
        /// The settings that use it.
        owners: String,
        /// The setting there is.
        actual: String,
    },
    /// Two keys that do not fit each other.
    #[error("`{key}` = {value} must be {relation} `{other}` = {limit}")]
    Relation {
        /// The key at fault.
        key: String,
        /// Its value.
        value: String,
        /// How it must stand to the other, such as "at least".
        relation: &'static str,
        /// The other key.
        other: &'static str,
        /// The other key's value.
        limit: String,
    },
    /// A starting responsiveness for a cue that cannot evolve.
    #[error("`{key}` is set, but the cue {cue} is not among `traits.cues`")]
    CueNotEnabled {
        /// The key.
        key: String,
        /// The cue.
        cue: String,
    },
    /// More cells than fit into memory.
    #[error(
        "`habitat.sites` x `body.adult_cells` = {sites} x {adult_cells} = {cells} cells; \
         at most {limit} can be held"
    )]
    TooManyCells {
        /// Sites.
        sites: usize,
        /// Cells of an adult colony.
        adult_cells: usize,
        /// Their product.
        cells: u128,
        /// The ceiling.
        limit: u64,
    },
    /// Sites that make no square torus.
    #[error("`habitat.sites` = {sites} is no square number, but a torus is as wide as it is long")]
    NotSquare {
        /// Sites.
        sites: usize,
        /// The next square below.
        below: usize,
        /// The next square above.
        above: usize,
    },
    /// A point of a return curve breaks the curve's rules.
    #[error("`{key}`: {problem}")]
    Points {
        /// The key.
        key: String,
        /// Which rule.
        problem: PointsProblem,
    },
    /// Numbers that are in range one by one, but together make no return curve.
    #[error("`{table}` makes no return curve: {source}")]
    Curve {
        /// The curve's table.
        table: String,
        /// What is wrong with it.
        source: CurveError,
    },
    /// An override that is not `key.path=value`.
    #[error("`{text}` is not of the form key.path=value")]
    OverrideForm {
        /// The override as given.
        text: String,
    },
}

/// What can be wrong with the points of a `table` return curve.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum PointsProblem {
    /// Too few or too many.
    #[error("{count} points; there must be 2 to {most}")]
    Count {
        /// How many there are.
        count: usize,
        /// How many there may be.
        most: usize,
    },
    /// An item that is not a pair.
    #[error("point {number} = {value} is not a pair of numbers [x, y]")]
    NotAPair {
        /// Place in the list, from 1.
        number: usize,
        /// What was written.
        value: String,
    },
    /// A coordinate that is no finite number of at least 0.
    #[error("point {number} = {value}: x and y must be finite numbers, 0 or more")]
    Coordinate {
        /// Place in the list, from 1.
        number: usize,
        /// What was written.
        value: String,
    },
    /// The first x is not 0.
    #[error("the first point's x is {x}, but it must be 0 (nothing invested)")]
    Start {
        /// The first x.
        x: String,
    },
    /// x does not rise.
    #[error("the x of point {number} must be greater than that of the point before it")]
    XNotRising {
        /// Place in the list, from 1.
        number: usize,
    },
    /// y falls.
    #[error("the y of point {number} must not be less than that of the point before it")]
    YFalling {
        /// Place in the list, from 1.
        number: usize,
    },
}

impl FaultKind {
    /// What to do about it, in a sentence.
    #[must_use]
    pub fn remedy(&self) -> Option<String> {
        Some(match self {
            Self::Syntax { .. } => "write `key = value`, texts in double quotes".into(),
            Self::UnknownKey { nearest: Some(nearest), .. } => {
                format!("did you mean `{nearest}`?")
            }
            Self::UnknownKey { known, .. } => format!("known here: {}", known.join(", ")),
            Self::NotBuilt { instead, .. } => instead.clone(),
            Self::NotATable { key, example, .. } => {
                format!("set its keys one by one, as in `{key}.{example} = ...`")
            }
            Self::UnknownWord { nearest: Some(nearest), .. } => {
                format!("did you mean \"{nearest}\"?")
            }
            Self::Missing { example, because, .. } => format!("add `{example}` ({because})"),
            Self::NamedTwice { .. } => "name it once".into(),
            Self::Misplaced { .. } => "remove it, or change that setting".into(),
            Self::Relation { key, other, .. } => format!("change `{key}` or `{other}`"),
            Self::CueNotEnabled { cue, .. } => {
                format!("add \"{cue}\" to `traits.cues`, or remove the start")
            }
            Self::TooManyCells { .. } => "use fewer sites or smaller bodies".into(),
            Self::NotSquare { below, above, .. } => {
                format!("the nearest squares are {below} and {above}")
            }
            Self::OverrideForm { .. } => "write, for instance, body.adult_cells=32".into(),
            _ => return None,
        })
    }
}

/// Longest line around a fault that can be drawn, bytes.
const LONGEST_DRAWN_LINE: usize = 300;

/// A fault and the place where it was written, if it stands anywhere.
#[derive(Debug, Clone)]
pub struct Fault {
    /// What is wrong.
    pub kind: FaultKind,
    pub(crate) place: Option<(Source, std::ops::Range<usize>)>,
}

impl Fault {
    /// Name of the file or option, the line and the column in bytes (both from 1), if the fault
    /// stands anywhere.
    #[must_use]
    pub fn place(&self) -> Option<(&str, usize, usize)> {
        let (source, span) = self.place.as_ref()?;
        let before = &source.inner()[..span.start];
        let line = before.matches('\n').count();
        let column = before.len() - before.rfind('\n').map_or(0, |newline| newline + 1);
        Some((source.name(), line + 1, column + 1))
    }

    /// Whether the lines around the fault can be shown: none is endless, and none holds control
    /// characters that a terminal would obey.
    #[must_use]
    pub fn is_drawable(&self) -> bool {
        let Some((source, span)) = self.place.as_ref() else { return true };
        let text = source.inner();
        let start = text[..span.start].rmatch_indices('\n').nth(1).map_or(0, |(at, _)| at + 1);
        let end = text[span.end..].match_indices('\n').nth(1);
        let end = end.map_or(text.len(), |(at, _)| span.end + at);
        text[start..end].split('\n').all(|line| line.len() <= LONGEST_DRAWN_LINE)
            && !text[start..end].chars().any(|c| c.is_control() && !"\n\r\t".contains(c))
    }
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.kind.fmt(f)
    }
}

impl std::error::Error for Fault {}

impl Diagnostic for Fault {
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        self.kind.remedy().map(|remedy| Box::new(remedy) as Box<dyn fmt::Display>)
    }

    fn source_code(&self) -> Option<&dyn SourceCode> {
        self.place.as_ref().map(|(source, _)| source as &dyn SourceCode)
    }

    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        let (_, span) = self.place.as_ref()?;
        Some(Box::new(std::iter::once(LabeledSpan::underline(span.clone()))))
    }
}
