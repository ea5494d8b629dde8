//! Every table of the scenario file, and what later versions will know.

use super::{Later, Table};

/// All tables, in the order of the scenario file.
pub(super) static TABLES: &[Table] = &[
    Table::always("habitat", "Where colonies live"),
    Table::always("body", "The shape and size of an adult colony"),
    Table::always("life", "Founding, reproduction and death of a colony"),
    Table::always("budget", "A cell's energy; 1 eu is what it earns in an hour by default"),
    Table::always(
        "returns.viability",
        "What the soma budget yields: viability, which lowers the hazard",
    ),
    Table::always(
        "returns.fecundity",
        "What the germ budget yields: fecundity, which makes propagules",
    ),
    Table::optional(
        "support",
        "How far the viability task's product reaches from cell to cell",
        "support is pooled over the colony",
    ),
    Table::optional(
        "nutrient",
        "Food that cells take up, that diffuses through the body, and that decides their incomes",
        "every cell is fully fed",
    ),
    Table::optional(
        "waste",
        "What cells release in proportion to income, and what lowers it until it has diffused away",
        "there is no waste",
    ),
    Table::always("traits", "What is heritable, where it starts and how it mutates"),
    Table::always("run", "How long a replicate is, and how many there are"),
    Table::always("onset", "When differentiation counts as arisen"),
];

/// Tables and keys of later versions.
pub(crate) static LATER: &[Later] =
    &[Later { path: "scan", instead: "change single keys with --set in the meantime" }];
