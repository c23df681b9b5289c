//! The Callendar-Van Dusen equation and its inverse.

use crate::Error;
use crate::math::{Real, horner, sqrt};
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

/// Temperature in °C at `ohms`; NaN where no temperature has that resistance.
#[inline(always)]
pub(crate) fn celsius_from_ohms(k: &Coefficients, ohms: f64) -> f64 {
    whole(k, ohms, root(k, ohms))
}

/// The same for each of a slice.
#[inline(always)]
pub(crate) fn celsius_below(k: &Coefficients, ohms: &mut [f64]) {
    if cfg!(feature = "std") {
        for v in ohms {
            *v = celsius_from_ohms(k, *v);
        }
    } else {
        // without std a square root takes one at a time, which would keep the steps from taking several
        for some in ohms.chunks_mut(ROOTS) {
            let mut roots = [0.0; ROOTS];
            for (slot, v) in roots.iter_mut().zip(&*some) {
                *slot = root(k, *v);
            }
            for (v, root) in some.iter_mut().zip(&roots) {
                *v = whole(k, *v, *root);
            }
        }
    }
}

/// Square roots that are taken before the steps of their temperatures.
const ROOTS: usize = 32;

/// The same as [`celsius_from_ohms`], bit for bit, where `ohms` is not below R₀: without the steps that only temperatures
/// below 0 °C need.
#[inline(always)]
pub(crate) fn celsius_from_ohms_above_zero(k: &Coefficients, ohms: f64) -> f64 {
    quadratic(k, rho(k, ohms), root(k, ohms))
}

#[inline(always)]
fn whole(k: &Coefficients, ohms: f64, root: f64) -> f64 {
    let rho = rho(k, ohms);
    let t = quadratic(k, rho, root);
    // t < 0:  Newton on C t⁴ − 100 C t³ + B t² + A t − ρ; from the quadratic's root, off by 2.4 K at −200 °C, three
    // steps leave less than rounding
    let (c3, c4) = (-100.0 * k.c, k.c);
    let step = |t: f64| {
        let value = (((c4 * t + c3) * t + k.b) * t + k.a) * t - rho;
        let slope = ((4.0 * c4 * t + 3.0 * c3) * t + 2.0 * k.b) * t + k.a;
        t - value / slope
    };
    let below = step(step(step(t)));
    if rho < 0.0 { below } else { t }
}

/// ρ = R/R₀ − 1.
#[inline(always)]
fn rho(k: &Coefficients, ohms: f64) -> f64 {
    (ohms - k.r0_ohms) / k.r0_ohms
}

/// √(A² + 4 B ρ).
#[inline(always)]
fn root(k: &Coefficients, ohms: f64) -> f64 {
    sqrt(k.a * k.a + 4.0 * k.b * rho(k, ohms))
}

/// The root of B t² + A t − ρ = 0 that is ρ/A for small ρ: the temperature from 0 °C upwards.
#[inline(always)]
fn quadratic(k: &Coefficients, rho: f64, root: f64) -> f64 {
    2.0 * rho / (k.a + root)
}
