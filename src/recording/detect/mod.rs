//! The shape of a recording, found from its head.
//!
//! Every separator and decimal mark is tried on the last third of the head, where rows are more likely than lines about the
//! run. The pair under which most cells read as numbers or moments, in rows of equal length, is taken. Columns that are numbers
//! there tell rows from what stands above them. Nothing below the first row is ever passed over.

mod lines;
mod units;

use std::{io, string::String, vec::Vec};

use lines::{Lines, find_lines, titles};
pub(super) use units::{bare_unit, is_unit};

use crate::sheet::{Decimal, Encoding, Layout, Separator};

use super::{
    RecordingError,
    cell::{CellReader, trim},
    findings::{LineEnd, Origin},
    moment,
    records::{Kind, Records},
};

/// Most rows that are looked at for the separator.
const SAMPLE: usize = 64;

/// A line of the head with its cells.
struct HeadLine {
    line: u64,
    next_line: u64,
    offset: usize,
    next_offset: usize,
    kind: Kind,
    spans: Vec<(usize, usize)>,
}

/// The lines of the head under one separator.
pub(super) struct Table {
    bytes: Vec<u8>,
    lines: Vec<HeadLine>,
}

impl Table {
    fn new(head: &[u8], start: usize, separator: Separator, comment: &[u8]) -> Self {
        let mut records = Records::new(head.into(), io::empty(), "", separator.byte(), comment, (start, 1));
        records.stop_at_head();
        let mut lines = Vec::new();
        loop {
            let kind = match records.advance() {
                Ok(None) => break,
                Ok(Some(kind)) => kind,
                // Lines about the run need not be quoted as tables are; a row gets its error when it is read.
                Err(_) if records.advance_unquoted().is_ok() => Kind::Row,
                Err(_) => break,
            };
            let prefix = if kind == Kind::Comment { comment.len() } else { 0 };
            if records.split(prefix).is_err() {
                break;
            }
            let (offset, next_offset) = records.extent();
            lines.push(HeadLine {
                line: records.line(),
                next_line: records.next_line(),
                offset,
                next_offset,
                kind,
                spans: records.spans().into(),
            });
        }
        Self { bytes: records.into_bytes(), lines }
    }

    fn cells<'a>(&'a self, line: &'a HeadLine) -> impl Iterator<Item = &'a [u8]> {
        line.spans.iter().map(|&(start, end)| self.bytes.get(start..end).unwrap_or_default())
    }

    fn cell(&self, line: &HeadLine, index: usize) -> &[u8] {
        line.spans.get(index).and_then(|&(start, end)| self.bytes.get(start..end)).unwrap_or_default()
    }

    /// The rows at and after this line.
    pub(super) fn rows_from(&self, first_line: u64) -> impl Iterator<Item = TableRow<'_>> {
        let rows = self.lines.iter().filter(move |l| l.line >= first_line && l.kind == Kind::Row);
        rows.map(|line| TableRow { table: self, line })
    }

    /// The line of names, or the row above the first where there is none, and the first row, each with its number of cells,
    /// where these differ.
    pub(super) fn ragged(&self, names_line: u64, first_line: u64) -> Option<[(u64, usize); 2]> {
        let row = |l: &&HeadLine| l.kind == Kind::Row;
        let above = match names_line {
            0 => self.lines.iter().rev().filter(row).find(|l| l.line < first_line),
            names => self.lines.iter().find(|l| l.line == names),
        }?;
        let first = self.lines.iter().filter(row).find(|l| l.line >= first_line)?;
        let both = [above, first].map(|l| (l.line, l.spans.len()));
        (above.spans.len() != first.spans.len()).then_some(both)
    }

    fn rows(&self) -> Vec<&HeadLine> {
        self.lines.iter().filter(|l| l.kind == Kind::Row).collect()
    }
}

/// A row of the head.
pub(super) struct TableRow<'a> {
    table: &'a Table,
    line: &'a HeadLine,
}

impl TableRow<'_> {
    /// A cell, blank when there is none.
    pub(super) fn cell(&self, index: usize) -> &[u8] {
        self.table.cell(self.line, index)
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum CellKind {
    Blank,
    /// A number, a sentinel, or a moment.
    Readable,
    Text,
}

fn kind(cell: &[u8], cells: &CellReader, layout: &Layout) -> CellKind {
    let cell = trim(cell, cells.encoding);
    if cell.is_empty() {
        return CellKind::Blank;
    }
    let readable = cells.value(cell).1 != crate::chain::Word::Unreadable
        || moment::looks_like_moment(cell)
        || layout.time_format.as_ref().is_some_and(|shape| moment::reads_as(shape, cell));
    if readable { CellKind::Readable } else { CellKind::Text }
}

/// The shape that was found.
pub(super) struct Found {
    pub(super) table: Table,
    pub(super) cells: CellReader,
    pub(super) separator: (Separator, Origin),
    pub(super) decimal: (Decimal, Origin),
    pub(super) encoding: (Encoding, Origin),
    pub(super) line_end: LineEnd,
    pub(super) names_line: (u64, Origin),
    pub(super) units_line: (u64, Origin),
    pub(super) first_line: (u64, Origin),
    pub(super) first_offset: usize,
    pub(super) names: Vec<String>,
    pub(super) units: Option<Vec<String>>,
}

/// Returns how lines end here.
fn line_end(head: &[u8]) -> LineEnd {
    let count = |byte| head.iter().filter(|&&b| b == byte).count();
    let both = head.windows(2).filter(|w| *w == b"\r\n").count();
    match (count(b'\n') - both, both, count(b'\r') - both) {
        (0, 0, 0) => LineEnd::None,
        (_, 0, 0) => LineEnd::Lf,
        (0, _, 0) => LineEnd::CrLf,
        (0, 0, _) => LineEnd::Cr,
        _ => LineEnd::Mixed,
    }
}

/// One separator and decimal mark on trial.
struct Trial {
    separator: Separator,
    decimal: Decimal,
    /// Share of readable cells times share of rows of the usual length, 0..=1.
    score: f64,
    /// Cells in most rows of the sample.
    width: usize,
    decimal_seen: bool,
    /// Every row could be one number with a decimal comma as well as two cells, and no header says which.
    doubtful: bool,
}

/// Whether a number with one comma could as well be written with a comma between thousands: `1,234`.
fn is_thousands(cell: &[u8]) -> bool {
    let body = cell.strip_prefix(b"-").or_else(|| cell.strip_prefix(b"+")).unwrap_or(cell);
    let Some(at) = body.iter().position(|b| *b == b',') else { return false };
    let (before, after) = body.split_at(at);
    let digits = |part: &[u8]| part.iter().all(u8::is_ascii_digit);
    (1..=3).contains(&before.len()) && digits(before) && after.len() == 4 && digits(after.get(1..).unwrap_or(&[]))
}

fn try_out(table: &Table, separator: Separator, decimal: Decimal, cells: &CellReader, layout: &Layout) -> Trial {
    let rows = sample(table, layout);
    let lengths: Vec<usize> = rows.iter().map(|r| r.spans.len()).collect();
    let width = most_frequent(&lengths);
    let (mut readable, mut filled, mut decimal_seen) = (0u32, 0u32, false);
    // cells such as 1,234: a decimal comma, or a comma between thousands
    let mut other_than_thousands = false;
    let mark = if decimal == Decimal::Point { b'.' } else { b',' };
    for row in &rows {
        for cell in table.cells(row) {
            match kind(cell, cells, layout) {
                CellKind::Blank => {}
                CellKind::Text => filled += 1,
                CellKind::Readable => {
                    (readable, filled) = (readable + 1, filled + 1);
                    if cell.contains(&mark) && moment::is_number(cell, decimal, cells.encoding) {
                        decimal_seen = true;
                        other_than_thousands |= !is_thousands(trim(cell, cells.encoding));
                    }
                }
            }
        }
    }
    let share = |part: usize, whole: usize| if whole == 0 { 0.0 } else { part as f64 / whole as f64 };
    let even = share(lengths.iter().filter(|&&l| l == width).count(), lengths.len());
    let mut score = even * f64::from(readable) / f64::from(filled.max(1));
    // The line above the first row has as many cells as the row when both are cut at the right places.
    let all = table.rows();
    let is_row = |r: &&HeadLine| {
        let kinds: Vec<CellKind> = table.cells(r).map(|c| kind(c, cells, layout)).collect();
        let count = |kind| kinds.iter().filter(|&&k| k == kind).count();
        r.spans.len() == width && count(CellKind::Readable) > count(CellKind::Text)
    };
    if let Some(first) = all.iter().position(is_row)
        && let Some(above) = first.checked_sub(1).and_then(|i| all.get(i))
        && above.spans.len() != width
    {
        score *= 0.8;
    }
    // A comma can only be both in a file that quotes its numbers; a quoted 1,234 alone may be a thousand.
    if separator == Separator::Comma && decimal == Decimal::Comma && !(decimal_seen && other_than_thousands) {
        score *= 0.5;
    }
    // One column of numbers with a decimal comma looks like two columns: the line of names tells them apart.
    let mut doubtful = false;
    if separator != Separator::Comma && decimal == Decimal::Comma && decimal_seen && width == 1 {
        let first = all.iter().position(is_row);
        match first.and_then(|i| i.checked_sub(1)).and_then(|i| all.get(i)) {
            Some(above) if table.cells(above).any(|c| c.contains(&b',')) => score *= 0.1,
            Some(_) => {}
            None => doubtful = layout.decimal.is_none() && layout.separator.is_none(),
        }
    }
    Trial { separator, decimal, score, width, decimal_seen, doubtful }
}

/// The rows that show the shape best: from the stated first one, or the last third.
fn sample<'a>(table: &'a Table, layout: &Layout) -> Vec<&'a HeadLine> {
    let mut rows = table.rows();
    match layout.first_line {
        Some(first) if rows.iter().any(|r| r.line >= first) => rows.retain(|r| r.line >= first),
        _ => {
            rows.drain(..rows.len() - rows.len().div_ceil(3));
        }
    }
    rows.drain(..rows.len().saturating_sub(SAMPLE));
    rows
}

fn most_frequent(lengths: &[usize]) -> usize {
    let mut sorted = lengths.to_vec();
    sorted.sort_unstable();
    sorted.chunk_by(|a, b| a == b).max_by_key(|c| c.len()).and_then(|c| c.first().copied()).unwrap_or(0)
}

/// Finds the shape of a recording from whole lines at its head.
///
/// `start` is the length of the byte-order mark.
pub(super) fn detect(
    head: &[u8],
    start: usize,
    complete: bool,
    layout: &Layout,
    file: &str,
) -> Result<Found, RecordingError> {
    let comment = layout.comment.as_deref().unwrap_or("#").as_bytes();
    let encoding = match layout.encoding {
        Some(encoding) => (encoding, Origin::Stated),
        None if head.is_ascii() && start == 0 => (Encoding::Utf8, Origin::Assumed),
        None if core::str::from_utf8(head).is_ok() || start > 0 => (Encoding::Utf8, Origin::Found),
        None => (Encoding::Windows1252, Origin::Found),
    };
    let mut best: Option<(Trial, Table, CellReader)> = None;
    let mut doubt = f64::NEG_INFINITY;
    for separator in [Separator::Semicolon, Separator::Tab, Separator::Comma] {
        if layout.separator.is_some_and(|s| s != separator) {
            continue;
        }
        for decimal in [Decimal::Point, Decimal::Comma] {
            if layout.decimal.is_some_and(|d| d != decimal) {
                continue;
            }
            let table = Table::new(head, start, separator, comment);
            let cells = CellReader::new(&layout.missing, &layout.saturated, decimal, encoding.0);
            let trial = try_out(&table, separator, decimal, &cells, layout);
            if trial.doubtful {
                doubt = doubt.max(trial.score);
            }
            let better = best.as_ref().is_none_or(|(b, ..)| {
                (trial.score, trial.width) > (b.score + 1e-9, usize::MAX)
                    || (trial.score > b.score - 1e-9 && trial.width > b.width)
            });
            if better {
                best = Some((trial, table, cells));
            }
        }
    }
    let Some((trial, table, cells)) = best else {
        return Err(layout_error(file, "separator", "", "there is nothing to choose from"));
    };
    if doubt > trial.score - 1e-9 {
        return Err(layout_error(
            file,
            "separator",
            "",
            "each row could be one number with a decimal comma, or two cells: state recording.separator or recording.decimal",
        ));
    }
    let origin = |stated: bool, found: bool| match (stated, found) {
        (true, _) => Origin::Stated,
        (_, true) => Origin::Found,
        _ => Origin::Assumed,
    };
    let lines = find_lines(&table, trial.width, &cells, layout, complete, file)?;
    refuse_lost_rows(&table, &lines, trial.width, &cells, layout, file)?;
    refuse_split_numbers(&table, &lines, trial.separator, layout, file)?;
    let (names, units) = titles(&table, &lines, &layout.more_names, trial.width, encoding.0);
    Ok(Found {
        separator: (trial.separator, origin(layout.separator.is_some(), trial.width > 1)),
        decimal: (trial.decimal, origin(layout.decimal.is_some(), trial.decimal_seen)),
        encoding,
        line_end: line_end(head),
        names_line: lines.names,
        units_line: lines.units,
        first_line: lines.first,
        first_offset: lines.first_offset,
        names,
        units,
        table,
        cells,
    })
}

/// A line above the first row that reads as one where rows begin, with texts for readings, would be dropped: an error.
fn refuse_lost_rows(
    table: &Table,
    lines: &Lines,
    width: usize,
    cells: &CellReader,
    layout: &Layout,
    file: &str,
) -> Result<(), RecordingError> {
    let header = lines.names.0.max(lines.units.0).max(layout.header_end());
    let rows = table.rows();
    let Some(first) = rows.iter().find(|r| r.line >= lines.first.0).filter(|_| lines.first.1 == Origin::Found) else {
        return Ok(());
    };
    let readable = |line: &HeadLine, i: usize| kind(table.cell(line, i), cells, layout) == CellKind::Readable;
    let Some(column) = (0..width).find(|i| readable(first, *i)) else { return Ok(()) };
    let lost = rows
        .iter()
        .filter(|r| r.line > header && r.line < lines.first.0 && r.spans.len() == first.spans.len())
        .find(|r| column == 0 && readable(r, column));
    match lost {
        None => Ok(()),
        Some(line) => Err(layout_error(
            file,
            "first_line",
            &std::format!("{}", line.line),
            &std::format!(
                "this line begins as a row does, but its other cells are texts, and line {} was found to be the first row: state recording.first_line, or by recording.saturated or missing what these texts mean",
                lines.first.0
            ),
        )),
    }
}

/// Rows that all have more cells than there are names, parted by commas: a comma may be the decimal mark as well.
fn refuse_split_numbers(
    table: &Table,
    lines: &Lines,
    separator: Separator,
    layout: &Layout,
    file: &str,
) -> Result<(), RecordingError> {
    if separator != Separator::Comma || layout.separator.is_some() || layout.decimal.is_some() {
        return Ok(());
    }
    let rows = table.rows();
    let Some(names) = rows.iter().find(|r| r.line == lines.names.0).filter(|_| lines.names.0 > 0) else {
        return Ok(());
    };
    let count = names.spans.len();
    let more = |r: &&&HeadLine| table.cells(r).skip(count).any(|cell| !cell.is_empty());
    let below = || rows.iter().filter(|r| r.line >= lines.first.0);
    if below().count() == 0 || below().filter(more).count() < below().count() {
        return Ok(());
    }
    let width = below().next().map_or(0, |r| r.spans.len());
    Err(layout_error(
        file,
        "separator",
        ",",
        &std::format!(
            "there are {count} names, but every row has more cells ({width} in the first): the comma may be the decimal mark too, or names and rows are not parted alike; state recording.separator or recording.decimal, or quote such numbers"
        ),
    ))
}

pub(super) fn layout_error(file: &str, key: &'static str, value: &str, reason: &str) -> RecordingError {
    RecordingError::Layout { file: file.into(), key, value: value.into(), reason: reason.into() }
}
