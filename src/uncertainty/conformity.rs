//! Whether a measured value meets a limit, and how likely that verdict is wrong.

use crate::Error;
use crate::math::distribution::{normal_probability, student_probability};

/// What is allowed: at least `low`, at most `high`; an infinite one is no limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// Lower tolerance limit.
    pub low: f64,
    /// Upper tolerance limit.
    pub high: f64,
}

/// A verdict on a measured value.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Acceptance {
    /// Inside the acceptance limits.
    Accepted,
    /// Outside them.
    Rejected,
}

/// What can be said of a measured value and its limits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Conformity {
    /// The verdict with acceptance limits = tolerance limits (simple acceptance, shared risk).
    pub simple: Acceptance,
    /// The verdict with acceptance limits that lie `guard` inside the tolerance limits (guarded acceptance).
    pub guarded: Acceptance,
    /// The guard band used.
    pub guard: f64,
    /// Probability that the true value lies within the limits, given this reading.
    pub conforming: f64,
}

impl Conformity {
    /// Returns the probability that a wrong verdict was given by simple acceptance: false acceptance where it accepted, false
    /// rejection where it rejected.
    #[must_use]
    pub fn risk(&self) -> f64 {
        match self.simple {
            Acceptance::Accepted => 1.0 - self.conforming,
            Acceptance::Rejected => self.conforming,
        }
    }
}

/// Returns what can be said of a measured value and limits.
///
/// `p_c = F((high − y)/u) − F((low − y)/u)`, F normal, or Student's t for few degrees of freedom; nothing else is known
/// beforehand of the quantity.
///
/// - `estimate`, `standard`: the measured value and its standard uncertainty, above 0.
/// - `degrees_of_freedom`: of `standard`; infinite for the normal distribution.
/// - `guard`: width of the guard band, not below 0: U of the measured value leaves a risk of at most 2.5 % at k = 2.
///
/// # Errors
/// `Error::NotFinite` or `Error::OutOfRange` for a value that is no number, an uncertainty that is not above 0, limits the
/// wrong way round, or a guard band below 0.
/// # Source
/// JCGM 106:2012, 7.4 (conformance probability), 8.2 (simple acceptance), 8.3 (guard bands). Checked in
/// tests/uncertainty.rs.
pub fn conformity(
    estimate: f64,
    standard: f64,
    degrees_of_freedom: f64,
    limits: Interval,
    guard: f64,
) -> Result<Conformity, Error> {
    let Interval { low, high } = limits;
    if !estimate.is_finite() || low.is_nan() || high.is_nan() {
        return Err(Error::NotFinite { what: "a measured value or a limit" });
    }
    if standard <= 0.0 {
        return Err(Error::OutOfRange {
            what: "standard uncertainty",
            value: standard,
            min: 0.0,
            max: f64::INFINITY,
            unit: "",
        });
    }
    crate::Range::new("standard uncertainty", "", 0.0, f64::MAX).check(standard)?;
    crate::Range::new("guard band", "", 0.0, f64::MAX).check(guard)?;
    if low >= high {
        return Err(Error::OutOfRange { what: "lower limit", value: low, min: f64::NEG_INFINITY, max: high, unit: "" });
    }
    let below = |limit: f64| {
        let z = (limit - estimate) / standard;
        if limit == f64::INFINITY {
            1.0
        } else if limit == f64::NEG_INFINITY {
            0.0
        } else if degrees_of_freedom.is_finite() {
            student_probability(z, libm::floor(degrees_of_freedom).max(1.0))
        } else {
            normal_probability(z)
        }
    };
    let verdict = |guard: f64| {
        let inside = estimate >= low + guard && estimate <= high - guard;
        if inside { Acceptance::Accepted } else { Acceptance::Rejected }
    };
    Ok(Conformity { simple: verdict(0.0), guarded: verdict(guard), guard, conforming: below(high) - below(low) })
}
