//! Outcomes of replicates: one row each, as CSV.

use std::path::Path;

use serde::{Deserialize, Serialize};

use super::RecordError;
use crate::theory::{BodyClass, Cue};

/// How a replicate ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Outcome {
    /// The population differentiated.
    Onset,
    /// It had not when the replicate ended.
    Censored,
    /// It died out.
    Extinct,
}

/// What became of one replicate. Fields are the columns of `replicates.csv`, in its order; `None`
/// is an empty cell.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct ReplicateRow {
    /// Replicate, from 0.
    pub replicate: u32,
    /// Seed of its random numbers.
    pub seed: u64,
    /// How it ended.
    pub outcome: Outcome,
    /// Generation of the onset, if there was one.
    pub onset_generation: Option<f64>,
    /// Generation at which it ended or died out.
    pub end_generation: f64,
    /// Division index D at the last census, 0 to 1; `None` where that found no adults.
    pub division_index: Option<f64>,
    /// Share of soma cells at that census.
    pub soma_fraction: Option<f64>,
    /// Commonest class of its adult bodies at that census.
    pub class: Option<BodyClass>,
    /// Share of the between-cell variance of logit z that random fate explains.
    pub route_noise: Option<f64>,
    /// The same for asymmetric division.
    pub route_lineage: Option<f64>,
    /// The same for position at the surface.
    pub route_exposure: Option<f64>,
    /// The same for income.
    pub route_income: Option<f64>,
    /// Mean over the adults of that census of the propagules each expects to release, `F / (c_p m)`.
    pub mean_fitness: Option<f64>,
    /// Mean number of living cells of those adults.
    pub adult_cells: Option<f64>,
    /// Colonies that settled since the start and whose growth stops short of adult size, some of
    /// which may still be growing.
    pub never_matured: u64,
}

/// Columns of `replicates.csv`; also stated when there is no row.
const COLUMNS: [&str; 15] = [
    "replicate",
    "seed",
    "outcome",
    "onset_generation",
    "end_generation",
    "division_index",
    "soma_fraction",
    "class",
    "route_noise",
    "route_lineage",
    "route_exposure",
    "route_income",
    "mean_fitness",
    "adult_cells",
    "never_matured",
];

impl ReplicateRow {
    /// The cue that explains the largest share of the difference between cells; of equal shares
    /// the first in [`Cue::ALL`], `None` if no share is known and above 0.
    #[must_use]
    pub fn route(&self) -> Option<Cue> {
        let shares = [self.route_noise, self.route_lineage, self.route_exposure, self.route_income];
        Cue::ALL
            .into_iter()
            .zip(shares)
            .filter_map(|(route, share)| Some((route, share.filter(|share| *share > 0.0)?)))
            .reduce(|best, next| if next.1 > best.1 { next } else { best })
            .map(|(route, _)| route)
    }

    /// The same row with every optional number that is NaN or infinite taken as not known.
    #[must_use]
    pub fn with_finite_values(mut self) -> Self {
        for value in [
            &mut self.onset_generation,
            &mut self.division_index,
            &mut self.soma_fraction,
            &mut self.route_noise,
            &mut self.route_lineage,
            &mut self.route_exposure,
            &mut self.route_income,
            &mut self.mean_fitness,
            &mut self.adult_cells,
        ] {
            *value = value.filter(|value| value.is_finite());
        }
        self
    }
}

/// The text of `replicates.csv`, rows in the order given.
///
/// # Errors
/// [`RecordError::WriteCsv`] if a row cannot be put in words, which no value of a row causes.
pub(super) fn to_csv(rows: &[ReplicateRow], path: &Path) -> Result<Vec<u8>, RecordError> {
    let failed = |source| RecordError::WriteCsv { path: path.to_path_buf(), source };
    let mut writer = csv::WriterBuilder::new().has_headers(false).from_writer(Vec::new());
    writer.write_record(COLUMNS).map_err(failed)?;
    for row in rows {
        writer.serialize(row).map_err(failed)?;
    }
    writer.into_inner().map_err(|e| RecordError::writing(path)(e.into_error()))
}

/// All rows of the `replicates.csv` at `path`.
///
/// # Errors
/// [`RecordError::Read`] if the file cannot be opened, [`RecordError::ReadCsv`] naming the line if a
/// row is not one of a replicate.
pub fn read_replicates(path: &Path) -> Result<Vec<ReplicateRow>, RecordError> {
    let file = std::fs::File::open(path).map_err(RecordError::reading(path))?;
    csv::Reader::from_reader(file)
        .deserialize()
        .collect::<Result<_, _>>()
        .map_err(|source| RecordError::ReadCsv { path: path.to_path_buf(), source })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(shares: [Option<f64>; 4]) -> ReplicateRow {
        let [route_noise, route_lineage, route_exposure, route_income] = shares;
        ReplicateRow {
            replicate: 0,
            seed: 1,
            outcome: Outcome::Censored,
            onset_generation: None,
            end_generation: 10.0,
            division_index: Some(f64::NAN),
            soma_fraction: None,
            class: None,
            route_noise,
            route_lineage,
            route_exposure,
            route_income,
            mean_fitness: Some(1.5),
            adult_cells: Some(30.0),
            never_matured: 2,
        }
    }

    #[test]
    fn the_route_is_the_cue_with_the_largest_share() {
        assert_eq!(row([Some(0.2), None, Some(0.8), None]).route(), Some(Cue::Exposure));
        assert_eq!(row([Some(0.5), Some(0.5), None, None]).route(), Some(Cue::Noise));
        assert_eq!(row([Some(0.0), None, None, None]).route(), None);
        assert_eq!(row([None; 4]).route(), None);
    }

    #[test]
    fn a_value_that_is_not_a_number_counts_as_not_known() {
        let row = row([Some(f64::INFINITY), None, None, Some(1.0)]).with_finite_values();
        assert_eq!((row.division_index, row.route_noise), (None, None));
        assert_eq!((row.route_income, row.mean_fitness), (Some(1.0), Some(1.5)));
    }

    #[test]
    fn the_header_names_the_fields() {
        let with_header = {
            let mut writer = csv::Writer::from_writer(Vec::new());
            writer.serialize(row([None; 4])).unwrap();
            writer.into_inner().unwrap()
        };
        assert_eq!(to_csv(&[row([None; 4])], Path::new("x.csv")).unwrap(), with_header);
    }
}
