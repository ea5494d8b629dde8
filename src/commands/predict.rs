//! `somadawn predict SCENARIO`: what theory says.

use std::fmt::Write as _;

use clap::Args;

use super::output::{print, print_json};
use super::{Common, Failure, ScenarioFile};
use crate::scenario::{Override, Settings};
use crate::study::prediction::{
    CriticalQuery, CuePart, Prediction, predict, predict_with_critical,
};

/// Where critical values are looked for unless the command line says otherwise.
const DEFAULT_BRACKET: Bracket = Bracket { low: 0.5, high: 3.0 };

/// Arguments of `predict`.
#[derive(Debug, Args)]
pub struct Arguments {
    /// The scenario.
    #[command(flatten)]
    pub scenario: ScenarioFile,
    /// Keys, moved together, whose critical value is looked for
    #[arg(long, value_name = "KEY[,KEY...]", value_delimiter = ',', num_args = 1)]
    pub critical: Vec<String>,
    /// Where to look for it [default: 0.5,3]
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
    let settings = arguments.scenario.load(common)?;
    let prediction = match arguments.query() {
        None => predict(&settings),
        Some(query) => predict_with_critical(&settings, &query, |value| {
            let mut overrides = common.overrides();
            overrides.extend(query.keys.iter().map(|key| Override::number(key, value)));
            Settings::load(&arguments.scenario.path, &overrides)
        })?,
    };
    if common.json {
        return print_json(&prediction);
    }
    Ok(print(&render(&prediction))?)
}

impl Arguments {
    fn query(&self) -> Option<CriticalQuery> {
        let Bracket { low, high } = self.between.unwrap_or(DEFAULT_BRACKET);
        (!self.critical.is_empty()).then(|| CriticalQuery {
            keys: self.critical.clone(),
            low,
            high,
        })
    }
}

/// The prediction as text to read.
fn render(prediction: &Prediction) -> String {
    let Prediction { title, generalist, cues, best, verdict, critical } = prediction;
    let mut text = format!("{title}\n\n");
    let mut line = |name: &str, value: String| {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "{name:<22} {value}");
    };
    line("verdict", verdict.to_string());
    line(
        "generalist optimum",
        format!(
            "soma share {:.4}, {} propagules per founder (R0)",
            generalist.soma_share,
            number(generalist.r0)
        ),
    );
    for CuePart { cue, gradient, curvature, verdict } in cues {
        let (gradient, curvature) = (number(*gradient), number(*curvature));
        line(
            &format!("cue {cue}"),
            format!("{verdict} (d ln R0/dg {gradient}, d2 ln R0/dg2 {curvature})"),
        );
    }
    line(
        "best programme",
        format!(
            "{}, division index {:.3}, soma cells {:.1} %, {} propagules per founder (R0)",
            best.class,
            best.division_index,
            100.0 * best.soma_fraction,
            number(best.r0)
        ),
    );
    let traits: Vec<String> =
        best.traits.iter().map(|(name, value)| format!("{name} {value:.3}")).collect();
    line("  its traits (logits)", traits.join(", "));
    if let Some(critical) = critical {
        line(
            &format!("critical {}", critical.keys.join(", ")),
            format!(
                "local {}, global {} (null: no change in the bracket)",
                exact(critical.local),
                exact(critical.global)
            ),
        );
    }
    text.push_str(
        "\nTheory assumes a large population at demographic balance; numbers are computed, not \
         estimated.\n",
    );
    text
}

fn number(value: Option<f64>) -> String {
    value.map_or_else(|| "null".to_owned(), |value| format!("{value:.4}"))
}

fn exact(value: Option<f64>) -> String {
    value.map_or_else(|| "null".to_owned(), |value| format!("{value:.9}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn brackets_are_two_rising_finite_numbers() {
        assert_eq!(parse_bracket("0.5, 2"), Ok(Bracket { low: 0.5, high: 2.0 }));
        assert_eq!(parse_bracket("-2,-1"), Ok(Bracket { low: -2.0, high: -1.0 }));
        for wrong in ["", "1", "2,1", "1,1", "1,inf", "nan,1", "1,2,3", "a,b"] {
            assert!(parse_bracket(wrong).is_err(), "{wrong}");
        }
    }
}
