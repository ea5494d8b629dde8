//! Relatedness on a torus: identity of lines against its recursion, and its fall with distance and with dispersal.
//!
//! Where all sites are settled and one colony at a time is replaced, two colonies x apart were last
//! changed when one of them was born; its parent was y away with probability M(y), and it kept the
//! parent's line with probability 1 - u, u = 1/N. So `Q(x) = (1 - u) sum_y M(y) Q(x - y)` for x other than
//! 0, `Q(0) = 1` (Malecot 1948; Rousset 2004). M is the kernel without the dead colony's own site, but for
//! what that released in the tick of its death.

use super::simulation_drift::run_to;
use super::simulation_support::{TICK_H, assert_agrees, mean_and_error, population, size, trials};
use super::simulation_torus::torus;
use somadawn::evolution::{Replicate, Start};
use somadawn::theory::Programme;
use somadawn::world::Population;

const SIDE: usize = 8;
const SITES: usize = SIDE * SIDE;

/// Probability that a normal deviate of that spread, rounded, lies d away from 0 on a ring of 8: by summing
/// the density over a fine grid, apart from the program's way.
fn ring(sd: f64) -> [f64; SIDE] {
    const PARTS: i32 = 2_000;
    let mut shares = [0.0; SIDE];
    let reach = (8.0 * sd).ceil() as i32 + 1;
    for d in -reach..=reach {
        for part in 0..PARTS {
            let x = f64::from(d) - 0.5 + (f64::from(part) + 0.5) / f64::from(PARTS);
            shares[d.rem_euclid(SIDE as i32) as usize] += (-0.5 * (x / sd).powi(2)).exp();
        }
    }
    let all: f64 = shares.iter().sum();
    shares.map(|share| share / all)
}

/// Identity at all displacements, by iterating the recursion until it rests.
fn identities(sd: Option<f64>) -> Vec<f64> {
    let along = sd.map_or([1.0 / SIDE as f64; SIDE], ring);
    let kernel: Vec<f64> = (0..SITES).map(|y| along[y / SIDE] * along[y % SIDE]).collect();
    // The dead released TICK_H / 2 propagules on average before they died.
    let own = 0.5 * TICK_H * kernel[0];
    let parent = |y: usize| if y == 0 { own } else { (1.0 - own) * kernel[y] / (1.0 - kernel[0]) };
    let parents: Vec<f64> = (0..SITES).map(parent).collect();
    let kept = 1.0 - 1.0 / SITES as f64;
    let apart = |x: usize, y: usize| {
        let along = |x: usize, y: usize| (x + SIDE - y) % SIDE;
        along(x / SIDE, y / SIDE) * SIDE + along(x % SIDE, y % SIDE)
    };
    let mut identity = vec![1.0; SITES];
    for _ in 0..4_000 {
        let next = |x: usize| {
            let sum: f64 = (0..SITES).map(|y| parents[y] * identity[apart(x, y)]).sum();
            if x == 0 { 1.0 } else { kept * sum }
        };
        identity = (0..SITES).map(next).collect();
    }
    identity
}

/// Shares of identical pairs 1, 2, 3 and 4 sites apart, and of all pairs; pairs with an empty site, of
/// which there is hardly ever one, are left out.
fn shares(population: &mut Population) -> [f64; 5] {
    let lines: Vec<Option<u64>> = population.lines().collect();
    let share = |are_apart: &dyn Fn(usize, usize) -> bool| {
        let (mut pairs, mut alike) = (0.0, 0.0);
        for a in 0..SITES {
            for b in (0..a).filter(|b| are_apart(a, *b)) {
                if let (Some(a), Some(b)) = (lines[a], lines[b]) {
                    pairs += 1.0;
                    alike += f64::from(u8::from(a == b));
                }
            }
        }
        alike / pairs
    };
    let straight = |a: usize, b: usize, d: usize| {
        let along = |a: usize, b: usize| a.abs_diff(b).min(SIDE - a.abs_diff(b));
        let steps = [along(a / SIDE, b / SIDE), along(a % SIDE, b % SIDE)];
        steps == [d, 0] || steps == [0, d]
    };
    let [one, two, three, four] = [1, 2, 3, 4].map(|d| share(&|a, b| straight(a, b, d)));
    [one, two, three, four, share(&|_, _| true)]
}

/// Means over 16 samples half of N generations apart, from 3 N generations on: identity relaxes within N/4.
fn mean_shares(sd: f64, seed: u64) -> [f64; 5] {
    const SAMPLES: u32 = 16;
    let mut population = population(&torus(SITES, sd), seed, |_| 0.0);
    let mut sums = [0.0; 5];
    for sample in 0..SAMPLES {
        run_to(&mut population, (3.0 + 0.5 * f64::from(sample)) * SITES as f64);
        for (sum, share) in sums.iter_mut().zip(shares(&mut population)) {
            *sum += share / f64::from(SAMPLES);
        }
    }
    sums
}

/// Measured identity against the recursion; without end, against `(1 - u) / (1 + u (N - 2))`, a half.
#[test]
fn identity_of_lines_is_as_its_recursion_says() {
    for (seed, sd) in [(221, Some(0.7)), (222, Some(1.5)), (223, None)] {
        let found = trials(seed, size(16, 400), |seed| mean_shares(sd.unwrap_or(1e6), seed));
        let identity = identities(sd);
        let all = (identity.iter().sum::<f64>() - 1.0) / (SITES as f64 - 1.0);
        if sd.is_none() {
            assert!((all - 0.5).abs() < 1e-3, "a half, but for the dead's own site: {all}");
        }
        let expected = [identity[1], identity[2], identity[3], identity[4], all];
        for (place, expected) in expected.into_iter().enumerate() {
            let values: Vec<f64> = found.iter().map(|shares| shares[place]).collect();
            assert_agrees(&format!("{sd:?}, Q {place}"), mean_and_error(&values), expected, 0.05);
        }
    }
}

/// Sites of the torus on which relatedness is compared: by the recursion it falls from distance 3 to 4
/// by 0.02 there for a spread of 1.5 site widths.
const COMPARED: usize = 100;

/// Relatedness at distances 1 to 4 as censuses of a replicate give it, mean from 3 N generations on.
fn census_relatedness(sd: f64, replicate: u32) -> [f64; 4] {
    let mut settings = torus(COMPARED, sd);
    // Vacancies do not wait for long.
    settings.life.propagule_cost_eu = TICK_H;
    settings.seed = 224;
    settings.run.generations = 7 * COMPARED as u64;
    settings.run.census_every = COMPARED as u64 / 4;
    let start = Start { programme: Programme::generalist(0.0), tick_h: TICK_H };
    let mut replicate = Replicate::found(&settings, start, replicate);
    while replicate.advance(|| false).is_some() {}
    let censuses = replicate.finish().census;
    let settled: Vec<_> = censuses
        .iter()
        .filter(|row| row.generation >= 3.0 * COMPARED as f64)
        .filter_map(|row| row.relatedness.iter().copied().collect::<Option<Vec<f64>>>())
        .collect();
    [0, 1, 2, 3].map(|d| settled.iter().map(|row| row[d]).sum::<f64>() / settled.len() as f64)
}

/// Differences between distances, paired by replicate, and between widths lie more than 3 standard errors
/// above 0 (were there none, each would be found once in 700 times); where propagules land anywhere,
/// relatedness is 0 within 4.5 standard errors.
#[test]
fn relatedness_falls_with_distance_and_with_dispersal() {
    use rayon::prelude::*;
    // Most are needed where the fall is smallest.
    let habitats = [(0.7, 12), (1.5, 32), (4.0, 12), (1e6, 12)];
    let [near, middle, wide, endless] = habitats.map(|(sd, few)| -> Vec<[f64; 4]> {
        let numbers = (0..size(few, 400)).into_par_iter();
        numbers.map(|number| census_relatedness(sd, number)).collect()
    });
    let column = |rows: &[[f64; 4]], d: usize| rows.iter().map(|row| row[d]).collect::<Vec<_>>();
    for rows in [&near, &middle] {
        for d in 0..3 {
            let fall: Vec<f64> = rows.iter().map(|row| row[d] - row[d + 1]).collect();
            let (mean, error) = mean_and_error(&fall);
            assert!(mean > 3.0 * error, "from distance {} on: {mean} +- {error}", d + 1);
        }
    }
    for (closer, farther) in [(&near, &middle), (&middle, &wide)] {
        let (a, b) = (mean_and_error(&column(closer, 0)), mean_and_error(&column(farther, 0)));
        assert!(a.0 - b.0 > 3.0 * a.1.hypot(b.1), "{a:?}, {b:?}");
    }
    for d in 0..4 {
        let (mean, error) = mean_and_error(&column(&endless, d));
        assert!(mean.abs() <= 4.5 * error && error < 0.01, "distance {}: {mean} +- {error}", d + 1);
    }
}
