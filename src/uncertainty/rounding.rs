//! How figures of a budget are rounded for print; nothing that is computed further is rounded.

/// Returns how many decimals show two significant digits of an uncertainty; below zero for tens and hundreds.
///
/// The rule (JCGM 100:2008 7.2.6): an uncertainty is given to two significant digits, rounded to the nearest; the estimate to
/// the same place. With two digits, rounding takes less than 5 % off (EA-4/02 M:2022, 6.3, asks to round up otherwise).
///
/// - `uncertainty`: above 0 and finite; anything else gives `None`.
///
/// # Example
/// ```
/// use ohmwright::uncertainty::{decimals, rounded};
///
/// assert_eq!(decimals(0.0296), Some(3));
/// assert_eq!(decimals(0.0996), Some(2)); // 0.10
/// assert_eq!(decimals(1234.0), Some(-2));
/// // JCGM 100:2008 7.2.6: 10.057 62 Ω with u = 27 mΩ is 10.058 Ω
/// assert_eq!(rounded(10.05762, decimals(0.027).unwrap()), 10.058);
/// ```
#[must_use]
pub fn decimals(uncertainty: f64) -> Option<i32> {
    if !(uncertainty > 0.0 && uncertainty.is_finite()) {
        return None;
    }
    let mut places = 1 - libm::floor(libm::log10(uncertainty)) as i32;
    // two digits before the point of the scaled value: 10 ≤ u · 10^places < 99.5, whatever the logarithm rounded to
    for _ in 0..3 {
        let digits = rounded_scaled(uncertainty, places);
        if digits >= 100.0 {
            places -= 1;
        } else if digits < 10.0 {
            places += 1;
        } else {
            break;
        }
    }
    Some(places)
}

fn rounded_scaled(value: f64, places: i32) -> f64 {
    libm::round(scaled(value, places))
}

fn scaled(value: f64, places: i32) -> f64 {
    let power = ten(places.unsigned_abs());
    if places < 0 { value / power } else { value * power }
}

fn ten(power: u32) -> f64 {
    // exact up to 10²²
    let mut out = 1.0;
    for _ in 0..power.min(320) {
        out *= 10.0;
    }
    out
}

/// Returns the value rounded to so many decimals, half away from zero; negative ones round to tens and hundreds.
#[must_use]
pub fn rounded(value: f64, decimals: i32) -> f64 {
    let digits = rounded_scaled(value, decimals);
    let power = ten(decimals.unsigned_abs());
    if decimals < 0 { digits * power } else { digits / power }
}
