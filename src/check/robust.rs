//! Figures that a few wild rows do not move.

use std::vec::Vec;

/// The median; NaN for nothing. What is no number does not count.
pub(super) fn median(values: &[f64]) -> f64 {
    let mut sorted: Vec<f64> = values.iter().copied().filter(|v| v.is_finite()).collect();
    sorted.sort_by(f64::total_cmp);
    let n = sorted.len();
    let at = |i: usize| sorted.get(i).copied().unwrap_or(f64::NAN);
    match n {
        0 => f64::NAN,
        _ if n % 2 == 1 => at(n / 2),
        _ => 0.5 * (at(n / 2 - 1) + at(n / 2)),
    }
}

/// A straight line y = slope · x + offset by medians: the slopes between points half the sorted range apart (Theil's
/// complete pairs), and the median of what is left. `None` where x has no span.
pub(super) fn line(x: &[f64], y: &[f64]) -> Option<(f64, f64)> {
    let mut points: Vec<(f64, f64)> =
        x.iter().copied().zip(y.iter().copied()).filter(|(x, y)| x.is_finite() && y.is_finite()).collect();
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    let half = points.len() / 2;
    let far = points.iter().skip(points.len() - half);
    let slopes: Vec<f64> =
        points.iter().zip(far).filter(|(a, b)| b.0 > a.0).map(|(a, b)| (b.1 - a.1) / (b.0 - a.0)).collect();
    let slope = median(&slopes);
    if !slope.is_finite() {
        return None;
    }
    let rest: Vec<f64> = points.iter().map(|(x, y)| y - slope * x).collect();
    Some((slope, median(&rest)))
}

/// Smallest and largest finite value.
pub(super) fn range(values: &[f64]) -> (f64, f64) {
    values.iter().filter(|v| v.is_finite()).fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(*v), b.max(*v)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn by_hand() {
        assert_eq!(median(&[3.0, f64::NAN, 1.0, 2.0]), 2.0);
        assert_eq!(median(&[4.0, 1.0, 2.0, 3.0]), 2.5);
        assert!(median(&[]).is_nan());
        let x: Vec<f64> = (0..21).map(f64::from).collect();
        let mut y: Vec<f64> = x.iter().map(|x| 3.0 * x - 1.0).collect();
        y[4] = 1e6;
        y[17] = -1e6;
        assert_eq!(line(&x, &y), Some((3.0, -1.0)));
        assert_eq!(line(&[1.0, 1.0], &[2.0, 3.0]), None);
    }
}
