//! A thermistor given by points of resistance and temperature.

use super::ICE_KELVIN;
use crate::Error;
use crate::math::{MOST_STEPS, Real, ln, slopes};
use crate::range::Range;
use crate::signal::positive;

/// Most points that a table can hold.
pub const MOST_POINTS: usize = 24;

/// Points of a falling resistance, joined by a monotone cubic in ln R over 1/T: between two points the curve stays between
/// them, and points of one β law give that law.
///
/// Slopes by the weighted harmonic mean of F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Points<R = f64> {
    count: usize,
    celsius: [f64; MOST_POINTS],
    /// Falling, Ω.
    ohms: [R; MOST_POINTS],
    /// 1/T in 1/K, falling.
    reciprocals: [f64; MOST_POINTS],
    /// ln(R/Ω), falling.
    logs: [R; MOST_POINTS],
    slopes: [R; MOST_POINTS],
}

/// A step of the inverse, as a share of its interval, after which rounding is left.
const LAST_STEP: f64 = 1e-8;

/// Most steps of the inverse inside one interval: Newton, or halving where Newton leaves what is left of the interval.
const STEPS: usize = MOST_STEPS;

impl Points {
    /// Returns a table of (°C, Ω) pairs in rising order of temperature.
    ///
    /// # Errors
    /// `Error::OutOfRange` for fewer than 2 or more than 24 points, a temperature outside −273 °C to 1000 °C or a
    /// resistance that is not positive, `Error::NotFinite` for NaN or ±∞, `Error::Unfit` for temperatures that do not rise
    /// or resistances that do not fall.
    pub fn new(points: &[[f64; 2]]) -> Result<Self, Error> {
        Range::new("number of points", "", 2.0, MOST_POINTS as f64).check(points.len() as f64)?;
        let mut table = Self {
            count: points.len(),
            celsius: [0.0; MOST_POINTS],
            ohms: [1.0; MOST_POINTS],
            reciprocals: [0.0; MOST_POINTS],
            logs: [0.0; MOST_POINTS],
            slopes: [0.0; MOST_POINTS],
        };
        let cells = table.celsius.iter_mut().zip(&mut table.ohms).zip(&mut table.reciprocals);
        for (((t, r), x), [celsius, ohms]) in cells.zip(points) {
            (*t, *r, *x) = (*celsius, *ohms, 1.0 / (celsius + ICE_KELVIN));
        }
        table.check()?;
        Ok(table.with_slopes())
    }

    /// Checks the points, also those that were read as data.
    pub(super) fn check(&self) -> Result<(), Error> {
        Range::new("number of points", "", 2.0, MOST_POINTS as f64).check(self.count as f64)?;
        let mut last = [f64::NEG_INFINITY, f64::INFINITY];
        for (celsius, ohms) in self.points() {
            Range::new("temperature of a point", "°C", -273.0, 1000.0).check(celsius)?;
            positive("resistance of a point", "ohm", ohms)?;
            if celsius <= last[0] || ohms >= last[1] {
                return Err(Error::Unfit {
                    what: "the resistances of the points must fall while their temperatures rise",
                });
            }
            last = [celsius, ohms];
        }
        Ok(())
    }

    /// Temperature in °C at `ohms`; the caller has checked the range.
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        self.celsius_in_steps(ohms).0
    }

    /// The same with the number of steps that it took inside its interval.
    #[inline]
    fn celsius_in_steps(&self, ohms: f64) -> (f64, usize) {
        let log = ln(ohms);
        let mut left = 0;
        for (i, y) in self.logs.iter().enumerate().take(self.count.saturating_sub(1)).skip(1) {
            if log <= *y {
                left = i;
            }
        }
        let interval = self.interval(left);
        // s = 1/T − 1/T₀ falls from 0 to `width`, ln R with it
        let (mut low, mut high) = (interval.width, 0.0);
        let mut s = interval.width * (log - interval.y0) / (interval.y1 - interval.y0);
        let mut steps = 0;
        while steps < STEPS {
            steps += 1;
            let (value, slope) = (interval.at(s), interval.slope(s));
            if value > log {
                high = s;
            } else {
                low = s;
            }
            let next = s - (value - log) / slope;
            let inside = next >= low && next <= high;
            let before = s;
            s = if inside { next } else { 0.5 * (low + high) };
            // Newton's steps double the digits: after one this small, rounding is left
            if inside && (s - before).abs() <= LAST_STEP * interval.width.abs() {
                break;
            }
        }
        (1.0 / (interval.x0 + s) - ICE_KELVIN, steps)
    }
}

/// One interval: ln R = y₀ + s (m₀ + s (c + s e)), s = 1/T − x₀.
struct Interval<R> {
    x0: f64,
    width: f64,
    y0: R,
    y1: R,
    m0: R,
    c: R,
    e: R,
}

impl<R: Real> Interval<R> {
    fn at(&self, s: R) -> R {
        self.y0 + s * (self.m0 + s * (self.c + s * self.e))
    }
}

impl Interval<f64> {
    fn slope(&self, s: f64) -> f64 {
        self.m0 + s * (2.0 * self.c + s * 3.0 * self.e)
    }
}

impl<R: Real> Points<R> {
    /// Visits the points in order: °C and Ω.
    pub fn points(&self) -> impl Iterator<Item = (f64, R)> + '_ {
        self.celsius.iter().copied().zip(self.ohms).take(self.count)
    }

    /// The same points with logarithms and slopes worked out.
    fn with_slopes(mut self) -> Self {
        self.logs = self.ohms.map(Real::ln);
        // falling 1/T: the slopes of −x are those of x with the other sign
        let rising = self.reciprocals.map(|x| -x);
        let n = self.count;
        if let (Some(x), Some(y), Some(m)) = (rising.get(..n), self.logs.get(..n), self.slopes.get_mut(..n)) {
            slopes(x, y, m);
            m.iter_mut().for_each(|m| *m = -*m);
        }
        self
    }

    pub(super) fn map<S: Real>(&self, mut f: impl FnMut(u8, R) -> S) -> Points<S> {
        let mut n = 0;
        Points {
            count: self.count,
            celsius: self.celsius,
            ohms: self.ohms.map(|r| {
                n += 1;
                if usize::from(n) <= self.count { f(n, r) } else { S::from_f64(1.0) }
            }),
            reciprocals: self.reciprocals,
            logs: [S::from_f64(0.0); MOST_POINTS],
            slopes: [S::from_f64(0.0); MOST_POINTS],
        }
        .with_slopes()
    }

    /// Returns the lowest and highest temperature, °C.
    #[must_use]
    pub fn range_celsius(&self) -> [f64; 2] {
        let inner = self.celsius.get(..self.count).unwrap_or(&[]);
        [inner.first().copied().unwrap_or(f64::NAN), inner.last().copied().unwrap_or(f64::NAN)]
    }

    fn interval(&self, left: usize) -> Interval<R> {
        let point = |i: usize| {
            let zero = R::from_f64(0.0);
            (
                self.reciprocals.get(i).copied().unwrap_or(0.0),
                self.logs.get(i).copied().unwrap_or(zero),
                self.slopes.get(i).copied().unwrap_or(zero),
            )
        };
        let ((x0, y0, m0), (x1, y1, m1)) = (point(left), point(left + 1));
        let h = R::from_f64(x1 - x0);
        let secant = (y1 - y0) / h;
        let e = (m0 + m1 - secant - secant) / (h * h);
        Interval { x0, width: x1 - x0, y0, y1, m0, c: (secant - m0) / h - e * h, e }
    }

    /// Resistance in Ω at `t` °C; the caller has checked the range.
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        let mut left = 0;
        for (i, start) in self.celsius.iter().enumerate().take(self.count.saturating_sub(1)).skip(1) {
            if t.value() >= *start {
                left = i;
            }
        }
        let interval = self.interval(left);
        let s = R::from_f64(1.0) / (t + R::from_f64(ICE_KELVIN)) - R::from_f64(interval.x0);
        interval.at(s).exp()
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;

    #[test]
    fn steps_of_the_inverse() {
        // a table as makers print them (a 10 kohm thermistor every 10 K, from memory), and one of cliffs and shelves
        let printed = [
            [-40.0, 336_500.0],
            [-30.0, 177_200.0],
            [-20.0, 97_120.0],
            [-10.0, 55_340.0],
            [0.0, 32_660.0],
            [10.0, 19_900.0],
            [20.0, 12_490.0],
            [30.0, 8056.0],
            [40.0, 5325.0],
            [50.0, 3599.0],
            [60.0, 2486.0],
            [70.0, 1753.0],
            [85.0, 1071.0],
        ];
        let harsh = [[0.0, 1e5], [10.0, 9.99e4], [20.0, 1e3], [40.0, 999.0], [60.0, 10.0], [90.0, 9.0]];
        for (what, points, bound) in [("printed", &printed[..], 6), ("cliffs and shelves", &harsh[..], STEPS)] {
            let table = Points::new(points).expect("a table");
            let [low, high] = table.range_celsius();
            let dense = (0..=60_000).map(|i| table.ohms_from_celsius(low + (high - low) * f64::from(i) / 60_000.0));
            let at_points = points.iter().flat_map(|[_, r]| [*r, r.next_up(), r.next_down()]);
            let ohms = [points[0][1], points[points.len() - 1][1]];
            let inside = |r: &f64| (ohms[1]..=ohms[0]).contains(r);
            let most = dense.chain(at_points).filter(inside).map(|r| table.celsius_in_steps(r).1).max();
            std::println!("{what}: {most:?} steps");
            assert!(most <= Some(bound), "{what}: {most:?}");
        }
    }
}
