//! Converted blocks as a table.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::parts::Along;
use crate::chain::Word;
use crate::measurement::{Converted, EveryReading, Measurement, MeasurementError, ShuntWatch, Statistics};
use crate::recording::{Digits, Head, HeadKind, RecordingError, ResultTable, TimeScale};
use crate::uncertainty::{Coverage, decimals, rounded};

/// What of a coverage stands in a header: `95 %`, or `k = 2`.
fn in_words(coverage: Coverage) -> String {
    match coverage {
        Coverage::Factor(k) => format!("k = {k}"),
        Coverage::Probability(p) => format!("{} %", (p * 1e10).round() / 1e8),
    }
}

/// Writes an uncertainty to two significant digits.
fn put_uncertainty(out: &mut dyn ResultTable, expanded: f64) {
    match decimals(expanded) {
        Some(places @ 0..=12) => out.put_number(expanded, Digits::Fixed(places as u8)),
        Some(places) => out.put_number(rounded(expanded, places), Digits::Shortest),
        None => out.put_number(expanded, Digits::Shortest),
    };
}

/// Writes converted blocks as a table and counts what it writes.
pub(super) struct TableWriter<'a> {
    measurement: &'a Measurement,
    pub(super) out: &'a mut dyn ResultTable,
    header: Vec<Head>,
    has_time: bool,
    pub(super) statistics: Vec<Statistics>,
    pub(super) rows: u64,
    flags: String,
    pub(super) watch: ShuntWatch<'a>,
    /// Time of the latest row, s.
    pub(super) latest: f64,
    every: Option<EveryReading<'a>>,
    /// Expanded uncertainties of one row.
    expanded: Vec<f64>,
}

impl<'a> TableWriter<'a> {
    /// Begins a table with these columns before those of the channels: time, where there is one, and what is kept.
    pub(super) fn new(
        measurement: &'a Measurement,
        time: Option<(String, TimeScale)>,
        kept: Vec<String>,
        out: &'a mut dyn ResultTable,
        coverage: Option<Coverage>,
    ) -> Result<Self, MeasurementError> {
        let has_time = time.is_some();
        let time = time.map(|(name, scale)| Head { name, kind: HeadKind::Time(scale) });
        let kept = kept.into_iter().map(|name| Head { name, kind: HeadKind::Kept });
        let mut header: Vec<Head> = time.into_iter().chain(kept).collect();
        for (i, channel) in measurement.channels.iter().enumerate().filter(|(_, c)| c.show) {
            let unit = &channel.unit;
            let unit = if unit.is_empty() { String::new() } else { format!(" ({unit})") };
            header.push(Head { name: format!("{}{unit}", channel.name), kind: HeadKind::Value(i) });
            if let Some(coverage) = coverage {
                let unit = if channel.unit.is_empty() { String::new() } else { format!("{}, ", channel.unit) };
                let name = format!("U {} ({unit}{})", channel.name, in_words(coverage));
                header.push(Head { name, kind: HeadKind::Uncertainty(i) });
            }
        }
        header.push(Head { name: "flags".to_string(), kind: HeadKind::Flags });
        Ok(Self {
            statistics: std::vec![Statistics::default(); measurement.channels.len()],
            measurement,
            out,
            header,
            has_time,
            rows: 0,
            flags: String::new(),
            watch: ShuntWatch::new(measurement),
            latest: f64::NEG_INFINITY,
            every: coverage.map(|coverage| EveryReading::new(measurement, coverage)).transpose()?,
            expanded: Vec::new(),
        })
    }

    /// Writes the line of names.
    pub(super) fn header(&mut self) -> Result<(), RecordingError> {
        self.out.begin(&self.header)
    }

    /// Writes a block.
    pub(super) fn write(&mut self, block: &Converted<Along>) -> Result<(), RecordingError> {
        let rows = block.rows();
        for row in 0..rows {
            if self.has_time {
                let seconds = block.seconds.get(row).copied().unwrap_or(f64::NAN);
                self.out.put_time(block.payload.time.get(row).unwrap_or(""), seconds);
            }
            for kept in &block.payload.kept {
                self.out.put_text(kept.get(row).unwrap_or(""));
            }
            self.flags.clear();
            if let Some(every) = &mut self.every {
                every.row(block, row, &mut self.expanded);
            }
            for (i, channel) in self.measurement.channels.iter().enumerate().filter(|(_, c)| c.show) {
                let column = block.results.get(i);
                let value = column.and_then(|c| c.values.get(row)).copied().unwrap_or(f64::NAN);
                let word = column.and_then(|c| c.words.get(row)).copied().unwrap_or(Word::Missing);
                let rests = block.excused.get(i).and_then(|e| e.get(row)) == Some(&true);
                self.out.put_number(value, channel.decimals.map_or(Digits::Shortest, Digits::Fixed));
                if self.every.is_some() {
                    let expanded = self.expanded.get(i).copied().filter(|_| !value.is_nan()).unwrap_or(f64::NAN);
                    put_uncertainty(self.out, expanded);
                }
                if word != Word::Good && !rests {
                    if !self.flags.is_empty() {
                        self.flags.push(' ');
                    }
                    // a result of a rosette is `R1.direction` here: blanks part the flags
                    self.flags.extend(channel.name.chars().map(|c| if c == ' ' { '.' } else { c }));
                    self.flags.push(':');
                    self.flags.push_str(word.as_str());
                }
            }
            self.out.put_text(&self.flags);
            self.out.end_row()?;
        }
        self.rows += rows as u64;
        for ((statistics, column), excused) in self.statistics.iter_mut().zip(&block.results).zip(&block.excused) {
            statistics.add(column, excused);
        }
        self.watch.add(block);
        self.latest = block.seconds.iter().copied().filter(|t| t.is_finite()).fold(self.latest, f64::max);
        Ok(())
    }
}
