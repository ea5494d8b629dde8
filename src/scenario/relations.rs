//! What must hold between the keys of a scenario.

use crate::theory::Cue;

use super::fault::FaultKind;
use super::read::Reader;
use super::registry::parameters::{self as p, MOST_CELLS};
use super::registry::{self, Described};
use super::settings::{Baseline, Layout, Settings};
use super::tree::Content;

/// Notes every pair of keys that do not fit each other. Keys already at fault are left alone.
pub(crate) fn check(settings: &Settings, reader: &mut Reader<'_>) {
    orders(settings, reader);
    cells(settings, reader);
    square(settings, reader);
    starts(settings, reader);
    conditions(reader);
}

/// `value` at `key` must stand in `relation` to `limit` at `other`.
struct Order {
    key: &'static str,
    value: f64,
    relation: &'static str,
    other: &'static str,
    limit: f64,
}

impl Order {
    fn holds(&self) -> bool {
        match self.relation {
            "below" => self.value < self.limit,
            "at least" => self.value >= self.limit,
            _ => self.value <= self.limit,
        }
    }

    fn check(self, reader: &mut Reader<'_>) {
        if self.holds() || !reader.sound(&[self.key, self.other]) {
            return;
        }
        // Point at what the user wrote: the key itself, or the one that its default clashes with.
        let written = if reader.find(self.key).is_some() { self.key } else { self.other };
        let Self { key, value, relation, other, limit } = self;
        let (value, limit) = (value.to_string(), limit.to_string());
        let kind = FaultKind::Relation { key: key.to_owned(), value, relation, other, limit };
        reader.note(written, kind);
    }
}

fn orders(settings: &Settings, reader: &mut Reader<'_>) {
    let Settings { body, life, budget, run, onset, .. } = settings;
    let order = |key, value, relation, other, limit| Order { key, value, relation, other, limit };
    let cells = (body.adult_cells as f64, life.propagule_cells as f64);
    let censuses = (run.census_every as f64, run.generations as f64);
    for order in [
        order(p::ADULT_CELLS.path, cells.0, "at least", p::PROPAGULE_CELLS.path, cells.1),
        order(
            p::UPKEEP.path,
            budget.upkeep_eu_per_h,
            "below",
            p::INCOME.path,
            budget.income_eu_per_h,
        ),
        order(p::GERM_BELOW.path, onset.germ_below, "below", p::SOMA_ABOVE.path, onset.soma_above),
        order(p::CENSUS_EVERY.path, censuses.0, "at most", p::GENERATIONS.path, censuses.1),
    ] {
        order.check(reader);
    }
}

fn cells(settings: &Settings, reader: &mut Reader<'_>) {
    let (sites, adult_cells) = (settings.habitat.sites, settings.body.adult_cells);
    let cells = sites as u128 * adult_cells as u128;
    if cells <= u128::from(MOST_CELLS) || !reader.sound(&[p::SITES.path, p::ADULT_CELLS.path]) {
        return;
    }
    let written =
        if reader.find(p::ADULT_CELLS.path).is_some() { &p::ADULT_CELLS } else { &p::SITES };
    reader.note(
        written.path,
        FaultKind::TooManyCells { sites, adult_cells, cells, limit: MOST_CELLS },
    );
}

/// A torus is as wide as it is long.
fn square(settings: &Settings, reader: &mut Reader<'_>) {
    let sites = settings.habitat.sites;
    let side = sites.isqrt();
    let torus = matches!(settings.habitat.layout, Layout::Torus { .. });
    if !torus || side * side == sites || !reader.sound(&[p::SITES.path, p::LAYOUT.path]) {
        return;
    }
    let written = if reader.find(p::SITES.path).is_some() { p::SITES.path } else { p::LAYOUT.path };
    let (below, above) = (side * side, (side + 1) * (side + 1));
    reader.note(written, FaultKind::NotSquare { sites, below, above });
}

fn starts(settings: &Settings, reader: &mut Reader<'_>) {
    let traits = &settings.traits;
    let within = |key: String, value: f64, reader: &mut Reader<'_>| {
        if value.abs() <= traits.bound || !reader.sound(&[p::BOUND.path, p::BASELINE.path]) {
            return;
        }
        let (other, limit) = (p::BOUND.path, traits.bound.to_string());
        let relation = "within plus or minus";
        let kind = FaultKind::Relation {
            key: key.clone(),
            value: value.to_string(),
            relation,
            other,
            limit,
        };
        reader.note(&key, kind);
    };
    if let Baseline::At(logit) = traits.baseline {
        within(p::BASELINE.path.to_owned(), logit, reader);
    }
    for cue in Cue::ALL {
        let key = format!("{}.{cue}", p::START.path);
        within(key.clone(), traits.start[cue.index()], reader);
        let stated =
            reader.find(&key).is_some_and(|node| !matches!(node.content, Content::Table(_)));
        if stated
            && p::CUES.domain.built.contains(&cue)
            && !traits.cues.contains(cue)
            && reader.sound(&[p::CUES.path])
        {
            reader.note(&key.clone(), FaultKind::CueNotEnabled { key, cue: cue.to_string() });
        }
    }
}

/// Keys that mean nothing with what their sibling says.
fn conditions(reader: &mut Reader<'_>) {
    for entry in registry::entries() {
        let Some(condition) = entry.condition() else { continue };
        let Some(node) = reader.find(entry.path()) else { continue };
        let place = node.key.clone();
        let sibling = format!("{}.{}", entry.table(), condition.sibling);
        let stated = reader.find(&sibling).map(|node| node.content.clone());
        let word = match (stated, registry::entry(&sibling)) {
            (Some(Content::Text(word)), Some(sibling)) if is_word(sibling, &word) => word,
            (None, Some(sibling)) => {
                sibling.default_value().as_str().unwrap_or_default().to_owned()
            }
            _ => continue,
        };
        if condition.words.contains(&word.as_str()) {
            continue;
        }
        let owners = super::registry::words::one_of(condition.words.iter().copied());
        let kind = FaultKind::Misplaced {
            key: entry.path().to_owned(),
            owners: format!("{} = {owners}", condition.sibling),
            actual: format!("{sibling} = \"{word}\""),
        };
        reader.notes.at(&place, kind);
    }
}

fn is_word(sibling: &dyn Described, word: &str) -> bool {
    sibling.allowed().contains(&format!("\"{word}\""))
}
