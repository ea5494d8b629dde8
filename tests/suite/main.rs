//! Checks of the library against values from outside it, one file per subject.

mod stats_binomial;
mod stats_division_of_labour;
mod stats_mean;
mod stats_survival;
