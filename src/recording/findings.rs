//! What was found about the shape of a recording.

use core::fmt;
use std::{
    format,
    string::{String, ToString},
    vec::Vec,
};

use crate::sheet::{Decimal, Encoding, Layout, Pass, Separator};

/// Where a finding comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// The layout states it.
    Stated,
    /// The head of the file shows it.
    Found,
    /// Neither; this is the default.
    Assumed,
}

impl fmt::Display for Origin {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Stated => "stated",
            Self::Found => "found",
            Self::Assumed => "assumed",
        })
    }
}

/// How lines end in the head of the file. Reading accepts all three, also mixed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LineEnd {
    /// Line feed.
    Lf,
    /// Carriage return and line feed.
    CrLf,
    /// Carriage return.
    Cr,
    /// More than one of them.
    Mixed,
    /// The file has no line end.
    None,
}

impl fmt::Display for LineEnd {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Lf => "LF",
            Self::CrLf => "CRLF",
            Self::Cr => "CR",
            Self::Mixed => "mixed",
            Self::None => "none",
        })
    }
}

/// What the seconds of a block count from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum TimeScale {
    /// There is neither a time column nor an interval.
    None,
    /// There is a time column, but no moment in it could be read so far.
    Unknown,
    /// Seconds as written, or rows times the interval.
    Elapsed,
    /// Seconds since midnight of the first day, for moments that state no date.
    TimeOfDay,
    /// Seconds since the civil midnight before the first moment, for moments that state no zone; days have 86 400 s.
    Civil {
        /// Year of that midnight.
        year: i32,
        /// Month, 1..=12.
        month: u8,
        /// Day, 1..=31.
        day: u8,
    },
    /// Seconds since 1970-01-01T00:00:00Z without leap seconds.
    Utc,
}

impl fmt::Display for TimeScale {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::None => f.write_str("no time"),
            Self::Unknown => f.write_str("text only, no moment could be read"),
            Self::Elapsed => f.write_str("seconds as given"),
            Self::TimeOfDay => f.write_str("times of day"),
            Self::Civil { .. } => f.write_str("moments of civil time"),
            Self::Utc => f.write_str("moments, placed on UTC"),
        }
    }
}

/// What was stated, found and assumed about a recording; prints as one line for each finding.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub struct Findings {
    /// What stands between two cells.
    pub separator: (Separator, Origin),
    /// What stands between whole and fraction.
    pub decimal: (Decimal, Origin),
    /// How bytes become characters.
    pub encoding: (Encoding, Origin),
    /// Whether the file begins with a byte-order mark.
    pub byte_order_mark: bool,
    /// How lines end.
    pub line_end: LineEnd,
    /// The line of names, 0 when there is none.
    pub names_line: (u64, Origin),
    /// The line of units, 0 when there is none.
    pub units_line: (u64, Origin),
    /// The line of the first row, or the line after the last when there is no row.
    pub first_line: (u64, Origin),
    /// How many columns there are.
    pub columns: usize,
    /// The time columns, counted from 0.
    pub time: (Vec<usize>, Origin),
    /// The names of the time columns, joined by a blank.
    pub time_name: String,
    /// The shape of the moments, when it is neither ISO 8601 nor a number.
    pub time_format: Option<(String, Origin)>,
    /// The unit of a numeric time, when the file states another than seconds.
    pub time_unit: Option<String>,
    /// The zone of moments that state none.
    pub time_zone: Option<String>,
    /// In which pass of an hour that comes twice a moment lies, where no row before it tells.
    pub repeated_hour: (Pass, Origin),
    /// What the seconds count from.
    pub time_scale: TimeScale,
    /// Time from one row to the next, s.
    pub interval: Option<f64>,
    /// Whether the file ends before a first row.
    pub no_rows: bool,
}

/// What a layout says, or leaves to assume, of an hour that comes twice.
pub(super) fn hour_of(layout: &Layout) -> (Pass, Origin) {
    layout.repeated_hour.map_or((Pass::First, Origin::Assumed), |pass| (pass, Origin::Stated))
}

impl Findings {
    /// Returns the findings in words, one line each.
    #[must_use]
    pub fn lines(&self) -> Vec<String> {
        let mut lines = Vec::new();
        let ((separator, s), (decimal, d)) = (self.separator, self.decimal);
        lines.push(if s == d {
            format!("separator {separator}, decimal {decimal} ({s})")
        } else {
            format!("separator {separator} ({s}), decimal {decimal} ({d})")
        });
        let mark = if self.byte_order_mark { " with byte-order mark" } else { "" };
        lines.push(format!("encoding {}{mark} ({}), line ends {}", self.encoding.0, self.encoding.1, self.line_end));
        for (what, (line, origin)) in [("names", self.names_line), ("units", self.units_line)] {
            lines.push(match line {
                0 => format!("no line of {what} ({origin})"),
                _ => format!("{what} in line {line} ({origin})"),
            });
        }
        lines.push(format!("first row in line {} ({})", self.first_line.0, self.first_line.1));
        lines.push(format!("{} column{}", self.columns, if self.columns == 1 { "" } else { "s" }));
        if let Some(interval) = self.interval {
            lines.push(format!("no time column, {interval} s from row to row (stated)"));
        } else if self.time.0.is_empty() {
            lines.push(String::from("no time column"));
        } else {
            let several = if self.time.0.len() == 1 { "" } else { "s" };
            let scale = match self.time_scale {
                TimeScale::Unknown if self.no_rows => String::from("no rows"),
                scale => scale.to_string(),
            };
            let mut line = format!("time from column{several} '{}' ({}): {scale}", self.time_name, self.time.1);
            if let Some(unit) = &self.time_unit {
                line.push_str(&format!(", written in {unit}"));
            }
            if let Some((shape, origin)) = &self.time_format {
                line.push_str(&format!(", written as {shape} ({origin})"));
            }
            if let Some(zone) = &self.time_zone {
                line.push_str(&format!(", zone {zone} (stated)"));
            }
            lines.push(line);
            if self.time_zone.is_some() {
                let (pass, origin) = self.repeated_hour;
                lines.push(format!(
                    "a moment that the clock of the zone shows twice: {pass} pass, where no row before it tells ({origin})"
                ));
            }
        }
        lines
    }
}

impl fmt::Display for Findings {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (i, line) in self.lines().iter().enumerate() {
            if i > 0 {
                f.write_str("\n")?;
            }
            f.write_str(line)?;
        }
        Ok(())
    }
}
