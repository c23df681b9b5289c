//! From the temperature scale of 1968 to that of 1990.

use crate::Error;
use crate::math::horner;
use crate::range::Range;

/// bᵢ of (t₉₀ − t₆₈)/°C = Σ bᵢ (t/630 °C)ⁱ, i = 1..=8.
const B: [f64; 9] = [0.0, -0.148_759, -0.267_408, 1.080_760, 1.269_056, -4.089_591, -1.871_251, 7.438_081, -3.536_296];

/// Returns the temperature on ITS-90 in °C for one on IPTS-68 in °C, as older curves of platinum give it.
///
/// - `celsius`: −200 °C to 630 °C.
///
/// # Accuracy
/// The published function is good to 1.5 mK below 0 °C and 1 mK above it; it takes either temperature as its argument.
/// # Errors
/// `Error::OutOfRange` outside −200 °C to 630 °C; `Error::NotFinite` for NaN or ±∞.
/// # Source
/// Preston-Thomas, Metrologia 27 (1990) 3-10, and the working group's function of the same year (coefficients from memory);
/// checked against the table of the CRC Handbook in tests/platinum_standards.rs.
pub fn its90_from_ipts68(celsius: f64) -> Result<f64, Error> {
    let t = Range::new("temperature on IPTS-68", "°C", -200.0, 630.0).check(celsius)?;
    Ok(t + horner(t / 630.0, &B))
}
