//! Checks of the library against values from outside it, one file per subject.

mod record_folder;
mod record_run;
mod record_sample;
mod record_summary;
mod report_agreement;
mod report_screen;
mod stats_binomial;
mod stats_division_of_labour;
mod stats_mean;
mod stats_survival;
