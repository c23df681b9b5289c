//! A table of points with a curve through them that does not overshoot.

use crate::Error;
use crate::math::{Real, slopes};
use crate::range::Range;

/// Most points that a table can hold.
pub const MOST_POINTS: usize = 24;

/// Points in rising order of temperature, joined by a monotone cubic: between two points the curve stays between them.
///
/// # Source
/// F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304, for the slopes.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Points<R = f64> {
    /// Number of points that count, 2..=24.
    count: usize,
    celsius: [f64; MOST_POINTS],
    values: [R; MOST_POINTS],
    slopes: [R; MOST_POINTS],
}

impl Points {
    /// Returns a table of (°C, value) pairs.
    ///
    /// # Errors
    /// `Error::OutOfRange` for fewer than 2 or more than 24 points, `Error::NotFinite` for a coordinate that is no
    /// finite number, `Error::Unfit` for temperatures that do not rise.
    pub fn new(points: &[[f64; 2]]) -> Result<Self, Error> {
        Range::new("number of points", "", 2.0, MOST_POINTS as f64).check(points.len() as f64)?;
        let mut table = Self {
            count: points.len(),
            celsius: [0.0; MOST_POINTS],
            values: [0.0; MOST_POINTS],
            slopes: [0.0; MOST_POINTS],
        };
        let mut last = f64::NEG_INFINITY;
        for ((t, v), [celsius, value]) in table.celsius.iter_mut().zip(&mut table.values).zip(points) {
            crate::signal::finite("temperature of a point", *celsius)?;
            crate::signal::finite("value of a point", *value)?;
            if *celsius <= last {
                return Err(Error::Unfit { what: "the temperatures of the points must rise" });
            }
            last = *celsius;
            (*t, *v) = (*celsius, *value);
        }
        Ok(table.with_slopes())
    }
}

impl<R: Real> Points<R> {
    /// Returns the lowest and highest temperature, °C.
    #[must_use]
    pub fn range_celsius(&self) -> [f64; 2] {
        let inner = self.celsius.get(..self.count).unwrap_or(&[]);
        [inner.first().copied().unwrap_or(f64::NAN), inner.last().copied().unwrap_or(f64::NAN)]
    }

    /// Checks what a table that was read as data may lack.
    pub(crate) fn check(&self) -> Result<(), Error> {
        Range::new("number of points", "", 2.0, MOST_POINTS as f64).check(self.count as f64)?;
        let rising = self.points().zip(self.points().skip(1)).all(|((a, _), (b, _))| a < b);
        let finite = self.points().all(|(t, v)| t.is_finite() && v.value().is_finite());
        if rising && finite { Ok(()) } else { Err(Error::Unfit { what: "the temperatures of the points must rise" }) }
    }

    /// Visits the points in order: °C and value.
    pub fn points(&self) -> impl Iterator<Item = (f64, R)> + '_ {
        self.celsius.iter().copied().zip(self.values).take(self.count)
    }

    fn with_slopes(mut self) -> Self {
        let n = self.count;
        self.slopes = [R::from_f64(0.0); MOST_POINTS];
        if let (Some(t), Some(v), Some(m)) = (self.celsius.get(..n), self.values.get(..n), self.slopes.get_mut(..n)) {
            slopes(t, v, m);
        }
        self
    }

    /// Value at `t` °C; the caller has checked the range, outside of which the end intervals are continued.
    #[inline]
    pub(crate) fn at(&self, t: R) -> R {
        let here = t.value();
        let (mut left, mut right) = (0, 1);
        for (i, start) in self.celsius.iter().enumerate().take(self.count.saturating_sub(1)).skip(1) {
            if here >= *start {
                (left, right) = (i, i + 1);
            }
        }
        let zero = R::from_f64(0.0);
        let point = |i: usize| {
            (
                self.celsius.get(i).copied().unwrap_or(0.0),
                self.values.get(i).copied().unwrap_or(zero),
                self.slopes.get(i).copied().unwrap_or(zero),
            )
        };
        let ((t0, v0, m0), (t1, v1, m1)) = (point(left), point(right));
        // cubic Hermite: v₀ + s (m₀ + s (c + s e)), s = t − t₀
        let h = R::from_f64(t1 - t0);
        let secant = (v1 - v0) / h;
        let e = (m0 + m1 - secant - secant) / (h * h);
        let c = (secant - m0) / h - e * h;
        let s = t - R::from_f64(t0);
        v0 + s * (m0 + s * (c + s * e))
    }

    pub(crate) fn map<S: Real>(&self, mut f: impl FnMut(u8, R) -> S) -> Points<S> {
        let mut n = 0;
        Points {
            count: self.count,
            celsius: self.celsius,
            values: self.values.map(|v| {
                n += 1;
                // what lies behind the last point is no parameter
                if n <= self.count { f(n as u8, v) } else { S::from_f64(0.0) }
            }),
            slopes: [S::from_f64(0.0); MOST_POINTS],
        }
        .with_slopes()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn passes_through_its_points_and_stays_between_them() {
        let data = [[-20.0, -80.0], [0.0, -30.0], [24.0, 0.0], [50.0, 2.0], [60.0, 2.0], [120.0, -90.0]];
        let table = Points::new(&data).unwrap();
        for [t, v] in data {
            assert!((table.at(t) - v).abs() < 1e-12, "{t}");
        }
        for pair in data.windows(2) {
            let ([t0, v0], [t1, v1]) = (pair[0], pair[1]);
            for i in 0..=100 {
                let v = table.at(t0 + (t1 - t0) * f64::from(i) / 100.0);
                assert!(v >= v0.min(v1) - 1e-12 && v <= v0.max(v1) + 1e-12, "{t0}..{t1}: {v}");
            }
        }
    }

    #[test]
    fn two_points_are_a_line_and_a_line_stays_one() {
        let line = Points::new(&[[0.0, 1.0], [10.0, 6.0]]).unwrap();
        assert_eq!(line.at(4.0), 3.0);
        let three = Points::new(&[[0.0, 1.0], [3.0, 2.5], [10.0, 6.0]]).unwrap();
        assert!((three.at(7.3) - 4.65).abs() < 1e-14);
    }

    #[test]
    fn what_cannot_be_a_table_is_refused() {
        assert!(Points::new(&[[0.0, 1.0]]).is_err());
        assert!(Points::new(&[[0.0, 1.0], [0.0, 2.0]]).is_err());
        assert!(Points::new(&[[0.0, f64::NAN], [1.0, 2.0]]).is_err());
        assert!(Points::new(&[[0.0, 0.0]; 25]).is_err());
    }
}
