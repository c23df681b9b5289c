//! Time from row to row, where there is no time column.

use std::format;

/// An interval as a decimal fraction, so that 0.02 s · 7 is 0.14 s.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(in crate::recording) struct Interval {
    seconds: f64,
    decimal: Option<(u64, u32)>,
}

impl Interval {
    pub(in crate::recording) fn new(seconds: f64) -> Option<Self> {
        if !(seconds.is_finite() && seconds > 0.0) {
            return None;
        }
        let text = format!("{seconds}");
        let (whole, fraction) = text.split_once('.').unwrap_or((&text, ""));
        let decimal =
            format!("{whole}{fraction}").parse().ok().and_then(|d| Some((d, u32::try_from(fraction.len()).ok()?)));
        Some(Self { seconds, decimal: decimal.filter(|d| d.1 <= 18) })
    }

    /// Seconds of this row, counted from 0.
    pub(in crate::recording) fn at(self, row: u64) -> f64 {
        if let Some((digits, count)) = self.decimal
            && let Some(total) = digits.checked_mul(row).filter(|t| *t < 1 << 53)
            && let Some(scale) = 10_u64.checked_pow(count)
        {
            // 10^22 is the last power that a double holds exactly.
            return total as f64 / scale as f64;
        }
        row as f64 * self.seconds
    }
}
