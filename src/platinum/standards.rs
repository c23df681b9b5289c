//! Published curves, each named by its standard and edition, or by R₁₀₀/R₀ where it has no standard. Sets are never mixed.

use super::Coefficients;

/// IEC 60751:2008, industrial platinum resistance thermometers, for R₀ = 100 Ω; the same figures stand in
/// IEC 751 Amd 2:1995 and IEC 60751:2022.
pub const IEC_60751: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9083e-3, b: -5.775e-7, c: -4.183e-12, range_celsius: [-200.0, 850.0] };

/// ASTM E1137: A, B, C of [`IEC_60751`]; only tolerance grades and range differ (figures and range from memory).
pub const ASTM_E1137: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9083e-3, b: -5.775e-7, c: -4.183e-12, range_celsius: [-200.0, 650.0] };

/// IEC 751:1983 on IPTS-68, R₁₀₀/R₀ = 1.3850 (from memory; reproduces a printed table of that edition within 0.005 Ω).
pub const IEC_751_1983: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.90802e-3, b: -5.80195e-7, c: -4.27350e-12, range_celsius: [-200.0, 850.0] };

/// The same edition with B and C in fewer digits, as they are also found printed (from memory).
pub const IEC_751_1983_SHORT: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.90802e-3, b: -5.802e-7, c: -4.2735e-12, range_celsius: [-200.0, 850.0] };

/// Customary curve with R₁₀₀/R₀ = 1.3911 (from memory; scale not stated).
pub const RATIO_1_3911: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9692e-3, b: -5.8495e-7, c: -4.233e-12, range_celsius: [-200.0, 850.0] };

/// Customary curve with R₁₀₀/R₀ = 1.3920 (from memory; scale not stated).
pub const RATIO_1_3920: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9787e-3, b: -5.8686e-7, c: -4.167e-12, range_celsius: [-200.0, 850.0] };

/// Customary curve with nominal R₁₀₀/R₀ = 1.3916; A and B give 1.39152 (from memory; scale not stated).
pub const RATIO_1_3916: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9739e-3, b: -5.870e-7, c: -4.4e-12, range_celsius: [-200.0, 510.0] };

/// Customary curve with nominal R₁₀₀/R₀ = 1.3902; A and B give 1.39007 (from memory; scale not stated).
pub const RATIO_1_3902: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9600e-3, b: -5.930e-7, c: -4.30e-12, range_celsius: [-200.0, 850.0] };

/// GOST 6651-2009, R₁₀₀/R₀ = 1.3911 (from memory).
pub const GOST_6651_2009: Coefficients =
    Coefficients { r0_ohms: 100.0, a: 3.9690e-3, b: -5.841e-7, c: -4.330e-12, range_celsius: [-200.0, 850.0] };

/// The temperature scale that a published curve was made for.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Scale {
    /// The International Temperature Scale of 1990.
    Its90,
    /// The International Practical Temperature Scale of 1968: t₉₀ − t₆₈ is −0.04 K at 200 °C.
    Ipts68,
    /// No scale is stated.
    NotStated,
}

/// A published curve and where it comes from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Published {
    /// Standard and edition, or R₁₀₀/R₀ where there is none.
    pub name: &'static str,
    /// Scale of its temperatures.
    pub scale: Scale,
    /// Where the figures come from, in words.
    pub source: &'static str,
    /// The curve of an element of 100 Ω.
    pub coefficients: Coefficients,
}

const fn published(name: &'static str, scale: Scale, source: &'static str, coefficients: Coefficients) -> Published {
    Published { name, scale, source, coefficients }
}

const CUSTOMARY: &str = "customary, from memory";

/// Every curve of this module.
pub const PUBLISHED: [Published; 9] = [
    published("IEC 60751", Scale::Its90, "IEC 60751:2008, also IEC 751 Amd 2:1995 and IEC 60751:2022", IEC_60751),
    published("ASTM E1137", Scale::Its90, "ASTM E1137, from memory: A, B, C of IEC 60751", ASTM_E1137),
    published("IEC 751:1983", Scale::Ipts68, "IEC 751:1983, from memory", IEC_751_1983),
    published("IEC 751:1983, short figures", Scale::Ipts68, "IEC 751:1983, from memory", IEC_751_1983_SHORT),
    published("GOST 6651-2009", Scale::Its90, "GOST 6651-2009, from memory", GOST_6651_2009),
    published("R100/R0 = 1.3911", Scale::NotStated, CUSTOMARY, RATIO_1_3911),
    published("R100/R0 = 1.3920", Scale::NotStated, CUSTOMARY, RATIO_1_3920),
    published("R100/R0 = 1.3916", Scale::NotStated, CUSTOMARY, RATIO_1_3916),
    published("R100/R0 = 1.3902", Scale::NotStated, CUSTOMARY, RATIO_1_3902),
];
