//! Thermocouples of the eight letter-designated types.

mod functions;
mod law;
mod tolerance;

pub(crate) use law::Function;
pub use tolerance::{Class, Tolerance};

use uom::si::electric_potential::millivolt;
use uom::si::f64::{ElectricPotential, TemperatureInterval, ThermodynamicTemperature};
use uom::si::temperature_interval::kelvin;
use uom::si::thermodynamic_temperature::degree_celsius;

use crate::Error;
use crate::range::Range;

/// A thermocouple of a letter-designated type, by its reference function on ITS-90.
///
/// The reference junction is added as emf, never as temperature: `E(t) = E measured + E(t reference)`.
///
/// ```
/// use ohmwright::thermocouple::Thermocouple;
///
/// // NIST ITS-90 tables: type K gives 4.096 mV at 100 °C
/// assert!((Thermocouple::K.millivolts_from_celsius(100.0)? - 4.096).abs() < 0.0005);
/// // a reference junction at 17 °C: 5.05 mV are 112 °C with type J (a printed exercise)
/// assert!((Thermocouple::J.celsius_from_millivolts_and_reference(5.05, 17.0)? - 112.0).abs() < 0.5);
/// assert!(Thermocouple::T.millivolts_from_celsius(401.0).is_err());
/// # Ok::<(), ohmwright::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub enum Thermocouple {
    /// Platinum-30 % rhodium against platinum-6 % rhodium, 0 °C to 1820 °C.
    B,
    /// Nickel-chromium against copper-nickel, −270 °C to 1000 °C.
    E,
    /// Iron against copper-nickel, −210 °C to 1200 °C.
    J,
    /// Nickel-chromium against nickel-aluminium, −270 °C to 1372 °C.
    K,
    /// Nickel-chromium-silicon against nickel-silicon, −270 °C to 1300 °C.
    N,
    /// Platinum-13 % rhodium against platinum, −50 °C to 1768.1 °C.
    R,
    /// Platinum-10 % rhodium against platinum, −50 °C to 1768.1 °C.
    S,
    /// Copper against copper-nickel, −270 °C to 400 °C.
    T,
}

impl Thermocouple {
    /// Every type.
    pub const ALL: [Self; 8] = [Self::B, Self::E, Self::J, Self::K, Self::N, Self::R, Self::S, Self::T];

    /// Returns the letter of the type.
    #[must_use]
    pub const fn letter(self) -> &'static str {
        match self {
            Self::B => "B",
            Self::E => "E",
            Self::J => "J",
            Self::K => "K",
            Self::N => "N",
            Self::R => "R",
            Self::S => "S",
            Self::T => "T",
        }
    }

    pub(crate) const fn function(self) -> &'static Function {
        match self {
            Self::B => &functions::B,
            Self::E => &functions::E,
            Self::J => &functions::J,
            Self::K => &functions::K,
            Self::N => &functions::N,
            Self::R => &functions::R,
            Self::S => &functions::S,
            Self::T => &functions::T,
        }
    }

    /// Returns the temperatures of the reference function, °C.
    #[must_use]
    pub const fn celsius_range(self) -> Range {
        let [low, high] = self.function().range;
        Range::new("temperature", "°C", low, high)
    }

    /// Returns the emfs that have a temperature, mV, reference junction at 0 °C.
    #[must_use]
    pub fn millivolts_range(self) -> Range {
        let f = self.function();
        let [low, high] = [f.floor, f.range[1]].map(|t| f.millivolts_from_celsius(t));
        Range::new("emf", "mV", low, high)
    }

    /// Returns the emf in mV at a temperature in °C, reference junction at 0 °C.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside [`celsius_range`](Self::celsius_range); `Error::NotFinite` for NaN or ±∞.
    /// # Source
    /// NIST Monograph 175; table checks in tests/thermocouples.rs.
    pub fn millivolts_from_celsius(self, celsius: f64) -> Result<f64, Error> {
        Ok(self.function().millivolts_from_celsius(self.celsius_range().check(celsius)?))
    }

    /// Returns the temperature in °C at an emf in mV, reference junction at 0 °C.
    ///
    /// The exact inverse of the reference function: the lower piece owns a join, a gap between pieces returns the join.
    /// Where [`is_ambiguous`](Self::is_ambiguous) says so, the higher of two temperatures.
    ///
    /// # Accuracy
    /// Within 1e-6 K of the exact inverse; beside the minimum of type B (21.02 °C), where the emf tells nothing, within
    /// what 1e-18 V is worth (tests/thermocouples.rs).
    /// # Errors
    /// `Error::OutOfRange` outside [`millivolts_range`](Self::millivolts_range); `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_millivolts(self, millivolts: f64) -> Result<f64, Error> {
        Ok(self.function().celsius_from_millivolts(self.millivolts_range().check(millivolts)?))
    }

    /// Returns whether two temperatures of the range have this emf (reference junction at 0 °C): type B from its minimum
    /// up to its second zero, 42.13 °C.
    #[must_use]
    pub fn is_ambiguous(self, millivolts: f64) -> bool {
        let f = self.function();
        let [low, _] = f.range;
        f.minimum > low
            && millivolts >= f.millivolts_from_celsius(f.minimum)
            && millivolts <= f.millivolts_from_celsius(low)
    }

    /// Returns the Seebeck coefficient in µV/K at a temperature in °C; that of the lower piece at a join.
    ///
    /// # Errors
    /// As [`millivolts_from_celsius`](Self::millivolts_from_celsius).
    pub fn microvolts_per_kelvin_at_celsius(self, celsius: f64) -> Result<f64, Error> {
        Ok(1e3 * self.function().millivolts_per_kelvin(self.celsius_range().check(celsius)?))
    }

    /// Returns the emf in mV between a measuring junction and a reference junction, both in °C.
    ///
    /// # Errors
    /// As [`millivolts_from_celsius`](Self::millivolts_from_celsius), for either.
    pub fn millivolts_from_celsius_and_reference(self, celsius: f64, reference_celsius: f64) -> Result<f64, Error> {
        Ok(self.millivolts_from_celsius(celsius)? - self.millivolts_from_celsius(reference_celsius)?)
    }

    /// Returns the temperature in °C at a measured emf in mV with the reference junction at this temperature in °C.
    ///
    /// # Errors
    /// As [`millivolts_from_celsius`](Self::millivolts_from_celsius) for the reference junction, as
    /// [`celsius_from_millivolts`](Self::celsius_from_millivolts) for the sum of both emfs.
    pub fn celsius_from_millivolts_and_reference(self, millivolts: f64, reference_celsius: f64) -> Result<f64, Error> {
        // E(t) = E + E(t reference)
        self.celsius_from_millivolts(millivolts + self.millivolts_from_celsius(reference_celsius)?)
    }

    /// Returns the temperature of the measuring junction.
    ///
    /// - `emf`: as measured, leads and converter removed; `reference`: temperature of the reference junction.
    ///
    /// # Errors
    /// As [`celsius_from_millivolts_and_reference`](Self::celsius_from_millivolts_and_reference).
    pub fn temperature(
        self,
        emf: ElectricPotential,
        reference: ThermodynamicTemperature,
    ) -> Result<ThermodynamicTemperature, Error> {
        self.celsius_from_millivolts_and_reference(emf.get::<millivolt>(), reference.get::<degree_celsius>())
            .map(ThermodynamicTemperature::new::<degree_celsius>)
    }

    /// Returns the emf between a measuring junction and a reference junction at these temperatures.
    ///
    /// # Errors
    /// As [`millivolts_from_celsius`](Self::millivolts_from_celsius), for either.
    pub fn emf(
        self,
        temperature: ThermodynamicTemperature,
        reference: ThermodynamicTemperature,
    ) -> Result<ElectricPotential, Error> {
        let [t, r] = [temperature, reference].map(|t| t.get::<degree_celsius>());
        self.millivolts_from_celsius_and_reference(t, r).map(ElectricPotential::new::<millivolt>)
    }
}

impl Tolerance {
    /// Returns the half-width at this temperature of the measuring junction.
    ///
    /// # Errors
    /// As [`kelvin_at_celsius`](Self::kelvin_at_celsius).
    pub fn half_width(&self, temperature: ThermodynamicTemperature) -> Result<TemperatureInterval, Error> {
        self.kelvin_at_celsius(temperature.get::<degree_celsius>()).map(TemperatureInterval::new::<kelvin>)
    }
}
