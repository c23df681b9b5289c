//! A recording, block by block.

mod block;
mod head;
mod tally;
mod time;

use std::{
    io::Read,
    string::{String, ToString},
    vec::Vec,
};

pub use block::Block;
pub use tally::{CellAt, ColumnTally, Tally};
use tally::{count, note};

use super::{
    RecordingError,
    cell::{CellReader, decode, trim},
    characters::Characters,
    detect::{self, bare_unit},
    findings::{Findings, Origin, TimeScale, hour_of},
    moment::{Clock, Interval},
    records::{Kind, Records},
};
use crate::chain::Word;
use crate::measurement::{ColumnRef, Moment};
use crate::sheet::{Encoding, Layout};

/// A recording that is read block by block, in constant memory.
///
/// [`Reader::new`] reads the head and finds what the layout does not state; [`Reader::select`] says which columns are wanted;
/// [`Reader::next_block`] reads them. A cell that is no number has a word and never ends the reading, and no row is dropped: only
/// blank lines and comments are passed over. See [`crate::recording`] for an example.
pub struct Reader<R> {
    records: Records<Characters<R>>,
    file: String,
    names: Vec<String>,
    /// The names without the units in brackets behind them, where there are such.
    bare_names: Vec<Option<String>>,
    units: Option<Vec<String>>,
    findings: Findings,
    cells: CellReader,
    numbers: Vec<usize>,
    texts: Vec<usize>,
    time: Vec<usize>,
    clock: Clock,
    interval: Option<Interval>,
    /// Rows of the recordings before this one, for an interval that goes on.
    rows_before: u64,
    joined: Vec<u8>,
    last_seconds: f64,
    tally: Tally,
    /// Lines of names and of the first row, with their cells, where these are not as many.
    ragged: Option<[(u64, usize); 2]>,
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

    fn begin(source: R, file: &str, layout: &Layout, live: bool) -> Result<Self, RecordingError> {
        let mut source = Characters::new(source, layout.encoding);
        let (head, complete) = head::read_head(&mut source, file, layout, live)?;
        let wide = source.wide();
        if let (Some(_), Some(stated)) = (wide, layout.encoding.filter(|e| *e != Encoding::Utf16)) {
            let reason = "the file begins with the byte-order mark of UTF-16";
            return Err(detect::layout_error(file, "encoding", &stated.to_string(), reason));
        }
        // what was UTF-16 is UTF-8 from here on
        let mut layout = layout.clone();
        let origin = if layout.encoding.is_some() { Origin::Stated } else { Origin::Found };
        if wide.is_some() || layout.encoding == Some(Encoding::Utf16) {
            layout.encoding = Some(Encoding::Utf8);
        }
        let layout = &layout;
        head::check_text(&head, file)?;
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
            encoding: if wide.is_some() { (Encoding::Utf16, origin) } else { found.encoding },
            byte_order_mark: mark > 0 || wide == Some(true),
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
            repeated_hour: hour_of(layout),
            time_scale: TimeScale::None,
            interval: layout.interval,
            no_rows: complete && found.table.rows_from(found.first_line.0).next().is_none(),
        };
        let mut reader = Self {
            records,
            file: file.into(),
            names: found.names.clone(),
            bare_names: found.names.iter().map(|n| name_and_unit(n).map(|(name, _)| name.to_string())).collect(),
            units: found.units.clone(),
            findings,
            cells: found.cells.clone(),
            numbers: Vec::new(),
            texts: Vec::new(),
            time: Vec::new(),
            clock: Clock::new(TimeScale::None, None, None, None),
            interval: None,
            rows_before: 0,
            joined: Vec::new(),
            last_seconds: f64::NAN,
            tally: Tally::default(),
            ragged: found.table.ragged(found.names_line.0, found.first_line.0),
            live,
        };
        reader.set_time(layout, &found)?;
        Ok(reader)
    }

    /// Takes the name of a word in a cell for that word.
    pub(super) fn take_words(&mut self) {
        self.cells.words = true;
    }

    /// Goes on where the recording before ended, on its time scale.
    pub(super) fn go_on_from(&mut self, before: &Self) {
        self.clock.go_on_from(&before.clock);
        self.rows_before = before.rows_before + before.tally.rows;
    }

    /// Seconds from 1970-01-01 to second 0 of civil moments.
    pub(super) fn first_day_seconds(&self) -> f64 {
        self.clock.first_day_seconds()
    }

    fn name_of(&self, index: usize) -> &str {
        self.names.get(index).map_or("", String::as_str)
    }

    /// What stands for a unit of a column: in the line of units, or in brackets at the end of its name.
    fn unit_of(&self, index: usize) -> Option<&str> {
        let unit = self.units.as_ref().and_then(|u| u.get(index)).filter(|u| !u.is_empty());
        unit.map(String::as_str).or_else(|| split_unit(self.name_of(index)).1)
    }

    /// Returns the unit of a column, counted from 0: from the line of units, or in brackets at the end of its name where that is
    /// a unit, as in `CH01 (mV/V)`.
    #[must_use]
    pub fn unit(&self, index: usize) -> Option<&str> {
        let own = self.units.as_ref().and_then(|u| u.get(index)).filter(|u| !u.is_empty());
        own.map(String::as_str).or_else(|| name_and_unit(self.name_of(index)).map(|(_, unit)| unit))
    }

    /// Returns the line that a column's unit stands in, counted from 1.
    pub(super) fn unit_line(&self, index: usize) -> u64 {
        let own = self.units.as_ref().and_then(|u| u.get(index)).is_some_and(|u| !u.is_empty());
        if own { self.findings.units_line.0 } else { self.findings.names_line.0 }
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

    /// Returns the index, from 0, of the column that a sheet refers to: by its number, by the whole text in the line of names,
    /// or by that text without a unit in brackets at its end.
    ///
    /// # Errors
    /// `NoSuchName` with the nearest name; `DuplicateName` with the numbers to choose from; `NoSuchNumber`; `Layout` for a
    /// number that is the header of another column.
    pub fn find(&self, column: &ColumnRef) -> Result<usize, RecordingError> {
        let file = || self.file.clone();
        let names_line = self.findings.names_line.0;
        match column {
            ColumnRef::Number(number) => match number.checked_sub(1).filter(|i| *i < self.names.len()) {
                Some(index) => match self.headed(*number).filter(|other| *other != index) {
                    None => Ok(index),
                    Some(other) => Err(RecordingError::Layout {
                        file: file(),
                        key: "column",
                        value: number.to_string(),
                        reason: std::format!(
                            "column {number} has the header '{}', and the header '{number}' stands over column {}: in quotes it is the header (column = \"{number}\"; in a list the cell \"\"\"{number}\"\"\", with three), and column {number} is named by its own",
                            self.names.get(index).map_or("", String::as_str),
                            other + 1
                        ),
                    }),
                },
                None => Err(self.no_such_number(*number)),
            },
            ColumnRef::Name(name) => {
                let wanted = name.trim();
                // the whole text first, then the name before a unit in brackets
                let whole = self.names.iter().enumerate().filter(|(_, n)| *n == wanted);
                let mut found: Vec<usize> = whole.map(|(i, _)| i).collect();
                if found.is_empty() {
                    let bare = self.bare_names.iter().enumerate();
                    found = bare.filter(|(_, n)| n.as_deref() == Some(wanted)).map(|(i, _)| i).collect();
                }
                let mut found = found.into_iter();
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
                        ragged: self.ragged.map(std::boxed::Box::new),
                    }),
                }
            }
        }
    }

    /// The column whose header is this number, where there is a line of names.
    fn headed(&self, number: usize) -> Option<usize> {
        let text = number.to_string();
        (self.findings.names_line.0 > 0).then(|| self.names.iter().position(|name| *name == text)).flatten()
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
        self.moment(&Moment::unplaced(text))
    }

    /// As [`parse_moment`](Self::parse_moment), of a moment that may know where it is written.
    pub(super) fn moment(&self, moment: &Moment) -> Result<f64, RecordingError> {
        let Moment { text, place, .. } = moment;
        self.clock.moment(text).map_err(|reason| RecordingError::Moment {
            file: self.file.clone(),
            place: place.clone(),
            value: text.clone(),
            reason,
        })
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
            let seconds = interval.at(self.rows_before + self.tally.rows);
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

    /// Returns what somebody should know about the rows read so far, one line each as `file:line:column: ...`; empty when all
    /// is well. Missing and saturated cells are counted in [`Reader::tally`] and not repeated here.
    #[must_use]
    pub fn remarks(&self) -> Vec<String> {
        let moment = if self.clock.scale == TimeScale::Elapsed {
            "number, as the time of the other rows is"
        } else if self.findings.time_format.is_some() {
            "moment"
        } else {
            "moment that is known by itself, as 2026-03-12T10:00:00Z is; recording.time_format can state its form"
        };
        self.tally.remarks(&self.file, moment)
    }
}

impl<R> core::fmt::Debug for Reader<R> {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        f.debug_struct("Reader").field("file", &self.file).field("findings", &self.findings).finish_non_exhaustive()
    }
}

/// Splits `CH01 (mV/V)` into name and unit, where that is a unit.
pub(super) fn name_and_unit(name: &str) -> Option<(&str, &str)> {
    let (name, unit) = split_unit(name);
    let unit = unit.filter(|u| u.contains(|c: char| c.is_alphabetic() || "%°‰".contains(c)))?;
    (detect::is_unit(unit) || crate::sheet::knows_unit(unit)).then_some((name, unit))
}

/// Splits `time (ms)` or `time [ms]` into name and unit.
fn split_unit(name: &str) -> (&str, Option<&str>) {
    let at = name.rfind(['(', '[']).filter(|_| name.ends_with([')', ']']));
    match at.and_then(|i| name.split_at_checked(i)) {
        Some((name, unit)) => (name.trim(), Some(bare_unit(unit))),
        None => (name, None),
    }
}
