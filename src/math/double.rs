//! Twice the precision, for lowering a chain once: the plan's coefficients are then correctly rounded.

use core::ops::{Add, Div, Mul, Neg, Sub};

use super::{Real, exp, ln, sqrt};

/// An unevaluated sum `hi + lo` with |lo| ≤ ½ ulp(hi): about 106 bits.
///
/// Algorithms after T. J. Dekker, Numer. Math. 18 (1971) 224-242, and D. E. Knuth, The Art of Computer Programming,
/// vol. 2, §4.2.2 (two-sum); no fused multiply-add, so the bits are the same everywhere. Without std the operations stay
/// functions: firmware lowers a chain once, and its code is to be small.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Double {
    hi: f64,
    lo: f64,
}

impl Double {
    /// Returns ten to a power, exact up to 10³⁰ and correct to 106 bits below 1.
    pub(crate) fn power_of_ten(exponent: i8) -> Self {
        let ten = Self::from_f64(10.0);
        let mut product = Self::from_f64(1.0);
        for _ in 0..exponent.unsigned_abs() {
            product = product * ten;
        }
        if exponent < 0 { Self::from_f64(1.0) / product } else { product }
    }
}

/// a + b = sum + error exactly.
fn two_sum(a: f64, b: f64) -> Double {
    let hi = a + b;
    let bb = hi - a;
    Double { hi, lo: (a - (hi - bb)) + (b - bb) }
}

/// The same where |a| ≥ |b|.
fn quick_two_sum(a: f64, b: f64) -> Double {
    let hi = a + b;
    Double { hi, lo: b - (hi - a) }
}

/// a = high + low with at most 26 bits each (Veltkamp).
fn split(a: f64) -> (f64, f64) {
    let t = 134_217_729.0 * a; // 2²⁷ + 1
    let high = t - (t - a);
    (high, a - high)
}

/// a · b = product + error exactly.
fn two_product(a: f64, b: f64) -> Double {
    let hi = a * b;
    let (ah, al) = split(a);
    let (bh, bl) = split(b);
    Double { hi, lo: ((ah * bh - hi) + ah * bl + al * bh) + al * bl }
}

impl Add for Double {
    type Output = Self;
    #[cfg_attr(not(feature = "std"), inline(never))]
    fn add(self, o: Self) -> Self {
        let s = two_sum(self.hi, o.hi);
        let t = two_sum(self.lo, o.lo);
        let s = quick_two_sum(s.hi, s.lo + t.hi);
        quick_two_sum(s.hi, s.lo + t.lo)
    }
}

impl Neg for Double {
    type Output = Self;
    fn neg(self) -> Self {
        Self { hi: -self.hi, lo: -self.lo }
    }
}

impl Sub for Double {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        self + -o
    }
}

impl Mul for Double {
    type Output = Self;
    #[cfg_attr(not(feature = "std"), inline(never))]
    fn mul(self, o: Self) -> Self {
        let p = two_product(self.hi, o.hi);
        quick_two_sum(p.hi, p.lo + (self.hi * o.lo + self.lo * o.hi))
    }
}

impl Div for Double {
    type Output = Self;
    #[cfg_attr(not(feature = "std"), inline(never))]
    fn div(self, o: Self) -> Self {
        let q1 = self.hi / o.hi;
        if !q1.is_finite() {
            return Self::from_f64(q1);
        }
        let r = self - o * Self::from_f64(q1);
        let q2 = r.hi / o.hi;
        let r = r - o * Self::from_f64(q2);
        let q3 = r.hi / o.hi;
        quick_two_sum(q1, q2) + Self::from_f64(q3)
    }
}

impl Real for Double {
    fn from_f64(value: f64) -> Self {
        Self { hi: value, lo: 0.0 }
    }
    fn value(self) -> f64 {
        self.hi
    }
    fn sqrt(self) -> Self {
        let root = Self::from_f64(sqrt(self.hi));
        if root.hi == 0.0 {
            return root;
        }
        // one Newton step doubles the bits
        root + (self - root * root) / (root + root)
    }
    fn ln(self) -> Self {
        Self { hi: ln(self.hi), lo: self.lo / self.hi }
    }
    fn exp(self) -> Self {
        let value = exp(self.hi);
        Self { hi: value, lo: value * self.lo }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn d(v: f64) -> Double {
        Double::from_f64(v)
    }

    #[test]
    fn a_third_times_three_is_one_to_100_bits() {
        let back = d(1.0) / d(3.0) * d(3.0) - d(1.0);
        assert!(back.hi.abs() < 1e-31, "{back:?}");
    }

    #[test]
    fn products_keep_what_rounding_loses() {
        // (1 + 2⁻³⁰)² = 1 + 2⁻²⁹ + 2⁻⁶⁰
        let small = 1.0 / (1_u64 << 30) as f64;
        let x = d(1.0 + small);
        let rest = x * x - d(1.0) - d(2.0 * small);
        assert_eq!(rest.value(), small * small);
    }

    #[test]
    fn sqrt_of_two_squares_back() {
        let r = d(2.0).sqrt();
        assert!((r * r - d(2.0)).hi.abs() < 1e-30);
    }

    #[test]
    fn powers_of_ten_round_to_the_literals() {
        for (e, v) in [(-6, 1e-6), (-3, 1e-3), (0, 1.0), (3, 1e3), (6, 1e6)] {
            assert_eq!(Double::power_of_ten(e).value(), v);
        }
    }
}
