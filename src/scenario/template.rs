//! Scenarios to start from, commented from the registry.

use std::fmt::Write as _;

use super::registry::{self, Described};
use super::{ScenarioError, Settings};

/// Widest comment, characters.
const WIDTH: usize = 96;

/// A scenario to start from.
#[derive(Debug, Clone, Copy)]
pub struct Template {
    /// The name to ask for it.
    pub name: &'static str,
    /// What it is, in a line.
    pub summary: &'static str,
    source: Option<&'static str>,
}

macro_rules! config {
    ($name:literal, $summary:literal) => {
        Template {
            name: $name,
            summary: $summary,
            source: Some(include_str!(concat!("../../configs/", $name, ".toml"))),
        }
    };
}

/// The scenarios to start from.
pub const TEMPLATES: &[Template] = &[
    Template { name: "full", summary: "every key with its default", source: None },
    config!("accelerating-returns", "random fates, both tasks with accelerating returns"),
    config!("diminishing-returns", "the null: random fates, returns that diminish"),
    config!("small-bodies", "four cells with random fates: chance spoils what the curves promise"),
    config!("asymmetric-division", "fates by lineage against fates by chance in a small body"),
    config!("surface-work", "work that pays only at the surface, though returns diminish"),
    config!("valley", "unequal exponents: stable generalists, better specialists out of reach"),
    config!("help-within-reach", "help that reaches the next cell: sisters side by side or chance"),
    config!("starved-core", "food that does not reach the core: fates by hunger"),
    config!("kin-next-door", "propagules that land next door: kin compete for sites"),
];

impl Template {
    /// The template of that name.
    #[must_use]
    pub fn named(name: &str) -> Option<&'static Self> {
        TEMPLATES.iter().find(|template| template.name == name)
    }

    /// The name that is most like `name`.
    #[must_use]
    pub fn nearest(name: &str) -> Option<&'static str> {
        super::nearest::nearest(name, TEMPLATES.iter().map(|template| template.name))
    }

    /// The settings that the template describes.
    ///
    /// # Errors
    ///
    /// None in practice: a test reads every template.
    pub fn settings(&self) -> Result<Settings, ScenarioError> {
        match self.source {
            None => Ok(Settings::example("Lantern algae of the Ostrel ponds")),
            Some(source) => Settings::from_toml_str(self.name, source, &[]),
        }
    }

    /// The scenario as TOML: every key with a comment that gives meaning, unit, range and
    /// default.
    ///
    /// # Errors
    ///
    /// As [`Template::settings`].
    pub fn text(&self) -> Result<String, ScenarioError> {
        let settings = self.settings()?;
        let head: String = match self.source {
            None => {
                "# Every key of a scenario with its default. Only `title` must be given.\n".into()
            }
            Some(source) => {
                let comment = source.lines().take_while(|line| line.starts_with('#'));
                comment.flat_map(|line| [line, "\n"]).collect()
            }
        };
        Ok(format!("{head}\n{}", commented(&settings)))
    }
}

/// Every key with its value, without comments.
pub(crate) fn plain(settings: &Settings) -> String {
    write(settings, false)
}

/// Every key with its value and a comment from the registry; keys that have no meaning with the
/// rest stand there as comments.
#[must_use]
pub fn commented(settings: &Settings) -> String {
    write(settings, true)
}

fn write(settings: &Settings, comments: bool) -> String {
    let values = settings.spelled_out();
    let mut text = String::new();
    let mut table = "";
    for entry in registry::entries() {
        if entry.table() != table {
            table = entry.table();
            let stated = values.iter().any(|(path, _)| {
                path.strip_prefix(table).is_some_and(|rest| rest.starts_with('.'))
            });
            open_table(&mut text, table, stated, comments);
        }
        let value = values.iter().find(|(path, _)| *path == entry.path()).map(|(_, value)| value);
        write_entry(&mut text, *entry, value, comments);
    }
    text
}

/// Opens a table; one that the settings do not have stands there as a comment, if at all.
fn open_table(text: &mut String, table: &str, stated: bool, comments: bool) {
    if !stated && !comments {
        return;
    }
    text.push('\n');
    if let Some(known) = registry::table(table).filter(|_| comments) {
        comment(text, &format!("{}.", known.description()));
    }
    let mark = if stated { "" } else { "# " };
    push(text, format_args!("{mark}[{table}]\n"));
}

fn write_entry(text: &mut String, entry: &dyn Described, value: Option<&toml::Value>, say: bool) {
    if say {
        comment(text, &describe(entry));
    }
    let name = entry.name();
    match value {
        Some(value) => push(text, format_args!("{name} = {value}\n")),
        None if say => push(text, format_args!("# {name} = {}\n", entry.default_value())),
        None => {}
    }
}

/// Meaning, unit, range, default and condition of a parameter, in one paragraph.
fn describe(entry: &dyn Described) -> String {
    let mut text = format!("{}.", entry.meaning());
    if entry.unit() != "none" {
        push(&mut text, format_args!(" Unit: {}.", entry.unit()));
    }
    push(&mut text, format_args!(" Allowed: {}.", entry.allowed()));
    if !entry.required() {
        push(&mut text, format_args!(" Default: {}.", entry.default_value()));
    }
    if let Some(condition) = entry.condition() {
        let words = super::registry::words::one_of(condition.words.iter().copied());
        push(&mut text, format_args!(" Only with {} = {words}.", condition.sibling));
    }
    text
}

/// Adds `paragraph` as comment lines of at most [`WIDTH`] characters.
fn comment(text: &mut String, paragraph: &str) {
    let mut line = String::from("#");
    for word in paragraph.split_whitespace() {
        if line.chars().count() + 1 + word.chars().count() > WIDTH {
            push(text, format_args!("{line}\n"));
            line = String::from("#");
        }
        line.push(' ');
        line.push_str(word);
    }
    push(text, format_args!("{line}\n"));
}

/// Writing to a string cannot fail.
fn push(text: &mut String, arguments: std::fmt::Arguments<'_>) {
    let _ = text.write_fmt(arguments);
}
