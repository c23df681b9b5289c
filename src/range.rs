//! A named closed range that says what was wrong.

use crate::Error;

/// A closed range of one quantity in one unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Range {
    /// What the value is, in words, for the error.
    pub what: &'static str,
    /// Unit of `min` and `max`; empty for a plain number.
    pub unit: &'static str,
    /// Smallest accepted value.
    pub min: f64,
    /// Largest accepted value.
    pub max: f64,
}

impl Range {
    /// Returns a range from its words, unit and ends.
    #[must_use]
    pub const fn new(what: &'static str, unit: &'static str, min: f64, max: f64) -> Self {
        Self { what, unit, min, max }
    }

    /// Returns the value when it lies in the range.
    ///
    /// # Errors
    /// `Error::NotFinite` for NaN or ±∞; `Error::OutOfRange` outside `min..=max`.
    pub const fn check(&self, value: f64) -> Result<f64, Error> {
        if !value.is_finite() {
            return Err(Error::NotFinite { what: self.what });
        }
        if value < self.min || value > self.max {
            return Err(Error::OutOfRange { what: self.what, value, min: self.min, max: self.max, unit: self.unit });
        }
        Ok(value)
    }
}
