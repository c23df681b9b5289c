//! The rows of one recording, or of several that are one measurement, as one stream of blocks.

use std::boxed::Box;
use std::format;
use std::io::Read;
use std::slice::IterMut;
use std::string::{String, ToString};
use std::vec::Vec;

use super::{ConvertError, Rows, opened, reader_of};
use crate::measurement::{Column, ColumnRef, Measurement};
use crate::recording::{Block, Findings, Reader, RecordingError, Texts, TimeScale, findings::hour_of, moment::JITTER};
use crate::sheet::{Layout, Pass};

/// How many steps between rows a join may take before it is told as a gap.
const GAP: f64 = 1.5;

/// What goes along with a block: the cells that are copied through.
pub(super) struct Along {
    pub(super) time: Texts,
    pub(super) kept: Vec<Texts>,
}

/// Takes what a block holds, and leaves it empty.
pub(super) fn take(block: &mut Block) -> (Vec<f64>, Vec<Column>, Along) {
    (
        core::mem::take(&mut block.seconds),
        core::mem::take(&mut block.columns),
        Along { time: core::mem::take(&mut block.time_text), kept: core::mem::take(&mut block.texts) },
    )
}

/// Columns of one recording that a measurement needs.
pub(crate) struct Found {
    pub(crate) numbers: Vec<usize>,
    texts: Vec<usize>,
    /// What is to be said of units.
    pub(crate) remarks: Vec<String>,
}

/// Finds the columns, checks units and time, and places the sheet's moments.
pub(crate) fn prepare<R: Read>(
    measurement: &mut Measurement,
    reader: &mut Reader<R>,
    keep: &[ColumnRef],
    name: &str,
) -> Result<Found, ConvertError> {
    let found = find(measurement, reader, keep, name, None)?;
    place(measurement, reader)?;
    Ok(found)
}

/// Finds the columns, and checks units and time; of input columns that are not `needed`, the first column stands there.
pub(super) fn find<R: Read>(
    measurement: &Measurement,
    reader: &Reader<R>,
    keep: &[ColumnRef],
    name: &str,
    needed: Option<&[bool]>,
) -> Result<Found, ConvertError> {
    let unfit = |reason: String| ConvertError::Unfit { file: name.to_string(), reason };
    if reader.findings().columns == 0 {
        return Err(unfit("the file is empty: it has no names and no rows".to_string()));
    }
    let is_needed = |i: usize| needed.is_none_or(|needed| needed.get(i) == Some(&true));
    let inputs = measurement.inputs.iter().enumerate();
    let numbers =
        inputs.map(|(i, c)| if is_needed(i) { reader.find(c) } else { Ok(0) }).collect::<Result<Vec<_>, _>>()?;
    let texts = keep.iter().map(|c| reader.find(c)).collect::<Result<Vec<_>, _>>()?;
    let mut remarks = Vec::new();
    check_units(measurement, reader, &numbers, &is_needed, name, &mut remarks)?;
    if measurement.needs_time() && reader.findings().time_scale == TimeScale::None {
        return Err(unfit(
            "the sheet needs the time of each row, but there is no time column: name it in recording.time, or state recording.interval"
                .to_string(),
        ));
    }
    Ok(Found { numbers, texts, remarks })
}

/// Places the sheet's moments on the time scale of a recording.
pub(super) fn place<R: Read>(measurement: &mut Measurement, reader: &Reader<R>) -> Result<(), ConvertError> {
    measurement.place_moments(|moment| reader.moment(moment))?;
    measurement.check_moments()?;
    Ok(())
}

/// A unit in the file that contradicts the sheet is an error: one of the two is wrong.
fn check_units<R: Read>(
    measurement: &Measurement,
    reader: &Reader<R>,
    numbers: &[usize],
    is_needed: &dyn Fn(usize) -> bool,
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
                let at = numbers.get(input).copied().filter(|_| is_needed(input));
                let (Some((at, written)), Some(stated)) = (at.and_then(|at| Some((at, reader.unit(at)?))), stated)
                else {
                    continue;
                };
                let file = format!("{name}:{}:{}", reader.unit_line(at), at + 1);
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

/// A recording that is read, or several one after the other, each opened when the one before has ended.
pub(super) struct Parts<'a, 'r> {
    waiting: IterMut<'a, &'r mut dyn Rows>,
    /// Its columns are found in every part.
    measurement: Measurement,
    layout: &'a Layout,
    keep: &'a [ColumnRef],
    /// The one that is being read.
    pub(super) reader: Reader<Box<dyn Read + 'a>>,
    name: String,
    /// What is to be said of those that have ended.
    remarks: Vec<String>,
    /// What was found about the layout of the first.
    layout_of_first: Vec<String>,
    /// Name and seconds of the latest row so far, with the last step between two rows.
    latest: Option<(String, f64)>,
    step: Option<f64>,
    previous: f64,
    /// Whether the first moment of the part that is read is still to come.
    joining: bool,
    /// A line for each join.
    joins: Vec<String>,
}

impl<'a, 'r> Parts<'a, 'r> {
    /// Opens the first part, finds its columns and places the moments of the measurement.
    pub(super) fn open(
        parts: &'a mut [&'r mut dyn Rows],
        measurement: &mut Measurement,
        layout: &'a Layout,
        keep: &'a [ColumnRef],
    ) -> Result<Self, ConvertError> {
        let mut waiting = parts.iter_mut();
        let Some(first) = waiting.next() else {
            return Err(ConvertError::Unfit { file: "convert".into(), reason: "there is no recording".into() });
        };
        let (name, is_file) = (first.name().to_string(), first.is_file());
        let mut reader = opened(&mut **first, layout, !is_file)?;
        let found = prepare(measurement, &mut reader, keep, &name)?;
        reader.select(&found.numbers, &found.texts)?;
        Ok(Self {
            waiting,
            measurement: measurement.clone(),
            layout,
            keep,
            reader,
            name,
            remarks: found.remarks,
            layout_of_first: Vec::new(),
            latest: None,
            step: None,
            previous: f64::NAN,
            joining: false,
            joins: Vec::new(),
        })
    }

    /// Reads the next rows, as [`Reader::next_block`]: a block never holds rows of two parts.
    pub(super) fn next_block(&mut self, block: &mut Block) -> Result<usize, ConvertError> {
        loop {
            let rows = self.reader.next_block(block)?;
            if rows > 0 {
                self.follow(block)?;
                return Ok(rows);
            }
            let Some(next) = self.waiting.next() else { return Ok(0) };
            self.end_part();
            let name = next.name().to_string();
            let mut reader = reader_of(&mut **next, self.layout)?;
            let found = find(&self.measurement, &reader, self.keep, &name, None)?;
            reader.select(&found.numbers, &found.texts)?;
            reader.go_on_from(&self.reader);
            self.remarks.extend(found.remarks);
            (self.reader, self.name, self.joining) = (reader, name, true);
        }
    }

    fn end_part(&mut self) {
        self.remarks.extend(self.reader.remarks());
        // another pass for one recording is told where recordings are put in order
        let findings = Findings { repeated_hour: hour_of(self.layout), ..self.reader.findings().clone() };
        let lines = findings.lines();
        if self.layout_of_first.is_empty() {
            self.layout_of_first = lines;
        } else {
            let other: Vec<String> = lines.into_iter().filter(|line| !self.layout_of_first.contains(line)).collect();
            if !other.is_empty() {
                self.remarks.push(format!("{}: unlike the first recording: {}", self.name, other.join("; ")));
            }
        }
    }

    /// Follows the time over rows and joins.
    fn follow(&mut self, block: &Block) -> Result<(), ConvertError> {
        for &seconds in block.seconds.iter().filter(|t| t.is_finite()) {
            if core::mem::take(&mut self.joining)
                && let Some((before, latest)) = &self.latest
            {
                let line = self.join(before, seconds - latest)?;
                self.joins.push(line);
                self.previous = f64::NAN;
            }
            let step = seconds - self.previous;
            if step > 0.0 {
                self.step = Some(step);
            }
            self.previous = seconds;
            if self.latest.as_ref().is_none_or(|(_, latest)| seconds >= *latest) {
                match &mut self.latest {
                    Some((name, latest)) if *name == self.name => *latest = seconds,
                    latest => *latest = Some((self.name.clone(), seconds)),
                }
            }
        }
        Ok(())
    }

    /// What is to be said where this part follows another, so many seconds after its latest row.
    fn join(&self, before: &str, after: f64) -> Result<String, ConvertError> {
        let name = &self.name;
        let step = self.step.map_or_else(String::new, |step| format!(" (rows were {} s apart)", figure(step)));
        if after < 0.0 && self.reader.time_scale() == TimeScale::Elapsed {
            return Err(ConvertError::Unfit {
                file: name.clone(),
                reason: format!(
                    "its time begins {} s before {before} ends, and counts from no common moment: recordings are joined where their time goes on from one to the next, or has a date",
                    figure(-after)
                ),
            });
        }
        Ok(if after < 0.0 {
            format!("{name}: overlaps {before} by {} s: its rows stand behind, none is left out", figure(-after))
        } else if after == 0.0 {
            format!("{name}: begins at the moment at which {before} ends")
        } else if self.step.is_some_and(|step| after > GAP * step) {
            format!("{name}: follows {before} after a gap of {} s{step}", figure(after))
        } else {
            format!("{name}: follows {before} without a gap, {} s later", figure(after))
        })
    }

    /// What is in doubt of the time of the recording that is read.
    pub(super) fn doubt(&self) -> Option<String> {
        self.reader.tally().doubt()
    }

    /// The header of the time column, where there is one.
    pub(super) fn time_header(&self) -> Option<(String, TimeScale)> {
        let findings = self.reader.findings();
        let name = match findings.time_name.as_str() {
            "" => "time (s)".to_string(),
            name => name.to_string(),
        };
        (findings.time_scale != TimeScale::None).then_some((name, findings.time_scale))
    }

    /// The headers of the kept columns.
    pub(super) fn kept_headers(&self) -> Result<Vec<String>, RecordingError> {
        let header = |column: &ColumnRef| {
            let index = self.reader.find(column)?;
            let named = self.reader.names().get(index).filter(|n| !n.is_empty()).cloned();
            Ok(named.unwrap_or_else(|| format!("column {}", index + 1)))
        };
        self.keep.iter().map(header).collect()
    }

    /// Returns the joins, remarks and the layout of the first part, when all has been read.
    pub(super) fn finish(mut self) -> (Vec<String>, Vec<String>, Vec<String>) {
        self.end_part();
        (self.joins, self.remarks, self.layout_of_first)
    }
}

/// Six digits.
fn figure(value: f64) -> f64 {
    format!("{value:.5e}").parse().unwrap_or(value)
}

/// A recording that is joined to others, with the pass that it begins in where the others say so.
pub(super) struct Placed<'p> {
    rows: &'p mut dyn Rows,
    pass: Option<Pass>,
}

impl Rows for Placed<'_> {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        self.rows.open()
    }

    fn name(&self) -> &str {
        self.rows.name()
    }

    fn is_file(&self) -> bool {
        self.rows.is_file()
    }

    fn layout(&self, stated: &Layout) -> Layout {
        let layout = self.rows.layout(stated);
        Layout { repeated_hour: self.pass.or(layout.repeated_hour), ..layout }
    }

    fn holds_words(&self) -> bool {
        self.rows.holds_words()
    }
}

/// Puts recordings into the order of their first moments; says which of them begin in another pass of a repeated hour than stated.
///
/// Recordings without a time column, or with an interval, stay as they were given.
pub(super) fn in_order<'p>(
    parts: &'p mut [&mut dyn Rows],
    layout: &Layout,
) -> Result<(Vec<Placed<'p>>, Vec<String>), ConvertError> {
    let mut starts: Vec<(usize, Option<Start>, String)> = Vec::new();
    for (i, part) in parts.iter_mut().enumerate() {
        let name = part.name().to_string();
        if !part.is_file() {
            // a file that is not there says so itself
            drop(part.open()?);
            return Err(ConvertError::Unfit {
                file: name,
                reason: "recordings are joined from files: a pipe is read only once".into(),
            });
        }
        starts.push((i, start(&mut **part, layout)?, name));
    }
    let mut known = starts.iter().filter_map(|(_, start, name)| Some((start.as_ref()?, name)));
    if let Some((first, first_name)) = known.next()
        && let Some((_, name)) = known.find(|(start, _)| start.kind != first.kind)
    {
        return Err(ConvertError::Unfit {
            file: name.clone(),
            reason: format!("its time is of another kind than that of {first_name}: they cannot be joined"),
        });
    }
    let mut said = Vec::new();
    let mut passes: Vec<Option<Pass>> = std::vec![None; starts.len()];
    let mut order: Vec<usize> = (0..starts.len()).collect();
    let dated = |start: &Option<Start>| start.as_ref().is_some_and(|s| s.kind != "no time");
    if starts.iter().any(|(_, start, _)| dated(start))
        && starts.iter().all(|(_, s, _)| s.as_ref().is_none_or(|s| s.kind != "no time"))
    {
        let names: Vec<&str> = starts.iter().map(|(.., name)| name.as_str()).collect();
        let twice: Vec<bool> = starts.iter().map(|(_, s, _)| s.as_ref().is_some_and(|s| s.twice)).collect();
        let mut seconds: Vec<Option<f64>> = starts.iter().map(|(_, s, _)| s.as_ref().map(|s| s.seconds)).collect();
        if twice.contains(&true) {
            for moved in other_passes(parts, layout, &twice)? {
                let Moved { part, pass, from, overlapped } = moved;
                let name = |i: usize| names.get(i).copied().unwrap_or_default();
                let why = overlapped.map_or_else(
                    || "its time would step back".to_string(),
                    |i| format!("it would overlap {}", name(i)),
                );
                said.push(format!(
                    "{}: begins in an hour that the clock showed twice, in the {pass} pass: in the other {why}",
                    name(part)
                ));
                if let (Some(slot), Some(second)) = (passes.get_mut(part), seconds.get_mut(part)) {
                    (*slot, *second) = (Some(pass), Some(from));
                }
            }
        }
        // a recording without a single moment has no place of its own: it stays behind the one before it
        let mut last = f64::NEG_INFINITY;
        let mut keys: Vec<(f64, usize)> = Vec::new();
        for (i, second) in seconds.iter().enumerate() {
            last = second.unwrap_or(last);
            keys.push((last, i));
        }
        keys.sort_by(|a, b| a.0.total_cmp(&b.0));
        order = keys.into_iter().map(|(_, i)| i).collect();
    }
    let mut slots: Vec<Option<Placed<'p>>> =
        parts.iter_mut().zip(passes).map(|(p, pass)| Some(Placed { rows: &mut **p, pass })).collect();
    Ok((order.into_iter().filter_map(|i| slots.get_mut(i)?.take()).collect(), said))
}

/// A recording that begins in another pass of a repeated hour than stated.
struct Moved {
    part: usize,
    pass: Pass,
    /// Its first moment in that pass.
    from: f64,
    /// The recording that it would overlap in the stated one; `None` where its own time would step back.
    overlapped: Option<usize>,
}

/// From the first moment of a recording to the latest.
#[derive(Clone, Copy)]
struct Span {
    pass: Pass,
    from: f64,
    to: f64,
    /// Whether its time goes on from row to row.
    rises: bool,
}

impl Span {
    fn overlaps(&self, other: &Self) -> bool {
        self.from < other.to && other.from < self.to || self.from == other.from
    }
}

/// How many recordings that may lie in either pass are tried in all combinations; more stay in the stated one.
const MOST_OPEN: usize = 10;

/// Finds recordings that begin in a repeated hour, overlap another in the stated pass, and fewer in the other.
fn other_passes(parts: &mut [&mut dyn Rows], layout: &Layout, twice: &[bool]) -> Result<Vec<Moved>, ConvertError> {
    let stated = layout.repeated_hour.unwrap_or(Pass::First);
    let mut waiting: Vec<(usize, Vec<Span>)> = Vec::new();
    for (i, part) in parts.iter_mut().enumerate() {
        let mut spans = Vec::new();
        let passes = [stated, stated.other()];
        let count = if twice.get(i) == Some(&true) { 2 } else { 1 };
        for pass in passes.into_iter().take(count) {
            spans.extend(span(&mut **part, layout, pass)?);
        }
        // a time that steps back tells that it was the other pass
        if spans.iter().any(|s| s.rises) {
            spans.retain(|s| s.rises);
        } else {
            spans.truncate(1);
        }
        waiting.push((i, spans));
    }
    // in the order of time, so that the order in which they were named decides nothing
    let key = |spans: &[Span]| spans.first().map_or([f64::INFINITY; 2], |s| [s.from, s.to]);
    waiting.sort_by(|(_, a), (_, b)| {
        let ([a, a_end], [b, b_end]) = (key(a), key(b));
        a.total_cmp(&b).then(a_end.total_cmp(&b_end))
    });
    // all ways to place those that may lie in either pass: with the fewest overlaps, and of these with the fewest moved
    let open = waiting.iter().filter(|(_, spans)| spans.len() > 1).count().min(MOST_OPEN);
    let placed = |way: u32| -> Vec<(usize, Span)> {
        let mut bit = 0;
        let taken = waiting.iter().filter_map(|(part, spans)| {
            let (first, other) = (spans.first()?, spans.get(1).filter(|_| bit < MOST_OPEN));
            bit += usize::from(other.is_some());
            let taken = other.filter(|_| way >> (bit - 1) & 1 == 1).unwrap_or(first);
            Some((*part, *taken))
        });
        taken.collect()
    };
    let overlaps = |placed: &[(usize, Span)]| -> usize {
        let pairs = placed.iter().enumerate();
        pairs.map(|(i, (_, a))| placed.iter().skip(i + 1).filter(|(_, b)| a.overlaps(b)).count()).sum()
    };
    let best = (0..1u32 << open).min_by_key(|way| (overlaps(&placed(*way)), way.count_ones(), *way)).unwrap_or(0);
    let placed = placed(best);
    let mut moved = Vec::new();
    for (part, taken) in placed.iter().filter(|(part, taken)| taken.pass != stated && twice.get(*part) == Some(&true)) {
        let spans = waiting.iter().find(|(p, _)| p == part).map_or(&[][..], |(_, spans)| spans);
        // where its time would step back in the stated pass, that is the reason
        let stated_span = spans.first().filter(|s| s.pass == stated);
        let beside = stated_span.and_then(|s| placed.iter().find(|(p, other)| p != part && s.overlaps(other)));
        moved.push(Moved { part: *part, pass: taken.pass, from: taken.from, overlapped: beside.map(|(p, _)| *p) });
    }
    Ok(moved)
}

/// The span of a recording whose first moment lies in this pass.
fn span(rows: &mut dyn Rows, layout: &Layout, pass: Pass) -> Result<Option<Span>, ConvertError> {
    let layout = Layout { repeated_hour: Some(pass), ..layout.clone() };
    let mut reader = reader_of(rows, &layout)?;
    reader.select(&[], &[])?;
    let mut block = Block::new(super::ROWS);
    let mut span: Option<Span> = None;
    let mut before = f64::NEG_INFINITY;
    while reader.next_block(&mut block)? > 0 {
        for &seconds in block.seconds.iter().filter(|t| t.is_finite()) {
            let new = Span { pass, from: seconds, to: seconds, rises: true };
            let span = span.get_or_insert(new);
            span.to = span.to.max(seconds);
            // a clock that is a little off is not set back
            span.rises &= seconds >= before - JITTER;
            before = seconds;
        }
    }
    Ok(span)
}

struct Start {
    kind: &'static str,
    seconds: f64,
    /// Whether the clock showed it twice.
    twice: bool,
}

/// The first moment of a recording; `None` where no row has one.
fn start(rows: &mut dyn Rows, layout: &Layout) -> Result<Option<Start>, ConvertError> {
    let name = rows.name().to_string();
    let mut reader = reader_of(rows, layout)?;
    if layout.interval.is_some() || reader.time_scale() == TimeScale::None {
        return Ok(Some(Start { kind: "no time", seconds: 0.0, twice: false }));
    }
    reader.select(&[], &[])?;
    let mut block = Block::new(64);
    while reader.next_block(&mut block)? > 0 {
        if let Some((seconds, line)) = block.seconds.iter().copied().zip(&block.line).find(|(t, _)| t.is_finite()) {
            let (kind, from) = match reader.time_scale() {
                TimeScale::TimeOfDay => {
                    let reason = "its time has no date, so nobody can tell where it belongs: recordings are joined by moments with a date, or by seconds that go on";
                    return Err(ConvertError::Unfit { file: name, reason: reason.into() });
                }
                TimeScale::Utc => ("moments of UTC", 0.0),
                TimeScale::Civil { .. } => ("moments of civil time", reader.first_day_seconds()),
                _ => ("seconds", 0.0),
            };
            let twice = reader.tally().twice.1 == Some(*line);
            return Ok(Some(Start { kind, seconds: from + seconds, twice }));
        }
    }
    Ok(None)
}
