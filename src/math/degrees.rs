//! Sine and cosine of an angle in degrees, exact where they are simple.

/// Returns (cos, sin) of an angle in degrees: the angle is reduced exactly, so that multiples of 30° and 45° give the
/// nearest double and the four quarters give 0 and ±1.
pub(crate) fn cos_sin_degrees(degrees: f64) -> (f64, f64) {
    // the remainder of two doubles is exact
    let turn = libm::fmod(degrees, 360.0);
    let turn = if turn < 0.0 { turn + 360.0 } else { turn };
    // whole quarters off, then an angle in [−45°, 45°]
    let quarters = libm::floor(turn / 90.0 + 0.5);
    let rest = turn - 90.0 * quarters;
    let (c, s) = if rest.abs() == 30.0 {
        (libm::sqrt(3.0) / 2.0, if rest < 0.0 { -0.5 } else { 0.5 })
    } else if rest.abs() == 45.0 {
        let h = core::f64::consts::FRAC_1_SQRT_2;
        (h, if rest < 0.0 { -h } else { h })
    } else {
        let radians = rest * (core::f64::consts::PI / 180.0);
        (libm::cos(radians), libm::sin(radians))
    };
    match quarters as i32 & 3 {
        0 => (c, s),
        1 => (-s, c),
        2 => (-c, -s),
        _ => (s, -c),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn simple_angles_are_exact() {
        let h = core::f64::consts::FRAC_1_SQRT_2;
        let r = libm::sqrt(3.0) / 2.0;
        for (degrees, c, s) in [
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
        ] {
            let (cc, ss) = cos_sin_degrees(degrees);
            assert!((cc, ss) == (c, s), "{degrees}: {cc} {ss}");
        }
    }

    #[test]
    fn any_angle_agrees_with_the_reference_library() {
        let mut d = -400.0;
        while d < 800.0 {
            let (c, s) = cos_sin_degrees(d);
            let x = d * (core::f64::consts::PI / 180.0);
            assert!((c - libm::cos(x)).abs() < 4e-15 && (s - libm::sin(x)).abs() < 4e-15, "{d}");
            d += 0.773;
        }
    }
}
