//! Thermistors: Steinhart-Hart and the two four-term forms from points.

use std::vec::Vec;

use super::FitError;
use super::basis::Basis;
use super::curve::{Coverage, Curve, Spread, different, enough};
use super::points::{Points, Uncertainty};
use crate::Error;
use crate::math::{ln, sqrt};
use crate::range::Range;
use crate::thermistor::{ICE_KELVIN, Law, LogarithmOfRatio, ReciprocalOfTemperature, SteinhartHart, Thermistor};

/// Which form is fitted.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ThermistorForm {
    /// 1/T = a + b L + c L³, L = ln(R/Ω).
    SteinhartHart,
    /// ln(R/R_ref) = A + B/T + C/T² + D/T³.
    LogarithmOfRatio {
        /// R_ref, Ω.
        reference_ohms: f64,
    },
    /// 1/T = a + b L + c L² + d L³, L = ln(R/R_ref).
    ReciprocalOfTemperature {
        /// R_ref, Ω.
        reference_ohms: f64,
    },
}

/// A thermistor's curve from points.
#[derive(Clone, Debug)]
pub struct ThermistorFit {
    /// The curve in the variables of the regression: 1/T (1/K) of L, or ln(R/R_ref) of 1/T.
    pub curve: Curve,
    /// The law.
    pub law: Law,
    /// For each point the temperature of the law at its resistance less the temperature of the point, K.
    pub kelvin: Vec<f64>,
}

/// A temperature with the intervals that the fit gives it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FittedTemperature {
    /// Temperature, °C.
    pub celsius: f64,
    /// Standard uncertainty of the curve there, K.
    pub standard_uncertainty: f64,
    /// Coverage factor from Student's t.
    pub coverage_factor: f64,
    /// Interval of the curve, °C: what its true temperature lies between.
    pub band: [f64; 2],
    /// Interval of a new reading, °C: the curve and a scatter like that of the points together.
    pub prediction: [f64; 2],
}

/// Fits the curve of a thermistor.
///
/// Linear in its coefficients. The forms that give 1/T are fitted with the weights T², so that residuals in kelvin are minimised; the
/// one that gives ln R with equal weights, so that relative residuals of the resistance are. The coefficients hang together too
/// closely to be compared one by one: compare temperatures.
///
/// - `points`: x temperatures, °C, above −273; y resistances, Ω, above 0; at least three or four different temperatures.
/// - Returns the law for temperatures between those of the points.
///
/// # Errors
/// `FitError::Point`, `FitError::TooFew`, `FitError::Dependent` as for a polynomial; `FitError::Unusable` for a reference that is no
/// resistance and a curve whose resistance does not fall steadily over its range.
/// # Source
/// J. S. Steinhart, S. R. Hart, Deep-Sea Research 15 (1968) 497; a published table and its four-term forms in tests/fit.rs.
/// # Example
/// ```
/// use ohmwright::fit::{Points, ThermistorForm, thermistor};
///
/// // NIST/ITL Statistical Reference Datasets, MGH10, three of its points
/// let points = Points::new(&[50.0, 85.0, 125.0], &[34780.0, 9744.0, 2872.0]);
/// let fit = thermistor(&points, ThermistorForm::SteinhartHart)?;
/// assert!(fit.kelvin.iter().all(|off| off.abs() < 1e-9));
/// assert!(thermistor(&Points::new(&[50.0], &[34780.0]), ThermistorForm::SteinhartHart).is_err());
/// # Ok::<(), ohmwright::fit::FitError>(())
/// ```
pub fn thermistor(points: &Points<'_>, form: ThermistorForm) -> Result<ThermistorFit, FitError> {
    let resistance = Range::new("resistance", "Ω", f64::MIN_POSITIVE, f64::MAX);
    points.check(Range::new("temperature", "°C", -273.0, 1000.0), resistance)?;
    let reference = match form {
        ThermistorForm::SteinhartHart => 1.0,
        ThermistorForm::LogarithmOfRatio { reference_ohms }
        | ThermistorForm::ReciprocalOfTemperature { reference_ohms } => {
            let range = Range::new("resistance to which the ratio refers", "Ω", f64::MIN_POSITIVE, f64::MAX);
            range.check(reference_ohms)?
        }
    };
    let needed = if form == ThermistorForm::SteinhartHart { 3 } else { 4 };
    enough(different(points.x.iter().copied()), needed, "temperatures", "°C")?;
    let mut order: Vec<(f64, f64)> = points.x.iter().copied().zip(points.y.iter().copied()).collect();
    order.sort_by(|a, b| a.0.total_cmp(&b.0));
    if order.first().zip(order.last()).is_some_and(|(cold, warm)| warm.1 >= cold.1) {
        return Err(Error::Unfit { what: "the resistance of the points does not fall with the temperature" }.into());
    }
    let reciprocal: Vec<f64> = points.x.iter().map(|t| 1.0 / (t + ICE_KELVIN)).collect();
    let log: Vec<f64> = points.y.iter().map(|r| ln(r / reference)).collect();
    let of_temperature = |t: f64, _: f64, u: f64| u / ((t + ICE_KELVIN) * (t + ICE_KELVIN));
    let of_resistance = |_: f64, r: f64, u: f64| u / r;

    let four = [("a", "1/K"), ("b", "1/K"), ("c", "1/K"), ("d", "1/K")];
    let curve = if let ThermistorForm::LogarithmOfRatio { .. } = form {
        let terms = [("A", ""), ("B", "K"), ("C", "K2"), ("D", "K3")];
        let spread = points.spread_of(of_temperature, of_resistance);
        Curve::fit(Basis::powers(&reciprocal, 0, 3, 0.0), &reciprocal, &log, &spread, &terms)?
    } else {
        // here the temperature is the dependent variable
        let spread = match points.uncertainty {
            Uncertainty::None => Spread::Proportional(points.x.iter().map(|t| of_temperature(*t, 0.0, 1.0)).collect()),
            Uncertainty::OfX(u) => Spread::OfY(points.each(u, of_temperature)),
            Uncertainty::OfY(u) => Spread::OfX(points.each(u, of_resistance)),
        };
        let basis = if needed == 3 { Basis::SteinhartHart } else { Basis::powers(&log, 0, 3, 0.0) };
        Curve::fit(basis, &log, &reciprocal, &spread, four.get(..needed).unwrap_or_default())?
    };
    let coefficient = |i: usize| curve.value_of(i);
    let (a, b, c, d) = (coefficient(0), coefficient(1), coefficient(2), coefficient(3));
    let range_celsius = {
        let temperatures = different(points.x.iter().copied());
        [temperatures.first(), temperatures.last()].map(|t| t.copied().unwrap_or(f64::NAN))
    };
    let law = match form {
        ThermistorForm::SteinhartHart => Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius }),
        ThermistorForm::LogarithmOfRatio { reference_ohms } => {
            Law::LogarithmOfRatio(LogarithmOfRatio { reference_ohms, a, b, c, d, range_celsius })
        }
        ThermistorForm::ReciprocalOfTemperature { reference_ohms } => {
            Law::ReciprocalOfTemperature(ReciprocalOfTemperature { reference_ohms, a, b, c, d, range_celsius })
        }
    };
    Thermistor::new(law)?;
    let kelvin = points.x.iter().zip(points.y).map(|(t, r)| law.celsius_from_ohms(*r) - t).collect();
    Ok(ThermistorFit { curve, law, kelvin })
}

impl ThermistorFit {
    /// Returns the temperature of a resistance with its intervals.
    ///
    /// - `ohms`: within the resistances of the range of the law, Ω.
    /// - `coverage`: as for [`Curve::inverse`], but its uncertainty of a single reading is of the resistance, Ω.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the law; as [`Curve::inverse`].
    pub fn temperature(&self, ohms: f64, coverage: &Coverage) -> Result<FittedTemperature, Error> {
        let celsius = Thermistor::new(self.law)?.celsius_from_ohms(ohms)?;
        let kelvin = celsius + ICE_KELVIN;
        let k = self.curve.coverage_factor(coverage.probability)?;
        let repeats = f64::from(coverage.repeats.max(1));
        // both regressions end in 1/T: u(T) = T² u(1/T), and u(1/T) = u(ln R)/|d ln R/d(1/T)|
        let (variable, per_log) = match self.law {
            Law::LogarithmOfRatio(_) => (1.0 / kelvin, 1.0 / self.curve.slope(1.0 / kelvin).abs()),
            Law::ReciprocalOfTemperature(form) => {
                let log = ln(ohms / form.reference_ohms);
                (log, self.curve.slope(log).abs())
            }
            _ => (ln(ohms), self.curve.slope(ln(ohms)).abs()),
        };
        let own = self.curve.standard_uncertainty(variable);
        let direct = !matches!(self.law, Law::LogarithmOfRatio(_));
        let square = kelvin * kelvin;
        let standard_uncertainty = square * if direct { own } else { own * per_log };
        let scatter = match coverage.reading_uncertainty {
            Some(u) => {
                square * per_log * Range::new("standard uncertainty of a reading", "Ω", 0.0, f64::MAX).check(u)? / ohms
            }
            None => self.scatter_kelvin(),
        };
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

    /// Root of the sum of the squares of the residuals in kelvin over the degrees of freedom.
    fn scatter_kelvin(&self) -> f64 {
        let free = self.curve.statistics().degrees_of_freedom;
        let sum: f64 = self.kelvin.iter().map(|r| r * r).sum();
        if free > 0 { sqrt(sum / free as f64) } else { 0.0 }
    }

    /// Returns the residual standard deviation in kelvin, NaN without a spare point.
    #[must_use]
    pub fn residual_standard_deviation_kelvin(&self) -> f64 {
        if self.curve.statistics().degrees_of_freedom > 0 { self.scatter_kelvin() } else { f64::NAN }
    }
}
