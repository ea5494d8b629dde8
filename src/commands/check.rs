//! `somadawn check SCENARIO`: what follows from a scenario.

use std::fmt::Write as _;

use clap::Args;

use super::output::{print, print_json};
use super::{Common, Failure, ScenarioFile};
use crate::study::outlook::{LARGEST_LOOKED_AT, Outlook, Selection, TransportOutlook};

/// Arguments of `check`.
#[derive(Debug, Args)]
pub struct Arguments {
    /// The scenario.
    #[command(flatten)]
    scenario: ScenarioFile,
}

pub(super) fn run(arguments: &Arguments, common: &Common) -> Result<(), Failure> {
    let settings = arguments.scenario.load(common)?;
    let outlook = Outlook::of(&settings, &Selection::of(&settings), common.threads());
    if common.json {
        return print_json(&outlook);
    }
    Ok(print(&render(&outlook))?)
}

/// The outlook as a list to read.
fn render(outlook: &Outlook) -> String {
    let mut text = format!("{}\n\n", outlook.title);
    for (name, value) in rows(outlook) {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "{name:<26} {value}");
    }
    for warning in &outlook.warnings {
        let _ = write!(text, "\n{}: {}\n  -> {}\n", warning.name, warning.text, warning.remedy);
    }
    text
}

fn rows(outlook: &Outlook) -> Vec<(&'static str, String)> {
    let Outlook { body, time, cost, .. } = outlook;
    let mut rows = vec![
        ("adult body", format!("{} cells", body.cells)),
        ("body radius", format!("{} um", short(body.radius_um))),
        ("interior cells", format!("{:.1} %", 100.0 * body.interior_share)),
    ];
    if let Some(transport) = &outlook.transport {
        rows.extend(transport_rows(transport));
    }
    if let Some(support) = &outlook.support {
        rows.push(("sharing range", format!("{} body radii", short(support.range_over_radius))));
    }
    rows.extend([
        ("growth to adulthood", hours(time.growth_h)),
        ("generation time", hours(time.generation_h)),
        ("mutations per generation", short(outlook.mutations_per_generation)),
        ("cells born in the run", short(cost.cell_lives)),
        ("expected run time", format!("about {} s", short(cost.seconds))),
        ("expected memory", format!("about {} MB", short(cost.bytes / 1e6))),
    ]);
    rows
}

fn transport_rows(transport: &TransportOutlook) -> Vec<(&'static str, String)> {
    let mut rows = Vec::new();
    if let Some(modulus) = transport.thiele_modulus {
        let depth = short(transport.depth_um);
        rows.push(("Thiele modulus", format!("{} over {depth} um of depth", short(modulus))));
    }
    if let Some(diameter_um) = transport.critical_diameter_um {
        let meaning = "um: in a ball beyond it the centre is empty if uptake never slackens";
        rows.push(("critical diameter", format!("{} {meaning}", short(diameter_um))));
    }
    let lost = 100.0 * transport.income_lost_share;
    rows.push(("income lost to diffusion", format!("{lost:.1} %")));
    let fed = match transport.largest_fed_cells {
        Some(cells) => format!("{cells} cells"),
        None => format!("beyond {LARGEST_LOOKED_AT} cells"),
    };
    rows.push(("largest fed body", fed));
    rows
}

fn hours(h: f64) -> String {
    if h.is_infinite() {
        return "never".to_owned();
    }
    format!("{} h ({} days)", short(h), short(h / 24.0))
}

/// A number to three digits.
fn short(x: f64) -> String {
    match x.abs() {
        0.0 => "0".to_owned(),
        1e6.. => format!("{x:.2e}"),
        100.0.. => format!("{x:.0}"),
        10.0.. => format!("{x:.1}"),
        0.01.. => format!("{x:.2}"),
        _ => format!("{x:.1e}"),
    }
}
