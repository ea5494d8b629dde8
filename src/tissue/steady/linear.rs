//! Linear systems on a body, `diagonal_i x_i - sum_j x_j = b_i` with j the cells that touch i, by
//! conjugate gradients (Hestenes & Stiefel 1952).
//!
//! The matrix is symmetric, and positive definite wherever each part of the body has a cell whose
//! diagonal exceeds its number of contacts. In compact bodies division by the diagonal is enough of a
//! preconditioner. Thin bodies, and a system that has not settled after some iterations, get an
//! incomplete factorisation as well.

use super::contacts::Contacts;
use super::elimination::Elimination;
use crate::tissue::graph::BodyGraph;

/// Iterations after which a system is taken for a hard one.
const EASY: usize = 150;
/// Contacts per cell up to which a body is thin: there elimination leaves next to nothing out.
const THIN: usize = 3;
/// Iterations after which a hard one is left as it is.
const MOST: usize = 20_000;

/// Working memory of a linear system. `x` holds a start and then the solution, `residual` at the start
/// `b - A x`.
#[derive(Debug, Clone, Default)]
pub(super) struct Linear {
    pub(super) diagonal: Vec<f64>,
    pub(super) x: Vec<f64>,
    pub(super) residual: Vec<f64>,
    inverse: Vec<f64>,
    /// Where `x` goes next, filled up so that contacts can be summed.
    direction: Vec<f64>,
    image: Vec<f64>,
    precise: Vec<f64>,
    elimination: Elimination,
}

impl Linear {
    /// Iterates until `settled(size, residual, x)`, where size is the sum of squared residuals over
    /// diagonals, or approximately so. Says whether it came to that.
    pub(super) fn solve(
        &mut self,
        graph: &BodyGraph,
        contacts: &Contacts,
        mut settled: impl FnMut(f64, &[f64], &[f64]) -> bool,
    ) -> bool {
        contacts.fit(&mut self.direction);
        self.image.resize(contacts.cells(), 0.0);
        self.inverse.clear();
        self.inverse.extend(self.diagonal.iter().map(|diagonal| diagonal.recip()));
        let links: usize = graph.contacts().iter().map(|links| usize::from(*links)).sum();
        let thin = links <= THIN * graph.cells();
        (!thin && self.iterate_easy(contacts, &mut settled))
            || self.iterate_hard(graph, contacts, &mut settled)
    }

    fn iterate_easy(
        &mut self,
        contacts: &Contacts,
        settled: &mut impl FnMut(f64, &[f64], &[f64]) -> bool,
    ) -> bool {
        let n = contacts.cells();
        let Self { diagonal, x, residual, inverse, direction, image, .. } = self;
        let mut size = 0.0;
        for ((to, r), inverse) in direction[..n].iter_mut().zip(&*residual).zip(&*inverse) {
            *to = r * inverse;
            size += *to * r;
        }
        for _ in 0..EASY {
            if settled(size, residual, x) {
                return true;
            }
            let step = size / contacts.image(diagonal, direction, image);
            if !step.is_finite() {
                return false;
            }
            let before = size;
            size = 0.0;
            let along = direction[..n].iter().zip(&*image).zip(&*inverse);
            for ((x, r), ((to, image), inverse)) in x.iter_mut().zip(&mut *residual).zip(along) {
                *x += step * to;
                *r -= step * image;
                size += *r * *r * inverse;
            }
            let kept = size / before;
            for ((to, r), inverse) in direction[..n].iter_mut().zip(&*residual).zip(&*inverse) {
                *to = r * inverse + kept * *to;
            }
        }
        false
    }

    fn iterate_hard(
        &mut self,
        graph: &BodyGraph,
        contacts: &Contacts,
        settled: &mut impl FnMut(f64, &[f64], &[f64]) -> bool,
    ) -> bool {
        let n = contacts.cells();
        let Self { diagonal, x, residual, direction, image, precise, elimination, .. } = self;
        elimination.factorise(graph, diagonal);
        precise.resize(n, 0.0);
        elimination.solve(residual, precise);
        direction[..n].copy_from_slice(precise);
        let mut size = product(residual, precise);
        for _ in 0..MOST {
            if settled(size, residual, x) {
                return true;
            }
            let step = size / contacts.image(diagonal, direction, image);
            if !step.is_finite() {
                return false;
            }
            let along = direction[..n].iter().zip(&*image);
            for ((x, r), (to, image)) in x.iter_mut().zip(&mut *residual).zip(along) {
                *x += step * to;
                *r -= step * image;
            }
            elimination.solve(residual, precise);
            let before = size;
            size = product(residual, precise);
            for (to, precise) in direction[..n].iter_mut().zip(&*precise) {
                *to = precise + size / before * *to;
            }
        }
        false
    }
}

fn product(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}
