//! The known name that is most like an unknown one.

/// Likeness below which a name is no help.
const LEAST_LIKENESS: f64 = 0.6;

/// The one of `known` that is most like `unknown`, if any is much like it.
///
/// Likeness is the normalised Damerau-Levenshtein similarity, raised by how far the beginnings
/// agree (Jaro-Winkler), case ignored.
#[must_use]
pub fn nearest<'a>(unknown: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let best = known
        .into_iter()
        .map(|name| (likeness(unknown, name), name))
        .reduce(|best, next| if next.0 > best.0 { next } else { best })?;
    (best.0 >= LEAST_LIKENESS).then_some(best.1)
}

/// How much alike two names are, from 0 to 1.
pub(crate) fn likeness(a: &str, b: &str) -> f64 {
    // Names of the scenario are short; a long one is like none of them.
    if a.chars().count() > 64 {
        return 0.0;
    }
    let (a, b) = (a.to_lowercase(), b.to_lowercase());
    f64::midpoint(strsim::normalized_damerau_levenshtein(&a, &b), strsim::jaro_winkler(&a, &b))
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn a_slip_finds_its_word_and_a_stranger_finds_none() {
        let words = ["sites", "layout", "adult_cells", "cell_diameter_um"];
        assert_eq!(nearest("site", words), Some("sites"));
        assert_eq!(nearest("adultcells", words), Some("adult_cells"));
        assert_eq!(nearest("cell_diametre", words), Some("cell_diameter_um"));
        assert_eq!(nearest("qqq", words), None);
    }
}
