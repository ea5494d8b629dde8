//! Parquet tables: written replicate by replicate, read back whole.

use std::collections::BTreeMap;
use std::fs::File;
use std::path::Path;
use std::sync::Arc;

use parquet::basic::{Compression, ZstdLevel};
use parquet::errors::ParquetError;
use parquet::file::metadata::{KeyValue, ParquetMetaData, RowGroupMetaData};
use parquet::file::properties::WriterProperties;
use parquet::file::reader::{FileReader, SerializedFileReader};
use parquet::file::writer::SerializedFileWriter;
use parquet::schema::parser::parse_message_type;

use super::atomic::PendingFile;
use super::column::{Column, ColumnFault};
use super::{PROGRAM, RecordError};

/// A row that a Parquet table can hold.
pub trait TableRow: Default + Clone + 'static {
    /// Name of the table's schema.
    const TABLE: &'static str;

    /// The columns, in the order of the file.
    fn columns() -> Vec<Column<Self>>;
}

/// A table that is being written: rows arrive by replicate, in any order of replicates.
///
/// Each replicate is one row group, in the order of replicates; a replicate that is ahead of its
/// turn waits in memory. So the bytes do not depend on which replicate finished first, and at most
/// the replicates in flight wait. A replicate that never arrives (the run was interrupted) leaves
/// no trace: those after it follow directly.
pub struct TableWriter<R> {
    writer: SerializedFileWriter<PendingFile>,
    columns: Vec<Column<R>>,
    waiting: BTreeMap<u32, Vec<R>>,
    next: u32,
    path: std::path::PathBuf,
}

impl<R: TableRow> TableWriter<R> {
    /// A new table that will be called `name` in `folder`.
    ///
    /// # Errors
    /// [`RecordError::Write`] or [`RecordError::WriteTable`] if the disk refuses.
    pub fn create(folder: &Path, name: &str) -> Result<Self, RecordError> {
        let file = PendingFile::create(folder, name)?;
        let path = file.path().to_path_buf();
        let columns = R::columns();
        let writer =
            open_writer(file, R::TABLE, &columns).map_err(RecordError::writing_table(&path))?;
        Ok(Self { writer, columns, waiting: BTreeMap::new(), next: 0, path })
    }

    /// Takes all rows of `replicate` (counted from 0).
    ///
    /// # Errors
    /// [`RecordError::Twice`] if the replicate is already there; [`RecordError::Write`] or
    /// [`RecordError::WriteTable`] if the disk refuses.
    pub fn add(&mut self, replicate: u32, rows: Vec<R>) -> Result<(), RecordError> {
        if replicate < self.next || self.waiting.contains_key(&replicate) {
            return Err(RecordError::Twice { path: self.path.clone(), replicate });
        }
        self.waiting.insert(replicate, rows);
        while let Some(rows) = self.waiting.remove(&self.next) {
            self.write(&rows)?;
            self.next += 1;
        }
        Ok(())
    }

    /// Writes what is still waiting; the file has yet to get its name.
    ///
    /// # Errors
    /// [`RecordError::Write`] or [`RecordError::WriteTable`] if the disk refuses.
    pub fn finish(mut self) -> Result<PendingFile, RecordError> {
        for rows in std::mem::take(&mut self.waiting).into_values() {
            self.write(&rows)?;
        }
        self.writer.into_inner().map_err(RecordError::writing_table(&self.path))
    }

    fn write(&mut self, rows: &[R]) -> Result<(), RecordError> {
        if rows.is_empty() {
            return Ok(());
        }
        write_row_group(&mut self.writer, &self.columns, rows)
            .map_err(RecordError::writing_table(&self.path))
    }
}

fn open_writer<R>(
    file: PendingFile,
    table: &str,
    columns: &[Column<R>],
) -> Result<SerializedFileWriter<PendingFile>, ParquetError> {
    let lines: Vec<String> = columns.iter().map(Column::schema_line).collect();
    let schema = parse_message_type(&format!("message {table} {{ {} }}", lines.join(" ")))?;
    let units = columns
        .iter()
        .filter(|column| !column.unit.is_empty())
        .map(|column| KeyValue::new(format!("unit:{}", column.name), column.unit.to_owned()))
        .collect();
    // Nothing of the moment or the machine: the same rows give the same bytes.
    let properties = WriterProperties::builder()
        .set_created_by(PROGRAM.to_owned())
        .set_compression(Compression::ZSTD(ZstdLevel::default()))
        .set_max_row_group_row_count(None)
        .set_key_value_metadata(Some(units))
        .build();
    SerializedFileWriter::new(file, Arc::new(schema), Arc::new(properties))
}

fn write_row_group<R>(
    writer: &mut SerializedFileWriter<PendingFile>,
    columns: &[Column<R>],
    rows: &[R],
) -> Result<(), ParquetError> {
    let mut group = writer.next_row_group()?;
    for column in columns {
        let Some(mut to) = group.next_column()? else { break };
        column.write(rows, &mut to)?;
        to.close()?;
    }
    group.close().map(drop)
}

/// All rows of the table at `path`, in the order of the file. Columns are found by name, and
/// further ones are ignored, so that a table of a later version can be read.
///
/// # Errors
/// [`RecordError::Read`] if the file cannot be opened, [`RecordError::ReadTable`] if it is no
/// Parquet file or is damaged, [`RecordError::Column`] if a column is missing or of another type,
/// [`RecordError::Word`] if a word is unknown.
pub fn read_table<R: TableRow>(path: &Path) -> Result<Vec<R>, RecordError> {
    let file = File::open(path).map_err(RecordError::reading(path))?;
    let length = file.metadata().map_err(RecordError::reading(path))?.len();
    let reader = SerializedFileReader::new(file).map_err(RecordError::reading_table(path))?;
    check_places(reader.metadata(), length).map_err(RecordError::reading_table(path))?;
    let columns = R::columns();
    let places = places_of(&columns, &reader, path)?;
    let mut rows = Vec::new();
    for group in 0..reader.num_row_groups() {
        let group = reader.get_row_group(group).map_err(RecordError::reading_table(path))?;
        let start = rows.len();
        let end = end_after(&mut rows, group.metadata().num_rows())
            .map_err(RecordError::reading_table(path))?;
        rows.resize(end, R::default());
        for (column, place) in columns.iter().zip(&places) {
            let from = group.get_column_reader(*place).map_err(RecordError::reading_table(path))?;
            column
                .read(from, &mut rows[start..])
                .map_err(|fault| column_error(path, column.name, fault))?;
        }
    }
    Ok(rows)
}

/// Refuses a damaged footer, at some of which the Parquet reader panics: the columns of a table
/// lie in the file one after the other, from behind its first mark.
fn check_places(metadata: &ParquetMetaData, length: u64) -> Result<(), ParquetError> {
    const FIRST_MARK: u64 = 4;
    let end = metadata.row_groups().iter().flat_map(RowGroupMetaData::columns).try_fold(
        FIRST_MARK,
        |expected, chunk| {
            let start = chunk.dictionary_page_offset().unwrap_or(chunk.data_page_offset());
            let bytes = u64::try_from(chunk.compressed_size()).ok()?;
            (u64::try_from(start).ok()? == expected).then(|| expected.checked_add(bytes))?
        },
    );
    match end {
        Some(end) if end <= length => Ok(()),
        _ => Err(ParquetError::General("its columns do not lie one after the other".to_owned())),
    }
}

/// Length of `rows` with `count` more. A damaged file may claim any number of rows, which must not
/// end in an abort for lack of memory.
fn end_after<R>(rows: &mut Vec<R>, count: i64) -> Result<usize, ParquetError> {
    usize::try_from(count)
        .ok()
        .filter(|count| rows.try_reserve(*count).is_ok())
        .map(|count| rows.len() + count)
        .ok_or_else(|| ParquetError::General(format!("impossible number of rows {count}")))
}

/// Where the file keeps each column.
fn places_of<R>(
    columns: &[Column<R>],
    reader: &impl FileReader,
    path: &Path,
) -> Result<Vec<usize>, RecordError> {
    let schema = reader.metadata().file_metadata().schema_descr();
    let matches = |column: &Column<R>, place: usize| {
        let found = schema.column(place);
        let (physical, optional) = column.physical();
        found.name() == column.name
            && found.physical_type() == physical
            && found.max_def_level() == i16::from(optional)
            && found.max_rep_level() == 0
    };
    columns
        .iter()
        .map(|column| {
            (0..schema.num_columns()).find(|place| matches(column, *place)).ok_or_else(|| {
                RecordError::Column { path: path.to_path_buf(), column: column.name }
            })
        })
        .collect()
}

fn column_error(path: &Path, column: &'static str, fault: ColumnFault) -> RecordError {
    let path = path.to_path_buf();
    match fault {
        ColumnFault::Parquet(source) => RecordError::ReadTable { path, source },
        ColumnFault::Mismatch => RecordError::Column { path, column },
        ColumnFault::Word(value) => RecordError::Word { path, column, value },
    }
}
