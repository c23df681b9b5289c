//! Tolerance classes of industrial platinum thermometers.

use crate::Error;
use crate::range::Range;

/// A tolerance class of IEC 60751.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Class {
    /// ±(0.1 °C + 0.0017 |t|).
    AA,
    /// ±(0.15 °C + 0.002 |t|).
    A,
    /// ±(0.3 °C + 0.005 |t|).
    B,
    /// ±(0.6 °C + 0.01 |t|).
    C,
}

/// A tolerance grade of ASTM E1137.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Grade {
    /// ±(0.13 °C + 0.0017 |t|).
    A,
    /// ±(0.25 °C + 0.0042 |t|).
    B,
}

/// How the resistor is made: it decides the range of a class, not its tolerance.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Resistor {
    /// Wire-wound.
    WireWound,
    /// Film.
    Film,
}

/// A fraction of class B. **Trade usage, not in any edition of the standard**, which therefore gives no range for it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FractionOfB {
    /// "1/3 B": ±(0.3 °C + 0.005 |t|)/3.
    Third,
    /// "1/10 B": ±(0.3 °C + 0.005 |t|)/10.
    Tenth,
}

/// Half-width ±(a + b |t|) over a range of temperatures.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Tolerance {
    /// a, K.
    pub a_kelvin: f64,
    /// b, K per °C.
    pub b: f64,
    /// Lowest and highest temperature for which the class is defined, °C.
    pub range_celsius: [f64; 2],
}

impl Tolerance {
    /// Returns the tolerance of a thermometer of IEC 60751:2008 (kept in the edition of 2022, from memory).
    #[must_use]
    pub const fn iec_60751(class: Class, resistor: Resistor) -> Self {
        let (a_kelvin, b, wire, film) = match class {
            Class::AA => (0.1, 0.0017, [-50.0, 250.0], [0.0, 150.0]),
            Class::A => (0.15, 0.002, [-100.0, 450.0], [-30.0, 300.0]),
            Class::B => (0.3, 0.005, [-196.0, 600.0], [-50.0, 500.0]),
            Class::C => (0.6, 0.01, [-196.0, 600.0], [-50.0, 600.0]),
        };
        let range_celsius = match resistor {
            Resistor::WireWound => wire,
            Resistor::Film => film,
        };
        Self { a_kelvin, b, range_celsius }
    }

    /// Returns the tolerance of IEC 751:1983 and its amendment 2 of 1995, which knew class A (−200 °C to 650 °C) and
    /// class B (−200 °C to 850 °C) alone; `None` for the others.
    #[must_use]
    pub const fn iec_751(class: Class) -> Option<Self> {
        match class {
            Class::A => Some(Self { a_kelvin: 0.15, b: 0.002, range_celsius: [-200.0, 650.0] }),
            Class::B => Some(Self { a_kelvin: 0.3, b: 0.005, range_celsius: [-200.0, 850.0] }),
            Class::AA | Class::C => None,
        }
    }

    /// Returns the tolerance of a grade of ASTM E1137, −200 °C to 650 °C (from memory).
    #[must_use]
    pub const fn astm_e1137(grade: Grade) -> Self {
        let (a_kelvin, b) = match grade {
            Grade::A => (0.13, 0.0017),
            Grade::B => (0.25, 0.0042),
        };
        Self { a_kelvin, b, range_celsius: [-200.0, 650.0] }
    }

    /// Returns a fraction of class B over a range that the maker of the thermometer states: **trade usage**.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a range that does not rise or reaches past −200 °C to 850 °C.
    pub fn fraction_of_b(fraction: FractionOfB, range_celsius: [f64; 2]) -> Result<Self, Error> {
        let [low, high] = range_celsius;
        Range::new("lowest temperature of the tolerance", "°C", -200.0, 850.0).check(low)?;
        Range::new("highest temperature of the tolerance", "°C", low, 850.0).check(high)?;
        let part = match fraction {
            FractionOfB::Third => 3.0,
            FractionOfB::Tenth => 10.0,
        };
        Ok(Self { a_kelvin: 0.3 / part, b: 0.005 / part, range_celsius })
    }

    /// Returns the half-width at this temperature, K.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the class; `Error::NotFinite` for NaN or ±∞.
    pub fn kelvin_at_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.range_celsius;
        let t = Range::new("temperature of the tolerance class", "°C", low, high).check(celsius)?;
        Ok(self.a_kelvin + self.b * t.abs())
    }
}
