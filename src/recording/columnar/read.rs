//! Files of columns as text.

use std::boxed::Box;
use std::fs::File;
use std::io::{self, BufReader, Read, Seek, SeekFrom};
use std::string::{String, ToString};
use std::vec::Vec;
use std::{format, vec};

use arrow_array::cast::AsArray;
use arrow_array::types::{
    ArrowPrimitiveType, Date32Type, Float32Type, Float64Type, Int8Type, Int16Type, Int32Type, Int64Type,
    TimestampMicrosecondType, TimestampMillisecondType, TimestampNanosecondType, TimestampSecondType, UInt8Type,
    UInt16Type, UInt32Type, UInt64Type,
};
use arrow_array::{Array, RecordBatch};
use arrow_schema::{ArrowError, DataType, Field, SchemaRef, TimeUnit};
use parquet::arrow::arrow_reader::ParquetRecordBatchReaderBuilder;

use super::Columnar;
use crate::recording::{CsvWriter, Digits, NumberText, Output, RecordingError};
use crate::sheet::Layout;

/// Rows that are turned into text together.
const ROWS: usize = 4096;
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
/// # Errors
/// `Io` when the file cannot be read, or is not what its name says.
pub fn text_of(mut file: File, kind: Columnar, name: &str) -> Result<Box<dyn Read>, RecordingError> {
    let refuse = |e: &dyn std::fmt::Display| RecordingError::from_io(name, "read", &io::Error::other(e.to_string()));
    let (schema, batches): (SchemaRef, Batches) = match kind {
        Columnar::Parquet => {
            let builder = ParquetRecordBatchReaderBuilder::try_new(file).map_err(|e| refuse(&e))?;
            let schema = builder.schema().clone();
            (schema, Box::new(builder.with_batch_size(ROWS).build().map_err(|e| refuse(&e))?))
        }
        Columnar::Arrow => {
            let mut magic = [0u8; 6];
            let read =
                file.read(&mut magic).and_then(|n| file.seek(SeekFrom::Start(0)).map(|_| n)).map_err(|e| refuse(&e))?;
            if read == magic.len() && magic == *ARROW_FILE {
                let reader = arrow_ipc::reader::FileReader::try_new(file, None).map_err(|e| refuse(&e))?;
                (reader.schema(), Box::new(reader))
            } else {
                let reader =
                    arrow_ipc::reader::StreamReader::try_new(BufReader::new(file), None).map_err(|e| refuse(&e))?;
                (reader.schema(), Box::new(reader))
            }
        }
    };
    let mut text = Vec::new();
    let mut csv = CsvWriter::new(Output::to_writer(&mut text, name));
    for field in schema.fields() {
        csv.text(&header(field));
    }
    csv.end_row()?;
    csv.finish()?;
    Ok(Box::new(AsText { batches, text, taken: 0, name: name.into() }))
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
    text: Vec<u8>,
    taken: usize,
    name: String,
}

impl Read for AsText {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        while self.taken >= self.text.len() {
            let Some(batch) = self.batches.next() else { return Ok(0) };
            let batch = batch.map_err(|e| io::Error::other(e.to_string()))?;
            self.text.clear();
            self.taken = 0;
            write(&batch, &mut self.text, &self.name).map_err(|e| io::Error::other(e.to_string()))?;
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

fn write(batch: &RecordBatch, text: &mut Vec<u8>, name: &str) -> Result<(), RecordingError> {
    let columns: Vec<Vec<String>> = batch.columns().iter().map(|c| cells(c.as_ref())).collect();
    let mut csv = CsvWriter::new(Output::to_writer(text, name));
    for row in 0..batch.num_rows() {
        for column in &columns {
            csv.text(column.get(row).map_or("", String::as_str));
        }
        csv.end_row()?;
    }
    csv.finish()?;
    Ok(())
}

/// The cells of a column as text.
fn cells(array: &dyn Array) -> Vec<String> {
    fn numbers<T: ArrowPrimitiveType>(array: &dyn Array, text: impl Fn(T::Native) -> String) -> Vec<String> {
        array.as_primitive::<T>().iter().map(|v| v.map(&text).unwrap_or_default()).collect()
    }
    let real = |v: f64| NumberText(v, Digits::Shortest).to_string();
    let of = |texts: Vec<Option<&str>>| texts.into_iter().map(|t| t.unwrap_or_default().to_string()).collect();
    match array.data_type() {
        DataType::Float64 => numbers::<Float64Type>(array, real),
        DataType::Float32 => numbers::<Float32Type>(array, |v| real(f64::from(v))),
        DataType::Int8 => numbers::<Int8Type>(array, |v| v.to_string()),
        DataType::Int16 => numbers::<Int16Type>(array, |v| v.to_string()),
        DataType::Int32 => numbers::<Int32Type>(array, |v| v.to_string()),
        DataType::Int64 => numbers::<Int64Type>(array, |v| v.to_string()),
        DataType::UInt8 => numbers::<UInt8Type>(array, |v| v.to_string()),
        DataType::UInt16 => numbers::<UInt16Type>(array, |v| v.to_string()),
        DataType::UInt32 => numbers::<UInt32Type>(array, |v| v.to_string()),
        DataType::UInt64 => numbers::<UInt64Type>(array, |v| v.to_string()),
        DataType::Boolean => {
            array.as_boolean().iter().map(|v| v.map_or_else(String::new, |v| u8::from(v).to_string())).collect()
        }
        DataType::Utf8 => of(array.as_string::<i32>().iter().collect()),
        DataType::LargeUtf8 => of(array.as_string::<i64>().iter().collect()),
        DataType::Utf8View => of(array.as_string_view().iter().collect()),
        DataType::Date32 => numbers::<Date32Type>(array, |days| moment(i128::from(days) * 86_400_000_000_000, false)),
        DataType::Timestamp(unit, zone) => {
            // whatever zone they are shown in, they count from the epoch of UTC; without one they are civil time
            let utc = zone.is_some();
            match unit {
                TimeUnit::Second => {
                    numbers::<TimestampSecondType>(array, |t| moment(i128::from(t) * 1_000_000_000, utc))
                }
                TimeUnit::Millisecond => {
                    numbers::<TimestampMillisecondType>(array, |t| moment(i128::from(t) * 1_000_000, utc))
                }
                TimeUnit::Microsecond => {
                    numbers::<TimestampMicrosecondType>(array, |t| moment(i128::from(t) * 1000, utc))
                }
                TimeUnit::Nanosecond => numbers::<TimestampNanosecondType>(array, |t| moment(i128::from(t), utc)),
            }
        }
        DataType::Dictionary(..) => {
            let dictionary = array.as_any_dictionary();
            let values = cells(dictionary.values().as_ref());
            if values.is_empty() {
                return vec![String::new(); array.len()];
            }
            let keys = dictionary.normalized_keys();
            let text = |(row, key): (usize, usize)| match array.is_null(row) {
                true => String::new(),
                false => values.get(key).cloned().unwrap_or_default(),
            };
            keys.into_iter().enumerate().map(text).collect()
        }
        other => vec![format!("({other})"); array.len()],
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
