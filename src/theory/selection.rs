//! Selection on responsiveness at the generalist, and what it means.

use std::fmt;

use serde::{Deserialize, Serialize};

use super::fitness::{Model, Norm};
use super::generalist::Generalist;
use super::jet::{Jet, Scalar};
use super::reaction_norm::Cue;

/// Derivative of ln R0 (per unit of responsiveness) up to which it counts as 0.
pub const SELECTION_TOLERANCE: f64 = 1e-9;

/// What theory says of a cue, or of all of them.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Verdict {
    /// A little responsiveness is better at first order.
    #[serde(rename = "favoured at once")]
    FavouredAtOnce,
    /// A little responsiveness is better at second order: selection is disruptive.
    #[serde(rename = "favoured by disruption")]
    FavouredByDisruption,
    /// A little responsiveness is no better.
    #[serde(rename = "not favoured locally")]
    NotFavouredLocally,
    /// A little is no better, but much of it is: the generalist is locally stable, and a
    /// differentiated programme does better.
    #[serde(rename = "valley")]
    Valley,
}

impl Verdict {
    /// All verdicts.
    pub const ALL: [Self; 4] =
        [Self::FavouredAtOnce, Self::FavouredByDisruption, Self::NotFavouredLocally, Self::Valley];

    /// The verdict of those words, if there is one.
    #[must_use]
    pub fn from_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|verdict| verdict.name() == name)
    }

    /// The verdict in words.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::FavouredAtOnce => "favoured at once",
            Self::FavouredByDisruption => "favoured by disruption",
            Self::NotFavouredLocally => "not favoured locally",
            Self::Valley => "valley",
        }
    }
}

impl fmt::Display for Verdict {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// Selection on the responsiveness g to one cue, at the generalist optimum.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CueSelection {
    /// The cue.
    pub cue: Cue,
    /// `d ln R0 / dg`. Where responsiveness is costly ln R0 has a kink at g = 0; this is then the
    /// derivative on the better side. Not a number where the generalist leaves no propagules.
    pub gradient: f64,
    /// `d^2 ln R0 / dg^2` on the same side.
    pub curvature: f64,
    /// Change of ln R0 per unit of |g| on the better side.
    rise: f64,
    /// What the sampling of bodies can make of a first and a second derivative.
    slack: [f64; 2],
}

impl CueSelection {
    /// The verdict at [`SELECTION_TOLERANCE`]; where bodies are a sample that differ, derivatives that
    /// are within 4 of their standard errors count as 0.
    #[must_use]
    pub fn verdict(&self) -> Verdict {
        let bent = SELECTION_TOLERANCE.max(self.slack[1]);
        if self.rise > self.level() {
            Verdict::FavouredAtOnce
        } else if self.is_level() && self.curvature > bent {
            Verdict::FavouredByDisruption
        } else {
            Verdict::NotFavouredLocally
        }
    }

    /// Whether selection favours a little responsiveness, to the last digit that the arithmetic
    /// carries (for locating where that changes).
    pub(super) fn is_favoured(&self) -> bool {
        const ROUNDING: f64 = 1e-12;
        self.rise > self.level() || (self.is_level() && self.curvature > ROUNDING)
    }

    fn is_level(&self) -> bool {
        self.rise.abs() <= self.level()
    }

    const fn level(&self) -> f64 {
        SELECTION_TOLERANCE.max(self.slack[0])
    }
}

impl Model {
    /// Selection on each enabled cue's responsiveness at the generalist optimum, the noise cue
    /// being unbiased.
    #[must_use]
    pub fn selection_at(&self, generalist: &Generalist) -> Vec<CueSelection> {
        self.cues.iter().map(|cue| self.selection_on(cue, generalist)).collect()
    }

    fn selection_on(&self, cue: Cue, generalist: &Generalist) -> CueSelection {
        if generalist.r0 <= 0.0 {
            let unknown = f64::NAN;
            let slack = [0.0; 2];
            return CueSelection {
                cue,
                gradient: unknown,
                curvature: unknown,
                rise: unknown,
                slack,
            };
        }
        let norm = |direction: f64| {
            let mut responsiveness = [Jet::constant(0.0); Cue::COUNT];
            responsiveness[cue.index()] = Jet::variable(0.0, direction);
            let baseline = Jet::constant(generalist.baseline);
            Norm { baseline, responsiveness, noise_probability: 0.5 }
        };
        let slack = match &self.placed {
            Some(placed) => self.slack_of_derivatives(placed, &norm(1.0)),
            None => [0.0; 2],
        };
        let [up, down] = [1.0, -1.0].map(|direction| self.r0(&norm(direction)).ln());
        let (better, sign) = if down.slope > up.slope { (down, -1.0) } else { (up, 1.0) };
        let (gradient, curvature) = (sign * better.slope, better.curvature);
        CueSelection { cue, gradient, curvature, rise: better.slope, slack }
    }

    /// The overall verdict from the local ones: the strongest, and `valley` where none favours a
    /// little responsiveness but `better_elsewhere`.
    #[must_use]
    pub fn verdict(selection: &[CueSelection], better_elsewhere: bool) -> Verdict {
        let any = |verdict| selection.iter().any(|cue| cue.verdict() == verdict);
        if any(Verdict::FavouredAtOnce) {
            Verdict::FavouredAtOnce
        } else if any(Verdict::FavouredByDisruption) {
            Verdict::FavouredByDisruption
        } else if better_elsewhere {
            Verdict::Valley
        } else {
            Verdict::NotFavouredLocally
        }
    }
}
