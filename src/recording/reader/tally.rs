//! What was met in a recording.

use std::{format, string::String, vec::Vec};

use crate::chain::Word;
use crate::recording::cell::{CellReader, decode, trim};
use crate::sheet::Pass;

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
    /// How many of them were placed at the later of the two times.
    pub twice_later: u64,
    /// The first of them.
    pub first_twice: Option<CellAt>,
    /// The first of them whose pass no other row told, the pass that was taken, and its whole seconds of UTC.
    pub first_untold: Option<(CellAt, Pass, i64)>,
    /// Moments that the clock never showed because it was set forward; they were placed as if it had not been.
    pub never: (u64, Option<u64>),
    /// The first of them.
    pub first_never: Option<CellAt>,
    /// Moments before that of the row above.
    pub steps_back: (u64, Option<u64>),
}

pub(super) fn count(what: &mut (u64, Option<u64>), line: u64) {
    what.0 += 1;
    what.1.get_or_insert(line);
}

/// What is to be said of a moment whose pass no row tells.
fn untold(pass: Pass) -> String {
    format!(
        "no row before it tells its pass: the {pass} is taken, and recording.repeated_hour = \"{0}\" takes the {0}",
        pass.other()
    )
}

impl Tally {
    /// Where rows may stand an hour off, since no row tells in which pass of a repeated hour they are; in words.
    pub(in crate::recording) fn doubt(&self) -> Option<String> {
        let (cell, pass, _) = self.first_untold.as_ref()?;
        Some(format!("line {}: '{}': {}", cell.line, cell.text.escape_debug(), untold(*pass)))
    }

    /// What somebody should know about these rows, one line each; `moment` says what a moment must be.
    pub(super) fn remarks(&self, file: &str, moment: &str) -> Vec<String> {
        let mut remarks = Vec::new();
        let mut cells = |tally: &ColumnTally, what: &str, more: &str| {
            if let Some(cell) = &tally.first_unreadable {
                let others = match tally.unreadable {
                    1 => String::new(),
                    n => format!(", the first of {n}"),
                };
                let CellAt { line, column, text } = cell;
                let text = text.escape_debug();
                remarks.push(format!("{file}:{line}:{column}: value '{text}': not a {what}{others}{more}"));
            }
        };
        for tally in &self.columns {
            cells(tally, "number", "");
        }
        // a line about the run among the rows, where most rows have a time
        let first = self.time.first_unreadable.as_ref().filter(|_| 2 * self.time.unreadable < self.rows);
        let first = first.filter(|c| c.column == 1 && c.text.starts_with(char::is_alphabetic));
        let begins = first.and_then(|c| c.text.split(' ').next()).filter(|begins| begins.len() > 1);
        let more = begins.map_or_else(String::new, |begins| {
            format!("; recording.comment = {begins:?} passes over lines that begin like this")
        });
        cells(&self.time, moment, &more);
        for ((number, line), what) in [
            (self.short_rows, "with fewer cells than there are columns: the rest is missing"),
            (self.long_rows, "with more cells than there are columns: the rest is not read"),
            (self.several_lines, "over several lines because of a quoted cell"),
            (self.damaged_texts, "with a kept text that is not in the encoding of the file"),
            (self.steps_back, "earlier than the row above"),
        ] {
            if let Some(line) = line {
                let (rows, first) = if number == 1 { ("row", "") } else { ("rows", ", here the first") };
                remarks.push(format!("{file}:{line}: {number} {rows} {what}{first}"));
            }
        }
        let place = |cell: &CellAt| {
            let CellAt { line, column, text } = cell;
            format!("{file}:{line}:{column}: value '{}':", text.escape_debug())
        };
        let rows = |count: u64| if count == 1 { "1 row".into() } else { format!("{count} rows from here on") };
        if let Some(cell) = &self.first_twice {
            let (all, later) = (self.twice.0, self.twice_later);
            let (here, elsewhere) = match &self.first_untold {
                Some((first, pass, _)) if first == cell => (format!("; {}", untold(*pass)), None),
                other => {
                    (String::new(), other.as_ref().map(|(cell, pass, _)| format!("{} {}", place(cell), untold(*pass))))
                }
            };
            remarks.push(format!(
                "{} the clock showed it twice, since it was set back; {} at such times, {} placed in the first pass and {later} in the second, so that time goes on{here}",
                place(cell),
                rows(all),
                all - later
            ));
            remarks.extend(elsewhere);
        }
        if let Some(cell) = &self.first_never {
            remarks.push(format!(
                "{} the clock never showed it, since it was set forward; {} at such times, placed as if it had not been",
                place(cell),
                rows(self.never.0)
            ));
        }
        remarks
    }
}

#[cold]
pub(super) fn note(tally: &mut ColumnTally, word: Word, line: u64, index: usize, cell: &[u8], cells: &CellReader) {
    match word {
        Word::Missing => tally.missing += 1,
        Word::Saturated => tally.saturated += 1,
        // what was unreadable in a recording was told when that was converted
        Word::Unreadable if cells.words => tally.unreadable += 1,
        Word::Unreadable => {
            tally.unreadable += 1;
            tally.first_unreadable.get_or_insert_with(|| {
                let text = cell.get(..cell.len().min(400)).unwrap_or_default();
                let text = decode(trim(text, cells.encoding), cells.encoding).chars().take(80).collect();
                CellAt { line, column: index + 1, text }
            });
        }
        _ => {}
    }
}
