//! Checks of the whole library against outside values.

mod theory_best;
mod theory_critical;
mod theory_fitness;
mod theory_models;
mod theory_selection;
