//! Published curves.

use super::Coefficients;

/// IEC 60751:2008, industrial platinum resistance thermometers, for R₀ = 100 Ω; the same figures stand in
/// IEC 751 Amd 2:1995 and IEC 60751:2022.
pub const IEC_60751: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9083e-3, b: -5.775e-7, c: -4.183e-12, range_celsius: [-200.0, 850.0] };
