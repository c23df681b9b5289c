//! A recording through a measurement: rows in, rows out, in constant memory.

use std::boxed::Box;
use std::fmt;
use std::format;
use std::io::Read;
use std::string::{String, ToString};
use std::time::{Duration, Instant};
use std::vec::Vec;

use super::{Block, CsvWriter, Digits, Reader, RecordingError, Texts, TimeScale};
use crate::chain::Word;
use crate::measurement::{
    Column, ColumnRef, Converted, Engine, EveryReading, Measurement, MeasurementError, ShuntVerdict, ShuntWatch,
    Statistics, ZeroPass, ZeroSource,
};
use crate::sheet::Layout;
use crate::uncertainty::{Coverage, decimals, rounded};

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
            Self::Measurement(error) => error.fmt(f),
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
}

/// What became of a recording.
#[derive(Clone, Debug)]
pub struct Summary {
    /// Rows that were read and written.
    pub rows: u64,
    /// For each channel of the sheet, in its order.
    pub channels: Vec<Statistics>,
    /// A line for each zero that was a mean.
    pub zeros: Vec<String>,
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

/// What goes along with a block: the cells that are copied through.
struct Along {
    time: Texts,
    kept: Vec<Texts>,
}

/// Columns of one recording that a measurement needs.
pub(crate) struct Found {
    pub(crate) numbers: Vec<usize>,
    texts: Vec<usize>,
    /// What is to be said of units.
    pub(crate) remarks: Vec<String>,
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
    out: &mut CsvWriter<'_>,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    convert_with(measurement, layout, keep, rows, out, &Options::default(), progress)
}

/// What else a conversion is to give.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Options {
    /// The expanded uncertainty of every reading, in a column `U name (unit, 95 %)` beside each channel; `None` = not.
    pub uncertainty: Option<Coverage>,
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
    out: &mut CsvWriter<'_>,
    options: &Options,
    progress: &mut dyn FnMut(u64),
) -> Result<Summary, ConvertError> {
    let start = Instant::now();
    let name = rows.name().to_string();
    let is_file = rows.is_file();
    let unfit = |reason: String| ConvertError::Unfit { file: name.clone(), reason };
    let unfit_zero = |error: MeasurementError| unfit(error.to_string());
    let mut measurement = measurement.clone();
    refuse_on_pipe(&measurement, is_file).map_err(&unfit)?;

    // zeros that are means come first: from a first reading of the file, or from the rows held back of a pipe
    let mut zeros = Vec::new();
    if is_file && measurement.needs_zero_pass() {
        zeros = zeros_of(&mut measurement, layout, keep, rows)?;
    }

    let source = rows.open()?;
    let mut reader = if is_file { Reader::new(source, &name, layout)? } else { Reader::live(source, &name, layout)? };
    let found = prepare(&mut measurement, &mut reader, keep, &name)?;
    reader.select(&found.numbers, &found.texts)?;
    let mut block = Block::new(ROWS);
    let mut held = Vec::new();
    if measurement.needs_zero_pass() {
        let mut pass = ZeroPass::new(&measurement)?;
        while !pass.is_done() && reader.next_block(&mut block)? > 0 {
            let taken = take(&mut block);
            pass.push(taken.0.clone(), taken.1.clone());
            held.push(taken);
        }
        zeros = pass.finish().map_err(&unfit_zero)?.settle(&mut measurement);
    }

    let remarks = found.remarks.clone();
    let mut table = TableWriter::new(&measurement, &reader, &found, out, options)?;
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
            table.out.flush()?;
        }
        if reader.next_block(&mut block)? == 0 {
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
    let mut remarks = remarks;
    if reader.findings().time_scale == TimeScale::None {
        remarks.push(format!(
            "{name}: no time column was found: recording.time names one, recording.interval stands in for one"
        ));
    }
    for channel in &measurement.channels {
        for from in channel.segments().into_iter().flatten().filter_map(|s| s.from.as_ref()) {
            if from.seconds > table.latest {
                remarks.push(format!(
                    "{name}: channel '{}': the change from {} on begins after the last row",
                    channel.name, from.text
                ));
            }
        }
    }
    let (rows, channels, shunts) = (table.rows, table.statistics, table.watch.finish());
    Ok(Summary {
        rows,
        channels,
        zeros,
        shunts,
        remarks: remarks.into_iter().chain(reader.remarks()).collect(),
        layout: reader.findings().lines(),
        elapsed: start.elapsed(),
    })
}

/// Settles the zeros that are means from a recording, without converting it.
///
/// - `measurement`, `layout`, `rows`: as for [`convert`]; the recording is a file.
/// - Returns the measurement with its zeros, and a line of words for each.
///
/// # Errors
/// As [`convert`].
pub fn settle_zeros(
    measurement: &Measurement,
    layout: &Layout,
    rows: &mut dyn Rows,
) -> Result<(Measurement, Vec<String>), ConvertError> {
    if !rows.is_file() {
        let file = rows.name().to_string();
        return Err(ConvertError::Unfit {
            file,
            reason: "zeros are taken from a file: a pipe is read only once".into(),
        });
    }
    let mut measurement = measurement.clone();
    let said = if measurement.needs_zero_pass() { zeros_of(&mut measurement, layout, &[], rows)? } else { Vec::new() };
    Ok((measurement, said))
}

fn zeros_of(
    measurement: &mut Measurement,
    layout: &Layout,
    keep: &[ColumnRef],
    rows: &mut dyn Rows,
) -> Result<Vec<String>, ConvertError> {
    let name = rows.name().to_string();
    let mut reader = Reader::new(rows.open()?, &name, layout)?;
    let found = prepare(measurement, &mut reader, keep, &name)?;
    reader.select(&found.numbers, &[])?;
    let mut pass = ZeroPass::new(measurement)?;
    let mut block = Block::new(ROWS);
    while !pass.is_done() && reader.next_block(&mut block)? > 0 {
        pass.push(core::mem::take(&mut block.seconds), core::mem::take(&mut block.columns));
    }
    let unfit = |error: MeasurementError| ConvertError::Unfit { file: name.clone(), reason: error.to_string() };
    Ok(pass.finish().map_err(unfit)?.settle(measurement))
}

fn take(block: &mut Block) -> (Vec<f64>, Vec<Column>, Along) {
    (
        core::mem::take(&mut block.seconds),
        core::mem::take(&mut block.columns),
        Along { time: core::mem::take(&mut block.time_text), kept: core::mem::take(&mut block.texts) },
    )
}

/// A pipe is read once: a stretch of time may lie anywhere in it.
fn refuse_on_pipe(measurement: &Measurement, is_file: bool) -> Result<(), String> {
    if is_file {
        return Ok(());
    }
    for channel in &measurement.channels {
        for segment in channel.segments().into_iter().flatten() {
            let where_from = match &segment.zero {
                ZeroSource::Window { from, to } => format!("from {} to {}", from.text, to.text),
                ZeroSource::RowsFrom { from, rows } => format!("from the first {rows} rows after {}", from.text),
                ZeroSource::Stated | ZeroSource::Rows(_) => continue,
            };
            return Err(format!(
                "channel '{}' takes its zero {where_from}, which needs a file: a pipe is read only once",
                channel.name
            ));
        }
    }
    Ok(())
}

/// Finds the columns, checks units and time, and places the sheet's moments.
pub(crate) fn prepare<R: Read>(
    measurement: &mut Measurement,
    reader: &mut Reader<R>,
    keep: &[ColumnRef],
    name: &str,
) -> Result<Found, ConvertError> {
    let unfit = |reason: String| ConvertError::Unfit { file: name.to_string(), reason };
    if reader.findings().columns == 0 {
        return Err(unfit("the file is empty: it has no names and no rows".to_string()));
    }
    let numbers = measurement.inputs.iter().map(|c| reader.find(c)).collect::<Result<Vec<_>, _>>()?;
    let texts = keep.iter().map(|c| reader.find(c)).collect::<Result<Vec<_>, _>>()?;
    let mut remarks = Vec::new();
    check_units(measurement, reader, &numbers, name, &mut remarks)?;
    if measurement.needs_time() && reader.findings().time_scale == TimeScale::None {
        return Err(unfit(
            "the sheet needs the time of each row, but there is no time column: name it in recording.time, or state recording.interval"
                .to_string(),
        ));
    }
    measurement.place_moments(|text| reader.parse_moment(text))?;
    measurement.check_moments()?;
    Ok(Found { numbers, texts, remarks })
}

/// A unit in the file that contradicts the sheet is an error: one of the two is wrong.
fn check_units<R: Read>(
    measurement: &Measurement,
    reader: &Reader<R>,
    numbers: &[usize],
    name: &str,
    remarks: &mut Vec<String>,
) -> Result<(), ConvertError> {
    for channel in &measurement.channels {
        for segment in channel.segments().into_iter().flatten() {
            let mut columns = std::vec![(segment.reading, Some(segment.reads.clone()))];
            columns.extend(segment.paired.map(|p| (p.input, Some(segment.reads.clone()))));
            if let (Some(supply), crate::chain::Supply::Column { exponent }) = (segment.supply, segment.chain.supply) {
                let current = matches!(segment.chain.network, crate::chain::Network::Resistance { .. });
                let unit = if current { crate::sheet::current_unit } else { crate::sheet::voltage_unit };
                columns.push((supply, unit(exponent)));
                columns.extend(segment.supply_paired.map(|p| (p.input, unit(exponent))));
            }
            for (input, stated) in columns {
                let at = numbers.get(input).copied();
                let (Some((at, written)), Some(stated)) = (at.and_then(|at| Some((at, reader.unit(at)?))), stated)
                else {
                    continue;
                };
                let file = format!("{name}:{}", reader.unit_line(at));
                let column = || measurement.inputs.get(input).map_or_else(String::new, ToString::to_string);
                match crate::sheet::same_unit(written, &stated) {
                    Some(true) => {}
                    Some(false) => {
                        let reason = format!(
                            "value '{written}': the unit of column '{}', but channel '{}' reads {stated}; one of the two is wrong",
                            column(),
                            channel.name
                        );
                        return Err(ConvertError::Unfit { file, reason });
                    }
                    None => {
                        let remark = format!(
                            "{file}: value '{written}': the unit of column '{}' is not known here, and was not compared with {stated}",
                            column()
                        );
                        if !remarks.contains(&remark) {
                            remarks.push(remark);
                        }
                    }
                }
            }
        }
    }
    Ok(())
}

/// What of a coverage stands in a header: `95 %`, or `k = 2`.
fn in_words(coverage: Coverage) -> String {
    match coverage {
        Coverage::Factor(k) => format!("k = {k}"),
        Coverage::Probability(p) => format!("{} %", (p * 1e10).round() / 1e8),
    }
}

/// Writes an uncertainty to two significant digits.
fn put_uncertainty(out: &mut CsvWriter<'_>, expanded: f64) {
    match decimals(expanded) {
        Some(places @ 0..=12) => out.number(expanded, Digits::Fixed(places as u8)),
        Some(places) => out.number(rounded(expanded, places), Digits::Shortest),
        None => out.number(expanded, Digits::Shortest),
    };
}

/// Writes converted blocks as a table and counts what it writes.
struct TableWriter<'a, 'o> {
    measurement: &'a Measurement,
    out: &'a mut CsvWriter<'o>,
    header: Vec<String>,
    has_time: bool,
    statistics: Vec<Statistics>,
    rows: u64,
    flags: String,
    watch: ShuntWatch<'a>,
    /// Time of the latest row, s.
    latest: f64,
    every: Option<EveryReading<'a>>,
    /// Expanded uncertainties of one row.
    expanded: Vec<f64>,
}

impl<'a, 'o> TableWriter<'a, 'o> {
    fn new<R: Read>(
        measurement: &'a Measurement,
        reader: &Reader<R>,
        found: &Found,
        out: &'a mut CsvWriter<'o>,
        options: &Options,
    ) -> Result<Self, MeasurementError> {
        let findings = reader.findings();
        let has_time = findings.time_scale != TimeScale::None;
        let mut header = Vec::new();
        if has_time {
            header.push(if findings.time_name.is_empty() {
                "time (s)".to_string()
            } else {
                findings.time_name.clone()
            });
        }
        for column in &found.texts {
            let named = reader.names().get(*column).filter(|n| !n.is_empty()).cloned();
            header.push(named.unwrap_or_else(|| format!("column {}", column + 1)));
        }
        for channel in measurement.channels.iter().filter(|c| c.show) {
            let unit = &channel.unit;
            let unit = if unit.is_empty() { String::new() } else { format!(" ({unit})") };
            header.push(format!("{}{unit}", channel.name));
            if let Some(coverage) = options.uncertainty {
                let unit = if channel.unit.is_empty() { String::new() } else { format!("{}, ", channel.unit) };
                header.push(format!("U {} ({unit}{})", channel.name, in_words(coverage)));
            }
        }
        header.push("flags".to_string());
        Ok(Self {
            statistics: std::vec![Statistics::default(); measurement.channels.len()],
            measurement,
            out,
            header,
            has_time,
            rows: 0,
            flags: String::new(),
            watch: ShuntWatch::new(measurement),
            latest: f64::NEG_INFINITY,
            every: options.uncertainty.map(|coverage| EveryReading::new(measurement, coverage)).transpose()?,
            expanded: Vec::new(),
        })
    }

    fn header(&mut self) -> Result<(), RecordingError> {
        for name in &self.header {
            self.out.text(name);
        }
        self.out.end_row()
    }

    fn write(&mut self, block: &Converted<Along>) -> Result<(), RecordingError> {
        let rows = block.rows();
        for row in 0..rows {
            if self.has_time {
                self.out.text(block.payload.time.get(row).unwrap_or(""));
            }
            for kept in &block.payload.kept {
                self.out.text(kept.get(row).unwrap_or(""));
            }
            self.flags.clear();
            if let Some(every) = &mut self.every {
                every.row(block, row, &mut self.expanded);
            }
            for (i, channel) in self.measurement.channels.iter().enumerate().filter(|(_, c)| c.show) {
                let column = block.results.get(i);
                let value = column.and_then(|c| c.values.get(row)).copied().unwrap_or(f64::NAN);
                let word = column.and_then(|c| c.words.get(row)).copied().unwrap_or(Word::Missing);
                let rests = block.excused.get(i).and_then(|e| e.get(row)) == Some(&true);
                if value.is_nan() {
                    self.out.blank();
                } else {
                    self.out.number(value, channel.decimals.map_or(Digits::Shortest, Digits::Fixed));
                }
                if self.every.is_some() {
                    let expanded = self.expanded.get(i).copied().filter(|_| !value.is_nan()).unwrap_or(f64::NAN);
                    put_uncertainty(self.out, expanded);
                }
                if word != Word::Good && !rests {
                    if !self.flags.is_empty() {
                        self.flags.push(' ');
                    }
                    // a result of a rosette is `R1.direction` here: blanks part the flags
                    self.flags.extend(channel.name.chars().map(|c| if c == ' ' { '.' } else { c }));
                    self.flags.push(':');
                    self.flags.push_str(word.as_str());
                }
            }
            self.out.text(&self.flags);
            self.out.end_row()?;
        }
        self.rows += rows as u64;
        for ((statistics, column), excused) in self.statistics.iter_mut().zip(&block.results).zip(&block.excused) {
            statistics.add(column, excused);
        }
        self.watch.add(block);
        self.latest = block.seconds.iter().copied().filter(|t| t.is_finite()).fold(self.latest, f64::max);
        Ok(())
    }
}
