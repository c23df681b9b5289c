//! Resistors that stand beside a thermometer: those that straighten its curve, and insulation that leaks.

use super::{not_negative, positive};
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;

/// What is connected to a thermometer at the thermometer itself, its leads outside: each may be absent.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Around<R = f64> {
    /// Resistor in parallel with the thermometer, Ω.
    pub parallel: Option<R>,
    /// Insulation resistance across the thermometer, Ω.
    pub leakage: Option<R>,
    /// Resistor in series with the thermometer and what is parallel to it, Ω.
    pub series: Option<R>,
}

impl<R> Around<R> {
    /// Nothing: the thermometer alone.
    pub const NONE: Self = Self { parallel: None, leakage: None, series: None };

    /// Returns whether there is nothing.
    #[must_use]
    pub const fn is_none(&self) -> bool {
        self.parallel.is_none() && self.leakage.is_none() && self.series.is_none()
    }
}

impl<R> Default for Around<R> {
    fn default() -> Self {
        Self::NONE
    }
}

impl<R: Real> Around<R> {
    /// Conductance in parallel with the thermometer, S.
    pub(crate) fn conductance(&self) -> R {
        let of = |r: Option<R>| r.map_or(R::from_f64(0.0), |r| R::from_f64(1.0) / r);
        of(self.parallel) + of(self.leakage)
    }

    /// Returns N = (p₀ + p₁ R)/(q₀ + q₁ R), the resistance of the whole with a thermometer of R Ω, as `[p₀, p₁]`, `[q₀, q₁]`.
    pub(crate) fn moebius(&self) -> ([R; 2], [R; 2]) {
        let one = R::from_f64(1.0);
        let (g, s) = (self.conductance(), self.series.unwrap_or(R::from_f64(0.0)));
        // N = R_s + R/(1 + G R)
        ([s, one + g * s], [one, g])
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        let parallel =
            self.parallel.map_or(Ok(()), |r| positive("resistor in parallel with the thermometer", "ohm", r));
        let leakage = self.leakage.map_or(Ok(()), |r| positive("insulation resistance of the thermometer", "ohm", r));
        let series = self.series.map_or(Ok(()), |r| not_negative("resistor in series with the thermometer", "ohm", r));
        parallel.and(leakage).and(series)
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Around<S> {
        Around {
            parallel: self.parallel.map(|r| f(Parameter::Parallel, r)),
            leakage: self.leakage.map(|r| f(Parameter::Leakage, r)),
            series: self.series.map(|r| f(Parameter::Series, r)),
        }
    }
}
