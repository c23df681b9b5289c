//! A result beside an earlier one: what changed, channel by channel.

use core::fmt;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use serde_json::json;

use super::robust::line;
use super::words::{figure, short};
use crate::recording::{Block, ConvertError, Rows, Trace, reader_of};
use crate::sheet::{Layout, Sheet};

/// Rows that are read together.
const ROWS: usize = 4096;
/// Pairs that slope and offset are taken from.
const PAIRS: usize = 65_536;

/// What became of one channel.
#[derive(Clone, Debug, Default)]
#[non_exhaustive]
pub struct Change {
    /// Header of the column.
    pub column: String,
    /// Whether it stands in the earlier result, and in this one.
    pub there: [bool; 2],
    /// Rows with a value in both.
    pub rows: u64,
    /// Rows with the same value to the last digit.
    pub same: u64,
    /// Rows with a value in the earlier result alone, and in this one alone.
    pub alone: [u64; 2],
    /// Largest difference, this less the earlier, with its row and both values.
    pub largest: Option<(f64, u64, [f64; 2])>,
    /// now = ratio · earlier + offset, by medians.
    pub line: Option<(f64, f64)>,
    /// Lines of the chain in words that stood there earlier, and that stand there now.
    pub words: [Vec<String>; 2],
    every: u64,
    pairs: [Vec<f64>; 2],
}

/// What became of a result.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Changes {
    /// Names of the earlier result and of this one.
    pub names: [String; 2],
    /// Rows of both.
    pub rows: [u64; 2],
    /// The first row whose time differs, with both times.
    pub time: Option<(u64, [String; 2])>,
    /// The columns of channels, in the order of this result, then those that are gone.
    pub columns: Vec<Change>,
    /// Whether the chains of the earlier result are known, from its trace.
    pub traced: bool,
}

/// Compares a result with an earlier one, row for row.
///
/// - `earlier`, `now`: the two results; `layout`: how both are laid out.
/// - `trace`: that of the earlier one, for what its sheet said; `None` where there is none.
/// - `sheet`: by which this one was made.
///
/// # Errors
/// `ConvertError` for a file that cannot be read or has no column of a channel.
pub fn against(
    earlier: &mut dyn Rows,
    now: &mut dyn Rows,
    layout: &Layout,
    trace: Option<&Trace>,
    sheet: &Sheet,
) -> Result<Changes, ConvertError> {
    let names = [earlier.name().to_string(), now.name().to_string()];
    let mut before = reader_of(earlier, layout)?;
    let mut after = reader_of(now, layout)?;
    let mut columns: Vec<Change> = Vec::new();
    let mut places: [Vec<usize>; 2] = Default::default();
    let mut whole = Vec::new();
    for (i, channel) in sheet.measurement.channels.iter().enumerate().filter(|(_, c)| c.show) {
        let wanted = channel.name.as_str().into();
        let (was, is) = (before.find(&wanted), after.find(&wanted));
        let header = is.as_ref().ok().and_then(|i| after.names().get(*i)).cloned();
        let old_header = was.as_ref().ok().and_then(|i| before.names().get(*i)).cloned();
        let mut change = Change { there: [was.is_ok(), is.is_ok()], every: 1, ..Change::default() };
        if let (Some(a), Some(b)) = (&old_header, &header)
            && a != b
        {
            // another unit is another column
            change.there[0] = false;
        }
        change.column = header.unwrap_or_else(|| channel.name.clone());
        let old = trace.and_then(|t| t.channels.iter().find(|c| c.name == channel.name));
        if let Some(old) = old {
            let (words, old) = (with_stretches(sheet.describe(i)), with_stretches(old.words.clone()));
            let lacking = |of: &[String], other: &[String]| of.iter().filter(|l| !other.contains(l)).cloned().collect();
            change.words = [lacking(&old, &words), lacking(&words, &old)];
        }
        if let ([true, true], Ok(was), Ok(is)) = (change.there, was, is) {
            places[0].push(was);
            places[1].push(is);
            whole.push(columns.len());
        }
        columns.push(change);
    }
    // results of the earlier one that are no more
    for name in before.names() {
        let gone = trace
            .is_some_and(|t| t.channels.iter().any(|c| *name == c.name || name.starts_with(&format!("{} (", c.name))))
            && !columns.iter().any(|c| c.column == *name);
        if gone {
            columns.push(Change { column: name.clone(), there: [true, false], ..Change::default() });
        }
    }
    before.select(&places[0], &[])?;
    after.select(&places[1], &[])?;
    let (mut a, mut b) = (Block::new(ROWS), Block::new(ROWS));
    let mut rows = [0u64; 2];
    let mut time = None;
    loop {
        let read = [before.next_block(&mut a)?, after.next_block(&mut b)?];
        let both = read[0].min(read[1]);
        let first = rows[0] + 1;
        for row in 0..both {
            let times = [a.time_text.get(row).unwrap_or(""), b.time_text.get(row).unwrap_or("")];
            if time.is_none() && times[0] != times[1] {
                time = Some((first + row as u64, times.map(ToString::to_string)));
            }
        }
        for ((k, was), is) in whole.iter().zip(&a.columns).zip(&b.columns) {
            let Some(change) = columns.get_mut(*k) else { continue };
            for (row, (was, is)) in was.values.iter().zip(&is.values).take(both).enumerate() {
                change.add(*was, *is, first + row as u64);
            }
        }
        rows[0] += read[0] as u64;
        rows[1] += read[1] as u64;
        if both == 0 || read[0] != read[1] {
            // count what is left of the longer one
            while read[0] > 0 && before.next_block(&mut a)? > 0 {
                rows[0] += a.rows() as u64;
            }
            while read[1] > 0 && after.next_block(&mut b)? > 0 {
                rows[1] += b.rows() as u64;
            }
            break;
        }
    }
    for change in &mut columns {
        let [was, is] = core::mem::take(&mut change.pairs);
        change.line = line(&was, &is);
    }
    Ok(Changes { names, rows, time, columns, traced: trace.is_some() })
}

/// The lines of a chain, each with the stretch of time that it holds for where the chain changes.
fn with_stretches(lines: Vec<String>) -> Vec<String> {
    let mut stretch = String::new();
    let mut out = Vec::new();
    for line in lines {
        let heading =
            line.strip_suffix(':').filter(|l| *l == "from the start" || l.starts_with("from ") && l.ends_with(" on"));
        if let Some(heading) = heading {
            stretch = format!("{heading}, ");
        } else {
            // what follows is said of the channel as a whole
            if line.starts_with("gives: ") {
                stretch.clear();
            }
            out.push(format!("{stretch}{line}"));
        }
    }
    out
}

impl Change {
    fn add(&mut self, was: f64, is: f64, row: u64) {
        match (was.is_finite(), is.is_finite()) {
            (true, true) => {}
            (true, false) => return self.alone[0] += 1,
            (false, true) => return self.alone[1] += 1,
            (false, false) => return,
        }
        self.rows += 1;
        self.same += u64::from(was == is);
        let by = is - was;
        if self.largest.is_none_or(|(most, ..)| by.abs() > most.abs()) {
            self.largest = Some((by, row, [was, is]));
        }
        if self.rows.is_multiple_of(self.every.max(1)) {
            self.pairs[0].push(was);
            self.pairs[1].push(is);
            if self.pairs[0].len() >= PAIRS {
                // every other one is enough
                for side in &mut self.pairs {
                    let mut keep = false;
                    side.retain(|_| {
                        keep = !keep;
                        keep
                    });
                }
                self.every *= 2;
            }
        }
    }

    /// Whether anything of it is not as it was.
    #[must_use]
    pub fn is_changed(&self) -> bool {
        self.there != [true, true] || self.same != self.rows || self.alone != [0, 0]
    }
}

impl Changes {
    /// Whether anything is not as it was.
    #[must_use]
    pub fn is_changed(&self) -> bool {
        self.rows[0] != self.rows[1] || self.time.is_some() || self.columns.iter().any(Change::is_changed)
    }

    /// Returns the changes as JSON.
    #[must_use]
    pub fn json(&self) -> String {
        let columns: Vec<serde_json::Value> = self
            .columns
            .iter()
            .map(|c| {
                json!({
                    "column": c.column,
                    "earlier": c.there[0],
                    "now": c.there[1],
                    "rows": c.rows,
                    "same": c.same,
                    "earlier_alone": c.alone[0],
                    "now_alone": c.alone[1],
                    "largest_difference": c.largest.map(|(by, ..)| by),
                    "row": c.largest.map(|(_, row, _)| row),
                    "earlier_value": c.largest.map(|(.., [was, _])| was),
                    "now_value": c.largest.map(|(.., [_, is])| is),
                    "ratio": c.line.map(|l| l.0),
                    "offset": c.line.map(|l| l.1),
                    "said_earlier": c.words[0],
                    "says_now": c.words[1],
                })
            })
            .collect();
        format!(
            "{:#}",
            json!({
                "earlier": self.names[0],
                "now": self.names[1],
                "rows": self.rows,
                "time_differs_in_row": self.time.as_ref().map(|(row, _)| row),
                "channels": columns,
            })
        )
    }
}

impl fmt::Display for Changes {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let [before, now] = &self.names;
        writeln!(f, "{now} against {before}")?;
        if self.rows[0] != self.rows[1] {
            writeln!(
                f,
                "  {} rows now, {} earlier: only as many as both have are compared",
                self.rows[1], self.rows[0]
            )?;
        }
        if let Some((row, [was, is])) = &self.time {
            writeln!(f, "  row {row}: the time is '{is}', earlier '{was}': these may be other rows")?;
        }
        for c in &self.columns {
            match c.there {
                [false, true] => writeln!(f, "{}: was not there, or in another unit", c.column)?,
                [true, false] => writeln!(f, "{}: is there no more", c.column)?,
                [false, false] => writeln!(f, "{}: stands in neither", c.column)?,
                [true, true] if !c.is_changed() => writeln!(f, "{}: the same in all {} rows", c.column, c.rows)?,
                [true, true] => c.values_in_words(f)?,
            }
            for (lines, when) in c.words.iter().zip(["earlier", "now"]) {
                for line in lines {
                    writeln!(f, "  {when}: {line}")?;
                }
            }
        }
        if !self.traced {
            writeln!(f, "beside {before} stands no trace: what changed in the sheet is not known")?;
        }
        Ok(())
    }
}

impl Change {
    fn values_in_words(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {} of {} rows differ", self.column, self.rows - self.same, self.rows)?;
        if let Some((by, row, [was, is])) = self.largest.filter(|(by, ..)| *by != 0.0) {
            write!(f, ", most by {} in row {row}: {} earlier, {} now", short(by, 6), figure(was), figure(is))?;
        }
        writeln!(f)?;
        if let Some((ratio, offset)) = self.line.filter(|l| *l != (1.0, 0.0)) {
            writeln!(
                f,
                "  now = {} earlier {} {}",
                short(ratio, 7),
                if offset < 0.0 { "-" } else { "+" },
                short(offset.abs(), 4)
            )?;
        }
        for (count, when) in self.alone.iter().zip(["earlier", "now"]).filter(|(count, _)| **count > 0) {
            writeln!(f, "  {count} rows have a value {when} alone")?;
        }
        Ok(())
    }
}
