//! Bytes to lines to cells.
//!
//! Cells follow RFC 4180 with three liberties: a row may have any number of cells, blanks may stand before an opening quote, and
//! text after a closing quote belongs to the cell. The splitter is our own because a recording must be read in bounded
//! memory and every row must know its line: the lines of all three ends are counted, a quoted cell may run over 64 lines at
//! most, and no row is longer than 64 MiB. Within these bounds it agrees with the `csv` crate (tests/recording_text.rs).

use std::{
    format,
    io::{self, Read},
    string::String,
    vec::Vec,
};

use super::RecordingError;

/// Longest row, in bytes.
pub(super) const LONGEST: usize = 64 << 20;
/// Most cells in a row.
const MOST_CELLS: usize = 1 << 20;
/// Most line ends in a quoted cell; more of them are a quote that somebody forgot to close.
const MOST_QUOTED_LINES: u64 = 64;
const FIRST_BUFFER: usize = 256 << 10;

/// What a line is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    Row,
    Comment,
    Blank,
}

/// Rows of a source, one at a time.
pub(super) struct Records<R> {
    source: R,
    file: String,
    separator: u8,
    comment: Vec<u8>,
    /// `buffer[position..filled]` has not been consumed.
    buffer: Vec<u8>,
    position: usize,
    filled: usize,
    exhausted: bool,
    /// A carriage return was consumed: a line feed that follows belongs to it.
    after_return: bool,
    next_line: u64,
    /// Bytes consumed since the head began, and where the record that `advance` found begins among them.
    offset: usize,
    start: usize,
    /// The record that `advance` found: its line, bytes (relative to nothing but `buffer`), and whether it has quotes.
    line: u64,
    record: (usize, usize),
    quoted: bool,
    several_lines: bool,
    cells: Vec<(usize, usize)>,
}

impl<R: Read> Records<R> {
    /// Begins at byte `offset`, line `line`, of a source whose first bytes are `head`.
    pub(super) fn new(
        head: Vec<u8>,
        source: R,
        file: &str,
        separator: u8,
        comment: &[u8],
        (offset, line): (usize, u64),
    ) -> Self {
        let filled = head.len();
        let offset = offset.min(filled);
        Self {
            source,
            file: file.into(),
            separator,
            comment: comment.into(),
            buffer: head,
            position: offset,
            filled,
            exhausted: false,
            after_return: false,
            next_line: line,
            offset,
            start: offset,
            line,
            record: (0, 0),
            quoted: false,
            several_lines: false,
            cells: Vec::new(),
        }
    }

    /// Takes the head for the whole source, so that spans stay where they are.
    pub(super) fn stop_at_head(&mut self) {
        self.exhausted = true;
    }

    /// Returns the spans of the cells of the record, for a source that stopped at its head.
    pub(super) fn spans(&self) -> &[(usize, usize)] {
        &self.cells
    }

    /// Returns the bytes that `spans` refers to.
    pub(super) fn into_bytes(self) -> Vec<u8> {
        self.buffer
    }

    /// The line of the record, from 1.
    pub(super) fn line(&self) -> u64 {
        self.line
    }

    /// Where the record begins and where the next one does, in bytes since the head began.
    pub(super) fn extent(&self) -> (usize, usize) {
        (self.start, self.offset)
    }

    /// The line that comes next.
    pub(super) fn next_line(&self) -> u64 {
        self.next_line
    }

    /// Whether the record runs over several lines.
    pub(super) fn several_lines(&self) -> bool {
        self.several_lines
    }

    /// How many cells `split` found.
    pub(super) fn len(&self) -> usize {
        self.cells.len()
    }

    /// A cell, blank when there is none.
    #[inline]
    pub(super) fn cell(&self, index: usize) -> &[u8] {
        match self.cells.get(index) {
            Some(&(start, end)) => self.buffer.get(start..end).unwrap_or_default(),
            None => &[],
        }
    }

    pub(super) fn cells(&self) -> impl Iterator<Item = &[u8]> {
        self.cells.iter().map(|&(start, end)| self.buffer.get(start..end).unwrap_or_default())
    }

    fn rest(&self) -> &[u8] {
        self.buffer.get(self.position..self.filled).unwrap_or_default()
    }

    /// Reads on; false at the end of the source.
    fn fill(&mut self) -> Result<bool, RecordingError> {
        if self.exhausted {
            return Ok(false);
        }
        if self.filled == self.buffer.len() {
            if self.position > 0 {
                self.buffer.copy_within(self.position..self.filled, 0);
                self.filled -= self.position;
                self.position = 0;
            }
            let length = self.buffer.len();
            if self.filled >= LONGEST {
                let reason = format!("the line is longer than {} MiB", LONGEST >> 20);
                return Err(RecordingError::TooLong { file: self.file.clone(), line: self.next_line, reason });
            }
            // Half a buffer kept would mean moving bytes more often than reading them.
            if self.filled >= length / 2 || length < FIRST_BUFFER {
                self.buffer.resize((2 * length).clamp(FIRST_BUFFER, LONGEST), 0);
            }
        }
        let free = self.buffer.get_mut(self.filled..).unwrap_or_default();
        loop {
            match self.source.read(free) {
                Ok(0) => {
                    self.exhausted = true;
                    return Ok(false);
                }
                Ok(count) => {
                    // A reader that claims more than it was given room for is not believed.
                    self.filled = (self.filled + count).min(self.buffer.len());
                    return Ok(true);
                }
                Err(error) if error.kind() == io::ErrorKind::Interrupted => {}
                Err(error) => return Err(RecordingError::from_io(&self.file, "read", &error)),
            }
        }
    }

    /// Whether a whole line lies in memory, so that `advance` will not wait for the source.
    pub(super) fn is_ready(&self) -> bool {
        let rest = self.rest();
        let rest = if self.after_return { rest.strip_prefix(b"\n").unwrap_or(rest) } else { rest };
        rest.iter().any(|&b| b == b'\n' || b == b'\r')
    }

    /// Finds the next line; `None` at the end.
    pub(super) fn advance(&mut self) -> Result<Option<Kind>, RecordingError> {
        loop {
            if self.position == self.filled && !self.fill()? {
                return Ok(None);
            }
            if !(core::mem::take(&mut self.after_return) && self.rest().first() == Some(&b'\n')) {
                break;
            }
            self.position += 1;
            self.offset += 1;
        }
        self.line = self.next_line;
        self.start = self.offset;
        let comment = self.begins_with_comment()?;
        self.find_end(comment)?;
        if comment {
            return Ok(Some(Kind::Comment));
        }
        let (start, end) = self.record;
        let record = self.buffer.get(start..end).unwrap_or_default();
        // A line of separators is a row in which nothing was recorded.
        let blank = record.iter().all(|&b| b != self.separator && b.is_ascii_whitespace());
        Ok(Some(if blank { Kind::Blank } else { Kind::Row }))
    }

    /// Finds the next line without regard to quotes, after `advance` failed for one that is not closed.
    pub(super) fn advance_unquoted(&mut self) -> Result<(), RecordingError> {
        self.find_end(true)
    }

    fn begins_with_comment(&mut self) -> Result<bool, RecordingError> {
        if self.comment.is_empty() {
            return Ok(false);
        }
        loop {
            let rest = self.rest();
            let known = rest.len().min(self.comment.len());
            if rest.get(..known) != self.comment.get(..known) {
                return Ok(false);
            }
            if known == self.comment.len() {
                return Ok(true);
            }
            if !self.fill()? {
                return Ok(false);
            }
        }
    }

    /// Sets `record` to the bytes up to the end of the record at `position` and moves past it.
    fn find_end(&mut self, ignore_quotes: bool) -> Result<(), RecordingError> {
        self.quoted = false;
        let mut inside = false;
        let mut inner_ends = 0;
        // Bytes from `position` that are known not to end the record.
        let mut known = 0;
        loop {
            let rest = self.rest();
            let tail = rest.get(known..).unwrap_or_default();
            let Some((at, byte)) = find(tail).map(|(i, b)| (known + i, b)) else {
                known = rest.len();
                if self.fill()? {
                    continue;
                }
                if inside {
                    return Err(RecordingError::OpenQuote { file: self.file.clone(), line: self.line });
                }
                self.finish(known, 0, inner_ends);
                return Ok(());
            };
            known = at + 1;
            if byte != b'"' {
                if inside {
                    // CRLF is one end.
                    inner_ends += u64::from(!(byte == b'\n' && at > 0 && rest.get(at - 1) == Some(&b'\r')));
                    if inner_ends > MOST_QUOTED_LINES {
                        return Err(RecordingError::OpenQuote { file: self.file.clone(), line: self.line });
                    }
                    continue;
                }
                self.finish(at, 1, inner_ends);
                if byte == b'\r' {
                    // A line feed that has not arrived is left for the next call, which a live recording should not wait for.
                    match self.rest().first() {
                        Some(b'\n') => (self.position, self.offset) = (self.position + 1, self.offset + 1),
                        Some(_) => {}
                        None => self.after_return = true,
                    }
                }
                return Ok(());
            }
            if inside {
                // Two quotes are one; which it is shows in the next byte.
                if known == rest.len() && !self.fill()? {
                    inside = false;
                } else if self.rest().get(known) == Some(&b'"') {
                    known += 1;
                } else {
                    inside = false;
                }
            } else if !ignore_quotes && opens(rest.get(..at).unwrap_or_default(), self.separator) {
                inside = true;
                self.quoted = true;
            }
        }
    }

    fn finish(&mut self, length: usize, end: usize, inner_ends: u64) {
        self.record = (self.position, self.position + length);
        self.position += length + end;
        self.offset += length + end;
        self.several_lines = inner_ends > 0;
        self.next_line = self.line + inner_ends + 1;
    }

    /// Splits the record that `advance` found into cells, after dropping `prefix` bytes.
    pub(super) fn split(&mut self, prefix: usize) -> Result<(), RecordingError> {
        self.cells.clear();
        let (start, end) = self.record;
        let start = (start + prefix).min(end);
        let record = self.buffer.get(start..end).unwrap_or_default();
        if self.quoted {
            return self.split_quoted(start, end);
        }
        let mut from = start;
        for (i, &byte) in record.iter().enumerate() {
            if byte == self.separator {
                self.cells.push((from, start + i));
                from = start + i + 1;
            }
        }
        self.cells.push((from, end));
        self.check_count()
    }

    fn check_count(&self) -> Result<(), RecordingError> {
        if self.cells.len() <= MOST_CELLS {
            return Ok(());
        }
        let reason = format!("the line has more than {MOST_CELLS} cells");
        Err(RecordingError::TooLong { file: self.file.clone(), line: self.line, reason })
    }

    /// Splits a record with quotes and writes the cells without them in its place, which is never shorter.
    fn split_quoted(&mut self, start: usize, end: usize) -> Result<(), RecordingError> {
        let Some(record) = self.buffer.get_mut(start..end) else { return Ok(()) };
        let (mut read, mut write, mut cell) = (0, 0, 0);
        let (mut inside, mut fresh) = (false, true);
        while let Some(&byte) = record.get(read) {
            read += 1;
            if inside && byte == b'"' {
                if record.get(read) == Some(&b'"') {
                    read += 1;
                } else {
                    inside = false;
                    continue;
                }
            } else if fresh && byte == b'"' && record.get(cell..write).unwrap_or_default().iter().all(|&b| b == b' ') {
                write = cell;
                (inside, fresh) = (true, false);
                continue;
            } else if !inside && byte == self.separator {
                self.cells.push((start + cell, start + write));
                cell = write;
                fresh = true;
                continue;
            }
            if let Some(to) = record.get_mut(write) {
                *to = byte;
            }
            write += 1;
        }
        self.cells.push((start + cell, start + write));
        self.check_count()
    }
}

/// Whether a quote after these bytes of the record opens a quoted cell.
fn opens(before: &[u8], separator: u8) -> bool {
    match before.iter().rev().find(|&&b| b != b' ') {
        None => true,
        Some(&last) => last == separator,
    }
}

fn find(bytes: &[u8]) -> Option<(usize, u8)> {
    let at = bytes.iter().position(|b| matches!(b, b'\n' | b'\r' | b'"'))?;
    Some((at, *bytes.get(at)?))
}
