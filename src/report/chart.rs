//! A small text chart of the division index over generations.

use std::collections::BTreeMap;

use crate::record::{CensusRow, Outcome, ReplicateRow};

use super::style::Style;
use super::words;

/// Columns of the longest sparkline.
const COLUMNS: usize = 56;
/// Columns of the rows' names.
const MARGIN: usize = 11;

/// Median and span over replicates of the division index, column by column of the chart.
#[derive(Debug, Clone, PartialEq)]
pub struct IndexCourse {
    /// Generation at the right end.
    pub last_generation: f64,
    /// Number of replicates in it.
    pub replicates: usize,
    /// Lowest, median and highest value per column; `None` where no replicate has one.
    pub columns: Vec<Option<Spread>>,
}

/// Spread of a value over replicates.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spread {
    /// Lowest.
    pub lowest: f64,
    /// Median; of an even number the mean of the middle two.
    pub median: f64,
    /// Highest.
    pub highest: f64,
}

impl IndexCourse {
    /// The course over generations that `census` tells, of the replicates in `rows`.
    ///
    /// A column holds a replicate's last census within its stretch of generations; without one
    /// there, the value before it. So a replicate that ended at its onset goes on in the chart with
    /// its last value, while one that died out ends where it did. `None` without a value.
    #[must_use]
    pub fn of(rows: &[ReplicateRow], census: &[CensusRow]) -> Option<Self> {
        let mut courses: BTreeMap<u32, Vec<(f64, f64)>> = BTreeMap::new();
        for row in census {
            let known = row.division_index.filter(|index| index.is_finite());
            if let (Some(index), true) = (known, row.generation.is_finite()) {
                courses.entry(row.replicate).or_default().push((row.generation, index));
            }
        }
        let longest = courses.values().map(Vec::len).max()?;
        let last_generation =
            census.iter().map(|row| row.generation).filter(|g| g.is_finite()).fold(0.0, f64::max);
        let stretches = Stretches { count: longest.min(COLUMNS), end: last_generation };
        let died_out = |replicate| {
            rows.iter().any(|row| row.replicate == replicate && row.outcome == Outcome::Extinct)
        };
        let courses: Vec<Vec<Option<f64>>> = courses
            .into_iter()
            .map(|(replicate, course)| stretches.sample(&course, !died_out(replicate)))
            .collect();
        let columns = (0..stretches.count)
            .map(|column| Spread::of(courses.iter().filter_map(|course| course[column]).collect()))
            .collect();
        Some(Self { last_generation, replicates: courses.len(), columns })
    }
}

/// The columns as stretches of generations.
struct Stretches {
    count: usize,
    end: f64,
}

impl Stretches {
    fn sample(&self, course: &[(f64, f64)], goes_on: bool) -> Vec<Option<f64>> {
        let mut values = vec![None; self.count];
        let mut last_column = 0;
        for (generation, index) in course {
            last_column = self.column_of(*generation);
            values[last_column] = Some(*index);
        }
        let end = if goes_on { self.count } else { last_column + 1 };
        for column in 1..end {
            values[column] = values[column].or(values[column - 1]);
        }
        values
    }

    fn column_of(&self, generation: f64) -> usize {
        // The first column whose stretch reaches beyond the generation.
        (1..self.count)
            .find(|column| generation < self.end * *column as f64 / self.count as f64)
            .map_or(self.count - 1, |column| column - 1)
    }
}

impl Spread {
    fn of(mut values: Vec<f64>) -> Option<Self> {
        values.sort_by(f64::total_cmp);
        let middle = values.len() / 2;
        let upper = *values.get(middle)?;
        let median =
            if values.len().is_multiple_of(2) { upper.midpoint(values[middle - 1]) } else { upper };
        Some(Self { lowest: values[0], median, highest: *values.last()? })
    }
}

/// A row of the chart: its name, and what of the spread it shows.
type Row = (&'static str, fn(&Spread) -> f64);

/// The chart as lines of text, each ended by a line break.
#[must_use]
pub fn draw(course: &IndexCourse, style: Style) -> String {
    let glyphs = Glyphs::of(style);
    let rows: &[Row] = if course.replicates == 1 {
        &[("D", |spread| spread.median)]
    } else {
        &[
            ("highest", |spread| spread.highest),
            ("median", |spread| spread.median),
            ("lowest", |spread| spread.lowest),
        ]
    };
    let mut text = format!(
        "Division index D over generations ({} = 0, {} = 1; {})\n",
        glyphs.level(0.0),
        glyphs.level(1.0),
        words::replicates(course.replicates)
    );
    for (name, value) in rows {
        let line: String = course
            .columns
            .iter()
            .map(|column| column.as_ref().map_or(' ', |spread| glyphs.level(value(spread))))
            .collect();
        text.push_str(format!("  {name:<9}{line}").trim_end());
        text.push('\n');
    }
    text.push_str(&axis(course));
    text
}

/// The axis line: 0 under the first column, the last generation under the last.
fn axis(course: &IndexCourse) -> String {
    let end = words::generations(course.last_generation);
    let between = (course.columns.len()).saturating_sub(1 + end.len()).max(1);
    format!("{:MARGIN$}0{:between$}{end} generations\n", "", "")
}

/// Eight characters from low to high.
struct Glyphs([char; 8]);

impl Glyphs {
    const fn of(style: Style) -> Self {
        if style.unicode {
            Self(['▁', '▂', '▃', '▄', '▅', '▆', '▇', '█'])
        } else {
            Self(['_', '.', ':', '-', '=', '+', '*', '#'])
        }
    }

    /// The character of an index, 0 to 1 in eight equal steps.
    fn level(&self, index: f64) -> char {
        let steps = self.0.len();
        let place = (1..steps).take_while(|step| index * steps as f64 >= *step as f64).count();
        self.0[place]
    }
}
