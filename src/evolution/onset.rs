//! Onset: the first census at which the division index reaches its mark and stays there.

use crate::scenario::settings::Onset;

/// Watches the division index from census to census.
#[derive(Debug, Clone)]
pub struct OnsetWatch {
    mark: f64,
    needed: u32,
    run: u32,
    candidate: Option<f64>,
    confirmed: Option<f64>,
}

impl OnsetWatch {
    /// A watch for `onset.sustained_censuses` censuses in a row at or above `onset.index`.
    #[must_use]
    pub const fn new(onset: &Onset) -> Self {
        Self {
            mark: onset.index,
            needed: onset.sustained_censuses,
            run: 0,
            candidate: None,
            confirmed: None,
        }
    }

    /// Takes note of a census; true when it is the first of a possible onset.
    ///
    /// A census without adults (`None`) counts as one below the mark.
    pub fn see(&mut self, generation: f64, division_index: Option<f64>) -> bool {
        if self.confirmed.is_some() {
            return false;
        }
        if division_index.is_none_or(|d| d < self.mark) {
            (self.run, self.candidate) = (0, None);
            return false;
        }
        self.run += 1;
        let first = self.candidate.is_none();
        let since = *self.candidate.get_or_insert(generation);
        if self.run >= self.needed {
            self.confirmed = Some(since);
        }
        first
    }

    /// Generation of the onset, once it is confirmed.
    #[must_use]
    pub const fn onset(&self) -> Option<f64> {
        self.confirmed
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn watch() -> OnsetWatch {
        OnsetWatch::new(&Onset {
            index: 0.5,
            sustained_censuses: 3,
            germ_below: 0.1,
            soma_above: 0.9,
        })
    }

    #[test]
    fn onset_is_dated_to_the_first_of_the_censuses_that_sustain_it() {
        let mut watch = watch();
        for (generation, d) in [(0.0, 0.1), (10.0, 0.5), (20.0, 0.7), (30.0, 0.6)] {
            watch.see(generation, Some(d));
        }
        assert_eq!(watch.onset(), Some(10.0));
        watch.see(40.0, Some(0.0));
        assert_eq!(watch.onset(), Some(10.0), "an onset once confirmed stays");
    }

    #[test]
    fn a_dip_or_a_census_without_adults_starts_the_count_anew() {
        for dip in [Some(0.49), None] {
            let mut watch = watch();
            for (generation, d) in [(0.0, Some(0.9)), (10.0, Some(0.9)), (20.0, dip)] {
                watch.see(generation, d);
            }
            assert_eq!(watch.onset(), None);
            for generation in [30.0, 40.0, 50.0] {
                watch.see(generation, Some(0.8));
            }
            assert_eq!(watch.onset(), Some(30.0));
        }
    }
}
