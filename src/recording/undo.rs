//! Converted values taken back to the readings that gave them.

use std::borrow::ToOwned;
use std::boxed::Box;
use std::format;
use std::io::{self, Read};
use std::string::{String, ToString};
use std::vec::Vec;

use super::reader::name_and_unit;
use super::{Block, ConvertError, CsvWriter, Digits, Output, Reader, RecordingError, Rows, Texts, reader_of};
use crate::chain::{Chain, Element, Inputs, Network, Plan, Reading, Signal, Word};
use crate::measurement::{Channel, ColumnRef, Converted, Engine, Measurement, Source, ZeroSource};
use crate::sheet::{Layout, Sheet};

/// Rows that are taken back together.
const ROWS: usize = 4096;

/// How results are laid out that were written for a sheet with this layout: as they always are, with the time as it was.
#[must_use]
pub fn layout_of_results(layout: &Layout) -> Layout {
    let names: Option<Vec<&str>> = layout
        .time
        .iter()
        .map(|column| match column {
            ColumnRef::Name(name) => Some(name.as_str()),
            ColumnRef::Number(_) => None,
        })
        .collect();
    let time = match (layout.interval, names) {
        (Some(_), _) => std::vec!["time (s)".into()],
        (None, Some(names)) if !names.is_empty() => std::vec![ColumnRef::Name(names.join(" "))],
        _ => Vec::new(),
    };
    Layout { missing: Vec::new(), saturated: Vec::new(), interval: None, time, ..layout.as_own_text() }
}

/// What is written of one reading.
struct Column {
    header: String,
    /// The channel, and one plan for each of its segments.
    channel: usize,
    plans: Vec<Plan>,
}

/// Results of an earlier conversion as the recording that they were made from.
///
/// Each channel that reads a column is taken back through its own chain: with the supply where that was kept in the results, and
/// with the temperatures that it was converted with, which are interpolated as they were then. What has no value has no reading, but
/// the word that `flags` has for it. Columns that are no results go along as they are.
pub struct Undone<'a> {
    earlier: &'a Sheet,
    rows: Box<dyn Rows + 'a>,
    name: String,
    measurement: Measurement,
    layout: Layout,
    columns: Vec<Column>,
}

impl core::fmt::Debug for Undone<'_> {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        f.debug_struct("Undone").field("name", &self.name).finish_non_exhaustive()
    }
}

impl<'a> Undone<'a> {
    /// Returns the recording behind these results.
    ///
    /// - `earlier`: the sheet that they were made by.
    /// - `rows`: the results.
    ///
    /// # Errors
    /// `Unfit` for a sheet whose readings cannot be had back: a zero that is a mean over readings which are gone, a drift that was
    /// taken off, two columns that made one reading, a column that is named by its number, or a temperature that is not shown.
    pub fn new(earlier: &'a Sheet, rows: impl Rows + 'a) -> Result<Self, ConvertError> {
        let name = rows.name().to_string();
        let unfit = |reason: String| ConvertError::Unfit { file: name.clone(), reason };
        let old = &earlier.measurement;
        let mut inputs: Vec<ColumnRef> = Vec::new();
        let mut input = |column: ColumnRef| {
            let at = inputs.iter().position(|c| *c == column);
            at.unwrap_or_else(|| {
                inputs.push(column);
                inputs.len() - 1
            })
        };
        let mut columns: Vec<Column> = Vec::new();
        let mut channels = old.channels.clone();
        for (i, channel) in channels.iter_mut().enumerate() {
            let own = channel.clone();
            let Source::Reading(segments) = &mut channel.source else { continue };
            if !own.show {
                if let Some(other) = old.channels.iter().find(|c| feeds(i, c)) {
                    return Err(unfit(hidden_side(&own.name, &other.name)));
                }
                segments.clear();
                continue;
            }
            let first = segments.first().map(|s| (s.reading, s.reads.clone()));
            if segments.iter().any(|s| Some((s.reading, s.reads.clone())) != first) {
                return Err(unfit(format!(
                    "channel '{}' reads another column, or another unit, from a moment on: that is not taken back",
                    own.name
                )));
            }
            let mut plans = Vec::new();
            for segment in segments.iter_mut() {
                refuse(&own.name, segment).map_err(&unfit)?;
                let plan = segment.chain.plan();
                plans.push(plan.map_err(|e| unfit(format!("channel '{}': {e}", own.name)))?);
                let Some(ColumnRef::Name(header)) = old.inputs.get(segment.reading) else {
                    return Err(unfit(format!(
                        "channel '{}' reads a column by its number, and the columns of results are others: name it",
                        own.name
                    )));
                };
                let header = match name_and_unit(header) {
                    Some(_) => header.clone(),
                    None => format!("{header} ({})", segment.reads),
                };
                if !columns.iter().any(|c| c.header == header || c.channel == i) {
                    columns.push(Column { header, channel: i, plans: Vec::new() });
                }
                if let Some(ColumnRef::Number(number)) = segment.supply.and_then(|s| old.inputs.get(s)) {
                    return Err(unfit(format!(
                        "channel '{}' takes its supply from a column by its number, {number}, and the columns of results are others: name it",
                        own.name
                    )));
                }
                segment.supply = segment.supply.and_then(|s| old.inputs.get(s).cloned()).map(&mut input);
                segment.reading = input(ColumnRef::Name(own.name.clone()));
                segment.reads.clone_from(&own.unit);
                let mut chain = Chain::new(Network::Direct, Element::Direct { scale: 1.0, offset: 0.0 });
                chain.reading = Reading { signal: Signal::Quantity, exponent: 0 };
                segment.chain = chain;
                segment.shunt = None;
                segment.stated.clear();
                segment.covariances.clear();
                segment.tolerance = None;
            }
            if let Some(column) = columns.iter_mut().find(|c| c.channel == i) {
                column.plans = plans;
            }
        }
        if columns.is_empty() {
            return Err(unfit("the earlier sheet shows no channel that reads a column".into()));
        }
        // a mean temperature is made anew of what is shown; stresses and rosettes are not needed
        for (i, channel) in channels.iter_mut().enumerate() {
            match &channel.source {
                Source::Reading(_) => {}
                Source::Combination(terms) => {
                    let hidden = terms.iter().filter_map(|(c, _)| old.channels.get(*c)).find(|c| !c.show);
                    if let (Some(hidden), Some(other)) = (hidden, old.channels.iter().find(|c| feeds(i, c))) {
                        return Err(unfit(hidden_side(&hidden.name, &other.name)));
                    }
                }
                Source::Stress { .. } | Source::Rosette(_) => channel.source = Source::Combination(Vec::new()),
            }
        }
        let measurement = Measurement::new(String::new(), inputs, channels)?;
        let layout = layout_of_results(&earlier.layout);
        Ok(Self { earlier, rows: Box::new(rows), name, measurement, layout, columns })
    }
}

fn hidden_side(hidden: &str, other: &str) -> String {
    format!("channel '{hidden}' is not shown in the results, but '{other}' was corrected by it")
}

/// Whether a channel is the temperature of another.
fn feeds(id: usize, other: &Channel) -> bool {
    other.show
        && other
            .segments()
            .into_iter()
            .flatten()
            .any(|s| s.sides().into_iter().flatten().any(|side| side.channel == id))
}

fn refuse(name: &str, segment: &crate::measurement::Segment) -> Result<(), String> {
    if segment.zero != ZeroSource::Stated {
        return Err(format!(
            "channel '{name}': its zero was a mean over readings that are not here: state it in the earlier sheet, as in zero = {{ at = \"0.0312 mV/V\" }}; what it was stands in the trace and in the summary of that conversion"
        ));
    }
    if segment.again.is_some() {
        return Err(format!("channel '{name}': a drift was taken off by a second zero, which cannot be taken back"));
    }
    if segment.paired.is_some() || segment.supply_paired.is_some() {
        return Err(format!("channel '{name}': two columns made one reading, and cannot be told apart again"));
    }
    Ok(())
}

impl Rows for Undone<'_> {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        let Self { earlier, rows, name, measurement, layout, columns } = self;
        let mut reader = reader_of(&mut **rows, layout)?;
        // changes begin at moments of this time scale
        measurement.place_moments(|moment| reader.moment(moment))?;
        let measurement = &*measurement;
        let mut numbers = Vec::with_capacity(measurement.inputs.len());
        for column in &measurement.inputs {
            let index = numbers.len();
            numbers.push(reader.find(column).map_err(|error| lacking(measurement, name, index, column, error))?);
        }
        check_units(measurement, name, &reader, &numbers)?;
        // everything that is no result of the earlier sheet goes along
        let results: Vec<usize> = earlier
            .measurement
            .channels
            .iter()
            .filter_map(|c| reader.find(&ColumnRef::Name(c.name.clone())).ok())
            .collect();
        let along: Vec<usize> = (0..reader.names().len())
            .filter(|i| !results.contains(i) && !reader.time_columns().contains(i))
            .filter(|i| reader.names().get(*i).is_some_and(|n| n != "flags" && !n.starts_with("U ")))
            // a column that is taken back stands there once
            .filter(|i| {
                let bare = |name: &str| name_and_unit(name).map_or(name, |(bare, _)| bare).to_string();
                let own = reader.names().get(*i).map(|n| bare(n));
                !columns.iter().any(|c| own.as_deref() == Some(bare(&c.header).as_str()))
            })
            .collect();
        // supplies among them stand there as they were written, perhaps with a decimal comma
        let supplies: Vec<(usize, usize)> = numbers
            .iter()
            .enumerate()
            .filter_map(|(input, at)| Some((input, along.iter().position(|a| a == at)?)))
            .collect();
        // the words stand behind what goes along
        let flags = reader.find(&ColumnRef::Name("flags".into())).ok();
        let texts: Vec<usize> = along.iter().copied().chain(flags).collect();
        reader.select(&numbers, &texts)?;
        let engine = Engine::new(measurement).map_err(|error| RecordingError::Layout {
            file: name.clone(),
            key: "--undo",
            value: String::new(),
            reason: error.to_string(),
        })?;
        let mut head: Vec<String> = Vec::new();
        let timed = !reader.time_columns().is_empty();
        head.extend(timed.then(|| reader.findings().time_name.clone()));
        head.extend(along.iter().filter_map(|i| reader.names().get(*i).cloned()));
        head.extend(columns.iter().map(|c| c.header.clone()));
        let mut text = Vec::new();
        let mut csv = CsvWriter::new(Output::to_writer(&mut text, name));
        head.iter().for_each(|name| {
            csv.text(name);
        });
        csv.end_row()?;
        csv.finish()?;
        Ok(Box::new(Back {
            reader,
            engine,
            measurement,
            columns,
            name,
            timed,
            supplies,
            along: along.len(),
            text,
            taken: 0,
            ended: false,
            block: Block::new(ROWS),
        }))
    }

    fn name(&self) -> &str {
        &self.name
    }

    fn is_file(&self) -> bool {
        self.rows.is_file()
    }

    fn layout(&self, stated: &Layout) -> Layout {
        layout_of_results(stated)
    }

    fn holds_words(&self) -> bool {
        true
    }
}

/// Why a column that must be there is not: of a supply, what it is needed for.
fn lacking(
    measurement: &Measurement,
    file: &str,
    input: usize,
    column: &ColumnRef,
    error: RecordingError,
) -> RecordingError {
    let supplied =
        measurement.channels.iter().find(|c| c.segments().into_iter().flatten().any(|s| s.supply == Some(input)));
    match (supplied, &error) {
        (Some(channel), RecordingError::NoSuchName { .. }) => RecordingError::Layout {
            file: file.to_owned(),
            key: "--undo",
            value: column.to_string(),
            reason: format!(
                "channel '{}' took its supply from this column, and no reading of it can be taken back without; results have it where the earlier sheet kept it (keep = [\"{column}\"]), and these do not",
                channel.name
            ),
        },
        _ => error,
    }
}

/// The word that flags have for a channel.
fn word_of<'t>(flags: &'t str, channel: &str) -> Option<&'t str> {
    let word = flags.split(' ').find_map(|flag| flag.strip_prefix(channel)?.strip_prefix(':'))?;
    Word::ALL.iter().any(|w| !w.has_number() && w.as_str() == word).then_some(word)
}

/// The unit beside a result must be that of the earlier sheet.
fn check_units<R: Read>(
    measurement: &Measurement,
    file: &str,
    reader: &Reader<R>,
    numbers: &[usize],
) -> Result<(), RecordingError> {
    for (column, at) in measurement.inputs.iter().zip(numbers) {
        let ColumnRef::Name(name) = column else { continue };
        let channel = measurement.channels.iter().find(|c| c.name == *name);
        let (Some(channel), Some(written)) = (channel, reader.unit(*at)) else { continue };
        if crate::sheet::same_unit(written, &channel.unit) == Some(false) {
            return Err(RecordingError::Layout {
                file: file.to_owned(),
                key: "--undo",
                value: written.to_owned(),
                reason: format!(
                    "the unit of column '{name}', but the earlier sheet gives '{name}' in {}",
                    channel.unit
                ),
            });
        }
    }
    Ok(())
}

/// Texts that go along with a block: time, and the other columns.
type Along = (Texts, Vec<Texts>);

/// Readings as text, made when they are read.
struct Back<'s, R> {
    reader: Reader<R>,
    engine: Engine<'s, Along>,
    measurement: &'s Measurement,
    columns: &'s [Column],
    name: &'s str,
    timed: bool,
    /// Inputs that are supplies, with their places among what goes along.
    supplies: Vec<(usize, usize)>,
    /// How many columns go along; flags, where there are such, stand behind them.
    along: usize,
    text: Vec<u8>,
    taken: usize,
    ended: bool,
    block: Block,
}

impl<R: Read> Back<'_, R> {
    /// Makes more text; false at the end.
    fn more(&mut self) -> Result<bool, RecordingError> {
        self.text.clear();
        self.taken = 0;
        loop {
            if let Some(done) = self.engine.pop() {
                self.write(&done)?;
                return Ok(true);
            }
            if self.ended {
                return Ok(false);
            }
            if self.reader.next_block(&mut self.block)? == 0 {
                self.ended = true;
                self.engine.end();
                continue;
            }
            for (input, place) in &self.supplies {
                let (Some(column), Some(texts)) =
                    (self.block.columns.get_mut(*input), self.block.texts.get_mut(*place))
                else {
                    continue;
                };
                let mut mended = Texts::default();
                for (row, text) in texts.iter().enumerate() {
                    match with_point(text) {
                        Some((text, number)) => {
                            mended.push(&text);
                            if let (Some(value), Some(word)) = (column.values.get_mut(row), column.words.get_mut(row)) {
                                (*value, *word) = (number, Word::Good);
                            }
                        }
                        None => mended.push(text),
                    }
                }
                *texts = mended;
            }
            let along = (core::mem::take(&mut self.block.time_text), core::mem::take(&mut self.block.texts));
            self.engine.push(core::mem::take(&mut self.block.seconds), core::mem::take(&mut self.block.columns), along);
        }
    }

    fn write(&mut self, done: &Converted<Along>) -> Result<(), RecordingError> {
        let mut csv = CsvWriter::new(Output::to_writer(&mut self.text, self.name));
        for row in 0..done.rows() {
            if self.timed {
                csv.text(done.payload.0.get(row).unwrap_or(""));
            }
            let (along, flags) = done.payload.1.split_at_checked(self.along).unwrap_or((&done.payload.1, &[]));
            for text in along {
                csv.text(text.get(row).unwrap_or(""));
            }
            let flags = flags.first().and_then(|f| f.get(row)).unwrap_or("");
            for column in self.columns {
                let reading = done.state(self.measurement, column.channel, row).and_then(|state| {
                    let plan = column.plans.get(state.segment)?;
                    let inputs = Inputs { reading: 0.0, ..state.inputs };
                    plan.forward(state.value, inputs).ok()
                });
                let name = self.measurement.channels.get(column.channel).map_or("", |c| c.name.as_str());
                match (reading, word_of(flags, name)) {
                    // a word stays, whatever somebody has filled in beside it
                    (_, Some(word)) => csv.text(word),
                    (reading, None) => csv.number(reading.unwrap_or(f64::NAN), Digits::Shortest),
                };
            }
            csv.end_row()?;
        }
        csv.finish()?;
        Ok(())
    }
}

/// A number with a decimal comma, with a point; `None` for anything else.
fn with_point(text: &str) -> Option<(String, f64)> {
    let (whole, part) = text.trim().split_once(',')?;
    let digits = !part.is_empty() && part.bytes().all(|b| b.is_ascii_digit());
    let text = format!("{whole}.{part}");
    let number: f64 = text.parse().ok().filter(|_| digits)?;
    Some((text, number))
}

impl<R: Read> Read for Back<'_, R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        while self.taken >= self.text.len() {
            if !self.more().map_err(|e| io::Error::other(e.to_string()))? {
                return Ok(0);
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
