//! Thermal output: the strain that a gauge on a free specimen shows when only the temperature changes.

use crate::Error;
use crate::math::{Real, substitute};
use crate::parameter::Parameter;
use crate::range::Range;
use crate::signal::finite;

/// The polynomial of a gauge package, TO(T) = Σ aᵢ Tⁱ in microstrain, up to the sixth power.
///
/// # Source
/// ASTM E251 for thermal output; Micro-Measurements TN-504 for the polynomial, its gauge factor and the change of specimen.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct ThermalOutput<R = f64> {
    /// Coefficients aᵢ, microstrain per unit of temperature to the i-th.
    pub coefficients: [R; 7],
    /// Whether T is in °F rather than °C.
    pub fahrenheit: bool,
    /// Gauge factor F_d that the data were taken with.
    pub gauge_factor: R,
    /// Lowest and highest temperature for which the polynomial holds, °C; ±∞ where nothing is stated.
    pub range_celsius: [f64; 2],
}

/// Coefficients of thermal expansion, 1/K.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Expansion<R = f64> {
    /// Of the specimen the gauge is bonded to.
    pub specimen: R,
    /// Of the material the package data were taken on.
    pub data: R,
}

impl<R: Real> ThermalOutput<R> {
    /// Returns the coefficients for T in °C.
    pub(crate) fn celsius_coefficients(&self) -> [R; 7] {
        if self.fahrenheit {
            // T_F = 32 + 9/5 T
            substitute(&self.coefficients, R::from_f64(32.0), R::from_f64(9.0) / R::from_f64(5.0))
        } else {
            self.coefficients
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        for c in self.coefficients {
            finite("thermal output coefficient", c)?;
        }
        finite("gauge factor of the thermal output", self.gauge_factor)?;
        let [low, high] = self.range_celsius;
        if low.is_nan() || high.is_nan() || low >= high {
            return Err(Error::OutOfRange {
                what: "upper end of the thermal output range",
                value: high,
                min: low,
                max: f64::INFINITY,
                unit: "°C",
            });
        }
        Ok(())
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> ThermalOutput<S> {
        let mut n = 0;
        ThermalOutput {
            coefficients: self.coefficients.map(|c| {
                n += 1;
                f(Parameter::ThermalCoefficient(n - 1), c)
            }),
            fahrenheit: self.fahrenheit,
            gauge_factor: f(Parameter::ThermalGaugeFactor, self.gauge_factor),
            range_celsius: self.range_celsius,
        }
    }
}

impl ThermalOutput {
    /// Returns the thermal output at this temperature, microstrain.
    ///
    /// - `celsius`: temperature, °C.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the stated range; `Error::NotFinite` for NaN or ±∞.
    ///
    /// # Source
    /// Micro-Measurements Tech Note TN-504, Eq. 504.5; checked in tests/thermal_output.rs.
    pub fn microstrain(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.range_celsius;
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        let t = if self.fahrenheit { 1.8 * t + 32.0 } else { t };
        Ok(crate::math::horner(t, &self.coefficients))
    }
}
