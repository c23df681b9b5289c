//! A table with what is known of it.

use std::vec::Vec;

use super::eval;
use super::fit::{Grid, power};
use super::prove::Piece;
use crate::chain::Word;

/// The table in its own numbers.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Data {
    /// Doubles.
    Double(Floating<f64>),
    /// Single precision.
    Single(Floating<f32>),
    /// 32-bit integers.
    Fixed(Integers),
}

/// A table of floating-point numbers; see [`eval::Double`] for the parts.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "the parts are those of eval::Double")]
pub struct Floating<T> {
    pub knots: Vec<T>,
    pub coefficients: Vec<T>,
    pub below: Vec<(T, Word)>,
    pub above: Vec<(T, Word)>,
}

/// A table of integers; see [`eval::Fixed`] for the parts.
#[derive(Clone, Debug, PartialEq)]
#[allow(missing_docs, reason = "the parts are those of eval::Fixed")]
pub struct Integers {
    pub knots: Vec<i32>,
    pub coefficients: Vec<i32>,
    pub shifts: Vec<u8>,
    pub below: Vec<(i32, Word)>,
    pub above: Vec<(i32, Word)>,
    /// A reading is an integer times 2 to minus this.
    pub reading_bits: i32,
    /// A result is an integer times 2 to minus this.
    pub result_bits: i32,
}

/// A table and what is known of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// The table.
    pub data: Data,
    /// Highest power.
    pub degree: usize,
    /// Lowest and highest reading of the table.
    pub readings: [f64; 2],
    /// Lowest and highest result of the chain over these readings.
    pub results: [f64; 2],
    /// What was asked for.
    pub tolerance: f64,
    /// Proven bound of |table − chain| over all readings, rounding of the table and of its evaluation included.
    pub bound: f64,
    /// Largest error that was seen, against the chain's plan.
    pub seen: f64,
    /// Over so many readings.
    pub looks: usize,
}

impl Curve {
    /// Returns the number of pieces.
    #[must_use]
    pub fn pieces(&self) -> usize {
        let knots = match &self.data {
            Data::Double(t) => t.knots.len(),
            Data::Single(t) => t.knots.len(),
            Data::Fixed(t) => t.knots.len(),
        };
        knots.saturating_sub(1)
    }

    /// Returns the size of the numbers of the table.
    #[must_use]
    pub fn bytes(&self) -> usize {
        let per = match &self.data {
            Data::Double(_) => 8,
            _ => 4,
        };
        bytes(self.pieces(), self.degree, per, matches!(self.data, Data::Fixed(_)))
    }

    pub(super) fn grid(&self) -> Grid {
        match &self.data {
            Data::Double(_) => Grid::Double,
            Data::Single(_) => Grid::Single,
            Data::Fixed(t) => Grid::Fixed { reading_bits: t.reading_bits, result_bits: t.result_bits },
        }
    }

    /// The pieces as they are stored; `None` where they do not belong together, or where integers could leave 32 bits.
    pub(super) fn stored(&self) -> Option<Vec<Piece>> {
        let (knots, coefficients): (Vec<f64>, Vec<f64>) = match &self.data {
            Data::Double(t) => (t.knots.clone(), t.coefficients.clone()),
            Data::Single(t) => {
                let wide = |all: &[f32]| all.iter().map(|v| f64::from(*v)).collect();
                (wide(&t.knots), wide(&t.coefficients))
            }
            Data::Fixed(t) => {
                let scaled = |all: &[i32], bits: i32| all.iter().map(|v| f64::from(*v) * power(-bits)).collect();
                (scaled(&t.knots, t.reading_bits), scaled(&t.coefficients, t.result_bits))
            }
        };
        let count = self.degree + 1;
        if !(1..=3).contains(&self.degree) || coefficients.len() != knots.len().checked_sub(1)? * count {
            return None;
        }
        let ends = knots.iter().zip(knots.iter().skip(1));
        let mut pieces = Vec::new();
        for (place, ((from, to), row)) in ends.zip(coefficients.chunks(count)).enumerate() {
            let mut c = [0.0; 4];
            for (slot, value) in c.iter_mut().zip(row) {
                *slot = *value;
            }
            let inverse = match &self.data {
                Data::Fixed(t) => {
                    let shift = i32::from(*t.shifts.get(place)?);
                    let steps = (to - from) * power(t.reading_bits);
                    let sum = c.iter().fold(0.0, |sum, c| sum + c.abs()) * power(t.result_bits);
                    if shift > 30 || steps > power(shift) || sum >= f64::from(i32::MAX) {
                        return None;
                    }
                    power(t.reading_bits - shift)
                }
                _ => 1.0,
            };
            pieces.push(Piece { from: *from, to: *to, knot: *from, inverse, c });
        }
        Some(pieces)
    }

    /// Runs the table on one reading, in the unit of the readings; a reading is rounded to the numbers of the table first.
    ///
    /// # Errors
    /// The word where there is no number.
    pub fn value(&self, reading: f64) -> Result<f64, Word> {
        match &self.data {
            Data::Double(t) => t.table(self.degree).value(reading),
            Data::Single(t) => t.table(self.degree).value(reading as f32).map(f64::from),
            Data::Fixed(t) => {
                if reading.is_nan() {
                    return Err(Word::Missing);
                }
                let near = libm::round(reading * power(t.reading_bits));
                t.table(self.degree).value(near as i32).map(|v| f64::from(v) * power(-t.result_bits))
            }
        }
    }
}

impl Floating<f64> {
    /// Returns the table as it runs.
    #[must_use]
    pub fn table(&self, degree: usize) -> eval::Double<'_> {
        let Self { knots, coefficients, below, above } = self;
        eval::Double { knots, coefficients, degree, below, above }
    }
}

impl Floating<f32> {
    /// Returns the table as it runs.
    #[must_use]
    pub fn table(&self, degree: usize) -> eval::Single<'_> {
        let Self { knots, coefficients, below, above } = self;
        eval::Single { knots, coefficients, degree, below, above }
    }
}

impl Integers {
    /// Returns the table as it runs.
    #[must_use]
    pub fn table(&self, degree: usize) -> eval::Fixed<'_> {
        let Self { knots, coefficients, shifts, below, above, .. } = self;
        eval::Fixed { knots, coefficients, shifts, degree, below, above }
    }
}

/// Size of the numbers of a table, bytes.
pub(super) fn bytes(pieces: usize, degree: usize, per: usize, shifts: bool) -> usize {
    per * (pieces + 1 + pieces * (degree + 1)) + if shifts { pieces } else { 0 }
}
