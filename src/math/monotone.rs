//! Slopes of a piecewise cubic that stays between its points.

use super::Real;

/// Writes the slope at every point of `y` over rising `x`; three slices of one length, at least 2.
///
/// Slopes by the weighted harmonic mean of F. N. Fritsch and J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304; at
/// the ends by the three-point formula, limited so that the curve keeps the sense of the data.
pub(crate) fn slopes<R: Real>(x: &[f64], y: &[R], out: &mut [R]) {
    let zero = R::from_f64(0.0);
    // width and secant of the interval that begins at point i
    let interval = |i: usize| {
        let point = |i: usize| Some((*x.get(i)?, *y.get(i)?));
        let ((x0, y0), (x1, y1)) = (point(i)?, point(i + 1)?);
        Some((x1 - x0, (y1 - y0) / R::from_f64(x1 - x0)))
    };
    for (i, slope) in out.iter_mut().enumerate() {
        let before = i.checked_sub(1).and_then(interval);
        *slope = match (before, interval(i)) {
            (Some((h0, d0)), Some((h1, d1))) => {
                if d0.value() * d1.value() <= 0.0 {
                    zero
                } else {
                    let (w0, w1) = (R::from_f64(2.0 * h1 + h0), R::from_f64(h1 + 2.0 * h0));
                    (w0 + w1) / (w0 / d0 + w1 / d1)
                }
            }
            (None, Some(near)) => interval(i + 1).map_or(near.1, |far| end(near, far)),
            (Some(near), None) => i.checked_sub(2).and_then(interval).map_or(near.1, |far| end(near, far)),
            (None, None) => zero,
        };
    }
}

/// Three-point slope at an end, limited: the near interval first.
fn end<R: Real>((h0, d0): (f64, R), (h1, d1): (f64, R)) -> R {
    let slope = (R::from_f64(2.0 * h0 + h1) * d0 - R::from_f64(h0) * d1) / R::from_f64(h0 + h1);
    if slope.value() * d0.value() <= 0.0 {
        R::from_f64(0.0)
    } else if d0.value() * d1.value() <= 0.0 && slope.value().abs() > 3.0 * d0.value().abs() {
        d0 * R::from_f64(3.0)
    } else {
        slope
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slopes_by_hand() {
        let mut m = [0.0; 3];
        slopes(&[0.0, 1.0, 3.0], &[0.0, 1.0, 5.0], &mut m);
        // secants 1 and 2 over widths 1 and 2: (5 + 4)/(5/1 + 4/2); ends (4·1 − 1·2)/3 and (5·2 − 2·1)/3
        for (got, want) in m.into_iter().zip([2.0 / 3.0, 9.0 / 7.0, 8.0 / 3.0]) {
            assert!((got - want).abs() < 1e-15, "{got} for {want}");
        }
        // a turn is level; an end that would change the sense is level too, and one too steep is cut to three secants
        slopes(&[0.0, 1.0, 2.0], &[0.0, 1.0, 0.0], &mut m);
        assert_eq!(m, [2.0, 0.0, -2.0]);
        slopes(&[0.0, 1.0, 2.0], &[0.0, 1.0, 5.0], &mut m);
        assert_eq!(m[0], 0.0);
        slopes(&[0.0, 1.0, 2.0], &[0.0, 1.0, -9.0], &mut m);
        assert_eq!(m[0], 3.0);
        let mut two = [0.0; 2];
        slopes(&[0.0, 2.0], &[1.0, 0.0], &mut two);
        assert_eq!(two, [-0.5, -0.5]);
    }
}
