//! From text to settings: parse, override, check every key, then what holds between keys.

use std::collections::BTreeSet;
use std::fs::File;
use std::io::{self, Read};
use std::path::Path;
use std::sync::Arc;

use miette::NamedSource;
use toml::de::DeTable;

use crate::theory::{ReturnCurve, TaskReturn};

use super::curve::{CurveKind, CurveSpec, build_curve};
use super::error::{Faults, LARGEST_FILE, ScenarioError};
use super::fault::FaultKind;
use super::notes::Notes;
use super::overrides::Override;
use super::registry::Parameter;
use super::registry::domain::Domain;
use super::registry::numbers::{Whole, WordOr};
use super::registry::parameters::{self as p, LayoutKind, TaskParameters};
use super::settings::{
    Baseline, Body, Budget, Habitat, Layout, Life, Nutrient, Onset, Returns, Run, Settings,
    Support, Tick, Traits, Waste,
};
use super::tree::{Content, Frame, Keys, Node, Origin};
use super::{relations, unknown};

/// Most syntax errors that are told one by one.
const MOST_SYNTAX_ERRORS: usize = 20;

impl Settings {
    /// Reads the scenario file at `path`, with `overrides` in place of what it says.
    ///
    /// # Errors
    ///
    /// When the file cannot be read as text, or with all its faults and those of the overrides.
    pub fn load(path: &Path, overrides: &[Override]) -> Result<Self, ScenarioError> {
        let text = read_text(path)?;
        Self::from_toml_str(&path.display().to_string(), &text, overrides)
    }

    /// Reads a scenario from `text`, with `overrides` in place of what it says; messages call
    /// the text `name`.
    ///
    /// # Errors
    ///
    /// With all faults of the text and of the overrides.
    pub fn from_toml_str(
        name: &str,
        text: &str,
        overrides: &[Override],
    ) -> Result<Self, ScenarioError> {
        let file = Arc::new(NamedSource::new(name, text.to_owned()));
        let sources = std::iter::once(file).chain(overrides.iter().map(Override::source)).collect();
        let mut notes = Notes::new(sources);
        let mut root = parse(text, &mut notes);
        for (index, setting) in overrides.iter().enumerate() {
            setting.apply(index + 1, &mut root, &mut notes);
        }
        unknown::note_unknown_keys(&root, &mut notes);
        let mut reader = Reader { root: &root, notes, failed: BTreeSet::new() };
        let settings = reader.settings();
        relations::check(&settings, &mut reader);
        let faults = reader.notes.into_faults();
        if faults.is_empty() {
            return Ok(settings);
        }
        Err(Faults { name: name.to_owned(), faults }.into())
    }

    /// The scenario that says nothing but its title: every default.
    #[must_use]
    pub fn example(title: &str) -> Self {
        let root = Keys::new();
        let mut reader =
            Reader { root: &root, notes: Notes::new(Vec::new()), failed: BTreeSet::new() };
        let mut settings = reader.settings();
        title.clone_into(&mut settings.title);
        settings
    }
}

/// The text of the scenario file at `path`.
///
/// # Errors
///
/// When there is no such file, or it cannot be read as text.
pub fn read_text(path: &Path) -> Result<String, ScenarioError> {
    let unreadable = |source: io::Error| {
        let path = path.to_owned();
        match source.kind() {
            io::ErrorKind::NotFound => ScenarioError::Absent { path },
            io::ErrorKind::IsADirectory => ScenarioError::Folder { path },
            _ => ScenarioError::Unreadable { path, source },
        }
    };
    let mut bytes = Vec::new();
    let file = File::open(path).map_err(unreadable)?;
    file.take(LARGEST_FILE + 1).read_to_end(&mut bytes).map_err(unreadable)?;
    if bytes.len() as u64 > LARGEST_FILE {
        return Err(ScenarioError::TooLarge { path: path.to_owned() });
    }
    let not_text = |offset| ScenarioError::NotText { path: path.to_owned(), offset };
    // A null byte is UTF-8, but in no text that anybody wrote.
    if let Some(offset) = bytes.iter().position(|byte| *byte == 0) {
        return Err(not_text(offset));
    }
    String::from_utf8(bytes).map_err(|error| not_text(error.utf8_error().valid_up_to()))
}

/// Parses as much of `text` as can be, noting what cannot.
fn parse(text: &str, notes: &mut Notes) -> Keys {
    let (table, errors) = DeTable::parse_recoverable(text);
    for error in errors.iter().take(MOST_SYNTAX_ERRORS) {
        let origin = Origin { source: 0, span: error.span().unwrap_or(0..0) };
        notes.at(&origin, FaultKind::Syntax { message: error.message().to_owned() });
    }
    if errors.len() > MOST_SYNTAX_ERRORS {
        notes.nowhere(FaultKind::MoreSyntax { count: errors.len() - MOST_SYNTAX_ERRORS });
    }
    Frame { source: 0, offset: 0 }.keys(table.get_ref())
}

/// The tree of a scenario while settings are taken from it.
pub(crate) struct Reader<'a> {
    root: &'a Keys,
    /// The faults so far.
    pub(crate) notes: Notes,
    failed: BTreeSet<&'static str>,
}

impl Reader<'_> {
    /// The node at `path`, if the scenario states it.
    pub(crate) fn find(&self, path: &str) -> Option<&Node> {
        let mut names = path.split('.');
        let mut node = self.root.get(names.next()?)?;
        for name in names {
            let Content::Table(keys) = &node.content else { return None };
            node = keys.get(name)?;
        }
        Some(node)
    }

    /// Whether the values of all `paths` are what the user said or the defaults, not stand-ins
    /// for faulty ones.
    pub(crate) fn sound(&self, paths: &[&str]) -> bool {
        paths.iter().all(|path| !self.failed.contains(path))
    }

    /// Where to point for a fault of the value at `path`: at the value, else nowhere.
    pub(crate) fn note(&mut self, path: &str, kind: FaultKind) {
        match self.find(path).map(|node| node.place.clone()) {
            Some(place) => self.notes.at(&place, kind),
            None => self.notes.nowhere(kind),
        }
    }

    /// The value of a parameter, its default where the scenario says nothing. A faulty value is
    /// noted, and the default stands in for it until all faults are found.
    fn take<D: Domain>(&mut self, parameter: &Parameter<D>) -> D::Value {
        let default = || parameter.domain.value(parameter.default);
        let Some(node) = self.find(parameter.path).cloned() else {
            if parameter.required {
                self.note_missing(parameter);
            }
            return default();
        };
        let value = parameter.domain.read(parameter.path, &node, &mut self.notes);
        if value.is_none() {
            self.failed.insert(parameter.path);
        }
        value.unwrap_or_else(default)
    }

    fn note_missing<D: Domain>(&mut self, parameter: &Parameter<D>) {
        self.failed.insert(parameter.path);
        if self.notes.has_syntax_errors() {
            return;
        }
        let name = parameter.path.rsplit('.').next().unwrap_or_default();
        let example = parameter.domain.write(&parameter.domain.value(parameter.default));
        self.notes.nowhere(FaultKind::Missing {
            key: parameter.path.to_owned(),
            example: format!("{name} = {example}"),
            because: parameter.meaning.to_owned(),
        });
    }

    fn size(&mut self, parameter: &Parameter<Whole>) -> usize {
        usize::try_from(self.take(parameter)).unwrap_or(usize::MAX)
    }

    fn count(&mut self, parameter: &Parameter<Whole>) -> u32 {
        u32::try_from(self.take(parameter)).unwrap_or(u32::MAX)
    }

    fn settings(&mut self) -> Settings {
        Settings {
            title: self.take(&p::TITLE),
            seed: self.take(&p::SEED),
            habitat: self.habitat(),
            body: Body {
                plan: self.take(&p::PLAN),
                adult_cells: self.size(&p::ADULT_CELLS),
                cell_diameter_um: self.take(&p::CELL_DIAMETER),
            },
            life: self.life(),
            budget: self.budget(),
            returns: Returns {
                viability: self.task(&p::VIABILITY),
                fecundity: self.task(&p::FECUNDITY),
            },
            support: self.states("support").then(|| self.support()),
            nutrient: self.states("nutrient").then(|| self.nutrient()),
            waste: self.states("waste").then(|| self.waste()),
            traits: self.traits(),
            run: self.run(),
            onset: self.onset(),
        }
    }

    /// Whether the scenario states the table at `path`, be it empty, or any key of it.
    fn states(&self, path: &str) -> bool {
        self.find(path).is_some()
    }

    fn habitat(&mut self) -> Habitat {
        let sites = self.size(&p::SITES);
        let layout = match self.take(&p::LAYOUT) {
            LayoutKind::Mixed => Layout::Mixed,
            LayoutKind::Torus => Layout::Torus { dispersal_sites: self.take(&p::DISPERSAL) },
        };
        Habitat { sites, layout }
    }

    fn life(&mut self) -> Life {
        Life {
            propagule_cells: self.size(&p::PROPAGULE_CELLS),
            propagule_cost_eu: self.take(&p::PROPAGULE_COST),
            adult_hazard_per_h: self.take(&p::ADULT_HAZARD),
            extrinsic_hazard_per_h: self.take(&p::EXTRINSIC_HAZARD),
            juvenile_hazard_per_h: self.take(&p::JUVENILE_HAZARD),
        }
    }

    fn budget(&mut self) -> Budget {
        Budget {
            income_eu_per_h: self.take(&p::INCOME),
            upkeep_eu_per_h: self.take(&p::UPKEEP),
            division_cost_eu: self.take(&p::DIVISION_COST),
            division_cv: self.take(&p::DIVISION_CV),
            starvation_h: self.take(&p::STARVATION),
            turnover_per_h: self.take(&p::TURNOVER),
        }
    }

    fn task(&mut self, task: &TaskParameters) -> TaskReturn {
        let spec = match self.take(&task.curve) {
            CurveKind::Power => CurveSpec::Power { exponent: self.take(&task.exponent) },
            CurveKind::Saturating => CurveSpec::Saturating { half: self.take(&task.half) },
            CurveKind::Sigmoid => CurveSpec::Sigmoid {
                half: self.take(&task.half),
                steepness: self.take(&task.steepness),
            },
            CurveKind::Table => CurveSpec::Table { points: self.take(&task.points) },
        };
        let sound = self.sound(&task.paths());
        let curve = build_curve(&spec).unwrap_or_else(|source| {
            if sound {
                let table = task.curve.path.trim_end_matches(".curve").to_owned();
                self.note(task.curve.path, FaultKind::Curve { table, source });
            }
            ReturnCurve::Power { exponent: task.exponent.default }
        });
        TaskReturn {
            curve,
            surface_effect: self.take(&task.surface_effect),
            interior_effect: self.take(&task.interior_effect),
        }
    }

    fn support(&mut self) -> Support {
        Support { range_diameters: self.take(&p::SUPPORT.range), leak: self.take(&p::SUPPORT.leak) }
    }

    fn nutrient(&mut self) -> Nutrient {
        Nutrient {
            bath_mm: self.take(&p::NUTRIENT.bath),
            half_saturation_mm: self.take(&p::NUTRIENT.half_saturation),
            uptake_fmol_per_h: self.take(&p::NUTRIENT.uptake),
            diffusivity_um2_per_s: self.take(&p::NUTRIENT.diffusivity),
            exchange: self.take(&p::NUTRIENT.exchange),
        }
    }

    fn waste(&mut self) -> Waste {
        Waste {
            release_fmol_per_h: self.take(&p::WASTE.release),
            diffusivity_um2_per_s: self.take(&p::WASTE.diffusivity),
            toxic_mm: self.take(&p::WASTE.toxic),
            exchange: self.take(&p::WASTE.exchange),
        }
    }

    fn traits(&mut self) -> Traits {
        Traits {
            cues: self.take(&p::CUES),
            baseline: match self.take(&p::BASELINE) {
                WordOr::Word => Baseline::Optimum,
                WordOr::Number(logit) => Baseline::At(logit),
            },
            start: self.take(&p::START),
            mutation_probability: self.take(&p::MUTATION_PROBABILITY),
            mutation_sd: self.take(&p::MUTATION_SD),
            bound: self.take(&p::BOUND),
            cost_per_unit: self.take(&p::COST_PER_UNIT),
        }
    }

    fn run(&mut self) -> Run {
        Run {
            generations: self.take(&p::GENERATIONS),
            census_every: self.take(&p::CENSUS_EVERY),
            replicates: self.count(&p::REPLICATES),
            stop_after_onset: self.take(&p::STOP_AFTER_ONSET),
            tick: match self.take(&p::TICK) {
                WordOr::Word => Tick::Auto,
                WordOr::Number(hours) => Tick::Hours(hours),
            },
        }
    }

    fn onset(&mut self) -> Onset {
        Onset {
            index: self.take(&p::ONSET_INDEX),
            sustained_censuses: self.count(&p::SUSTAINED_CENSUSES),
            germ_below: self.take(&p::GERM_BELOW),
            soma_above: self.take(&p::SOMA_ABOVE),
        }
    }
}
