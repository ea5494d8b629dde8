//! Columns of a Parquet table: name, unit, and how a row's field is read and set.

use parquet::basic::Type as Physical;
use parquet::column::reader::{ColumnReader, get_typed_column_reader};
use parquet::data_type::{
    BoolType, ByteArray, ByteArrayType, DataType, DoubleType, FloatType, Int32Type, Int64Type,
};
use parquet::errors::{ParquetError, Result};
use parquet::file::writer::SerializedColumnWriter;

/// How a row of type `R` stores a column's value: a getter and a setter.
///
/// All fields of a row are plain numbers or words; an optional number is `None` for "not known",
/// which the file stores as null. NaN and infinities are stored as they are.
#[derive(Debug)]
pub enum Field<R> {
    /// A count or an index.
    U32(fn(&R) -> u32, fn(&mut R, u32)),
    /// A count that may pass four billion.
    U64(fn(&R) -> u64, fn(&mut R, u64)),
    /// A small signed number.
    I8(fn(&R) -> i8, fn(&mut R, i8)),
    /// A yes or no.
    Bool(fn(&R) -> bool, fn(&mut R, bool)),
    /// A number in single precision.
    F32(fn(&R) -> f32, fn(&mut R, f32)),
    /// A number.
    F64(fn(&R) -> f64, fn(&mut R, f64)),
    /// A number that may be unknown.
    OptionalF64(fn(&R) -> Option<f64>, fn(&mut R, Option<f64>)),
    /// One of a few words; the setter says whether it knows the word.
    Word(fn(&R) -> &'static str, fn(&mut R, &str) -> bool),
}

/// One column of a table with rows of type `R`.
#[derive(Debug)]
pub struct Column<R> {
    /// Name, as in the file.
    pub name: &'static str,
    /// Unit of the values, "1" for a pure number, "" for a word or a label.
    pub unit: &'static str,
    /// Where a row keeps it.
    pub field: Field<R>,
}

/// A column of the given kind whose name is that of the field, or a name of its own:
/// `column!(F64, time_h, "h")`, `column!(F64, trait_mean[0], "logit", "mean_baseline")`.
macro_rules! column {
    ($kind:ident, $field:ident, $unit:literal) => {
        column!($kind, $field, $unit, stringify!($field))
    };
    ($kind:ident, $field:ident $([$index:literal])?, $unit:literal, $name:expr) => {
        $crate::record::column::Column {
            name: $name,
            unit: $unit,
            field: $crate::record::column::Field::$kind(
                |row| row.$field $([$index])?,
                |row, value| row.$field $([$index])? = value,
            ),
        }
    };
}
pub(super) use column;

/// Why a column could not be read.
#[derive(Debug)]
pub(super) enum ColumnFault {
    /// The reader failed.
    Parquet(ParquetError),
    /// The column is of another type, or too short.
    Mismatch,
    /// A word that is not one of the column's.
    Word(String),
}

impl From<ParquetError> for ColumnFault {
    fn from(error: ParquetError) -> Self {
        Self::Parquet(error)
    }
}

impl<R> Column<R> {
    /// The column's line in the schema, in the notation of Parquet's message types.
    pub(super) fn schema_line(&self) -> String {
        let name = self.name;
        match self.field {
            Field::U32(..) => format!("required int32 {name} (INTEGER(32,false));"),
            Field::U64(..) => format!("required int64 {name} (INTEGER(64,false));"),
            Field::I8(..) => format!("required int32 {name} (INTEGER(8,true));"),
            Field::Bool(..) => format!("required boolean {name};"),
            Field::F32(..) => format!("required float {name};"),
            Field::F64(..) => format!("required double {name};"),
            Field::OptionalF64(..) => format!("optional double {name};"),
            Field::Word(..) => format!("required binary {name} (STRING);"),
        }
    }

    /// The type under which the file stores the column, and whether it may be null.
    pub(super) const fn physical(&self) -> (Physical, bool) {
        match self.field {
            Field::U32(..) | Field::I8(..) => (Physical::INT32, false),
            Field::U64(..) => (Physical::INT64, false),
            Field::Bool(..) => (Physical::BOOLEAN, false),
            Field::F32(..) => (Physical::FLOAT, false),
            Field::F64(..) => (Physical::DOUBLE, false),
            Field::OptionalF64(..) => (Physical::DOUBLE, true),
            Field::Word(..) => (Physical::BYTE_ARRAY, false),
        }
    }

    /// Writes the column of `rows`.
    pub(super) fn write(&self, rows: &[R], to: &mut SerializedColumnWriter<'_>) -> Result<()> {
        match self.field {
            Field::U32(get, _) => put::<Int32Type, _>(rows, to, |row| get(row).cast_signed()),
            Field::U64(get, _) => put::<Int64Type, _>(rows, to, |row| get(row).cast_signed()),
            Field::I8(get, _) => put::<Int32Type, _>(rows, to, |row| i32::from(get(row))),
            Field::Bool(get, _) => put::<BoolType, _>(rows, to, get),
            Field::F32(get, _) => put::<FloatType, _>(rows, to, get),
            Field::F64(get, _) => put::<DoubleType, _>(rows, to, get),
            Field::OptionalF64(get, _) => {
                let known: Vec<f64> = rows.iter().filter_map(get).collect();
                let levels: Vec<i16> =
                    rows.iter().map(|row| i16::from(get(row).is_some())).collect();
                to.typed::<DoubleType>().write_batch(&known, Some(&levels), None).map(drop)
            }
            Field::Word(get, _) => {
                put::<ByteArrayType, _>(rows, to, |row| ByteArray::from(get(row)))
            }
        }
    }

    /// Reads the column into `rows`, one value each.
    pub(super) fn read(&self, from: ColumnReader, rows: &mut [R]) -> Result<(), ColumnFault> {
        match self.field {
            Field::U32(_, set) => {
                take::<Int32Type, _>(from, rows, |row, value| set(row, value.cast_unsigned()))
            }
            Field::U64(_, set) => {
                take::<Int64Type, _>(from, rows, |row, value| set(row, value.cast_unsigned()))
            }
            Field::I8(_, set) => {
                let mut fits = true;
                take::<Int32Type, _>(from, rows, |row, value| match i8::try_from(value) {
                    Ok(value) => set(row, value),
                    Err(_) => fits = false,
                })?;
                if fits { Ok(()) } else { Err(ColumnFault::Mismatch) }
            }
            Field::Bool(_, set) => take::<BoolType, _>(from, rows, set),
            Field::F32(_, set) => take::<FloatType, _>(from, rows, set),
            Field::F64(_, set) => take::<DoubleType, _>(from, rows, set),
            Field::OptionalF64(_, set) => take_optional(from, rows, set),
            Field::Word(_, set) => take_words(from, rows, set),
        }
    }
}

fn put<T: DataType, R>(
    rows: &[R],
    to: &mut SerializedColumnWriter<'_>,
    get: impl Fn(&R) -> T::T,
) -> Result<()> {
    let values: Vec<T::T> = rows.iter().map(get).collect();
    to.typed::<T>().write_batch(&values, None, None).map(drop)
}

fn values<T: DataType>(from: ColumnReader, expected: usize) -> Result<Vec<T::T>, ColumnFault> {
    let mut values = Vec::new();
    get_typed_column_reader::<T>(from).read_records(expected, None, None, &mut values)?;
    if values.len() == expected { Ok(values) } else { Err(ColumnFault::Mismatch) }
}

fn take<T: DataType, R>(
    from: ColumnReader,
    rows: &mut [R],
    mut set: impl FnMut(&mut R, T::T),
) -> Result<(), ColumnFault> {
    let values = values::<T>(from, rows.len())?;
    rows.iter_mut().zip(values).for_each(|(row, value)| set(row, value));
    Ok(())
}

fn take_optional<R>(
    from: ColumnReader,
    rows: &mut [R],
    set: fn(&mut R, Option<f64>),
) -> Result<(), ColumnFault> {
    let (mut known, mut levels) = (Vec::new(), Vec::new());
    get_typed_column_reader::<DoubleType>(from).read_records(
        rows.len(),
        Some(&mut levels),
        None,
        &mut known,
    )?;
    if levels.len() != rows.len() {
        return Err(ColumnFault::Mismatch);
    }
    let mut known = known.into_iter();
    for (row, level) in rows.iter_mut().zip(levels) {
        set(row, if level == 1 { known.next() } else { None });
    }
    Ok(())
}

fn take_words<R>(
    from: ColumnReader,
    rows: &mut [R],
    set: fn(&mut R, &str) -> bool,
) -> Result<(), ColumnFault> {
    let words = values::<ByteArrayType>(from, rows.len())?;
    for (row, word) in rows.iter_mut().zip(words) {
        let word = word.as_utf8()?;
        if !set(row, word) {
            return Err(ColumnFault::Word(word.to_owned()));
        }
    }
    Ok(())
}
