//! Settings spelled out: every key with its value, as TOML that reads back to equal settings.

use serde::{Serialize, Serializer};

use super::curve::{CurveKind, CurveSpec, spec_of};
use super::registry::Parameter;
use super::registry::domain::Domain;
use super::registry::numbers::{Whole, WordOr};
use super::registry::parameters::{self as p, LayoutKind, TaskParameters};
use super::settings::{Baseline, Layout, Nutrient, Settings, Support, Tick, Waste};
use super::template;
use crate::theory::TaskReturn;

/// Paths and values, in the order of the scenario file.
type Values = Vec<(&'static str, toml::Value)>;

impl Settings {
    /// The scenario with every default spelled out, as TOML without comments. Reading it gives
    /// equal settings.
    #[must_use]
    pub fn to_toml(&self) -> String {
        template::plain(self)
    }

    /// The scenario with every default spelled out, as a tree of tables.
    #[must_use]
    pub fn to_table(&self) -> toml::Table {
        let mut root = toml::Table::new();
        for (path, value) in self.spelled_out() {
            put(&mut root, path, value);
        }
        root
    }

    /// Every key that has a meaning here, with its value, in the order of the scenario file.
    #[must_use]
    pub fn spelled_out(&self) -> Vec<(&'static str, toml::Value)> {
        let mut values = Values::new();
        add(&mut values, &p::TITLE, &self.title);
        add(&mut values, &p::SEED, &self.seed);
        self.add_habitat(&mut values);
        self.add_body(&mut values);
        add_task(&mut values, &p::VIABILITY, &self.returns.viability);
        add_task(&mut values, &p::FECUNDITY, &self.returns.fecundity);
        if let Some(support) = &self.support {
            add_support(&mut values, support);
        }
        if let Some(nutrient) = &self.nutrient {
            add_nutrient(&mut values, nutrient);
        }
        if let Some(waste) = &self.waste {
            add_waste(&mut values, waste);
        }
        self.add_traits(&mut values);
        self.add_run(&mut values);
        values
    }

    fn add_habitat(&self, values: &mut Values) {
        add_size(values, &p::SITES, self.habitat.sites);
        match self.habitat.layout {
            Layout::Mixed => add(values, &p::LAYOUT, &LayoutKind::Mixed),
            Layout::Torus { dispersal_sites } => {
                add(values, &p::LAYOUT, &LayoutKind::Torus);
                add(values, &p::DISPERSAL, &dispersal_sites);
            }
        }
    }

    fn add_body(&self, values: &mut Values) {
        add(values, &p::PLAN, &self.body.plan);
        add_size(values, &p::ADULT_CELLS, self.body.adult_cells);
        add(values, &p::CELL_DIAMETER, &self.body.cell_diameter_um);
        add_size(values, &p::PROPAGULE_CELLS, self.life.propagule_cells);
        add(values, &p::PROPAGULE_COST, &self.life.propagule_cost_eu);
        add(values, &p::ADULT_HAZARD, &self.life.adult_hazard_per_h);
        add(values, &p::EXTRINSIC_HAZARD, &self.life.extrinsic_hazard_per_h);
        add(values, &p::JUVENILE_HAZARD, &self.life.juvenile_hazard_per_h);
        add(values, &p::INCOME, &self.budget.income_eu_per_h);
        add(values, &p::UPKEEP, &self.budget.upkeep_eu_per_h);
        add(values, &p::DIVISION_COST, &self.budget.division_cost_eu);
        add(values, &p::DIVISION_CV, &self.budget.division_cv);
        add(values, &p::STARVATION, &self.budget.starvation_h);
        add(values, &p::TURNOVER, &self.budget.turnover_per_h);
    }

    fn add_traits(&self, values: &mut Values) {
        let baseline = match self.traits.baseline {
            Baseline::Optimum => WordOr::Word,
            Baseline::At(logit) => WordOr::Number(logit),
        };
        add(values, &p::CUES, &self.traits.cues);
        add(values, &p::BASELINE, &baseline);
        add(values, &p::START, &self.traits.start);
        add(values, &p::MUTATION_PROBABILITY, &self.traits.mutation_probability);
        add(values, &p::MUTATION_SD, &self.traits.mutation_sd);
        add(values, &p::BOUND, &self.traits.bound);
        add(values, &p::COST_PER_UNIT, &self.traits.cost_per_unit);
    }

    fn add_run(&self, values: &mut Values) {
        let tick = match self.run.tick {
            Tick::Auto => WordOr::Word,
            Tick::Hours(hours) => WordOr::Number(hours),
        };
        add(values, &p::GENERATIONS, &self.run.generations);
        add(values, &p::CENSUS_EVERY, &self.run.census_every);
        add(values, &p::REPLICATES, &self.run.replicates.into());
        add(values, &p::STOP_AFTER_ONSET, &self.run.stop_after_onset);
        add(values, &p::TICK, &tick);
        add(values, &p::ONSET_INDEX, &self.onset.index);
        add(values, &p::SUSTAINED_CENSUSES, &self.onset.sustained_censuses.into());
        add(values, &p::GERM_BELOW, &self.onset.germ_below);
        add(values, &p::SOMA_ABOVE, &self.onset.soma_above);
    }
}

impl Serialize for Settings {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        self.to_table().serialize(serializer)
    }
}

fn add<D: Domain>(values: &mut Values, parameter: &Parameter<D>, value: &D::Value) {
    values.push((parameter.path, parameter.domain.write(value)));
}

fn add_size(values: &mut Values, parameter: &Parameter<Whole>, size: usize) {
    add(values, parameter, &(size as u64));
}

fn add_task(values: &mut Values, task: &TaskParameters, returns: &TaskReturn) {
    let mut kind = |kind| add(values, &task.curve, &kind);
    match spec_of(&returns.curve) {
        CurveSpec::Power { exponent } => {
            kind(CurveKind::Power);
            add(values, &task.exponent, &exponent);
        }
        CurveSpec::Saturating { half } => {
            kind(CurveKind::Saturating);
            add(values, &task.half, &half);
        }
        CurveSpec::Sigmoid { half, steepness } => {
            kind(CurveKind::Sigmoid);
            add(values, &task.half, &half);
            add(values, &task.steepness, &steepness);
        }
        CurveSpec::Table { points } => {
            kind(CurveKind::Table);
            add(values, &task.points, &points);
        }
    }
    add(values, &task.surface_effect, &returns.surface_effect);
    add(values, &task.interior_effect, &returns.interior_effect);
}

fn add_support(values: &mut Values, support: &Support) {
    add(values, &p::SUPPORT.range, &support.range_diameters);
    add(values, &p::SUPPORT.leak, &support.leak);
}

fn add_nutrient(values: &mut Values, nutrient: &Nutrient) {
    add(values, &p::NUTRIENT.bath, &nutrient.bath_mm);
    add(values, &p::NUTRIENT.half_saturation, &nutrient.half_saturation_mm);
    add(values, &p::NUTRIENT.uptake, &nutrient.uptake_fmol_per_h);
    add(values, &p::NUTRIENT.diffusivity, &nutrient.diffusivity_um2_per_s);
    add(values, &p::NUTRIENT.exchange, &nutrient.exchange);
}

fn add_waste(values: &mut Values, waste: &Waste) {
    add(values, &p::WASTE.release, &waste.release_fmol_per_h);
    add(values, &p::WASTE.diffusivity, &waste.diffusivity_um2_per_s);
    add(values, &p::WASTE.toxic, &waste.toxic_mm);
    add(values, &p::WASTE.exchange, &waste.exchange);
}

/// Puts `value` at the dotted `path`, making the tables on the way.
fn put(root: &mut toml::Table, path: &str, value: toml::Value) {
    match path.split_once('.') {
        None => {
            root.insert(path.to_owned(), value);
        }
        Some((table, rest)) => {
            let inner = root.entry(table).or_insert_with(|| toml::Table::new().into());
            if let toml::Value::Table(inner) = inner {
                put(inner, rest, value);
            }
        }
    }
}
