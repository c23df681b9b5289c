//! Natural logarithm, exponential and square root, branch-free where a slice loop needs it.
//!
//! `ln` and `exp` follow the published method of FreeBSD's msun (e_log.c, e_exp.c; K. C. Ng, Sun Microsystems 1993,
//! free to use with this notice kept): error below 1 ulp. Written without branches, so that the one form serves scalar
//! and slice with the same bits.

const LN2_HI: f64 = 6.931_471_803_691_238_164_90e-01;
const LN2_LO: f64 = 1.908_214_929_270_587_700_02e-10;

/// Correctly rounded square root; NaN below zero.
#[inline(always)]
pub(crate) fn sqrt(x: f64) -> f64 {
    // Both are correctly rounded; only the std form vectorises.
    #[cfg(feature = "std")]
    {
        x.sqrt()
    }
    #[cfg(not(feature = "std"))]
    {
        libm::sqrt(x)
    }
}

/// Natural logarithm; −∞ at 0, NaN below.
#[inline(always)]
pub(crate) fn ln(x: f64) -> f64 {
    // Subnormal numbers are scaled by 2⁵⁴ first.
    let tiny = x < f64::MIN_POSITIVE;
    let scaled = if tiny { x * 18_014_398_509_481_984.0 } else { x };
    let bias = if tiny { -1023.0 - 54.0 } else { -1023.0 };

    // x = 2ᵏ (1 + f) with √½ ≤ 1 + f < √2
    let bits = scaled.to_bits();
    let high = (bits >> 32) as u32;
    let shifted = high.wrapping_add(0x3ff0_0000 - 0x3fe6_a09e);
    let k = f64::from(shifted >> 20) + bias;
    let mantissa = (shifted & 0x000f_ffff).wrapping_add(0x3fe6_a09e);
    let f = f64::from_bits((u64::from(mantissa) << 32) | (bits & 0xffff_ffff)) - 1.0;

    // ln(1 + f) = f − f²/2 + s (f²/2 + R),  s = f / (2 + f)
    let half_square = 0.5 * f * f;
    let s = f / (2.0 + f);
    let z = s * s;
    let w = z * z;
    let t1 =
        w * (3.999_999_999_940_941_908e-01 + w * (2.222_219_843_214_978_396e-01 + w * 1.531_383_769_920_937_332e-01));
    let t2 = z
        * (6.666_666_666_666_735_130e-01
            + w * (2.857_142_874_366_239_149e-01
                + w * (1.818_357_216_161_805_012e-01 + w * 1.479_819_860_511_658_591e-01)));
    let r = t2 + t1;
    let value = k * LN2_HI - ((half_square - (s * (half_square + r) + k * LN2_LO)) - f);

    let value = if x > 0.0 { value } else { f64::NAN };
    let value = if x == 0.0 { f64::NEG_INFINITY } else { value };
    if x == f64::INFINITY { x } else { value }
}

/// Exponential.
#[inline(always)]
pub(crate) const fn exp(x: f64) -> f64 {
    // Beyond these the result is 0 or ∞ anyway; the clamp keeps the scaling in range and passes NaN on.
    let clamped = if x > 746.0 { 746.0 } else { x };
    let clamped = if clamped < -746.0 { -746.0 } else { clamped };

    // x = k ln 2 + r, |r| ≤ ½ ln 2; adding and taking off 1.5·2⁵² rounds to an integer
    let rounder = 6_755_399_441_055_744.0;
    let shifted = clamped * core::f64::consts::LOG2_E + rounder;
    let k = shifted - rounder;
    let hi = clamped - k * LN2_HI;
    let lo = k * LN2_LO;
    let r = hi - lo;

    // exp r = 1 + r + r c / (2 − c)
    let z = r * r;
    let c = r - z
        * (1.666_666_666_666_660_190_37e-01
            + z * (-2.777_777_777_701_559_338_42e-03
                + z * (6.613_756_321_437_934_361_17e-05
                    + z * (-1.653_390_220_546_525_153_90e-06 + z * 4.138_136_797_057_238_460_39e-08))));
    let y = 1.0 + ((r * c / (2.0 - c) - lo) + hi);

    // times 2ᵏ in two steps, so that neither factor leaves the normal range
    let k_bits = (shifted.to_bits() as u32) as i32;
    let half = k_bits >> 1;
    y * power_of_two(half) * power_of_two(k_bits.wrapping_sub(half))
}

/// 2ᵏ for −1022 ≤ k ≤ 1023.
#[inline(always)]
const fn power_of_two(k: i32) -> f64 {
    f64::from_bits((k.wrapping_add(1023) as u32 as u64) << 52)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn special_values() {
        assert!(ln(f64::NAN).is_nan() && ln(-1.0).is_nan() && ln(f64::NEG_INFINITY).is_nan());
        assert_eq!(ln(0.0), f64::NEG_INFINITY);
        assert_eq!(ln(f64::INFINITY), f64::INFINITY);
        assert_eq!(ln(1.0), 0.0);
        assert!(exp(f64::NAN).is_nan());
        assert_eq!(exp(f64::NEG_INFINITY), 0.0);
        assert_eq!(exp(f64::INFINITY), f64::INFINITY);
        assert_eq!(exp(0.0), 1.0);
    }

    #[test]
    fn within_one_ulp_of_the_reference_library() {
        // oracle: libm 0.2.16, a general-purpose reference; the 50-digit check is tests/accuracy.rs
        let mut x = 1e-310;
        while x < 1e300 {
            let (got, want) = (ln(x), libm::log(x));
            assert!((got - want).abs() <= want.abs() * f64::EPSILON, "ln {x:e}: {got:e} {want:e}");
            x *= 1.37;
        }
        let mut x = -745.0;
        while x < 709.0 {
            let (got, want) = (exp(x), libm::exp(x));
            assert!((got - want).abs() <= want.abs() * f64::EPSILON + 5e-324, "exp {x}: {got:e} {want:e}");
            x += 0.0731;
        }
    }
}
