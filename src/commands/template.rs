//! `somadawn template [NAME]`: scenarios to start from.

use clap::Args;
use serde::Serialize;

use super::output::{print, print_json};
use super::{Common, Failure};
use crate::scenario::template::{TEMPLATES, Template};

/// Arguments of `template`.
#[derive(Debug, Args)]
pub struct Arguments {
    /// Which one [default: list them]
    name: Option<String>,
}

/// A line of the list.
#[derive(Debug, Serialize)]
struct Line {
    name: &'static str,
    summary: &'static str,
}

/// One scenario.
#[derive(Debug, Serialize)]
struct Page {
    name: &'static str,
    summary: &'static str,
    /// The scenario file.
    text: String,
}

pub(super) fn run(arguments: &Arguments, common: &Common) -> Result<(), Failure> {
    let Some(name) = &arguments.name else { return list(common) };
    let Some(template) = Template::named(name) else {
        return Err(Failure::UnknownTemplate {
            name: name.clone(),
            nearest: Template::nearest(name),
        });
    };
    let text = template.text()?;
    if common.json {
        let Template { name, summary, .. } = *template;
        return print_json(&Page { name, summary, text });
    }
    Ok(print(&text)?)
}

fn list(common: &Common) -> Result<(), Failure> {
    let lines =
        TEMPLATES.iter().map(|template| Line { name: template.name, summary: template.summary });
    if common.json {
        return print_json(&lines.collect::<Vec<_>>());
    }
    let width = TEMPLATES.iter().map(|template| template.name.len()).max().unwrap_or(0);
    let lines: Vec<_> =
        lines.map(|line| format!("{:width$}  {}\n", line.name, line.summary)).collect();
    Ok(print(&lines.concat())?)
}
