//! A fitted curve with what is known about it.

use std::string::String;
use std::vec::Vec;

use super::basis::Basis;
use super::solve::{Dependent, least_squares};
use super::{Cell, FitError};
use crate::Error;
use crate::math::distribution::student_quantile;
use crate::math::{Double, Dual, Real, sqrt};
use crate::range::Range;

/// What is known about the scatter of the points.
#[derive(Clone, Debug)]
pub(super) enum Spread {
    /// One unknown standard deviation of y.
    Equal,
    /// Standard deviations of y in these proportions.
    Proportional(Vec<f64>),
    /// Standard uncertainties of y.
    OfY(Vec<f64>),
    /// Standard uncertainties of x.
    OfX(Vec<f64>),
}

/// One coefficient of a curve.
#[derive(Clone, Debug, PartialEq)]
pub struct Coefficient {
    /// Its name in the equation.
    pub name: String,
    /// Its unit; empty for a plain number.
    pub unit: String,
    /// Its value.
    pub value: f64,
    /// Its standard uncertainty; NaN where as many points as coefficients leave nothing to judge by, 0 where it was held.
    pub standard_uncertainty: f64,
}

/// What is left of one point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Residual {
    /// The independent variable of the regression.
    pub x: f64,
    /// The dependent variable of the regression.
    pub y: f64,
    /// The curve there.
    pub fitted: f64,
    /// y − fitted.
    pub residual: f64,
    /// Standard deviation that the point was given, in the unit of y (of unweighted points 1).
    pub sigma: f64,
    /// Share of the point in its own fitted value, 0 to 1; the shares add up to the number of coefficients.
    pub leverage: f64,
}

/// How well the points agree with the curve.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Statistics {
    /// Number of points.
    pub points: usize,
    /// Points less coefficients.
    pub degrees_of_freedom: usize,
    /// √(Σ (residual/σ)²/ν): of points without stated uncertainties the residual standard deviation, in the unit of y; of others
    /// a plain number that is about 1 when the stated uncertainties are right. NaN where ν = 0.
    pub residual_standard_deviation: f64,
    /// Whether the points came with uncertainties.
    pub stated: bool,
    /// Condition number of the columns at equal length: what rounding in the points is multiplied by at most.
    pub condition: f64,
    /// Degrees of freedom that coverage factors are taken for: ν, or ∞ where the stated uncertainties count.
    pub coverage_degrees_of_freedom: f64,
}

/// How an interval is wanted.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Coverage {
    /// Probability that the interval holds the value, above 0 and below 1; 0.95 by default.
    pub probability: f64,
    /// Number of readings of which the reading is the mean; 1 by default.
    pub repeats: u32,
    /// Standard uncertainty of a single reading in the unit of y; by default the residual standard deviation, or the root mean
    /// square of the points' stated uncertainties.
    pub reading_uncertainty: Option<f64>,
}

impl Default for Coverage {
    fn default() -> Self {
        Self { probability: 0.95, repeats: 1, reading_uncertainty: None }
    }
}

/// The x that a reading y belongs to, with two intervals.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Inverse {
    /// The x at which the curve is y.
    pub x: f64,
    /// Slope of the curve there.
    pub slope: f64,
    /// Standard uncertainty of x, to first order.
    pub standard_uncertainty: f64,
    /// Coverage factor from Student's t.
    pub coverage_factor: f64,
    /// x ∓ k u(x): the first-order interval.
    pub handbook: [f64; 2],
    /// All x at which y lies within the prediction band of the curve; for a straight line the interval of Fieller. An end is
    /// infinite where the band does not leave y within one width of the range beyond it.
    pub exact: [f64; 2],
}

/// A least-squares curve y(x) with the covariance of its coefficients.
///
/// Points without uncertainties are taken to scatter alike, and the covariance follows from their residuals. With standard
/// uncertainties the points are weighted by them and the covariance follows from them, multiplied by χ²/ν where that exceeds 1
/// (the square of the Birge ratio): a scatter larger than stated is believed, a smaller one is not.
#[derive(Clone, Debug)]
pub struct Curve {
    basis: Basis,
    scaled: Vec<f64>,
    /// Held part of the curve.
    constant: f64,
    root: Vec<Vec<f64>>,
    factor: f64,
    reading: f64,
    range: [f64; 2],
    coefficients: Vec<Coefficient>,
    covariance: Vec<Vec<f64>>,
    statistics: Statistics,
    residuals: Vec<Residual>,
}

/// Σ aₖ bₖ.
fn dot<R: Real>(a: &[f64], b: &[R]) -> R {
    a.iter().zip(b).fold(R::from_f64(0.0), |sum, (a, b)| sum + R::from_f64(*a) * *b)
}

fn double_dot(a: &[Double], b: &[Double]) -> Double {
    a.iter().zip(b).fold(Double::from_f64(0.0), |sum, (a, b)| sum + *a * *b)
}

/// |Kᵀ φ|.
fn length(root: &[Vec<f64>], row: &[f64]) -> f64 {
    let width = root.first().map_or(0, Vec::len);
    let square = (0..width)
        .map(|k| {
            let part: f64 = root.iter().zip(row).filter_map(|(r, f)| Some(r.get(k)? * f)).sum();
            part * part
        })
        .sum();
    sqrt(square)
}

/// A first least-squares curve: coefficients of the basis functions, root of their covariance factor, condition.
struct Raw {
    scaled: Vec<Double>,
    root: Vec<Vec<Double>>,
    condition: f64,
}

fn solve(basis: &Basis, x: &[f64], y: &[f64], sigma: &[f64], names: &[&str]) -> Result<Raw, FitError> {
    let rows: Vec<Vec<Double>> = x
        .iter()
        .zip(sigma)
        .map(|(x, s)| {
            let over = Double::from_f64(*s);
            basis.row(Double::from_f64(*x)).into_iter().map(|f| f / over).collect()
        })
        .collect();
    let columns: Vec<Vec<Double>> =
        (0..basis.len()).map(|k| rows.iter().filter_map(|r| r.get(k).copied()).collect()).collect();
    let y: Vec<Double> = y.iter().zip(sigma).map(|(y, s)| Double::from_f64(*y) / Double::from_f64(*s)).collect();
    let name = |Dependent(j)| FitError::Dependent { name: names.get(j).copied().unwrap_or_default().into() };
    let solution = least_squares(&columns, &y).map_err(name)?;
    Ok(Raw { scaled: solution.coefficients, root: solution.root, condition: solution.condition })
}

impl Curve {
    /// Fits the functions of a basis to points; `terms` are names and units of the published coefficients in order.
    ///
    /// The caller has seen to it that all numbers are finite, slices of one length, and points at least as many as functions.
    pub(super) fn fit(
        basis: Basis,
        x: &[f64],
        y: &[f64],
        spread: &Spread,
        terms: &[(&str, &str)],
    ) -> Result<Self, FitError> {
        let names: Vec<&str> = terms.iter().map(|(name, _)| *name).collect();
        let mut sigma = match spread {
            Spread::Equal | Spread::OfX(_) => std::vec![1.0; x.len()],
            Spread::Proportional(s) | Spread::OfY(s) => s.clone(),
        };
        let mut raw = solve(&basis, x, y, &sigma, &names)?;
        if let Spread::OfX(u) = spread {
            // u(y) = |dy/dx| u(x), with the slope of the curve before; two rounds leave less than anyone's u is known to
            for _ in 0..3 {
                let scaled: Vec<f64> = raw.scaled.iter().map(|c| c.value()).collect();
                sigma.clear();
                for (x, u) in x.iter().zip(u) {
                    let slope = dot(&scaled, &basis.row(Dual::variable(*x))).slope;
                    sigma.push(slope.abs() * u);
                }
                if sigma.iter().any(|s| !(s.is_finite() && *s > 0.0)) {
                    return Err(
                        Error::Unfit { what: "the curve is level at a point whose uncertainty is one of x" }.into()
                    );
                }
                raw = solve(&basis, x, y, &sigma, &names)?;
            }
        }
        if raw.scaled.iter().any(|c| !c.value().is_finite()) {
            return Err(Error::NotFinite { what: "a coefficient of the curve" }.into());
        }
        let stated = matches!(spread, Spread::OfX(_) | Spread::OfY(_));

        let value = |v: &[Double]| v.iter().map(|c| c.value()).collect::<Vec<f64>>();
        let scaled = value(&raw.scaled);
        let root: Vec<Vec<f64>> = raw.root.iter().map(|row| value(row)).collect();
        let mut sum = 0.0;
        let mut residuals = Vec::with_capacity(x.len());
        for ((x, y), s) in x.iter().zip(y).zip(&sigma) {
            let row = basis.row(Double::from_f64(*x));
            let residual = (Double::from_f64(*y) - double_dot(&raw.scaled, &row)).value();
            // what no double can hold beside y is none
            let residual = if residual.abs() < 0.5 * f64::EPSILON * y.abs() { 0.0 } else { residual };
            let share = length(&root, &value(&row)) / s;
            residuals.push(Residual {
                x: *x,
                y: *y,
                fitted: double_dot(&raw.scaled, &row).value(),
                residual,
                sigma: *s,
                leverage: share * share,
            });
            sum += (residual / s) * (residual / s);
        }
        let free = x.len().saturating_sub(basis.len());
        let deviation = if free > 0 { sqrt(sum / free as f64) } else { f64::NAN };
        let inflated = deviation > 1.0;
        let factor = match stated {
            false => deviation,
            true if inflated => deviation,
            true => 1.0,
        };
        let coverage_degrees_of_freedom = if stated && !inflated { f64::INFINITY } else { free as f64 };
        let reading = match spread {
            Spread::Equal => deviation,
            // of no single size: that of the middle of the points, as the root of their mean square
            _ => factor * sqrt(sigma.iter().map(|s| s * s).sum::<f64>() / x.len() as f64),
        };
        let range =
            [x.iter().copied().fold(f64::INFINITY, f64::min), x.iter().copied().fold(f64::NEG_INFINITY, f64::max)];
        let statistics = Statistics {
            points: x.len(),
            degrees_of_freedom: free,
            residual_standard_deviation: deviation,
            stated,
            condition: raw.condition,
            coverage_degrees_of_freedom,
        };
        let mut curve = Self {
            basis,
            scaled,
            constant: 0.0,
            root,
            factor,
            reading,
            range,
            coefficients: Vec::new(),
            covariance: Vec::new(),
            statistics,
            residuals,
        };
        let published = curve.basis.published();
        let values: Vec<Double> = published.iter().map(|row| double_dot(row, &raw.scaled)).collect();
        let roots: Vec<Vec<Double>> = published
            .iter()
            .map(|row| {
                (0..raw.root.len())
                    .map(|k| {
                        let column: Vec<Double> = raw.root.iter().filter_map(|r| r.get(k).copied()).collect();
                        double_dot(row, &column)
                    })
                    .collect()
            })
            .collect();
        curve.publish(&values, &roots, terms);
        Ok(curve)
    }

    /// Sets the published coefficients: values and rows of the root of their covariance.
    pub(super) fn publish(&mut self, values: &[Double], roots: &[Vec<Double>], terms: &[(&str, &str)]) {
        let square = self.factor * self.factor;
        self.covariance =
            roots.iter().map(|a| roots.iter().map(|b| square * double_dot(a, b).value()).collect()).collect();
        self.coefficients = values
            .iter()
            .zip(roots)
            .zip(terms)
            .map(|((value, root), (name, unit))| Coefficient {
                name: (*name).into(),
                unit: (*unit).into(),
                value: value.value(),
                standard_uncertainty: self.factor * double_dot(root, root).sqrt().value(),
            })
            .collect();
    }

    /// Adds a constant that had been taken off y.
    pub(super) fn lift(&mut self, constant: f64) {
        self.constant += constant;
        for r in &mut self.residuals {
            r.y += constant;
            r.fitted += constant;
        }
    }

    /// Multiplies what is published by a matrix, given by rows: first-order propagation into other coefficients.
    pub(super) fn transform(&mut self, values: &[f64], jacobian: &[Vec<f64>], terms: &[(&str, &str)]) {
        let times = |row: &[f64], other: &[f64]| -> f64 {
            row.iter()
                .zip(&self.covariance)
                .map(|(a, c)| a * c.iter().zip(other).map(|(c, b)| c * b).sum::<f64>())
                .sum()
        };
        let covariance: Vec<Vec<f64>> =
            jacobian.iter().map(|a| jacobian.iter().map(|b| times(a, b)).collect()).collect();
        self.coefficients = values
            .iter()
            .zip(terms)
            .enumerate()
            .map(|(i, (value, (name, unit)))| Coefficient {
                name: (*name).into(),
                unit: (*unit).into(),
                value: *value,
                standard_uncertainty: sqrt(covariance.get(i).and_then(|c| c.get(i)).copied().unwrap_or(f64::NAN)),
            })
            .collect();
        self.covariance = covariance;
    }

    /// Returns the coefficients in the order of the equation.
    #[must_use]
    pub fn coefficients(&self) -> &[Coefficient] {
        &self.coefficients
    }

    /// Standard deviation that a new reading is given, in the unit of y.
    pub(super) const fn reading_deviation(&self) -> f64 {
        self.reading
    }

    /// Returns the value of a coefficient by its place, NaN past the end.
    pub(super) fn value_of(&self, index: usize) -> f64 {
        self.coefficients.get(index).map_or(f64::NAN, |c| c.value)
    }

    /// Coefficient of the last basis function and its standard uncertainty.
    pub(super) fn last_scaled(&self) -> Option<(f64, f64)> {
        let row = self.root.last()?;
        Some((*self.scaled.last()?, self.factor * sqrt(row.iter().map(|r| r * r).sum())))
    }

    /// Returns the covariance of the coefficients, one row each; NaN where there are no spare points and no stated
    /// uncertainties.
    #[must_use]
    pub fn covariance(&self) -> &[Vec<f64>] {
        &self.covariance
    }

    /// Returns the correlation coefficients of the coefficients, one row each; a coefficient without uncertainty has 0 with all
    /// others.
    #[must_use]
    pub fn correlation(&self) -> Vec<Vec<f64>> {
        let u: Vec<f64> = self.coefficients.iter().map(|c| c.standard_uncertainty).collect();
        let row = |(i, row): (usize, &Vec<f64>)| {
            row.iter()
                .enumerate()
                .map(|(j, c)| match (u.get(i), u.get(j)) {
                    _ if i == j => 1.0,
                    (Some(a), Some(b)) if *a != 0.0 && *b != 0.0 => (c / (a * b)).clamp(-1.0, 1.0),
                    _ => 0.0,
                })
                .collect()
        };
        self.covariance.iter().enumerate().map(row).collect()
    }

    /// Returns how well the points agree with the curve.
    #[must_use]
    pub const fn statistics(&self) -> &Statistics {
        &self.statistics
    }

    /// Returns what is left of each point, in the order of the points.
    #[must_use]
    pub fn residuals(&self) -> &[Residual] {
        &self.residuals
    }

    /// Returns the lowest and highest x of the points.
    #[must_use]
    pub const fn range(&self) -> [f64; 2] {
        self.range
    }

    /// Returns the curve at x; beyond the points it is extrapolated.
    #[must_use]
    pub fn at(&self, x: f64) -> f64 {
        self.constant + dot(&self.scaled, &self.basis.row(x))
    }

    /// Returns the slope of the curve at x.
    #[must_use]
    pub fn slope(&self, x: f64) -> f64 {
        dot(&self.scaled, &self.basis.row(Dual::variable(x))).slope
    }

    /// Returns the standard uncertainty of the curve at x, `√(φᵀ C φ)`; NaN where there are no spare points.
    ///
    /// # Source
    /// JCGM 100:2008, H.3.4 (equation H.15 for a straight line); tests/fit.rs.
    #[must_use]
    pub fn standard_uncertainty(&self, x: f64) -> f64 {
        self.factor * length(&self.root, &self.basis.row(x))
    }

    /// Returns the coverage factor of this probability from Student's t.
    ///
    /// # Errors
    /// `Error::OutOfRange` for a probability that is not above 0 and below 1, `Error::Missing` where no degree of freedom is left.
    pub fn coverage_factor(&self, probability: f64) -> Result<f64, Error> {
        let what = "coverage probability";
        if probability.is_nan() {
            return Err(Error::NotFinite { what });
        }
        if !(probability > 0.0 && probability < 1.0) {
            return Err(Error::OutOfRange { what, value: probability, min: 0.0, max: 1.0, unit: "" });
        }
        let k = student_quantile(0.5 + 0.5 * probability, self.statistics.coverage_degrees_of_freedom);
        if k.is_nan() {
            return Err(Error::Missing { what: "a spare point, without which nothing can be said about uncertainty," });
        }
        Ok(k)
    }

    /// Returns the coverage factor of what a reading and the curve make together: those of a reading that scatters as the points do
    /// rest on the same degrees of freedom; one whose uncertainty is stated has infinitely many of its own.
    ///
    /// `ν_eff = u⁴/(u_curve⁴/ν)`, rounded down (JCGM 100:2008, G.4.1).
    pub(super) fn factor_of_both(&self, coverage: &Coverage, curve: f64, both: f64) -> Result<f64, Error> {
        let nu = self.statistics.coverage_degrees_of_freedom;
        let k = self.coverage_factor(coverage.probability)?;
        if coverage.reading_uncertainty.is_none() || nu.is_infinite() {
            return Ok(k);
        }
        let share = curve / both;
        let effective = libm::floor(nu / (share * share * share * share) * (1.0 + 1e-12));
        if both <= 0.0 || effective.is_nan() {
            return Ok(k);
        }
        Ok(student_quantile(0.5 + 0.5 * coverage.probability, effective.max(nu)))
    }

    /// Returns the confidence band of the curve at x: what the true curve lies between with this probability.
    ///
    /// - Returns lower and upper end, `y(x) ∓ t u(y(x))`.
    ///
    /// # Errors
    /// As [`coverage_factor`](Self::coverage_factor).
    ///
    /// # Source
    /// N. R. Draper, H. Smith, Applied Regression Analysis, section on the variance of a predicted mean value; from memory.
    pub fn band(&self, x: f64, probability: f64) -> Result<[f64; 2], Error> {
        let half = self.coverage_factor(probability)? * self.standard_uncertainty(x);
        let y = self.at(x);
        Ok([y - half, y + half])
    }

    /// Returns the x of a reading y within the range of the points, with its first-order and its exact interval.
    ///
    /// `x ∓ t √(s²/m + u²(y(x)))/|slope|` is the first-order one; the exact one holds every x with
    /// `|y − y(x)| ≤ t √(s²/m + u²(y(x)))`.
    ///
    /// - `y`: the reading, in the unit of y.
    /// - `coverage`: probability, number of readings of which y is the mean, and the standard uncertainty s of a single one. A stated
    ///   s counts as exactly known: t is then taken for the effective degrees of freedom of both (Welch-Satterthwaite).
    ///
    /// # Errors
    /// `Error::OutOfRange` for a reading that the curve does not reach within the range of the points, unless it lies beyond an end
    /// by no more than the prediction band there; `Error::NotFinite` for NaN or ±∞; as [`coverage_factor`](Self::coverage_factor).
    ///
    /// # Source
    /// NIST/SEMATECH e-Handbook of Statistical Methods, 4.5.2.1 (first order); E. C. Fieller, J. R. Stat. Soc. B 16 (1954) 175
    /// (exact, straight line); tests/fit.rs.
    pub fn inverse(&self, y: f64, coverage: &Coverage) -> Result<Inverse, Error> {
        let [low, high] = self.range;
        let ends = [self.at(low), self.at(high)];
        let (least, most) = (
            ends.iter().copied().fold(f64::INFINITY, f64::min),
            ends.iter().copied().fold(f64::NEG_INFINITY, f64::max),
        );
        self.coverage_factor(coverage.probability)?;
        let own = coverage.reading_uncertainty.unwrap_or(self.reading);
        let own = Range::new("standard uncertainty of a reading", "", 0.0, f64::MAX).check(own)?;
        let variance = own * own / f64::from(coverage.repeats.max(1));
        let spread = |x: f64| {
            let u = self.standard_uncertainty(x);
            sqrt(variance + u * u)
        };
        let factor =
            |x: f64| self.factor_of_both(coverage, self.standard_uncertainty(x), spread(x)).unwrap_or(f64::NAN);
        let beyond = |end: f64| {
            // the nearest end, where the curve still is y as far as anyone can tell
            let near = (y - self.at(end)).abs() <= factor(end) * spread(end);
            near.then(|| (0..8).fold(end, |x, _| x - (self.at(x) - y) / self.slope(x)))
        };
        let within = Range::new("reading", "", least, most).check(y);
        let x = match within {
            Ok(_) => bisect(low, high, |x| self.at(x) - y),
            Err(error) => {
                let end = if (y < least) == (self.at(low) <= self.at(high)) { low } else { high };
                beyond(end).filter(|x| x.is_finite()).ok_or(error)?
            }
        };
        let slope = self.slope(x);
        let standard_uncertainty = spread(x) / slope.abs();
        let coverage_factor = factor(x);
        let half = coverage_factor * standard_uncertainty;
        let outside = |x: f64| (y - self.at(x)).abs() - coverage_factor * spread(x);
        let end = |sign: f64| {
            let limit = if sign < 0.0 { low - (high - low) } else { high + (high - low) };
            // outwards in doubling steps until y has left the band
            let mut inner = x;
            let mut step = half.max(f64::MIN_POSITIVE);
            loop {
                let outer = x + sign * step;
                if outside(outer) > 0.0 {
                    return bisect(inner, outer, outside);
                }
                if sign * (outer - limit) > 0.0 || !outer.is_finite() {
                    return sign * f64::INFINITY;
                }
                inner = outer;
                step *= 2.0;
            }
        };
        let exact = if half == 0.0 { [x, x] } else { [end(-1.0), end(1.0)] };
        Ok(Inverse { x, slope, standard_uncertainty, coverage_factor, handbook: [x - half, x + half], exact })
    }
}

/// The place between two where a function changes its sign.
pub(super) fn bisect(from: f64, to: f64, f: impl Fn(f64) -> f64) -> f64 {
    let (mut a, mut b) = (from, to);
    let at_a = f(a);
    if at_a == 0.0 {
        return a;
    }
    // a double has 2¹¹ exponents and 52 bits
    for _ in 0..2200 {
        let middle = a + 0.5 * (b - a);
        if middle == a || middle == b {
            break;
        }
        if (f(middle) < 0.0) == (at_a < 0.0) {
            a = middle;
        } else {
            b = middle;
        }
    }
    b
}

/// Refuses points that are not numbers, and slices of different length.
pub(super) fn check_points(x: (&[f64], Range), y: (&[f64], Range)) -> Result<(), FitError> {
    let ((xs, x_range), (ys, y_range)) = (x, y);
    if xs.len() != ys.len() {
        return Err(Error::LengthMismatch { what: y_range.what, expected: xs.len(), got: ys.len() }.into());
    }
    for (index, (x, y)) in xs.iter().zip(ys).enumerate() {
        x_range.check(*x).map_err(|error| FitError::Point { index, what: Cell::X, error })?;
        y_range.check(*y).map_err(|error| FitError::Point { index, what: Cell::Y, error })?;
    }
    Ok(())
}

/// Different values, rising.
pub(super) fn different(values: impl IntoIterator<Item = f64>) -> Vec<f64> {
    let mut values: Vec<f64> = values.into_iter().collect();
    values.sort_by(f64::total_cmp);
    values.dedup();
    values
}

/// Refuses fewer different values than are needed.
pub(super) fn enough(have: Vec<f64>, needed: usize, what: &'static str, unit: &'static str) -> Result<(), FitError> {
    if have.len() < needed { Err(FitError::TooFew { what, needed, have, unit }) } else { Ok(()) }
}
