//! Where bodies grow: each colony's by itself, or developments that several colonies share.
//!
//! Compact bodies of fully fed cells are grown one by one for each colony. Wherever fields act, help
//! is local, cells are replaced or the body is no clump, a development takes a field solve at every
//! step of growth; what a body looks like then does not depend on its genotype, so colonies share
//! developments. Each is a draw from the same distribution as a colony's own would be; a colony takes
//! one of a few at random, and each is replaced by a new one after some 32 colonies.

use std::sync::Arc;

use bevy_ecs::prelude::*;
use rand::{Rng, RngExt};

use super::mechanisms::yields::IncomeFactors;
use crate::scenario::Settings;
use crate::tissue::{Developer, Development, Growth};

/// Colonies that share a development on average.
const SHARED_BY: usize = 32;

/// Cells of the developments at hand together, about; and fewest and most developments.
const CELLS_AT_HAND: usize = 1 << 16;
const DEVELOPMENTS: (usize, usize) = (8, 32);

/// Where bodies grow.
#[derive(Resource, Debug, Clone)]
pub enum Nursery {
    /// Every colony grows a compact body of its own.
    Own(Box<Growth>),
    /// Colonies share developments.
    Shared(Box<Developments>),
}

impl Nursery {
    /// The nursery for a scenario's bodies.
    #[must_use]
    pub fn of(settings: &Settings) -> Self {
        let (propagule, adult) = (settings.life.propagule_cells, settings.body.adult_cells);
        if settings.is_spatial() {
            Self::Shared(Box::new(Developments::of(settings)))
        } else {
            Self::Own(Box::new(Growth::of_clump(propagule, adult)))
        }
    }
}

/// A development, and what its cells' incomes make of their returns.
#[derive(Debug, Clone)]
pub struct SharedBody {
    /// How the body grew, and what came of it.
    pub development: Development,
    /// Mean income of the final body's cells relative to e0, before tax.
    pub mean_income: f64,
    /// Cells of the final body that touch another: where cells are replaced, only these are.
    pub cells_in_contact: usize,
    /// What incomes do to returns.
    pub factors: IncomeFactors,
}

impl SharedBody {
    /// The income cue of a cell, `(e_i - mean e) / mean e`; 0 where nobody earns.
    #[must_use]
    pub fn income_cue(&self, cell: usize) -> f64 {
        let mean = self.mean_income;
        if mean > 0.0 { (self.development.incomes[cell] - mean) / mean } else { 0.0 }
    }
}

/// Developments at hand, and how to get more.
#[derive(Debug, Clone)]
pub struct Developments {
    developer: Developer,
    settings: Settings,
    at_hand: Vec<Arc<SharedBody>>,
    room: usize,
    shared_by: usize,
}

impl Developments {
    /// Developments of a scenario's bodies, none at hand yet.
    #[must_use]
    pub fn of(settings: &Settings) -> Self {
        let room = CELLS_AT_HAND / settings.body.adult_cells.max(1);
        Self {
            developer: Developer::new(settings.growth_rules()),
            settings: settings.clone(),
            at_hand: Vec::new(),
            room: room.clamp(DEVELOPMENTS.0, DEVELOPMENTS.1),
            shared_by: SHARED_BY,
        }
    }

    /// The same, each shared by so many colonies on average; 1: every colony grows its own.
    #[must_use]
    pub const fn shared_by(mut self, colonies: usize) -> Self {
        self.shared_by = if colonies == 0 { 1 } else { colonies };
        self
    }

    /// The body of a colony whose cells keep `income_share` of their income (1: untaxed), and the
    /// hours of its life per hour of that development.
    pub fn draw(&mut self, income_share: f64, rng: &mut impl Rng) -> (Arc<SharedBody>, f64) {
        match slowness(&self.settings, income_share) {
            Some(slowness) => (self.shared(rng), slowness),
            None => (Arc::new(self.grow(income_share, rng)), 1.0),
        }
    }

    fn shared(&mut self, rng: &mut impl Rng) -> Arc<SharedBody> {
        if self.at_hand.len() < self.room {
            let body = Arc::new(self.grow(1.0, rng));
            self.at_hand.push(Arc::clone(&body));
            return body;
        }
        let draw = rng.random_range(0..self.room * self.shared_by);
        let place = draw % self.room;
        if draw < self.room {
            self.at_hand[place] = Arc::new(self.grow(1.0, rng));
        }
        Arc::clone(&self.at_hand[place])
    }

    fn grow(&mut self, income_share: f64, rng: &mut impl Rng) -> SharedBody {
        let development = self.developer.develop(income_share, rng);
        let incomes = &development.incomes;
        let mean_income = development.mean_income();
        let factors = IncomeFactors::of(incomes, &self.settings.returns);
        let cells_in_contact = development.graph.cells_in_contact();
        SharedBody { development, mean_income, cells_in_contact, factors }
    }
}

/// Hours that growth under the tax takes per hour without it, where that is the same for all
/// cells; none where the tax decides who starves, so that developments cannot be shared.
#[must_use]
pub fn slowness(settings: &Settings, income_share: f64) -> Option<f64> {
    let budget = &settings.budget;
    let upkeep = budget.upkeep_eu_per_h / budget.income_eu_per_h;
    let taxed = income_share < 1.0;
    if !taxed {
        Some(1.0)
    } else if upkeep == 0.0 && income_share > 0.0 {
        Some(1.0 / income_share)
    } else if !settings.fields().act() && income_share > upkeep {
        Some((1.0 - upkeep) / (income_share - upkeep))
    } else {
        None
    }
}

/// The shared body of each site's colony; none where colonies have bodies of their own.
#[derive(Resource, Debug, Clone, Default)]
pub struct SharedBodies(pub Vec<Option<Arc<SharedBody>>>);

impl SharedBodies {
    /// The body of the colony of `site`, if it shares one.
    #[must_use]
    pub fn of(&self, site: usize) -> Option<&SharedBody> {
        self.0.get(site).and_then(Option::as_deref)
    }

    /// The body of the colony of `site` in a world where colonies share bodies.
    ///
    /// # Panics
    /// When nobody ever settled there, or every colony has a body of its own.
    pub(super) fn shared_by(&self, site: usize) -> &SharedBody {
        self.of(site).expect("colonies share bodies in spatial scenarios, from their settlement on")
    }
}
