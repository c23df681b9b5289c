//! Tolerance classes of thermocouples.

use super::Thermocouple;
use crate::Error;
use crate::range::Range;

/// A tolerance class of IEC 60584-1.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Class {
    /// Class 1.
    One,
    /// Class 2.
    Two,
    /// Class 3.
    Three,
}

/// The larger of two half-widths over a range of temperatures.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Tolerance {
    /// The fixed half-width, K.
    pub fixed_kelvin: f64,
    /// The half-width per degree of |t|, or per degree above the knee where there is one.
    pub relative: f64,
    /// Where a rising half-width leaves the fixed one and adds to it, °C; `None` where it is a share of |t|.
    pub knee_celsius: Option<f64>,
    /// Lowest and highest temperature for which the class is defined, °C.
    pub range_celsius: [f64; 2],
}

impl Tolerance {
    /// Returns the tolerance of IEC 584-2:1982 (IEC 60584-1:2013 from memory: the same figures); `None` where the type has
    /// no such class. Types J and T were read in a reprint, the others are from memory.
    #[must_use]
    pub const fn iec_60584(thermocouple: Thermocouple, class: Class) -> Option<Self> {
        use Class::{One, Three, Two};
        use Thermocouple::{B, E, J, K, N, R, S, T};
        let (fixed_kelvin, relative, knee_celsius, range_celsius) = match (thermocouple, class) {
            (J, One) => (1.5, 0.004, None, [-40.0, 750.0]),
            (J, Two) => (2.5, 0.0075, None, [-40.0, 750.0]),
            (T, One) => (0.5, 0.004, None, [-40.0, 350.0]),
            (T, Two) => (1.0, 0.0075, None, [-40.0, 350.0]),
            (T, Three) => (1.0, 0.015, None, [-200.0, 40.0]),
            (E, One) => (1.5, 0.004, None, [-40.0, 800.0]),
            (E, Two) => (2.5, 0.0075, None, [-40.0, 900.0]),
            (K | N, One) => (1.5, 0.004, None, [-40.0, 1000.0]),
            (K | N, Two) => (2.5, 0.0075, None, [-40.0, 1200.0]),
            (E | K | N, Three) => (2.5, 0.015, None, [-200.0, 40.0]),
            (R | S, One) => (1.0, 0.003, Some(1100.0), [0.0, 1600.0]),
            (R | S, Two) => (1.5, 0.0025, None, [0.0, 1600.0]),
            (B, Two) => (1.5, 0.0025, None, [600.0, 1700.0]),
            (B, Three) => (4.0, 0.005, None, [600.0, 1700.0]),
            (J | R | S, Three) | (B, One) => return None,
        };
        Some(Self { fixed_kelvin, relative, knee_celsius, range_celsius })
    }

    /// Returns the half-width at this temperature of the measuring junction, K.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the class; `Error::NotFinite` for NaN or ±∞.
    pub fn kelvin_at_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.range_celsius;
        let t = Range::new("temperature of the tolerance class", "°C", low, high).check(celsius)?;
        let rising = match self.knee_celsius {
            Some(knee) => self.fixed_kelvin + self.relative * (t - knee),
            None => self.relative * t.abs(),
        };
        Ok(if rising > self.fixed_kelvin { rising } else { self.fixed_kelvin })
    }
}
