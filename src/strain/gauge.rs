//! Gauge factor and its dependence on temperature.

use super::table::Points;
use super::{Expansion, ThermalOutput};
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;
use crate::signal::finite;

/// A resistance strain gauge: ΔR/R = F(T) e + τ(T).
///
/// Gauge factor F and its slope as ASTM E251 defines them; τ is the thermal output as a change of resistance.
///
/// # Source
/// ASTM E251 (gauge factor, its temperature dependence, thermal output, transverse sensitivity); VDI/VDE 2635 part 1
/// characterises gauges by the same quantities (both from memory, for the terms only).
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
    /// Thermal output as a table of points instead of a polynomial.
    pub thermal_points: Option<ThermalPoints<R>>,
    /// Specimen of another expansion than the package data were taken on; `None` = the same.
    pub expansion: Option<Expansion<R>>,
}

/// Thermal output as points: °C and microstrain, joined by a curve that does not overshoot.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct ThermalPoints<R = f64> {
    /// The points; their ends are the range.
    pub points: Points<R>,
    /// Gauge factor F_d that the data were taken with.
    pub gauge_factor: R,
}

impl ThermalPoints {
    /// Returns the thermal output at this temperature, microstrain.
    ///
    /// - `celsius`: temperature, °C, between the first and the last point.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the points; `Error::NotFinite` for NaN or ±∞.
    ///
    /// # Source
    /// F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304; checked in tests/thermal_output.rs.
    pub fn microstrain(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.points.range_celsius();
        let t = crate::Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.points.at(t))
    }
}

/// What temperature does to ΔR/R of a gauge on a free specimen, up to a constant: τ(T) − τ(T₀) is what counts.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Tau<R = f64> {
    /// Polynomial in °C without its constant.
    pub(crate) polynomial: [R; 7],
    /// Points and what they are multiplied by.
    pub(crate) points: Option<(Points<R>, R)>,
}

impl<R: Real> Tau<R> {
    #[inline]
    pub(crate) fn at(&self, celsius: R) -> R {
        let sum = crate::math::horner(celsius, &self.polynomial);
        match &self.points {
            None => sum,
            Some((points, scale)) => sum + *scale * points.at(celsius),
        }
    }
}

impl Tau<crate::math::Double> {
    /// Returns the same with every coefficient rounded.
    pub(crate) fn rounded(&self) -> Tau {
        Tau {
            polynomial: self.polynomial.map(Real::value),
            points: self.points.as_ref().map(|(points, scale)| (points.map(|_, v| v.value()), scale.value())),
        }
    }
}

impl<R: Real> Gauge<R> {
    /// Returns a gauge whose factor does not depend on temperature.
    #[must_use]
    pub fn new(factor: R) -> Self {
        let zero = R::from_f64(0.0);
        Self {
            factor,
            slope: zero,
            reference_celsius: R::from_f64(24.0),
            thermal_output: None,
            thermal_points: None,
            expansion: None,
        }
    }

    /// Returns F(T) = f₀ + f₁ T as `[f₀, f₁]`, T in °C.
    pub(crate) fn factor_line(&self) -> [R; 2] {
        // F(T) = F [1 + s (T − T_ref)]
        let f1 = self.factor * self.slope;
        [self.factor - f1 * self.reference_celsius, f1]
    }

    /// Returns τ(T) up to a constant.
    pub(crate) fn tau(&self) -> Tau<R> {
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
        let points = self.thermal_points.map(|t| (t.points, t.gauge_factor / R::from_f64(1e6)));
        Tau { polynomial: tau, points }
    }

    /// Returns the temperatures that the thermal output covers, °C.
    pub(crate) fn range_celsius(&self) -> [f64; 2] {
        match (&self.thermal_output, &self.thermal_points) {
            (Some(t), _) => t.range_celsius,
            (None, Some(t)) => t.points.range_celsius(),
            (None, None) => [f64::NEG_INFINITY, f64::INFINITY],
        }
    }

    /// Returns whether the conversion needs a temperature.
    pub(crate) fn needs_temperature(&self) -> bool {
        self.slope.value() != 0.0 || self.has_thermal()
    }

    /// Returns whether there is a thermal output to take off.
    pub(crate) fn has_thermal(&self) -> bool {
        self.thermal_output.is_some() || self.thermal_points.is_some() || self.expansion.is_some()
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
            if self.thermal_points.is_some() {
                return Err(Error::Unfit { what: "thermal output is a polynomial or a table of points, not both" });
            }
        }
        if let Some(output) = &self.thermal_points {
            output.points.check()?;
            finite("gauge factor of the thermal output", output.gauge_factor)?;
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
            thermal_points: self.thermal_points.map(|t| ThermalPoints {
                points: t.points.map(|n, v| f(Parameter::ThermalPoint(n), v)),
                gauge_factor: f(Parameter::ThermalGaugeFactor, t.gauge_factor),
            }),
            expansion: self.expansion.map(|e| Expansion {
                specimen: f(Parameter::ExpansionSpecimen, e.specimen),
                data: f(Parameter::ExpansionData, e.data),
            }),
        }
    }
}
