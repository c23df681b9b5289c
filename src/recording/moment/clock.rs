//! The moments of a recording on its time scale, in row order.

use std::{format, string::String};

use jiff::{
    civil,
    tz::{AmbiguousOffset, Offset, TimeZone},
};

use super::{DAY, Shape, Written, iso, nearest};
use crate::chain::Word;
use crate::recording::{
    TimeScale,
    cell::{self, CellReader},
};
use crate::sheet::{Decimal, Pass};

/// A factor for a numeric time that is not in seconds.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(in crate::recording) enum TimeUnit {
    Times(f64),
    Per(f64),
}

impl TimeUnit {
    /// The unit of this name; `None` for seconds and for what is no unit of time.
    pub(in crate::recording) fn from_text(text: &str) -> Option<Self> {
        Some(match text {
            "ms" => Self::Per(1e3),
            "us" | "\u{b5}s" | "\u{3bc}s" => Self::Per(1e6),
            "ns" => Self::Per(1e9),
            "min" => Self::Times(60.0),
            "h" => Self::Times(3600.0),
            "d" => Self::Times(86_400.0),
            _ => return None,
        })
    }
}

/// What a moment needed to be placed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(in crate::recording) enum Placing {
    Plain,
    /// The clock showed this time twice, and it was placed in this pass.
    Twice {
        pass: Pass,
        /// Whether the rows before it tell the pass.
        told: bool,
    },
    /// The clock never showed this time.
    Never,
}

/// Places the moments of one recording on its scale, in row order.
#[derive(Clone, Debug)]
pub(in crate::recording) struct Clock {
    pub(in crate::recording) scale: TimeScale,
    shape: Option<Shape>,
    unit: Option<TimeUnit>,
    zone: Option<TimeZone>,
    /// Where a moment lies that the clock shows twice, when no row before it tells.
    pass: Pass,
    /// Days from 1970-01-01 to second 0 of a civil scale.
    first_day: i64,
    /// Days that a time of day has gone on since the first.
    days_on: i64,
    past: Past,
}

/// What a clock has shown before a row.
#[derive(Clone, Copy, Debug, Default)]
struct Past {
    previous: Option<f64>,
    /// The last two steps forwards from one row to the next, s; 0 where there was none.
    steps: [f64; 2],
}

impl Past {
    /// The usual step: after a pause it is the one before it.
    fn step(&self) -> f64 {
        match self.steps {
            [0.0, last] => last,
            [before, last] => before.min(last),
        }
    }
}

/// Year, month, day and days since 1970-01-01.
type Date = (i64, i64, i64, i64);

/// Most that a clock is believed to step back between two rows without being set back, s.
pub(in crate::recording) const JITTER: f64 = 60.0;

impl Clock {
    pub(in crate::recording) fn new(
        scale: TimeScale,
        shape: Option<Shape>,
        unit: Option<TimeUnit>,
        zone: Option<TimeZone>,
    ) -> Self {
        Self { scale, shape, unit, zone, pass: Pass::First, first_day: 0, days_on: 0, past: Past::default() }
    }

    /// The same, with another pass for what it shows twice and no row before tells.
    pub(in crate::recording) fn within(self, pass: Pass) -> Self {
        Self { pass, ..self }
    }

    /// Takes the scale, but not the history, of another clock.
    pub(in crate::recording) fn begin_like(&mut self, other: &Self) {
        self.scale = other.scale;
        self.first_day = other.first_day;
    }

    /// Goes on where the clock of the recording before ended: from the same day, with its last moment.
    pub(in crate::recording) fn go_on_from(&mut self, before: &Self) {
        let civil = |scale| matches!(scale, TimeScale::Civil { .. });
        if civil(before.scale) && (civil(self.scale) || self.scale == TimeScale::Unknown) {
            self.begin_like(before);
        }
        if self.scale == before.scale {
            self.past = before.past;
        }
    }

    /// Seconds from 1970-01-01 to second 0 of a civil scale, in days of 86 400 s.
    pub(in crate::recording) fn first_day_seconds(&self) -> f64 {
        (self.first_day * DAY) as f64
    }

    fn read(&self, text: &[u8]) -> Option<Written> {
        match &self.shape {
            None => iso(text),
            Some(shape) => shape.read(text),
        }
    }

    /// Returns the seconds of the next row.
    pub(in crate::recording) fn next(&mut self, text: &[u8], cells: &CellReader) -> (f64, Word, Placing) {
        let (number, word) = cells.value(text);
        if matches!(word, Word::Missing | Word::Saturated) {
            return (f64::NAN, Word::Missing, Placing::Plain);
        }
        if word == Word::Good && self.shape.is_none() && matches!(self.scale, TimeScale::Unknown | TimeScale::Elapsed) {
            self.scale = TimeScale::Elapsed;
            let seconds = match self.unit {
                None => number,
                Some(TimeUnit::Times(factor)) => number * factor,
                Some(TimeUnit::Per(divisor)) => number / divisor,
            };
            return (seconds, Word::Good, Placing::Plain);
        }
        let Some(written) = self.read(cell::trim(text, cells.encoding)) else {
            return (f64::NAN, Word::Unreadable, Placing::Plain);
        };
        if self.scale == TimeScale::Unknown {
            self.scale = self.scale_of(&written);
            if let Some((.., day)) = written.date {
                self.first_day = day;
            }
        }
        match self.place(&written, self.past) {
            Ok((mut seconds, placing)) => {
                if self.scale == TimeScale::TimeOfDay {
                    let day = |days: i64| nearest(days * DAY + written.second, written.fraction);
                    seconds = day(self.days_on);
                    if self.past.previous.is_some_and(|p| seconds < p - 43_200.0) {
                        self.days_on += 1;
                        seconds = day(self.days_on);
                    }
                }
                if let Some(step) = self.past.previous.map(|p| seconds - p).filter(|step| *step > 0.0) {
                    self.past.steps = [self.past.steps[1], step];
                }
                self.past.previous = Some(seconds);
                (seconds, Word::Good, placing)
            }
            Err(_) => (f64::NAN, Word::Unreadable, Placing::Plain),
        }
    }

    fn scale_of(&self, written: &Written) -> TimeScale {
        match written.date {
            None => TimeScale::TimeOfDay,
            Some(_) if written.offset.is_some() || self.zone.is_some() => TimeScale::Utc,
            Some((year, month, day, _)) => TimeScale::Civil {
                year: i32::try_from(year).unwrap_or_default(),
                month: u8::try_from(month).unwrap_or_default(),
                day: u8::try_from(day).unwrap_or_default(),
            },
        }
    }

    fn place(&self, written: &Written, past: Past) -> Result<(f64, Placing), String> {
        match (self.scale, written.date, written.offset) {
            (TimeScale::TimeOfDay, None, _) => Ok((nearest(written.second, written.fraction), Placing::Plain)),
            (TimeScale::TimeOfDay, Some(_), _) => {
                Err("the recording states times of day without a date, so a date cannot be placed in it".into())
            }
            (TimeScale::Civil { .. } | TimeScale::Utc, None, _) => Err("the date is missing".into()),
            (TimeScale::Civil { .. }, Some((.., day)), None) => {
                Ok((nearest((day - self.first_day) * DAY + written.second, written.fraction), Placing::Plain))
            }
            (TimeScale::Civil { .. }, Some(_), Some(_)) => Err(
                "it states a zone and the recording does not; leave the zone out, or state time_zone for the recording"
                    .into(),
            ),
            (TimeScale::Utc, Some((.., day)), Some(offset)) => {
                Ok((nearest(day * DAY + written.second - offset, written.fraction), Placing::Plain))
            }
            (TimeScale::Utc, Some(date), None) => match &self.zone {
                None => Err("it states no zone and the recording does; write it with Z or an offset".into()),
                Some(zone) => {
                    place_in_zone(zone, date, written, past, self.pass).ok_or_else(|| "the date is out of range".into())
                }
            },
            (TimeScale::None, ..) => Err("the recording has no time".into()),
            (TimeScale::Elapsed, ..) => {
                Err("the time of the recording is a number of seconds; write it as \"12.5 s\"".into())
            }
            (TimeScale::Unknown, ..) => {
                Err("no moment in the time column could be read; state time_format for the recording".into())
            }
        }
    }

    /// Returns the seconds of a moment that a sheet states, or says why it has none.
    pub(in crate::recording) fn moment(&self, text: &str) -> Result<f64, String> {
        let text = text.trim();
        if self.scale == TimeScale::Elapsed {
            let number = text.strip_suffix('s').unwrap_or(text).trim_end();
            if let Some(seconds) = cell::number(number.as_bytes(), Decimal::Point).filter(|s| s.is_finite()) {
                return Ok(seconds);
            }
        }
        let written = iso(text.as_bytes()).or_else(|| self.read(text.as_bytes()));
        let written = match (self.scale, written) {
            (TimeScale::None | TimeScale::Elapsed | TimeScale::Unknown, _) => Written::default(),
            (_, Some(written)) => written,
            (_, None) => {
                return Err("it is no moment; write it as 2026-03-12T10:00:00, or in the shape of the recording".into());
            }
        };
        match self.place(&written, Past::default())? {
            (seconds, Placing::Plain) => Ok(seconds),
            (_, Placing::Twice { .. }) => {
                let offsets =
                    self.zone.as_ref().zip(written.date).and_then(|(zone, date)| offset(zone, date, &written));
                let which = match offsets {
                    Some(AmbiguousOffset::Fold { before, after }) => {
                        format!(", {} in the first pass or {} in the second", with_minutes(before), with_minutes(after))
                    }
                    _ => String::new(),
                };
                Err(format!("the clock of this zone showed it twice; write it with its offset{which}"))
            }
            (_, Placing::Never) => Err("the clock of this zone never showed it; write it with its offset".into()),
        }
    }
}

/// The offset as a moment carries it, `+02:00`.
fn with_minutes(offset: Offset) -> String {
    let minutes = offset.seconds() / 60;
    let sign = if minutes < 0 { '-' } else { '+' };
    format!("{sign}{:02}:{:02}", minutes.abs() / 60, minutes.abs() % 60)
}

/// The offset, or both, that a clock of this zone had when it showed this.
fn offset(zone: &TimeZone, (year, month, day, _): Date, written: &Written) -> Option<AmbiguousOffset> {
    // The zone is asked for a time that exists; 24:00 and a leap second belong to the last second that does.
    let second = written.second.min(DAY - 1);
    let clock = |value: i64| i8::try_from(value).ok();
    let civil = civil::DateTime::new(
        i16::try_from(year).ok()?,
        clock(month)?,
        clock(day)?,
        clock(second / 3600)?,
        clock(second / 60 % 60)?,
        clock(second % 60)?,
        0,
    );
    Some(zone.to_ambiguous_timestamp(civil.ok()?).offset())
}

fn place_in_zone(
    zone: &TimeZone,
    date: Date,
    written: &Written,
    past: Past,
    otherwise: Pass,
) -> Option<(f64, Placing)> {
    let (.., days) = date;
    let at = |offset: Offset| nearest(days * DAY + written.second - i64::from(offset.seconds()), written.fraction);
    Some(match offset(zone, date, written)? {
        AmbiguousOffset::Unambiguous { offset } => (at(offset), Placing::Plain),
        AmbiguousOffset::Fold { before, after } => {
            let first = at(before);
            let half = (at(after) - first) / 2.0;
            // The second pass is taken where the clock was set back: where it shows less than before, or, among rows that are
            // far apart, where the first pass would be more than half of that hour short of the usual step; the first pass where
            // it is within half of that hour of that step. Behind a longer pause, and without a row before, nobody knows.
            let (pass, told) = match past.previous.map(|p| first - p) {
                Some(ahead) if ahead < -JITTER || ahead < past.step() - half => (Pass::Second, true),
                Some(ahead) if ahead <= past.step() + half => (Pass::First, true),
                _ => (otherwise, false),
            };
            let seconds = match pass {
                Pass::First => first,
                Pass::Second => at(after),
            };
            (seconds, Placing::Twice { pass, told })
        }
        AmbiguousOffset::Gap { before, .. } => (at(before), Placing::Never),
    })
}
