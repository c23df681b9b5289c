//! Negative-temperature-coefficient thermistors.

mod four_terms;
mod law;
mod points;

pub use four_terms::{LogarithmOfRatio, ReciprocalOfTemperature};
pub use points::{MOST_POINTS, Points};

pub use law::{Beta, SteinhartHart};
pub(crate) use law::{celsius_from_ohms_beta, celsius_from_ohms_steinhart_hart};

use uom::si::electrical_resistance::ohm;
use uom::si::f64::{ElectricalResistance, ThermodynamicTemperature};
use uom::si::thermodynamic_temperature::degree_celsius;

use crate::Error;
use crate::range::Range;

/// The temperature in kelvin of 0 °C, exactly.
pub(crate) const ICE_KELVIN: f64 = 273.15;

/// The law of a thermistor.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub enum Law<R = f64> {
    /// Two constants.
    Beta(Beta<R>),
    /// Three constants.
    SteinhartHart(SteinhartHart<R>),
    /// Four terms, resistance from temperature.
    LogarithmOfRatio(LogarithmOfRatio<R>),
    /// Four terms, temperature from resistance.
    ReciprocalOfTemperature(ReciprocalOfTemperature<R>),
    /// Points.
    Points(Points<R>),
}

/// A thermistor with a checked law.
///
/// ```
/// use ohmwright::thermistor::{Beta, Law, Thermistor};
/// use uom::si::{electrical_resistance::kiloohm, f64::ElectricalResistance, thermodynamic_temperature::degree_celsius};
///
/// let law = Law::Beta(Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 125.0] });
/// let t = Thermistor::new(law)?.temperature(ElectricalResistance::new::<kiloohm>(10.0))?;
/// assert!((t.get::<degree_celsius>() - 25.0).abs() < 1e-9); // by definition of R25
/// # Ok::<(), ohmwright::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize), serde(try_from = "Law", into = "Law"))]
pub struct Thermistor {
    law: Law,
    ohms: Range,
}

impl Thermistor {
    /// Returns a thermistor with this law.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for constants that give no falling resistance over the stated range.
    pub fn new(law: Law) -> Result<Self, Error> {
        law.check()?;
        let [low, high] = law.range_celsius();
        let (most, least) = (law.ohms_from_celsius(low), law.ohms_from_celsius(high));
        Ok(Self { law, ohms: Range::new("resistance", "Ω", least, most) })
    }

    /// Returns the law.
    #[must_use]
    pub const fn law(&self) -> &Law {
        &self.law
    }

    /// Returns the resistances that the stated range covers, Ω.
    #[must_use]
    pub const fn ohms_range(&self) -> Range {
        self.ohms
    }

    /// Returns the temperature at which the thermistor has this resistance.
    ///
    /// # Accuracy
    /// Within 1e-9 K of the exact law over the stated range (tests/accuracy.rs).
    /// # Errors
    /// `Error::OutOfRange` outside [`ohms_range`](Self::ohms_range); `Error::NotFinite` for NaN or ±∞.
    pub fn temperature(&self, resistance: ElectricalResistance) -> Result<ThermodynamicTemperature, Error> {
        self.celsius_from_ohms(resistance.get::<ohm>()).map(ThermodynamicTemperature::new::<degree_celsius>)
    }

    /// Returns the resistance of the thermistor at this temperature.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the stated range; `Error::NotFinite` for NaN or ±∞.
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
    /// `Error::OutOfRange` outside the stated range; `Error::NotFinite` for NaN or ±∞.
    pub fn ohms_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.law.range_celsius();
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.law.ohms_from_celsius(t))
    }
}

impl TryFrom<Law> for Thermistor {
    type Error = Error;
    fn try_from(law: Law) -> Result<Self, Error> {
        Self::new(law)
    }
}

impl From<Thermistor> for Law {
    fn from(thermistor: Thermistor) -> Self {
        thermistor.law
    }
}
