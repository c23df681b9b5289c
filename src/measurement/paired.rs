//! Readings that take two columns.

use std::vec::Vec;

use crate::chain::Word;

/// What two columns are together.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Pairing {
    /// The second was read with the current reversed: half the difference, free of thermal voltages and of the offset of
    /// the meter.
    Reversed,
    /// The first is across the sensor and two equal leads, the second at a tap that leaves out one of them: twice the second
    /// less the first is the sensor alone.
    Tap,
}

/// The second column of a reading.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Paired {
    /// Which input it is.
    pub input: usize,
    /// What the two are together.
    pub how: Pairing,
}

impl Pairing {
    /// Returns what both readings are together, in their unit.
    #[must_use]
    pub fn together(self, first: f64, second: f64) -> f64 {
        match self {
            // V = (V₊ − V₋)/2
            Self::Reversed => 0.5 * (first - second),
            // both leads alike: V = 2 V_tap − V_all
            Self::Tap => 2.0 * second - first,
        }
    }

    /// Takes the second column into the first; the word of the first goes before that of the second.
    pub(super) fn put(
        self,
        (values, words): &mut (Vec<f64>, Vec<Word>),
        (others, other_words): &(Vec<f64>, Vec<Word>),
    ) {
        let cells = values.iter_mut().zip(words).zip(others.iter().zip(other_words));
        for ((value, word), (other, other_word)) in cells {
            if word.has_number() && !other_word.has_number() {
                *word = *other_word;
            }
            *value = if word.has_number() { self.together(*value, *other) } else { f64::NAN };
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn by_hand() {
        // 100 mV with 12 µV of thermal voltage on both
        assert!((Pairing::Reversed.together(100.012, -99.988) - 100.0).abs() < 1e-12);
        // 88.7 mV at the tap, 89.2 mV over all: 88.2 mV (a printed example, data/temperature/lead_and_selfheating_examples.csv)
        assert!((Pairing::Tap.together(89.2, 88.7) - 88.2).abs() < 1e-12);
        let mut first = (std::vec![1.0, f64::NAN, 3.0], std::vec![Word::Good, Word::Missing, Word::Good]);
        Pairing::Reversed
            .put(&mut first, &(std::vec![-1.0, -1.0, f64::NAN], std::vec![Word::Good, Word::Good, Word::Unreadable]));
        assert_eq!(first.0[0], 1.0);
        assert!(first.0[1].is_nan() && first.0[2].is_nan());
        assert_eq!(first.1, [Word::Good, Word::Missing, Word::Unreadable]);
    }
}
