//! A body as a graph: which cells touch, and how many empty sites each cell touches.

/// Neighbour sites of a lattice site.
pub const SITES_AROUND: usize = 12;

/// Who touches whom in a body, in the order of cells.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct BodyGraph {
    /// Touching cells of all cells, one cell's after the other's.
    links: Vec<u32>,
    /// Where each cell's touching cells begin in `links`; one entry more than cells.
    starts: Vec<u32>,
    empty: Vec<u8>,
    open: Vec<u8>,
}

impl BodyGraph {
    /// A body without cells, to which [`Self::push`] adds.
    #[must_use]
    pub fn with_capacity(cells: usize) -> Self {
        let mut starts = Vec::with_capacity(cells + 1);
        starts.push(0);
        Self {
            links: Vec::with_capacity(SITES_AROUND * cells),
            starts,
            empty: Vec::with_capacity(cells),
            open: Vec::with_capacity(cells),
        }
    }

    /// Forgets all cells, to be filled anew in the same memory.
    pub fn clear(&mut self) {
        self.links.clear();
        self.starts.clear();
        self.starts.push(0);
        self.empty.clear();
        self.open.clear();
    }

    /// Adds the next cell: the numbers of the cells it touches, the empty sites it touches, and those
    /// of them that the surrounding water reaches.
    pub fn push(&mut self, touching: impl IntoIterator<Item = u32>, empty: u8, open: u8) {
        self.links.extend(touching);
        self.starts.push(self.links.len() as u32);
        self.empty.push(empty);
        self.open.push(open);
    }

    /// Number of cells.
    #[must_use]
    pub const fn cells(&self) -> usize {
        self.empty.len()
    }

    /// Cells that touch `cell`.
    #[must_use]
    pub fn touching(&self, cell: usize) -> &[u32] {
        &self.links[self.starts[cell] as usize..self.starts[cell + 1] as usize]
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
