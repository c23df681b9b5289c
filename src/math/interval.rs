//! Numbers that hold everything a result can be: intervals, and intervals with two derivatives.

use core::ops::{Add, Div, Mul, Neg, Sub};

use super::{Real, exp, horner, ln, sqrt};

/// All numbers between two ends, both included.
///
/// Every operation gives an interval that holds the exact result for all numbers of its operands: the ends are computed to
/// the nearest double and moved outward by one (by 2⁻⁵⁰ of themselves for logarithm and exponential, whose error is below one
/// unit in the last place). What cannot be enclosed, such as a quotient by an interval that holds 0, is [`ALL`](Self::ALL).
///
/// Decisions of the chain are taken on the middle, so that whoever runs a chain over intervals must keep its arguments on one
/// side of every decision.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    low: f64,
    high: f64,
}

/// Share by which an elementary function is widened: four units in the last place where one is claimed.
const ELEMENTARY: f64 = 1.0 / (1_u64 << 50) as f64;

impl Interval {
    /// Every number.
    pub const ALL: Self = Self { low: f64::NEG_INFINITY, high: f64::INFINITY };
    /// Exactly 0.
    pub const ZERO: Self = Self { low: 0.0, high: 0.0 };

    /// Returns the interval that holds this number alone.
    #[must_use]
    pub const fn point(value: f64) -> Self {
        Self { low: value, high: value }
    }

    /// Returns the numbers between two, in either order; every number where one of them is NaN.
    #[must_use]
    pub fn between(a: f64, b: f64) -> Self {
        if a.is_nan() || b.is_nan() { Self::ALL } else { Self { low: a.min(b), high: a.max(b) } }
    }

    /// Returns the lowest number.
    #[must_use]
    pub const fn low(self) -> f64 {
        self.low
    }

    /// Returns the highest number.
    #[must_use]
    pub const fn high(self) -> f64 {
        self.high
    }

    /// Returns whether it holds this number.
    #[must_use]
    pub fn holds(self, value: f64) -> bool {
        value >= self.low && value <= self.high
    }

    /// Returns the smallest interval that holds both.
    #[must_use]
    pub fn hull(self, o: Self) -> Self {
        Self { low: self.low.min(o.low), high: self.high.max(o.high) }
    }

    /// Returns the largest absolute value.
    #[must_use]
    pub fn most(self) -> f64 {
        self.low.abs().max(self.high.abs())
    }

    /// Returns the smallest absolute value: 0 where the interval holds 0.
    #[must_use]
    pub fn least(self) -> f64 {
        if self.low > 0.0 {
            self.low
        } else if self.high < 0.0 {
            -self.high
        } else {
            0.0
        }
    }

    /// Returns the interval of all squares.
    #[must_use]
    pub fn square(self) -> Self {
        if self.is_zero() {
            return self;
        }
        let (least, most) = (self.least(), self.most());
        Self::outward(least * least, most * most).not_negative()
    }

    fn is_zero(self) -> bool {
        self.low == 0.0 && self.high == 0.0
    }

    /// Both ends moved to the next double.
    fn outward(low: f64, high: f64) -> Self {
        if low.is_nan() || high.is_nan() { Self::ALL } else { Self { low: low.next_down(), high: high.next_up() } }
    }

    fn not_negative(self) -> Self {
        Self { low: self.low.max(0.0), high: self.high }
    }

    /// Both ends moved by the error of an elementary function.
    fn elementary(low: f64, high: f64) -> Self {
        Self::outward(low - low.abs() * ELEMENTARY, high + high.abs() * ELEMENTARY)
    }

    fn of_four(a: f64, b: f64, c: f64, d: f64) -> Self {
        if a.is_nan() || b.is_nan() || c.is_nan() || d.is_nan() {
            return Self::ALL;
        }
        Self::outward(a.min(b).min(c.min(d)), a.max(b).max(c.max(d)))
    }
}

impl Add for Interval {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        if self.is_zero() {
            return o;
        }
        if o.is_zero() {
            return self;
        }
        Self::outward(self.low + o.low, self.high + o.high)
    }
}

impl Neg for Interval {
    type Output = Self;
    fn neg(self) -> Self {
        Self { low: -self.high, high: -self.low }
    }
}

impl Sub for Interval {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        self + -o
    }
}

impl Mul for Interval {
    type Output = Self;
    fn mul(self, o: Self) -> Self {
        if self.is_zero() || o.is_zero() {
            return Self::ZERO;
        }
        Self::of_four(self.low * o.low, self.low * o.high, self.high * o.low, self.high * o.high)
    }
}

impl Div for Interval {
    type Output = Self;
    fn div(self, o: Self) -> Self {
        if o.least() == 0.0 {
            return Self::ALL;
        }
        if self.is_zero() {
            return self;
        }
        Self::of_four(self.low / o.low, self.low / o.high, self.high / o.low, self.high / o.high)
    }
}

impl Real for Interval {
    fn from_f64(value: f64) -> Self {
        if value.is_nan() { Self::ALL } else { Self::point(value) }
    }
    /// The middle; NaN of every number.
    fn value(self) -> f64 {
        0.5 * self.low + 0.5 * self.high
    }
    fn sqrt(self) -> Self {
        // also where an end is NaN
        if self.low >= 0.0 { Self::outward(sqrt(self.low), sqrt(self.high)).not_negative() } else { Self::ALL }
    }
    fn ln(self) -> Self {
        if self.low > 0.0 { Self::elementary(ln(self.low), ln(self.high)) } else { Self::ALL }
    }
    fn exp(self) -> Self {
        Self::elementary(exp(self.low), exp(self.high)).not_negative()
    }

    /// The root that is proven to lie beside `near`; every number where none can be proven.
    fn root(f: &[Self; 5], near: f64) -> Self {
        let [_, b, c, d, e] = *f;
        let slope = |u: Self| {
            let times = |n: f64| Self::point(n);
            horner(u, &[b, c * times(2.0), d * times(3.0), e * times(4.0)])
        };
        let at = Self::from_f64(near);
        let here = horner(at, f);
        let step = here / slope(at);
        let mut reach = 4.0 * step.most() + 1e-14 * near.abs() + f64::MIN_POSITIVE;
        for _ in 0..8 {
            // Newton's operator maps what holds a root into itself, and then there is just one
            let all = Self::between((near - reach).next_down(), (near + reach).next_up());
            let next = at - here / slope(all);
            if next.low > all.low && next.high < all.high {
                return next;
            }
            reach *= 8.0;
        }
        Self::ALL
    }
}

/// A function over an interval of its argument: all its values there, and all values of its first two derivatives.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Jet {
    /// The values.
    pub value: Interval,
    /// The first derivative.
    pub slope: Interval,
    /// The second derivative.
    pub bend: Interval,
}

impl Jet {
    /// Returns what does not depend on the argument.
    #[must_use]
    pub const fn constant(value: Interval) -> Self {
        Self { value, slope: Interval::ZERO, bend: Interval::ZERO }
    }

    /// Returns the argument itself.
    #[must_use]
    pub const fn variable(value: Interval) -> Self {
        Self { value, slope: Interval::point(1.0), bend: Interval::ZERO }
    }

    /// Returns what holds both.
    #[must_use]
    pub fn hull(self, o: Self) -> Self {
        Self { value: self.value.hull(o.value), slope: self.slope.hull(o.slope), bend: self.bend.hull(o.bend) }
    }

    fn is_constant(self) -> bool {
        self.slope.is_zero() && self.bend.is_zero()
    }
}

impl Add for Jet {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        Self { value: self.value + o.value, slope: self.slope + o.slope, bend: self.bend + o.bend }
    }
}

impl Sub for Jet {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        Self { value: self.value - o.value, slope: self.slope - o.slope, bend: self.bend - o.bend }
    }
}

impl Neg for Jet {
    type Output = Self;
    fn neg(self) -> Self {
        Self { value: -self.value, slope: -self.slope, bend: -self.bend }
    }
}

impl Mul for Jet {
    type Output = Self;
    fn mul(self, o: Self) -> Self {
        // (u v)″ = u″ v + 2 u′ v′ + u v″
        let both = self.slope * o.slope;
        Self {
            value: self.value * o.value,
            slope: self.slope * o.value + self.value * o.slope,
            bend: self.bend * o.value + (both + both) + self.value * o.bend,
        }
    }
}

impl Div for Jet {
    type Output = Self;
    fn div(self, o: Self) -> Self {
        // w = u/v: w′ = (u′ − w v′)/v, w″ = (u″ − 2 w′ v′ − w v″)/v
        let value = self.value / o.value;
        let slope = (self.slope - value * o.slope) / o.value;
        let both = slope * o.slope;
        Self { value, slope, bend: (self.bend - (both + both) - value * o.bend) / o.value }
    }
}

impl Real for Jet {
    fn from_f64(value: f64) -> Self {
        Self::constant(Interval::from_f64(value))
    }
    fn value(self) -> f64 {
        self.value.value()
    }
    fn sqrt(self) -> Self {
        // w = √u: w′ = u′/(2 w), w″ = (u″ − 2 w′²)/(2 w)
        let value = self.value.sqrt();
        let twice = value + value;
        let slope = self.slope / twice;
        let square = slope.square();
        Self { value, slope, bend: (self.bend - (square + square)) / twice }
    }
    fn ln(self) -> Self {
        // w = ln u: w′ = u′/u, w″ = u″/u − w′²
        let slope = self.slope / self.value;
        Self { value: self.value.ln(), slope, bend: self.bend / self.value - slope.square() }
    }
    fn exp(self) -> Self {
        // w = exp u: w′ = w u′, w″ = w (u″ + u′²)
        let value = self.value.exp();
        Self { value, slope: value * self.slope, bend: value * (self.bend + self.slope.square()) }
    }
    /// The root of constants; every number for coefficients that are none.
    fn root(f: &[Self; 5], near: f64) -> Self {
        let still = f.iter().all(|c| c.is_constant());
        Self::constant(if still { Interval::root(&f.map(|c| c.value), near) } else { Interval::ALL })
    }
}
