//! How likely a result is off by so much, by the distribution that decides.

use super::{Combined, Family};
use crate::math::distribution::{normal_probability, student_probability};
use crate::math::{exp, sqrt};

/// Below this share of the larger one the smaller rectangle is left to the normal rest: it cancels in the formula of the two.
const TINY: f64 = 1e-5;

impl Combined {
    /// Returns the probability that the true value exceeds the estimate by no more than `x`.
    ///
    /// The two largest rectangular contributions count as they are, all others together as one normal distribution. Where few
    /// degrees of freedom are behind `standard` and no rectangular contribution decides, it is Student's t.
    ///
    /// - `x`: in the unit of `standard`; ±∞ gives 1 and 0.
    ///
    /// # Source
    /// The convolution of two rectangles and a normal distribution, in closed form by its integrals; checked in
    /// tests/uncertainty.rs.
    #[must_use]
    pub fn probability_below(&self, x: f64) -> f64 {
        if x.is_infinite() {
            return if x > 0.0 { 1.0 } else { 0.0 };
        }
        if let (Family::Normal, Some(whole)) = (self.family, self.whole_freedom()) {
            return student_probability(x / self.standard, whole);
        }
        let [first, second] = self.rectangular;
        if first <= 0.0 {
            return normal_probability(x / self.standard);
        }
        // the lower tail keeps its digits
        let lower = self.tail(-x.abs(), first, second).clamp(0.0, 0.5);
        if x > 0.0 { 1.0 - lower } else { lower }
    }

    /// The probability below x ≤ 0 with rectangles of these standard uncertainties.
    fn tail(&self, x: f64, first: f64, second: f64) -> f64 {
        let whole = self.standard * self.standard;
        let (a, b) = (sqrt(3.0) * first, sqrt(3.0) * second);
        if b <= TINY * a {
            // F = [I₁(x + a) − I₁(x − a)] / 2a
            let rest = sqrt((whole - first * first).max(0.0));
            return (once(x + a, rest) - once(x - a, rest)) / (2.0 * a);
        }
        // F = [I₂(x + a + b) − I₂(x + a − b) − I₂(x − a + b) + I₂(x − a − b)] / 4ab
        let rest = sqrt((whole - first * first - second * second).max(0.0));
        let upper = twice(x + a + b, rest) - twice(x + a - b, rest);
        let lower = twice(x - a + b, rest) - twice(x - a - b, rest);
        (upper - lower) / (4.0 * a * b)
    }
}

/// I₁, the integral of the normal distribution of deviation s up to x.
fn once(x: f64, s: f64) -> f64 {
    if s <= 0.0 {
        return x.max(0.0);
    }
    // x Φ(x/s) + s φ(x/s)
    let z = x / s;
    x * normal_probability(z) + s * density(z)
}

/// I₂, the integral of I₁.
fn twice(x: f64, s: f64) -> f64 {
    if s <= 0.0 {
        return 0.5 * x.max(0.0) * x.max(0.0);
    }
    // ½ [(x² + s²) Φ(x/s) + x s φ(x/s)]
    let z = x / s;
    0.5 * ((x * x + s * s) * normal_probability(z) + x * s * density(z))
}

fn density(z: f64) -> f64 {
    exp(-0.5 * z * z) * 0.398_942_280_401_432_7
}
