//! Why no curve could be fitted.

use core::fmt;
use std::string::String;
use std::vec::Vec;

use crate::Error;

/// Why no curve could be fitted.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum FitError {
    /// One point cannot be used.
    Point {
        /// Its number, counted from 0.
        index: usize,
        /// Which of its numbers is wrong.
        what: Cell,
        /// Why.
        error: Error,
    },
    /// There are not enough different points.
    TooFew {
        /// What has to differ, in words: `temperatures at or above 0 °C`.
        what: &'static str,
        /// How many are needed.
        needed: usize,
        /// Those there are, rising.
        have: Vec<f64>,
        /// Their unit.
        unit: &'static str,
    },
    /// The points do not tell one coefficient from those before it.
    Dependent {
        /// The coefficient.
        name: String,
    },
    /// The points contain no value at a place that the model needs.
    NotCovered {
        /// What is missing, in words.
        what: &'static str,
    },
    /// No minimum was reached.
    NotConverged {
        /// Iterations made.
        iterations: usize,
    },
    /// What was asked for, or the curve that came out, cannot be.
    Unusable(Error),
}

/// One number of a point.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cell {
    /// The independent variable.
    X,
    /// The dependent variable.
    Y,
    /// The standard uncertainty.
    Uncertainty,
}

impl fmt::Display for FitError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Point { index, error, .. } => write!(f, "point {}: {error}", index + 1),
            Self::TooFew { what, needed, have, unit } => {
                write!(f, "{needed} different {what} are needed, and the points have ")?;
                if have.is_empty() {
                    return f.write_str("none");
                }
                let gap = if unit.is_empty() { "" } else { " " };
                write!(f, "{}", have.len())?;
                for (i, value) in have.iter().enumerate() {
                    f.write_str(if i == 0 { ": " } else { ", " })?;
                    write!(f, "{value}")?;
                }
                write!(f, "{gap}{unit}")
            }
            Self::Dependent { name } => write!(
                f,
                "the points do not tell the coefficient '{name}' from those before it: they lie too close together; \
                 spread them, or ask for fewer coefficients"
            ),
            Self::NotCovered { what } => f.write_str(what),
            Self::NotConverged { iterations } => {
                write!(f, "no minimum was reached in {iterations} iterations; begin nearer to it")
            }
            Self::Unusable(error) => error.fmt(f),
        }
    }
}

impl core::error::Error for FitError {}

impl From<Error> for FitError {
    fn from(error: Error) -> Self {
        Self::Unusable(error)
    }
}
