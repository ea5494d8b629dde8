//! Surface and interior: a cell is exposed when one of its 12 neighbour sites is empty.

use super::lattice::Lattice;

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Verdict {
    /// All neighbours lie in shells that every adult body fills.
    Interior,
    /// A neighbour lies beyond every adult body.
    Surface,
    /// A neighbour lies in the outermost shell, which bodies fill differently.
    Open,
}

/// Which places of a compact body of a given size are surface, looked up where that is certain.
#[derive(Debug, Clone)]
pub struct ExposureMap {
    verdicts: Vec<Verdict>,
}

impl ExposureMap {
    /// The map for compact bodies of exactly `cells` cells on `lattice`.
    #[must_use]
    pub fn of_compact_body(lattice: &Lattice, cells: usize) -> Self {
        let full = lattice.shell_ends().iter().rev().find(|end| **end <= cells).copied();
        let certain = full.unwrap_or(0);
        let mut filled = vec![0_u8; lattice.grid_len()];
        for (rank, &place) in lattice.order().iter().enumerate() {
            filled[place as usize] = if rank < certain { 2 } else { u8::from(certain < cells) };
        }
        let mut verdicts = vec![Verdict::Surface; lattice.grid_len()];
        for &place in lattice.order() {
            let least = lattice.neighbours(place).map(|next| filled[next as usize]).min();
            verdicts[place as usize] = match least {
                Some(2) => Verdict::Interior,
                Some(1) => Verdict::Open,
                _ => Verdict::Surface,
            };
        }
        Self { verdicts }
    }

    /// Whether the cell at `place` is exposed, `occupied` telling which places hold cells.
    pub fn exposed(
        &self,
        lattice: &Lattice,
        place: u32,
        mut occupied: impl FnMut(u32) -> bool,
    ) -> bool {
        match self.verdicts[place as usize] {
            Verdict::Interior => false,
            Verdict::Surface => true,
            Verdict::Open => lattice.neighbours(place).any(|next| !occupied(next)),
        }
    }
}
