//! Where propagules land: on any site of a mixed habitat, around their parents on a torus.
//!
//! Colonies that died within the tick count among the parents, by what they released before.

use rand::seq::index;
use rand::{Rng, RngExt};

use crate::scenario::settings::{Habitat, Layout};
use crate::tissue::standard_normal;
use crate::world::dispersal::Kernel;
use crate::world::draws::{exponential, geometric};
use crate::world::resources::{Released, Vacancies};

/// A propagule that is the first to land on an empty site.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct FirstComer {
    /// Where it landed.
    pub site: u32,
    /// Site of its parent.
    pub parent: usize,
}

/// How propagules find empty sites, and working memory for it.
#[derive(Debug)]
pub struct Landing {
    /// None where every site is as likely as any other.
    kernel: Option<Kernel>,
    crowd: Crowd,
}

impl Landing {
    /// Landing in a habitat.
    #[must_use]
    pub fn within(habitat: &Habitat) -> Self {
        match habitat.layout {
            Layout::Mixed => Self::with(None),
            Layout::Torus { dispersal_sites } => {
                Self::with(Kernel::new(habitat.sites, dispersal_sites))
            }
        }
    }

    /// Landing by `kernel`; none: on any site.
    #[must_use]
    pub fn with(kernel: Option<Kernel>) -> Self {
        Self { kernel, crowd: Crowd::default() }
    }

    /// The propagules of a tick that are first to land on an empty site, in site order; their sites
    /// are vacant no longer.
    pub fn first_comers(
        &mut self,
        released: &Released,
        vacancies: &mut Vacancies,
        rng: &mut impl Rng,
    ) -> Vec<FirstComer> {
        if released.total == 0 || vacancies.0.is_empty() {
            return Vec::new();
        }
        match &self.kernel {
            None => mixed(released, vacancies, rng),
            Some(kernel) => {
                let (sites, propagules) = (vacancies.0.len() as f64, released.total as f64);
                let scanned = sites * kernel.window() as f64;
                let taken = if propagules * SCANS_PER_THROW <= scanned {
                    throw(kernel, released, &vacancies.0, rng)
                } else {
                    self.crowd.land(kernel, released, &vacancies.0, rng)
                };
                let mut settled = taken.iter().map(|comer| comer.site).peekable();
                vacancies.0.retain(|site| settled.next_if_eq(site).is_none());
                taken
            }
        }
    }
}

/// First comers in a mixed habitat.
///
/// Every propagule lands on a random site, and settles it if it is empty; who comes second to a site
/// is lost. They come in random order, so those that settle are a random sample without replacement.
fn mixed(released: &Released, vacancies: &mut Vacancies, rng: &mut impl Rng) -> Vec<FirstComer> {
    let taken = take_sites(released.total, released.by_site.len(), vacancies, rng);
    if taken.is_empty() {
        return Vec::new();
    }
    let parents = parents(taken.len(), released, rng);
    taken.into_iter().zip(parents).map(|(site, parent)| FirstComer { site, parent }).collect()
}

/// The empty sites that are settled, which are vacant no longer.
///
/// Propagules land one after the other, each on a random one of N sites. While f sites are free, the
/// next to settle is the G-th to come, G geometric with chance f/N: only settlers are drawn, not the
/// billions that a long tick may bring.
fn take_sites(
    propagules: u64,
    sites: usize,
    vacancies: &mut Vacancies,
    rng: &mut impl Rng,
) -> Vec<u32> {
    let mut free = vacancies.0.len();
    let mut left = propagules as f64;
    while free > 0 {
        left -= geometric(free as f64 / sites as f64, rng);
        if left < 0.0 {
            break;
        }
        let landed = rng.random_range(0..free);
        free -= 1;
        vacancies.0.swap(landed, free);
    }
    let taken = vacancies.0.split_off(free);
    if !taken.is_empty() {
        vacancies.0.sort_unstable();
    }
    taken
}

/// The parents of `count` propagules drawn from all that were released, in site order; the draw
/// does not depend on who lands where.
fn parents(count: usize, released: &Released, rng: &mut impl Rng) -> Vec<usize> {
    let mut propagules = index::sample(rng, released.total as usize, count).into_vec();
    propagules.sort_unstable();
    let mut counts = (0..).zip(&released.by_site);
    let (mut parent, mut passed) = (0, 0);
    let parent_of = |propagule: usize| {
        while passed <= propagule {
            let Some((site, &count)) = counts.next() else { break };
            (parent, passed) = (site, passed + count as usize);
        }
        parent
    };
    propagules.into_iter().map(parent_of).collect()
}

/// Parents that can be looked at in the time that it takes to throw one propagule.
const SCANS_PER_THROW: f64 = 8.0;

/// First comers on a torus, where propagules are few: throws each of them.
fn throw(
    kernel: &Kernel,
    released: &Released,
    vacant: &[u32],
    rng: &mut impl Rng,
) -> Vec<FirstComer> {
    let mut lots = vec![Lot::default(); vacant.len()];
    let side = kernel.side();
    for (parent, count) in released.by_site.iter().enumerate().filter(|(_, count)| **count > 0) {
        for _ in 0..*count {
            let row = displaced(parent / side, kernel, rng);
            let column = displaced(parent % side, kernel, rng);
            if let Ok(place) = vacant.binary_search(&((row * side + column) as u32)) {
                lots[place].draw(parent, rng);
            }
        }
    }
    winners(&lots, vacant)
}

/// Where a propagule lands along one axis.
fn displaced(place: usize, kernel: &Kernel, rng: &mut impl Rng) -> usize {
    let side = kernel.side() as f64;
    let landed = (place as f64 + kernel.sd_sites() * standard_normal(rng)).round();
    #[expect(clippy::cast_sign_loss, reason = "a remainder is not negative")]
    let wrapped = landed.rem_euclid(side) as usize;
    // The remainder of a tiny negative number rounds to the side itself.
    wrapped % kernel.side()
}

/// Who came first to a site: propagules land in random order, so any arrival is as likely as another.
#[derive(Debug, Clone, Copy, Default)]
struct Lot {
    arrivals: u32,
    parent: usize,
}

impl Lot {
    fn draw(&mut self, parent: usize, rng: &mut impl Rng) {
        self.arrivals = self.arrivals.saturating_add(1);
        if self.arrivals == 1 || rng.random_range(0..self.arrivals) == 0 {
            self.parent = parent;
        }
    }
}

fn winners(lots: &[Lot], vacant: &[u32]) -> Vec<FirstComer> {
    let drawn = lots.iter().zip(vacant).filter(|(lot, _)| lot.arrivals > 0);
    drawn.map(|(lot, site)| FirstComer { site: *site, parent: lot.parent }).collect()
}

/// Expected arrivals at a site above which they are not told one by one.
const MOST_ARRIVALS_TOLD: f64 = 256.0;

/// Propagules of a tick on a torus, many of them: landed site by site instead of one by one.
///
/// Of the r propagules of parent p that did not land on the empty sites v that were gone through, each
/// lands on the next one with probability `q = k_pv / (1 - sum of k_p over those)`, so that none does
/// with probability `exp(-sum_p r h)`, `h = -ln(1 - q)`. A unit-rate Poisson process along that sum
/// gives the arrivals one after the other, however many propagules pass by; the law is that of
/// landing each. Where more than 256 are expected, the site is settled, its parent is drawn in
/// proportion to `r q`, and r falls by `r q`; chances are then off by less than 1/256 of the largest q.
#[derive(Debug, Default)]
struct Crowd {
    /// Propagules of each site that have not landed yet.
    left: Vec<f64>,
    /// Share of each site's kernel that was gone through.
    passed: Vec<f64>,
    /// Parents within reach of the site at hand, with `q`.
    within_reach: Vec<(usize, f64)>,
}

impl Crowd {
    fn land(
        &mut self,
        kernel: &Kernel,
        released: &Released,
        vacant: &[u32],
        rng: &mut impl Rng,
    ) -> Vec<FirstComer> {
        self.left.clear();
        self.left.extend(released.by_site.iter().map(|count| f64::from(*count)));
        self.passed.clear();
        self.passed.resize(released.by_site.len(), 0.0);
        let lots: Vec<Lot> = vacant.iter().map(|v| self.visit(kernel, *v as usize, rng)).collect();
        winners(&lots, vacant)
    }

    /// Lets propagules land on one site.
    fn visit(&mut self, kernel: &Kernel, site: usize, rng: &mut impl Rng) -> Lot {
        self.within_reach.clear();
        let mut expected = 0.0;
        for (parent, share) in kernel.sources(site) {
            let left = self.left[parent];
            if left <= 0.0 {
                continue;
            }
            let passed = &mut self.passed[parent];
            let chance = if *passed < 1.0 { (share / (1.0 - *passed)).min(1.0) } else { 1.0 };
            *passed += share;
            if chance > 0.0 {
                expected += left * chance;
                self.within_reach.push((parent, chance));
            }
        }
        if expected > MOST_ARRIVALS_TOLD {
            self.settle_for_sure(expected, rng)
        } else {
            self.tell_arrivals(rng)
        }
    }

    fn tell_arrivals(&mut self, rng: &mut impl Rng) -> Lot {
        let mut lot = Lot::default();
        let mut wait = exponential(rng);
        for (parent, chance) in &self.within_reach {
            let mut coming = self.left[*parent];
            let hazard = -libm::log1p(-chance);
            while coming > 0.0 && wait <= coming * hazard {
                lot.draw(*parent, rng);
                self.left[*parent] -= 1.0;
                coming -= (wait / hazard).ceil().max(1.0);
                wait = exponential(rng);
            }
            if coming > 0.0 {
                wait -= coming * hazard;
            }
        }
        lot
    }

    fn settle_for_sure(&mut self, expected: f64, rng: &mut impl Rng) -> Lot {
        let mut lot = Lot { arrivals: 1, parent: self.within_reach[0].0 };
        let mut ahead = rng.random::<f64>() * expected;
        for (parent, chance) in &self.within_reach {
            let left = &mut self.left[*parent];
            if ahead >= 0.0 {
                lot.parent = *parent;
            }
            ahead -= *left * chance;
            *left -= *left * chance;
        }
        lot
    }
}

#[cfg(test)]
mod tests;
