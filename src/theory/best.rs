//! The best programme over all heritable traits.

use super::fitness::Model;
use super::generalist::{Generalist, finite_or_lost};
use super::outcome::Outcome;
use super::placed::Gain;
use super::reaction_norm::{Cue, Programme};
use super::search::{Summit, climb, polish};

/// The best programme found, and what it builds.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BestProgramme {
    /// Its traits.
    pub programme: Programme,
    /// Expected propagules per founder.
    pub r0: f64,
    /// Its bodies.
    pub outcome: Outcome,
    /// What it gains on the generalist; where it is the generalist, how well that is known.
    pub gain: Gain,
}

/// Division index from which a programme counts as differentiated.
pub const DIFFERENTIATED: f64 = 0.01;
/// Gain in ln R0 from which a programme counts as better than the generalist in a verdict.
pub const BETTER: f64 = 1e-6;
/// Gain in ln R0 below which the generalist stands as the best programme.
const ROUNDING: f64 = 1e-12;
/// Starts from which the search climbs, at most.
const STARTS: usize = 12;
/// Climbs that are carried to the end.
const FINALISTS: usize = 3;

impl BestProgramme {
    /// Whether it is differentiated and beats the generalist by more than `margin` in ln R0, and more
    /// than chance explains where its fates are drawn.
    #[must_use]
    pub fn outdoes(&self, margin: f64) -> bool {
        self.outcome.division_index >= DIFFERENTIATED && self.gain.exceeds(margin)
    }
}

impl Model {
    /// The best programme within the bounds: baseline, responsiveness of each enabled cue, and the
    /// noise cue's bias. A deterministic search: a coarse grid with all corners, climbs from the
    /// best point of every pattern of signs, the highest of them refined; all that on a sketch of
    /// the model, and the best of it once more on the model itself. Between equals the generalist
    /// stands, as it does where drawn fates do not tell the difference from chance; a trait that makes
    /// no difference is 0. Where a mirror image does as well, noise has
    /// positive responsiveness.
    #[must_use]
    pub fn best_programme(&self, generalist: &Generalist) -> BestProgramme {
        let space = TraitSpace::of(self);
        let bounds = &space.bounds;
        let height = |traits: &[f64]| finite_or_lost(self.log_fitness(&space.programme(traits)));
        let sketch = self.sketch();
        let sketched =
            |traits: &[f64]| finite_or_lost(sketch.log_fitness(&space.programme(traits)));
        let finalists = finalists(&space, &sketched, generalist.baseline);
        let measured = finalists.into_iter().map(|summit| {
            let value = height(&summit.at);
            Summit { value, ..summit }
        });
        let top = measured.max_by(|a, b| a.value.total_cmp(&b.value)).map(|summit| {
            let summit = polish(&height, bounds, summit, 0.01, 16);
            let summit = climb(&height, bounds, &summit.at, 0.002, 60);
            tidied(polish(&height, bounds, summit, 2e-4, 40), &height)
        });
        let bar = finite_or_lost(libm::log(generalist.r0)) + ROUNDING;
        let programme = match top {
            Some(top) if top.value > bar => space.programme(&top.at),
            _ => generalist.programme(),
        };
        let Some(placed) = &self.placed else {
            let r0 = self.expected_propagules(&programme);
            let ln_r0 = libm::log(r0) - libm::log(generalist.r0);
            let gain = Gain { ln_r0, standard_error: 0.0, draws_fates: false };
            return self.built_by(programme, r0, gain);
        };
        let judged = self.judge(placed, &programme, &generalist.programme());
        if judged.gain.exceeds(ROUNDING) {
            self.built_by(programme, judged.r0, judged.gain)
        } else {
            self.built_by(generalist.programme(), generalist.r0, judged.no_gain)
        }
    }

    fn built_by(&self, programme: Programme, r0: f64, gain: Gain) -> BestProgramme {
        BestProgramme { programme, r0, outcome: self.outcome(&programme), gain }
    }
}

/// Summits of different ground, the highest first.
fn finalists(space: &TraitSpace, height: &impl Fn(&[f64]) -> f64, baseline: f64) -> Vec<Summit> {
    let bounds = &space.bounds;
    let starts = space.starts(baseline, height).into_iter();
    let mut summits: Vec<Summit> =
        starts.map(|start| climb(height, bounds, &start.at, 0.08, 60)).collect();
    summits.sort_by(|a, b| b.value.total_cmp(&a.value));
    summits.truncate(FINALISTS);
    let refined = summits.into_iter().map(|summit| {
        let summit = polish(height, bounds, summit, 0.05, 100);
        let summit = climb(height, bounds, &summit.at, 0.01, 150);
        polish(height, bounds, summit, 1e-3, 150)
    });
    refined.collect()
}

/// The summit with every trait but the baseline at 0 that may as well be.
fn tidied(mut summit: Summit, height: &impl Fn(&[f64]) -> f64) -> Summit {
    for axis in 1..summit.at.len() {
        let mut at = summit.at.clone();
        at[axis] = 0.0;
        let value = height(&at);
        if value >= summit.value - ROUNDING {
            summit = Summit { at, value };
        }
    }
    summit
}

/// The traits that the search varies, as coordinates: baseline, responsivenesses, noise bias.
struct TraitSpace {
    cues: Vec<Cue>,
    bounds: Vec<(f64, f64)>,
    noise_bias_bound: f64,
}

impl TraitSpace {
    /// Cues that cannot vary are left out: that of income while all cells are fully fed, and
    /// whatever reads the same in all cells of placed bodies.
    fn of(model: &Model) -> Self {
        let cues: Vec<Cue> = match &model.placed {
            Some(placed) => placed.varying(model.cues).iter().collect(),
            None => model.cues.iter().filter(|cue| *cue != Cue::Income).collect(),
        };
        let mut bounds = vec![(-model.bound, model.bound)];
        for cue in &cues {
            // Turning noise upside down with its bias changes nothing: one half is enough.
            let lower = if *cue == Cue::Noise { 0.0 } else { -model.bound };
            bounds.push((lower, model.bound));
        }
        if cues.contains(&Cue::Noise) {
            bounds.push((-model.noise_bias_bound, model.noise_bias_bound));
        }
        Self { cues, bounds, noise_bias_bound: model.noise_bias_bound }
    }

    fn programme(&self, traits: &[f64]) -> Programme {
        let mut programme = Programme::generalist(traits[0]);
        for (cue, g) in self.cues.iter().zip(&traits[1..]) {
            programme.responsiveness[cue.index()] = *g;
        }
        if let Some(bias) = traits.get(self.cues.len() + 1) {
            programme.noise_bias = *bias;
        }
        programme
    }

    /// The best grid point of every pattern of signs of the traits beside the baseline, the best
    /// patterns first.
    fn starts(&self, baseline: f64, height: &impl Fn(&[f64]) -> f64) -> Vec<Summit> {
        let mut best: Vec<(Vec<i8>, Summit)> = Vec::new();
        for at in self.grid(baseline) {
            let pattern: Vec<i8> = at[1..].iter().map(|x| sign(*x)).collect();
            if pattern.iter().take(self.cues.len()).all(|sign| *sign == 0) {
                continue;
            }
            let value = height(&at);
            match best.iter_mut().find(|(known, _)| *known == pattern) {
                Some((_, summit)) if value > summit.value => *summit = Summit { at, value },
                Some(_) => {}
                None => best.push((pattern, Summit { at, value })),
            }
        }
        best.sort_by(|(_, a), (_, b)| b.value.total_cmp(&a.value));
        best.into_iter().map(|(_, summit)| summit).take(STARTS).collect()
    }

    /// All combinations of a few levels of each trait.
    fn grid(&self, baseline: f64) -> Vec<Vec<f64>> {
        let bound = self.bounds[0].1;
        let near = bound.min(2.0);
        let clamped = |x: f64| x.clamp(-bound, bound);
        let mut levels = vec![vec![
            -bound,
            -0.5 * bound,
            clamped(baseline - 3.0),
            baseline,
            clamped(baseline + 3.0),
            0.5 * bound,
            bound,
        ]];
        for cue in &self.cues {
            levels.push(match cue {
                Cue::Noise => vec![bound, 0.5 * bound, near, 0.0],
                _ => vec![bound, near, 0.0, -near, -bound],
            });
        }
        if self.cues.contains(&Cue::Noise) {
            let bias = self.noise_bias_bound;
            levels.push(vec![0.0, -0.75 * bias, -0.25 * bias, 0.25 * bias, 0.75 * bias]);
        }
        combinations(&levels)
    }
}

fn sign(x: f64) -> i8 {
    i8::from(x > 0.0) - i8::from(x < 0.0)
}

fn combinations(levels: &[Vec<f64>]) -> Vec<Vec<f64>> {
    levels.iter().fold(vec![Vec::new()], |points, level| {
        let extended = |point: &Vec<f64>| {
            let point = point.clone();
            level.iter().map(move |x| [point.as_slice(), &[*x]].concat()).collect::<Vec<_>>()
        };
        points.iter().flat_map(extended).collect()
    })
}
