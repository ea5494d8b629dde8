//! Relatedness of neighbours on a torus, by neutral lines.

/// Distances at which relatedness is measured, in sites along a row or a column.
pub(super) const DISTANCES: [usize; 4] = [1, 2, 3, 4];

/// Relatedness of living colonies at [`DISTANCES`], `r_d = (Q_d - Q) / (1 - Q)`: `Q_d` is the share of
/// pairs d sites apart along a row or a column that carry the same line, Q the share over all pairs
/// of living colonies. It is 0 on average among colonies placed at random, 1 among identical ones
/// (Rousset 2004, who names such ratios of identities; here all living colonies are the reference).
///
/// `lines` holds the line on each site of a square torus, row by row, none where a site is empty. None
/// where all colonies carry one line, where no such pair lives, or where two sites cannot be d apart
/// since the torus is narrower than 2 d.
pub(super) fn relatedness(lines: &[Option<u64>]) -> [Option<f64>; DISTANCES.len()] {
    let side = lines.len().isqrt();
    let Some(all) = over_all_pairs(lines).filter(|all| *all < 1.0) else {
        return [None; DISTANCES.len()];
    };
    DISTANCES.map(|distance| {
        let apart = at_distance(lines, side, distance)?;
        Some((apart - all) / (1.0 - all))
    })
}

/// Share of all pairs of living colonies that carry the same line; none without a pair.
fn over_all_pairs(lines: &[Option<u64>]) -> Option<f64> {
    let mut living: Vec<u64> = lines.iter().copied().flatten().collect();
    living.sort_unstable();
    let pairs = |count: usize| count as f64 * (count as f64 - 1.0) / 2.0;
    let alike: f64 = living.chunk_by(|a, b| a == b).map(|line| pairs(line.len())).sum();
    (living.len() > 1).then(|| alike / pairs(living.len()))
}

/// Share of the pairs `distance` sites apart along a row or a column that carry the same line.
fn at_distance(lines: &[Option<u64>], side: usize, distance: usize) -> Option<f64> {
    if 2 * distance > side {
        return None;
    }
    let (mut pairs, mut alike) = (0_u64, 0_u64);
    for (site, here) in lines.iter().enumerate() {
        let (row, column) = (site / side, site % side);
        let below = (row + distance) % side * side + column;
        let beside = row * side + (column + distance) % side;
        for there in [below, beside] {
            if let (Some(here), Some(there)) = (here, lines[there]) {
                pairs += 1;
                alike += u64::from(*here == there);
            }
        }
    }
    (pairs > 0).then(|| alike as f64 / pairs as f64)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Lines a, b, c, .. by letter; a dot is an empty site.
    fn torus(rows: &[&str]) -> Vec<Option<u64>> {
        let letters = rows.iter().flat_map(|row| row.bytes());
        letters.map(|letter| (letter != b'.').then(|| u64::from(letter))).collect()
    }

    /// Seven colonies make 21 pairs; alike are 6 of a and 1 of b.
    #[test]
    fn shares_are_those_counted_by_hand() {
        let lines = torus(&["aba", "baa", "c.."]);
        approx::assert_relative_eq!(over_all_pairs(&lines).unwrap(), 1.0 / 3.0);
        // Along rows: ab, ba, aa | ba, aa, ab | none. Down columns: ab, bc, ca | ba | aa. Alike: 3 of 11.
        approx::assert_relative_eq!(at_distance(&lines, 3, 1).unwrap(), 3.0 / 11.0);
        let expected = (3.0 / 11.0 - 1.0 / 3.0) / (2.0 / 3.0);
        let found = relatedness(&lines);
        approx::assert_relative_eq!(found[0].unwrap(), expected, max_relative = 1e-15);
        assert_eq!(found[1..], [None; 3]);
    }

    #[test]
    fn stripes_alternate_along_columns_and_are_alike_along_rows() {
        let lines = torus(&["aaaa", "bbbb", "aaaa", "bbbb"]);
        // 16 colonies, 120 pairs, 2 * 28 alike: Q = 7/15. Half of the pairs next to each other lie in
        // one row and are alike; those 2 apart all are.
        let [next, second, third, fourth] = relatedness(&lines);
        approx::assert_relative_eq!(next.unwrap(), (0.5 - 7.0 / 15.0) / (8.0 / 15.0));
        approx::assert_relative_eq!(second.unwrap(), 1.0);
        assert_eq!((third, fourth), (None, None));
    }

    #[test]
    fn without_pairs_or_differences_nothing_is_known() {
        assert_eq!(relatedness(&torus(&["aa", "aa"])), [None; 4]);
        assert_eq!(relatedness(&torus(&["a.", ".."])), [None; 4]);
        assert_eq!(relatedness(&torus(&["..", ".."])), [None; 4]);
        // Two colonies that are no neighbours.
        assert_eq!(relatedness(&torus(&["a.", ".b"])), [None; 4]);
    }
}
