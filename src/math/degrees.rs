//! Cosine and sine of twice an angle in degrees, in twice the working precision.

use super::{Double, Real};

/// π − the nearest double.
const PI_LOW: f64 = 1.224_646_799_147_353_2e-16;

/// Returns (cos 2θ, sin 2θ) of an angle θ in degrees; NaN for an angle that is no number.
///
/// The angle is reduced without rounding, so that both are right to about 1e-31 for every double, at any number of turns,
/// and simple angles give simple numbers: 0, ±½ and ±1 are exact when rounded to a double.
pub(crate) fn double_angle(degrees: f64) -> (Double, Double) {
    // the remainder of two doubles is exact, and so is twice it
    let turn = 2.0 * libm::fmod(degrees, 180.0);
    // whole quarters off: |rest| ≤ 45, exact because the two are within a factor of two of each other
    let quarters = libm::round(turn / 90.0);
    let rest = turn - 90.0 * quarters;
    let pi = Double::from_f64(core::f64::consts::PI) + Double::from_f64(PI_LOW);
    let x = Double::from_f64(rest) * pi / Double::from_f64(180.0);
    let (c, s) = cos_sin(x);
    match quarters as i32 & 3 {
        0 => (c, s),
        1 => (-s, c),
        2 => (-c, -s),
        _ => (s, -c),
    }
}

/// cos x and sin x for |x| ≤ π/4.
fn cos_sin(x: Double) -> (Double, Double) {
    let one = Double::from_f64(1.0);
    let square = x * x;
    // cos x = 1 − x²/(1·2) (1 − x²/(3·4) (1 − …)),  sin x = x (1 − x²/(2·3) (1 − x²/(4·5) (1 − …))), each as one fraction whose
    // denominator is a factorial, exact in 106 bits up to 29!; the first term left out is below (π/4)³⁰/30! = 3e-36
    let (mut c, mut s) = ((one, one), (one, one));
    let step = |(n, d): (Double, Double), integer: f64| {
        let d = d * Double::from_f64(integer);
        (d - square * n, d)
    };
    for k in (1..=14_u8).rev() {
        let n = f64::from(2 * k);
        c = step(c, (n - 1.0) * n);
        s = step(s, n * (n + 1.0));
    }
    (c.0 / c.1, x * s.0 / s.1)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rounded(degrees: f64) -> (f64, f64) {
        let (c, s) = double_angle(degrees);
        (c.value(), s.value())
    }

    #[test]
    fn simple_angles_are_exact() {
        let h = core::f64::consts::FRAC_1_SQRT_2;
        let r = libm::sqrt(3.0) / 2.0;
        for (twice, c, s) in [
            (0.0, 1.0, 0.0),
            (90.0, 0.0, 1.0),
            (180.0, -1.0, 0.0),
            (270.0, 0.0, -1.0),
            (-90.0, 0.0, -1.0),
            (45.0, h, h),
            (135.0, -h, h),
            (60.0, 0.5, r),
            (120.0, -0.5, r),
            (240.0, -0.5, -r),
            (-30.0, r, -0.5),
            (750.0, r, 0.5),
            (-1e6 * 360.0 - 60.0, 0.5, -r),
        ] {
            assert!(rounded(twice / 2.0) == (c, s), "{twice}: {:?}", rounded(twice / 2.0));
        }
    }

    #[test]
    fn any_angle_agrees_with_the_reference_library() {
        let mut d = -400.0;
        while d < 800.0 {
            let (c, s) = rounded(d);
            let x = 2.0 * d * (core::f64::consts::PI / 180.0);
            assert!((c - libm::cos(x)).abs() < 8e-15 && (s - libm::sin(x)).abs() < 8e-15, "{d}");
            d += 0.773;
        }
    }

    #[test]
    fn squares_add_to_one_in_twice_the_precision() {
        let mut d = -90.0;
        while d < 90.0 {
            let (c, s) = double_angle(d);
            let rest = c * c + s * s - Double::from_f64(1.0);
            assert!(rest.value().abs() < 1e-30, "{d}: {:e}", rest.value());
            d += 0.377;
        }
    }

    #[test]
    fn small_angles_keep_their_digits() {
        // sin 2θ = 2θ to 1e-32; a turn of 360 added to them would swallow these
        for d in [1e-20, -1e-20, -1e-300] {
            let s = rounded(d).1;
            assert!((s - 2.0 * d * (core::f64::consts::PI / 180.0)).abs() <= 4e-16 * s.abs(), "{d}: {s:e}");
        }
    }

    #[test]
    fn what_is_no_angle_gives_no_number() {
        for d in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            let (c, s) = rounded(d);
            assert!(c.is_nan() && s.is_nan(), "{d}");
        }
        let (c, s) = rounded(f64::MAX);
        assert!((c * c + s * s - 1.0).abs() < 1e-15);
    }
}
