//! A value with its derivative in one direction.

use core::ops::{Add, Div, Mul, Neg, Sub};

use super::{Real, exp, ln, sqrt};

/// A value and its derivative with respect to whatever was seeded with slope 1 (forward differentiation, exact to
/// rounding).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Dual {
    /// The value.
    pub value: f64,
    /// The derivative.
    pub slope: f64,
}

impl Dual {
    /// Returns a constant: slope 0.
    #[must_use]
    pub const fn constant(value: f64) -> Self {
        Self { value, slope: 0.0 }
    }

    /// Returns the variable that derivatives are taken with respect to: slope 1.
    #[must_use]
    pub const fn variable(value: f64) -> Self {
        Self { value, slope: 1.0 }
    }
}

impl Add for Dual {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        Self { value: self.value + o.value, slope: self.slope + o.slope }
    }
}

impl Sub for Dual {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        Self { value: self.value - o.value, slope: self.slope - o.slope }
    }
}

impl Mul for Dual {
    type Output = Self;
    fn mul(self, o: Self) -> Self {
        // (u v)' = u' v + u v'
        Self { value: self.value * o.value, slope: self.slope * o.value + self.value * o.slope }
    }
}

impl Div for Dual {
    type Output = Self;
    fn div(self, o: Self) -> Self {
        // (u / v)' = (u' − (u / v) v') / v
        let value = self.value / o.value;
        Self { value, slope: (self.slope - value * o.slope) / o.value }
    }
}

impl Neg for Dual {
    type Output = Self;
    fn neg(self) -> Self {
        Self { value: -self.value, slope: -self.slope }
    }
}

impl Real for Dual {
    fn from_f64(value: f64) -> Self {
        Self::constant(value)
    }
    fn value(self) -> f64 {
        self.value
    }
    fn sqrt(self) -> Self {
        let root = sqrt(self.value);
        Self { value: root, slope: self.slope / (2.0 * root) }
    }
    fn ln(self) -> Self {
        Self { value: ln(self.value), slope: self.slope / self.value }
    }
    fn exp(self) -> Self {
        let value = exp(self.value);
        Self { value, slope: self.slope * value }
    }
}
