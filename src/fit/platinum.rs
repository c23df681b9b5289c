//! Platinum: R₀, A, B, C from points.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::FitError;
use super::basis::Basis;
use super::curve::{Coverage, Curve, Inverse, different, enough};
use super::points::{Points, Uncertainty};
use crate::Error;
use crate::platinum::{Coefficients, Platinum};
use crate::range::Range;

/// What becomes of C.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Fourth {
    /// Fitted where the points support it, by the rule of [`platinum`].
    #[default]
    Auto,
    /// Fitted.
    Fit,
    /// Held at 0.
    Zero,
}

/// A platinum curve from points.
#[derive(Clone, Debug)]
pub struct PlatinumFit {
    /// The curve: resistance in Ω of a temperature in °C. Its coefficients are R₀, A, B and C as far as they were fitted.
    pub curve: Curve,
    /// The law.
    pub coefficients: Coefficients,
    /// What was decided about C and the range, in words.
    pub note: String,
    /// Which points were used, in order; a point below 0 °C that cannot be is left out.
    pub used: Vec<bool>,
}

impl PlatinumFit {
    /// Returns the temperature of a resistance with its intervals, °C.
    ///
    /// # Errors
    /// As [`Curve::inverse`].
    pub fn temperature(&self, ohms: f64, coverage: &Coverage) -> Result<Inverse, Error> {
        self.curve.inverse(ohms, coverage)
    }
}

/// Lowest temperature from which C is fitted when nothing says how uncertain it is, °C: there its term is some 0.005 K.
const COLD: f64 = -40.0;

/// Fits R = R₀ (1 + A t + B t² + C (t − 100 °C) t³), C for t < 0 °C alone.
///
/// Linear in R₀, R₀A, R₀B, R₀C; what is minimised are residuals in Ω. The rule for C (`Fourth::Auto`):
///
/// - no point below 0 °C: C is held at 0, the range begins at 0 °C or at the lowest point;
/// - too few different temperatures to fit C: points below 0 °C are left out, C is held at 0, the range is 0 °C and above;
/// - C can be fitted but its 95 % interval includes 0: C is held at 0, all points are used, the range is that of the points;
/// - with as many coefficients as points and no stated uncertainties nothing tells how uncertain C is: it is fitted if the lowest
///   point lies at or below −40 °C, else the points below 0 °C are left out;
/// - else C is fitted.
///
/// - `points`: x temperatures, °C (ITS-90), −273.15 to 1000; y resistances, Ω, above 0.
/// - `r0_ohms`: R₀ held at this value, or `None` to fit it.
/// - Returns the law with the range of the points used. Uncertainties of A, B, C follow from the fitted products to first order.
///
/// # Errors
/// `FitError::Point`, `FitError::TooFew`, `FitError::Dependent` as for a polynomial; `FitError::Unusable` for a curve that does not
/// rise all over its range.
/// # Source
/// IEC 60751:2008, the interpolating equation; round trips of curves at 50 digits in tests/fit.rs. The rule is our own.
/// # Example
/// ```
/// use ohmwright::fit::{Fourth, Points, platinum};
///
/// // IEC 60751:2008, table of a 100 Ω element at 0, 100, 200 and 300 °C
/// let points = Points::new(&[0.0, 100.0, 200.0, 300.0], &[100.00, 138.51, 175.86, 212.05]);
/// let fit = platinum(&points, None, Fourth::Auto)?;
/// assert!((fit.coefficients.a - 3.9083e-3).abs() < 1e-6);
/// assert_eq!(fit.coefficients.range_celsius, [0.0, 300.0]);
/// assert!(platinum(&Points::new(&[0.0, 100.0], &[100.0, 138.5]), None, Fourth::Auto).is_err());
/// # Ok::<(), ohmwright::fit::FitError>(())
/// ```
pub fn platinum(points: &Points<'_>, r0_ohms: Option<f64>, fourth: Fourth) -> Result<PlatinumFit, FitError> {
    let resistance = Range::new("resistance", "Ω", f64::MIN_POSITIVE, f64::MAX);
    points.check(Range::new("temperature", "°C", -273.15, 1000.0), resistance)?;
    if let Some(r0) = r0_ohms {
        Range::new("resistance at 0 °C", "Ω", f64::MIN_POSITIVE, f64::MAX).check(r0)?;
    }
    let free = 2 + usize::from(r0_ohms.is_none());
    // with R₀ held a point at 0 °C says nothing about the others
    let telling = |t: &f64| r0_ohms.is_none() || *t != 0.0;
    let above = different(points.x.iter().copied().filter(|t| *t >= 0.0).filter(telling));
    let below = different(points.x.iter().copied().filter(|t| *t < 0.0));
    let all = above.len() + below.len();
    let lowest = below.first().copied();

    let with = |lowest: f64, fourth: bool| Candidate::new(points, r0_ohms, lowest, fourth);
    let everything = f64::NEG_INFINITY;
    let needed = |n: usize, have: Vec<f64>, what: &'static str| enough(have, n, what, "°C");
    let every = || different(points.x.iter().copied().filter(telling));
    match (fourth, lowest) {
        (Fourth::Fit, None) => Err(FitError::NotCovered { what: "C needs points below 0 °C, and there are none" }),
        (Fourth::Fit, Some(_)) => {
            needed(free + 1, every(), "temperatures")?;
            with(everything, true)?.finish("C fitted as asked for".into())
        }
        (Fourth::Zero, _) => {
            needed(free, every(), "temperatures")?;
            with(everything, false)?.finish("C held at 0 as asked for".into())
        }
        (Fourth::Auto, None) => {
            needed(free, above, "temperatures at or above 0 °C")?;
            with(everything, false)?.finish("C held at 0: no point lies below 0 °C, where it belongs".into())
        }
        (Fourth::Auto, Some(cold)) => {
            let out = |why: &str| -> Result<PlatinumFit, FitError> {
                needed(free, above.clone(), "temperatures at or above 0 °C")?;
                with(0.0, false)?.finish(format!(
                    "C held at 0 and the range limited to 0 °C and above: {why}; points below 0 °C are left out"
                ))
            };
            if all <= free {
                return out("there are too few different temperatures to fit it");
            }
            let full = with(everything, true)?;
            if full.0.curve.statistics().coverage_degrees_of_freedom == 0.0 {
                if cold <= COLD {
                    return full.finish(format!("C fitted: the lowest point, {cold} °C, lies at or below {COLD} °C"));
                }
                return out(&format!(
                    "no spare point tells how uncertain it is, and the lowest point, {cold} °C, lies above {COLD} °C"
                ));
            }
            full.settle(|| with(everything, false))
        }
    }
}

/// A fit that is not yet settled on.
struct Candidate(PlatinumFit);

impl Candidate {
    /// Fits the points from this temperature on, with or without C.
    fn new(points: &Points<'_>, r0_ohms: Option<f64>, lowest: f64, fourth: bool) -> Result<Self, FitError> {
        let used: Vec<bool> = points.x.iter().map(|t| *t >= lowest).collect();
        let pick = |values: &[f64]| -> Vec<f64> {
            values.iter().zip(&used).filter(|(_, used)| **used).map(|(v, _)| *v).collect()
        };
        let (x, all) = (pick(points.x), pick(points.y));
        let u = match points.uncertainty {
            Uncertainty::None => Vec::new(),
            Uncertainty::OfX(u) | Uncertainty::OfY(u) => pick(u),
        };
        let uncertainty = match points.uncertainty {
            Uncertainty::None => Uncertainty::None,
            Uncertainty::OfX(_) => Uncertainty::OfX(&u),
            Uncertainty::OfY(_) => Uncertainty::OfY(&u),
        };
        // what a held R₀ explains is taken off first
        let y: Vec<f64> = all.iter().map(|r| r - r0_ohms.unwrap_or(0.0)).collect();
        let spread = Points { x: &x, y: &y, uncertainty }.spread();
        let basis = Basis::Platinum { constant: r0_ohms.is_none(), fourth };
        let names = [("R0", ""), ("A", ""), ("B", ""), ("C", "")];
        let names = names.get(usize::from(r0_ohms.is_some())..).unwrap_or_default();
        let mut curve = Curve::fit(basis, &x, &y, &spread, names)?;

        // A = β₁/R₀ and so on: ∂A/∂β₁ = 1/R₀, ∂A/∂R₀ = −A/R₀
        let count = curve.coefficients().len();
        let first = usize::from(r0_ohms.is_none());
        let r0 = r0_ohms.unwrap_or_else(|| curve.value_of(0));
        let mut values = std::vec![r0];
        values.extend((first..count).map(|i| curve.value_of(i) / r0));
        let jacobian: Vec<Vec<f64>> = values
            .iter()
            .enumerate()
            .map(|(row, value)| {
                (0..count)
                    .map(|column| match (row, column) {
                        (0, 0) if first == 1 => 1.0,
                        (0, _) => 0.0,
                        (_, 0) if first == 1 => -value / r0,
                        _ if column + 1 == row + first => 1.0 / r0,
                        _ => 0.0,
                    })
                    .collect()
            })
            .collect();
        curve.transform(&values, &jacobian, &[("R0", "ohm"), ("A", "1/K"), ("B", "1/K2"), ("C", "1/K4")]);
        if let Some(r0) = r0_ohms {
            curve.lift(r0);
        }
        let coefficient = |i: usize| values.get(i).copied().unwrap_or(0.0);
        let coefficients = Coefficients {
            r0_ohms: r0,
            a: coefficient(1),
            b: coefficient(2),
            c: coefficient(3),
            range_celsius: curve.range(),
        };
        Ok(Self(PlatinumFit { curve, coefficients, note: String::new(), used }))
    }

    /// Keeps C where its 95 % interval does not include 0.
    fn settle(self, without: impl FnOnce() -> Result<Self, FitError>) -> Result<PlatinumFit, FitError> {
        let c = self.0.coefficients.c;
        let u = self.0.curve.coefficients().last().map_or(f64::NAN, |c| c.standard_uncertainty);
        let expanded = self.0.curve.coverage_factor(0.95)? * u;
        if c.abs() > expanded {
            let share = 100.0 * expanded / c.abs();
            let share = if share < 0.5 { "less than ±0.5".to_string() } else { format!("±{share:.0}") };
            return self.finish(format!("C fitted: its 95 % interval, {share} % of it, does not include 0"));
        }
        without()?.finish("C held at 0: its 95 % interval includes 0, so that the points do not need it".into())
    }

    fn finish(self, note: String) -> Result<PlatinumFit, FitError> {
        Platinum::new(self.0.coefficients)?;
        Ok(PlatinumFit { note, ..self.0 })
    }
}
