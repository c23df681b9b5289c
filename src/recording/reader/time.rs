//! Where the time of a recording comes from, and the moments themselves.

use std::{format, io::Read, string::String, vec::Vec};

use jiff::tz::TimeZone;

use super::tally::{CellAt, count, note};
use super::{Block, Reader, split_unit};
use crate::chain::Word;
use crate::recording::cell::{decode, trim};
use crate::recording::detect::{Found, layout_error};
use crate::recording::moment::{self, Clock, Interval, Placing, Shape, TimeUnit};
use crate::recording::{Origin, RecordingError, TimeScale};
use crate::sheet::{Layout, Pass};

impl<R: Read> Reader<R> {
    /// Settles where time comes from and, from the rows in the head, what it counts from.
    pub(super) fn set_time(&mut self, layout: &Layout, found: &Found) -> Result<(), RecordingError> {
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
        let unit_text = self.time.first().and_then(|&c| self.unit_of(c)).map(String::from);
        let unit = unit_text.as_deref().and_then(TimeUnit::from_text);
        self.clock =
            Clock::new(TimeScale::Unknown, shape, unit, zone).within(layout.repeated_hour.unwrap_or(Pass::First));
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
            let unit_of_time = unit.is_some_and(|u| u == "s" || TimeUnit::from_text(u).is_some());
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

    /// The moment that was just read.
    fn cell_of_time(&self, line: u64, block: &Block) -> CellAt {
        let text = block.time_text.len().checked_sub(1).and_then(|row| block.time_text.get(row)).unwrap_or_default();
        CellAt {
            line,
            column: self.time.first().copied().unwrap_or_default() + 1,
            text: text.chars().take(80).collect(),
        }
    }

    pub(super) fn read_time(&mut self, block: &mut Block, line: u64) {
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
            Placing::Twice { pass, told } => {
                count(&mut self.tally.twice, line);
                self.tally.twice_later += u64::from(pass == Pass::Second);
                let second = seconds as i64;
                match &self.tally.first_untold {
                    None if !told => {
                        self.tally.first_untold = Some((self.cell_of_time(line, block), pass, second));
                    }
                    // that the clock was set back since shows that it was in the first pass
                    Some((_, Pass::First, before)) if told && pass == Pass::Second && second - before < 7200 => {
                        self.tally.first_untold = None;
                    }
                    _ => {}
                }
                if self.tally.first_twice.is_none() {
                    self.tally.first_twice = Some(self.cell_of_time(line, block));
                }
            }
            Placing::Never => count(&mut self.tally.never, line),
        }
        if placing == Placing::Never && self.tally.first_never.is_none() {
            self.tally.first_never = Some(self.cell_of_time(line, block));
        }
        if seconds < self.last_seconds {
            count(&mut self.tally.steps_back, line);
        }
        self.last_seconds = seconds;
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
