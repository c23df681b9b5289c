//! Curves that are not linear in their coefficients.

use std::vec::Vec;

use super::FitError;
use super::curve::{different, enough};
use super::points::Points;
use super::solve::{Dependent, Solution, least_squares};
use crate::math::{Double, Dual, Real, exp, ln, sqrt};
use crate::range::Range;
use crate::thermistor::ICE_KELVIN;

/// Iterations allowed.
const MOST: usize = 5000;

/// A least-squares curve that is not linear in its P coefficients.
#[derive(Clone, Debug, PartialEq)]
pub struct NonlinearFit<const P: usize> {
    /// The coefficients.
    pub coefficients: [f64; P],
    /// Their standard uncertainties; NaN where there are no spare points.
    pub standard_uncertainties: [f64; P],
    /// Their covariance, to first order.
    pub covariance: [[f64; P]; P],
    /// y less the curve, one each point.
    pub residuals: Vec<f64>,
    /// √(Σ residual²/ν), in the unit of y; NaN where ν = 0.
    pub residual_standard_deviation: f64,
    /// Points less coefficients.
    pub degrees_of_freedom: usize,
    /// Condition number of the derivatives at equal length.
    pub condition: f64,
    /// Iterations made.
    pub iterations: usize,
}

/// Residuals, columns of derivatives and the sum of squares at these coefficients; `None` where the model has no number.
struct Place {
    residuals: Vec<f64>,
    columns: Vec<Vec<f64>>,
    square: f64,
}

impl Place {
    fn new<const P: usize>(
        x: &[f64],
        y: &[f64],
        at: &[f64; P],
        model: &impl Fn(f64, &[Dual; P]) -> Dual,
    ) -> Option<Self> {
        let mut columns = Vec::with_capacity(P);
        let mut residuals: Vec<f64> = Vec::new();
        for k in 0..P {
            let mut seeded = at.map(Dual::constant);
            if let Some(slot) = seeded.get_mut(k) {
                slot.slope = 1.0;
            }
            let values: Vec<Dual> = x.iter().map(|x| model(*x, &seeded)).collect();
            if k == 0 {
                residuals = y.iter().zip(&values).map(|(y, v)| y - v.value).collect();
            }
            columns.push(values.iter().map(|v| v.slope).collect::<Vec<f64>>());
        }
        let square: f64 = residuals.iter().map(|r| r * r).sum();
        let sound = square.is_finite() && columns.iter().flatten().all(|d| d.is_finite());
        sound.then_some(Self { residuals, columns, square })
    }

    /// Minus the second derivative of the curve along a step, from the curve a share `BEND` of it ahead.
    fn bend<const P: usize>(
        &self,
        step: &Solution,
        x: &[f64],
        y: &[f64],
        ahead: &[f64; P],
        model: &impl Fn(f64, &[Dual; P]) -> Dual,
    ) -> Option<Vec<f64>> {
        let at = ahead.map(Dual::constant);
        let residuals = x.iter().zip(y).map(|(x, y)| y - model(*x, &at).value);
        // r(h) = r − h J δ − h²/2 f″
        let second =
            |(i, (there, here)): (usize, (f64, &f64))| 2.0 / BEND * ((there - here) / BEND + self.change(step, i));
        let bent: Vec<f64> = residuals.zip(&self.residuals).enumerate().map(second).collect();
        bent.iter().all(|b| b.is_finite()).then_some(bent)
    }

    /// J δ at one point.
    fn change(&self, step: &Solution, point: usize) -> f64 {
        self.columns.iter().zip(&step.coefficients).filter_map(|(c, d)| Some(c.get(point)? * d.value())).sum()
    }

    /// The step that makes |J δ − r|² + λ |D δ|² least, r the residuals or whatever stands in their place.
    fn step(&self, residuals: &[f64], damping: f64, lengths: &[f64]) -> Result<Solution, Dependent> {
        let extended: Vec<Vec<Double>> = self
            .columns
            .iter()
            .enumerate()
            .map(|(k, column)| {
                let below = lengths.iter().enumerate().map(|(j, d)| if j == k { sqrt(damping) * d } else { 0.0 });
                column.iter().copied().chain(below.filter(|_| damping > 0.0)).map(Double::from_f64).collect()
            })
            .collect();
        let zeros = if damping > 0.0 { lengths.len() } else { 0 };
        let right: Vec<Double> =
            residuals.iter().copied().chain((0..zeros).map(|_| 0.0)).map(Double::from_f64).collect();
        least_squares(&extended, &right)
    }
}

/// Share of a step at which the curvature along it is looked at.
const BEND: f64 = 0.1;

/// The coefficients after a share of a step; `None` where one of them is no number.
fn moved<const P: usize>(at: &[f64; P], step: &Solution, share: f64) -> Option<[f64; P]> {
    let mut to = *at;
    for (to, d) in to.iter_mut().zip(&step.coefficients) {
        *to += share * d.value();
    }
    to.iter().all(|t| t.is_finite()).then_some(to)
}

/// |D δ|.
fn length_of(step: &Solution, lengths: &[f64]) -> f64 {
    let parts = step.coefficients.iter().zip(lengths).map(|(s, l)| s.value() * l);
    sqrt(parts.map(|p| p * p).sum())
}

/// Largest share by which a step changes a coefficient.
fn share<const P: usize>(at: &[f64; P], step: &Solution) -> f64 {
    at.iter().zip(&step.coefficients).map(|(a, d)| (d.value() / a).abs()).fold(0.0, f64::max)
}

/// Fits a curve y = f(x; p) by the method of Levenberg and Marquardt, with derivatives from dual numbers.
///
/// Damping by Nielsen's rule over columns of equal length, and a second-order step along bent valleys; when the sum of squares falls no further, steps of
/// Gauss and Newton go on until they no longer shrink.
///
/// - `x`, `y`: the points, of one length, at least as many as coefficients.
/// - `start`: where to begin; none of them 0, since steps are judged as shares.
/// - `model`: f; any arithmetic of dual numbers.
///
/// # Errors
/// `FitError::Point` for a number that is none, `FitError::TooFew`, `FitError::Dependent` where the points do not determine a
/// coefficient, `FitError::NotConverged`.
/// # Source
/// D. W. Marquardt, J. SIAM 11 (1963) 431; H. B. Nielsen, report
/// IMM-REP-1999-05 (damping); M. K. Transtrum, J. P. Sethna, arXiv:1201.5885 (second-order step); from memory. NIST/ITL Statistical Reference Datasets, MGH10, in tests/fit.rs.
pub fn nonlinear<const P: usize>(
    x: &[f64],
    y: &[f64],
    start: [f64; P],
    model: impl Fn(f64, &[Dual; P]) -> Dual,
) -> Result<NonlinearFit<P>, FitError> {
    let any = Range::new("value", "", f64::MIN, f64::MAX);
    Points::new(x, y).check(any, any)?;
    enough(different(x.iter().copied()), P, "values of x", "")?;
    let named = |Dependent(k): Dependent| FitError::Dependent { name: std::format!("b{}", k + 1) };
    let mut at = start;
    let mut place = Place::new(x, y, &at, &model).ok_or(crate::Error::NotFinite {
        what: "the curve, or a derivative of it, at the coefficients to begin with,",
    })?;
    let column_lengths =
        |place: &Place| -> Vec<f64> { place.columns.iter().map(|c| sqrt(c.iter().map(|d| d * d).sum())).collect() };
    let mut lengths = column_lengths(&place);
    let (mut damping, mut growth) = (1e-3, 2.0);
    let mut iterations = 0;
    let mut idle = 0;
    while iterations < MOST && idle < 4 {
        iterations += 1;
        for (d, new) in lengths.iter_mut().zip(column_lengths(&place)) {
            *d = new;
        }
        let step = place.step(&place.residuals, damping, &lengths).map_err(named)?;
        // the path of steepest descent is bent: half of what its curvature asks for goes on top, unless that is most of it
        let bent = moved(&at, &step, BEND).and_then(|to| place.bend(&step, x, y, &to, &model));
        let second = match bent {
            Some(residuals) => Some(place.step(&residuals, damping, &lengths).map_err(named)?),
            None => None,
        };
        let ratio = second.as_ref().map_or(0.0, |s| 2.0 * length_of(s, &lengths) / length_of(&step, &lengths));
        let to = moved(&at, &step, 1.0).and_then(|to| match &second {
            Some(second) => moved(&to, second, 0.5),
            None => Some(to),
        });
        let trial = to.filter(|_| ratio <= 0.75).and_then(|to| Some((to, Place::new(x, y, &to, &model)?)));
        // what the linear model promises: |r|² − |r − J δ|²
        let left: f64 = place
            .residuals
            .iter()
            .enumerate()
            .map(|(i, r)| {
                let change = place.change(&step, i);
                (r - change) * (r - change)
            })
            .sum();
        let promised = place.square - left;
        match trial {
            Some((to, next)) if next.square < place.square => {
                let gain = (place.square - next.square) / promised;
                let small = share(&at, &step) < 1e-10 || place.square - next.square < 1e-14 * place.square;
                idle = if small { idle + 1 } else { 0 };
                let t = 2.0 * gain - 1.0;
                damping = (damping * (1.0 - t * t * t).max(1.0 / 3.0)).max(1e-30);
                growth = 2.0;
                (at, place) = (to, next);
            }
            _ => {
                if share(&at, &step) < 1e-10 {
                    idle += 1;
                }
                damping *= growth;
                growth *= 2.0;
                if !f64::is_finite(damping) {
                    return Err(FitError::NotConverged { iterations });
                }
            }
        }
    }
    if idle < 4 {
        return Err(FitError::NotConverged { iterations });
    }
    // the sum of squares is level to rounding; steps still tell where its minimum is
    let mut last = f64::INFINITY;
    for _ in 0..50 {
        let step = place.step(&place.residuals, 0.0, &lengths).map_err(named)?;
        let size = share(&at, &step);
        if size >= 0.5 * last && size < 1e-9 {
            break;
        }
        let Some((to, next)) = moved(&at, &step, 1.0).and_then(|to| Some((to, Place::new(x, y, &to, &model)?))) else {
            break;
        };
        if size > 0.1 {
            return Err(FitError::NotConverged { iterations });
        }
        // what rounding of the curve can do to the sum of squares
        let noise: f64 = place.residuals.iter().zip(y).map(|(r, y)| (r.abs() + f64::EPSILON * y.abs()) * y.abs()).sum();
        if next.square > place.square * (1.0 + 1e-9) + 16.0 * f64::EPSILON * noise {
            break;
        }
        (at, place, last) = (to, next, size);
        iterations += 1;
        if size == 0.0 {
            break;
        }
    }
    let solution = place.step(&place.residuals, 0.0, &lengths).map_err(named)?;
    let free = x.len().saturating_sub(P);
    let deviation = if free > 0 { sqrt(place.square / free as f64) } else { f64::NAN };
    let mut covariance = [[0.0; P]; P];
    let mut standard_uncertainties = [0.0; P];
    for ((row, u), a) in covariance.iter_mut().zip(&mut standard_uncertainties).zip(&solution.root) {
        for (slot, b) in row.iter_mut().zip(&solution.root) {
            let sum = a.iter().zip(b).fold(Double::from_f64(0.0), |s, (a, b)| s + *a * *b);
            *slot = deviation * deviation * sum.value();
        }
        *u = deviation * a.iter().fold(Double::from_f64(0.0), |s, a| s + *a * *a).sqrt().value();
    }
    Ok(NonlinearFit {
        coefficients: at,
        standard_uncertainties,
        covariance,
        residuals: place.residuals,
        residual_standard_deviation: deviation,
        degrees_of_freedom: free,
        condition: solution.condition,
        iterations,
    })
}

/// A thermistor as R = b₁ exp(b₂/(t + b₃)), t in °C.
#[derive(Clone, Debug, PartialEq)]
pub struct VogelFit {
    /// b₁ in Ω, b₂ and b₃ in K, with what is known about them.
    pub fit: NonlinearFit<3>,
    /// Lowest and highest temperature of the points, °C.
    pub range_celsius: [f64; 2],
}

/// Fits R = b₁ exp(b₂/(t + b₃)) to a thermistor's points, residuals in Ω minimised.
///
/// Three constants like Steinhart and Hart, but not linear in them; b₃ = 273.15 K would make it the beta equation. No sheet takes this
/// form: it serves to compare.
///
/// - `points`: x temperatures, °C; y resistances, Ω; stated uncertainties are not used.
/// - `start`: where to begin; `None` begins with the beta equation through the coldest and the warmest point.
///
/// # Errors
/// As [`nonlinear`].
/// # Source
/// H. Vogel, Physikalische Zeitschrift 22 (1921) 645, for the form; NIST/ITL Statistical Reference Datasets, MGH10, from both of its
/// starting points in tests/fit.rs.
/// # Example
/// ```
/// use ohmwright::fit::{Points, vogel};
///
/// // made from b = 0.005 Ω, 6200 K, 345 K
/// let celsius = [50.0, 70.0, 90.0, 110.0];
/// let ohms = [32_790.21, 15_389.51, 7_743.09, 4_138.37];
/// let fit = vogel(&Points::new(&celsius, &ohms), None)?.fit;
/// assert!((fit.coefficients[1] / 6200.0 - 1.0).abs() < 1e-3);
/// assert!(vogel(&Points::new(&celsius[..2], &ohms[..2]), None).is_err());
/// # Ok::<(), ohmwright::fit::FitError>(())
/// ```
pub fn vogel(points: &Points<'_>, start: Option<[f64; 3]>) -> Result<VogelFit, FitError> {
    let resistance = Range::new("resistance", "Ω", f64::MIN_POSITIVE, f64::MAX);
    points.check(Range::new("temperature", "°C", -273.0, 1000.0), resistance)?;
    enough(different(points.x.iter().copied()), 3, "temperatures", "°C")?;
    let mut pairs: Vec<(f64, f64)> = points.x.iter().copied().zip(points.y.iter().copied()).collect();
    pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
    let (Some((t1, r1)), Some((t2, r2))) = (pairs.first(), pairs.last()) else {
        return Err(FitError::NotConverged { iterations: 0 });
    };
    let start = start.unwrap_or_else(|| {
        let (k1, k2) = (t1 + ICE_KELVIN, t2 + ICE_KELVIN);
        let beta = ln(r1 / r2) * k1 * k2 / (k2 - k1);
        [r1 * exp(-beta / k1), beta, ICE_KELVIN]
    });
    let model = |t: f64, [b1, b2, b3]: &[Dual; 3]| *b1 * (*b2 / (Dual::constant(t) + *b3)).exp();
    let fit = nonlinear(points.x, points.y, start, model)?;
    Ok(VogelFit { fit, range_celsius: [*t1, *t2] })
}
