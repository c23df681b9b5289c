//! Gauge factor and its dependence on temperature.

use super::{Expansion, ThermalOutput};
use crate::Error;
use crate::chain::Parameter;
use crate::math::Real;
use crate::signal::finite;

/// A resistance strain gauge: ΔR/R = F(T) e + τ(T).
///
/// Gauge factor F and its slope as ASTM E251 defines them; τ is the thermal output as a change of resistance.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Gauge<R = f64> {
    /// Gauge factor F at the reference temperature.
    pub factor: R,
    /// Relative change of the gauge factor, 1/K.
    pub slope: R,
    /// Reference temperature of the gauge factor, °C.
    pub reference_celsius: R,
    /// Thermal output of the package; `None` = none to be taken off.
    pub thermal_output: Option<ThermalOutput<R>>,
    /// Specimen of another expansion than the package data were taken on; `None` = the same.
    pub expansion: Option<Expansion<R>>,
}

impl<R: Real> Gauge<R> {
    /// Returns a gauge whose factor does not depend on temperature.
    #[must_use]
    pub fn new(factor: R) -> Self {
        let zero = R::from_f64(0.0);
        Self { factor, slope: zero, reference_celsius: R::from_f64(24.0), thermal_output: None, expansion: None }
    }

    /// Returns F(T) = f₀ + f₁ T as `[f₀, f₁]`, T in °C.
    pub(crate) fn factor_line(&self) -> [R; 2] {
        // F(T) = F [1 + s (T − T_ref)]
        let f1 = self.factor * self.slope;
        [self.factor - f1 * self.reference_celsius, f1]
    }

    /// Returns τ(T) as a polynomial in T, °C, that is zero at the temperature of the zero.
    pub(crate) fn thermal_polynomial(&self, zero_celsius: R) -> [R; 7] {
        let mut tau = [R::from_f64(0.0); 7];
        // τ = F_d (TO(T) − TO(T₀)) + F (α_s − α_d)(T − T₀)
        if let Some(output) = &self.thermal_output {
            let scale = output.gauge_factor / R::from_f64(1e6);
            for (t, c) in tau.iter_mut().zip(output.celsius_coefficients()) {
                *t = scale * c;
            }
        }
        if let Some(expansion) = &self.expansion {
            tau[1] = tau[1] + self.factor * (expansion.specimen - expansion.data);
        }
        tau[0] = R::from_f64(0.0);
        tau[0] = -crate::math::horner(zero_celsius, &tau);
        tau
    }

    /// Returns whether the conversion needs a temperature.
    pub(crate) fn needs_temperature(&self) -> bool {
        self.slope.value() != 0.0 || self.has_thermal()
    }

    /// Returns whether there is a thermal output to take off.
    pub(crate) fn has_thermal(&self) -> bool {
        self.thermal_output.is_some() || self.expansion.is_some()
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        finite("gauge factor", self.factor)?;
        if self.factor.value() == 0.0 {
            return Err(Error::Unfit { what: "a gauge factor of 0 sees no strain" });
        }
        finite("gauge factor slope", self.slope)?;
        finite("gauge factor reference temperature", self.reference_celsius)?;
        if let Some(output) = &self.thermal_output {
            output.check()?;
        }
        if let Some(expansion) = &self.expansion {
            finite("specimen expansion", expansion.specimen)?;
            finite("data expansion", expansion.data)?;
        }
        Ok(())
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Gauge<S> {
        Gauge {
            factor: f(Parameter::GaugeFactor, self.factor),
            slope: f(Parameter::GaugeFactorSlope, self.slope),
            reference_celsius: f(Parameter::GaugeReference, self.reference_celsius),
            thermal_output: self.thermal_output.map(|t| t.map(f)),
            expansion: self.expansion.map(|e| Expansion {
                specimen: f(Parameter::ExpansionSpecimen, e.specimen),
                data: f(Parameter::ExpansionData, e.data),
            }),
        }
    }
}
