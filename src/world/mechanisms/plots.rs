//! Where growth puts what it makes: the columns of cells, and one site's rows of them.

use crate::tissue::{Arrangement, Development};
use crate::world::components::{DivisionLabel, Exposed, GenotypeId, Place, Reserve};

/// The columns of cells that growth writes.
pub(super) struct CellColumns<'w> {
    pub(super) places: &'w mut [Place],
    pub(super) labels: &'w mut [DivisionLabel],
    pub(super) reserves: &'w mut [Reserve],
    pub(super) genotypes: &'w mut [GenotypeId],
    pub(super) exposed: &'w mut [Exposed],
}

/// The rows of one site's colony.
pub(super) struct Plot<'p, 'w> {
    pub(super) columns: &'p mut CellColumns<'w>,
    /// The first of them.
    pub(super) first: usize,
    pub(super) site: u32,
}

impl Plot<'_, '_> {
    /// Writes a body that grew here.
    pub(super) fn house(&mut self, body: &Arrangement<'_>) {
        let rows = self.first..self.first + body.places.len();
        for (row, place) in self.columns.places[rows].iter_mut().zip(body.places) {
            *row = Place(*place);
        }
        self.write_cells(body.labels, body.reserves_eu);
    }

    /// Writes which cells lie at the surface.
    pub(super) fn mark_surface(&mut self, surface: impl Iterator<Item = bool>) {
        for (row, exposed) in self.columns.exposed[self.first..].iter_mut().zip(surface) {
            *row = Exposed(exposed);
        }
    }

    /// Writes the final body of a shared development.
    pub(super) fn furnish(&mut self, development: &Development) {
        let places = (0..development.labels.len() as u32).map(Place);
        for (row, place) in self.columns.places[self.first..].iter_mut().zip(places) {
            *row = place;
        }
        self.write_cells(&development.labels, &development.reserves_eu);
        self.mark_surface(development.graph.empty().iter().map(|empty| *empty > 0));
    }

    fn write_cells(&mut self, labels: &[i8], reserves_eu: &[f32]) {
        let rows = self.first..self.first + labels.len();
        for (row, label) in self.columns.labels[rows.clone()].iter_mut().zip(labels) {
            *row = DivisionLabel(*label);
        }
        for (row, reserve) in self.columns.reserves[rows.clone()].iter_mut().zip(reserves_eu) {
            *row = Reserve(*reserve);
        }
        self.columns.genotypes[rows].fill(GenotypeId(self.site));
    }
}
