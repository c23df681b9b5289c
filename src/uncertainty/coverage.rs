//! From a standard to an expanded uncertainty.

use super::{Combined, Family};
use crate::Error;
use crate::math::distribution::{normal_quantile, student_quantile};
use crate::math::sqrt;

/// What is wanted of a coverage interval.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Coverage {
    /// A coverage probability, above 0 and below 1: 0.95.
    Probability(f64),
    /// A coverage factor k, above 0.
    Factor(f64),
}

/// Where a coverage factor comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Rule {
    /// It is stated.
    Stated,
    /// The normal distribution.
    Normal,
    /// Student's t, at the effective degrees of freedom rounded down.
    Student,
    /// One rectangular contribution decides.
    Rectangular,
    /// Two rectangular contributions decide.
    Trapezoidal,
}

impl Rule {
    /// Returns what it rests on, in a few words.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Stated => "stated",
            Self::Normal => "normal",
            Self::Student => "Student's t",
            Self::Rectangular => "one rectangular contribution decides",
            Self::Trapezoidal => "two rectangular contributions decide",
        }
    }
}

/// An expanded uncertainty U = k u.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Expanded {
    /// U.
    pub expanded: f64,
    /// k.
    pub factor: f64,
    /// Coverage probability: the wanted one, or that of a stated factor.
    pub probability: f64,
    /// Where k comes from.
    pub rule: Rule,
}

impl Combined {
    /// Returns the expanded uncertainty.
    ///
    /// k = t_p(ν_eff) with ν_eff rounded down, the normal quantile from 10⁴ on (where the two differ by 1e-4) and for unknown
    /// ν_eff; p √3 where one rectangular
    /// contribution decides, the quantile of the trapezium where two do. The probability of a stated factor is that of
    /// [`probability_below`](Self::probability_below).
    ///
    /// # Errors
    /// `Error::OutOfRange` for a probability outside 0..1 or a factor that is not above 0.
    /// # Source
    /// JCGM 100:2008 G.3.2, G.4.1; EA-4/02 M:2022 S9.14, S10.12. Checked in tests/uncertainty.rs.
    pub fn expanded(&self, coverage: Coverage) -> Result<Expanded, Error> {
        let (factor, probability, rule) = match coverage {
            Coverage::Factor(k) => {
                above("coverage factor", k, 0.0, f64::INFINITY)?;
                // of u = 1 where u is 0, which has no distribution of its own
                let of = if self.standard > 0.0 { *self } else { Self::new(1.0, self.degrees_of_freedom) };
                (k, 1.0 - 2.0 * of.probability_below(-k * of.standard), Rule::Stated)
            }
            Coverage::Probability(p) => {
                above("coverage probability", p, 0.0, 1.0)?;
                let whole = self.whole_freedom().unwrap_or(0.0);
                let (k, rule) = match self.family {
                    Family::Rectangular => (p * sqrt(3.0), Rule::Rectangular),
                    Family::Trapezoidal { edge } => (trapezoidal(p, edge), Rule::Trapezoidal),
                    Family::Normal if whole > 0.0 => (student_factor(p, whole), Rule::Student),
                    Family::Normal => (normal_quantile(0.5 * (1.0 + p)), Rule::Normal),
                };
                (k, p, rule)
            }
        };
        Ok(Expanded { expanded: factor * self.standard, factor, probability, rule })
    }
}

/// A number between two ends, neither of them included.
fn above(what: &'static str, value: f64, min: f64, max: f64) -> Result<(), Error> {
    if value.is_nan() {
        return Err(Error::NotFinite { what });
    }
    if value > min && value < max { Ok(()) } else { Err(Error::OutOfRange { what, value, min, max, unit: "" }) }
}

/// From so many degrees of freedom on a factor is that of the normal distribution.
const NEARLY_NORMAL: f64 = 1e4;

impl Combined {
    /// Effective degrees of freedom rounded down; `None` where the normal distribution counts.
    pub(crate) fn whole_freedom(&self) -> Option<f64> {
        let few = self.degrees_of_freedom < NEARLY_NORMAL;
        // a whole number that rounding took just below itself is that number
        few.then(|| libm::floor(self.degrees_of_freedom * (1.0 + 1e-12)).max(1.0))
    }
}

/// From so many degrees of freedom on the expansion below is within 1e-8 of the quantile.
const MANY: f64 = 100.0;

/// The two-sided quantile of Student's t.
fn student_factor(p: f64, freedom: f64) -> f64 {
    let upper = 0.5 * (1.0 + p);
    if freedom < MANY || p > 0.9999 {
        return student_quantile(upper, freedom);
    }
    // t = z + (z³ + z)/4ν + (5 z⁵ + 16 z³ + 3 z)/96ν² + (3 z⁷ + 19 z⁵ + 17 z³ − 15 z)/384ν³
    //       + (79 z⁹ + 776 z⁷ + 1482 z⁵ − 1920 z³ − 945 z)/92160ν⁴ + …
    // (Abramowitz and Stegun, 26.7.5), since rows of a recording ask for many of these
    let z = normal_quantile(upper);
    let (s, n) = (z * z, 1.0 / freedom);
    let first = (s + 1.0) / 4.0;
    let second = ((5.0 * s + 16.0) * s + 3.0) / 96.0;
    let third = (((3.0 * s + 19.0) * s + 17.0) * s - 15.0) / 384.0;
    let fourth = ((((79.0 * s + 776.0) * s + 1482.0) * s - 1920.0) * s - 945.0) / 92_160.0;
    z * (1.0 + n * (first + n * (second + n * (third + n * fourth))))
}

/// k of a trapezium whose top side is β of its base: half of the interval that holds p, over the standard deviation.
fn trapezoidal(p: f64, edge: f64) -> f64 {
    let square = edge * edge;
    let deviation = sqrt((1.0 + square) / 6.0);
    // p beyond the top side; within it the density is flat
    if p / (2.0 - p) < edge {
        return p * (1.0 + edge) / 2.0 / deviation;
    }
    // k = (1 − √[(1 − p)(1 − β²)]) / √[(1 + β²)/6]
    (1.0 - sqrt((1.0 - p) * (1.0 - square))) / deviation
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_expansion_meets_the_quantile() {
        for p in [0.5, 0.9, 0.95, 0.99, 0.9999] {
            for freedom in [100.0, 250.0, 5000.0] {
                let exact = student_quantile(0.5 * (1.0 + p), freedom);
                let error = (student_factor(p, freedom) / exact - 1.0).abs();
                assert!(error < if p > 0.99 { 1e-7 } else { 1e-8 }, "{p} {freedom}: {error:e}");
            }
        }
    }
}
