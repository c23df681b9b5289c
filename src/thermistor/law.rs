//! Beta and Steinhart-Hart equations.

use super::{ICE_KELVIN, Law};
use crate::Error;
use crate::math::{Dual, Real, ln};
use crate::parameter::Parameter;
use crate::range::Range;
use crate::signal::{finite, positive};

/// 25 °C in kelvin.
const T25_KELVIN: f64 = 298.15;

/// R = R₂₅ exp[β (1/T − 1/298.15 K)].
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Beta<R = f64> {
    /// Resistance at 25 °C, Ω.
    pub r25_ohms: R,
    /// β, K.
    pub beta_kelvin: R,
    /// Lowest and highest temperature for which the law is used, °C.
    pub range_celsius: [f64; 2],
}

/// 1/T = a + b ln(R/Ω) + c ln³(R/Ω).
///
/// J. S. Steinhart, S. R. Hart, Calibration curves for thermistors, Deep-Sea Research 15 (1968) 497-503.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct SteinhartHart<R = f64> {
    /// a, 1/K.
    pub a: R,
    /// b, 1/K.
    pub b: R,
    /// c, 1/K.
    pub c: R,
    /// Lowest and highest temperature for which the law is used, °C.
    pub range_celsius: [f64; 2],
}

/// Temperature in °C at `ohms`; the caller has checked the range.
#[inline(always)]
pub(crate) fn celsius_from_ohms_beta(k: &Beta, ohms: f64) -> f64 {
    // 1/T = 1/T₂₅ + ln(R/R₂₅)/β
    1.0 / (1.0 / T25_KELVIN + ln(ohms / k.r25_ohms) / k.beta_kelvin) - ICE_KELVIN
}

/// Temperature in °C at `ohms`; the caller has checked the range.
#[inline(always)]
pub(crate) fn celsius_from_ohms_steinhart_hart(k: &SteinhartHart, ohms: f64) -> f64 {
    // 1/T = a + b L + c L³,  L = ln R
    let l = ln(ohms);
    1.0 / (k.a + l * (k.b + l * l * k.c)) - ICE_KELVIN
}

impl<R: Real> Beta<R> {
    fn ohms_from_celsius(&self, t: R) -> R {
        // R = R₂₅ exp[β (1/T − 1/T₂₅)] with 1/T − 1/T₂₅ = (25 − t)/(T T₂₅)
        let kelvin = t + R::from_f64(ICE_KELVIN);
        self.r25_ohms * (self.beta_kelvin * (R::from_f64(25.0) - t) / (kelvin * R::from_f64(T25_KELVIN))).exp()
    }
}

impl<R: Real> SteinhartHart<R> {
    fn inverse_kelvin(&self, l: R) -> R {
        self.a + l * (self.b + l * l * self.c)
    }

    fn ohms_from_celsius(&self, t: R) -> R {
        let target = R::from_f64(1.0) / (t + R::from_f64(ICE_KELVIN));
        // Newton on a + b L + c L³ = 1/T from the straight line; the left side rises all over the checked range
        let plain = SteinhartHart {
            a: self.a.value(),
            b: self.b.value(),
            c: self.c.value(),
            range_celsius: self.range_celsius,
        };
        let mut l = (target.value() - plain.a) / plain.b;
        for _ in 0..64 {
            let next = l - (plain.inverse_kelvin(l) - target.value()) / plain.slope(l);
            let done = (next - l).abs() <= 1e-15 * l.abs();
            l = next;
            if done {
                break;
            }
        }
        // one more step in the number type of the caller carries what it carries
        let fixed = R::from_f64(l);
        (fixed - (self.inverse_kelvin(fixed) - target) / R::from_f64(plain.slope(l))).exp()
    }
}

impl SteinhartHart {
    fn slope(&self, l: f64) -> f64 {
        self.b + 3.0 * self.c * l * l
    }
}

impl<R: Real> Law<R> {
    /// Returns the lowest and highest temperature for which the law is used, °C.
    #[must_use]
    pub const fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::Beta(k) => k.range_celsius,
            Self::SteinhartHart(k) => k.range_celsius,
        }
    }

    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        match self {
            Self::Beta(k) => k.ohms_from_celsius(t),
            Self::SteinhartHart(k) => k.ohms_from_celsius(t),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        let [low, high] = self.range_celsius();
        Range::new("lowest temperature of the thermistor", "°C", -273.0, 1000.0).check(low)?;
        Range::new("highest temperature of the thermistor", "°C", low, 1000.0).check(high)?;
        match self {
            Self::Beta(k) => {
                positive("resistance at 25 °C", "ohm", k.r25_ohms)?;
                positive("beta", "K", k.beta_kelvin)
            }
            Self::SteinhartHart(k) => {
                finite("coefficient a", k.a)?;
                positive("coefficient b", "1/K", k.b)?;
                finite("coefficient c", k.c)?;
                // ln R must fall with T all over the range, or the law has no single inverse
                let plain: Law<Dual> = Law::SteinhartHart(SteinhartHart {
                    a: Dual::constant(k.a.value()),
                    b: Dual::constant(k.b.value()),
                    c: Dual::constant(k.c.value()),
                    range_celsius: k.range_celsius,
                });
                for step in 0..=64 {
                    let t = low + (high - low) * f64::from(step) / 64.0;
                    let ohms = plain.ohms_from_celsius(Dual::variable(t));
                    positive("resistance of the thermistor in its range", "ohm", ohms.value)?;
                    positive("fall of the thermistor's resistance per kelvin", "ohm", -ohms.slope)?;
                }
                Ok(())
            }
        }
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Law<S> {
        match self {
            Self::Beta(k) => Law::Beta(Beta {
                r25_ohms: f(Parameter::R25, k.r25_ohms),
                beta_kelvin: f(Parameter::Beta, k.beta_kelvin),
                range_celsius: k.range_celsius,
            }),
            Self::SteinhartHart(k) => Law::SteinhartHart(SteinhartHart {
                a: f(Parameter::SteinhartHartA, k.a),
                b: f(Parameter::SteinhartHartB, k.b),
                c: f(Parameter::SteinhartHartC, k.c),
                range_celsius: k.range_celsius,
            }),
        }
    }
}
