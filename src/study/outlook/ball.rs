//! A compact body as a ball of the face-centred cubic lattice.

use std::collections::BTreeSet;

/// A lattice site: coordinates of even sum, in units of `d / sqrt 2`.
type Site = [i32; 3];

/// Share of the `cells` sites nearest a centre site that have no empty neighbour site, in
/// [0, 1]. Of sites equally far the first in order of coordinates are taken: bodies that grow
/// fill their outermost shell at random, so their share may differ by a few cells.
pub(super) fn interior_share(cells: usize) -> f64 {
    let body: BTreeSet<Site> = nearest_sites(cells).into_iter().collect();
    let inside = body.iter().filter(|site| neighbours(**site).all(|near| body.contains(&near)));
    if cells == 0 { 0.0 } else { inside.count() as f64 / cells as f64 }
}

fn nearest_sites(cells: usize) -> Vec<Site> {
    // A ball of radius R holds about (4 pi/3) R^3 / 2 sites; two more make sure.
    let radius = libm::cbrt(cells as f64 * 1.5 / std::f64::consts::PI) + 2.0;
    #[expect(clippy::cast_possible_truncation, reason = "at most some hundred")]
    let reach = radius as i32 + 1;
    let mut sites: Vec<(i32, Site)> = Vec::new();
    for x in -reach..=reach {
        for y in -reach..=reach {
            for z in (-reach..=reach).filter(|z| (x + y + z) % 2 == 0) {
                sites.push((x * x + y * y + z * z, [x, y, z]));
            }
        }
    }
    sites.sort_unstable();
    sites.into_iter().map(|(_, site)| site).take(cells).collect()
}

fn neighbours([x, y, z]: Site) -> impl Iterator<Item = Site> {
    const STEPS: [(i32, i32); 4] = [(1, 1), (1, -1), (-1, 1), (-1, -1)];
    STEPS
        .into_iter()
        .flat_map(move |(a, b)| [[x + a, y + b, z], [x + a, y, z + b], [x, y + a, z + b]])
}
