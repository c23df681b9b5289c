//! The lines of names and units, and the first row.

use std::{string::String, vec, vec::Vec};

use super::{CellKind, HeadLine, Table, bare_unit, is_unit, kind, layout_error, sample};
use crate::recording::{
    Origin, RecordingError,
    cell::{CellReader, decode, trim},
    records::Kind,
};
use crate::sheet::{Encoding, Layout};

pub(super) struct Lines {
    pub(super) names: (u64, Origin),
    pub(super) units: (u64, Origin),
    pub(super) first: (u64, Origin),
    pub(super) first_offset: usize,
}

/// How many lines below the first row names are looked for.
const NAMES_WITHIN: usize = 20;

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

pub(super) fn find_lines(
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
    // Names below what looks like a row: it would be a reading, and they a row of texts.
    if free
        && names.is_none()
        && first_origin == Origin::Found
        && let Some(at) = first
        && let Some(row) = rows.get(at)
    {
        let reads_as_names = |line: &HeadLine| {
            let look = look(line);
            width > 1 && line.spans.len() == width && look.pure_text && !look.repeats
        };
        let rows_below = |line: &HeadLine| rows.iter().any(|r| r.line > line.line && !look(r).some_text);
        let names_below =
            rows.iter().skip(at + 1).take(NAMES_WITHIN).find(|line| reads_as_names(line) && rows_below(line));
        if let Some(line) = names_below.map(|line| line.line) {
            return Err(layout_error(
                file,
                "names_line",
                &std::format!("{line}"),
                &std::format!(
                    "this line reads as names do, but stands below line {}, which reads as a row: state recording.names_line = {line}, or 0 where there are none",
                    row.line
                ),
            ));
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

pub(super) fn titles(
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
