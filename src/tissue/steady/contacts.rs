//! Sums over touching cells, the work that all solving consists of.

use crate::tissue::graph::{BodyGraph, SITES_AROUND};

/// Entries of a field that an index of 16 bits can point to: a field of so many entries is read
/// without asking whether the index is good, which takes a third of the time away.
const PAGE: usize = 1 << 16;

/// Touching cells of each cell. Rows are filled up with the number of cells, at which a field holds 0.
#[derive(Debug, Clone, Default)]
pub(super) struct Contacts {
    cells: usize,
    /// Rows of a body of less than a page.
    small: Vec<[u16; SITES_AROUND]>,
    /// Rows of a larger body.
    large: Vec<[u32; SITES_AROUND]>,
}

impl Contacts {
    /// Takes over a body's graph.
    pub(super) fn read(&mut self, graph: &BodyGraph) {
        self.cells = graph.cells();
        let nobody = self.cells as u32;
        self.small.clear();
        self.large.clear();
        let rows = graph.rows().iter();
        if self.cells < PAGE {
            self.small.extend(rows.map(|row| row.map(|cell| cell.min(nobody) as u16)));
        } else {
            self.large.extend(rows.map(|row| row.map(|cell| cell.min(nobody))));
        }
    }

    /// Number of cells.
    pub(super) const fn cells(&self) -> usize {
        self.cells
    }

    /// Makes room for a field, and sets it to 0 where it stands for nobody.
    pub(super) fn fit(&self, field: &mut Vec<f64>) {
        let room = (self.cells + 1).max(PAGE);
        if field.len() < room {
            *field = vec![0.0; room];
        }
        field[self.cells] = 0.0;
    }

    /// Sum of a fitted field over the cells that touch one.
    pub(super) fn sum(&self, cell: usize, field: &[f64]) -> f64 {
        match field.first_chunk::<PAGE>() {
            Some(page) if self.cells < PAGE => {
                sum(&self.small[cell], |index| page[usize::from(index)])
            }
            _ => sum(&self.large[cell], |index| field[index as usize]),
        }
    }

    /// Sums of a fitted field over the cells that touch each.
    pub(super) fn sums(&self, field: &[f64], sums: &mut [f64]) {
        match field.first_chunk::<PAGE>() {
            Some(page) if self.cells < PAGE => {
                for (out, row) in sums.iter_mut().zip(&self.small) {
                    *out = sum(row, |index| page[usize::from(index)]);
                }
            }
            _ => {
                for (out, row) in sums.iter_mut().zip(&self.large) {
                    *out = sum(row, |index| field[index as usize]);
                }
            }
        }
    }

    /// `image_i = diagonal_i field_i - sum_j field_j`, j the cells that touch i; and the product of
    /// field and image.
    pub(super) fn image(&self, diagonal: &[f64], field: &[f64], image: &mut [f64]) -> f64 {
        match field.first_chunk::<PAGE>() {
            Some(page) if self.cells < PAGE => {
                let at = |index| page[usize::from(index)];
                image_of(&self.small, at, diagonal, field, image)
            }
            _ => image_of(&self.large, |index| field[index as usize], diagonal, field, image),
        }
    }
}

#[inline]
fn image_of<I: Copy>(
    rows: &[[I; SITES_AROUND]],
    at: impl Fn(I) -> f64 + Copy,
    diagonal: &[f64],
    field: &[f64],
    image: &mut [f64],
) -> f64 {
    let mut product = 0.0;
    for (((image, row), diagonal), field) in image.iter_mut().zip(rows).zip(diagonal).zip(field) {
        *image = diagonal * field - sum(row, at);
        product += *image * field;
    }
    product
}

/// Sum over a row, pair by pair so that additions need not wait for each other.
#[inline]
fn sum<I: Copy>(row: &[I; SITES_AROUND], at: impl Fn(I) -> f64) -> f64 {
    let pair = |k: usize| at(row[2 * k]) + at(row[2 * k + 1]);
    (pair(0) + pair(1)) + (pair(2) + pair(3)) + (pair(4) + pair(5))
}
