//! A number type of twice the precision, to run a chain at about 30 digits: exact inputs for the oracle's initial
//! unbalance, and finite differences that prove derivatives. Independent of the type of the library.

use std::ops::{Add, Div, Mul, Neg, Sub};

use ohmwright::chain::Real;

/// hi + lo with |lo| at most half a unit of the last place of hi.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Twofold {
    /// The nearest double.
    pub hi: f64,
    /// The rest.
    pub lo: f64,
}

/// ln 2 to 32 digits.
const LN_2: Twofold = Twofold { hi: std::f64::consts::LN_2, lo: 2.319_046_813_846_299_6e-17 };

impl Twofold {
    /// The exact number.
    pub const fn new(hi: f64) -> Self {
        Self { hi, lo: 0.0 }
    }

    /// a + b exactly (D. E. Knuth, The Art of Computer Programming, vol. 2, §4.2.2).
    fn sum(a: f64, b: f64) -> Self {
        let hi = a + b;
        let bb = hi - a;
        Self { hi, lo: (a - (hi - bb)) + (b - bb) }
    }

    /// a b exactly (T. J. Dekker, Numer. Math. 18 (1971) 224-242).
    fn product(a: f64, b: f64) -> Self {
        let split = |x: f64| {
            let t = 134_217_729.0 * x;
            let high = t - (t - x);
            (high, x - high)
        };
        let hi = a * b;
        let ((ah, al), (bh, bl)) = (split(a), split(b));
        Self { hi, lo: ((ah * bh - hi) + ah * bl + al * bh) + al * bl }
    }

    /// Multiplies by a power of two.
    fn scaled(self, k: i32) -> Self {
        let power = f64::from_bits(((k + 1023) as u64) << 52);
        Self { hi: self.hi * power, lo: self.lo * power }
    }
}

impl Add for Twofold {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        let s = Self::sum(self.hi, o.hi);
        let t = Self::sum(self.lo, o.lo);
        let s = Self::sum(s.hi, s.lo + t.hi);
        Self::sum(s.hi, s.lo + t.lo)
    }
}

impl Neg for Twofold {
    type Output = Self;
    fn neg(self) -> Self {
        Self { hi: -self.hi, lo: -self.lo }
    }
}

impl Sub for Twofold {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        self + -o
    }
}

impl Mul for Twofold {
    type Output = Self;
    fn mul(self, o: Self) -> Self {
        let p = Self::product(self.hi, o.hi);
        Self::sum(p.hi, p.lo + (self.hi * o.lo + self.lo * o.hi))
    }
}

impl Div for Twofold {
    type Output = Self;
    fn div(self, o: Self) -> Self {
        // three quotient digits, as by hand
        let q1 = self.hi / o.hi;
        let r = self - o * Self::new(q1);
        let q2 = r.hi / o.hi;
        let r = r - o * Self::new(q2);
        Self::sum(q1, q2) + Self::new(r.hi / o.hi)
    }
}

impl Real for Twofold {
    fn from_f64(value: f64) -> Self {
        Self::new(value)
    }
    fn value(self) -> f64 {
        self.hi
    }
    fn sqrt(self) -> Self {
        let root = Self::new(self.hi.sqrt());
        root + (self - root * root) / (root + root)
    }
    fn ln(self) -> Self {
        // one Newton step on e^y = x doubles the digits
        let y = Self::new(libm::log(self.hi));
        y + self * (-y).exp() - Self::new(1.0)
    }
    fn exp(self) -> Self {
        // x = k ln 2 + r, then (Taylor series of e^(r/256))^256
        let k = (self.hi / LN_2.hi).round();
        let r = (self - LN_2 * Self::new(k)).scaled(-8);
        let mut sum = Self::new(1.0);
        for n in (1..=14).rev() {
            sum = Self::new(1.0) + sum * r / Self::new(f64::from(n));
        }
        for _ in 0..8 {
            sum = sum * sum;
        }
        sum.scaled(k as i32)
    }
}
