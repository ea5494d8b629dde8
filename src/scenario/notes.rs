//! The list that faults are noted in while a scenario is read.

use std::ops::Range;

use super::fault::{Fault, FaultKind, Source};
use super::tree::{Node, Origin};

/// Longest excerpt of a value in a message, characters.
const LONGEST_EXCERPT: usize = 48;

/// The sources of a scenario and the faults found in them so far.
#[derive(Debug)]
pub(crate) struct Notes {
    sources: Vec<Source>,
    faults: Vec<(usize, Fault)>,
}

impl Notes {
    pub(crate) const fn new(sources: Vec<Source>) -> Self {
        Self { sources, faults: Vec::new() }
    }

    /// Notes a fault at `origin`.
    pub(crate) fn at(&mut self, origin: &Origin, kind: FaultKind) {
        let place = self.sources.get(origin.source).map(|source| {
            let span = within(source.inner(), &origin.span);
            (source.clone(), span)
        });
        self.faults.push((origin.source, Fault { kind, place }));
    }

    /// Notes a fault that stands nowhere, such as a missing key.
    pub(crate) fn nowhere(&mut self, kind: FaultKind) {
        self.faults.push((0, Fault { kind, place: None }));
    }

    /// The node's value as it was written, shortened to one line.
    pub(crate) fn excerpt(&self, node: &Node) -> String {
        let Some(source) = self.sources.get(node.place.source) else { return String::new() };
        let text = &source.inner()[within(source.inner(), &node.place.span)];
        let mut short: String = text
            .chars()
            .map(|c| if c.is_control() { ' ' } else { c })
            .take(LONGEST_EXCERPT)
            .collect();
        if text.chars().nth(LONGEST_EXCERPT).is_some() {
            short.push_str("...");
        }
        short
    }

    /// Whether a syntax error was noted in `source`.
    pub(crate) fn has_syntax_errors(&self) -> bool {
        self.faults.iter().any(|(_, fault)| matches!(fault.kind, FaultKind::Syntax { .. }))
    }

    /// All faults in the order in which they were written. What merely follows from a syntax
    /// error on the same line is left out.
    pub(crate) fn into_faults(self) -> Vec<Fault> {
        let broken: Vec<_> = self.faults.iter().filter_map(broken_line).collect();
        let mut faults = self.faults;
        faults.retain(|(source, fault)| {
            is_syntax(fault)
                || fault.place.as_ref().is_none_or(|(_, span)| {
                    !broken.iter().any(|(s, line)| s == source && line.contains(&span.start))
                })
        });
        faults.sort_by_key(|(source, fault)| {
            (*source, fault.place.as_ref().map(|(_, span)| span.start))
        });
        faults.into_iter().map(|(_, fault)| fault).collect()
    }
}

const fn is_syntax(fault: &Fault) -> bool {
    matches!(fault.kind, FaultKind::Syntax { .. } | FaultKind::MoreSyntax { .. })
}

/// Source and bytes of the line on which a syntax error stands.
fn broken_line((source, fault): &(usize, Fault)) -> Option<(usize, Range<usize>)> {
    if !is_syntax(fault) {
        return None;
    }
    let (text, span) = fault.place.as_ref().map(|(text, span)| (text.inner(), span))?;
    let start = text[..span.start].rfind('\n').map_or(0, |newline| newline + 1);
    let end = text[span.start..].find('\n').map_or(text.len(), |newline| span.start + newline);
    Some((*source, start..end + 1))
}

/// `span` cut to what `text` has, at whole characters.
fn within(text: &str, span: &Range<usize>) -> Range<usize> {
    let start = text.floor_char_boundary(span.start.min(text.len()));
    let end = text.ceil_char_boundary(span.end.clamp(start, text.len()));
    start..end
}
