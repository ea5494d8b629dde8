//! Checks of the library and the program against values from outside, one file per subject.

mod command_fixture;
mod command_output;
mod command_predict;
mod command_wrong_scenario;
mod readme;
mod readme_house;
mod readme_results;
mod record_folder;
mod record_run;
mod record_sample;
mod record_summary;
mod report_agreement;
mod report_screen;
mod scenario_overrides;
mod scenario_properties;
mod scenario_settings;
mod scenario_templates;
mod stats_binomial;
mod stats_division_of_labour;
mod stats_mean;
mod stats_survival;
mod theory_best;
mod theory_critical;
mod theory_fitness;
mod theory_models;
mod theory_selection;
