//! Body plans: how a daughter cell is placed.

/// How a daughter cell is placed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Plan {
    /// Next to its mother, pushing cells towards the vacant site nearest the body's centre: the body
    /// stays compact.
    Clump,
    /// Next to its mother in a line, shifting the rest: every cell is surface.
    Chain,
    /// Only on an empty neighbour site of its mother; a mother without one cannot divide.
    Tree,
    /// Compact growth; at adulthood the cells lie on the lattice sites nearest a sphere's surface:
    /// every cell is surface.
    Shell,
}
