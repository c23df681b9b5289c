//! A recording, block by block.

use std::{format, io::Read, string::String, vec::Vec};

use jiff::tz::TimeZone;

use super::{
    RecordingError, Texts,
    cell::{CellReader, decode, trim},
    detect::{self, Found, bare_unit, layout_error},
    findings::{Findings, Origin, TimeScale},
    moment::{self, Clock, Interval, Placing, Shape, TimeUnit},
    records::{Kind, LONGEST, Records},
};
use crate::chain::Word;
use crate::measurement::{Column, ColumnRef};
use crate::sheet::Layout;

/// How much of a file is looked at before its first row is read.
const HEAD: usize = 64 << 10;
/// How much of it when stated lines, or long ones, lie further down. One line alone may be longer.
const HEAD_AT_MOST: usize = 4 << 20;

/// Some rows of a recording, column by column.
///
/// All vectors have one element for each row; `seconds`, `time_words` and `time_text` are empty when the recording has neither a
/// time column nor an interval. A block is made once and filled again and again.
#[derive(Clone, Debug, Default)]
pub struct Block {
    capacity: usize,
    /// The columns of numbers in the order of [`Reader::select`].
    pub columns: Vec<Column>,
    /// The columns of text in the order of [`Reader::select`], without blanks around the cells.
    pub texts: Vec<Texts>,
    /// The time as written, several columns joined by one blank; with an interval, the seconds in words.
    pub time_text: Texts,
    /// Seconds on the scale of [`Reader::time_scale`]; NaN where the word is not `Good`.
    pub seconds: Vec<f64>,
    /// One word for each moment: `Good`, `Missing` or `Unreadable`.
    pub time_words: Vec<Word>,
    /// The line of each row, counted from 1; of a row that runs over several lines, the first.
    pub line: Vec<u64>,
}

impl Block {
    /// Returns an empty block for so many rows at a time, at least one.
    #[must_use]
    pub fn new(capacity: usize) -> Self {
        Self { capacity: capacity.max(1), ..Self::default() }
    }

    /// Returns how many rows the block takes at a time.
    #[must_use]
    pub const fn capacity(&self) -> usize {
        self.capacity
    }

    /// Returns how many rows the block holds now.
    #[must_use]
    pub fn rows(&self) -> usize {
        self.line.len()
    }

    fn clear(&mut self, columns: usize, texts: usize) {
        self.columns.resize_with(columns, Column::default);
        for column in &mut self.columns {
            column.values.clear();
            column.words.clear();
        }
        self.texts.resize_with(texts, Texts::default);
        self.texts.iter_mut().for_each(Texts::clear);
        self.time_text.clear();
        self.seconds.clear();
        self.time_words.clear();
        self.line.clear();
    }
}

/// A cell that was met.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CellAt {
    /// Its line, from 1.
    pub line: u64,
    /// The number of its column, from 1.
    pub column: usize,
    /// Its text, at most 80 characters of it.
    pub text: String,
}

/// What was met in one selected column so far.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct ColumnTally {
    /// Cells with the word `Missing`.
    pub missing: u64,
    /// Cells with the word `Unreadable`.
    pub unreadable: u64,
    /// Cells with the word `Saturated`.
    pub saturated: u64,
    /// The first unreadable cell.
    pub first_unreadable: Option<CellAt>,
}

/// What was met in a recording so far.
///
/// Counts come with the first line where it happened.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
#[non_exhaustive]
pub struct Tally {
    /// Rows read.
    pub rows: u64,
    /// One tally for each selected column of numbers.
    pub columns: Vec<ColumnTally>,
    /// The moments.
    pub time: ColumnTally,
    /// Rows with fewer cells than there are columns; the cells they lack are `Missing`.
    pub short_rows: (u64, Option<u64>),
    /// Rows with cells that are not blank and belong to no column.
    pub long_rows: (u64, Option<u64>),
    /// Rows that run over several lines because of a quoted cell.
    pub several_lines: (u64, Option<u64>),
    /// Kept texts with bytes that are no characters in the encoding of the file.
    pub damaged_texts: (u64, Option<u64>),
    /// Moments that the clock showed twice because it was set back; they were placed so that time goes on, or at the earlier.
    pub twice: (u64, Option<u64>),
    /// Moments that the clock never showed because it was set forward; they were placed as if it had not been.
    pub never: (u64, Option<u64>),
    /// Moments before that of the row above.
    pub steps_back: (u64, Option<u64>),
}

fn count(what: &mut (u64, Option<u64>), line: u64) {
    what.0 += 1;
    what.1.get_or_insert(line);
}

/// A recording that is read block by block, in constant memory.
///
/// [`Reader::new`] reads the head and finds what the layout does not state; [`Reader::select`] says which columns are wanted;
/// [`Reader::next_block`] reads them. A cell that is no number has a word and never ends the reading, and no row is dropped: only
/// blank lines and comments are passed over. See [`crate::recording`] for an example.
pub struct Reader<R> {
    records: Records<R>,
    file: String,
    names: Vec<String>,
    units: Option<Vec<String>>,
    findings: Findings,
    cells: CellReader,
    numbers: Vec<usize>,
    texts: Vec<usize>,
    time: Vec<usize>,
    clock: Clock,
    interval: Option<Interval>,
    joined: Vec<u8>,
    last_seconds: f64,
    tally: Tally,
    live: bool,
}

impl<R: Read> Reader<R> {
    /// Begins to read a recording: its head is read and its shape found.
    ///
    /// - `source`: the bytes; no buffer is needed around it.
    /// - `name`: the file as the user knows it, for messages.
    ///
    /// # Errors
    /// `Io` when the source refuses; `NotText` for a file that is mostly bytes which are no text; `TooLong` for a line of more
    /// than 64 MiB; `Layout` when what is stated cannot be or does not fit; `NoSuchName`, `DuplicateName` and `NoSuchNumber`
    /// for the time columns.
    pub fn new(source: R, name: &str, layout: &Layout) -> Result<Self, RecordingError> {
        Self::begin(source, name, layout, false)
    }

    /// Begins to read a recording that is still being made, from a pipe.
    ///
    /// The shape is found from the first 16 lines (or up to the stated first row) instead of 64 KiB, and a block is returned as
    /// soon as no further whole line has arrived. Numbers do not depend on it, unless these lines show another shape.
    ///
    /// # Errors
    /// As [`Reader::new`].
    pub fn live(source: R, name: &str, layout: &Layout) -> Result<Self, RecordingError> {
        Self::begin(source, name, layout, true)
    }

    fn begin(mut source: R, file: &str, layout: &Layout, live: bool) -> Result<Self, RecordingError> {
        let (head, complete) = read_head(&mut source, file, layout, live)?;
        check_text(&head, file)?;
        let mark = if head.starts_with(b"\xef\xbb\xbf") { 3 } else { 0 };
        let whole_lines = match complete {
            true => head.len(),
            false => {
                let known = head.strip_suffix(b"\r").unwrap_or(&head);
                known.iter().rposition(|b| matches!(b, b'\n' | b'\r')).map_or(0, |i| i + 1)
            }
        };
        let lines = head.get(..whole_lines).unwrap_or_default();
        let found = detect::detect(lines, mark, complete, layout, file)?;
        let comment = layout.comment.as_deref().unwrap_or("#").as_bytes();
        let start = (found.first_offset.max(mark), found.first_line.0);
        let records = Records::new(head, source, file, found.separator.0.byte(), comment, start);

        let findings = Findings {
            separator: found.separator,
            decimal: found.decimal,
            encoding: found.encoding,
            byte_order_mark: mark > 0,
            line_end: found.line_end,
            names_line: found.names_line,
            units_line: found.units_line,
            first_line: found.first_line,
            columns: found.names.len(),
            time: (Vec::new(), Origin::Found),
            time_name: String::new(),
            time_format: None,
            time_unit: None,
            time_zone: layout.time_zone.clone(),
            time_scale: TimeScale::None,
            interval: layout.interval,
        };
        let mut reader = Self {
            records,
            file: file.into(),
            names: found.names.clone(),
            units: found.units.clone(),
            findings,
            cells: found.cells.clone(),
            numbers: Vec::new(),
            texts: Vec::new(),
            time: Vec::new(),
            clock: Clock::new(TimeScale::None, None, None, None),
            interval: None,
            joined: Vec::new(),
            last_seconds: f64::NAN,
            tally: Tally::default(),
            live,
        };
        reader.set_time(layout, &found)?;
        Ok(reader)
    }

    /// Settles where time comes from and, from the rows in the head, what it counts from.
    fn set_time(&mut self, layout: &Layout, found: &Found) -> Result<(), RecordingError> {
        let file = self.file.clone();
        if let Some(seconds) = layout.interval {
            let value = format!("{seconds} s");
            if !layout.time.is_empty() {
                return Err(layout_error(
                    &file,
                    "interval",
                    &value,
                    "there is a time column as well; state one of them",
                ));
            }
            let Some(interval) = Interval::new(seconds) else {
                return Err(layout_error(&file, "interval", &value, "it must be a positive number of seconds"));
            };
            self.interval = Some(interval);
            self.clock.scale = TimeScale::Elapsed;
            self.findings.time_scale = TimeScale::Elapsed;
            return Ok(());
        }
        let zone = match &layout.time_zone {
            None => None,
            Some(name) => Some(TimeZone::get(name).map_err(|_| {
                layout_error(&file, "time_zone", name, "the time zone database of this system does not have it")
            })?),
        };
        let mut shape = match &layout.time_format {
            None => None,
            Some(text) => Some(Shape::new(text).map_err(|reason| layout_error(&file, "time_format", text, &reason))?),
        };
        self.findings.time_format = layout.time_format.clone().map(|s| (s, Origin::Stated));
        let origin;
        if layout.time.is_empty() {
            origin = Origin::Found;
            self.time = self.find_time(found);
        } else {
            origin = Origin::Stated;
            for column in &layout.time {
                let index = self.find(column)?;
                self.time.push(index);
            }
        }
        if self.time.is_empty() {
            return Ok(());
        }
        let first = found.first_line.0;
        let mut moments: Vec<Vec<u8>> = Vec::new();
        for row in found.table.rows_from(first) {
            let mut joined = Vec::new();
            join(&mut joined, self.time.iter().map(|&c| trim(row.cell(c), self.cells.encoding)));
            if !joined.is_empty() {
                moments.push(joined);
            }
        }
        if shape.is_none() && self.findings.time_format.is_none() {
            let wanting = |m: &&Vec<u8>| !moment::is_iso(m) && self.cells.value(m).1 == Word::Unreadable;
            let odd: Vec<&Vec<u8>> = moments.iter().filter(wanting).collect();
            let fits = |text: &&&str| {
                2 * odd.len() > moments.len()
                    && odd.iter().filter(|m| moment::has_long_year(m) && moment::reads_as(text, m)).count() * 2
                        > odd.len()
            };
            if let Some(text) = moment::FOUND_SHAPES.iter().find(fits) {
                shape = Shape::new(text).ok();
                self.findings.time_format = Some((String::from(*text), Origin::Found));
            }
        }
        let unit_text = self.time.first().and_then(|&c| self.unit_of(c));
        let unit = unit_text.as_deref().and_then(TimeUnit::from_text);
        self.clock = Clock::new(TimeScale::Unknown, shape, unit, zone);
        let mut probe = self.clock.clone();
        for text in &moments {
            probe.next(text, &self.cells);
            if probe.scale != TimeScale::Unknown {
                self.clock.begin_like(&probe);
                break;
            }
        }
        if unit.is_some() && self.clock.scale == TimeScale::Elapsed {
            self.findings.time_unit = unit_text;
        }
        self.findings.time_name = self.time.iter().map(|&c| self.name_of(c)).collect::<Vec<_>>().join(" ");
        self.findings.time = (self.time.clone(), origin);
        self.findings.time_scale = self.clock.scale;
        Ok(())
    }

    fn name_of(&self, index: usize) -> &str {
        self.names.get(index).map_or("", String::as_str)
    }

    /// The unit of a column: from the line of units, or in brackets at the end of its name.
    fn unit_of(&self, index: usize) -> Option<String> {
        let unit = self.units.as_ref().and_then(|u| u.get(index)).filter(|u| !u.is_empty());
        unit.cloned().or_else(|| split_unit(self.name_of(index)).1.map(String::from))
    }

    /// The time columns of a recording whose layout states none.
    fn find_time(&self, found: &Found) -> Vec<usize> {
        let columns = self.names.len();
        let share = |column: usize, test: &dyn Fn(&[u8]) -> bool| {
            let (mut yes, mut all) = (0u32, 0u32);
            for row in found.table.rows_from(found.first_line.0).take(256) {
                let cell = trim(row.cell(column), self.cells.encoding);
                if !cell.is_empty() {
                    all += 1;
                    yes += u32::from(test(cell));
                }
            }
            2 * yes > all
        };
        let moment = |c: &[u8]| self.cells.value(c).1 == Word::Unreadable && moment::looks_like_moment(c);
        if let Some(column) = (0..columns).find(|&c| share(c, &moment)) {
            let next = column + 1;
            let beside = next < columns && share(next, &moment);
            let clocks = (share(column, &moment::is_clock), beside && share(next, &moment::is_clock));
            let with_clock = |c: &[u8]| c.contains(&b':');
            return match clocks {
                (false, true) if !share(column, &with_clock) => [column, next].into(),
                (true, false) if beside && !share(next, &with_clock) => [next, column].into(),
                _ => [column].into(),
            };
        }
        let numeric = (0..columns).find(|&c| {
            let name = split_unit(self.name_of(c)).0.to_lowercase();
            let unit = self.unit_of(c);
            let unit_of_time = unit.as_deref().is_some_and(|u| u == "s" || TimeUnit::from_text(u).is_some());
            match name.as_str() {
                "time" | "timestamp" | "time stamp" | "elapsed" | "elapsed time" | "seconds" | "sec" | "zeit" => {
                    unit.is_none() || unit_of_time
                }
                "t" => unit_of_time,
                _ => false,
            }
        });
        numeric.into_iter().collect()
    }

    /// Returns the names of the columns without blanks around them; `column 1` and so on when the file has no line of names.
    #[must_use]
    pub fn names(&self) -> &[String] {
        &self.names
    }

    /// Returns the units of the columns without brackets, as many as there are names; `None` when there is no line of units.
    #[must_use]
    pub fn units(&self) -> Option<&[String]> {
        self.units.as_deref()
    }

    /// Returns what was stated, found and assumed about the recording.
    #[must_use]
    pub const fn findings(&self) -> &Findings {
        &self.findings
    }

    /// Returns the time columns, counted from 0, in the order in which they are joined.
    #[must_use]
    pub fn time_columns(&self) -> &[usize] {
        &self.time
    }

    /// Returns what the seconds of a block count from.
    #[must_use]
    pub const fn time_scale(&self) -> TimeScale {
        self.clock.scale
    }

    /// Returns what was met so far.
    #[must_use]
    pub const fn tally(&self) -> &Tally {
        &self.tally
    }

    /// Returns the index, from 0, of the column that a sheet refers to.
    ///
    /// # Errors
    /// `NoSuchName` with the nearest name; `DuplicateName` with the numbers to choose from; `NoSuchNumber`.
    pub fn find(&self, column: &ColumnRef) -> Result<usize, RecordingError> {
        let file = || self.file.clone();
        let names_line = self.findings.names_line.0;
        match column {
            ColumnRef::Number(number) => match number.checked_sub(1).filter(|i| *i < self.names.len()) {
                Some(index) => Ok(index),
                None => Err(self.no_such_number(*number)),
            },
            ColumnRef::Name(name) => {
                let wanted = name.trim();
                let mut found = self.names.iter().enumerate().filter(|(_, n)| *n == wanted).map(|(i, _)| i);
                match (found.next(), found.next()) {
                    (Some(index), None) => Ok(index),
                    (Some(first), Some(second)) => {
                        let numbers = [first, second].into_iter().chain(found).map(|i| i + 1).collect();
                        Err(RecordingError::DuplicateName {
                            file: file(),
                            line: names_line,
                            name: name.clone(),
                            numbers,
                        })
                    }
                    _ => Err(RecordingError::NoSuchName {
                        file: file(),
                        line: names_line,
                        name: name.clone(),
                        nearest: self.nearest(wanted),
                        names: self.names.clone(),
                    }),
                }
            }
        }
    }

    fn no_such_number(&self, number: usize) -> RecordingError {
        let line = match self.findings.names_line.0 {
            0 => self.findings.first_line.0,
            line => line,
        };
        RecordingError::NoSuchNumber { file: self.file.clone(), line, number, columns: self.names.len() }
    }

    /// The name most like this one, if any is like it at all.
    fn nearest(&self, wanted: &str) -> Option<String> {
        let likeness = |name: &String| strsim::jaro_winkler(&wanted.to_lowercase(), &name.to_lowercase());
        // Among names that are equally near, the first one in the file.
        let mut best: Option<(f64, &String)> = None;
        for name in self.names.iter().take(4096).filter(|n| !n.is_empty()) {
            let like = likeness(name);
            if like >= 0.6 && best.is_none_or(|(b, _)| like > b) {
                best = Some((like, name));
            }
        }
        best.map(|(_, name)| name.clone())
    }

    /// Says which columns are read as numbers and which are kept as text; both are counted from 0 and may repeat.
    ///
    /// Counts of the columns begin anew. The time columns are always read.
    ///
    /// # Errors
    /// `NoSuchNumber` for an index past the last column.
    pub fn select(&mut self, numbers: &[usize], texts: &[usize]) -> Result<(), RecordingError> {
        if let Some(&index) = numbers.iter().chain(texts).find(|i| **i >= self.names.len()) {
            return Err(self.no_such_number(index.saturating_add(1)));
        }
        self.numbers = numbers.into();
        self.texts = texts.into();
        self.tally.columns.clear();
        self.tally.columns.resize_with(numbers.len(), ColumnTally::default);
        Ok(())
    }

    /// Returns the seconds of a moment that a sheet states, on the scale of this recording.
    ///
    /// - `text`: ISO 8601 or the shape of the recording; for a recording with numeric time, a number of seconds (`12.5 s`).
    ///
    /// # Errors
    /// `Moment` when the text is no moment; when it states a zone and the recording does not, or the other way round; when the
    /// clock of the stated zone showed it twice or never; when no moment of the recording could be read.
    pub fn parse_moment(&self, text: &str) -> Result<f64, RecordingError> {
        let error = |reason| RecordingError::Moment { file: self.file.clone(), value: text.into(), reason };
        self.clock.moment(text).map_err(error)
    }

    /// Reads the next rows into the block and returns how many; 0 at the end.
    ///
    /// # Errors
    /// `Io`, `TooLong` and `OpenQuote`; the block then holds the rows before.
    pub fn next_block(&mut self, block: &mut Block) -> Result<usize, RecordingError> {
        block.clear(self.numbers.len(), self.texts.len());
        let capacity = block.capacity.max(1);
        while block.line.len() < capacity {
            if self.live && !block.line.is_empty() && !self.records.is_ready() {
                break;
            }
            match self.records.advance()? {
                None => break,
                Some(Kind::Comment | Kind::Blank) => {}
                Some(Kind::Row) => {
                    self.records.split(0)?;
                    self.read_row(block);
                }
            }
        }
        Ok(block.line.len())
    }

    fn read_row(&mut self, block: &mut Block) {
        let line = self.records.line();
        for (i, (column, &index)) in block.columns.iter_mut().zip(&self.numbers).enumerate() {
            let cell = self.records.cell(index);
            let (value, word) = self.cells.value(cell);
            column.values.push(value);
            column.words.push(word);
            if word != Word::Good
                && let Some(tally) = self.tally.columns.get_mut(i)
            {
                note(tally, word, line, index, cell, &self.cells);
            }
        }
        for (column, &index) in block.texts.iter_mut().zip(&self.texts) {
            let text = decode(trim(self.records.cell(index), self.cells.encoding), self.cells.encoding);
            if text.contains('\u{fffd}') {
                count(&mut self.tally.damaged_texts, line);
            }
            column.push(&text);
        }
        if let Some(interval) = self.interval {
            let seconds = interval.at(self.tally.rows);
            block.time_text.push_fmt(format_args!("{seconds}"));
            block.seconds.push(seconds);
            block.time_words.push(Word::Good);
        } else if !self.time.is_empty() {
            self.read_time(block, line);
        }
        block.line.push(line);
        self.tally.rows += 1;
        let columns = self.names.len();
        if self.records.len() < columns {
            count(&mut self.tally.short_rows, line);
        } else if self.records.len() > columns
            && self.records.cells().skip(columns).any(|c| !trim(c, self.cells.encoding).is_empty())
        {
            count(&mut self.tally.long_rows, line);
        }
        if self.records.several_lines() {
            count(&mut self.tally.several_lines, line);
        }
    }

    fn read_time(&mut self, block: &mut Block, line: u64) {
        let encoding = self.cells.encoding;
        let text = match self.time.as_slice() {
            [only] => trim(self.records.cell(*only), encoding),
            several => {
                join(&mut self.joined, several.iter().map(|&c| trim(self.records.cell(c), encoding)));
                self.joined.as_slice()
            }
        };
        block.time_text.push(&decode(text, encoding));
        let (seconds, word, placing) = self.clock.next(text, &self.cells);
        block.seconds.push(seconds);
        block.time_words.push(word);
        self.findings.time_scale = self.clock.scale;
        if word != Word::Good {
            let index = self.time.first().copied().unwrap_or_default();
            note(&mut self.tally.time, word, line, index, text, &self.cells);
            return;
        }
        match placing {
            Placing::Plain => {}
            Placing::Twice => count(&mut self.tally.twice, line),
            Placing::Never => count(&mut self.tally.never, line),
        }
        if seconds < self.last_seconds {
            count(&mut self.tally.steps_back, line);
        }
        self.last_seconds = seconds;
    }

    /// Returns what somebody should know about the rows read so far, one line each as `file:line:column: ...`; empty when all
    /// is well. Missing and saturated cells are counted in [`Reader::tally`] and not repeated here.
    #[must_use]
    pub fn remarks(&self) -> Vec<String> {
        let file = &self.file;
        let mut remarks = Vec::new();
        let mut cells = |tally: &ColumnTally, what: &str| {
            if let Some(cell) = &tally.first_unreadable {
                let others = match tally.unreadable {
                    1 => String::new(),
                    n => format!(", the first of {n}"),
                };
                let CellAt { line, column, text } = cell;
                let text = text.escape_debug();
                remarks.push(format!("{file}:{line}:{column}: value '{text}': not a {what}{others}"));
            }
        };
        for tally in &self.tally.columns {
            cells(tally, "number");
        }
        let moment = if self.findings.time_format.is_some() {
            "moment"
        } else {
            "moment that is known by itself, as 2026-03-12T10:00:00Z is; recording.time_format can state its form"
        };
        cells(&self.tally.time, moment);
        let t = &self.tally;
        for ((number, line), what) in [
            (t.short_rows, "with fewer cells than there are columns: the rest is missing"),
            (t.long_rows, "with more cells than there are columns: the rest is not read"),
            (t.several_lines, "over several lines because of a quoted cell"),
            (t.damaged_texts, "with a kept text that is not in the encoding of the file"),
            (t.twice, "at a time that the clock showed twice: placed so that time goes on"),
            (t.never, "at a time that the clock never showed: placed as if it had not been set forward"),
            (t.steps_back, "earlier than the row above"),
        ] {
            if let Some(line) = line {
                let (rows, first) = if number == 1 { ("row", "") } else { ("rows", ", here the first") };
                remarks.push(format!("{file}:{line}: {number} {rows} {what}{first}"));
            }
        }
        remarks
    }
}

impl<R> core::fmt::Debug for Reader<R> {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        f.debug_struct("Reader").field("file", &self.file).field("findings", &self.findings).finish_non_exhaustive()
    }
}

#[cold]
fn note(tally: &mut ColumnTally, word: Word, line: u64, index: usize, cell: &[u8], cells: &CellReader) {
    match word {
        Word::Missing => tally.missing += 1,
        Word::Saturated => tally.saturated += 1,
        _ => {
            tally.unreadable += 1;
            tally.first_unreadable.get_or_insert_with(|| {
                let text = cell.get(..cell.len().min(400)).unwrap_or_default();
                let text = decode(trim(text, cells.encoding), cells.encoding).chars().take(80).collect();
                CellAt { line, column: index + 1, text }
            });
        }
    }
}

/// Joins cells by one blank; blank cells add nothing.
fn join<'a>(into: &mut Vec<u8>, cells: impl Iterator<Item = &'a [u8]>) {
    into.clear();
    for cell in cells.filter(|c| !c.is_empty()) {
        if !into.is_empty() {
            into.push(b' ');
        }
        into.extend_from_slice(cell);
    }
}

/// Splits `time (ms)` or `time [ms]` into name and unit.
fn split_unit(name: &str) -> (&str, Option<&str>) {
    let at = name.rfind(['(', '[']).filter(|_| name.ends_with([')', ']']));
    match at.and_then(|i| name.split_at_checked(i)) {
        Some((name, unit)) => (name.trim(), Some(bare_unit(unit))),
        None => (name, None),
    }
}

/// Reads enough of a file to find its shape; true when that is all of it.
fn read_head(
    source: &mut impl Read,
    file: &str,
    layout: &Layout,
    live: bool,
) -> Result<(Vec<u8>, bool), RecordingError> {
    let stated = layout.names_line.max(layout.units_line).max(layout.first_line).unwrap_or(0);
    let (bytes, lines) = match (live, layout.first_line) {
        (true, Some(first)) => (0, first.max(stated)),
        (true, None) => (0, stated.saturating_add(16)),
        (false, _) => (HEAD, stated.saturating_add(3)),
    };
    let mut head = std::vec![0; HEAD];
    let (mut filled, mut ends, mut last) = (0, 0u64, b' ');
    loop {
        if ends > 0 && (filled >= bytes && ends >= lines || filled >= HEAD_AT_MOST) {
            break;
        }
        if filled == head.len() {
            if filled >= LONGEST {
                let reason = format!("the line is longer than {} MiB", LONGEST >> 20);
                return Err(RecordingError::TooLong { file: file.into(), line: 1, reason });
            }
            head.resize((2 * filled).min(LONGEST), 0);
        }
        let free = head.get_mut(filled..).unwrap_or_default();
        match source.read(free) {
            Ok(0) => {
                head.truncate(filled);
                return Ok((head, true));
            }
            Ok(count) => {
                let new = free.get(..count).unwrap_or(free);
                for &byte in new {
                    // Whether a carriage return ends the line by itself shows in the next byte.
                    ends += u64::from(byte == b'\n' || last == b'\r');
                    last = byte;
                }
                filled = (filled + count).min(head.len());
            }
            Err(error) if error.kind() == std::io::ErrorKind::Interrupted => {}
            Err(error) => return Err(RecordingError::from_io(file, "read", &error)),
        }
    }
    head.truncate(filled);
    Ok((head, false))
}

/// Refuses a file that is mostly bytes which are no text.
fn check_text(head: &[u8], file: &str) -> Result<(), RecordingError> {
    let refuse = |reason: &str| Err(RecordingError::NotText { file: file.into(), reason: reason.into() });
    if head.starts_with(b"\xff\xfe") || head.starts_with(b"\xfe\xff") {
        return refuse("it is encoded in UTF-16; save it as UTF-8");
    }
    let control = |b: &u8| (*b < b' ' && !matches!(b, b'\t' | b'\n' | b'\r' | 0x0b | 0x0c | 0x1a)) || *b == 0x7f;
    let controls = head.iter().filter(|b| control(b)).count();
    let broken: usize = head.utf8_chunks().map(|c| c.invalid().len()).sum();
    // A few damaged bytes are words in their cells. Compressed and binary data has a share of more than a half.
    let (bytes, junk) = (head.len(), controls + broken);
    if junk >= 16 && 5 * junk > bytes {
        return refuse(&format!("{} % of its first {bytes} bytes are no characters", 100 * junk / bytes.max(1)));
    }
    Ok(())
}
