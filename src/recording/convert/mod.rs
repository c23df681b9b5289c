//! A recording through a measurement: rows in, rows out, in constant memory.

mod parts;
mod table;
mod zeros;

use std::boxed::Box;
use std::fmt;
use std::format;
use std::io::Read;
use std::num::NonZeroUsize;
use std::string::{String, ToString};
use std::time::{Duration, Instant};
use std::vec::Vec;

use super::{Block, Reader, RecordingError, ResultTable};
use crate::measurement::{ColumnRef, Engine, Measurement, MeasurementError, ShuntVerdict, Statistics, ZeroPass};
use crate::sheet::Layout;
use crate::uncertainty::Coverage;
pub(crate) use parts::prepare;
use parts::{Parts, take};
use table::TableWriter;
pub use zeros::{OpenRows, settle_zero_files, settle_zeros};

/// Rows that are read and computed together.
const ROWS: usize = 4096;

/// Why a recording cannot be converted.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum ConvertError {
    /// The file.
    Recording(RecordingError),
    /// The channels.
    Measurement(MeasurementError),
    /// Sheet and file do not fit together.
    Unfit {
        /// Name of the recording.
        file: String,
        /// What does not fit, in words.
        reason: String,
    },
}

impl fmt::Display for ConvertError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Recording(error) => error.fmt(f),
            Self::Measurement(error) => match error.place() {
                Some(place) => write!(f, "{place}: {error}"),
                None => error.fmt(f),
            },
            Self::Unfit { file, reason } => write!(f, "{file}: {reason}"),
        }
    }
}

impl std::error::Error for ConvertError {}

impl From<RecordingError> for ConvertError {
    fn from(error: RecordingError) -> Self {
        Self::Recording(error)
    }
}

impl From<MeasurementError> for ConvertError {
    fn from(error: MeasurementError) -> Self {
        Self::Measurement(error)
    }
}

impl ConvertError {
    /// What is wrong with a zero of a recording: told where the sheet states it, if that is one place, with what is in doubt of
    /// the time of this recording.
    fn of_zero(error: &MeasurementError, recording: &str, doubt: Option<String>) -> Self {
        match error.place() {
            Some(place) => {
                let doubt = doubt.map_or_else(String::new, |doubt| format!(", {doubt}"));
                Self::Unfit { file: place.to_string(), reason: format!("{error} (recording {recording}{doubt})") }
            }
            None => Self::Unfit { file: recording.to_string(), reason: error.to_string() },
        }
    }

    /// Returns whether the reader of the results has gone away, which is no failure.
    #[must_use]
    pub fn is_broken_pipe(&self) -> bool {
        matches!(self, Self::Recording(error) if error.is_broken_pipe())
    }
}

/// Where the rows come from.
pub trait Rows {
    /// Opens the rows from their start.
    ///
    /// # Errors
    /// `RecordingError` when they cannot be read.
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError>;

    /// Returns their name, for messages.
    fn name(&self) -> &str;

    /// Returns whether they can be opened again: a file, not a pipe.
    fn is_file(&self) -> bool;

    /// Returns how the text of these rows is laid out, where the sheet states this: otherwise than stated where the text is made of
    /// something else.
    fn layout(&self, stated: &Layout) -> Layout {
        stated.clone()
    }

    /// Returns whether a cell without a number holds the name of its [`Word`](crate::chain::Word), as readings do that were taken
    /// back from results.
    fn holds_words(&self) -> bool {
        false
    }
}

/// Opens rows and finds how they are laid out.
///
/// # Errors
/// As [`Reader::new`].
pub fn reader_of<'r>(rows: &'r mut dyn Rows, stated: &Layout) -> Result<Reader<Box<dyn Read + 'r>>, RecordingError> {
    opened(rows, stated, false)
}

/// Opens rows, those of a pipe as they come.
fn opened<'r>(
    rows: &'r mut dyn Rows,
    stated: &Layout,
    live: bool,
) -> Result<Reader<Box<dyn Read + 'r>>, RecordingError> {
    let (layout, name, words) = (rows.layout(stated), rows.name().to_string(), rows.holds_words());
    let source = rows.open()?;
    let mut reader = if live { Reader::live(source, &name, &layout)? } else { Reader::new(source, &name, &layout)? };
    if words {
        reader.take_words();
    }
    Ok(reader)
}

/// What became of a recording.
#[derive(Clone, Debug)]
pub struct Summary {
    /// Rows that were read and written.
    pub rows: u64,
    /// For each channel of the sheet, in its order.
    pub channels: Vec<Statistics>,
    /// A line for each zero that was a mean, and for each second zero.
    pub zeros: Vec<String>,
    /// A line for each recording that was joined to the one before it.
    pub joins: Vec<String>,
    /// What the shunt steps of the sheet say.
    pub shunts: Vec<ShuntVerdict>,
    /// What the reader found odd: the first unreadable cell of a column, rows of other lengths.
    pub remarks: Vec<String>,
    /// What was found about the layout of the file.
    pub layout: Vec<String>,
    /// How long it took.
    pub elapsed: Duration,
}

impl Summary {
    /// Returns how many readings of shown channels carry a word other than `good`.
    #[must_use]
    pub fn flagged(&self, measurement: &Measurement) -> u64 {
        measurement.channels.iter().zip(&self.channels).filter(|(c, _)| c.show).map(|(_, s)| s.flagged()).sum()
    }
}

/// Converts a recording.
///
/// - `measurement`: the channels; its zeros that are means are settled from this recording.
/// - `layout`, `keep`: what the sheet says of the file, and the columns that are copied through.
/// - `rows`: the recording.
/// - `out`: takes the table: time as written, kept columns, one `name (unit)` column per channel, `flags`.
/// - `progress`: told the number of rows after every block.
///
/// # Errors
/// `ConvertError` for a file that cannot be read or written, columns that are not there, units that contradict the
/// sheet, zeros that cannot be found, and what a pipe cannot give.
pub fn convert(
    measurement: &Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    rows: &mut dyn Rows,
    out: &mut dyn ResultTable,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    convert_with(measurement, layout, keep, rows, out, &Options::default(), progress)
}

/// What else a conversion is to give.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Options {
    /// The expanded uncertainty of every reading, in a column `U name (unit, 95 %)` beside each channel; `None` = not.
    pub uncertainty: Option<Coverage>,
    /// Rows that are read and computed together; `None` = 4096. No number depends on it.
    pub rows: Option<NonZeroUsize>,
}

/// Converts a recording as [`convert`], with more columns.
///
/// # Errors
/// As [`convert`]; also for a coverage that is none.
pub fn convert_with(
    measurement: &Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    rows: &mut dyn Rows,
    out: &mut dyn ResultTable,
    options: &Options,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    run(measurement, layout, keep, &mut [rows], out, options, progress)
}

/// Converts several recordings of one measurement as if they were one, as [`convert_with`].
///
/// They are put into the order of their first moments; those without a date or a time that goes on stay as they are given.
/// There is one zero, and side channels are interpolated across joins. [`Summary::joins`] tells gaps and overlaps. A recording
/// that begins in an hour which its clock showed twice is placed in the pass of [`Layout::repeated_hour`], or in the other where
/// that is the one that the other recordings leave free.
///
/// - `parts`: the recordings, files all; each may have its own layout and order of columns.
///
/// # Errors
/// As [`convert`]; also for times that do not say which recording comes first.
pub fn convert_joined(
    measurement: &Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    parts: &mut [&mut dyn Rows],
    out: &mut dyn ResultTable,
    options: &Options,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    let (mut ordered, said) = parts::in_order(parts, layout)?;
    let mut ordered: Vec<&mut dyn Rows> = ordered.iter_mut().map(|p| p as &mut dyn Rows).collect();
    let summary = run(measurement, layout, keep, &mut ordered, out, options, progress)?;
    Ok(Summary { joins: summary.joins.into_iter().chain(said).collect(), ..summary })
}

fn run(
    measurement: &Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    files: &mut [&mut dyn Rows],
    out: &mut dyn ResultTable,
    options: &Options,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    let start = Instant::now();
    let block_rows = options.rows.map_or(ROWS, NonZeroUsize::get);
    let name = files.first().map_or_else(String::new, |f| f.name().to_string());
    let is_file = files.iter().all(|f| f.is_file());
    let unfit = |reason: String| ConvertError::Unfit { file: name.clone(), reason };
    let mut measurement = measurement.clone();
    if let Err(reason) = zeros::refuse_on_pipe(&measurement, is_file) {
        // a file that is not there says so itself
        for file in files.iter_mut().filter(|f| !f.is_file()) {
            drop(file.open()?);
        }
        return Err(unfit(reason));
    }
    zeros::refuse_files(&measurement, &name)?;

    // zeros that are means come first: from a first reading of the file, or from the rows held back of a pipe
    let mut zeros = Vec::new();
    if is_file {
        zeros = zeros::zeros_of(&mut measurement, layout, keep, files, block_rows)?;
    }

    let mut parts = Parts::open(files, &mut measurement, layout, keep)?;
    let mut block = Block::new(block_rows);
    let mut held = Vec::new();
    if measurement.needs_zero_pass() {
        let mut pass = ZeroPass::new(&measurement)?;
        while !pass.is_done() && parts.next_block(&mut block)? > 0 {
            let taken = take(&mut block);
            pass.push(taken.0.clone(), taken.1.clone());
            held.push(taken);
        }
        let found = pass.finish().map_err(|error| ConvertError::of_zero(&error, &name, parts.doubt()))?;
        zeros = zeros::each_once(found.settle(&mut measurement));
    }

    let mut table =
        TableWriter::new(&measurement, parts.time_header(), parts.kept_headers()?, out, options.uncertainty)?;
    table.header()?;
    let mut engine = Engine::new(&measurement)?;
    for (seconds, columns, along) in held {
        engine.push(seconds, columns, along);
    }
    loop {
        while let Some(block) = engine.pop() {
            table.write(&block)?;
            progress(table.rows);
        }
        if !is_file {
            table.out.pass_on()?;
        }
        if parts.next_block(&mut block)? == 0 {
            break;
        }
        let (seconds, columns, along) = take(&mut block);
        engine.push(seconds, columns, along);
    }
    engine.end();
    while let Some(block) = engine.pop() {
        table.write(&block)?;
        progress(table.rows);
    }
    let without_time = parts.time_header().is_none();
    let (joins, of_parts, layout) = parts.finish();
    let mut remarks = Vec::new();
    if without_time {
        remarks.push(format!(
            "{name}: no time column was found: recording.time names one, recording.interval stands in for one"
        ));
    }
    for channel in &measurement.channels {
        for segment in channel.segments().into_iter().flatten() {
            if let Some(from) = segment.from.as_ref().filter(|from| from.seconds > table.latest) {
                let (said, change) =
                    (&from.place, format!("channel '{}': the change from {}", channel.name, from.text));
                remarks.push(match said.is_empty() {
                    true => format!("{name}: {change} on begins after the last row"),
                    false => format!("{said}: {change} on begins after the last row (recording {name})"),
                });
            }
            if options.uncertainty.is_some() && segment.again.as_ref().is_some_and(|again| again.drift.is_some()) {
                remarks.push(format!("channel '{}': U does not contain the drift that is taken off", channel.name));
            }
        }
    }
    let (rows, channels, shunts) = (table.rows, table.statistics, table.watch.finish());
    Ok(Summary {
        rows,
        channels,
        zeros,
        shunts,
        joins,
        remarks: remarks.into_iter().chain(of_parts).collect(),
        layout,
        elapsed: start.elapsed(),
    })
}
