//! The two four-term forms in which thermistor makers publish a curve. They are separate fits, never exact inverses of
//! each other: each is inverted for itself.

use super::ICE_KELVIN;
use crate::math::{MOST_STEPS, Real, horner, ln};
use crate::parameter::Parameter;

/// ln(R/R_ref) = A + B/T + C/T² + D/T³, T in K.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct LogarithmOfRatio<R = f64> {
    /// Resistance to which the ratio refers, mostly that at 25 °C, Ω.
    pub reference_ohms: R,
    /// A.
    pub a: R,
    /// B, K.
    pub b: R,
    /// C, K².
    pub c: R,
    /// D, K³.
    pub d: R,
    /// Lowest and highest temperature for which the form holds, °C.
    pub range_celsius: [f64; 2],
}

/// 1/T = a + b L + c L² + d L³, L = ln(R/R_ref), T in K.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct ReciprocalOfTemperature<R = f64> {
    /// Resistance to which the ratio refers, mostly that at 25 °C, Ω.
    pub reference_ohms: R,
    /// a, 1/K.
    pub a: R,
    /// b, 1/K.
    pub b: R,
    /// c, 1/K.
    pub c: R,
    /// d, 1/K.
    pub d: R,
    /// Lowest and highest temperature for which the form holds, °C.
    pub range_celsius: [f64; 2],
}

/// A relative step of the inverse after which rounding is left.
const LAST_STEP: f64 = 1e-8;

/// Most Newton steps of both inverses from the straight line; a curve that does not arrive with them is refused.
const STEPS: usize = 8;
const _: () = assert!(STEPS <= MOST_STEPS);

/// x with k₀ + k₁ x + k₂ x² + k₃ x³ = y.
#[inline]
fn cubic_root(k: [f64; 4], y: f64) -> f64 {
    root_in_steps(k, y).0
}

/// The same with the number of Newton steps that it took.
#[inline]
fn root_in_steps(k: [f64; 4], y: f64) -> (f64, usize) {
    let [k0, k1, k2, k3] = k;
    let mut x = (y - k0) / k1;
    let mut steps = 0;
    while steps < STEPS {
        steps += 1;
        let step = (horner(x, &k) - y) / (k1 + x * (2.0 * k2 + x * 3.0 * k3));
        x -= step;
        // Newton's steps double the digits: after one this small, rounding is left
        if step.abs() <= LAST_STEP * x.abs() {
            break;
        }
    }
    (x, steps)
}

/// The reference and the four terms over another number type.
fn mapped<R: Real, S: Real>(reference: R, terms: [R; 4], f: &mut impl FnMut(Parameter, R) -> S) -> (S, [S; 4]) {
    let reference = f(Parameter::ThermistorReference, reference);
    let mut n = 0;
    (
        reference,
        terms.map(|term| {
            n += 1;
            f(Parameter::ThermistorTerm(n), term)
        }),
    )
}

impl<R: Real> LogarithmOfRatio<R> {
    pub(super) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> LogarithmOfRatio<S> {
        let (reference_ohms, [a, b, c, d]) = mapped(self.reference_ohms, [self.a, self.b, self.c, self.d], f);
        LogarithmOfRatio { reference_ohms, a, b, c, d, range_celsius: self.range_celsius }
    }

    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        let reciprocal = R::from_f64(1.0) / (t + R::from_f64(ICE_KELVIN));
        self.reference_ohms * horner(reciprocal, &[self.a, self.b, self.c, self.d]).exp()
    }
}

impl LogarithmOfRatio {
    /// Temperature in °C at `ohms`; the caller has checked the range.
    #[inline]
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        1.0 / cubic_root([self.a, self.b, self.c, self.d], ln(ohms / self.reference_ohms)) - ICE_KELVIN
    }
}

impl ReciprocalOfTemperature {
    /// Temperature in °C at `ohms`; the caller has checked the range.
    #[inline]
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        1.0 / horner(ln(ohms / self.reference_ohms), &[self.a, self.b, self.c, self.d]) - ICE_KELVIN
    }
}

impl<R: Real> ReciprocalOfTemperature<R> {
    pub(super) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> ReciprocalOfTemperature<S> {
        let (reference_ohms, [a, b, c, d]) = mapped(self.reference_ohms, [self.a, self.b, self.c, self.d], f);
        ReciprocalOfTemperature { reference_ohms, a, b, c, d, range_celsius: self.range_celsius }
    }

    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        let target = R::from_f64(1.0) / (t + R::from_f64(ICE_KELVIN));
        let k = [self.a, self.b, self.c, self.d];
        let [_, k1, k2, k3] = k.map(Real::value);
        let x = cubic_root(k.map(Real::value), target.value());
        // one more step in the number type of the caller carries what it carries
        let slope = R::from_f64(k1 + x * (2.0 * k2 + x * 3.0 * k3));
        let fixed = R::from_f64(x);
        self.reference_ohms * (fixed - (horner(fixed, &k) - target) / slope).exp()
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;

    #[test]
    fn steps_of_both_inverses() {
        // as printed over data/temperature/thermistor_material1_table.csv, and bent three times as much
        for (what, k) in [
            ("logarithm of ratio", [-1.4195756e1, 4.4074785e3, -5.1658730e3, -1.4017368e7]),
            ("more bent", [-1.4195756e1, 4.4074785e3, -1.5497619e4, -4.2052104e7]),
        ] {
            let of = |t: f64| horner(1.0 / (t + ICE_KELVIN), &k);
            let most = (0..=41_000).map(|i| root_in_steps(k, of(-60.0 + f64::from(i) / 200.0)).1).max();
            std::println!("{what}: {most:?} steps");
            assert!(most < Some(STEPS), "{what}: {most:?}");
        }
        let k = [3.3539438e-3, 2.5646095e-4, 2.5158166e-6, 1.0503069e-7];
        let most = (0..=41_000).map(|i| root_in_steps(k, 1.0 / (-60.0 + f64::from(i) / 200.0 + ICE_KELVIN)).1).max();
        std::println!("reciprocal of temperature, forwards: {most:?} steps");
        assert!(most < Some(STEPS), "{most:?}");
    }
}
