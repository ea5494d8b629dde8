//! The one registry of parameters: path, unit, range, default and meaning of every key.
//!
//! Validation, templates, the JSON Schema and the reference page all come from here; a default
//! is written nowhere else.

pub(crate) mod domain;
pub(crate) mod numbers;
pub(crate) mod parameters;
pub(crate) mod per_cue;
pub(crate) mod points;
mod tables;
pub(crate) mod words;

use domain::Domain;
pub(crate) use tables::LATER;

/// A parameter of the scenario: where it stands, what it means and what it may be.
#[derive(Debug)]
pub(crate) struct Parameter<D: Domain> {
    /// Path of the key, such as `life.adult_hazard_per_h`.
    pub(crate) path: &'static str,
    /// Unit, or `none`.
    pub(crate) unit: &'static str,
    /// One line that says what it is.
    pub(crate) meaning: &'static str,
    /// What it may be.
    pub(crate) domain: D,
    /// The default; where `required`, an example.
    pub(crate) default: D::Plain,
    /// Whether the user must state it (if its condition holds).
    pub(crate) required: bool,
    /// The setting beside it without which it has no meaning.
    pub(crate) condition: Option<Condition>,
}

/// A sibling key and the words of it with which a parameter has a meaning.
#[derive(Debug, Clone, Copy)]
pub struct Condition {
    /// Name of the sibling, such as `curve`.
    pub sibling: &'static str,
    /// The words.
    pub words: &'static [&'static str],
}

/// What the registry says about a parameter, whatever its type.
pub trait Described: Sync {
    /// Path of the key, such as `life.adult_hazard_per_h`.
    fn path(&self) -> &'static str;
    /// Unit, or `none`.
    fn unit(&self) -> &'static str;
    /// One line that says what it is.
    fn meaning(&self) -> &'static str;
    /// What it may be, in words.
    fn allowed(&self) -> String;
    /// The default; where [`Described::required`], an example.
    fn default_value(&self) -> toml::Value;
    /// Whether the user must state it (if its condition holds).
    fn required(&self) -> bool;
    /// The setting beside it without which it has no meaning.
    fn condition(&self) -> Option<Condition>;
    /// JSON Schema of its values.
    fn schema(&self) -> serde_json::Value;

    /// Path of the key's table, empty at the top.
    fn table(&self) -> &'static str {
        self.path().rsplit_once('.').map_or("", |(table, _)| table)
    }

    /// The key's name within its table.
    fn name(&self) -> &'static str {
        self.path().rsplit_once('.').map_or(self.path(), |(_, name)| name)
    }
}

impl<D: Domain> Described for Parameter<D> {
    fn path(&self) -> &'static str {
        self.path
    }

    fn unit(&self) -> &'static str {
        self.unit
    }

    fn meaning(&self) -> &'static str {
        self.meaning
    }

    fn allowed(&self) -> String {
        self.domain.allowed()
    }

    fn default_value(&self) -> toml::Value {
        self.domain.write(&self.domain.value(self.default))
    }

    fn required(&self) -> bool {
        self.required
    }

    fn condition(&self) -> Option<Condition> {
        self.condition
    }

    fn schema(&self) -> serde_json::Value {
        self.domain.schema()
    }
}

/// A table of the scenario file.
#[derive(Debug, Clone, Copy)]
pub struct Table {
    /// Its path.
    pub path: &'static str,
    /// One line that says what its keys are about.
    pub meaning: &'static str,
    /// Where the table switches something on: how things are without it. A scenario that states
    /// it, empty or not, or any key of it, has it with the defaults of its other keys.
    pub absent: Option<&'static str>,
}

impl Table {
    /// A table that every scenario has, stated or not.
    pub(crate) const fn always(path: &'static str, meaning: &'static str) -> Self {
        Self { path, meaning, absent: None }
    }

    /// A table that switches something on, and how things are without it.
    pub(crate) const fn optional(
        path: &'static str,
        meaning: &'static str,
        absent: &'static str,
    ) -> Self {
        Self { path, meaning, absent: Some(absent) }
    }

    /// What its keys are about and, where it is optional, how things are without it.
    #[must_use]
    pub fn description(&self) -> String {
        match self.absent {
            Some(absent) => format!("{}. Optional: without this table, {absent}", self.meaning),
            None => self.meaning.to_owned(),
        }
    }
}

/// Something of the scenario file that later versions will know.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Later {
    /// The table or key.
    pub(crate) path: &'static str,
    /// What can be had now.
    pub(crate) instead: &'static str,
}

/// All parameters, in the order of the scenario file.
#[must_use]
pub fn entries() -> &'static [&'static dyn Described] {
    parameters::ENTRIES
}

/// All tables, in the order of the scenario file.
#[must_use]
pub fn tables() -> &'static [Table] {
    tables::TABLES
}

/// The table at `path`, if there is one.
#[must_use]
pub fn table(path: &str) -> Option<&'static Table> {
    tables().iter().find(|table| table.path == path)
}

/// The parameter at `path`, if there is one.
#[must_use]
pub fn entry(path: &str) -> Option<&'static dyn Described> {
    entries().iter().copied().find(|entry| entry.path() == path)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_parameter_has_meaning_unit_and_range() {
        for entry in entries() {
            let path = entry.path();
            assert!(!entry.unit().is_empty(), "{path} lacks a unit");
            assert!(entry.meaning().len() > 10, "{path} lacks a meaning");
            assert!(!entry.meaning().contains('\n') && !entry.meaning().ends_with('.'), "{path}");
            assert!(!entry.allowed().is_empty(), "{path} lacks a range");
        }
    }

    #[test]
    fn units_in_names_agree_with_units() {
        let suffixes = [
            ("_eu_per_h", "eu/h"),
            ("_fmol_per_h", "fmol/h"),
            ("_per_h", "1/h"),
            ("_um2_per_s", "um^2/s"),
            ("_um", "um"),
            ("_eu", "eu"),
            ("_h", "h"),
            ("_mM", "mM"),
            ("_diameters", "cell diameters"),
            ("dispersal_sites", "site widths"),
        ];
        for entry in entries() {
            if let Some((_, unit)) = suffixes.iter().find(|(end, _)| entry.name().ends_with(end)) {
                assert_eq!(entry.unit(), *unit, "{}", entry.path());
            }
        }
    }

    #[test]
    fn paths_are_unique_and_their_tables_are_known() {
        for (place, entry) in entries().iter().enumerate() {
            let twins = entries().iter().filter(|other| other.path() == entry.path()).count();
            assert_eq!(twins, 1, "{} at {place}", entry.path());
            let table = entry.table();
            assert!(table.is_empty() || tables().iter().any(|known| known.path == table));
        }
    }

    #[test]
    fn conditions_name_siblings_and_their_words() {
        for entry in entries() {
            let Some(condition) = entry.condition() else { continue };
            let sibling = self::entry(&format!("{}.{}", entry.table(), condition.sibling));
            let words = sibling.expect("the sibling is a parameter").allowed();
            assert!(condition.words.iter().all(|word| words.contains(word)), "{words}");
        }
    }
}
