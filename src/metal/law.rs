//! Nickel and copper curves and their inverses.

use super::Law;
use crate::Error;
use crate::math::{Real, horner, sqrt};
use crate::parameter::Parameter;
use crate::range::Range;
use crate::signal::{finite, positive};

/// Constants of R = R₀ (1 + A t + B t² + D t⁴ + F t⁶).
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Nickel<R = f64> {
    /// R₀, resistance at 0 °C, Ω.
    pub r0_ohms: R,
    /// A, 1/K.
    pub a: R,
    /// B, 1/K².
    pub b: R,
    /// D, 1/K⁴.
    pub d: R,
    /// F, 1/K⁶.
    pub f: R,
    /// Lowest and highest temperature for which the equation holds, °C.
    pub range_celsius: [f64; 2],
}

/// Constants of R = R₀ [1 + A t + B t (t + 6.7 °C) + C t³], B = C = 0 at and above 0 °C: a straight line there.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Copper<R = f64> {
    /// R₀, resistance at 0 °C, Ω.
    pub r0_ohms: R,
    /// A, 1/K.
    pub a: R,
    /// B, 1/K².
    pub b: R,
    /// C, 1/K³.
    pub c: R,
    /// Lowest and highest temperature for which the equation holds, °C.
    pub range_celsius: [f64; 2],
}

/// The constant beside t in the copper equation, °C.
const COPPER_SHIFT: f64 = 6.7;

/// Newton steps of both inverses: from the starts below, over the published ranges, they leave rounding alone
/// (tests/metals.rs); a curve of the caller's own must arrive with them too, or it is refused.
const STEPS: usize = 5;

impl<R: Real> Nickel<R> {
    fn ohms_from_celsius(&self, t: R) -> R {
        // R = R₀ (1 + A t + B t² + D t⁴ + F t⁶)
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        self.r0_ohms * horner(t, &[one, self.a, self.b, zero, self.d, zero, self.f])
    }
}

impl<R: Real> Copper<R> {
    fn ohms_from_celsius(&self, t: R) -> R {
        // R = R₀ (1 + A t)                              t ≥ 0 °C
        // R = R₀ [1 + (A + 6.7 B) t + B t² + C t³]      t < 0 °C
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        let (b, c) = if t.value() < 0.0 { (self.b, self.c) } else { (zero, zero) };
        self.r0_ohms * horner(t, &[one, self.a + R::from_f64(COPPER_SHIFT) * b, b, c])
    }
}

/// Temperature in °C at `ohms`; the caller has checked the range.
#[inline(always)]
pub(crate) fn celsius_from_ohms_nickel(k: &Nickel, ohms: f64) -> f64 {
    let rho = (ohms - k.r0_ohms) / k.r0_ohms;
    // start: the root of B t² + A t − ρ = 0 that is ρ/A for small ρ
    let square = k.a * k.a + 4.0 * k.b * rho;
    let mut t = 2.0 * rho / (k.a + sqrt(if square > 0.0 { square } else { 0.0 }));
    for _ in 0..STEPS {
        let s = t * t;
        let value = t * (k.a + t * (k.b + s * (k.d + s * k.f))) - rho;
        let slope = k.a + t * (2.0 * k.b + s * (4.0 * k.d + s * 6.0 * k.f));
        t -= value / slope;
    }
    t
}

/// Temperature in °C at `ohms`; the caller has checked the range.
#[inline(always)]
pub(crate) fn celsius_from_ohms_copper(k: &Copper, ohms: f64) -> f64 {
    let rho = (ohms - k.r0_ohms) / k.r0_ohms;
    // t ≥ 0 °C: t = ρ/A, and the start below
    let line = rho / k.a;
    let linear = k.a + COPPER_SHIFT * k.b;
    let mut t = line;
    for _ in 0..STEPS {
        let value = t * (linear + t * (k.b + t * k.c)) - rho;
        let slope = linear + t * (2.0 * k.b + t * 3.0 * k.c);
        t -= value / slope;
    }
    if rho < 0.0 { t } else { line }
}

impl<R: Real> Law<R> {
    /// Returns the lowest and highest temperature for which the equation holds, °C.
    #[must_use]
    pub const fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::Nickel(k) => k.range_celsius,
            Self::Copper(k) => k.range_celsius,
        }
    }

    /// Resistance in Ω at `t` °C; valid over the range the caller has checked.
    #[inline]
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        match self {
            Self::Nickel(k) => k.ohms_from_celsius(t),
            Self::Copper(k) => k.ohms_from_celsius(t),
        }
    }
}

impl<R: Real> Law<R> {
    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Law<S> {
        match self {
            Self::Nickel(k) => Law::Nickel(Nickel {
                r0_ohms: f(Parameter::MetalR0, k.r0_ohms),
                a: f(Parameter::MetalCoefficient(1), k.a),
                b: f(Parameter::MetalCoefficient(2), k.b),
                d: f(Parameter::MetalCoefficient(3), k.d),
                f: f(Parameter::MetalCoefficient(4), k.f),
                range_celsius: k.range_celsius,
            }),
            Self::Copper(k) => Law::Copper(Copper {
                r0_ohms: f(Parameter::MetalR0, k.r0_ohms),
                a: f(Parameter::MetalCoefficient(1), k.a),
                b: f(Parameter::MetalCoefficient(2), k.b),
                c: f(Parameter::MetalCoefficient(3), k.c),
                range_celsius: k.range_celsius,
            }),
        }
    }
}

impl Law {
    /// Temperature in °C at `ohms`; the caller has checked the range.
    #[inline]
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        match self {
            Self::Nickel(k) => celsius_from_ohms_nickel(k, ohms),
            Self::Copper(k) => celsius_from_ohms_copper(k, ohms),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        let (r0, a, rest) = match self {
            Self::Nickel(k) => (k.r0_ohms, k.a, [k.b, k.d, k.f]),
            Self::Copper(k) => (k.r0_ohms, k.a, [k.b, k.c, 0.0]),
        };
        positive("resistance at 0 °C", "ohm", r0)?;
        positive("coefficient A", "1/K", a)?;
        for k in rest {
            finite("coefficient of the metal's curve", k)?;
        }
        let [low, high] = self.range_celsius();
        Range::new("lowest temperature of the metal's curve", "°C", -273.15, 2000.0).check(low)?;
        Range::new("highest temperature of the metal's curve", "°C", low, 2000.0).check(high)?;
        // the inverse must arrive, which it does not where the resistance falls or bends too much for its start
        for step in 0..=64 {
            let t = low + (high - low) * f64::from(step) / 64.0;
            let ohms = self.ohms_from_celsius(t);
            Range::new("resistance of the metal in its range", "ohm", f64::MIN_POSITIVE, f64::MAX).check(ohms)?;
            let off = (self.celsius_from_ohms(ohms) - t).abs();
            if off.is_nan() || off > 1e-9 {
                return Err(Error::Unfit { what: "the metal's curve does not rise steadily over its range" });
            }
        }
        Ok(())
    }
}
