//! The budget of one result, and what would make it smaller.

use std::vec::Vec;

use super::Propagation;
use crate::Error;
use crate::uncertainty::{Combined, Contribution, Coverage, Expanded, Order, combine};

/// The uncertainty budget of one result. Nothing in it is rounded.
#[derive(Clone, Debug, PartialEq)]
pub struct Budget {
    /// The result.
    pub value: f64,
    /// What each cause contributes, in the order of [`Propagation::causes`].
    pub parts: Vec<Contribution>,
    /// Combined standard uncertainty in first order.
    pub combined: Combined,
    /// Expanded uncertainty.
    pub expanded: Expanded,
    /// Variances of both orders; `None` where a moved input has no result.
    pub order: Option<Order>,
}

impl Propagation {
    /// Returns the budget; contributions that are no more than [`rounding`](Self::rounding) are 0.
    ///
    /// # Errors
    /// As [`gradient`](Self::gradient); `Error::OutOfRange` for a coverage that is none.
    pub fn budget(&self, coverage: Coverage) -> Result<Budget, Error> {
        let rounding = self.rounding();
        let mut parts = self.contributions()?;
        for part in &mut parts {
            // what cancels leaves rounding behind, which is no contribution
            if part.signed().abs() <= rounding {
                part.sensitivity = 0.0;
            }
        }
        let combined = combine(&parts);
        let expanded = combined.expanded(coverage)?;
        Ok(Budget { value: self.value, parts, combined, expanded, order: self.orders().ok() })
    }
}

/// What one cause must become for a wanted expanded uncertainty, all others left as they are.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Improvement {
    /// The cause, by its place.
    pub cause: usize,
    /// Standard uncertainty that it must have; `None` where not even 0 is enough.
    pub needed: Option<f64>,
    /// Expanded uncertainty that is left when this cause has `needed`, or is gone.
    pub left: f64,
}

/// Half-steps by which a factor is narrowed down: more than a double has bits.
const HALVINGS: u32 = 60;

impl Budget {
    /// Returns what each cause must become for a wanted expanded uncertainty: first those that reach it alone, the least
    /// demanding first, then the others by what is left without them. Causes that contribute nothing are left out.
    ///
    /// # Errors
    /// As [`Combined::expanded`].
    pub fn improvements(&self, wanted: f64, coverage: Coverage) -> Result<Vec<Improvement>, Error> {
        let mut out = Vec::new();
        for (cause, part) in self.parts.iter().enumerate().filter(|(_, p)| p.signed() != 0.0) {
            let with = |factor: f64| {
                let mut parts = self.parts.clone();
                if let Some(slot) = parts.get_mut(cause) {
                    slot.standard *= factor;
                }
                combine(&parts).expanded(coverage).map(|e| e.expanded)
            };
            let gone = with(0.0)?;
            if gone > wanted {
                out.push(Improvement { cause, needed: None, left: gone });
                continue;
            }
            let factor = narrow(|factor| Ok(with(factor)? <= wanted))?;
            out.push(Improvement { cause, needed: Some(part.standard * factor), left: with(factor)? });
        }
        out.sort_by(|a, b| {
            let ease =
                |i: &Improvement| i.needed.map_or(-1.0, |n| n / self.parts.get(i.cause).map_or(1.0, |p| p.standard));
            ease(b).total_cmp(&ease(a)).then(a.left.total_cmp(&b.left))
        });
        Ok(out)
    }

    /// Returns the level that no contribution may exceed for a wanted expanded uncertainty, in the unit of the result.
    ///
    /// # Errors
    /// As [`Combined::expanded`].
    pub fn common_level(&self, wanted: f64, coverage: Coverage) -> Result<f64, Error> {
        let largest = self.parts.iter().fold(0.0_f64, |m, p| m.max(p.signed().abs()));
        let capped = |level: f64| {
            let parts: Vec<Contribution> = self
                .parts
                .iter()
                .map(|p| {
                    let size = p.signed().abs();
                    let factor = if size > level { level / size } else { 1.0 };
                    Contribution { standard: p.standard * factor, ..*p }
                })
                .collect();
            combine(&parts).expanded(coverage).map(|e| e.expanded)
        };
        Ok(largest * narrow(|share| Ok(capped(largest * share)? <= wanted))?)
    }
}

/// The largest share of 0..=1 that is still enough.
fn narrow(enough: impl Fn(f64) -> Result<bool, Error>) -> Result<f64, Error> {
    if enough(1.0)? {
        return Ok(1.0);
    }
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..HALVINGS {
        let middle = 0.5 * (low + high);
        if enough(middle)? {
            low = middle;
        } else {
            high = middle;
        }
    }
    Ok(low)
}
