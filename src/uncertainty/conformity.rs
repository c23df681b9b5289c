//! Whether a measured value meets a limit, and how likely that verdict is wrong.

use super::Combined;
use crate::Error;

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
/// `p_c = F(high − y) − F(low − y)`, F the distribution that decides ([`Combined::probability_below`]): a rectangle or two
/// with a normal rest, normal, or Student's t for few degrees of freedom; nothing else is known beforehand of the quantity.
///
/// - `estimate`, `combined`: the measured value and its standard uncertainty, above 0, with what it is made of;
///   [`Combined::new`] where no more is known than the standard uncertainty.
/// - `guard`: width of the guard band, not below 0: U of the measured value leaves a risk of at most 2.5 % at k = 2.
///
/// # Errors
/// `Error::NotFinite` or `Error::OutOfRange` for a value that is no number, an uncertainty that is not above 0, limits the
/// wrong way round, or a guard band below 0.
/// # Source
/// JCGM 106:2012, 7.4 (conformance probability), 8.2 (simple acceptance), 8.3 (guard bands). Checked in
/// tests/uncertainty.rs.
pub fn conformity(estimate: f64, combined: &Combined, limits: Interval, guard: f64) -> Result<Conformity, Error> {
    let standard = combined.standard;
    check(estimate, limits, guard)?;
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
    let below = |limit: f64| combined.probability_below(limit - estimate);
    // of two upper tails, their complements keep the digits
    let conforming = if limits.low > estimate {
        combined.probability_below(estimate - limits.low) - combined.probability_below(estimate - limits.high)
    } else {
        below(limits.high) - below(limits.low)
    };
    Ok(verdict(estimate, limits, guard, conforming))
}

/// Returns what can be said where the probability of meeting the limits is known, as from trials.
///
/// # Errors
/// As [`conformity`].
pub fn conformity_by_probability(
    estimate: f64,
    conforming: f64,
    limits: Interval,
    guard: f64,
) -> Result<Conformity, Error> {
    check(estimate, limits, guard)?;
    crate::Range::new("conformance probability", "", 0.0, 1.0).check(conforming)?;
    Ok(verdict(estimate, limits, guard, conforming))
}

fn check(estimate: f64, limits: Interval, guard: f64) -> Result<(), Error> {
    let Interval { low, high } = limits;
    if !estimate.is_finite() || low.is_nan() || high.is_nan() {
        return Err(Error::NotFinite { what: "a measured value or a limit" });
    }
    crate::Range::new("guard band", "", 0.0, f64::MAX).check(guard)?;
    if low >= high {
        return Err(Error::OutOfRange { what: "lower limit", value: low, min: f64::NEG_INFINITY, max: high, unit: "" });
    }
    Ok(())
}

fn verdict(estimate: f64, limits: Interval, guard: f64, conforming: f64) -> Conformity {
    let verdict = |guard: f64| {
        let inside = estimate >= limits.low + guard && estimate <= limits.high - guard;
        if inside { Acceptance::Accepted } else { Acceptance::Rejected }
    };
    Conformity { simple: verdict(0.0), guarded: verdict(guard), guard, conforming }
}
