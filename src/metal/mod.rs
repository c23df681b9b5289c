//! Nickel and copper resistance thermometers.

mod law;
mod standards;

pub use law::{Copper, Nickel};
pub(crate) use law::{celsius_from_ohms_copper, celsius_from_ohms_nickel};
pub use standards::{COPPER_10_OHM, COPPER_GOST_6651_2009, NICKEL_DIN_43760, PUBLISHED, Published};

use uom::si::electrical_resistance::ohm;
use uom::si::f64::{ElectricalResistance, ThermodynamicTemperature};
use uom::si::thermodynamic_temperature::degree_celsius;

use crate::Error;
use crate::math::Real;
use crate::range::Range;

/// The equation of a metal.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Law<R = f64> {
    /// Powers 1, 2, 4 and 6 of the temperature.
    Nickel(Nickel<R>),
    /// A line from 0 °C upwards, a cubic below.
    Copper(Copper<R>),
}

impl<R: Real> Law<R> {
    /// Returns the same curve for another resistance at 0 °C.
    #[must_use]
    pub fn with_r0(self, r0_ohms: R) -> Self {
        match self {
            Self::Nickel(k) => Self::Nickel(Nickel { r0_ohms, ..k }),
            Self::Copper(k) => Self::Copper(Copper { r0_ohms, ..k }),
        }
    }
}

/// A nickel or copper thermometer with a checked curve.
///
/// ```
/// use ohmwright::metal::{Law, Metal, NICKEL_DIN_43760};
/// use uom::si::{electrical_resistance::ohm, f64::ElectricalResistance, thermodynamic_temperature::degree_celsius};
///
/// let ni100 = Metal::new(Law::Nickel(NICKEL_DIN_43760))?;
/// // DIN 43760:1987, table of a 100 Ω element: 161.8 Ω at 100 °C
/// assert!((ni100.ohms_from_celsius(100.0)? - 161.8).abs() < 0.05);
/// let t = ni100.temperature(ElectricalResistance::new::<ohm>(161.7785))?;
/// assert!((t.get::<degree_celsius>() - 100.0).abs() < 1e-9);
/// assert!(ni100.celsius_from_ohms(300.0).is_err());
/// # Ok::<(), ohmwright::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize), serde(try_from = "Law", into = "Law"))]
pub struct Metal {
    law: Law,
    ohms: Range,
}

impl Metal {
    /// Returns a thermometer with this curve.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a constant that is no positive finite number, `Error::Unfit` for a
    /// curve that does not rise steadily all over its range.
    pub fn new(law: Law) -> Result<Self, Error> {
        law.check()?;
        let [low, high] = law.range_celsius().map(|t| law.ohms_from_celsius(t));
        Ok(Self { law, ohms: Range::new("resistance", "Ω", low, high) })
    }

    /// Returns the equation.
    #[must_use]
    pub const fn law(&self) -> &Law {
        &self.law
    }

    /// Returns the resistances that the curve covers, Ω.
    #[must_use]
    pub const fn ohms_range(&self) -> Range {
        self.ohms
    }

    /// Returns the temperature at which the element has this resistance.
    ///
    /// - `resistance`: of the element alone, leads removed.
    ///
    /// # Accuracy
    /// Within 1e-9 K of the exact inverse over the whole range (tests/metals.rs).
    /// # Errors
    /// `Error::OutOfRange` outside [`ohms_range`](Self::ohms_range); `Error::NotFinite` for NaN or ±∞.
    /// # Source
    /// Named at each curve; table checks in tests/metals.rs.
    pub fn temperature(&self, resistance: ElectricalResistance) -> Result<ThermodynamicTemperature, Error> {
        self.celsius_from_ohms(resistance.get::<ohm>()).map(ThermodynamicTemperature::new::<degree_celsius>)
    }

    /// Returns the resistance of the element at this temperature.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    pub fn resistance(&self, temperature: ThermodynamicTemperature) -> Result<ElectricalResistance, Error> {
        self.ohms_from_celsius(temperature.get::<degree_celsius>()).map(ElectricalResistance::new::<ohm>)
    }

    /// Returns the temperature in °C at a resistance in Ω.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside [`ohms_range`](Self::ohms_range); `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_ohms(&self, ohms: f64) -> Result<f64, Error> {
        Ok(self.law.celsius_from_ohms(self.ohms.check(ohms)?))
    }

    /// Returns the resistance in Ω at a temperature in °C.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    pub fn ohms_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.law.range_celsius();
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.law.ohms_from_celsius(t))
    }
}

impl TryFrom<Law> for Metal {
    type Error = Error;
    fn try_from(law: Law) -> Result<Self, Error> {
        Self::new(law)
    }
}

impl From<Metal> for Law {
    fn from(metal: Metal) -> Self {
        metal.law
    }
}
