//! Results as files of columns.

use std::boxed::Box;
use std::collections::HashMap;
use std::format;
use std::io::{self, Write};
use std::string::{String, ToString};
use std::sync::{Arc, Mutex};
use std::vec::Vec;

use arrow_array::builder::{Float32Builder, Float64Builder, StringBuilder, TimestampMicrosecondBuilder};
use arrow_array::{ArrayRef, RecordBatch};
use arrow_schema::{DataType, Field, Schema, SchemaRef, TimeUnit};
use parquet::arrow::ArrowWriter;
use parquet::basic::{Compression, ZstdLevel};
use parquet::file::properties::WriterProperties;

use super::Columnar;
use crate::chain::Word;
use crate::recording::{Digits, Fingerprint, Head, HeadKind, Output, RecordingError, ResultTable, TimeScale};
use crate::sheet::Sheet;

/// Rows of a batch.
const ROWS: usize = 16_384;
/// Cells of a group of rows, which is held in memory.
const CELLS: usize = 4 << 20;

/// How wide the numbers of results are.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Width {
    /// 64 bits: every digit.
    #[default]
    Double,
    /// 32 bits: rounded once, to about seven digits.
    Single,
}

/// What a result was made by, for the metadata.
#[derive(Clone, Debug, Default)]
pub struct Made {
    /// SHA-256 of the sheet.
    pub sheet_sha256: String,
    /// Its title.
    pub title: String,
    /// For each channel its unit and its chain in words.
    pub channels: Vec<(String, Vec<String>)>,
}

impl Made {
    /// Returns what is said of results by this sheet.
    #[must_use]
    pub fn by(sheet: &Sheet, sheet_sha256: &str) -> Self {
        let channels = sheet.measurement.channels.iter().enumerate();
        Self {
            sheet_sha256: sheet_sha256.into(),
            title: sheet.measurement.title.clone(),
            channels: channels.map(|(i, c)| (c.unit.clone(), sheet.describe(i))).collect(),
        }
    }
}

/// Bytes on their way from a writer that must be free to move between threads.
#[derive(Clone, Default)]
struct Passed(Arc<Mutex<Vec<u8>>>);

impl Write for Passed {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        match self.0.lock() {
            Ok(mut passed) => passed.extend_from_slice(bytes),
            Err(_) => return Err(io::Error::other("a writer failed before")),
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

enum Cells {
    Text(StringBuilder),
    Double(Float64Builder),
    Single(Float32Builder),
    Moment(TimestampMicrosecondBuilder),
}

enum Packing {
    Parquet(Box<ArrowWriter<Passed>>),
    Arrow(Box<arrow_ipc::writer::FileWriter<Passed>>),
}

/// Writes results as a Parquet or Arrow file.
///
/// Columns are named as in a text; the time stands there as it was written, and once more as a moment of UTC or as seconds. Each
/// column of a channel has its unit and its chain in words in its metadata, the file the SHA-256 of the sheet and what the words mean.
pub struct ColumnarWriter<'a> {
    output: Output<'a>,
    kind: Columnar,
    width: Width,
    made: Made,
    passed: Passed,
    packing: Option<Packing>,
    schema: Option<SchemaRef>,
    cells: Vec<Cells>,
    at: usize,
    rows: usize,
}

impl core::fmt::Debug for ColumnarWriter<'_> {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        f.debug_struct("ColumnarWriter").field("output", &self.output).finish_non_exhaustive()
    }
}

impl<'a> ColumnarWriter<'a> {
    /// Returns a writer of results on top of an output.
    #[must_use]
    pub fn new(output: Output<'a>, kind: Columnar, width: Width, made: Made) -> Self {
        Self {
            output,
            kind,
            width,
            made,
            passed: Passed::default(),
            packing: None,
            schema: None,
            cells: Vec::new(),
            at: 0,
            rows: 0,
        }
    }

    fn refuse(&self, error: &dyn std::fmt::Display) -> RecordingError {
        RecordingError::from_io(self.output.name(), "write", &io::Error::other(error.to_string()))
    }

    fn field(&self, head: &Head) -> Field {
        let number = if self.width == Width::Single { DataType::Float32 } else { DataType::Float64 };
        let said = |i: usize| self.made.channels.get(i);
        let mut more = HashMap::new();
        let data = match head.kind {
            HeadKind::Time(_) | HeadKind::Kept | HeadKind::Flags => DataType::Utf8,
            HeadKind::Value(i) => {
                if let Some((unit, words)) = said(i) {
                    more.insert("unit".to_string(), unit.clone());
                    more.insert("chain".to_string(), words.join("\n"));
                }
                number
            }
            HeadKind::Uncertainty(i) => {
                if let Some((unit, _)) = said(i) {
                    more.insert("unit".to_string(), unit.clone());
                }
                number
            }
        };
        Field::new(&head.name, data, true).with_metadata(more)
    }

    /// The time as a number, beside its text.
    fn second_time(scale: TimeScale) -> Field {
        let seconds = |from: String| {
            let more = [("unit".to_string(), "s".to_string()), ("counts from".to_string(), from)];
            Field::new("seconds", DataType::Float64, true).with_metadata(more.into_iter().collect::<HashMap<_, _>>())
        };
        match scale {
            TimeScale::Utc => {
                Field::new("moment", DataType::Timestamp(TimeUnit::Microsecond, Some("UTC".into())), true)
            }
            TimeScale::Civil { year, month, day } => seconds(format!("{year:04}-{month:02}-{day:02}T00:00:00")),
            TimeScale::TimeOfDay => seconds("midnight of the first day".into()),
            _ => seconds("the recording's own zero".into()),
        }
    }

    fn empty(&self) -> Vec<Cells> {
        let fields = self.schema.iter().flat_map(|s| s.fields().iter());
        let cells = fields.map(|field| match field.data_type() {
            DataType::Float64 => Cells::Double(Float64Builder::new()),
            DataType::Float32 => Cells::Single(Float32Builder::new()),
            DataType::Timestamp(..) => Cells::Moment(TimestampMicrosecondBuilder::new().with_timezone("UTC")),
            _ => Cells::Text(StringBuilder::new()),
        });
        cells.collect()
    }

    /// Writes the rows that were gathered.
    fn batch(&mut self) -> Result<(), RecordingError> {
        let Some(schema) = self.schema.clone() else { return Ok(()) };
        let empty = self.empty();
        let full = core::mem::replace(&mut self.cells, empty);
        self.rows = 0;
        let columns: Vec<ArrayRef> = full
            .into_iter()
            .map(|cells| -> ArrayRef {
                match cells {
                    Cells::Text(mut b) => Arc::new(b.finish()),
                    Cells::Double(mut b) => Arc::new(b.finish()),
                    Cells::Single(mut b) => Arc::new(b.finish()),
                    Cells::Moment(mut b) => Arc::new(b.finish()),
                }
            })
            .collect();
        let batch = RecordBatch::try_new(schema, columns).map_err(|e| self.refuse(&e))?;
        let written = match &mut self.packing {
            Some(Packing::Parquet(writer)) => writer.write(&batch).map_err(|e| e.to_string()),
            Some(Packing::Arrow(writer)) => writer.write(&batch).map_err(|e| e.to_string()),
            None => Ok(()),
        };
        written.map_err(|e| self.refuse(&e))?;
        self.hand_over()
    }

    /// Passes on the bytes that the writer has made so far.
    fn hand_over(&mut self) -> Result<(), RecordingError> {
        let bytes = self.passed.0.lock().map(|mut passed| core::mem::take(&mut *passed)).unwrap_or_default();
        self.output.put(&bytes)
    }

    /// Ends the file and lets it appear, as [`Output::finish`].
    ///
    /// # Errors
    /// As [`Output::finish`].
    pub fn finish(mut self) -> Result<Option<Fingerprint>, RecordingError> {
        if self.rows > 0 {
            self.batch()?;
        }
        let ended = match self.packing.take() {
            Some(Packing::Parquet(writer)) => writer.close().map(drop).map_err(|e| e.to_string()),
            Some(Packing::Arrow(mut writer)) => writer.finish().map_err(|e| e.to_string()),
            None => Ok(()),
        };
        ended.map_err(|e| self.refuse(&e))?;
        self.hand_over()?;
        self.output.finish()
    }
}

impl ResultTable for ColumnarWriter<'_> {
    fn begin(&mut self, heads: &[Head]) -> Result<(), RecordingError> {
        let mut fields = Vec::new();
        for head in heads {
            fields.push(self.field(head));
            if let HeadKind::Time(scale) = head.kind {
                fields.push(Self::second_time(scale));
            }
        }
        let words: Vec<&str> = Word::ALL.iter().map(|w| w.as_str()).collect();
        let more = [
            ("made by", format!("ohmwright {}", env!("CARGO_PKG_VERSION"))),
            ("sheet title", self.made.title.clone()),
            ("sheet sha256", self.made.sheet_sha256.clone()),
            ("flags", format!("channel:word, parted by blanks; a word is one of {}", words.join(", "))),
        ];
        let more: HashMap<String, String> = more.into_iter().map(|(k, v)| (k.to_string(), v)).collect();
        let columns = fields.len().max(1);
        let schema: SchemaRef = Arc::new(Schema::new_with_metadata(fields, more));
        let packing = match self.kind {
            Columnar::Parquet => {
                let level = ZstdLevel::try_new(1).map_err(|e| self.refuse(&e))?;
                let properties = WriterProperties::builder()
                    .set_compression(Compression::ZSTD(level))
                    .set_max_row_group_row_count(Some((CELLS / columns).max(ROWS)))
                    .build();
                let writer = ArrowWriter::try_new(self.passed.clone(), schema.clone(), Some(properties));
                Packing::Parquet(Box::new(writer.map_err(|e| self.refuse(&e))?))
            }
            Columnar::Arrow => {
                let writer = arrow_ipc::writer::FileWriter::try_new(self.passed.clone(), &schema);
                Packing::Arrow(Box::new(writer.map_err(|e| self.refuse(&e))?))
            }
        };
        self.packing = Some(packing);
        self.schema = Some(schema);
        self.cells = self.empty();
        Ok(())
    }

    fn put_time(&mut self, text: &str, seconds: f64) {
        self.put_text(text);
        let finite = seconds.is_finite();
        match self.cells.get_mut(self.at) {
            Some(Cells::Moment(b)) => b.append_option(finite.then(|| libm::round(seconds * 1e6) as i64)),
            Some(Cells::Double(b)) => b.append_option(finite.then_some(seconds)),
            _ => {}
        }
        self.at += 1;
    }

    fn put_text(&mut self, text: &str) {
        if let Some(Cells::Text(b)) = self.cells.get_mut(self.at) {
            b.append_value(text);
        }
        self.at += 1;
    }

    fn put_number(&mut self, value: f64, _: Digits) {
        let there = !value.is_nan();
        match self.cells.get_mut(self.at) {
            Some(Cells::Double(b)) => b.append_option(there.then_some(value)),
            Some(Cells::Single(b)) => b.append_option(there.then_some(value as f32)),
            _ => {}
        }
        self.at += 1;
    }

    fn end_row(&mut self) -> Result<(), RecordingError> {
        self.at = 0;
        self.rows += 1;
        if self.rows >= ROWS { self.batch() } else { Ok(()) }
    }

    fn pass_on(&mut self) -> Result<(), RecordingError> {
        Ok(())
    }
}
