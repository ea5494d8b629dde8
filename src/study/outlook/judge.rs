//! Which warnings a scenario deserves.

use super::transport::{SupportOutlook, TransportOutlook};
use super::warning::{MOSTLY, Sameness, Warning};
use super::{Bodies, BodyOutlook, Selection};
use crate::scenario::Settings;
use crate::scenario::settings::{Baseline, Layout, Tick};
use crate::theory::Cue;
use crate::theory::reaction_norm::sigmoid;

/// Body size under which patterned differentiation is not known in nature, cells.
const SMALL_BODY_CELLS: usize = 1000;

/// Body diameter under which patterned differentiation is not known in nature, um.
const SMALL_BODY_UM: f64 = 500.0;

/// Longest tick as a share of a generation: a vacant site waits half a tick longer than it would,
/// which must not change an expected value by more than 1 %.
const LONGEST_TICK: f64 = 0.02;

/// Range of sharing over the body's radius below which large parts can go unsupported.
const SHORT_REACH: f64 = 0.25;

/// Dispersal over the torus's width at and beyond which landing is as good as uniform: the kernel's
/// slowest wave round the torus, `exp(-2 pi^2 (sd / width)^2)`, is then below 0.8 %.
const AS_GOOD_AS_MIXED: f64 = 0.5;

/// What the warnings are judged by.
#[derive(Debug, Clone, Copy)]
pub(super) struct Scene<'a> {
    /// The scenario.
    pub(super) settings: &'a Settings,
    /// What theory says of its generalist.
    pub(super) selection: &'a Selection,
    /// What its bodies turned out to be.
    pub(super) bodies: &'a Bodies,
    /// The adult body.
    pub(super) body: &'a BodyOutlook,
}

impl Scene<'_> {
    /// All warnings of a scenario.
    pub(super) fn warnings(
        &self,
        transport: Option<&TransportOutlook>,
        support: Option<&SupportOutlook>,
    ) -> Vec<Warning> {
        let mut warnings = self.body_warnings();
        warnings.extend(transport.and_then(|transport| self.hunger_warning(transport)));
        warnings.extend(self.stunting_warning());
        warnings.extend(support.and_then(|support| self.reach_warning(support)));
        warnings.extend(self.turnover_warning());
        warnings.extend(self.kernel_warning());
        let r0 = self.selection.r0;
        if r0 <= 1.0 || r0.is_nan() {
            warnings.push(Warning::GeneralistCannotPersist { r0 });
        }
        warnings.extend(self.selection_warning());
        warnings.extend(self.census_warning());
        warnings.extend(self.tick_warning());
        warnings
    }

    fn body_warnings(&self) -> Vec<Warning> {
        let Self { settings, body, .. } = *self;
        let mut warnings = Vec::new();
        if settings.exposure_matters() && body.interior_share <= 0.0 {
            let plan = settings.body.plan;
            warnings.push(Warning::NoInteriorCell { plan, cells: body.cells });
        }
        for cue in settings.traits.cues.iter() {
            if let Some(because) = self.why_constant(cue) {
                warnings.push(Warning::CueCannotVary { cue, because });
            }
        }
        let diameter_um = 2.0 * body.radius_um;
        if body.cells < SMALL_BODY_CELLS || diameter_um < SMALL_BODY_UM {
            let plan = settings.body.plan;
            warnings.push(Warning::SmallBody { plan, cells: body.cells, diameter_um });
        }
        warnings
    }

    /// Why a cue reads the same in all cells of every body, if it does.
    fn why_constant(&self, cue: Cue) -> Option<Sameness> {
        let Self { settings, bodies, body, .. } = *self;
        if body.cells == 1 {
            return Some(Sameness::OneCell);
        }
        let grows = settings.life.propagule_cells < body.cells;
        let divides = grows || settings.budget.turnover_per_h > 0.0;
        match cue {
            Cue::Exposure if body.interior_share <= 0.0 => Some(Sameness::AllExposed),
            Cue::Lineage if !divides => Some(Sameness::NoDivision),
            Cue::Income if !settings.fields().act() => Some(Sameness::FullyFed),
            Cue::Income if !bodies.incomes_vary => Some(Sameness::EqualIncomes),
            _ => None,
        }
    }

    fn hunger_warning(&self, transport: &TransportOutlook) -> Option<Warning> {
        let cells = self.body.cells;
        match transport.largest_fed_cells {
            Some(fed) if cells > fed => Some(Warning::BodyStarves { cells, fed }),
            _ => self.growth_warning(),
        }
    }

    /// Hunger of bodies that are fed once they are adult.
    fn growth_warning(&self) -> Option<Warning> {
        let Bodies { grown, starving, starved_cells, .. } = *self.bodies;
        let plan = self.settings.body.plan;
        let told = Warning::GrowthStarves { plan, grown, starving, starved_cells };
        (starving > 0).then_some(told)
    }

    fn stunting_warning(&self) -> Option<Warning> {
        let Bodies { grown, stunted, stunted_cells, .. } = *self.bodies;
        let (cells, stopped_at) = (self.body.cells, stunted_cells);
        (stunted > 0).then_some(Warning::NeverMatures { cells, grown, stunted, stopped_at })
    }

    fn reach_warning(&self, support: &SupportOutlook) -> Option<Warning> {
        let range_over_radius = support.range_over_radius;
        let short = self.body.cells > 1 && range_over_radius < SHORT_REACH;
        short.then_some(Warning::HelpFallsShort { range_over_radius })
    }

    /// Replacements cost `turnover * division cost` eu/h per cell that touches another; the germ budget is
    /// what cells at the starting soma share keep of their mean income.
    fn turnover_warning(&self) -> Option<Warning> {
        let Self { settings, selection, bodies, .. } = *self;
        let budget = &settings.budget;
        let soma_share = match settings.traits.baseline {
            Baseline::Optimum => selection.soma_share,
            Baseline::At(logit) => sigmoid(logit),
        };
        let replaced_per_h = budget.turnover_per_h * bodies.contact_share;
        let cost = replaced_per_h * budget.division_cost_eu;
        let germ = budget.income_eu_per_h * bodies.mean_income * (1.0 - soma_share);
        let ruinous = cost > 0.0 && cost >= germ;
        ruinous.then(|| Warning::TurnoverTooCostly { share: cost / germ })
    }

    fn kernel_warning(&self) -> Option<Warning> {
        let Layout::Torus { dispersal_sites } = self.settings.habitat.layout else { return None };
        let side = self.settings.habitat.sites.isqrt();
        let home_share = home_share(dispersal_sites);
        let wide = dispersal_sites >= AS_GOOD_AS_MIXED * side as f64;
        let told = wide || home_share > MOSTLY;
        told.then_some(Warning::TorusKernel { dispersal_sites, side, home_share })
    }

    fn census_warning(&self) -> Option<Warning> {
        let run = &self.settings.run;
        let censuses = run.generations / run.census_every.max(1) + 1;
        let needed = self.settings.onset.sustained_censuses;
        let few = censuses < u64::from(needed);
        few.then_some(Warning::OnsetCannotBeConfirmed { censuses, needed })
    }

    fn tick_warning(&self) -> Option<Warning> {
        let generation_h = self.selection.generation_h;
        let Tick::Hours(tick_h) = self.settings.run.tick else { return None };
        let long = tick_h > LONGEST_TICK * generation_h;
        long.then_some(Warning::TickTooLong { tick_h, generation_h })
    }

    /// Drift or lack of time, where theory finds some cue favoured. Both are judged from where drift
    /// alone takes a responsiveness, as disruptive selection is weak at the generalist itself.
    fn selection_warning(&self) -> Option<Warning> {
        let Self { settings, selection, .. } = *self;
        let traits = &settings.traits;
        let (sites, sd) = (settings.habitat.sites as f64, traits.mutation_sd);
        let favoured = || selection.pulls.iter().filter(|pull| pull.favoured);
        // Neutral variance of an unbounded trait in overlapping generations, and at the same time
        // the rate of its evolution per unit of d ln R0/dg: N mu sd^2 / 2.
        let rate = sites * traits.mutation_probability * sd * sd / 2.0;
        let start = libm::sqrt(rate).max(sd);
        let advantage = favoured().map(|pull| pull.advantage(start, sd)).max_by(f64::total_cmp)?;
        if sites * advantage < 1.0 {
            return Some(Warning::DriftDominates { sites: settings.habitat.sites, advantage });
        }
        let goal = responsiveness_at(settings.onset.index).min(traits.bound);
        let needed =
            favoured().map(|pull| pull.generations(start, goal, rate)).min_by(f64::total_cmp)?;
        let generations = settings.run.generations;
        (needed > generations as f64).then_some(Warning::TooFewGenerations { generations, needed })
    }
}

/// Share of propagules that land on their parent's own site: both deviates within half a site,
/// `erf(1 / (2 sqrt(2) sd))^2`.
fn home_share(dispersal_sites: f64) -> f64 {
    let along = libm::erf(0.5 / (std::f64::consts::SQRT_2 * dispersal_sites));
    along * along
}

/// Responsiveness at which a cue of +-1 gives the division index `index`: `tanh^2(g/2)` is the
/// index of cells at `sigmoid(+-g)`, half each.
fn responsiveness_at(index: f64) -> f64 {
    2.0 * libm::atanh(libm::sqrt(index))
}
