//! The only numeric helpers: elementary functions, Horner, number types the chain runs over.
//!
//! Everything here gives the same bits on every target: plain IEEE 754 double operations in a fixed order, no fused
//! multiply-add, no platform maths library.

mod degrees;
pub mod distribution;
mod double;
mod dual;
mod elementary;
// what only proofs need
#[cfg(feature = "std")]
mod interval;
mod monotone;
mod real;

pub(crate) use degrees::double_angle;
pub(crate) use double::Double;
pub use dual::Dual;
pub(crate) use elementary::{exp, ln, sqrt};
#[cfg(feature = "std")]
pub use interval::{Interval, Jet};
pub(crate) use monotone::slopes;
pub use real::Real;

/// Most steps that any loop takes which ends when it has arrived.
pub(crate) const MOST_STEPS: usize = 32;

/// Returns `c[0] + c[1] x + c[2] x² + …` by Horner's rule.
#[inline(always)]
pub(crate) fn horner<R: Real, const N: usize>(x: R, coefficients: &[R; N]) -> R {
    let mut sum = R::from_f64(0.0);
    for c in coefficients.iter().rev() {
        sum = sum * x + *c;
    }
    sum
}

/// Returns the coefficients of `p(shift + scale x)`.
pub(crate) fn substitute<R: Real, const N: usize>(p: &[R; N], shift: R, scale: R) -> [R; N] {
    let zero = R::from_f64(0.0);
    let mut out = [zero; N];
    // Horner over polynomials: out ← out · (shift + scale x) + c
    for c in p.iter().rev() {
        let mut carry = zero;
        for o in &mut out {
            let here = *o;
            *o = here * shift + carry;
            carry = here * scale;
        }
        if let Some(first) = out.first_mut() {
            *first = *first + *c;
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn substitution_is_the_polynomial_of_the_line() {
        // (1 + 2 (3 + 4 x) + 5 (3 + 4 x)²) = 52 + 128 x + 80 x², by hand
        assert_eq!(substitute(&[1.0, 2.0, 5.0], 3.0, 4.0), [52.0, 128.0, 80.0]);
    }

    #[test]
    fn horner_reads_lowest_power_first() {
        assert_eq!(horner(2.0, &[1.0, 10.0, 100.0]), 421.0);
    }
}
