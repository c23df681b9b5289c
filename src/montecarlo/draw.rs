//! From uniform numbers to the distributions of inputs.

use core::f64::consts::PI;

use super::philox::uniforms;
use crate::math::{exp, ln, sqrt};
use crate::uncertainty::{Shape, Uncertainty};

/// Returns by how much an input is off in one trial: a draw from its distribution, of mean 0.
///
/// - `seed`, `trial`, `input`: the same three give the same bits always.
///
/// A normal one with finite degrees of freedom is drawn from Student's t, scaled by u: it spreads wider than u.
///
/// # Source
/// JCGM 101:2008, 6.4.2 (rectangular), 6.4.5 (triangular), 6.4.6 (arcsine), 6.4.7 (normal, after Box and Muller), 6.4.9
/// (scaled and shifted t; drawn after R. W. Bailey, Math. Comp. 62 (1994) 779).
#[must_use]
pub fn deviate(uncertainty: &Uncertainty, seed: u64, trial: u64, input: u32) -> f64 {
    let [a, b] = uniforms(seed, trial, input);
    let (standard, shape) = (uncertainty.standard(), uncertainty.shape());
    let half_width = standard * shape.divisor();
    let nu = uncertainty.degrees_of_freedom();
    match shape {
        Shape::Rectangular => half_width * (2.0 * a - 1.0),
        Shape::Triangular => half_width * (a + b - 1.0),
        Shape::Arcsine => half_width * libm::sin(PI * (2.0 * a - 1.0)),
        Shape::Normal if nu.is_finite() => {
            // t = √[ν (a^(−2/ν) − 1)] cos 2π b
            let grown = exp(-2.0 / nu * ln(a));
            standard * sqrt(nu * (grown - 1.0).max(0.0)) * libm::cos(2.0 * PI * b)
        }
        // z = √(−2 ln a) cos 2π b
        Shape::Normal => standard * sqrt(-2.0 * ln(a)) * libm::cos(2.0 * PI * b),
    }
}
