//! Checks of the library against values from outside it, one file per subject.

mod command_fixture;
mod command_output;
mod command_wrong_scenario;
mod scenario_overrides;
mod scenario_properties;
mod scenario_settings;
mod scenario_templates;
