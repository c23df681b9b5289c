//! The inverse of the Callendar-Van Dusen equation, made ready for one curve.
//!
//! From 0 °C upwards it is the root of a quadratic. Below, a polynomial that goes through the curve itself comes within
//! 0.01 mK, and one step of Newton's method from there leaves rounding alone.

use super::Coefficients;
use crate::math::{horner, sqrt};

/// Coefficients of the start below 0 °C.
const TERMS: usize = 7;

/// Where the start meets the curve besides 0 °C, as shares of the lowest temperature: the points of Chebyshev for TERMS + 1,
/// stretched so that the first is 0, (cos(π/16) − cos((2 k + 1) π/16))/(cos(π/16) + 1) for k = 1 … 7.
const MEETS: [f64; TERMS] = [
    0.075_382_056_590_340_27,
    0.214_669_934_995_208_92,
    0.396_658_318_375_203_93,
    0.593_641_125_089_532_5,
    0.775_629_508_469_527_3,
    0.914_917_386_874_388_2,
    0.990_299_443_464_736_4,
];

/// What the step may leave, K: a few hundredths of the spacing of numbers near −200.
const LEFT_KELVIN: f64 = 1e-15;

/// Temperatures at which a start is tried.
const TRIED: u32 = 64;

/// A curve with what its inverse needs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Inverse {
    law: Coefficients,
    /// Lowest resistance that has a start, Ω; R₀ where none has.
    lowest_ohms: f64,
    /// q of t ≈ x (q₀ + q₁ x + …) below 0 °C, x = R − R₀ in Ω.
    start: [f64; TERMS],
    /// p of x = t (p₀ + p₁ t + p₂ t² + p₃ t³) below 0 °C.
    rise: [f64; 4],
    /// The coefficients of dx/dt.
    slope: [f64; 4],
}

impl Inverse {
    /// Makes a checked curve ready.
    pub(crate) fn new(law: Coefficients) -> Self {
        let Coefficients { r0_ohms: r0, a, b, c, range_celsius: [low, _] } = law;
        let rise = [r0 * a, r0 * b, r0 * (-100.0 * c), r0 * c];
        let [p0, p1, p2, p3] = rise;
        let slope = [p0, 2.0 * p1, 3.0 * p2, 4.0 * p3];
        let none = Self { law, lowest_ohms: r0, start: [0.0; TERMS], rise, slope };
        if low >= 0.0 {
            return none;
        }
        let with = Self { lowest_ohms: law.ohms_from_celsius(low), start: start(&rise, low), ..none };
        // Newton's step leaves f″/(2 f′) e² of an error e
        let bend = [2.0 * p1, 6.0 * p2, 12.0 * p3];
        let is_near = (0..=TRIED).all(|i| {
            let t = low * f64::from(i) / f64::from(TRIED);
            let x = t * horner(t, &rise);
            let off = x * horner(x, &with.start) - t;
            let left = horner(t, &bend) / (2.0 * horner(t, &slope)) * off * off;
            left.abs() <= LEFT_KELVIN
        });
        if is_near { with } else { none }
    }

    /// The curve.
    pub(crate) const fn law(&self) -> &Coefficients {
        &self.law
    }

    /// Whether the start serves all of the curve's range below 0 °C.
    pub(crate) fn starts_everywhere(&self) -> bool {
        self.lowest_ohms < self.law.r0_ohms || self.law.range_celsius[0] >= 0.0
    }

    /// Temperature in °C at `ohms`; NaN where no temperature has that resistance.
    #[inline(always)]
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        if ohms < self.law.r0_ohms && ohms < self.lowest_ohms { self.beyond(ohms) } else { self.inside(ohms) }
    }

    /// The same where the start serves, bit for bit.
    #[inline(always)]
    pub(crate) fn inside(&self, ohms: f64) -> f64 {
        if ohms < self.law.r0_ohms { self.below_zero(ohms) } else { self.above_zero(ohms) }
    }

    /// The same for each of a slice: most blocks stay on one side of 0 °C.
    #[inline(always)]
    pub(crate) fn each(&self, ohms: &mut [f64]) {
        let r0 = self.law.r0_ohms;
        if !ohms.iter().fold(false, |any, r| any | (*r < r0)) {
            ohms.iter_mut().for_each(|v| *v = self.above_zero(*v));
            return;
        }
        let (mut beyond, mut above) = (false, false);
        for r in &*ohms {
            let lower = *r < r0;
            beyond |= lower & (*r < self.lowest_ohms);
            above |= !lower;
        }
        if beyond {
            ohms.iter_mut().for_each(|v| *v = self.celsius_from_ohms(*v));
        } else if above {
            // both, so that the loop takes several at a time
            ohms.iter_mut().for_each(|v| {
                let (below, above) = (self.below_zero(*v), self.above_zero(*v));
                *v = if *v < r0 { below } else { above };
            });
        } else {
            ohms.iter_mut().for_each(|v| *v = self.below_zero(*v));
        }
    }

    #[inline(always)]
    fn below_zero(&self, ohms: f64) -> f64 {
        let x = ohms - self.law.r0_ohms;
        self.step(x, x * horner(x, &self.start))
    }

    /// One step of Newton's method on t (p₀ + p₁ t + p₂ t² + p₃ t³) − x.
    #[inline(always)]
    fn step(&self, x: f64, t: f64) -> f64 {
        t - (t * horner(t, &self.rise) - x) / horner(t, &self.slope)
    }

    /// The root of B t² + A t − ρ = 0 that is ρ/A for small ρ, ρ = R/R₀ − 1: the temperature from 0 °C upwards.
    #[inline(always)]
    fn above_zero(&self, ohms: f64) -> f64 {
        let Coefficients { r0_ohms, a, b, .. } = self.law;
        let rho = (ohms - r0_ohms) / r0_ohms;
        2.0 * rho / (a + sqrt(a * a + 4.0 * b * rho))
    }

    /// Below the start, where only what is asked for beyond the range comes: from the root of the quadratic, which is off by
    /// 2.4 K at −200 °C, three steps leave less than rounding.
    #[cold]
    fn beyond(&self, ohms: f64) -> f64 {
        let (x, t) = (ohms - self.law.r0_ohms, self.above_zero(ohms));
        self.step(x, self.step(x, self.step(x, t)))
    }
}

/// The polynomial q of degree TERMS − 1 with x q(x) = t where the two are to meet: divided differences, then by powers.
fn start(rise: &[f64; 4], low: f64) -> [f64; TERMS] {
    let x = MEETS.map(|share| {
        let t = low * share;
        t * horner(t, rise)
    });
    let mut differences = [0.0; TERMS];
    for ((d, share), x) in differences.iter_mut().zip(&MEETS).zip(&x) {
        *d = low * share / x;
    }
    let mut leading = [0.0; TERMS];
    for (order, leading) in leading.iter_mut().enumerate() {
        *leading = differences[0];
        let (behind, apart) = (differences, x.iter().zip(x.iter().skip(order + 1)));
        for ((d, behind), (from, to)) in differences.iter_mut().zip(behind.iter().skip(1)).zip(apart) {
            *d = (behind - *d) / (to - from);
        }
    }
    // q = d₀ + (x − x₀) (d₁ + (x − x₁) (…)) from the inside out
    let mut q = [0.0; TERMS];
    for (d, x) in leading.iter().zip(&x).rev() {
        let mut carried = *d;
        for c in &mut q {
            let old = *c;
            *c = carried - x * old;
            carried = old;
        }
    }
    q
}

#[cfg(test)]
mod tests {
    use super::super::{IEC_60751, PUBLISHED};
    use super::*;
    use crate::math::{Double, Real};

    /// How far a temperature is from the root, K: with 30 digits.
    fn off(law: &Coefficients, ohms: f64, celsius: f64) -> f64 {
        let exact = law.map(&mut |_, v| Double::from_f64(v));
        let residual = exact.ohms_from_celsius(Double::from_f64(celsius)) - Double::from_f64(ohms);
        let Coefficients { r0_ohms, a, b, c, .. } = *law;
        let c = if celsius < 0.0 { c } else { 0.0 };
        residual.value() / (r0_ohms * horner(celsius, &[a, 2.0 * b, -300.0 * c, 4.0 * c]))
    }

    /// Most that rounding moves a temperature down to −200 °C, K: half the spacing of the temperature, and four roundings of
    /// 82 Ω, at 0.39 Ω/K or more, of a curve of 100 Ω.
    const ROUNDING: f64 = f64::EPSILON * (64.0 + 2.0 * 82.0 / 0.39);

    #[test]
    fn below_zero_one_step_leaves_rounding_alone() {
        for published in PUBLISHED {
            let law = published.coefficients;
            let inverse = Inverse::new(law);
            assert!(inverse.starts_everywhere());
            for i in 0..=20_000 {
                let ohms = law.r0_ohms + (inverse.lowest_ohms - law.r0_ohms) * f64::from(i) / 20_000.0;
                let (t, three) = (inverse.celsius_from_ohms(ohms), inverse.beyond(ohms));
                assert!(off(&law, ohms, t).abs() < ROUNDING, "{} {ohms}", published.name);
                assert!(off(&law, ohms, three).abs() < ROUNDING, "{} {ohms}", published.name);
            }
        }
    }

    #[test]
    fn beside_zero_the_temperature_keeps_its_digits() {
        let inverse = Inverse::new(IEC_60751);
        assert_eq!(inverse.celsius_from_ohms(100.0), 0.0);
        for ohms_below in [0.1, 1e-3, 1e-5, 1e-8, 1e-11, 1e-13] {
            let ohms = 100.0 - ohms_below;
            // t = ρ/A − B ρ²/A³, and a third term below 3e-9 of it from 0.1 Ω down
            let rho = (ohms - 100.0) / 100.0;
            let near = rho / IEC_60751.a * (1.0 - IEC_60751.b * rho / (IEC_60751.a * IEC_60751.a));
            assert!((inverse.celsius_from_ohms(ohms) / near - 1.0).abs() < 1e-8 * -rho / 1e-3 + 1e-15, "{ohms}");
        }
    }

    #[test]
    fn a_slice_has_the_bits_of_one() {
        let inverse = Inverse::new(IEC_60751);
        let ohms = [18.0, 18.52, 60.0, 99.999, 100.0, 138.5, 390.0, f64::NAN];
        for from in 0..ohms.len() {
            for to in from..=ohms.len() {
                let mut out = ohms;
                let some = &mut out[from..to];
                inverse.each(some);
                for (t, r) in some.iter().zip(&ohms[from..to]) {
                    assert_eq!(t.to_bits(), inverse.celsius_from_ohms(*r).to_bits(), "{r}");
                }
            }
        }
    }

    #[test]
    fn what_has_no_start_takes_three_steps() {
        // below the range, asked for by `extrapolated`
        let cold = Coefficients { range_celsius: [-40.0, 100.0], ..IEC_60751 };
        let inverse = Inverse::new(cold);
        for t in [-41.0, -100.0, -200.0] {
            let ohms = cold.ohms_from_celsius(t);
            assert!(ohms < inverse.lowest_ohms);
            assert!((inverse.celsius_from_ohms(ohms) - t).abs() < 2.0 * ROUNDING);
        }
        // a curve so bent that a polynomial of this degree does not come near enough
        let bent = Coefficients { b: -8e-6, ..IEC_60751 };
        assert!(bent.check().is_err());
        let bent = Coefficients { b: -4e-6, range_celsius: [-200.0, 200.0], ..IEC_60751 };
        bent.check().expect("a curve that rises");
        let inverse = Inverse::new(bent);
        assert!(!inverse.starts_everywhere());
        let ohms = bent.ohms_from_celsius(-150.0);
        assert!((inverse.celsius_from_ohms(ohms) + 150.0).abs() < 2.0 * ROUNDING);
        // and one that holds from 0 °C upwards needs none
        assert!(Inverse::new(Coefficients { range_celsius: [0.0, 100.0], ..bent }).starts_everywhere());
    }
}
