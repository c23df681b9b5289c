//! Moments: text to seconds.

mod clock;
mod interval;

use std::format;

pub(in crate::recording) use clock::{Clock, JITTER, Placing, TimeUnit};
pub(in crate::recording) use interval::Interval;

use super::cell;
pub(in crate::recording) use crate::sheet::Shape;
use crate::sheet::{Decimal, Encoding, Token};

const DAY: i64 = 86_400;

/// Returns the days from 1970-01-01 to this date of the Gregorian calendar; `None` for a date that does not exist.
fn days_from_date(year: i64, month: i64, day: i64) -> Option<i64> {
    let leap = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
    let length = match month {
        1 | 3 | 5 | 7 | 8 | 10 | 12 => 31,
        4 | 6 | 9 | 11 => 30,
        2 => 28 + i64::from(leap),
        _ => return None,
    };
    if !(0..=9999).contains(&year) || !(1..=length).contains(&day) {
        return None;
    }
    // Years begin in March, so that the day that comes and goes is the last.
    let (y, m) = if month > 2 { (year, month - 3) } else { (year - 1, month + 9) };
    let era = y.div_euclid(400);
    let year_of_era = y.rem_euclid(400);
    let day_of_year = (153 * m + 2) / 5 + day - 1;
    Some(era * 146_097 + year_of_era * 365 + year_of_era / 4 - year_of_era / 100 + day_of_year - 719_468)
}

/// A moment as it is written, not yet placed on a scale.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
struct Written {
    /// Year, month, day and days since 1970-01-01.
    date: Option<(i64, i64, i64, i64)>,
    /// Second of the day; 86 400 for 24:00:00.
    second: i64,
    /// Fraction of the second: digits, and how many.
    fraction: (u64, u32),
    /// Offset from UTC, s.
    offset: Option<i64>,
}

/// Returns whole + fraction as the nearest double.
fn nearest(whole: i64, (digits, count): (u64, u32)) -> f64 {
    if digits == 0 {
        return whole as f64;
    }
    // Both integers are exact below 2^53, so the one division rounds correctly.
    if count <= 9
        && let Some(scale) = 10_i64.checked_pow(count)
        && let Some(total) = whole.checked_mul(scale).and_then(|w| w.checked_add(i64::try_from(digits).ok()?))
        && total.unsigned_abs() < 1 << 53
    {
        return total as f64 / scale as f64;
    }
    let scale = 10_i128.pow(count.min(18));
    let total = i128::from(whole) * scale + i128::from(digits);
    let sign = if total < 0 { "-" } else { "" };
    let (total, scale) = (total.unsigned_abs(), scale.unsigned_abs());
    let text = format!("{sign}{}.{:0width$}", total / scale, total % scale, width = count.min(18) as usize);
    text.parse().unwrap_or(f64::NAN)
}

/// Takes text apart from the left.
struct Cursor<'a>(&'a [u8]);

impl Cursor<'_> {
    fn peek(&self) -> Option<u8> {
        self.0.first().copied()
    }

    fn skip(&mut self, count: usize) {
        self.0 = self.0.get(count..).unwrap_or_default();
    }

    fn take(&mut self, byte: u8) -> Option<()> {
        (self.peek()? == byte).then(|| self.skip(1))
    }

    fn take_blanks(&mut self) -> Option<()> {
        self.take(b' ')?;
        while self.take(b' ').is_some() {}
        Some(())
    }

    /// A number of `least..=most` digits, and how many there were.
    fn digits(&mut self, least: usize, most: usize) -> Option<(i64, usize)> {
        let mut value = 0;
        let mut count = 0;
        while count < most
            && let Some(byte) = self.peek()
            && byte.is_ascii_digit()
        {
            value = 10 * value + i64::from(byte - b'0');
            count += 1;
            self.skip(1);
        }
        (count >= least).then_some((value, count))
    }

    /// The digits after a decimal mark, if there is one. Digits after the eighteenth are read and left out.
    fn fraction(&mut self) -> Option<(u64, u32)> {
        if !matches!(self.peek(), Some(b'.' | b',')) {
            return Some((0, 0));
        }
        self.skip(1);
        let mut fraction = (0, 0);
        let mut count = 0;
        while let Some(byte) = self.peek()
            && byte.is_ascii_digit()
        {
            if count < 18 {
                count += 1;
                fraction.0 = 10 * fraction.0 + u64::from(byte - b'0');
            }
            self.skip(1);
        }
        // Closing zeros say nothing and would only make the integers longer.
        fraction.1 = count;
        while fraction.1 > 0 && fraction.0 % 10 == 0 {
            fraction = (fraction.0 / 10, fraction.1 - 1);
        }
        (count > 0).then_some(fraction)
    }

    fn end(&self) -> Option<()> {
        self.0.is_empty().then_some(())
    }

    /// `hh:mm`, `hh:mm:ss`, with a fraction of the second.
    fn clock(&mut self, written: &mut Written) -> Option<()> {
        let hour = self.digits(1, 2)?.0;
        self.take(b':')?;
        let minute = self.digits(2, 2)?.0;
        let mut second = 0;
        if self.take(b':').is_some() {
            second = self.digits(2, 2)?.0;
            written.fraction = self.fraction()?;
        }
        written.second = second_of_day(hour, minute, second, written.fraction)?;
        Some(())
    }
}

fn second_of_day(hour: i64, minute: i64, second: i64, fraction: (u64, u32)) -> Option<i64> {
    let midnight = hour == 24 && minute == 0 && second == 0 && fraction.0 == 0;
    // 60 is a leap second, which the scales here do not have: it coincides with the second that follows.
    (hour <= 23 && minute <= 59 && second <= 60 || midnight).then_some(hour * 3600 + minute * 60 + second)
}

/// Reads `2026-03-12T10:00:00.02Z`: a blank instead of T, without seconds, date only, clock only, with offset or without zone.
fn iso(text: &[u8]) -> Option<Written> {
    let mut written = Written::default();
    let mut cursor = Cursor(text);
    if text.get(4) == Some(&b'-') {
        let year = cursor.digits(4, 4)?.0;
        cursor.take(b'-')?;
        let month = cursor.digits(2, 2)?.0;
        cursor.take(b'-')?;
        let day = cursor.digits(2, 2)?.0;
        written.date = Some((year, month, day, days_from_date(year, month, day)?));
        if cursor.end().is_some() {
            return Some(written);
        }
        if cursor.take(b'T').or_else(|| cursor.take(b't')).is_none() {
            cursor.take_blanks()?;
        }
    }
    cursor.clock(&mut written)?;
    if written.date.is_some() && cursor.end().is_none() {
        let _ = cursor.take_blanks();
        written.offset = Some(match cursor.peek()? {
            b'Z' | b'z' => {
                cursor.skip(1);
                0
            }
            sign @ (b'+' | b'-') => {
                cursor.skip(1);
                let hour = cursor.digits(2, 2)?.0;
                let mut minute = 0;
                if cursor.end().is_none() {
                    let _ = cursor.take(b':');
                    minute = cursor.digits(2, 2)?.0;
                }
                if hour > 23 || minute > 59 {
                    return None;
                }
                (if sign == b'-' { -1 } else { 1 }) * (hour * 3600 + minute * 60)
            }
            _ => return None,
        });
    }
    cursor.end()?;
    Some(written)
}

impl Shape {
    fn read(&self, text: &[u8]) -> Option<Written> {
        let mut cursor = Cursor(text);
        let (mut date, mut has_date, mut clock) = ([0; 3], false, [0; 3]);
        let mut fraction = (0, 0);
        for (i, token) in self.0.iter().enumerate() {
            let packed = !matches!(self.0.get(i + 1), None | Some(Token::Blanks | Token::Text(_)));
            let least = if packed { 2 } else { 1 };
            let [year, month, day] = &mut date;
            let [hour, minute, second] = &mut clock;
            match token {
                Token::Year => {
                    let (value, count) = cursor.digits(if packed { 4 } else { 2 }, 4)?;
                    *year = match count {
                        2 if value < 70 => 2000 + value,
                        2 => 1900 + value,
                        4 => value,
                        _ => return None,
                    };
                    has_date = true;
                }
                Token::Month => *month = cursor.digits(least, 2)?.0,
                Token::Day => *day = cursor.digits(least, 2)?.0,
                Token::Hour => *hour = cursor.digits(least, 2)?.0,
                Token::Minute => *minute = cursor.digits(least, 2)?.0,
                Token::Second => {
                    *second = cursor.digits(least, 2)?.0;
                    fraction = cursor.fraction()?;
                }
                Token::Blanks => cursor.take_blanks()?,
                Token::Text(byte) => cursor.take(*byte)?,
            }
        }
        cursor.end()?;
        let [year, month, day] = date;
        let [hour, minute, second] = clock;
        let date = match has_date {
            true => Some((year, month, day, days_from_date(year, month, day)?)),
            false => None,
        };
        Some(Written { date, second: second_of_day(hour, minute, second, fraction)?, fraction, offset: None })
    }
}

/// Shapes that a moment in the head of a file may have without being stated: the year stands first, or points stand between.
pub(in crate::recording) const FOUND_SHAPES: [&str; 4] = [
    "day.month.year hour:minute:second",
    "day.month.year",
    "year/month/day hour:minute:second",
    "day.month.year hour:minute",
];

/// Whether this text is a moment in ISO 8601.
pub(in crate::recording) fn is_iso(text: &[u8]) -> bool {
    iso(text).is_some()
}

/// Whether this text is a clock without a date.
pub(in crate::recording) fn is_clock(text: &[u8]) -> bool {
    iso(text).is_some_and(|w| w.date.is_none())
}

/// Whether this text has the look of a moment, even one whose order of day and month nobody can tell.
pub(in crate::recording) fn looks_like_moment(text: &[u8]) -> bool {
    if !text.first().is_some_and(u8::is_ascii_digit) {
        return false;
    }
    if iso(text).is_some() {
        return true;
    }
    let mut cursor = Cursor(text);
    let date = || -> Option<()> {
        cursor.digits(1, 4)?;
        let mark = cursor.peek().filter(|b| matches!(b, b'.' | b'/' | b'-'))?;
        cursor.skip(1);
        cursor.digits(1, 2)?;
        cursor.take(mark)?;
        cursor.digits(1, 4)?;
        if cursor.end().is_some() {
            return Some(());
        }
        if cursor.take(b'T').is_none() {
            cursor.take_blanks()?;
        }
        cursor.clock(&mut Written::default())?;
        cursor.end()
    };
    let mut date = date;
    date().is_some()
}

/// Whether a year of four digits stands among points or slashes, so that nobody can take it for a day.
pub(in crate::recording) fn has_long_year(text: &[u8]) -> bool {
    text.split(|b| !b.is_ascii_digit()).any(|group| group.len() == 4)
}

/// Reads one text as the reader of a time column would, for the detection.
pub(in crate::recording) fn reads_as(shape: &str, text: &[u8]) -> bool {
    Shape::new(shape).is_ok_and(|s| s.read(text).is_some())
}

/// Whether text is a number, for the detection.
pub(in crate::recording) fn is_number(text: &[u8], decimal: Decimal, encoding: Encoding) -> bool {
    cell::number(cell::trim(text, encoding), decimal).is_some()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::chain::Word;
    use crate::recording::{TimeScale, cell::CellReader};
    use jiff::civil;
    use std::string::ToString;

    #[test]
    fn days_agree_with_jiff() {
        let epoch = civil::date(1970, 1, 1);
        let mut day = civil::date(0, 1, 1);
        loop {
            let (y, m, d) = (i64::from(day.year()), i64::from(day.month()), i64::from(day.day()));
            let expected = i64::from((day - epoch).get_days());
            assert_eq!(days_from_date(y, m, d), Some(expected), "{day}");
            // Not a multiple of any month or year.
            match day.checked_add(jiff::Span::new().days(13)) {
                Ok(next) if next.year() <= 9999 => day = next,
                _ => break,
            }
        }
        for (y, m, d) in
            [(2026, 2, 29), (1900, 2, 29), (2026, 4, 31), (2026, 13, 1), (2026, 0, 1), (2026, 1, 0), (10_000, 1, 1)]
        {
            assert_eq!(days_from_date(y, m, d), None, "{y} {m} {d}");
        }
        assert!(days_from_date(2000, 2, 29).is_some());
    }

    #[test]
    fn moments_agree_with_jiff() {
        let cells = CellReader::new(&[], &[], Decimal::Point, Encoding::Utf8);
        let mut state = 7u64;
        for _ in 0..20_000 {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1);
            let second = i64::try_from(state >> 31).unwrap() - (1 << 32);
            let nanosecond = i32::try_from(state % 1_000_000_000).unwrap();
            let stamp = jiff::Timestamp::new(second, if second < 0 { 0 } else { nanosecond }).unwrap();
            let mut clock = Clock::new(TimeScale::Unknown, None, None, None);
            let (seconds, word, _) = clock.next(stamp.to_string().as_bytes(), &cells);
            // The standard library rounds the same decimal correctly.
            let text = format!("{second}.{:09}", stamp.subsec_nanosecond());
            assert_eq!((seconds, word), (text.parse().unwrap(), Word::Good), "{stamp}");
        }
    }

    #[test]
    fn fractions_are_the_nearest_double() {
        for (text, whole, fraction) in [
            ("0.1", 0, (1, 1)),
            ("1773309600.123456789", 1_773_309_600, (123_456_789, 9)),
            ("253402300799.999999999999999999", 253_402_300_799, (999_999_999_999_999_999, 18)),
            ("36000.07", 36_000, (7, 2)),
            ("-0.75", -1, (25, 2)),
            ("-62135596799.9", -62_135_596_800, (1, 1)),
        ] {
            assert_eq!(nearest(whole, fraction), text.parse::<f64>().unwrap(), "{text}");
        }
    }

    #[test]
    fn what_is_no_moment() {
        for text in [
            "",
            "2026",
            "2026-3-12",
            "2026-03-12T",
            "2026-03-12T1",
            "2026-03-12T10:0",
            "2026-03-12T10:00:00.",
            "2026-03-12T25:00",
            "2026-03-12T24:00:01",
            "2026-03-12T10:60",
            "2026-03-12T10:00:61",
            "2026-03-12T10:00Zx",
            "2026-03-12T10:00+1",
            "2026-03-12T10:00+24:00",
            "2026-03-12X10:00",
            "10:00Z",
            "10:00:00+01:00",
            "-026-03-12",
        ] {
            assert_eq!(iso(text.as_bytes()), None, "{text}");
        }
        assert!(
            looks_like_moment(b"12.03.2026 10:00:00") && looks_like_moment(b"3/4/26") && !looks_like_moment(b"1.5")
        );
    }
}
