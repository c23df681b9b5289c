//! The Callendar-Van Dusen equation.

use crate::Error;
use crate::math::{Real, horner};
use crate::parameter::Parameter;
use crate::range::Range;
use crate::signal::{finite, positive};

/// Constants of R(t) = R₀ [1 + A t + B t² + C (t − 100 °C) t³], C = 0 at and above 0 °C.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Coefficients<R = f64> {
    /// R₀, resistance at 0 °C, Ω.
    pub r0_ohms: R,
    /// A, 1/K.
    pub a: R,
    /// B, 1/K².
    pub b: R,
    /// C, 1/K⁴.
    pub c: R,
    /// Lowest and highest temperature for which the equation holds, °C.
    pub range_celsius: [f64; 2],
}

impl<R: Real> Coefficients<R> {
    /// Returns the same curve for another resistance at 0 °C.
    #[must_use]
    pub fn with_r0(self, r0_ohms: R) -> Self {
        Self { r0_ohms, ..self }
    }

    /// Resistance in Ω at `t` °C; valid over the range the caller has checked.
    #[inline]
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        // R = R₀ (1 + A t + B t²)                           t ≥ 0 °C
        // R = R₀ (1 + A t + B t² + C (t − 100) t³)          t < 0 °C
        let c = if t.value() < 0.0 { self.c } else { zero };
        self.r0_ohms * horner(t, &[one, self.a, self.b, R::from_f64(-100.0) * c, c])
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        positive("resistance at 0 °C", "ohm", self.r0_ohms)?;
        positive("coefficient A", "1/K", self.a)?;
        finite("coefficient B", self.b)?;
        finite("coefficient C", self.c)?;
        let [low, high] = self.range_celsius;
        Range::new("lowest temperature of the platinum curve", "°C", -273.15, 2000.0).check(low)?;
        Range::new("highest temperature of the platinum curve", "°C", low, 2000.0).check(high)?;
        // dR/dt must stay positive, or the inverse has no single answer
        for step in 0..=64 {
            let t = low + (high - low) * f64::from(step) / 64.0;
            let c = if t < 0.0 { self.c.value() } else { 0.0 };
            let slope = self.a.value() + t * (2.0 * self.b.value() + t * (-300.0 * c + t * 4.0 * c));
            Range::new("slope of the platinum curve in its range", "1/K", f64::MIN_POSITIVE, f64::MAX).check(slope)?;
        }
        // and so R > 0 everywhere if it is at the lower end
        let lowest = self.ohms_from_celsius(R::from_f64(low)).value();
        Range::new(
            "resistance of the platinum curve at the lowest temperature of its range",
            "ohm",
            f64::MIN_POSITIVE,
            f64::MAX,
        )
        .check(lowest)?;
        Ok(())
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Coefficients<S> {
        Coefficients {
            r0_ohms: f(Parameter::R0, self.r0_ohms),
            a: f(Parameter::PlatinumA, self.a),
            b: f(Parameter::PlatinumB, self.b),
            c: f(Parameter::PlatinumC, self.c),
            range_celsius: self.range_celsius,
        }
    }
}
