//! What a body is made of, as far as a cell can read it: classes of cells by label and exposure.

/// What a cell reads of its descent and its place.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct CellKind {
    /// Label of the cell's last division: mother -1, daughter +1, founder 0.
    pub label: i8,
    /// Whether the cell lies at the surface.
    pub exposed: bool,
}

/// How many cells of each kind an adult body has.
#[derive(Debug, Clone, PartialEq)]
pub struct Composition {
    classes: Vec<(CellKind, f64)>,
    endless: bool,
}

impl Composition {
    /// A body with so many cells of each kind. Kinds may be listed repeatedly; counts are finite
    /// and 0 or more (others are left out). They need not be whole: nodes of a quadrature over
    /// random compositions are not.
    #[must_use]
    pub fn of(cells: impl IntoIterator<Item = (CellKind, f64)>) -> Self {
        let mut classes: Vec<(CellKind, f64)> = Vec::new();
        for (kind, count) in cells {
            if !(count > 0.0 && count.is_finite()) {
                continue;
            }
            match classes.iter_mut().find(|(known, _)| *known == kind) {
                Some((_, sum)) => *sum += count,
                None => classes.push((kind, count)),
            }
        }
        classes.sort_unstable_by_key(|(kind, _)| *kind);
        Self { classes, endless: false }
    }

    /// A body of `cells` founder cells at the surface.
    #[must_use]
    pub fn uniform(cells: u64) -> Self {
        Self::of([(CellKind { label: 0, exposed: true }, cells as f64)])
    }

    /// The limit of bodies with these proportions and ever more cells, in which luck averages
    /// out; expected propagules are then per cell of the body (counts sum to the cells meant).
    #[must_use]
    pub fn endless(proportions: impl IntoIterator<Item = (CellKind, f64)>) -> Self {
        Self { endless: true, ..Self::of(proportions) }
    }

    /// The kinds of cells and the number of each, in the order of kinds.
    #[must_use]
    pub fn classes(&self) -> &[(CellKind, f64)] {
        &self.classes
    }

    /// Whether this is the limit of large bodies.
    #[must_use]
    pub const fn is_endless(&self) -> bool {
        self.endless
    }

    /// Number of cells.
    #[must_use]
    pub fn cells(&self) -> f64 {
        self.classes.iter().map(|(_, count)| count).sum()
    }

    /// Mean over cells of a function of their kind; 0 for a body without cells.
    #[must_use]
    pub fn mean(&self, of: impl Fn(CellKind) -> f64) -> f64 {
        let cells = self.cells();
        if cells > 0.0 {
            self.classes.iter().map(|(kind, count)| of(*kind) * count).sum::<f64>() / cells
        } else {
            0.0
        }
    }

    /// The body as it looks to cells that do not read labels, or exposure.
    #[must_use]
    pub fn seen(&self, labels: bool, exposure: bool) -> Self {
        let blur = |kind: CellKind| CellKind {
            label: if labels { kind.label } else { 0 },
            exposed: kind.exposed || !exposure,
        };
        let cells = self.classes.iter().map(|(kind, count)| (blur(*kind), *count));
        Self { endless: self.endless, ..Self::of(cells) }
    }
}

/// A random body: compositions with their probabilities.
pub type Compositions = Vec<(f64, Composition)>;

/// The same random body with like compositions joined, impossible ones left out, and
/// probabilities summing to 1.
#[must_use]
pub fn joined(compositions: impl IntoIterator<Item = (f64, Composition)>) -> Compositions {
    let mut joined: Compositions = Vec::new();
    for (weight, body) in compositions {
        if !(weight > 0.0 && weight.is_finite()) || body.classes.is_empty() {
            continue;
        }
        match joined.iter_mut().find(|(_, known)| *known == body) {
            Some((sum, _)) => *sum += weight,
            None => joined.push((weight, body)),
        }
    }
    let total: f64 = joined.iter().map(|(weight, _)| weight).sum();
    for (weight, _) in &mut joined {
        *weight /= total;
    }
    joined
}

/// The body with the mean numbers of cells of each kind.
pub(super) fn average(compositions: &[(f64, Composition)]) -> Composition {
    let cells = compositions.iter().flat_map(|(weight, body)| {
        body.classes.iter().map(move |(kind, count)| (*kind, weight * count))
    });
    let endless = compositions.iter().all(|(_, body)| body.endless);
    Composition { endless, ..Composition::of(cells) }
}

#[cfg(test)]
#[expect(clippy::float_cmp, reason = "values that are exact by construction")]
mod tests {
    use super::*;

    const SURFACE: CellKind = CellKind { label: 1, exposed: true };
    const INSIDE: CellKind = CellKind { label: -1, exposed: false };

    #[test]
    fn kinds_are_counted_once_and_in_order() {
        let body = Composition::of([(SURFACE, 2.0), (INSIDE, 3.0), (SURFACE, 1.0)]);
        assert_eq!(body.classes(), [(INSIDE, 3.0), (SURFACE, 3.0)]);
        assert_eq!(body.mean(|kind| f64::from(kind.label)), 0.0);
    }

    #[test]
    fn what_cells_do_not_read_is_joined() {
        let body = Composition::of([(SURFACE, 2.0), (INSIDE, 3.0)]);
        assert_eq!(body.seen(false, false), Composition::uniform(5));
        let pair = joined([(1.0, body.seen(false, false)), (3.0, Composition::uniform(5))]);
        assert_eq!(pair, [(1.0, Composition::uniform(5))]);
    }
}
