//! The scenario file's JSON Schema (draft 2020-12), for editors that complete and check TOML.

use serde_json::{Map, Value, json};

use super::registry::{self, Described};

/// The schema of the scenario file, made from the registry. What must hold between keys of
/// different tables is beyond it.
#[must_use]
pub fn schema() -> Value {
    let mut root = table_schema("");
    let head = json!({
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Somadawn scenario",
    });
    if let (Some(root), Value::Object(head)) = (root.as_object_mut(), head) {
        root.extend(head);
    }
    root
}

/// The schema of the table at `path`, its inner tables included.
fn table_schema(path: &str) -> Value {
    let mut properties = Map::new();
    let mut required = Vec::new();
    let mut dependent = Map::new();
    for entry in registry::entries().iter().filter(|entry| entry.table() == path) {
        properties.insert(entry.name().to_owned(), entry_schema(*entry));
        if entry.required() && entry.condition().is_none() {
            required.push(entry.name());
        }
        if let Some(rule) = condition_schema(*entry) {
            dependent.insert(entry.name().to_owned(), rule);
        }
    }
    for inner in inner_tables(path) {
        let full = if path.is_empty() { inner.to_owned() } else { format!("{path}.{inner}") };
        properties.insert(inner.to_owned(), table_schema(&full));
    }
    let mut schema = json!({
        "type": "object", "properties": properties, "additionalProperties": false,
    });
    if let Some(known) = registry::table(path) {
        schema["description"] = known.description().into();
    }
    if !required.is_empty() {
        schema["required"] = required.into();
    }
    if !dependent.is_empty() {
        schema["dependentSchemas"] = dependent.into();
    }
    schema
}

fn entry_schema(entry: &dyn Described) -> Value {
    let mut schema = entry.schema();
    let unit = match entry.unit() {
        "none" => String::new(),
        unit => format!(" ({unit})"),
    };
    schema["description"] = format!("{}{unit}", entry.meaning()).into();
    if !entry.required() {
        schema["default"] = json!(entry.default_value());
    }
    schema
}

/// What a key that is stated demands of its sibling. A key that goes with the sibling's default
/// does not need it stated.
fn condition_schema(entry: &dyn Described) -> Option<Value> {
    let condition = entry.condition()?;
    let mut rule = json!({
        "properties": { condition.sibling: { "enum": condition.words } },
    });
    let sibling = registry::entry(&format!("{}.{}", entry.table(), condition.sibling))?;
    let default = sibling.default_value();
    if !default.as_str().is_some_and(|word| condition.words.contains(&word)) {
        rule["required"] = json!([condition.sibling]);
    }
    Some(rule)
}

/// Names of the tables directly in `path`.
fn inner_tables(path: &str) -> Vec<&'static str> {
    let mut names = Vec::new();
    for table in registry::tables() {
        let rest = if path.is_empty() {
            Some(table.path)
        } else {
            table.path.strip_prefix(path).and_then(|rest| rest.strip_prefix('.'))
        };
        let Some(name) = rest.and_then(|rest| rest.split('.').next()) else { continue };
        if !names.contains(&name) {
            names.push(name);
        }
    }
    names
}
