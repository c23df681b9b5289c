//! Files of columns as text.

use std::boxed::Box;
use std::format;
use std::fs::File;
use std::io::{self, BufReader, Read};
use std::string::{String, ToString};
use std::vec::Vec;

use arrow_array::cast::AsArray;
use arrow_array::types::{
    ArrowDictionaryKeyType, ArrowPrimitiveType, Date32Type, Float32Type, Float64Type, Int8Type, Int16Type, Int32Type,
    Int64Type, TimestampMicrosecondType, TimestampMillisecondType, TimestampNanosecondType, TimestampSecondType,
    UInt8Type, UInt16Type, UInt32Type, UInt64Type,
};
use arrow_array::{Array, RecordBatch};
use arrow_ipc::reader::{FileReader, StreamReader};
use arrow_schema::{ArrowError, DataType, Field, SchemaRef, TimeUnit};
use parquet::arrow::arrow_reader::ParquetRecordBatchReaderBuilder;
use parquet::errors::ParquetError;

use super::Columnar;
use super::damage::{guarded, possible_lengths};
use super::metadata::readable;
use crate::recording::{CsvWriter, Digits, NumberText, Output, RecordingError};
use crate::sheet::Layout;

/// Rows that a Parquet file is read by.
const ROWS: usize = 4096;
/// Rows that are turned into text together, and how much text is enough, bytes.
const GROUP: usize = 16;
const TEXT: usize = 1 << 16;
/// First bytes of the file format of Arrow; the stream format begins otherwise.
const ARROW_FILE: &[u8; 6] = b"ARROW1";

/// How the text of a file of columns is laid out, where a sheet states this.
///
/// Sentinels, the time columns and its zone hold as stated; separators, lines and encoding do not.
#[must_use]
pub fn layout_of_columns(stated: &Layout) -> Layout {
    stated.as_own_text()
}

type Batches = Box<dyn Iterator<Item = Result<RecordBatch, ArrowError>>>;

/// Returns a file of columns as text: a line of names, with the unit that stands in the metadata of a column behind its name in
/// brackets, then one line for each row.
///
/// Numbers have every digit, single precision those of its exact value. A null and a NaN are blank cells; moments are ISO 8601;
/// a cell of a type that is no number, text or moment holds the name of the type.
///
/// Damage over which the packages underneath panic is an error too; so that nothing of it is printed, the first call puts a panic
/// hook before the one that is there, which lets all other panics through. A program built with `panic = "abort"` ends there.
///
/// # Errors
/// `Io` when the file cannot be read, is damaged, or is not what its name says; damage farther on gives its error when that place
/// is read, and again whenever more is read.
pub fn text_of(mut file: File, kind: Columnar, name: &str) -> Result<Box<dyn Read>, RecordingError> {
    let refuse = |why: String| RecordingError::from_io(name, "read", &io::Error::other(why));
    let (schema, batches) = match kind {
        Columnar::Parquet => {
            readable(&mut file).map_err(refuse)?;
            guarded(|| parquet(file))
        }
        Columnar::Arrow => {
            let mut magic = Vec::new();
            let read = file.by_ref().take(ARROW_FILE.len() as u64).read_to_end(&mut magic);
            let is_file = read.map(|_| magic == *ARROW_FILE).map_err(|e| refuse(e.to_string()))?;
            possible_lengths(&mut file, is_file).map_err(refuse)?;
            guarded(|| arrow(file, is_file))
        }
    }
    .map_err(refuse)?;
    if schema.fields().is_empty() {
        return Err(refuse("it has no columns".into()));
    }
    let mut text = Vec::new();
    let mut csv = CsvWriter::new(Output::to_writer(&mut text, name));
    for field in schema.fields() {
        csv.text(&header(field));
    }
    csv.end_row()?;
    csv.finish()?;
    Ok(Box::new(AsText { batches, batch: None, row: 0, text, taken: 0, failed: None, name: name.into() }))
}

fn parquet(file: File) -> Result<(SchemaRef, Batches), ParquetError> {
    let builder = ParquetRecordBatchReaderBuilder::try_new(file)?;
    let schema = builder.schema().clone();
    Ok((schema, Box::new(builder.with_batch_size(ROWS).build()?)))
}

fn arrow(file: File, is_file: bool) -> Result<(SchemaRef, Batches), ArrowError> {
    if is_file {
        let reader = FileReader::try_new(file, None)?;
        return Ok((reader.schema(), Box::new(reader)));
    }
    let reader = StreamReader::try_new(BufReader::new(file), None)?;
    Ok((reader.schema(), Box::new(reader)))
}

/// The name of a column with its unit.
fn header(field: &Field) -> String {
    match field.metadata().get("unit").filter(|u| !u.is_empty()) {
        Some(unit) if !field.name().ends_with([')', ']']) => format!("{} ({unit})", field.name()),
        _ => field.name().clone(),
    }
}

struct AsText {
    batches: Batches,
    batch: Option<RecordBatch>,
    /// The next row of the batch.
    row: usize,
    text: Vec<u8>,
    taken: usize,
    failed: Option<String>,
    name: String,
}

impl AsText {
    /// Fills the text with the rows that come next; no text is the end.
    fn fill(&mut self) -> Result<(), String> {
        self.text.clear();
        self.taken = 0;
        while self.text.is_empty() {
            let Some(batch) = self.batch.take().filter(|batch| self.row < batch.num_rows()) else {
                self.row = 0;
                self.batch = guarded(|| self.batches.next().transpose())?;
                match self.batch {
                    Some(_) => continue,
                    None => break,
                }
            };
            // a row of a small file can have much text, as one of a dictionary does
            while self.text.len() < TEXT && self.row < batch.num_rows() {
                let mut csv = CsvWriter::new(Output::to_writer(&mut self.text, &self.name));
                for row in (self.row..batch.num_rows()).take(GROUP) {
                    for column in batch.columns() {
                        csv.text(&cell(column.as_ref(), row));
                    }
                    csv.end_row().map_err(|e| e.to_string())?;
                    self.row = row + 1;
                }
                csv.finish().map_err(|e| e.to_string())?;
            }
            self.batch = Some(batch);
        }
        Ok(())
    }
}

impl Read for AsText {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        if self.taken >= self.text.len() {
            if self.failed.is_none() {
                self.failed = self.fill().err();
            }
            if let Some(why) = &self.failed {
                return Err(io::Error::other(why.clone()));
            }
        }
        let left = self.text.get(self.taken..).unwrap_or_default();
        let n = left.len().min(buffer.len());
        if let (Some(to), Some(from)) = (buffer.get_mut(..n), left.get(..n)) {
            to.copy_from_slice(from);
        }
        self.taken += n;
        Ok(n)
    }
}

/// A cell of a column as text.
fn cell(array: &dyn Array, row: usize) -> String {
    fn number<T: ArrowPrimitiveType>(array: &dyn Array, row: usize) -> T::Native {
        array.as_primitive::<T>().value(row)
    }
    fn key<T: ArrowDictionaryKeyType>(array: &dyn Array, row: usize) -> Option<usize> {
        array.as_dictionary::<T>().key(row)
    }
    if array.is_null(row) {
        return String::new();
    }
    let real = |v: f64| NumberText(v, Digits::Shortest).to_string();
    match array.data_type() {
        DataType::Float64 => real(number::<Float64Type>(array, row)),
        DataType::Float32 => real(f64::from(number::<Float32Type>(array, row))),
        DataType::Int8 => number::<Int8Type>(array, row).to_string(),
        DataType::Int16 => number::<Int16Type>(array, row).to_string(),
        DataType::Int32 => number::<Int32Type>(array, row).to_string(),
        DataType::Int64 => number::<Int64Type>(array, row).to_string(),
        DataType::UInt8 => number::<UInt8Type>(array, row).to_string(),
        DataType::UInt16 => number::<UInt16Type>(array, row).to_string(),
        DataType::UInt32 => number::<UInt32Type>(array, row).to_string(),
        DataType::UInt64 => number::<UInt64Type>(array, row).to_string(),
        DataType::Boolean => u8::from(array.as_boolean().value(row)).to_string(),
        DataType::Utf8 => array.as_string::<i32>().value(row).to_string(),
        DataType::LargeUtf8 => array.as_string::<i64>().value(row).to_string(),
        DataType::Utf8View => array.as_string_view().value(row).to_string(),
        DataType::Date32 => moment(i128::from(number::<Date32Type>(array, row)) * 86_400_000_000_000, false),
        DataType::Timestamp(unit, zone) => {
            let (count, nanoseconds) = match unit {
                TimeUnit::Second => (number::<TimestampSecondType>(array, row), 1_000_000_000),
                TimeUnit::Millisecond => (number::<TimestampMillisecondType>(array, row), 1_000_000),
                TimeUnit::Microsecond => (number::<TimestampMicrosecondType>(array, row), 1000),
                TimeUnit::Nanosecond => (number::<TimestampNanosecondType>(array, row), 1),
            };
            // whatever zone they are shown in, they count from the epoch of UTC; without one they are civil time
            moment(i128::from(count) * nanoseconds, zone.is_some())
        }
        DataType::Dictionary(keys, _) => {
            let key = match keys.as_ref() {
                DataType::Int8 => key::<Int8Type>(array, row),
                DataType::Int16 => key::<Int16Type>(array, row),
                DataType::Int32 => key::<Int32Type>(array, row),
                DataType::Int64 => key::<Int64Type>(array, row),
                DataType::UInt8 => key::<UInt8Type>(array, row),
                DataType::UInt16 => key::<UInt16Type>(array, row),
                DataType::UInt32 => key::<UInt32Type>(array, row),
                DataType::UInt64 => key::<UInt64Type>(array, row),
                _ => None,
            };
            let values = array.as_any_dictionary().values();
            key.filter(|key| *key < values.len()).map_or_else(String::new, |key| cell(values.as_ref(), key))
        }
        other => format!("({other})"),
    }
}

/// A moment so many nanoseconds after 1970-01-01T00:00:00, as ISO 8601.
fn moment(nanoseconds: i128, utc: bool) -> String {
    match jiff::Timestamp::from_nanosecond(nanoseconds) {
        Ok(moment) if utc => moment.to_string(),
        Ok(moment) => jiff::tz::TimeZone::UTC.to_datetime(moment).to_string(),
        // beyond the years that can be written: a text that no moment is read from
        Err(_) => format!("({nanoseconds} ns)"),
    }
}
