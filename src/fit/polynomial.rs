//! Polynomials: of any quantity, of a transducer's certificate, of thermal output.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::FitError;
use super::basis::{Basis, HIGHEST};
use super::curve::{Curve, different, enough};
use super::points::Points;
use crate::Error;
use crate::range::Range;
use crate::strain::{Certificate, ThermalOutput, Transducer};

/// Which polynomial is wanted: y = a₀ + a₁ (x − about) + a₂ (x − about)² + …
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Polynomial {
    /// Highest power, 1 to 6.
    pub degree: usize,
    /// The x from which powers are taken.
    pub about: f64,
    /// Whether a₀ is held at 0.
    pub through_zero: bool,
}

impl Polynomial {
    /// Returns a polynomial of this degree in powers of x itself, with a constant.
    #[must_use]
    pub const fn of_degree(degree: usize) -> Self {
        Self { degree, about: 0.0, through_zero: false }
    }
}

const ANY: Range = Range::new("value", "", f64::MIN, f64::MAX);

/// Fits a polynomial to points.
///
/// Solved in powers of (x − centre)/half-width, in twice the working precision; coefficients of published powers follow exactly.
///
/// - `points`: x and y in any units, at least as many different x as there are coefficients.
/// - `wanted`: degree 1 to 6.
/// - Returns the curve; its coefficients a₀, a₁, … in the unit of y over that of x to the power (a₀ is left out where it is held).
///
/// # Errors
/// `FitError::Point` for a number that is none, `FitError::TooFew` with what there is, `FitError::Unusable` for a degree outside
/// 1 to 6 and slices of different length, `FitError::Dependent` for values of x too close together.
/// # Source
/// NIST/SEMATECH e-Handbook of Statistical Methods, 4.4.3.1 (least squares); NIST/ITL Statistical Reference Datasets, Pontius, and
/// JCGM 100:2008, H.3, in tests/fit.rs.
/// # Example
/// ```
/// use ohmwright::fit::{Points, Polynomial, polynomial};
///
/// // by hand: slope 23/10, constant 4/5
/// let line = polynomial(&Points::new(&[0.0, 1.0, 2.0, 3.0], &[1.0, 3.0, 5.0, 8.0]), Polynomial::of_degree(1))?;
/// assert!((line.coefficients()[1].value - 2.3).abs() < 1e-15);
/// assert!(polynomial(&Points::new(&[1.0, 1.0], &[1.0, 3.0]), Polynomial::of_degree(1)).is_err());
/// # Ok::<(), ohmwright::fit::FitError>(())
/// ```
pub fn polynomial(points: &Points<'_>, wanted: Polynomial) -> Result<Curve, FitError> {
    fit(points, wanted, "values of x", "", |k| (format!("a{k}"), String::new()))
}

fn fit(
    points: &Points<'_>,
    wanted: Polynomial,
    what: &'static str,
    unit: &'static str,
    term: impl Fn(usize) -> (String, String),
) -> Result<Curve, FitError> {
    points.check(ANY, ANY)?;
    let degree = Range::new("degree of the polynomial", "", 1.0, HIGHEST as f64).check(wanted.degree as f64)? as usize;
    let about = Range::new("place from which powers are taken", "", f64::MIN, f64::MAX).check(wanted.about)?;
    let from = usize::from(wanted.through_zero);
    // a point at the held zero says nothing
    let have = different(points.x.iter().copied().filter(|x| from == 0 || *x != about));
    enough(have, degree + 1 - from, what, unit)?;
    let terms: Vec<(String, String)> = (from..=degree).map(term).collect();
    let terms: Vec<(&str, &str)> = terms.iter().map(|(n, u)| (n.as_str(), u.as_str())).collect();
    Curve::fit(Basis::powers(points.x, from, degree, about), points.x, points.y, &points.spread(), &terms)
}

/// Coefficients with a₀ in the first place, held or not.
fn padded(curve: &Curve, held: bool) -> [f64; HIGHEST + 1] {
    let mut out = [0.0; HIGHEST + 1];
    let slots = out.iter_mut().skip(usize::from(held));
    for (slot, c) in slots.zip(curve.coefficients()) {
        *slot = c.value;
    }
    out
}

/// The polynomial of a transducer: output of a load.
#[derive(Clone, Debug)]
pub struct TransducerFit {
    /// The curve: output, in the unit of the points, of a load.
    pub curve: Curve,
    /// Its coefficients, lowest power first; 0 above the degree, and for a constant that was held.
    pub coefficients: [f64; HIGHEST + 1],
    /// Lowest and highest load; of a polynomial through zero, 0 too.
    pub range: [f64; 2],
}

impl TransducerFit {
    /// Returns the law, checked: an output of each load, a load of each output.
    ///
    /// - `output_exponent`: power of ten of the unit of the output, −3 for mV/V.
    ///
    /// # Errors
    /// `Error::Unfit` for a polynomial that turns back within its range.
    pub fn transducer(&self, output_exponent: i8) -> Result<Transducer, Error> {
        let law = Transducer::Certificate(Certificate {
            coefficients: self.coefficients,
            gives_output: true,
            output_exponent,
            load_scale: 1.0,
            range: self.range,
        });
        law.check()?;
        Ok(law)
    }
}

/// Fits the polynomial of a transducer's certificate, output = a₀ + a₁ load + a₂ load² + …
///
/// - `points`: x the loads, y the outputs, in any units.
/// - `degree`: 1 to 6; `through_zero`: whether a₀ is held at 0, as for outputs from which the reading without load was taken off.
/// - Returns the polynomial with its range; [`Curve::inverse`] of its curve is the load of an output with its interval.
///
/// # Errors
/// As [`polynomial`], and `FitError::Unusable` for a polynomial that turns back within the range of the points.
/// # Source
/// NIST/ITL Statistical Reference Datasets, Pontius, and NIST/SEMATECH e-Handbook, 4.5.2.1; tests/fit.rs.
pub fn transducer(points: &Points<'_>, degree: usize, through_zero: bool) -> Result<TransducerFit, FitError> {
    let wanted = Polynomial { degree, about: 0.0, through_zero };
    let curve = fit(points, wanted, "loads", "", |k| (format!("a{k}"), String::new()))?;
    let [mut low, mut high] = curve.range();
    if through_zero {
        (low, high) = (low.min(0.0), high.max(0.0));
    }
    let fit = TransducerFit { coefficients: padded(&curve, through_zero), curve, range: [low, high] };
    fit.transducer(0)?;
    Ok(fit)
}

/// The polynomial of thermal output.
#[derive(Clone, Debug)]
pub struct ThermalOutputFit {
    /// The curve: microstrain of a temperature in °C.
    pub curve: Curve,
    /// Its order.
    pub degree: usize,
    /// Why it has that order, in words.
    pub note: String,
    /// The law, for temperatures between those of the points.
    pub thermal_output: ThermalOutput,
}

/// Size of a term, as a share of the largest thermal output, below which it is rounding.
const ROUNDING: f64 = 1e-12;

/// Probability of the test that a higher power adds something.
const SIGNIFICANCE: f64 = 0.95;

/// Fits the polynomial of thermal output, microstrain = a₀ + a₁ T + a₂ T² + … up to the sixth power of T in °C.
///
/// Without a stated degree: from the straight line upwards, the highest power that adds something (its F ratio, which is the
/// square of coefficient over uncertainty in orthogonal powers, exceeds the 95 % point of F(1, ν)); the search ends when two powers
/// in turn add nothing, and never goes so high that no spare point is left.
///
/// - `points`: x temperatures, °C; y thermal output, microstrain, of a gauge factor of `gauge_factor`.
/// - `degree`: 1 to 6, or `None` for what the points support.
///
/// # Errors
/// As [`polynomial`]; without a degree at least three different temperatures are needed.
/// # Source
/// ASTM E251 for thermal output; the F test of an added term: N. R. Draper, H. Smith, Applied Regression Analysis, from memory.
pub fn thermal_output(
    points: &Points<'_>,
    degree: Option<usize>,
    gauge_factor: f64,
) -> Result<ThermalOutputFit, FitError> {
    let gauge_factor =
        Range::new("gauge factor of the thermal output", "", f64::MIN_POSITIVE, f64::MAX).check(gauge_factor)?;
    let cold = Range::new("temperature", "°C", -273.15, f64::MAX);
    points.check(cold, Range::new("thermal output", "microstrain", f64::MIN, f64::MAX))?;
    let of_degree = |degree: usize| {
        fit(points, Polynomial::of_degree(degree), "temperatures", "°C", |k| {
            let unit = match k {
                0 => "microstrain".to_string(),
                1 => "microstrain/K".to_string(),
                k => format!("microstrain/K{k}"),
            };
            (format!("a{k}"), unit)
        })
    };
    let (curve, degree, note) = match degree {
        Some(degree) => (of_degree(degree)?, degree, format!("order {degree} as asked for")),
        None => {
            let have = different(points.x.iter().copied());
            let most = have.len().saturating_sub(2).min(HIGHEST);
            enough(have, 3, "temperatures", "°C")?;
            let largest = points.y.iter().fold(0.0_f64, |m, y| m.max(y.abs()));
            let mut kept = (of_degree(1)?, 1);
            let mut idle = 0;
            for k in 2..=most {
                let next = of_degree(k)?;
                idle = if next.adds_something(ROUNDING * largest) { 0 } else { idle + 1 };
                if idle == 0 {
                    kept = (next, k);
                } else if idle == 2 {
                    break;
                }
            }
            let (curve, degree) = kept;
            let why = if degree == most && most < HIGHEST {
                format!("order {degree}: as high as {} different temperatures allow", most + 2)
            } else {
                format!("order {degree}: higher powers add nothing at 95 % (F test)")
            };
            (curve, degree, why)
        }
    };
    let thermal_output = ThermalOutput {
        coefficients: padded(&curve, false),
        fahrenheit: false,
        gauge_factor,
        range_celsius: curve.range(),
    };
    thermal_output.check()?;
    Ok(ThermalOutputFit { curve, degree, note, thermal_output })
}

impl Curve {
    /// Whether the highest power is more than scatter, and more than rounding of this size.
    fn adds_something(&self, rounding: f64) -> bool {
        let Some((value, uncertainty)) = self.last_scaled() else { return false };
        let Ok(k) = self.coverage_factor(SIGNIFICANCE) else { return false };
        value.abs() > rounding && value.abs() > k * uncertainty
    }
}
