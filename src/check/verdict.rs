//! What is said of a delivery and of each channel in it.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

/// What is to be said of delivered results.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Verdict {
    /// They differ by no more than rounding and the tolerance of the sheet.
    Agrees,
    /// One mistake, or two together, make them to within rounding.
    Explained,
    /// They differ, and no mistake that is known here makes them.
    Unexplained,
    /// There are too few rows, or they span too little.
    CannotTell,
}

impl Verdict {
    /// Returns the verdict as it is printed.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Agrees => "agrees",
            Self::Explained => "explained",
            Self::Unexplained => "unexplained",
            Self::CannotTell => "cannot tell",
        }
    }
}

/// Successive rows that differ by more than they should.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stretch {
    /// First row, from 1.
    pub from: u64,
    /// Last row.
    pub to: u64,
    /// Largest difference in it, in the unit of the channel.
    pub largest: f64,
}

/// One explanation.
#[derive(Clone, Debug, PartialEq)]
pub struct Explanation {
    /// The mistake; two together are joined by `+`.
    pub id: String,
    /// Its parameters.
    pub parameters: Vec<(String, f64)>,
    /// Which variant, in words; empty where there is one alone.
    pub note: String,
    /// Root of the mean square of what it leaves, in the unit of the channel.
    pub residual: f64,
    /// Mistakes whose predictions differ from this one's by less than rounding, over these data.
    pub tie: Vec<String>,
    /// The same with their parameters, in words.
    pub tied: Vec<String>,
}

impl Explanation {
    /// One mistake with one parameter.
    pub(super) fn of(id: &str, parameter: (String, f64), residual: f64) -> Self {
        Self {
            id: id.into(),
            parameters: std::vec![parameter],
            note: String::new(),
            residual,
            tie: Vec::new(),
            tied: Vec::new(),
        }
    }
}

/// What was found of one channel.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Checked {
    /// Its name.
    pub name: String,
    /// Its unit.
    pub unit: String,
    /// Header of the delivered column.
    pub column: String,
    /// The verdict.
    pub verdict: Verdict,
    /// Whether the difference exceeds our expanded uncertainty (k = 2) somewhere, as far as the sheet states it.
    pub material: bool,
    /// Rows with a number on both sides.
    pub rows: u64,
    /// Rows with a number on our side alone, and on theirs alone.
    pub alone: [u64; 2],
    /// The first stretches of rows with a number on their side alone.
    pub alone_at: Vec<Stretch>,
    /// Whether what is wrong is in those of theirs alone: the differences are rounding.
    pub only_alone: bool,
    /// Largest difference, theirs less ours, and its row.
    pub largest_difference: f64,
    /// The row of the largest difference, from 1.
    pub largest_row: u64,
    /// theirs = slope · ours + offset, by medians; `None` where ours have no span.
    pub slope: Option<f64>,
    /// The offset of that line.
    pub offset: Option<f64>,
    /// Step of the delivered figures, typical; 0 = not rounded.
    pub step: f64,
    /// Difference that the sheet lets pass besides rounding.
    pub tolerance: f64,
    /// Our expanded uncertainty (k = 2), the least of those computed; `None` where the sheet states none.
    pub uncertainty: Option<f64>,
    /// Largest difference as a share of our expanded uncertainty (k = 2) at the same row, of those computed.
    pub share_of_uncertainty: Option<f64>,
    /// Of the rows that were looked at for this, how many have an uncertainty, and how many there are.
    pub weighed: [u64; 2],
    /// Rows among the others whose result nothing that the sheet states an uncertainty of moves, as a gauge factor does not move a
    /// strain of 0.
    pub unmoved: u64,
    /// Largest |E_n| where they state an uncertainty.
    pub normalised_error: Option<f64>,
    /// What else the difference follows, with the part of it that does.
    pub trends: Vec<(String, f64)>,
    /// Rows beyond rounding: of the difference, or of what the first explanation leaves.
    pub beyond: u64,
    /// The first stretches of such rows.
    pub stretches: Vec<Stretch>,
    /// Explanations, best first.
    pub explanations: Vec<Explanation>,
    /// What would settle it, in words.
    pub settle: String,
}

/// What was found of a delivery.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Report {
    /// Title of the sheet.
    pub file: String,
    /// Rows of the recording.
    pub rows: u64,
    /// A line for each zero that was a mean.
    pub zeros: Vec<String>,
    /// What is to be said of the file.
    pub remarks: Vec<String>,
    /// The channels, in the order of the sheet.
    pub channels: Vec<Checked>,
}

/// Rows that stand out, found in the first reading.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Extremes {
    low: Option<(f64, u64)>,
    high: Option<(f64, u64)>,
    apart: Option<(f64, u64)>,
}

impl Extremes {
    pub(super) fn add(&mut self, own: &[f64], theirs: &[f64], first: u64) {
        for ((own, theirs), row) in own.iter().zip(theirs).zip(first..) {
            if !(own.is_finite() && theirs.is_finite()) {
                continue;
            }
            if self.low.is_none_or(|(v, _)| *own < v) {
                self.low = Some((*own, row));
            }
            if self.high.is_none_or(|(v, _)| *own > v) {
                self.high = Some((*own, row));
            }
            let apart = (theirs - own).abs();
            if self.apart.is_none_or(|(v, _)| apart > v) {
                self.apart = Some((apart, row));
            }
        }
    }

    pub(super) fn rows(&self) -> impl Iterator<Item = u64> {
        [self.low, self.high, self.apart].into_iter().flatten().map(|(_, row)| row)
    }
}

pub(super) fn rows_in_words(rows: u64) -> String {
    match rows {
        0 => "no rows".to_string(),
        1 => "one row".to_string(),
        n => format!("{n} rows"),
    }
}
