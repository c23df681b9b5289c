//! The same curve in Callendar's letters.

use super::Coefficients;
use crate::math::Real;
use crate::parameter::Parameter;

/// Constants of R = R₀ {1 + α [t − δ (t/100)(t/100 − 1) − β (t/100)³ (t/100 − 1)]}, β = 0 at and above 0 °C.
///
/// `α = A + 100 B`, `δ = −10⁴ B/α`, `β = −10⁸ C/α` and back `A = α (1 + δ/100)`, `B = −α δ/10⁴`, `C = −α β/10⁸`: exact
/// algebra, no fit.
///
/// ```
/// use ohmwright::platinum::{AlphaDeltaBeta, IEC_60751};
///
/// let k = AlphaDeltaBeta::from(IEC_60751);
/// assert!((k.alpha - 0.00385055).abs() < 1e-15); // A + 100 B of IEC 60751:2008, by hand
/// assert!((k.ohms_at_100_celsius() - 138.5055).abs() < 1e-12);
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct AlphaDeltaBeta<R = f64> {
    /// R₀, resistance at 0 °C, Ω.
    pub r0_ohms: R,
    /// α, mean coefficient between 0 °C and 100 °C, 1/K.
    pub alpha: R,
    /// δ, K.
    pub delta: R,
    /// β, K.
    pub beta: R,
    /// Lowest and highest temperature for which the equation holds, °C.
    pub range_celsius: [f64; 2],
}

impl<R: Real> AlphaDeltaBeta<R> {
    /// Returns R₀ (1 + 100 α), Ω.
    #[must_use]
    pub fn ohms_at_100_celsius(&self) -> R {
        self.r0_ohms * (R::from_f64(1.0) + R::from_f64(100.0) * self.alpha)
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> AlphaDeltaBeta<S> {
        AlphaDeltaBeta {
            r0_ohms: f(Parameter::R0, self.r0_ohms),
            alpha: f(Parameter::PlatinumAlpha, self.alpha),
            delta: f(Parameter::PlatinumDelta, self.delta),
            beta: f(Parameter::PlatinumBeta, self.beta),
            range_celsius: self.range_celsius,
        }
    }
}

impl<R: Real> From<Coefficients<R>> for AlphaDeltaBeta<R> {
    fn from(k: Coefficients<R>) -> Self {
        let alpha = k.a + R::from_f64(1e2) * k.b;
        Self {
            r0_ohms: k.r0_ohms,
            alpha,
            delta: -(R::from_f64(1e4) * k.b / alpha),
            beta: -(R::from_f64(1e8) * k.c / alpha),
            range_celsius: k.range_celsius,
        }
    }
}

impl<R: Real> From<AlphaDeltaBeta<R>> for Coefficients<R> {
    fn from(k: AlphaDeltaBeta<R>) -> Self {
        Self {
            r0_ohms: k.r0_ohms,
            a: k.alpha * (R::from_f64(1.0) + k.delta / R::from_f64(1e2)),
            b: -(k.alpha * k.delta / R::from_f64(1e4)),
            c: -(k.alpha * k.beta / R::from_f64(1e8)),
            range_celsius: k.range_celsius,
        }
    }
}
