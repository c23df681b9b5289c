//! What became of a channel, in figures.

use super::Column;
use crate::chain::Word;

/// Counts and figures of one channel, gathered in row order.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Statistics {
    /// Rows with each word, by its number.
    pub words: [u64; Word::ALL.len()],
    /// Rows that lie between two samples of a slow channel.
    pub between: u64,
    /// Smallest value.
    pub min: f64,
    /// Largest value.
    pub max: f64,
    sum: f64,
    count: u64,
}

impl Default for Statistics {
    fn default() -> Self {
        Self { words: [0; Word::ALL.len()], between: 0, min: f64::INFINITY, max: f64::NEG_INFINITY, sum: 0.0, count: 0 }
    }
}

impl Statistics {
    /// Adds the rows of a column; `excused` rows count as between samples.
    pub fn add(&mut self, column: &Column, excused: &[bool]) {
        for (i, (value, word)) in column.values.iter().zip(&column.words).enumerate() {
            if excused.get(i) == Some(&true) {
                self.between += 1;
                continue;
            }
            if let Some(count) = self.words.get_mut(*word as usize) {
                *count += 1;
            }
            if value.is_finite() {
                self.min = self.min.min(*value);
                self.max = self.max.max(*value);
                self.sum += *value;
                self.count += 1;
            }
        }
    }

    /// Returns how many rows have a number.
    #[must_use]
    pub const fn count(&self) -> u64 {
        self.count
    }

    /// Returns the arithmetic mean; NaN without numbers.
    #[must_use]
    pub fn mean(&self) -> f64 {
        self.sum / self.count as f64
    }

    /// Returns how many rows carry a word other than `good`.
    #[must_use]
    pub fn flagged(&self) -> u64 {
        self.words.iter().skip(1).sum()
    }
}
