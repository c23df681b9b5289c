//! Published nickel and copper curves; bit for bit data/temperature/rtd_other_metal_coefficients.csv.

use super::{Copper, Law, Nickel};

/// Nickel of DIN 43760:1987 for R₀ = 100 Ω, R₁₀₀/R₀ = 1.618, −60 °C to 250 °C (read; attribution of the formula to the
/// standard from memory).
pub const NICKEL_DIN_43760: Nickel =
    Nickel { r0_ohms: 100.0, a: 5.485e-3, b: 6.650e-6, d: 2.805e-11, f: -2.0e-17, range_celsius: [-60.0, 250.0] };

/// Copper of GOST 6651-2009 with α = 0.00428 /K for R₀ = 100 Ω, −180 °C to 200 °C (from memory).
pub const COPPER_GOST_6651_2009: Copper =
    Copper { r0_ohms: 100.0, a: 4.28e-3, b: -6.2032e-7, c: 8.5154e-10, range_celsius: [-180.0, 200.0] };

/// Customary copper element of 10 Ω at 25 °C: the line from 0 °C to 260 °C (from memory).
pub const COPPER_10_OHM: Copper = Copper { r0_ohms: 9.035, a: 4.274e-3, b: 0.0, c: 0.0, range_celsius: [0.0, 260.0] };

/// A published curve and where it comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Published {
    /// Metal, standard and edition.
    pub name: &'static str,
    /// Where the figures come from, in words.
    pub source: &'static str,
    /// The curve.
    pub law: Law,
}

/// Every curve of this module.
pub const PUBLISHED: [Published; 3] = [
    Published {
        name: "nickel DIN 43760",
        source: "DIN 43760:1987, read in a reprint; attribution of the formula from memory",
        law: Law::Nickel(NICKEL_DIN_43760),
    },
    Published {
        name: "copper GOST 6651-2009",
        source: "GOST 6651-2009, from memory",
        law: Law::Copper(COPPER_GOST_6651_2009),
    },
    Published { name: "copper 10 ohm", source: "customary, from memory", law: Law::Copper(COPPER_10_OHM) },
];
