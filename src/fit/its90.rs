//! ITS-90: the deviation function of a standard platinum resistance thermometer from fixed points.

use std::vec::Vec;

use super::basis::Basis;
use super::curve::{Coverage, Curve, Spread, different, enough};
use super::points::{Points, Uncertainty};
use super::thermistor::FittedTemperature;
use super::{Cell, FitError};
use crate::Error;
use crate::math::sqrt;
use crate::platinum::its90::{Deviation, StandardThermometer, reference_ratio_from_celsius};
use crate::range::Range;

/// A subrange of ITS-90, named after the fixed point at its end.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Subrange {
    /// 13.8033 K to 273.16 K.
    Hydrogen,
    /// 24.5561 K to 273.16 K.
    Neon,
    /// 54.3584 K to 273.16 K.
    Oxygen,
    /// 83.8058 K to 273.16 K.
    Argon,
    /// −38.8344 °C to 29.7646 °C.
    Mercury,
    /// 0 °C to 29.7646 °C.
    Gallium,
    /// 0 °C to 156.5985 °C.
    Indium,
    /// 0 °C to 231.928 °C.
    Tin,
    /// 0 °C to 419.527 °C.
    Zinc,
    /// 0 °C to 660.323 °C.
    Aluminium,
    /// 0 °C to 961.78 °C.
    Silver,
}

/// Freezing point of aluminium, °C.
const ALUMINIUM: f64 = 660.323;
/// Triple point of water, °C.
const WATER: f64 = 0.01;
/// How far a realised fixed point may lie from its temperature (depth, pressure), K.
const REALISED: f64 = 0.02;

impl Subrange {
    /// Every subrange, from the coldest.
    pub const ALL: [Self; 11] = [
        Self::Hydrogen,
        Self::Neon,
        Self::Oxygen,
        Self::Argon,
        Self::Mercury,
        Self::Gallium,
        Self::Indium,
        Self::Tin,
        Self::Zinc,
        Self::Aluminium,
        Self::Silver,
    ];

    /// Returns the name, as a sheet writes it.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Hydrogen => "hydrogen",
            Self::Neon => "neon",
            Self::Oxygen => "oxygen",
            Self::Argon => "argon",
            Self::Mercury => "mercury",
            Self::Gallium => "gallium",
            Self::Indium => "indium",
            Self::Tin => "tin",
            Self::Zinc => "zinc",
            Self::Aluminium => "aluminium",
            Self::Silver => "silver",
        }
    }

    /// The fixed points that the scale prescribes beside the triple point of water (ITS-90, Table 5), in words.
    const fn points(self) -> &'static str {
        match self {
            Self::Hydrogen => {
                "fixed points beside the triple point of water (hydrogen at 13.8033 K and near 17 K and 20.3 K, neon, oxygen, argon, mercury)"
            }
            Self::Neon => {
                "fixed points beside the triple point of water (hydrogen at 13.8033 K, neon, oxygen, argon, mercury)"
            }
            Self::Oxygen => {
                "fixed points beside the triple point of water (oxygen -218.7916, argon -189.3442, mercury -38.8344 °C)"
            }
            Self::Argon => "fixed points beside the triple point of water (argon -189.3442, mercury -38.8344 °C)",
            Self::Mercury => "fixed points beside the triple point of water (mercury -38.8344, gallium 29.7646 °C)",
            Self::Gallium => "fixed points beside the triple point of water (gallium 29.7646 °C)",
            Self::Indium => "fixed points beside the triple point of water (indium 156.5985 °C)",
            Self::Tin => "fixed points beside the triple point of water (indium 156.5985, tin 231.928 °C)",
            Self::Zinc => "fixed points beside the triple point of water (tin 231.928, zinc 419.527 °C)",
            Self::Aluminium => {
                "fixed points beside the triple point of water (tin 231.928, zinc 419.527, aluminium 660.323 °C)"
            }
            Self::Silver => {
                "fixed points beside the triple point of water (tin 231.928, zinc 419.527, aluminium 660.323, silver 961.78 °C)"
            }
        }
    }

    fn basis(self, w_aluminium: f64) -> Basis {
        let (powers, product, logs, above): (&'static [u8], bool, &'static [u8], Option<f64>) = match self {
            Self::Hydrogen => (&[1, 2], false, &[3, 4, 5, 6, 7], None),
            Self::Neon => (&[1, 2], false, &[1, 2, 3], None),
            Self::Oxygen => (&[1, 2], false, &[2], None),
            Self::Argon => (&[1], true, &[], None),
            Self::Gallium | Self::Indium => (&[1], false, &[], None),
            Self::Mercury | Self::Tin | Self::Zinc => (&[1, 2], false, &[], None),
            Self::Aluminium => (&[1, 2, 3], false, &[], None),
            Self::Silver => (&[1, 2, 3], false, &[], Some(w_aluminium)),
        };
        Basis::Deviation { powers, product, logs, above }
    }

    /// The function with these coefficients in the order of its variant; those that are lacking are 0.
    fn deviation(self, coefficients: &[f64], w_aluminium: f64) -> Deviation {
        let k = |i: usize| coefficients.get(i).copied().unwrap_or(0.0);
        let (a, b) = (k(0), k(1));
        match self {
            Self::Hydrogen => Deviation::FromHydrogen { a, b, c: [k(2), k(3), k(4), k(5), k(6)] },
            Self::Neon => Deviation::FromNeon { a, b, c: [k(2), k(3), k(4)] },
            Self::Oxygen => Deviation::FromOxygen { a, b, c1: k(2) },
            Self::Argon => Deviation::FromArgon { a, b },
            Self::Mercury => Deviation::MercuryToGallium { a, b },
            Self::Gallium => Deviation::ToGallium { a },
            Self::Indium => Deviation::ToIndium { a },
            Self::Tin => Deviation::ToTin { a, b },
            Self::Zinc => Deviation::ToZinc { a, b },
            Self::Aluminium => Deviation::ToAluminium { a, b, c: k(2) },
            Self::Silver => Deviation::ToSilver { a, b, c: k(2), d: k(3), w_aluminium },
        }
    }

    const fn terms(self) -> &'static [(&'static str, &'static str)] {
        match self {
            Self::Hydrogen => &[("a", ""), ("b", ""), ("c1", ""), ("c2", ""), ("c3", ""), ("c4", ""), ("c5", "")],
            Self::Neon => &[("a", ""), ("b", ""), ("c1", ""), ("c2", ""), ("c3", "")],
            Self::Oxygen => &[("a", ""), ("b", ""), ("c1", "")],
            _ => &[("a", ""), ("b", ""), ("c", ""), ("d", "")],
        }
    }
}

/// A standard thermometer from points.
#[derive(Clone, Debug)]
pub struct Its90Fit {
    /// The curve: W − Wr of W. The points at the triple point of water are no part of it: there W = 1 by definition.
    pub curve: Curve,
    /// Resistance at the triple point of water, Ω: the stated one, or the mean of the points there.
    pub triple_point_ohms: f64,
    /// The thermometer.
    pub thermometer: StandardThermometer,
    /// W of the thermometer at the freezing point of aluminium, for the subrange to silver.
    pub w_aluminium: Option<f64>,
    /// For each point the temperature of the thermometer at its resistance less the temperature of the point, K; NaN where the
    /// resistance lies outside the subrange by more than rounding.
    pub kelvin: Vec<f64>,
}

/// dWr/dT at a temperature, 1/K, by a central difference over 2 mK inside the reference functions: right to 1e-6.
fn ratio_per_kelvin(celsius: f64) -> Result<f64, Error> {
    let (low, high) = ((celsius - 1e-3).max(-259.3467), (celsius + 1e-3).min(961.78));
    Ok((reference_ratio_from_celsius(high)? - reference_ratio_from_celsius(low)?) / (high - low))
}

/// Fits the deviation function W − Wr of a subrange of ITS-90, W = R(T)/R(273.16 K).
///
/// With as many fixed points as coefficients it goes through all of them; with more it is the least-squares one, minimised in W.
///
/// - `points`: x temperatures of the fixed points, °C on ITS-90, within the subrange; y resistances, Ω.
/// - `triple_point_ohms`: resistance at the triple point of water, Ω; `None` takes the mean of the points at 0.01 °C.
///
/// # Errors
/// `FitError::Point` for a number that is none and a temperature outside the subrange; `FitError::NotCovered` without a resistance at
/// the triple point of water, or to silver without a point at aluminium; `FitError::TooFew` with the fixed points of the subrange;
/// `FitError::Dependent`; `FitError::Unusable` for a deviation too large for a thermometer of the scale.
/// # Source
/// H. Preston-Thomas, Metrologia 27 (1990) 3-10, section 3.3 and Table 5; round trips at 50 digits in tests/fit.rs.
pub fn its90(points: &Points<'_>, subrange: Subrange, triple_point_ohms: Option<f64>) -> Result<Its90Fit, FitError> {
    let [low, high] = subrange.deviation(&[], 3.376).range_celsius();
    let resistance = Range::new("resistance", "Ω", f64::MIN_POSITIVE, f64::MAX);
    let temperature =
        Range::new("temperature of a fixed point in this subrange", "°C", low - REALISED, high + REALISED);
    points.check(temperature, resistance)?;

    let at_water = |t: f64| (t - WATER).abs() <= 1e-6;
    let mean_where = |at: &dyn Fn(f64) -> bool| {
        let there: Vec<f64> = points.x.iter().zip(points.y).filter(|(t, _)| at(**t)).map(|(_, r)| *r).collect();
        (!there.is_empty()).then(|| there.iter().sum::<f64>() / there.len() as f64)
    };
    let triple_point_ohms = match triple_point_ohms {
        Some(ohms) => {
            Range::new("resistance at the triple point of water", "Ω", f64::MIN_POSITIVE, f64::MAX).check(ohms)?
        }
        None => mean_where(&at_water).ok_or(FitError::NotCovered {
            what: "no point lies at the triple point of water, 0.01 °C, and its resistance was not stated",
        })?,
    };
    let w_aluminium = match subrange {
        Subrange::Silver => Some(
            mean_where(&|t| (t - ALUMINIUM).abs() <= REALISED).ok_or(FitError::NotCovered {
                what: "no point lies at the freezing point of aluminium, 660.323 °C, which the subrange to silver needs",
            })? / triple_point_ohms,
        ),
        _ => None,
    };
    let basis = subrange.basis(w_aluminium.unwrap_or(0.0));
    enough(different(points.x.iter().copied().filter(|t| !at_water(*t))), basis.len(), subrange.points(), "°C")?;

    let (mut w, mut off, mut sigma) = (Vec::new(), Vec::new(), Vec::new());
    let stated: &[f64] = match points.uncertainty {
        Uncertainty::None => &[],
        Uncertainty::OfX(u) | Uncertainty::OfY(u) => u,
    };
    for (index, (t, r)) in points.x.iter().zip(points.y).enumerate() {
        if at_water(*t) {
            continue;
        }
        let reference =
            reference_ratio_from_celsius(*t).map_err(|error| FitError::Point { index, what: Cell::X, error })?;
        let ratio = r / triple_point_ohms;
        w.push(ratio);
        off.push(ratio - reference);
        if let Some(u) = stated.get(index) {
            sigma.push(match points.uncertainty {
                Uncertainty::OfX(_) => u * ratio_per_kelvin(*t)?,
                _ => u / triple_point_ohms,
            });
        }
    }
    let spread = if stated.is_empty() { Spread::Equal } else { Spread::OfY(sigma) };
    let curve = Curve::fit(basis, &w, &off, &spread, subrange.terms())?;
    let coefficients: Vec<f64> = curve.coefficients().iter().map(|c| c.value).collect();
    let deviation = subrange.deviation(&coefficients, w_aluminium.unwrap_or(0.0));
    let thermometer = StandardThermometer::new(triple_point_ohms, deviation)?;
    let ratios = thermometer.ratio_range();
    let kelvin = points
        .x
        .iter()
        .zip(points.y)
        .map(|(t, r)| {
            let ratio = r / triple_point_ohms;
            // a point at an end of the subrange may lie beyond it by its own scatter: the slope reaches it
            let inside = ratio.clamp(ratios.min, ratios.max);
            let at = thermometer.celsius_from_ratio(inside).unwrap_or(f64::NAN);
            at + (ratio - inside) / ratio_per_kelvin(at).unwrap_or(f64::NAN) - t
        })
        .collect();
    Ok(Its90Fit { curve, triple_point_ohms, thermometer, w_aluminium, kelvin })
}

impl Its90Fit {
    /// Returns the temperature of a resistance with the intervals that the fit gives it.
    ///
    /// The uncertainty of the resistance at the triple point of water is no part of them.
    ///
    /// - `ohms`: within the subrange, Ω.
    /// - `coverage`: as for [`Curve::inverse`], but its uncertainty of a single reading is of the resistance, Ω.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the subrange; as [`Curve::inverse`].
    pub fn temperature(&self, ohms: f64, coverage: &Coverage) -> Result<FittedTemperature, Error> {
        let w = ohms / self.triple_point_ohms;
        let celsius = self.thermometer.celsius_from_ratio(w)?;
        let k = self.curve.coverage_factor(coverage.probability)?;
        let per_kelvin = ratio_per_kelvin(celsius)?;
        let standard_uncertainty = self.curve.standard_uncertainty(w) / per_kelvin;
        let scatter = match coverage.reading_uncertainty {
            Some(u) => {
                Range::new("standard uncertainty of a reading", "Ω", 0.0, f64::MAX).check(u)? / self.triple_point_ohms
            }
            None => self.curve.reading_deviation(),
        } / per_kelvin;
        let repeats = f64::from(coverage.repeats.max(1));
        let wide = sqrt(standard_uncertainty * standard_uncertainty + scatter * scatter / repeats);
        let k_wide = self.curve.factor_of_both(coverage, standard_uncertainty, wide)?;
        let around = |k: f64, u: f64| [celsius - k * u, celsius + k * u];
        Ok(FittedTemperature {
            celsius,
            standard_uncertainty,
            coverage_factor: k,
            band: around(k, standard_uncertainty),
            prediction: around(k_wide, wide),
        })
    }
}
