//! What a curve is fitted to.

use std::vec::Vec;

use super::curve::{Spread, check_points};
use super::{Cell, FitError};
use crate::Error;
use crate::range::Range;

/// Calibration points; which quantities x and y are, and in which unit, is said by each fit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Points<'a> {
    /// The independent variable.
    pub x: &'a [f64],
    /// The dependent variable, as many.
    pub y: &'a [f64],
    /// Standard uncertainties of the points.
    pub uncertainty: Uncertainty<'a>,
}

/// Standard uncertainties of points, one each.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Uncertainty<'a> {
    /// Not stated: the points scatter alike, and how much is found from their residuals.
    None,
    /// Of the independent variable, in its unit (an interval in kelvin for °C).
    OfX(&'a [f64]),
    /// Of the dependent variable, in its unit.
    OfY(&'a [f64]),
}

impl<'a> Points<'a> {
    /// Returns points without stated uncertainties.
    #[must_use]
    pub const fn new(x: &'a [f64], y: &'a [f64]) -> Self {
        Self { x, y, uncertainty: Uncertainty::None }
    }

    /// Refuses numbers outside these ranges, uncertainties that are none, and slices of different length.
    pub(super) fn check(&self, x: Range, y: Range) -> Result<(), FitError> {
        check_points((self.x, x), (self.y, y))?;
        let (Uncertainty::OfX(u) | Uncertainty::OfY(u)) = self.uncertainty else { return Ok(()) };
        if u.len() != self.x.len() {
            let what = "standard uncertainties";
            return Err(Error::LengthMismatch { what, expected: self.x.len(), got: u.len() }.into());
        }
        let range = Range::new("standard uncertainty of a point", "", f64::MIN_POSITIVE, f64::MAX);
        for (index, u) in u.iter().enumerate() {
            range.check(*u).map_err(|error| FitError::Point { index, what: Cell::Uncertainty, error })?;
        }
        Ok(())
    }

    /// The scatter where the regression runs over x and y themselves.
    pub(super) fn spread(&self) -> Spread {
        self.spread_of(|_, _, u| u, |_, _, u| u)
    }

    /// The scatter where the regression runs over functions of x and y: how uncertainties of x and of y turn into those of them.
    pub(super) fn spread_of(&self, of_x: impl Fn(f64, f64, f64) -> f64, of_y: impl Fn(f64, f64, f64) -> f64) -> Spread {
        match self.uncertainty {
            Uncertainty::None => Spread::Equal,
            Uncertainty::OfX(u) => Spread::OfX(self.each(u, of_x)),
            Uncertainty::OfY(u) => Spread::OfY(self.each(u, of_y)),
        }
    }

    pub(super) fn each(&self, u: &[f64], f: impl Fn(f64, f64, f64) -> f64) -> Vec<f64> {
        self.x.iter().zip(self.y).zip(u).map(|((x, y), u)| f(*x, *y, *u)).collect()
    }
}
