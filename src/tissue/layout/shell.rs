//! A shell: compact growth, then at adulthood the cells move to the sites nearest a sphere's surface.
//!
//! The sphere has the radius `R = d sqrt(n sqrt(3) / (8 pi))`, on whose surface each of the n cells
//! finds the area `sqrt(3) / 2 d^2` of hexagonal close packing. The n sites are those with the least
//! `| |r| - R |`, ties in lexical order of coordinates.
//!
//! Cells keep their neighbours near: sorted along z (then by distance from that axis) the clump's cells
//! fill the layers of the sphere's sites from bottom to top, each layer in order of azimuth.

use std::f64::consts::{PI, SQRT_2};

use rand::Rng;

use super::super::graph::{BodyGraph, SITES_AROUND};
use super::super::lattice::NEIGHBOURS;
use super::clump::Clump;
use super::{BATH, Concentrations, VACANT};

/// Sites within so many diameters of the sphere are enough for all cells.
const BAND_DIAMETERS: f64 = 1.5;

type Site = [i32; 3];

#[derive(Debug, Clone)]
pub(in crate::tissue) struct Shell {
    clump: Clump,
    /// The sites of the last adult, which most often serve for the next.
    sites: Vec<Site>,
    adult: Option<Adult>,
}

/// Cells on their sites of the sphere.
#[derive(Debug, Clone)]
struct Adult {
    radius: f64,
    sites: Vec<Site>,
    fields: Concentrations,
}

impl Shell {
    pub(super) fn of(most: usize) -> Self {
        Self { clump: Clump::of(most), sites: Vec::new(), adult: None }
    }

    pub(super) fn found(&mut self, cells: usize, rng: &mut impl Rng) {
        self.adult = None;
        self.clump.found(cells, rng);
    }

    pub(super) fn divide(&mut self, mother: u32, rng: &mut impl Rng) -> bool {
        self.adult.is_none() && self.clump.divide(mother, rng)
    }

    /// A gap that a death leaves on the sphere stays.
    pub(super) fn bury(&mut self, numbers: &[u32]) {
        let Some(adult) = &mut self.adult else { return self.clump.bury(numbers) };
        let kept: Vec<usize> = (0..numbers.len()).filter(|cell| numbers[*cell] != VACANT).collect();
        adult.sites = kept.iter().map(|cell| adult.sites[*cell]).collect();
        for field in &mut adult.fields {
            *field = kept.iter().map(|cell| field[*cell]).collect();
        }
    }

    pub(super) fn mature(&mut self) {
        let here = self.clump.coordinates();
        if self.sites.len() != here.len() {
            self.sites = shell_sites(here.len());
        }
        let mut fields = BATH.map(|_| Vec::new());
        self.clump.recall(&mut fields);
        let sites = assign(&here, &self.sites);
        self.adult = Some(Adult { radius: shell_radius_diameters(here.len()), sites, fields });
    }

    pub(super) fn describe(&mut self, graph: &mut BodyGraph) {
        match &self.adult {
            Some(adult) => describe_shell(graph, &adult.sites, adult.radius),
            None => self.clump.describe(graph),
        }
    }

    pub(super) fn recall(&self, fields: &mut Concentrations) {
        match &self.adult {
            Some(adult) => fields.clone_from(&adult.fields),
            None => self.clump.recall(fields),
        }
    }

    pub(super) fn remember(&mut self, fields: &Concentrations) {
        match &mut self.adult {
            Some(adult) => adult.fields.clone_from(fields),
            None => self.clump.remember(fields),
        }
    }

    pub(super) fn coordinates(&self) -> Vec<Site> {
        self.adult.as_ref().map_or_else(|| self.clump.coordinates(), |adult| adult.sites.clone())
    }
}

/// Radius of the sphere on which `cells` cells lie, cell diameters.
pub(super) fn shell_radius_diameters(cells: usize) -> f64 {
    (cells as f64 * 3.0_f64.sqrt() / (8.0 * PI)).sqrt()
}

/// The graph of an adult shell of `cells` cells, in order of sites.
pub(in crate::tissue) fn shell_graph(cells: usize) -> BodyGraph {
    let mut graph = BodyGraph::with_capacity(cells);
    describe_shell(&mut graph, &shell_sites(cells), shell_radius_diameters(cells));
    graph
}

/// Distance of a site from the centre, cell diameters.
fn distance(site: Site) -> f64 {
    f64::from(site.iter().map(|at| at * at).sum::<i32>()).sqrt() / SQRT_2
}

/// The sites of an adult of so many cells by layer, each layer in order of azimuth.
pub(super) fn shell_sites(cells: usize) -> Vec<Site> {
    let radius = shell_radius_diameters(cells);
    let mut sites: Vec<(f64, Site)> = band(radius);
    sites.sort_unstable_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
    let mut sites: Vec<Site> = sites.into_iter().take(cells).map(|(_, site)| site).collect();
    sites.sort_unstable_by(|a, b| {
        a[2].cmp(&b[2]).then(azimuth(*a).total_cmp(&azimuth(*b))).then(a.cmp(b))
    });
    sites
}

/// Lattice sites near a sphere with their distance from its surface.
fn band(radius: f64) -> Vec<(f64, Site)> {
    let reach = ((radius + BAND_DIAMETERS) * SQRT_2) as i32;
    let mut sites = Vec::new();
    for x in -reach..=reach {
        for y in -reach..=reach {
            for z in (-reach..=reach).filter(|z| (x + y + z) % 2 == 0) {
                let off = (distance([x, y, z]) - radius).abs();
                if off <= BAND_DIAMETERS {
                    sites.push((off, [x, y, z]));
                }
            }
        }
    }
    sites
}

fn azimuth([x, y, _]: Site) -> f64 {
    libm::atan2(f64::from(y), f64::from(x))
}

/// A site for each of the clump's cells, of as many `sites` in order of layers.
fn assign(cells: &[Site], sites: &[Site]) -> Vec<Site> {
    let mut order: Vec<usize> = (0..cells.len()).collect();
    order.sort_by_key(|cell| {
        let [x, y, z] = cells[*cell];
        (z, x * x + y * y)
    });
    let mut rest = &mut order[..];
    for layer in sites.chunk_by(|a, b| a[2] == b[2]) {
        let (bottom, above) = std::mem::take(&mut rest).split_at_mut(layer.len());
        bottom.sort_by(|a, b| azimuth(cells[*a]).total_cmp(&azimuth(cells[*b])));
        rest = above;
    }
    let mut assigned = vec![[0; 3]; cells.len()];
    for (cell, site) in order.into_iter().zip(sites) {
        assigned[cell] = *site;
    }
    assigned
}

/// Empty sites within the sphere are matrix: the water does not reach them.
fn describe_shell(graph: &mut BodyGraph, sites: &[Site], radius: f64) {
    let mut index: Vec<(Site, u32)> = sites.iter().copied().zip(0..).collect();
    index.sort_unstable();
    for site in sites {
        let mut touching = Vec::with_capacity(SITES_AROUND);
        let mut open = 0;
        for step in NEIGHBOURS {
            let next = [0, 1, 2].map(|axis| site[axis] + step[axis]);
            match index.binary_search_by(|(other, _)| other.cmp(&next)) {
                Ok(at) => touching.push(index[at].1),
                Err(_) => open += u8::from(distance(next) > radius),
            }
        }
        let empty = (SITES_AROUND - touching.len()) as u8;
        graph.push(touching, empty, open);
    }
}
