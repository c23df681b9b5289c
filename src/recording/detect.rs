//! The shape of a recording, found from its head.
//!
//! Every separator and decimal mark is tried on the last third of the head, where rows are more likely than lines about the
//! run. The pair under which most cells read as numbers or moments, in rows of equal length, is taken. Columns that are numbers
//! there tell rows from what stands above them. Nothing below the first row is ever passed over.

use std::{io, string::String, vec, vec::Vec};

use crate::sheet::{Decimal, Encoding, Layout, Separator};

use super::{
    RecordingError,
    cell::{CellReader, decode, trim},
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

pub(super) fn layout_error(file: &str, key: &'static str, value: &str, reason: &str) -> RecordingError {
    RecordingError::Layout { file: file.into(), key, value: value.into(), reason: reason.into() }
}

struct Lines {
    names: (u64, Origin),
    units: (u64, Origin),
    first: (u64, Origin),
    first_offset: usize,
}

/// What a line that could be names, units or the first row is made of.
struct Look {
    fits: bool,
    pure_text: bool,
    units: bool,
    some_text: bool,
    /// Several cells, all with the same text, as when nothing could be recorded.
    repeats: bool,
}

fn look(table: &Table, line: &HeadLine, width: usize, cells: &CellReader, layout: &Layout) -> Look {
    let kinds: Vec<CellKind> = table.cells(line).map(|c| kind(c, cells, layout)).collect();
    let some_text = kinds.contains(&CellKind::Text);
    let texts = || table.cells(line).map(|c| decode(trim(c, cells.encoding), cells.encoding));
    let mut filled = texts().filter(|t| !t.is_empty());
    let first = filled.next();
    let (others, same) = filled.fold((0, 0), |(all, same), t| (all + 1, same + u32::from(first.as_ref() == Some(&t))));
    Look {
        fits: line.spans.len() == width || (line.spans.len() > 1 && 2 * line.spans.len() > width),
        pure_text: some_text && !kinds.contains(&CellKind::Readable),
        // 1 and - are units, but a line of nothing else is a row.
        units: some_text && texts().all(|t| is_unit(&t)) && texts().any(|t| t.contains(|c| !"1-()[] ".contains(c))),
        some_text,
        repeats: others > 0 && others == same,
    }
}

fn find_lines(
    table: &Table,
    width: usize,
    cells: &CellReader,
    layout: &Layout,
    complete: bool,
    file: &str,
) -> Result<Lines, RecordingError> {
    let rows = table.rows();
    let look = |line: &HeadLine| look(table, line, width, cells, layout);
    let must_exist = |key: &'static str, stated: Option<u64>| match stated {
        Some(line) if line > 0 && !table.lines.iter().any(|l| l.line == line && l.kind != Kind::Blank) => {
            let reason = if complete {
                "this line is blank or past the end of the file"
            } else {
                "this line is blank or lies too far into the file"
            };
            Err(layout_error(file, key, &std::format!("{line}"), reason))
        }
        _ => Ok(()),
    };
    must_exist("names_line", layout.names_line)?;
    must_exist("units_line", layout.units_line)?;
    for line in &layout.more_names {
        must_exist("names_line", Some(*line))?;
    }

    // The first row: stated, or the line after what is stated, or the first line that is more number than text where columns
    // are numbers.
    let header_end = layout.header_end();
    let mut units_below = None;
    let (mut first, first_origin) = match layout.first_line {
        Some(line) => (rows.iter().position(|r| r.line >= line), Origin::Stated),
        None if layout.names_line.is_some_and(|l| l > 0) || layout.units_line.is_some_and(|l| l > 0) => {
            let mut at = rows.iter().position(|r| r.line > header_end);
            if layout.units_line.is_none()
                && let Some(line) = at.and_then(|i| rows.get(i))
                && look(line).units
            {
                units_below = Some(line.line);
                at = at.map(|i| i + 1).filter(|&i| i < rows.len());
            }
            (at, Origin::Found)
        }
        None => (first_row(table, &rows, width, cells, layout), Origin::Found),
    };
    // Names and units stand directly above the first row.
    let free = layout.names_line.is_none() && layout.units_line.is_none();
    let (mut names, mut units) = (None, units_below);
    if free && first_origin == Origin::Found {
        let at = first.unwrap_or(rows.len());
        let above = |back: usize| at.checked_sub(back).and_then(|i| rows.get(i)).map(|&l| (l, look(l)));
        match (above(1), above(2)) {
            (Some((u, l1)), Some((n, l2))) if l1.units && l1.fits && l2.fits && l2.pure_text => {
                (names, units) = (Some(n.line), Some(u.line));
            }
            (Some((n, l1)), Some((_, l2))) if l1.fits && l1.pure_text && !(l1.repeats && l2.fits && l2.pure_text) => {
                names = Some(n.line);
            }
            (Some((n, l1)), None) if l1.fits && l1.pure_text => names = Some(n.line),
            // A row whose first readings are unreadable looks like a title, but has one above it.
            (Some((_, l1)), Some((n, l2))) if l1.fits && l1.some_text && l2.fits && l2.pure_text => {
                names = Some(n.line);
                first = Some(at - 1);
            }
            _ => {}
        }
        // Channels named by numbers look like a row, but for the text among them.
        if names.is_none()
            && let Some(line) = first.and_then(|i| rows.get(i))
            && number_columns(table, width, cells, layout)
                .iter()
                .enumerate()
                .any(|(c, &n)| n && kind(table.cell(line, c), cells, layout) == CellKind::Text)
        {
            names = Some(line.line);
            first = first.map(|i| i + 1).filter(|&i| i < rows.len());
        }
    } else if free
        && layout.first_line.is_some()
        && let Some(at) = first
    {
        let above = |back: usize| at.checked_sub(back).and_then(|i| rows.get(i)).map(|&l| (l, look(l)));
        match (above(1), above(2)) {
            (Some((u, l1)), Some((n, l2))) if l1.units && l1.fits && l2.fits && l2.some_text => {
                (names, units) = (Some(n.line), Some(u.line));
            }
            (Some((n, l1)), _) if l1.fits && l1.some_text => names = Some(n.line),
            _ => {}
        }
    }
    // Failing that, names may stand in the comment above the first row.
    if free && names.is_none() {
        let before = first.and_then(|i| rows.get(i)).map_or(u64::MAX, |r| r.line);
        let comments: Vec<&HeadLine> =
            table.lines.iter().filter(|l| l.kind == Kind::Comment && l.line < before).collect();
        let mut last = comments.iter().rev().map(|&l| (l, look(l)));
        match (last.next(), last.next()) {
            (Some((u, l1)), Some((n, l2))) if l1.units && l1.fits && l2.fits && l2.pure_text && width > 1 => {
                (names, units) = (Some(n.line), Some(u.line));
            }
            (Some((n, l1)), _) if l1.fits && l1.pure_text && width > 1 => names = Some(n.line),
            _ => {}
        }
    }
    let settle = |stated: Option<u64>, found: Option<u64>| match stated {
        Some(line) => (line, Origin::Stated),
        None => (found.unwrap_or(0), Origin::Found),
    };
    let (names, units) = (settle(layout.names_line, names), settle(layout.units_line, units));
    // Without a row, reading begins after the last line that has been used.
    let (line, first_offset) = match first.and_then(|i| rows.get(i)) {
        Some(row) => (row.line, row.offset),
        None => {
            let used = names.0.max(units.0);
            let end = match used {
                // Nothing but lines about the run, or a first row stated past the end.
                0 => table.lines.last(),
                _ => table.lines.iter().find(|l| l.line == used),
            };
            let end = if layout.first_line.is_some() { table.lines.last() } else { end };
            end.map_or((1, 0), |l| (l.next_line, l.next_offset))
        }
    };
    if let Some(stated) = layout.first_line
        && first.is_none()
        && !complete
    {
        return Err(layout_error(
            file,
            "first_line",
            &std::format!("{stated}"),
            "this line lies too far into the file",
        ));
    }
    if let Some(stated) = layout.first_line.filter(|&l| l <= header_end) {
        let reason = "the first row cannot stand at or above the names and units";
        return Err(layout_error(file, "first_line", &std::format!("{stated}"), reason));
    }
    Ok(Lines { names, units, first: (line, first_origin), first_offset })
}

/// Which columns are numbers or moments in most rows of the sample.
fn number_columns(table: &Table, width: usize, cells: &CellReader, layout: &Layout) -> Vec<bool> {
    let mut balance = vec![0i32; width];
    for row in sample(table, layout).iter().filter(|r| r.spans.len() == width) {
        for (cell, count) in table.cells(row).zip(&mut balance) {
            match kind(cell, cells, layout) {
                CellKind::Blank => {}
                CellKind::Readable => *count += 1,
                CellKind::Text => *count -= 1,
            }
        }
    }
    balance.iter().map(|&b| b > 0).collect()
}

fn first_row(table: &Table, rows: &[&HeadLine], width: usize, cells: &CellReader, layout: &Layout) -> Option<usize> {
    let numbers = number_columns(table, width, cells, layout);
    let wanted = numbers.iter().filter(|&&n| n).count();
    if wanted == 0 {
        // Nothing reads as a number: the first line of this width that is text is taken for names, all below for rows.
        let names = rows.iter().position(|r| r.spans.len() == width)?;
        let mut first = names + 1;
        if rows.get(first).is_some_and(|r| look(table, r, width, cells, layout).units) {
            first += 1;
        }
        return (first < rows.len()).then_some(first);
    }
    let count = |row: &HeadLine| {
        let (mut readable, mut text) = (0, 0);
        for (column, _) in numbers.iter().enumerate().filter(|(_, n)| **n) {
            match kind(table.cell(row, column), cells, layout) {
                CellKind::Blank => {}
                CellKind::Readable => readable += 1,
                CellKind::Text => text += 1,
            }
        }
        (readable, text)
    };
    let first = rows.iter().enumerate().position(|(i, row)| {
        let (readable, text) = count(row);
        if row.spans.len() < width || readable <= text {
            return false;
        }
        // Lines about the run may be padded with separators; a row that is mostly blank counts when another row follows.
        2 * readable >= wanted
            || rows.get(i + 1).is_none_or(|next| {
                let (readable, text) = count(next);
                readable > text
            })
    })?;
    // A line without text directly above a row is a row, if a short one.
    let is_plain = |row: &&HeadLine| table.cells(row).all(|c| kind(c, cells, layout) != CellKind::Text);
    let plain = rows.iter().take(first).rev().take_while(|r| is_plain(r)).count();
    Some(first - plain)
}

fn titles(
    table: &Table,
    lines: &Lines,
    more_names: &[u64],
    width: usize,
    encoding: Encoding,
) -> (Vec<String>, Option<Vec<String>>) {
    let cells_of = |number: u64| -> Vec<String> {
        let line = table.lines.iter().find(|l| number > 0 && l.line == number);
        line.map_or_else(Vec::new, |l| table.cells(l).map(|c| title(c, encoding)).collect())
    };
    // A separator at the end of every line makes no column.
    let rows: Vec<&HeadLine> = table.rows().into_iter().filter(|r| r.line >= lines.first.0).collect();
    let mut names = cells_of(lines.names.0);
    for line in more_names {
        let more = cells_of(*line);
        names.resize(names.len().max(more.len()), String::new());
        for (name, more) in names.iter_mut().zip(more).filter(|(_, more)| !more.is_empty()) {
            if !name.is_empty() {
                name.push(' ');
            }
            name.push_str(&more);
        }
    }
    if names.is_empty() {
        let longest = rows.iter().filter(|r| r.spans.len() <= width).map(|r| r.spans.len()).max().unwrap_or(0);
        let mut columns = longest;
        while columns > 1 && rows.iter().all(|r| trim(table.cell(r, columns - 1), encoding).is_empty()) {
            columns -= 1;
        }
        names = (1..=columns).map(|n| std::format!("column {n}")).collect();
    }
    while names.len() > 1
        && names.last().is_some_and(String::is_empty)
        && rows.iter().all(|r| trim(table.cell(r, names.len() - 1), encoding).is_empty())
    {
        names.pop();
    }
    let units = (lines.units.0 > 0).then(|| {
        let mut units: Vec<String> = cells_of(lines.units.0).iter().map(|u| bare_unit(u).into()).collect();
        units.resize(names.len(), String::new());
        units
    });
    (names, units)
}

/// A name or unit on one line and without blanks around it.
fn title(cell: &[u8], encoding: Encoding) -> String {
    let text = decode(trim(cell, encoding), encoding);
    if text.contains(['\n', '\r']) {
        let lines: Vec<&str> = text.split(['\n', '\r']).map(str::trim).filter(|l| !l.is_empty()).collect();
        return lines.join(" ");
    }
    text.into()
}

/// Returns a unit without the brackets around it.
pub(super) fn bare_unit(text: &str) -> &str {
    let text = text.trim();
    let inner = |open, close| text.strip_prefix(open).and_then(|t: &str| t.strip_suffix(close));
    inner('(', ')').or_else(|| inner('[', ']')).map_or(text, str::trim)
}

/// Whether a cell can stand in a line of units: blank, or factors of known units.
pub(super) fn is_unit(cell: &str) -> bool {
    const UNITS: [&str; 66] = [
        "V",
        "A",
        "W",
        "J",
        "N",
        "Nm",
        "Pa",
        "bar",
        "s",
        "min",
        "h",
        "d",
        "Hz",
        "K",
        "°C",
        "℃",
        "degC",
        "deg C",
        "C",
        "degF",
        "°F",
        "F",
        "deg",
        "°",
        "rad",
        "m",
        "in",
        "ft",
        "g",
        "kg",
        "t",
        "lb",
        "l",
        "L",
        "ohm",
        "Ohm",
        "ohms",
        "Ω",
        "Ω",
        "S",
        "F",
        "strain",
        "ε",
        "epsilon",
        "count",
        "counts",
        "digit",
        "digits",
        "bit",
        "%",
        "%RH",
        "‰",
        "ppm",
        "dB",
        "1",
        "-",
        "psi",
        "UTC",
        "date",
        "hh:mm:ss",
        "yyyy-mm-dd",
        "ISO 8601",
        "ISO8601",
        "text",
        "none",
        "gal",
    ];
    const PREFIXES: [&str; 11] = ["", "n", "u", "\u{b5}", "\u{3bc}", "micro", "m", "c", "k", "M", "G"];
    let unit = bare_unit(cell);
    if unit.is_empty() || UNITS.contains(&unit) {
        return true;
    }
    unit.split(['/', '·', '*', '^']).all(|factor| {
        let factor = factor.trim().trim_end_matches(|c: char| c.is_ascii_digit() || "²³⁻¹-".contains(c));
        factor.is_empty() || UNITS.iter().any(|u| PREFIXES.iter().any(|p| factor.strip_prefix(p) == Some(u)))
    })
}
