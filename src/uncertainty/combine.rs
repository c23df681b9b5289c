//! What many inputs make together, in first order.

use super::Shape;
use crate::math::sqrt;

/// What one input contributes to the uncertainty of a result.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Contribution {
    /// Sensitivity coefficient c = ∂y/∂x.
    pub sensitivity: f64,
    /// Standard uncertainty u(x) of the input.
    pub standard: f64,
    /// Its degrees of freedom; infinite where it is taken as exactly known.
    pub degrees_of_freedom: f64,
    /// Form of its distribution.
    pub shape: Shape,
    /// What causes it: contributions of one cause are fully correlated and add with their signs, those of different causes
    /// are independent.
    pub cause: u32,
    /// Causes of one number above 0 rest on one estimate of scatter, as the errors of one fit do: they are independent, but their
    /// degrees of freedom count once for all of them. 0 for causes of their own.
    pub pool: u32,
}

impl Contribution {
    /// Returns c u(x), with its sign.
    #[must_use]
    pub fn signed(&self) -> f64 {
        self.sensitivity * self.standard
    }
}

/// To which family the distribution of the result belongs.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Family {
    /// Near enough normal, or Student's t: many contributions, or a normal one, decide.
    Normal,
    /// One rectangular contribution decides.
    Rectangular,
    /// Two rectangular contributions decide; together they make a trapezium.
    Trapezoidal {
        /// Length of its top side over that of its base.
        edge: f64,
    },
}

/// The combined standard uncertainty with what a coverage factor needs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Combined {
    /// Combined standard uncertainty u_c(y).
    pub standard: f64,
    /// Effective degrees of freedom; NaN where inputs are correlated in part, for which there is no formula.
    pub degrees_of_freedom: f64,
    /// Form of the distribution.
    pub family: Family,
    /// Standard uncertainties of the two largest rectangular contributions, in units of the result; 0 where there are none.
    pub rectangular: [f64; 2],
}

impl Combined {
    /// Returns a standard uncertainty of which no more is known than its degrees of freedom.
    #[must_use]
    pub const fn new(standard: f64, degrees_of_freedom: f64) -> Self {
        Self { standard, degrees_of_freedom, family: Family::Normal, rectangular: [0.0; 2] }
    }
}

/// Where the other contributions together are no more than this share of the rectangular one or two, those decide
/// (EA-4/02 M:2022, S9.14).
const DOMINANCE: f64 = 0.3;

/// Combines contributions, those of one cause with their signs.
///
/// `u_c² = Σ_k (Σ_{i of cause k} c_i u_i)²`, `ν_eff = u_c⁴ / Σ_k (u_k⁴/ν_k)` over the independent causes; those of one pool are
/// one u_k² there.
///
/// - `parts`: any number; the time taken grows with its square.
///
/// # Source
/// JCGM 100:2008 (10), (16) with r = 1 within a cause, and (G.2b). The rectangular and trapezoidal cases: EA-4/02 M:2022,
/// S9.14 and S10.12.
/// # Example
/// ```
/// use ohmwright::uncertainty::{Contribution, Shape, combine};
///
/// // JCGM 100:2008 G.4.2, example: relative u of 0.25 %, 0.57 %, 0.82 % with n = 10, 5, 15: ν_eff = 19.0
/// let part = |standard, readings: f64, cause| Contribution {
///     sensitivity: 1.0,
///     standard,
///     degrees_of_freedom: readings - 1.0,
///     shape: Shape::Normal,
///     cause,
///     pool: 0,
/// };
/// let sum = combine(&[part(0.25, 10.0, 0), part(0.57, 5.0, 1), part(0.82, 15.0, 2)]);
/// assert!((sum.standard - 1.03).abs() <= 0.005);
/// assert!((sum.degrees_of_freedom - 19.0).abs() <= 0.05);
/// ```
#[must_use]
pub fn combine(parts: &[Contribution]) -> Combined {
    let mut sum = Sum::default();
    for (i, part) in parts.iter().enumerate() {
        if parts.iter().take(i).any(|before| before.cause == part.cause) {
            continue;
        }
        // contributions of one cause add with their signs
        let signed = parts.iter().skip(i).filter(|p| p.cause == part.cause).map(Contribution::signed).sum();
        if part.pool == 0 {
            sum.add(signed, 1.0 / part.degrees_of_freedom, part.shape == Shape::Rectangular);
            continue;
        }
        sum.add(signed, 0.0, false);
        if !parts.iter().take(i).any(|before| before.pool == part.pool) {
            let pooled = parts.iter().filter(|p| p.pool == part.pool);
            sum.add_pool(pooled.map(|p| p.signed() * p.signed()).sum(), 1.0 / part.degrees_of_freedom);
        }
    }
    sum.combined()
}

/// A sum over independent causes.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Sum {
    variance: f64,
    tail: f64,
    /// The two largest causes of bounded, rectangular form.
    first: f64,
    second: f64,
}

impl Sum {
    /// Adds one cause: its contribution, 1/ν, and whether it is rectangular.
    #[inline]
    pub(crate) fn add(&mut self, signed: f64, per_freedom: f64, rectangular: bool) {
        let square = signed * signed;
        self.variance += square;
        self.tail += square * square * per_freedom;
        if rectangular && per_freedom == 0.0 {
            let size = signed.abs();
            if size > self.first {
                (self.first, self.second) = (size, self.first);
            } else if size > self.second {
                self.second = size;
            }
        }
    }

    /// Adds the degrees of freedom of a pool: its variance, 1/ν.
    #[inline]
    pub(crate) fn add_pool(&mut self, variance: f64, per_freedom: f64) {
        self.tail += variance * variance * per_freedom;
    }

    pub(crate) fn combined(&self) -> Combined {
        let Self { variance, tail, first, second } = *self;
        let degrees_of_freedom = if tail > 0.0 { variance * variance / tail } else { f64::INFINITY };
        Combined {
            standard: sqrt(variance),
            degrees_of_freedom,
            family: family(variance, first, second),
            rectangular: [first, second],
        }
    }
}

/// The family that rectangular causes of these sizes decide on.
fn family(variance: f64, first: f64, second: f64) -> Family {
    let rest = |decided: f64| sqrt((variance - decided).max(0.0)) <= DOMINANCE * sqrt(decided);
    let (one, two) = (first * first, first * first + second * second);
    if first > 0.0 && rest(one) {
        Family::Rectangular
    } else if second > 0.0 && rest(two) {
        Family::Trapezoidal { edge: (first - second) / (first + second) }
    } else {
        Family::Normal
    }
}

/// Combines contributions with correlations between any two of them.
///
/// `u_c² = Σ_i Σ_j c_i c_j u_i u_j r_ij`
///
/// - `correlation`: r of the inputs at two places of `parts`, first < second; 0 for independent ones. Causes are not looked
///   at.
///
/// # Source
/// JCGM 100:2008 (16). There is no effective number of degrees of freedom for correlated inputs (G.4.1): it is NaN as soon as
/// one r is not 0, unless all are known exactly.
#[must_use]
pub fn combine_correlated(parts: &[Contribution], correlation: impl Fn(usize, usize) -> f64) -> Combined {
    let (mut variance, mut tail, mut free) = (0.0, 0.0, true);
    for (i, a) in parts.iter().enumerate() {
        let own = a.signed() * a.signed();
        variance += own;
        if a.degrees_of_freedom.is_finite() {
            tail += own * own / a.degrees_of_freedom;
        }
        for (j, b) in parts.iter().enumerate().skip(i + 1) {
            let r = correlation(i, j);
            free &= r == 0.0;
            variance += 2.0 * r * a.signed() * b.signed();
        }
    }
    // rounding must not leave less than nothing
    let variance = variance.max(0.0);
    let degrees_of_freedom = match (tail > 0.0, free) {
        (false, _) => f64::INFINITY,
        (true, true) => variance * variance / tail,
        (true, false) => f64::NAN,
    };
    Combined::new(sqrt(variance), degrees_of_freedom)
}
