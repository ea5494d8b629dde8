//! `somadawn predict SCENARIO`: what theory says.

use clap::Args;

use super::{Common, Failure, ScenarioFile};

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
    arguments.scenario.load(common)?;
    Err(Failure::NotBuilt { verb: "predict" })
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
