//! From a standard to an expanded uncertainty.

use super::{Combined, Family};
use crate::Error;
use crate::math::distribution::{normal_probability, normal_quantile, student_probability, student_quantile};
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
    /// k = t_p(ν_eff) with ν_eff rounded down, the normal quantile for infinite or unknown ν_eff; p √3 where one rectangular
    /// contribution decides, the quantile of the trapezium where two do.
    ///
    /// # Errors
    /// `Error::OutOfRange` for a probability outside 0..1 or a factor that is not above 0.
    /// # Source
    /// JCGM 100:2008 G.3.2, G.4.1; EA-4/02 M:2022 S9.14, S10.12. Checked in tests/uncertainty.rs.
    pub fn expanded(&self, coverage: Coverage) -> Result<Expanded, Error> {
        let whole =
            if self.degrees_of_freedom.is_finite() { libm::floor(self.degrees_of_freedom).max(1.0) } else { 0.0 };
        let (factor, probability, rule) = match coverage {
            Coverage::Factor(k) => {
                crate::Range::new("coverage factor", "", f64::MIN_POSITIVE, f64::MAX).check(k)?;
                let upper = if whole > 0.0 { student_probability(k, whole) } else { normal_probability(k) };
                (k, 2.0 * upper - 1.0, Rule::Stated)
            }
            Coverage::Probability(p) => {
                crate::Range::new("coverage probability", "", f64::MIN_POSITIVE, 1.0 - f64::EPSILON).check(p)?;
                let (k, rule) = match self.family {
                    Family::Rectangular => (p * sqrt(3.0), Rule::Rectangular),
                    Family::Trapezoidal { edge } => (trapezoidal(p, edge), Rule::Trapezoidal),
                    Family::Normal if whole > 0.0 => (student_quantile(0.5 * (1.0 + p), whole), Rule::Student),
                    Family::Normal => (normal_quantile(0.5 * (1.0 + p)), Rule::Normal),
                };
                (k, p, rule)
            }
        };
        Ok(Expanded { expanded: factor * self.standard, factor, probability, rule })
    }
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
