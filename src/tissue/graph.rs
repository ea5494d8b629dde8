//! A body as a graph: which cells touch, and how many empty sites each cell touches.

/// Neighbour sites of a lattice site.
pub const SITES_AROUND: usize = 12;

/// Stands in a row of [`BodyGraph::rows`] for a neighbour site without a cell.
pub(super) const NOBODY: u32 = u32::MAX;

/// Who touches whom in a body, in the order of cells.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct BodyGraph {
    /// Touching cells of each cell, filled up with [`NOBODY`]: rows of one length let the solver go
    /// through them without a branch.
    rows: Vec<[u32; SITES_AROUND]>,
    contacts: Vec<u8>,
    empty: Vec<u8>,
    open: Vec<u8>,
}

impl BodyGraph {
    /// A body without cells, to which [`Self::push`] adds.
    #[must_use]
    pub fn with_capacity(cells: usize) -> Self {
        Self {
            rows: Vec::with_capacity(cells),
            contacts: Vec::with_capacity(cells),
            empty: Vec::with_capacity(cells),
            open: Vec::with_capacity(cells),
        }
    }

    /// Forgets all cells, to be filled anew in the same memory.
    pub fn clear(&mut self) {
        self.rows.clear();
        self.contacts.clear();
        self.empty.clear();
        self.open.clear();
    }

    /// Adds the next cell: the numbers of the cells it touches (12 at most, any more are left out), the
    /// empty sites it touches, and those of them that the surrounding water reaches.
    pub fn push(&mut self, touching: impl IntoIterator<Item = u32>, empty: u8, open: u8) {
        let mut row = [NOBODY; SITES_AROUND];
        let mut contacts = 0;
        for (place, cell) in row.iter_mut().zip(touching) {
            *place = cell;
            contacts += 1;
        }
        self.rows.push(row);
        self.contacts.push(contacts);
        self.empty.push(empty);
        self.open.push(open);
    }

    /// Number of cells.
    #[must_use]
    pub const fn cells(&self) -> usize {
        self.rows.len()
    }

    /// Cells that touch `cell`.
    #[must_use]
    pub fn touching(&self, cell: usize) -> &[u32] {
        &self.rows[cell][..usize::from(self.contacts[cell])]
    }

    /// Number of cells that touch each cell.
    #[must_use]
    pub fn contacts(&self) -> &[u8] {
        &self.contacts
    }

    /// How many cells touch another.
    #[must_use]
    pub fn cells_in_contact(&self) -> usize {
        self.contacts.iter().filter(|contacts| **contacts > 0).count()
    }

    /// Touching cells of each cell, filled up with [`NOBODY`].
    pub(super) fn rows(&self) -> &[[u32; SITES_AROUND]] {
        &self.rows
    }

    /// Empty sites next to each cell; a cell is exposed when it has any.
    #[must_use]
    pub fn empty(&self) -> &[u8] {
        &self.empty
    }

    /// Empty sites next to each cell that the surrounding water reaches: through them the body
    /// exchanges with the bath. An enclosed hole, or the matrix inside a shell, is none of them.
    #[must_use]
    pub fn open(&self) -> &[u8] {
        &self.open
    }
}
