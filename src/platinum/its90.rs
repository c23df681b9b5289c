//! The International Temperature Scale of 1990 between 13.8033 K and 961.78 °C: reference functions of the resistance
//! ratio and deviation functions of standard platinum resistance thermometers.
//!
//! H. Preston-Thomas, The International Temperature Scale of 1990 (ITS-90), Metrologia 27 (1990) 3-10 and 107.
//! Coefficients from memory; they reproduce the published Wr of the fixed points (tests/its90.rs).
//!
//! ```
//! use ohmwright::platinum::its90;
//!
//! // Metrologia 27 (1990), Table 1: Wr = 1.118 138 89 at the melting point of gallium, 29.7646 °C
//! let w = its90::reference_ratio_from_celsius(29.7646)?;
//! assert!((w - 1.11813889).abs() < 1e-8);
//! assert!((its90::celsius_from_reference_ratio(w)? - 29.7646).abs() < 1e-9);
//! assert!(its90::reference_ratio_from_celsius(962.0).is_err());
//! # Ok::<(), ohmwright::Error>(())
//! ```

use crate::Error;
use crate::math::{Dual, Real, exp, horner, ln};
use crate::range::Range;
use crate::signal::{finite, positive};

/// The temperature in kelvin of 0 °C, exactly.
const ICE_KELVIN: f64 = 273.15;
/// The triple point of water, K, to which resistance ratios refer.
const TRIPLE_POINT_KELVIN: f64 = 273.16;

/// Lowest and highest temperature of the reference functions, °C: triple point of hydrogen, freezing point of silver.
const ENDS_CELSIUS: [f64; 2] = [-259.3467, 961.78];

/// Aᵢ of ln Wr = A₀ + Σ Aᵢ [(ln(T/273.16 K) + 1.5)/1.5]ⁱ, 13.8033 K to 273.16 K.
const A: [f64; 13] = [
    -2.13534729,
    3.18324720,
    -1.80143597,
    0.71727204,
    0.50344027,
    -0.61899395,
    -0.05332322,
    0.28021362,
    0.10715224,
    -0.29302865,
    0.04459872,
    0.11868632,
    -0.05248134,
];
/// Bᵢ of T/273.16 K = B₀ + Σ Bᵢ [(Wr^(1/6) − 0.65)/0.35]ⁱ: within 0.1 mK, a start alone.
const B: [f64; 16] = [
    0.183324722,
    0.240975303,
    0.209108771,
    0.190439972,
    0.142648498,
    0.077993465,
    0.012475611,
    -0.032267127,
    -0.075291522,
    -0.056470670,
    0.076201285,
    0.123893204,
    -0.029201193,
    -0.091173542,
    0.001317696,
    0.026025526,
];
/// Cᵢ of Wr = C₀ + Σ Cᵢ [(T/K − 754.15)/481]ⁱ, 273.15 K to 1234.93 K.
const C: [f64; 10] = [
    2.78157254,
    1.64650916,
    -0.13714390,
    -0.00649767,
    -0.00234444,
    0.00511868,
    0.00187982,
    -0.00204472,
    -0.00046122,
    0.00045724,
];
/// Dᵢ of T/K − 273.15 = D₀ + Σ Dᵢ [(Wr − 2.64)/1.64]ⁱ: within 0.13 mK, a start alone.
const D: [f64; 10] =
    [439.932854, 472.418020, 37.684494, 7.472018, 2.920828, 0.005184, -0.963864, -0.188732, 0.191203, 0.049025];

/// Which reference function holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Family {
    /// That of 13.8033 K to 273.16 K.
    Cold,
    /// That of 273.15 K to 1234.93 K.
    Warm,
    /// The cold one up to 273.16 K, the warm one above.
    Both,
}

/// (ln(T/273.16 K) + 1.5)/1.5.
fn cold_argument<R: Real>(kelvin: R) -> R {
    ((kelvin / R::from_f64(TRIPLE_POINT_KELVIN)).ln() + R::from_f64(1.5)) / R::from_f64(1.5)
}

/// Wr at a temperature in K.
fn ratio_from_kelvin<R: Real>(family: Family, kelvin: R) -> R {
    let cold = match family {
        Family::Cold => true,
        Family::Warm => false,
        Family::Both => kelvin.value() <= TRIPLE_POINT_KELVIN,
    };
    if cold {
        horner(cold_argument(kelvin), &A.map(R::from_f64)).exp()
    } else {
        horner((kelvin - R::from_f64(754.15)) / R::from_f64(481.0), &C.map(R::from_f64))
    }
}

/// Newton steps after the approximate inverses, which are good to 0.13 mK: one leaves about 1e-10 K, two rounding alone.
const STEPS: usize = 2;

/// T in K at Wr: the exact inverse of the reference function.
fn kelvin_from_ratio(family: Family, ratio: f64) -> f64 {
    match family {
        Family::Cold => cold_kelvin_from_ratio(ratio),
        Family::Warm => warm_kelvin_from_ratio(ratio),
        // the lower function owns the join; what lies in the gap above it is the join
        Family::Both if ratio <= ratio_from_kelvin(Family::Cold, TRIPLE_POINT_KELVIN) => cold_kelvin_from_ratio(ratio),
        Family::Both => {
            let kelvin = warm_kelvin_from_ratio(ratio);
            if kelvin < TRIPLE_POINT_KELVIN { TRIPLE_POINT_KELVIN } else { kelvin }
        }
    }
}

fn cold_kelvin_from_ratio(ratio: f64) -> f64 {
    let log = ln(ratio);
    let mut kelvin = TRIPLE_POINT_KELVIN * horner((exp(log / 6.0) - 0.65) / 0.35, &B);
    for _ in 0..STEPS {
        // ln Wr(T) = ln Wr
        let got = horner(cold_argument(Dual::variable(kelvin)), &A.map(Dual::constant));
        kelvin -= (got.value - log) / got.slope;
    }
    kelvin
}

fn warm_kelvin_from_ratio(ratio: f64) -> f64 {
    let mut kelvin = ICE_KELVIN + horner((ratio - 2.64) / 1.64, &D);
    for _ in 0..STEPS {
        let got = ratio_from_kelvin(Family::Warm, Dual::variable(kelvin));
        kelvin -= (got.value - ratio) / got.slope;
    }
    kelvin
}

/// Returns the reference ratio Wr at a temperature in °C; at and below 0.01 °C that of the lower reference function.
///
/// # Errors
/// `Error::OutOfRange` outside −259.3467 °C to 961.78 °C; `Error::NotFinite` for NaN or ±∞.
/// # Source
/// ITS-90, equations (9a) and (10a); fixed points in tests/its90.rs.
pub fn reference_ratio_from_celsius(celsius: f64) -> Result<f64, Error> {
    let [low, high] = ENDS_CELSIUS;
    let t = Range::new("temperature", "°C", low, high).check(celsius)?;
    Ok(ratio_from_kelvin(Family::Both, t + ICE_KELVIN))
}

/// Returns the temperature in °C at a reference ratio Wr: the exact inverse of the reference function, not the approximate
/// one of the text.
///
/// # Errors
/// `Error::OutOfRange` outside the ratios of −259.3467 °C to 961.78 °C; `Error::NotFinite` for NaN or ±∞.
pub fn celsius_from_reference_ratio(ratio: f64) -> Result<f64, Error> {
    let [low, high] = ENDS_CELSIUS.map(|t| ratio_from_kelvin(Family::Both, t + ICE_KELVIN));
    let w = Range::new("reference ratio", "", low, high).check(ratio)?;
    Ok(kelvin_from_ratio(Family::Both, w) - ICE_KELVIN)
}

/// Deviation function W − Wr of one subrange, with the coefficients of a certificate. W = R(T)/R(273.16 K).
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Deviation<R = f64> {
    /// 13.8033 K to 273.16 K: a (W − 1) + b (W − 1)² + Σ cᵢ (ln W)^(i+2), i = 1..=5 (ITS-90, 3.3.1).
    FromHydrogen {
        /// a.
        a: R,
        /// b.
        b: R,
        /// c₁ to c₅.
        c: [R; 5],
    },
    /// 24.5561 K to 273.16 K: a (W − 1) + b (W − 1)² + Σ cᵢ (ln W)ⁱ, i = 1..=3 (3.3.1.1).
    FromNeon {
        /// a.
        a: R,
        /// b.
        b: R,
        /// c₁ to c₃.
        c: [R; 3],
    },
    /// 54.3584 K to 273.16 K: a (W − 1) + b (W − 1)² + c₁ (ln W)² (3.3.1.2).
    FromOxygen {
        /// a.
        a: R,
        /// b.
        b: R,
        /// c₁.
        c1: R,
    },
    /// 83.8058 K to 273.16 K: a (W − 1) + b (W − 1) ln W (3.3.1.3).
    FromArgon {
        /// a.
        a: R,
        /// b.
        b: R,
    },
    /// −38.8344 °C to 29.7646 °C: a (W − 1) + b (W − 1)² (3.3.3).
    MercuryToGallium {
        /// a.
        a: R,
        /// b.
        b: R,
    },
    /// 0 °C to 29.7646 °C: a (W − 1) (3.3.2.5).
    ToGallium {
        /// a.
        a: R,
    },
    /// 0 °C to 156.5985 °C: a (W − 1) (3.3.2.4).
    ToIndium {
        /// a.
        a: R,
    },
    /// 0 °C to 231.928 °C: a (W − 1) + b (W − 1)² (3.3.2.3).
    ToTin {
        /// a.
        a: R,
        /// b.
        b: R,
    },
    /// 0 °C to 419.527 °C: a (W − 1) + b (W − 1)² (3.3.2.2).
    ToZinc {
        /// a.
        a: R,
        /// b.
        b: R,
    },
    /// 0 °C to 660.323 °C: a (W − 1) + b (W − 1)² + c (W − 1)³ (3.3.2.1).
    ToAluminium {
        /// a.
        a: R,
        /// b.
        b: R,
        /// c.
        c: R,
    },
    /// 0 °C to 961.78 °C: as [`ToAluminium`](Self::ToAluminium), and above 660.323 °C + d [W − W(660.323 °C)]² (3.3.2).
    ToSilver {
        /// a.
        a: R,
        /// b.
        b: R,
        /// c.
        c: R,
        /// d.
        d: R,
        /// W of this thermometer at the freezing point of aluminium.
        w_aluminium: R,
    },
}

impl<R: Real> Deviation<R> {
    /// Returns the lowest and highest temperature of the subrange, °C.
    #[must_use]
    pub const fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::FromHydrogen { .. } => [-259.3467, 0.01],
            Self::FromNeon { .. } => [-248.5939, 0.01],
            Self::FromOxygen { .. } => [-218.7916, 0.01],
            Self::FromArgon { .. } => [-189.3442, 0.01],
            Self::MercuryToGallium { .. } => [-38.8344, 29.7646],
            Self::ToGallium { .. } => [0.0, 29.7646],
            Self::ToIndium { .. } => [0.0, 156.5985],
            Self::ToTin { .. } => [0.0, 231.928],
            Self::ToZinc { .. } => [0.0, 419.527],
            Self::ToAluminium { .. } => [0.0, 660.323],
            Self::ToSilver { .. } => [0.0, 961.78],
        }
    }

    fn family(&self) -> Family {
        match self {
            Self::FromHydrogen { .. } | Self::FromNeon { .. } | Self::FromOxygen { .. } | Self::FromArgon { .. } => {
                Family::Cold
            }
            Self::MercuryToGallium { .. } => Family::Both,
            _ => Family::Warm,
        }
    }

    /// W − Wr at W.
    pub(crate) fn at(&self, w: R) -> R {
        let zero = R::from_f64(0.0);
        let x = w - R::from_f64(1.0);
        match *self {
            Self::FromHydrogen { a, b, c: [c1, c2, c3, c4, c5] } => {
                x * (a + b * x) + horner(w.ln(), &[zero, zero, zero, c1, c2, c3, c4, c5])
            }
            Self::FromNeon { a, b, c: [c1, c2, c3] } => x * (a + b * x) + horner(w.ln(), &[zero, c1, c2, c3]),
            Self::FromOxygen { a, b, c1 } => x * (a + b * x) + horner(w.ln(), &[zero, zero, c1]),
            Self::FromArgon { a, b } => x * (a + b * w.ln()),
            Self::ToGallium { a } | Self::ToIndium { a } => x * a,
            Self::MercuryToGallium { a, b } | Self::ToTin { a, b } | Self::ToZinc { a, b } => x * (a + b * x),
            Self::ToAluminium { a, b, c } => x * (a + x * (b + x * c)),
            Self::ToSilver { a, b, c, d, w_aluminium } => {
                let above = w - w_aluminium;
                let last = if above.value() > 0.0 { d * above * above } else { zero };
                x * (a + x * (b + x * c)) + last
            }
        }
    }

    pub(crate) fn map<S: Real>(&self, mut f: impl FnMut(R) -> S) -> Deviation<S> {
        match *self {
            Self::FromHydrogen { a, b, c } => Deviation::FromHydrogen { a: f(a), b: f(b), c: c.map(f) },
            Self::FromNeon { a, b, c } => Deviation::FromNeon { a: f(a), b: f(b), c: c.map(f) },
            Self::FromOxygen { a, b, c1 } => Deviation::FromOxygen { a: f(a), b: f(b), c1: f(c1) },
            Self::FromArgon { a, b } => Deviation::FromArgon { a: f(a), b: f(b) },
            Self::MercuryToGallium { a, b } => Deviation::MercuryToGallium { a: f(a), b: f(b) },
            Self::ToGallium { a } => Deviation::ToGallium { a: f(a) },
            Self::ToIndium { a } => Deviation::ToIndium { a: f(a) },
            Self::ToTin { a, b } => Deviation::ToTin { a: f(a), b: f(b) },
            Self::ToZinc { a, b } => Deviation::ToZinc { a: f(a), b: f(b) },
            Self::ToAluminium { a, b, c } => Deviation::ToAluminium { a: f(a), b: f(b), c: f(c) },
            Self::ToSilver { a, b, c, d, w_aluminium } => {
                Deviation::ToSilver { a: f(a), b: f(b), c: f(c), d: f(d), w_aluminium: f(w_aluminium) }
            }
        }
    }

    /// Wr at a temperature in °C; the caller has checked the range.
    pub(crate) fn reference_ratio(&self, celsius: R) -> R {
        ratio_from_kelvin(self.family(), celsius + R::from_f64(ICE_KELVIN))
    }

    /// W at a temperature in °C; the caller has checked the range.
    pub(crate) fn ratio_from_celsius(&self, celsius: R) -> R {
        let reference = self.reference_ratio(celsius);
        // W − (W − Wr)(W) = Wr by Newton from Wr, in plain numbers; then once more in the number type of the caller, which
        // carries what it carries
        let plain = self.map(|k| Dual::constant(k.value()));
        let mut w = reference.value();
        let mut slope = 1.0;
        for _ in 0..RATIO_STEPS {
            let deviation = plain.at(Dual::variable(w));
            slope = 1.0 - deviation.slope;
            w -= (w - deviation.value - reference.value()) / slope;
        }
        let fixed = R::from_f64(w);
        fixed - (fixed - self.at(fixed) - reference) / R::from_f64(slope)
    }
}

/// Newton steps from Wr to W, which lie some 1e-4 apart.
const RATIO_STEPS: usize = 4;

impl Deviation {
    /// Temperature in °C at W; the caller has checked the range.
    pub(crate) fn celsius_from_ratio(&self, w: f64) -> f64 {
        kelvin_from_ratio(self.family(), w - self.at(w)) - ICE_KELVIN
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        let mut sound = Ok(());
        self.map(|k| {
            if sound.is_ok() {
                sound = finite("coefficient of the deviation function", k);
            }
            k
        });
        sound?;
        if let Self::ToSilver { w_aluminium, .. } = self {
            // Wr(660.323 °C) = 3.376 008 60; no thermometer is a hundredth off
            Range::new("W at the freezing point of aluminium", "", 3.34, 3.41).check(*w_aluminium)?;
        }
        let [low, high] = self.range_celsius();
        for step in 0..=64 {
            let t = low + (high - low) * f64::from(step) / 64.0;
            let off = (self.celsius_from_ratio(self.ratio_from_celsius(t)) - t).abs();
            if off.is_nan() || off > 1e-9 {
                return Err(Error::Unfit { what: "the deviation function is too large for a thermometer of ITS-90" });
            }
        }
        Ok(())
    }
}

/// A standard platinum resistance thermometer with its certificate.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct StandardThermometer {
    triple_point_ohms: f64,
    deviation: Deviation,
    ratio: Range,
    ohms: Range,
}

impl StandardThermometer {
    /// Returns a thermometer with this resistance at the triple point of water, Ω, and this deviation function.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a resistance or coefficient that is none, `Error::Unfit` for a
    /// deviation so large that W and T do not determine each other.
    pub fn new(triple_point_ohms: f64, deviation: Deviation) -> Result<Self, Error> {
        positive("resistance at the triple point of water", "ohm", triple_point_ohms)?;
        deviation.check()?;
        let [low, high] = deviation.range_celsius().map(|t| deviation.ratio_from_celsius(t));
        Ok(Self {
            triple_point_ohms,
            deviation,
            ratio: Range::new("resistance ratio W", "", low, high),
            ohms: Range::new("resistance", "Ω", triple_point_ohms * low, triple_point_ohms * high),
        })
    }

    /// Returns the deviation function.
    #[must_use]
    pub const fn deviation(&self) -> &Deviation {
        &self.deviation
    }

    /// Returns the resistance at the triple point of water, Ω.
    #[must_use]
    pub const fn triple_point_ohms(&self) -> f64 {
        self.triple_point_ohms
    }

    /// Returns the ratios W that the subrange covers.
    #[must_use]
    pub const fn ratio_range(&self) -> Range {
        self.ratio
    }

    /// Returns the resistances that the subrange covers, Ω.
    #[must_use]
    pub const fn ohms_range(&self) -> Range {
        self.ohms
    }

    /// Returns W at a temperature in °C.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the subrange; `Error::NotFinite` for NaN or ±∞.
    /// # Source
    /// ITS-90, section 3.3; tests/its90.rs.
    pub fn ratio_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.deviation.range_celsius();
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.deviation.ratio_from_celsius(t))
    }

    /// Returns the temperature in °C at a ratio W = R(T)/R(273.16 K).
    ///
    /// # Accuracy
    /// Within 1e-9 K of the exact inverse (tests/its90.rs).
    /// # Errors
    /// `Error::OutOfRange` outside [`ratio_range`](Self::ratio_range); `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_ratio(&self, ratio: f64) -> Result<f64, Error> {
        Ok(self.deviation.celsius_from_ratio(self.ratio.check(ratio)?))
    }

    /// Returns the resistance in Ω at a temperature in °C.
    ///
    /// # Errors
    /// As [`ratio_from_celsius`](Self::ratio_from_celsius).
    pub fn ohms_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        Ok(self.triple_point_ohms * self.ratio_from_celsius(celsius)?)
    }

    /// Returns the temperature in °C at a resistance in Ω, at the current for which the certificate holds.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside [`ohms_range`](Self::ohms_range); `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_ohms(&self, ohms: f64) -> Result<f64, Error> {
        Ok(self.deviation.celsius_from_ratio(self.ohms.check(ohms)? / self.triple_point_ohms))
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use std::vec::Vec;

    #[test]
    fn coefficients_bit_for_bit() {
        let text = include_str!("../../data/temperature/its90_reference_coefficients.csv");
        let rows: Vec<(&str, usize, f64)> = text
            .lines()
            .filter(|l| !l.starts_with('#'))
            .skip(1)
            .map(|l| {
                let cells: Vec<&str> = l.split(',').collect();
                (cells[0], cells[1].parse().unwrap(), cells[2].parse().unwrap())
            })
            .collect();
        for (family, ours) in [("A", &A[..]), ("B", &B[..]), ("C", &C[..]), ("D", &D[..])] {
            let printed: Vec<_> = rows.iter().filter(|r| r.0 == family).collect();
            assert_eq!(printed.len(), ours.len(), "{family}");
            for ((i, got), (_, j, want)) in ours.iter().enumerate().zip(printed) {
                assert!(i == *j && got.to_bits() == want.to_bits(), "{family}{i}: {got} for {want}");
            }
        }
        assert_eq!(rows.len(), A.len() + B.len() + C.len() + D.len());
    }
}
