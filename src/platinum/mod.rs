//! Platinum resistance thermometers.

mod alpha_delta_beta;
mod callendar_van_dusen;
mod inverse;
mod ipts68;
pub mod its90;
mod standards;
mod tolerance;

pub use alpha_delta_beta::AlphaDeltaBeta;
pub use callendar_van_dusen::Coefficients;
pub(crate) use inverse::Inverse;
pub use ipts68::its90_from_ipts68;
pub use standards::{
    ASTM_E1137, GOST_6651_2009, IEC_751_1983, IEC_751_1983_SHORT, IEC_60751, PUBLISHED, Published, RATIO_1_3902,
    RATIO_1_3911, RATIO_1_3916, RATIO_1_3920, Scale,
};
pub use tolerance::{Class, FractionOfB, Grade, Resistor, Tolerance};

use uom::si::electrical_resistance::ohm;
use uom::si::f64::{ElectricalResistance, TemperatureInterval, ThermodynamicTemperature};
use uom::si::temperature_interval::kelvin;
use uom::si::thermodynamic_temperature::degree_celsius;

use crate::Error;
use crate::math::Dual;
use crate::range::Range;

/// A platinum resistance thermometer with a checked curve.
///
/// ```
/// use ohmwright::platinum::Platinum;
/// use uom::si::{electrical_resistance::ohm, f64::ElectricalResistance, thermodynamic_temperature::degree_celsius};
///
/// let pt100 = Platinum::iec_60751(ElectricalResistance::new::<ohm>(100.0))?;
/// // IEC 60751:2008, table of a 100 Ω element: 138.51 Ω at 100 °C
/// let t = pt100.temperature(ElectricalResistance::new::<ohm>(138.5055))?;
/// assert!((t.get::<degree_celsius>() - 100.0).abs() < 1e-9);
/// assert!(pt100.temperature(ElectricalResistance::new::<ohm>(412.3)).is_err());
/// # Ok::<(), ohmwright::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(
    feature = "serde",
    derive(serde::Serialize, serde::Deserialize),
    serde(try_from = "Coefficients", into = "Coefficients")
)]
pub struct Platinum {
    inverse: Inverse,
    ohms: Range,
}

impl Platinum {
    /// Returns a thermometer with this curve.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a constant that is no positive finite number, and for a curve that
    /// does not rise all over its range.
    pub fn new(coefficients: Coefficients) -> Result<Self, Error> {
        coefficients.check()?;
        let [low, high] = coefficients.range_celsius.map(|t| coefficients.ohms_from_celsius(t));
        Ok(Self { inverse: Inverse::new(coefficients), ohms: Range::new("resistance", "Ω", low, high) })
    }

    /// Returns a thermometer of IEC 60751:2008 with this resistance at 0 °C, −200 °C to 850 °C.
    ///
    /// # Errors
    /// As [`new`](Self::new), for the resistance.
    pub fn iec_60751(r0: ElectricalResistance) -> Result<Self, Error> {
        Self::new(IEC_60751.with_r0(r0.get::<ohm>()))
    }

    /// Returns the constants.
    #[must_use]
    pub const fn coefficients(&self) -> &Coefficients {
        self.inverse.law()
    }

    /// Returns the resistances that the curve covers, Ω.
    #[must_use]
    pub const fn ohms_range(&self) -> Range {
        self.ohms
    }

    /// Returns the temperature at which the element has this resistance.
    ///
    /// - `resistance`: of the element alone, leads removed. Valid: [`ohms_range`](Self::ohms_range)
    ///   (Pt100 of IEC 60751: 18.520 08 Ω to 390.481 125 Ω; the 18.52 Ω of the printed table lies below it).
    /// - Returns a temperature on ITS-90.
    ///
    /// # Accuracy
    /// Within 1e-9 K of the exact inverse over the whole range (tests/accuracy.rs).
    /// # Errors
    /// `Error::OutOfRange` outside the valid range; `Error::NotFinite` for NaN or ±∞.
    /// # Source
    /// IEC 60751:2008, the interpolating equation; table check in tests/iec60751.rs.
    pub fn temperature(&self, resistance: ElectricalResistance) -> Result<ThermodynamicTemperature, Error> {
        self.celsius_from_ohms(resistance.get::<ohm>()).map(ThermodynamicTemperature::new::<degree_celsius>)
    }

    /// Returns the resistance of the element at this temperature.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    /// # Source
    /// IEC 60751:2008, the interpolating equation; table check in tests/iec60751.rs.
    pub fn resistance(&self, temperature: ThermodynamicTemperature) -> Result<ElectricalResistance, Error> {
        self.ohms_from_celsius(temperature.get::<degree_celsius>()).map(ElectricalResistance::new::<ohm>)
    }

    /// Returns the temperature in °C at a resistance in Ω; the plain-number form of [`temperature`](Self::temperature).
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the valid range; `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_ohms(&self, ohms: f64) -> Result<f64, Error> {
        Ok(self.inverse.celsius_from_ohms(self.ohms.check(ohms)?))
    }

    /// Returns the resistance in Ω at a temperature in °C; the plain-number form of [`resistance`](Self::resistance).
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    pub fn ohms_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.coefficients().range_celsius;
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.coefficients().ohms_from_celsius(t))
    }

    /// Returns dR/dt in Ω/K at a temperature in °C, from 0 °C upwards of the quadratic.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    pub fn ohms_per_kelvin_at_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.coefficients().range_celsius;
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        let Coefficients { r0_ohms, a, b, c, range_celsius } = *self.coefficients();
        let [r0_ohms, a, b, c] = [r0_ohms, a, b, c].map(Dual::constant);
        Ok(Coefficients { r0_ohms, a, b, c, range_celsius }.ohms_from_celsius(Dual::variable(t)).slope)
    }
}

impl its90::StandardThermometer {
    /// Returns the temperature at which the element has this resistance.
    ///
    /// # Errors
    /// As [`celsius_from_ohms`](Self::celsius_from_ohms).
    pub fn temperature(&self, resistance: ElectricalResistance) -> Result<ThermodynamicTemperature, Error> {
        self.celsius_from_ohms(resistance.get::<ohm>()).map(ThermodynamicTemperature::new::<degree_celsius>)
    }

    /// Returns the resistance of the element at this temperature.
    ///
    /// # Errors
    /// As [`ohms_from_celsius`](Self::ohms_from_celsius).
    pub fn resistance(&self, temperature: ThermodynamicTemperature) -> Result<ElectricalResistance, Error> {
        self.ohms_from_celsius(temperature.get::<degree_celsius>()).map(ElectricalResistance::new::<ohm>)
    }
}

impl Tolerance {
    /// Returns the half-width at this temperature.
    ///
    /// # Errors
    /// As [`kelvin_at_celsius`](Self::kelvin_at_celsius).
    /// # Source
    /// IEC 60751:2008, tolerance classes; check in tests/platinum_standards.rs.
    pub fn half_width(&self, temperature: ThermodynamicTemperature) -> Result<TemperatureInterval, Error> {
        self.kelvin_at_celsius(temperature.get::<degree_celsius>()).map(TemperatureInterval::new::<kelvin>)
    }
}

impl TryFrom<Coefficients> for Platinum {
    type Error = Error;
    fn try_from(coefficients: Coefficients) -> Result<Self, Error> {
        Self::new(coefficients)
    }
}

impl From<Platinum> for Coefficients {
    fn from(platinum: Platinum) -> Self {
        *platinum.coefficients()
    }
}
