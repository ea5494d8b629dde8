//! Whether evolution did what theory said, and if not, why that may be.

use crate::record::Summary;
use crate::theory::Verdict;

/// How far the trait must go for a body to be differentiated, in logits: a soma share of 0.95 is 3
/// from that of an even generalist.
const DISTANCE: f64 = 3.0;
/// Below this many mutations of a trait in a whole run, hardly any programme was tried.
const FEW_MUTATIONS: f64 = 300.0;
/// Below this many sites drift rules over all but strong selection.
const FEW_SITES: usize = 50;

/// What a run had to work with.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Circumstances {
    /// Places of the habitat (N).
    pub sites: usize,
    /// Generations per replicate.
    pub generations: f64,
    /// Mutations of one trait per generation in the whole population, N mu.
    pub mutations_per_generation: f64,
    /// Standard deviation of a mutation's step, logits.
    pub mutation_sd: f64,
    /// Typical slope of ln R0 per logit of responsiveness on the way to differentiation: the
    /// gradient of the most favoured cue, or, under disruption, its curvature times one logit.
    /// `None` where it is not known.
    pub slope: Option<f64>,
    /// Expected division index of the best programme's bodies.
    pub best_division_index: f64,
    /// Division index from which a population counts as differentiated (`onset.index`).
    pub onset_index: f64,
}

impl Circumstances {
    /// Generations that selection needs for the way, by the canonical equation for overlapping
    /// generations, `dg/dt = N mu sd^2 slope / 2` (Dieckmann & Law 1996, halved as lifetimes are
    /// exponential). Infinite without mutations; `None` without a slope upwards.
    #[must_use]
    pub fn generations_needed(&self) -> Option<f64> {
        let slope = self.slope.filter(|slope| *slope > 0.0)?;
        let speed =
            self.mutations_per_generation * self.mutation_sd * self.mutation_sd * slope / 2.0;
        Some(DISTANCE / speed)
    }

    fn too_few_generations(&self) -> bool {
        let mutations = self.mutations_per_generation * self.generations;
        mutations < FEW_MUTATIONS
            || self.generations_needed().is_some_and(|needed| needed > self.generations)
    }

    /// Whether one mutation's advantage is below 1/N, so that chance decides its fate (Kimura
    /// 1962).
    fn is_ruled_by_drift(&self) -> bool {
        match self.slope {
            Some(slope) => self.sites as f64 * slope.abs() * self.mutation_sd < 1.0,
            None => self.sites < FEW_SITES,
        }
    }
}

/// Whether evolution did what theory said.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Agreement {
    /// In every replicate.
    Full,
    /// In some replicates, or not as far.
    Partial,
    /// In none.
    None,
    /// Theory leaves both open: the outcome hangs on where evolution starts.
    Either,
    /// No replicate finished, or none in which cells could stay alike had adults left to show it.
    Untested,
}

/// Why evolution may have done something else than theory said.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Reason {
    /// Few sites: chance is stronger than selection.
    Drift {
        /// Places of the habitat.
        sites: usize,
    },
    /// Too little time for the supply of mutations.
    TooFewGenerations {
        /// Generations per replicate.
        generations: f64,
        /// Generations needed, if selection's strength is known and there are mutations at all.
        needed: Option<f64>,
    },
    /// The generalist is a peak of its own, with a valley before the higher one.
    Valley,
    /// Populations that died out had no time to differentiate.
    DiedOut {
        /// Replicates that died out.
        replicates: usize,
    },
    /// The time to the onset varies by chance, and ran out for some replicates.
    StillWaiting {
        /// Replicates without onset that had not died out.
        replicates: usize,
    },
    /// Even the best programme's bodies divide less than counts as an onset.
    MarkOutOfReach {
        /// Their expected division index.
        best: f64,
        /// The index asked for.
        mark: f64,
    },
    /// The predicted class was not reached.
    StillUnderWay,
    /// None of the usual reasons holds.
    Unexplained,
}

/// The comparison of a run with theory.
#[derive(Debug, Clone, PartialEq)]
pub struct Judgement {
    /// How far they agree.
    pub agreement: Agreement,
    /// Likely reasons if they do not, the likeliest first; empty if they do.
    pub reasons: Vec<Reason>,
}

impl Judgement {
    /// Compares the onsets of `summary` with its prediction.
    ///
    /// Where theory favours differentiation, every replicate should show an onset, and its bodies
    /// the predicted class; where it does not, none should; before a valley both can happen.
    /// Populations that are gone show nothing of cells that stay alike.
    #[must_use]
    pub fn of(summary: &Summary, circumstances: &Circumstances) -> Self {
        let (onsets, all) = (summary.onset.count, summary.replicates);
        if all == 0 {
            return Self { agreement: Agreement::Untested, reasons: Vec::new() };
        }
        match summary.prediction.verdict {
            Verdict::Valley => Self { agreement: Agreement::Either, reasons: vec![Reason::Valley] },
            Verdict::FavouredAtOnce | Verdict::FavouredByDisruption if onsets == all => {
                full_onset(summary)
            }
            Verdict::FavouredAtOnce | Verdict::FavouredByDisruption => Self {
                agreement: some_or_none(onsets),
                reasons: why_absent(summary, circumstances),
            },
            Verdict::NotFavouredLocally if onsets == 0 && summary.last.division_index.is_none() => {
                Self { agreement: Agreement::Untested, reasons: died_out(summary) }
            }
            Verdict::NotFavouredLocally if onsets == 0 => {
                Self { agreement: Agreement::Full, reasons: Vec::new() }
            }
            Verdict::NotFavouredLocally => {
                Self { agreement: some_or_none(all - onsets), reasons: why_present(circumstances) }
            }
        }
    }
}

const fn some_or_none(agreeing: usize) -> Agreement {
    if agreeing == 0 { Agreement::None } else { Agreement::Partial }
}

fn full_onset(summary: &Summary) -> Judgement {
    match summary.last.class {
        Some(class) if class < summary.prediction.class => {
            Judgement { agreement: Agreement::Partial, reasons: vec![Reason::StillUnderWay] }
        }
        _ => Judgement { agreement: Agreement::Full, reasons: Vec::new() },
    }
}

fn why_absent(summary: &Summary, circumstances: &Circumstances) -> Vec<Reason> {
    let (best, mark) = (circumstances.best_division_index, circumstances.onset_index);
    if best < mark {
        return vec![Reason::MarkOutOfReach { best, mark }];
    }
    let mut reasons = Vec::new();
    if circumstances.too_few_generations() {
        reasons.push(Reason::TooFewGenerations {
            generations: circumstances.generations,
            needed: circumstances.generations_needed().filter(|needed| needed.is_finite()),
        });
    }
    if circumstances.is_ruled_by_drift() {
        reasons.push(Reason::Drift { sites: circumstances.sites });
    }
    let waiting = summary.replicates.saturating_sub(summary.onset.count + summary.extinct);
    if reasons.is_empty() && summary.onset.count > 0 && waiting > 0 {
        reasons.push(Reason::StillWaiting { replicates: waiting });
    }
    reasons.extend(died_out(summary));
    or_unexplained(reasons)
}

fn died_out(summary: &Summary) -> Vec<Reason> {
    let replicates = summary.extinct;
    (replicates > 0).then_some(Reason::DiedOut { replicates }).into_iter().collect()
}

fn why_present(circumstances: &Circumstances) -> Vec<Reason> {
    let drift = circumstances.is_ruled_by_drift();
    or_unexplained(
        drift.then_some(Reason::Drift { sites: circumstances.sites }).into_iter().collect(),
    )
}

fn or_unexplained(reasons: Vec<Reason>) -> Vec<Reason> {
    if reasons.is_empty() { vec![Reason::Unexplained] } else { reasons }
}
