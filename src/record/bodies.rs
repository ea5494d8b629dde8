//! Bodies: one row per cell of a sampled adult colony.

use super::column::{Column, Field, column};
use super::table::TableRow;

/// When a body was sampled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Stage {
    /// At the first census with adults.
    #[default]
    Start,
    /// At the census of the onset.
    Onset,
    /// At the last census.
    End,
}

impl Stage {
    /// All stages, in order of time.
    pub const ALL: [Self; 3] = [Self::Start, Self::Onset, Self::End];

    /// The stage's word in the table.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Start => "start",
            Self::Onset => "onset",
            Self::End => "end",
        }
    }

    /// The stage of that name, if there is one.
    #[must_use]
    pub fn from_name(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|stage| stage.name() == name)
    }
}

/// One cell of a sampled adult colony.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct BodyRow {
    /// Replicate, from 0.
    pub replicate: u32,
    /// When the body was sampled.
    pub stage: Stage,
    /// Generation of the sample.
    pub generation: f64,
    /// Site of the habitat on which the colony sits.
    pub site: u32,
    /// The cell's number within its colony.
    pub cell: u32,
    /// Position, um.
    pub x_um: f32,
    /// Position, um.
    pub y_um: f32,
    /// Position, um.
    pub z_um: f32,
    /// Soma share of the budget (0 germ, 1 soma).
    pub soma_share: f32,
    /// Income, eu/h.
    pub income_eu_per_h: f32,
    /// Support received of the viability task's product.
    pub support: f32,
    /// Whether the cell touches the water.
    pub exposed: bool,
    /// Label of the cell's last division: mother -1, daughter +1, founder 0.
    pub label: i8,
}

impl TableRow for BodyRow {
    const TABLE: &'static str = "bodies";

    fn columns() -> Vec<Column<Self>> {
        let stage = Field::Word(
            |row: &Self| row.stage.name(),
            |row, word| Stage::from_name(word).map(|stage| row.stage = stage).is_some(),
        );
        vec![
            column!(U32, replicate, ""),
            Column { name: "stage", unit: "", field: stage },
            column!(F64, generation, "generations"),
            column!(U32, site, ""),
            column!(U32, cell, ""),
            column!(F32, x_um, "um"),
            column!(F32, y_um, "um"),
            column!(F32, z_um, "um"),
            column!(F32, soma_share, "1"),
            column!(F32, income_eu_per_h, "eu/h"),
            column!(F32, support, "1"),
            column!(Bool, exposed, ""),
            column!(I8, label, ""),
        ]
    }
}
