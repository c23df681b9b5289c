//! The laws of a thermistor: beta and Steinhart-Hart equations, and what they have in common with the other forms.

use super::{ICE_KELVIN, Law, LogarithmOfRatio, ReciprocalOfTemperature};
use crate::Error;
use crate::math::{Dual, MOST_STEPS, Real, exp, ln};
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

impl Beta {
    /// Returns the law through two points (°C, Ω): β = ln(R₁/R₂)/(1/T₁ − 1/T₂).
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a temperature at or below −273 °C, a resistance that is not positive,
    /// or two points between which the resistance does not fall.
    /// # Source
    /// The definition of β; ranges of a printed table in tests/thermistor_forms.rs.
    pub fn through(first: [f64; 2], second: [f64; 2], range_celsius: [f64; 2]) -> Result<Self, Error> {
        let ([t1, r1], [t2, r2]) = (first, second);
        for (t, r) in [(t1, r1), (t2, r2)] {
            Range::new("temperature of a point", "°C", -273.0, 1000.0).check(t)?;
            positive("resistance of a point", "ohm", r)?;
        }
        let [k1, k2] = [t1, t2].map(|t| t + ICE_KELVIN);
        // 1/T₁ − 1/T₂ = (t₂ − t₁)/(T₁ T₂)
        let beta_kelvin = ln(r1 / r2) * k1 * k2 / (t2 - t1);
        positive("beta of the two points", "K", beta_kelvin)?;
        let r25_ohms = r1 * exp(beta_kelvin * (t1 - 25.0) / (298.15 * k1));
        Ok(Self { r25_ohms, beta_kelvin, range_celsius })
    }
}

impl<R: Real> SteinhartHart<R> {
    /// 1/T in 1/K at L = ln R.
    pub(crate) fn inverse_kelvin(&self, l: R) -> R {
        self.a + l * (self.b + l * l * self.c)
    }

    fn ohms_from_celsius(&self, t: R) -> R {
        let target = R::from_f64(1.0) / (t + R::from_f64(ICE_KELVIN));
        let plain = SteinhartHart {
            a: self.a.value(),
            b: self.b.value(),
            c: self.c.value(),
            range_celsius: self.range_celsius,
        };
        let (l, _) = plain.log_in_steps(target.value());
        // one more step in the number type of the caller carries what it carries
        let fixed = R::from_f64(l);
        (fixed - (self.inverse_kelvin(fixed) - target) / R::from_f64(plain.slope(l))).exp()
    }
}

/// Most Newton steps forwards from the straight line; a curve that does not arrive with them is refused.
const STEPS: usize = 16;
const _: () = assert!(STEPS <= MOST_STEPS);

impl SteinhartHart {
    /// The L with a + b L + c L³ = 1/T by Newton's method from the straight line (the left side rises all over the checked
    /// range), and the number of steps that it took.
    #[inline]
    fn log_in_steps(&self, target: f64) -> (f64, usize) {
        let mut l = (target - self.a) / self.b;
        let mut steps = 0;
        while steps < STEPS {
            steps += 1;
            let next = l - (self.inverse_kelvin(l) - target) / self.slope(l);
            let done = (next - l).abs() <= 1e-15 * l.abs();
            l = next;
            if done {
                break;
            }
        }
        (l, steps)
    }

    fn slope(&self, l: f64) -> f64 {
        self.b + 3.0 * self.c * l * l
    }
}

impl<R: Real> Law<R> {
    /// Returns the lowest and highest temperature for which the law is used, °C.
    #[must_use]
    pub fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::Beta(k) => k.range_celsius,
            Self::SteinhartHart(k) => k.range_celsius,
            Self::LogarithmOfRatio(k) => k.range_celsius,
            Self::ReciprocalOfTemperature(k) => k.range_celsius,
            Self::Points(k) => k.range_celsius(),
        }
    }

    /// Resistance in Ω at `t` °C; the caller has checked the range.
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        match self {
            Self::Beta(k) => k.ohms_from_celsius(t),
            Self::SteinhartHart(k) => k.ohms_from_celsius(t),
            Self::LogarithmOfRatio(k) => k.ohms_from_celsius(t),
            Self::ReciprocalOfTemperature(k) => k.ohms_from_celsius(t),
            Self::Points(k) => k.ohms_from_celsius(t),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        match self {
            Self::Beta(k) => {
                positive("resistance at 25 °C", "ohm", k.r25_ohms)?;
                positive("beta", "K", k.beta_kelvin)?;
            }
            Self::SteinhartHart(k) => {
                finite("coefficient a", k.a)?;
                positive("coefficient b", "1/K", k.b)?;
                finite("coefficient c", k.c)?;
            }
            Self::LogarithmOfRatio(LogarithmOfRatio { reference_ohms, a, b, c, d, .. })
            | Self::ReciprocalOfTemperature(ReciprocalOfTemperature { reference_ohms, a, b, c, d, .. }) => {
                positive("resistance to which the ratio refers", "ohm", *reference_ohms)?;
                for k in [a, b, c, d] {
                    finite("coefficient of the thermistor", *k)?;
                }
            }
            Self::Points(k) => k.map(|_, r| r.value()).check()?,
        }
        let [low, high] = self.range_celsius();
        Range::new("lowest temperature of the thermistor", "°C", -273.0, 1000.0).check(low)?;
        Range::new("highest temperature of the thermistor", "°C", low, 1000.0).check(high)?;
        // the resistance must fall with T all over the range, and the inverse must arrive
        let still = self.map(&mut |_, v| v.value());
        let mut last = f64::INFINITY;
        let moving = self.map(&mut |_, v| Dual::constant(v.value()));
        for step in 0..=128 {
            let t = low + (high - low) * f64::from(step) / 128.0;
            let ohms = moving.ohms_from_celsius(Dual::variable(t));
            positive("resistance of the thermistor in its range", "ohm", ohms.value)?;
            // a curve through points may lie flat in a point
            if !matches!(self, Self::Points(_)) {
                positive("fall of the thermistor's resistance per kelvin", "ohm", -ohms.slope)?;
            }
            let off = (still.celsius_from_ohms(ohms.value) - t).abs();
            if ohms.value >= last || off.is_nan() || off > 1e-9 {
                return Err(Error::Unfit { what: "the thermistor's curve does not fall steadily over its range" });
            }
            last = ohms.value;
        }
        Ok(())
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
            Self::LogarithmOfRatio(k) => Law::LogarithmOfRatio(k.map(f)),
            Self::ReciprocalOfTemperature(k) => Law::ReciprocalOfTemperature(k.map(f)),
            Self::Points(k) => Law::Points(k.map(|n, r| f(Parameter::ThermistorPoint(n), r))),
        }
    }
}

impl Law {
    /// Temperature in °C at `ohms`; the caller has checked the range.
    #[inline(always)]
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        match self {
            Self::Beta(k) => celsius_from_ohms_beta(k, ohms),
            Self::SteinhartHart(k) => celsius_from_ohms_steinhart_hart(k, ohms),
            Self::LogarithmOfRatio(k) => k.celsius_from_ohms(ohms),
            Self::ReciprocalOfTemperature(k) => k.celsius_from_ohms(ohms),
            Self::Points(k) => k.celsius_from_ohms(ohms),
        }
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;

    #[test]
    fn steps_forwards() {
        // a common 10 kohm curve (from memory), and one whose cubic term is thirty times as large
        for (what, c) in [("common", 8.767_41e-8), ("bent", 3e-6)] {
            let law = SteinhartHart { a: 1.129_148e-3, b: 2.341_25e-4, c, range_celsius: [-80.0, 200.0] };
            let at = |i: i32| 1.0 / (-80.0 + f64::from(i) / 200.0 + ICE_KELVIN);
            let most = (0..=56_000).map(|i| law.log_in_steps(at(i)).1).max();
            std::println!("{what}: {most:?} steps");
            assert!(most < Some(STEPS), "{what}: {most:?}");
        }
    }
}
