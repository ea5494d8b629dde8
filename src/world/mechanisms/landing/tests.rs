use rand::SeedableRng;
use rand_xoshiro::Xoshiro256PlusPlus;
use statrs::distribution::{ChiSquared, ContinuousCDF};

use super::*;

fn released(by_site: &[u32]) -> Released {
    let total = by_site.iter().map(|count| u64::from(*count)).sum();
    Released { by_site: by_site.to_vec(), total }
}

/// A square torus with some propagules on every site, many on a few.
fn torus(side: usize) -> Released {
    let count = |site: usize| match site % 5 {
        0 => 0,
        4 => 7,
        few => few as u32,
    };
    released(&(0..side * side).map(count).collect::<Vec<_>>())
}

/// Lands every propagule by itself, in random order, first come, first served: what the ways in the
/// program are to agree with. Shares no code with them but the normal deviate.
fn one_by_one(
    side: usize,
    sd: f64,
    released: &Released,
    vacant: &[u32],
    rng: &mut impl Rng,
) -> Vec<FirstComer> {
    let mut propagules: Vec<usize> = Vec::new();
    for (parent, count) in released.by_site.iter().enumerate() {
        propagules.extend(std::iter::repeat_n(parent, *count as usize));
    }
    for last in (1..propagules.len()).rev() {
        propagules.swap(last, rng.random_range(0..=last));
    }
    let mut owners = vec![None; side * side];
    for parent in propagules {
        let mut along = |place: usize| {
            let step = (sd * standard_normal(rng)).round() as i64;
            (place as i64 + step).rem_euclid(side as i64) as usize
        };
        let (row, column) = (along(parent / side), along(parent % side));
        let landed = row * side + column;
        if vacant.contains(&(landed as u32)) && owners[landed].is_none() {
            owners[landed] = Some(parent);
        }
    }
    let taken = owners.iter().enumerate().filter_map(|(site, owner)| Some((site, (*owner)?)));
    taken.map(|(site, parent)| FirstComer { site: site as u32, parent }).collect()
}

/// Chi-square test that two samples of outcomes, counted by kind, are of one distribution; kinds that
/// are expected fewer than 10 times are put together. Level 1e-4.
fn assert_same_distribution(what: &str, a: &[u32], b: &[u32]) {
    let total = |counts: &[u32]| counts.iter().map(|c| f64::from(*c)).sum::<f64>();
    let (all_a, all_b) = (total(a), total(b));
    let (mut chi2, mut kinds, mut rare) = (0.0, 0.0, [0.0; 2]);
    let mut add = |[x, y]: [f64; 2]| {
        let expected = (x + y) / (all_a + all_b);
        chi2 += (x - all_a * expected).powi(2) / (all_a * expected);
        chi2 += (y - all_b * expected).powi(2) / (all_b * expected);
        kinds += 1.0;
    };
    for (x, y) in a.iter().zip(b) {
        let (x, y) = (f64::from(*x), f64::from(*y));
        if x + y < 20.0 {
            rare = [rare[0] + x, rare[1] + y];
        } else {
            add([x, y]);
        }
    }
    if rare[0] + rare[1] >= 20.0 {
        add(rare);
    }
    let limit = ChiSquared::new(kinds - 1.0).expect("degrees").inverse_cdf(1.0 - 1e-4);
    assert!(chi2 < limit, "{what}: chi-square {chi2} over {limit}, {kinds} kinds");
}

/// Counts outcomes over two vacant sites: every pair of parents (or nobody) is a kind of its own, so
/// that what one site's settler leaves for the other counts too.
fn outcomes(
    sites: usize,
    vacant: [u32; 2],
    trials: u32,
    mut land: impl FnMut() -> Vec<FirstComer>,
) -> Vec<u32> {
    let mut counts = vec![0; (sites + 1) * (sites + 1)];
    for _ in 0..trials {
        let comers = land();
        let [first, second] = vacant.map(|site| {
            comers.iter().find(|comer| comer.site == site).map_or(sites, |comer| comer.parent)
        });
        counts[first * (sites + 1) + second] += 1;
    }
    counts
}

/// Both ways of landing against one that lands every propagule by itself: 40,000 ticks each, two vacant
/// sites side by side (where who settles one matters most for the other), level 1e-4 a test. Spreads reach
/// up to 1.3 sides, where landing is uniform to rounding but still goes by the kernel.
#[test]
fn first_comers_are_those_of_propagules_landed_one_by_one() {
    const TRIALS: u32 = 40_000;
    const CASES: [(usize, f64, u32); 6] =
        [(3, 0.4, 1), (4, 0.7, 1), (4, 1.5, 1), (4, 4.0, 1), (4, 5.1, 1), (3, 0.7, 12)];
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(31);
    for (side, sd, crowd) in CASES {
        let sites = side * side;
        let mut released = torus(side);
        released.by_site.iter_mut().for_each(|count| *count *= crowd);
        released.total *= u64::from(crowd);
        let vacant = [4, 5];
        let kernel = Kernel::new(sites, sd).expect("a local kernel");
        let oracle =
            outcomes(sites, vacant, TRIALS, || one_by_one(side, sd, &released, &vacant, &mut rng));
        let thrown =
            outcomes(sites, vacant, TRIALS, || throw(&kernel, &released, &vacant, &mut rng));
        assert_same_distribution(&format!("thrown, {side}, {sd}"), &thrown, &oracle);
        let mut memory = Crowd::default();
        let told =
            outcomes(sites, vacant, TRIALS, || memory.land(&kernel, &released, &vacant, &mut rng));
        assert_same_distribution(&format!("crowd, {side}, {sd}"), &told, &oracle);
    }
}

/// A lone propagule that must land on one of four vacant sites lands there, once.
#[test]
fn a_propagule_settles_once() {
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(32);
    let kernel = Kernel::new(4, 0.9).expect("a local kernel");
    let (lone, vacant) = (released(&[1, 0, 0, 0]), [0, 1, 2, 3]);
    let mut memory = Crowd::default();
    for _ in 0..1_000 {
        assert_eq!(throw(&kernel, &lone, &vacant, &mut rng).len(), 1);
        assert_eq!(memory.land(&kernel, &lone, &vacant, &mut rng).len(), 1);
    }
}

/// Billions of propagules fill every site within reach, from parents in proportion to what they send:
/// 40,000 ticks, 4.9 standard errors (false alarm about 1e-6 a parent).
#[test]
fn crowds_of_billions_land_in_no_time() {
    const TRIALS: u32 = 40_000;
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(33);
    let kernel = Kernel::new(25, 0.7).expect("a local kernel");
    let counts: Vec<u32> = (0..25).map(|site| 2_000_000_000 + 50_000_000 * site).collect();
    let crowds = released(&counts);
    let mut memory = Crowd::default();
    let mut parents = [0_u32; 25];
    for _ in 0..TRIALS {
        let comers = memory.land(&kernel, &crowds, &[12], &mut rng);
        assert_eq!(comers.len(), 1);
        parents[comers[0].parent] += 1;
    }
    let sent: Vec<(usize, f64)> = kernel
        .sources(12)
        .map(|(parent, share)| (parent, share * f64::from(counts[parent])))
        .collect();
    let all: f64 = sent.iter().map(|(_, sent)| sent).sum();
    for (parent, sent) in sent {
        let p = sent / all;
        let error = (p * (1.0 - p) / f64::from(TRIALS)).sqrt();
        let found = f64::from(parents[parent]) / f64::from(TRIALS);
        assert!((found - p).abs() <= 4.9 * error + 2e-5, "{parent}: {found} for {p}");
    }
}

#[test]
fn settled_sites_are_vacant_no_longer() {
    let mut rng = Xoshiro256PlusPlus::seed_from_u64(34);
    for crowd in [1, 1_000] {
        let mut landing = Landing::with(Kernel::new(100, 0.7));
        let mut released = torus(10);
        released.by_site.iter_mut().for_each(|count| *count *= crowd);
        released.total *= u64::from(crowd);
        let mut vacancies = Vacancies(vec![3, 17, 50, 51, 99]);
        let comers = landing.first_comers(&released, &mut vacancies, &mut rng);
        let mut all: Vec<u32> = comers.iter().map(|comer| comer.site).collect();
        assert!(all.is_sorted() && vacancies.0.is_sorted() && !all.is_empty());
        all.extend(&vacancies.0);
        all.sort_unstable();
        assert_eq!(all, [3, 17, 50, 51, 99]);
    }
}

/// A kernel far wider than the torus makes the very draws of a mixed habitat.
#[test]
fn an_endless_kernel_is_a_mixed_habitat() {
    let released = torus(10);
    let land = |mut landing: Landing| {
        let mut rng = Xoshiro256PlusPlus::seed_from_u64(35);
        let mut vacancies = Vacancies((10..90).collect());
        landing.first_comers(&released, &mut vacancies, &mut rng)
    };
    assert_eq!(land(Landing::with(Kernel::new(100, 1e6))), land(Landing::with(None)));
}
