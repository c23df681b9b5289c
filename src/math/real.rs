//! What a number type must offer to run a chain.

use core::ops::{Add, Div, Mul, Neg, Sub};

use super::{exp, horner, ln, sqrt};

/// A number type that a chain can run over: `f64`, or one that carries more than a value.
///
/// Decisions (which branch of a law, which root) are always taken on [`value`](Real::value), so that every number type
/// takes the same path.
pub trait Real:
    Copy
    + core::fmt::Debug
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
{
    /// Returns the exact constant.
    fn from_f64(value: f64) -> Self;
    /// Returns the nearest plain number.
    fn value(self) -> f64;
    /// Returns the square root; NaN below zero.
    #[must_use]
    fn sqrt(self) -> Self;
    /// Returns the natural logarithm; NaN below zero.
    #[must_use]
    fn ln(self) -> Self;
    /// Returns the exponential.
    #[must_use]
    fn exp(self) -> Self;
    /// Returns the root of f₀ + f₁ u + … + f₄ u⁴ beside `near`, its root in plain numbers.
    ///
    /// Three steps of Newton's method, each of which doubles the digits and carries derivatives, unless the number type knows
    /// better.
    #[must_use]
    fn root(f: &[Self; 5], near: f64) -> Self {
        let [_, b, c, d, e] = *f;
        let slope = [b, c * Self::from_f64(2.0), d * Self::from_f64(3.0), e * Self::from_f64(4.0)];
        let newton = |u: Self| u - horner(u, f) / horner(u, &slope);
        newton(newton(newton(Self::from_f64(near))))
    }
}

impl Real for f64 {
    #[inline(always)]
    fn from_f64(value: f64) -> Self {
        value
    }
    #[inline(always)]
    fn value(self) -> f64 {
        self
    }
    #[inline(always)]
    fn sqrt(self) -> Self {
        sqrt(self)
    }
    #[inline(always)]
    fn ln(self) -> Self {
        ln(self)
    }
    #[inline(always)]
    fn exp(self) -> Self {
        exp(self)
    }
}
