//! The tolerance class that a sensor was bought by.

use crate::{Error, platinum, thermocouple};

/// A tolerance class: a half-width that depends on the temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Tolerance {
    /// Of a platinum thermometer.
    Platinum(platinum::Tolerance),
    /// Of a thermocouple.
    Thermocouple(thermocouple::Tolerance),
}

impl Tolerance {
    /// Returns the half-width at a temperature in °C, K.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the class; `Error::NotFinite` for NaN or ±∞.
    pub fn kelvin_at_celsius(&self, celsius: f64) -> Result<f64, Error> {
        match self {
            Self::Platinum(t) => t.kelvin_at_celsius(celsius),
            Self::Thermocouple(t) => t.kelvin_at_celsius(celsius),
        }
    }

    /// Returns how the half-width grows with the temperature there, K per °C.
    #[must_use]
    pub fn slope_at_celsius(&self, celsius: f64) -> f64 {
        let sign = if celsius < 0.0 { -1.0 } else { 1.0 };
        match self {
            Self::Platinum(t) => sign * t.b,
            Self::Thermocouple(t) => match t.knee_celsius {
                Some(knee) if celsius > knee => t.relative,
                None if t.relative * celsius.abs() > t.fixed_kelvin => sign * t.relative,
                _ => 0.0,
            },
        }
    }

    /// Returns the lowest and highest temperature of the class, °C.
    #[must_use]
    pub const fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::Platinum(t) => t.range_celsius,
            Self::Thermocouple(t) => t.range_celsius,
        }
    }
}
