//! The closing report of `evolve`, as text for a terminal.

use std::path::Path;

use crate::record::{CensusRow, Outcome, ReplicateRow, Summary};
use crate::theory::{BodyClass, Verdict};

use super::agreement::{Agreement, Circumstances, Judgement, Reason};
use super::chart::{self, IndexCourse};
use super::style::{Ink, Style};
use super::words::{self, count, generations, share};

/// Columns of the labels on the left.
const LABEL: usize = 16;

const CAUTION: &str = "A simulation is a hypothesis: it shows what follows from the scenario's \
    assumptions, not what living colonies do. Test it on organisms, and handle those under your \
    local biosafety rules.";

/// What the report is made from.
#[derive(Debug, Clone, Copy)]
pub struct EvolveReport<'a> {
    /// The answer.
    pub summary: &'a Summary,
    /// Replicates that finished.
    pub rows: &'a [ReplicateRow],
    /// Their time series.
    pub census: &'a [CensusRow],
    /// Replicates asked for.
    pub replicates_planned: u32,
    /// Cells of an adult body asked for.
    pub adult_cells: usize,
    /// What the run had to work with.
    pub circumstances: Circumstances,
    /// Where the files are.
    pub folder: &'a Path,
}

/// The report, several lines each ended by a line break.
#[must_use]
pub fn evolve_report(report: &EvolveReport<'_>, style: Style) -> String {
    let mut page = Page { text: String::new(), style };
    page.heading(&report.summary.title);
    answer(&mut page, report);
    page.paragraph(Ink::Faint, "In brackets: 95 % intervals, or how many replicates.");
    page.gap();
    prediction(&mut page, report);
    if let Some(course) = IndexCourse::of(report.rows, report.census) {
        page.gap();
        page.text.push_str(&chart::draw(&course, style));
    }
    page.gap();
    page.line("Speed", &speed(report.summary));
    page.whole_line("Files", &report.folder.display().to_string());
    page.gap();
    page.paragraph(Ink::Faint, CAUTION);
    page.text
}

struct Page {
    text: String,
    style: Style,
}

impl Page {
    fn heading(&mut self, title: &str) {
        // A title is the user's: a control character in it must not reach the terminal.
        let shown: String = title.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
        self.paragraph(Ink::Heading, &shown);
        self.gap();
    }

    fn gap(&mut self) {
        self.text.push('\n');
    }

    fn line(&mut self, label: &str, value: &str) {
        self.coloured_line(label, value, None);
    }

    /// A label and its value; only the value's first word is coloured.
    fn coloured_line(&mut self, label: &str, value: &str, ink: Option<Ink>) {
        let value = words::wrap(value, LABEL);
        let value = match (ink, value.split_once(' ')) {
            (Some(ink), Some((first, rest))) => format!("{} {rest}", self.style.paint(ink, first)),
            _ => value,
        };
        self.whole_line(label, &value);
    }

    /// A label and its value as it is.
    fn whole_line(&mut self, label: &str, value: &str) {
        self.text.push_str(&self.style.paint(Ink::Heading, &format!("{label:<LABEL$}")));
        self.text.push_str(value);
        self.gap();
    }

    fn paragraph(&mut self, ink: Ink, text: &str) {
        for line in words::wrap(text, 0).lines() {
            self.text.push_str(&self.style.paint(ink, line));
            self.text.push('\n');
        }
    }
}

fn answer(page: &mut Page, report: &EvolveReport<'_>) {
    let summary = report.summary;
    if summary.replicates < report.replicates_planned as usize {
        page.coloured_line("Stopped early", &finished(report), Some(Ink::Doubtful));
    }
    page.line("Differentiated", &differentiated(summary));
    page.line("Onset", &onset(report));
    page.line("Division index", &division_index(summary));
    page.line("Class and route", &class_and_route(report));
    hunger(page, report);
    if summary.extinct > 0 {
        page.line(
            "Died out",
            &format!(
                "{} of {} before an onset",
                summary.extinct,
                words::replicates(summary.replicates)
            ),
        );
    }
}

/// What bodies fell short of; nothing where they all reached their size and kept it.
fn hunger(page: &mut Page, report: &EvolveReport<'_>) {
    if let Some(size) = adult_size(report) {
        page.line("Adult size", &size);
    }
    // Counted when they settle, so that some may still be growing.
    match report.summary.never_matured {
        0 => {}
        1 => page.line("Never matured", "1 colony settled whose growth stops short of adult size"),
        many => {
            let settled = format!("{} colonies settled whose growth stops short", count(many));
            page.line("Never matured", &format!("{settled} of adult size"));
        }
    }
}

/// Mean size of adult bodies where it is not the one asked for, with decimals enough to tell the two
/// apart; what six do not tell is rounding.
fn adult_size(report: &EvolveReport<'_>) -> Option<String> {
    let (asked, found) = (report.adult_cells as f64, report.summary.last.adult_cells?);
    let told = |decimals| [found, asked].map(|cells| format!("{cells:.decimals$}"));
    let [found, _] = (1..=6).map(told).find(|[found, asked]| found != asked)?;
    let asked = count(report.adult_cells as u64);
    Some(format!("adult bodies hold {found} cells on average of {asked}"))
}

fn finished(report: &EvolveReport<'_>) -> String {
    format!(
        "{} of {} replicates finished; what follows is about these alone",
        report.summary.replicates, report.replicates_planned
    )
}

fn differentiated(summary: &Summary) -> String {
    let onset = &summary.onset;
    let Some(probability) = onset.probability else {
        return "no replicate finished".to_owned();
    };
    format!(
        "{} of {}: probability {} (Wilson {} to {})",
        count(onset.count as u64),
        words::replicates(summary.replicates),
        share(probability),
        share(onset.wilson_low),
        share(onset.wilson_high)
    )
}

fn onset(report: &EvolveReport<'_>) -> String {
    let onset = &report.summary.onset;
    let longest = report.rows.iter().map(|row| row.end_generation).fold(0.0, f64::max);
    match onset.median_generation {
        None if onset.count == 0 => format!("none within {} generations", generations(longest)),
        None => {
            format!("median not reached within {} generations", generations(longest))
        }
        Some(median) => format!(
            "median generation {} (Kaplan-Meier {} to {})",
            generations(median),
            onset.median_low.map_or_else(|| "0".to_owned(), generations),
            onset.median_high.map_or_else(|| "no known limit".to_owned(), generations)
        ),
    }
}

fn division_index(summary: &Summary) -> String {
    let last = &summary.last;
    let Some(index) = last.division_index else {
        let why = match summary.replicates {
            0 => "no replicate has finished",
            all if all == summary.extinct => "no population was left at the end",
            _ => "no colony was adult at the end",
        };
        return format!("not known: {why}");
    };
    let interval = match (last.division_index_low, last.division_index_high) {
        (Some(low), Some(high)) => {
            format!(" ({} to {})", share(low), share(high))
        }
        _ => String::new(),
    };
    let soma =
        last.soma_fraction.map_or_else(String::new, |soma| format!("; soma cells {}", share(soma)));
    format!("{} at the end{interval}{soma}", share(index))
}

fn class_and_route(report: &EvolveReport<'_>) -> String {
    let last = &report.summary.last;
    let Some(class) = last.class else {
        return "not known".to_owned();
    };
    let living = || report.rows.iter().filter(|row| row.outcome != Outcome::Extinct);
    let of_class = living().filter(|row| row.class == Some(class)).count();
    let shared = format!("{} ({of_class} of {})", class.name(), living().count());
    match last.route {
        _ if class == BodyClass::Alike => format!("{shared}: cells too alike to tell a route"),
        None => format!("{shared}; no route found"),
        Some(route) => {
            let by = living().filter(|row| row.route() == Some(route)).count();
            format!("{shared}, by {} ({by} of {})", route.name(), living().count())
        }
    }
}

fn prediction(page: &mut Page, report: &EvolveReport<'_>) {
    let judgement = Judgement::of(report.summary, &report.circumstances);
    page.line("Theory", &theory(report.summary));
    let (ink, verdict) = verdict(judgement.agreement, report.summary);
    page.coloured_line("Agreement", &verdict, Some(ink));
    for (place, reason) in judgement.reasons.iter().enumerate() {
        page.line(if place == 0 { "Likely reason" } else { "or" }, &explain(*reason));
    }
}

fn theory(summary: &Summary) -> String {
    let class = summary.prediction.class.name();
    match summary.prediction.verdict {
        Verdict::FavouredAtOnce | Verdict::FavouredByDisruption => format!(
            "differentiation is {}; the best programme's bodies are {class}",
            summary.prediction.verdict.name()
        ),
        Verdict::NotFavouredLocally => {
            "differentiation is not favoured; alike cells resist it".to_owned()
        }
        Verdict::Valley => format!(
            "valley: alike cells resist differentiation, though the best programme's bodies are \
             {class}"
        ),
    }
}

fn verdict(agreement: Agreement, summary: &Summary) -> (Ink, String) {
    let onsets = match (summary.onset.count, summary.replicates) {
        (0, _) => "no replicate differentiated".to_owned(),
        (some, all) if some == all => "every replicate differentiated".to_owned(),
        (some, all) => format!("{some} of {all} replicates differentiated"),
    };
    match agreement {
        Agreement::Full => (Ink::Good, format!("yes: {onsets}, as theory says")),
        Agreement::Partial => (Ink::Doubtful, format!("partly: {onsets}")),
        Agreement::None => (Ink::Bad, format!("no: {onsets}, against theory")),
        Agreement::Either => {
            (Ink::Doubtful, format!("open: {onsets}; before a valley either can happen"))
        }
        Agreement::Untested if summary.replicates == 0 => {
            (Ink::Doubtful, "untested: no replicate finished".to_owned())
        }
        Agreement::Untested => {
            (Ink::Doubtful, "untested: no population had adults left at the end".to_owned())
        }
    }
}

fn explain(reason: Reason) -> String {
    match reason {
        Reason::Drift { sites } => format!(
            "drift: with {} sites chance outweighs selection; raise habitat.sites",
            count(sites as u64)
        ),
        Reason::TooFewGenerations { generations: had, needed } => format!(
            "too little time: {} generations{}; raise run.generations or \
             traits.mutation_probability",
            generations(had),
            needed.map_or_else(
                || ", for so few mutations".to_owned(),
                |needed| format!(", where selection needs about {}", generations(needed))
            )
        ),
        Reason::Valley => "valley: small steps away from alike cells are selected against, so the \
            outcome depends on the start; compare another traits.start or traits.mutation_sd"
            .to_owned(),
        Reason::DiedOut { replicates } => format!(
            "extinction: {} died out before they could differentiate; raise habitat.sites or lower \
             the hazards",
            count(replicates as u64)
        ),
        Reason::StillWaiting { replicates } => format!(
            "waiting time: when the onset comes differs by chance, and {} had none yet at the end; \
             raise run.generations",
            words::replicates(replicates)
        ),
        Reason::MarkOutOfReach { best, mark } => format!(
            "the mark: even the best programme's bodies reach a division index of {best:.2} only, \
             and onset.index asks for {mark:.2}; lower it"
        ),
        Reason::StillUnderWay => "evolution still under way: bodies are less differentiated than \
            the best programme's; raise run.generations, or let replicates go on after the onset"
            .to_owned(),
        Reason::Unexplained => "none of the usual ones (drift, time, valley) applies; look at the \
            traits in census.parquet, and at onset.index"
            .to_owned(),
    }
}

fn speed(summary: &Summary) -> String {
    let throughput = &summary.throughput;
    let threads = if throughput.threads == 1 { "thread" } else { "threads" };
    let rate = throughput
        .cell_lives_per_second
        .map_or_else(String::new, |rate| format!(" ({}/s)", words::magnitude(rate)));
    format!(
        "{} cell lives in {:.1} s on {} {threads}{rate}",
        words::magnitude(throughput.cell_lives as f64),
        throughput.wall_s,
        throughput.threads
    )
}
