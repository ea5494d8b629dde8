//! `somadawn predict SCENARIO`: what theory says.

use std::fmt::Write as _;

use clap::Args;

use super::output::{print, print_json};
use super::{Common, Failure, ScenarioFile};
use crate::scenario::settings::Layout;
use crate::scenario::{Override, Settings, nearest};
use crate::study::prediction::{
    CriticalQuery, Prediction, SamplingPart, predict, predict_with_critical,
};
use crate::theory::placed::SURE;

/// Arguments of `predict`.
#[derive(Debug, Args)]
pub struct Arguments {
    /// The scenario.
    #[command(flatten)]
    pub scenario: ScenarioFile,
    /// Keys, moved together, whose critical value is looked for
    #[arg(long, value_name = "KEY[,KEY...]", value_delimiter = ',', num_args = 1)]
    pub critical: Vec<String>,
    /// Where to look for it
    #[arg(long, value_name = "LOW,HIGH", value_parser = parse_bracket, requires = "critical")]
    #[arg(allow_hyphen_values = true)]
    pub between: Option<Bracket>,
}

/// Two ends between which a value is looked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bracket {
    /// The lower end.
    pub low: f64,
    /// The upper end, above the lower.
    pub high: f64,
}

fn parse_bracket(text: &str) -> Result<Bracket, String> {
    let number = |part: &str| part.trim().parse::<f64>().ok().filter(|x| x.is_finite());
    match text.split_once(',').map(|(low, high)| (number(low), number(high))) {
        Some((Some(low), Some(high))) if low < high => Ok(Bracket { low, high }),
        _ => Err("must be two numbers LOW,HIGH with LOW below HIGH, such as 0.5,2".to_owned()),
    }
}

pub(super) fn run(arguments: &Arguments, common: &Common) -> Result<(), Failure> {
    // Read once: a pipe has nothing to say a second time.
    let text = arguments.scenario.text()?;
    let name = arguments.scenario.name();
    let settings = Settings::from_toml_str(&name, &text, &common.overrides())?;
    let prediction = if arguments.critical.is_empty() {
        predict(&settings)
    } else {
        with_critical(arguments, common, &text, &settings)?
    };
    if common.json {
        return print_json(&prediction);
    }
    Ok(print(&render(&prediction, &settings))?)
}

fn with_critical(
    arguments: &Arguments,
    common: &Common,
    text: &str,
    settings: &Settings,
) -> Result<Prediction, Failure> {
    let keys = &arguments.critical;
    let Bracket { low, high } = bracket(arguments, settings)?;
    let query = CriticalQuery { keys: keys.clone(), low, high };
    let settings_at = |value| {
        let moved = keys.iter().map(|key| Override::number("--critical", key, value));
        let overrides: Vec<_> = common.overrides().into_iter().chain(moved).collect();
        Settings::from_toml_str(&arguments.scenario.name(), text, &overrides)
    };
    Ok(predict_with_critical(settings, &query, settings_at)?)
}

/// Where to look: as asked for, else from a quarter to four times the first key's value.
fn bracket(arguments: &Arguments, settings: &Settings) -> Result<Bracket, Failure> {
    let numbers = settings.spelled_out().into_iter();
    let numbers: Vec<_> =
        numbers.filter_map(|(path, value)| Some((path, value.as_float()?))).collect();
    let value_of = |key: &String| {
        let value = numbers.iter().find(|(path, _)| path == key).map(|(_, value)| *value);
        value.ok_or_else(|| Failure::NoCriticalKey {
            key: key.clone(),
            nearest: nearest(key, numbers.iter().map(|(path, _)| *path)),
        })
    };
    let values = arguments.critical.iter().map(value_of).collect::<Result<Vec<_>, _>>()?;
    match (arguments.between, arguments.critical.first(), values.first()) {
        (Some(bracket), _, _) => Ok(bracket),
        (None, _, Some(value)) if *value > 0.0 => {
            Ok(Bracket { low: value / 4.0, high: 4.0 * value })
        }
        (None, key, value) => Err(Failure::NoBracket {
            key: key.cloned().unwrap_or_default(),
            value: value.copied().unwrap_or_default(),
        }),
    }
}

/// The prediction as a list to read.
fn render(prediction: &Prediction, settings: &Settings) -> String {
    let mut text = format!("{}\n\n", prediction.title);
    for (name, value) in rows(prediction).into_iter().chain(cautions(prediction, settings)) {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "{name:<26} {value}");
    }
    text
}

fn rows(prediction: &Prediction) -> Vec<(String, String)> {
    let Prediction { generalist, best, .. } = prediction;
    let row = |name: &str, value: String| (name.to_owned(), value);
    let mut rows = vec![
        row("verdict", prediction.verdict.to_string()),
        row("generalist soma share", format!("{:.4}", generalist.soma_share)),
        row("generalist R0", format!("{} propagules", number(generalist.r0))),
    ];
    for cue in &prediction.cues {
        let (gradient, curvature) = (number(cue.gradient), number(cue.curvature));
        let pull = format!("{} (gradient {gradient}, curvature {curvature})", cue.verdict);
        rows.push((format!("cue {}", cue.cue), pull));
    }
    let gain = best.r0.zip(generalist.r0).filter(|(_, before)| *before > 0.0);
    let gain = gain.map(|(after, before)| format!(" ({:+.2} %)", 100.0 * (after / before - 1.0)));
    let best_r0 = format!("{} propagules{}", number(best.r0), gain.unwrap_or_default());
    rows.extend([
        row("best programme R0", best_r0),
        row("best division index", format!("{:.4}", best.division_index)),
        row("best soma fraction", format!("{:.4}", best.soma_fraction)),
        row("best class", best.class.to_string()),
    ]);
    for (name, value) in &best.traits {
        rows.push((format!("best {name}"), format!("{value:.3}")));
    }
    if let Some(sampling) = &prediction.sampling {
        rows.push(row("the numbers rest on", basis(sampling)));
    }
    if let Some(critical) = &prediction.critical {
        let (local, global) = (place(critical.local), place(critical.global));
        rows.push(row("critical value of", critical.keys.join(", ")));
        rows.extend([
            row("  local verdict changes", local),
            row("  global verdict changes", global),
        ]);
    }
    rows
}

/// What theory leaves out, and where its verdict means little.
fn cautions(prediction: &Prediction, settings: &Settings) -> Vec<(String, String)> {
    let mut cautions = Vec::new();
    if prediction.generalist.r0.is_none_or(|r0| r0 <= 1.0) {
        cautions.push("alike cells leave at most one propagule: they cannot persist");
    }
    if matches!(settings.habitat.layout, Layout::Torus { .. }) {
        cautions.push("theory does not know that neighbours are kin (habitat.layout)");
    }
    if settings.budget.turnover_per_h > 0.0 {
        cautions.push("theory keeps a body's fates for life (budget.turnover_per_h)");
    }
    cautions.into_iter().map(|text| ("caution".to_owned(), text.to_owned())).collect()
}

/// How many bodies and fates the numbers come from, and what that leaves uncertain.
fn basis(sampling: &SamplingPart) -> String {
    let SamplingPart { bodies, maturing_share, fates, gain_error, undecided } = *sampling;
    let fates = fates.map_or_else(String::new, |fates| format!(", {fates} random fates each"));
    let matured = format!("{:.0} % of which matured", 100.0 * maturing_share);
    let error = gain_error.map_or_else(String::new, |error| {
        if undecided {
            format!(
                "; no programme beats the generalist by more than four standard errors ({:.2} %)",
                100.0 * SURE * error
            )
        } else {
            format!("; standard error of the gain {:.2} %", 100.0 * error)
        }
    });
    format!("{bodies} bodies grown, {matured}{fates}{error}")
}

fn place(value: Option<f64>) -> String {
    value.map_or_else(|| "nowhere in the bracket".to_owned(), |value| format!("at {value:.6}"))
}

fn number(value: Option<f64>) -> String {
    value.map_or_else(|| "none".to_owned(), |value| format!("{value:.4}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_gains_rest_on_tells_none_from_one_that_chance_may_explain() {
        let known = SamplingPart {
            bodies: 40,
            maturing_share: 0.75,
            fates: None,
            gain_error: Some(0.002),
            undecided: false,
        };
        let told = "40 bodies grown, 75 % of which matured; standard error of the gain 0.20 %";
        assert_eq!(basis(&known), told);
        let undecided = SamplingPart { fates: Some(16), undecided: true, ..known };
        let told = "40 bodies grown, 75 % of which matured, 16 random fates each; no programme beats \
                    the generalist by more than four standard errors (0.80 %)";
        assert_eq!(basis(&undecided), told);
    }

    #[test]
    fn brackets_are_two_rising_finite_numbers() {
        assert_eq!(parse_bracket("0.5, 2"), Ok(Bracket { low: 0.5, high: 2.0 }));
        assert_eq!(parse_bracket("-2,-1"), Ok(Bracket { low: -2.0, high: -1.0 }));
        for wrong in ["", "1", "2,1", "1,1", "1,inf", "nan,1", "1,2,3", "a,b"] {
            assert!(parse_bracket(wrong).is_err(), "{wrong}");
        }
    }
}
