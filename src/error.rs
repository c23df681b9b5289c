//! The one error of the library.

use core::fmt;

/// Why a model could not be built or a value could not be converted.
///
/// Every variant carries the value that was met and what would have been accepted.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Error {
    /// A value is NaN or infinite where a finite one is needed.
    NotFinite {
        /// What the value is, in words.
        what: &'static str,
    },
    /// A value lies outside its closed range.
    OutOfRange {
        /// What the value is, in words.
        what: &'static str,
        /// The value that was met.
        value: f64,
        /// Smallest accepted value.
        min: f64,
        /// Largest accepted value.
        max: f64,
        /// Unit of all three numbers; empty for a plain number.
        unit: &'static str,
    },
    /// Two slices that belong together differ in length.
    LengthMismatch {
        /// Which slice differs.
        what: &'static str,
        /// Length of the readings.
        expected: usize,
        /// Length of the slice that differs.
        got: usize,
    },
    /// The chain needs an input or a parameter that was not given.
    Missing {
        /// The input or parameter, in words.
        what: &'static str,
    },
    /// The output of this bridge does not depend on the wanted quantity.
    Blind,
    /// The pieces of a chain do not fit together.
    Unfit {
        /// What does not fit, in words.
        what: &'static str,
    },
    /// The reading cannot be converted; the word says why.
    Flagged(crate::word::Word),
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match *self {
            Self::NotFinite { what } => write!(f, "{what} is not a finite number"),
            Self::OutOfRange { what, value, min, max, unit } => {
                let gap = if unit.is_empty() { "" } else { " " };
                // an open end is said in words, not as the largest number in 309 digits
                if max < f64::MAX {
                    write!(f, "{what} {value}{gap}{unit} is outside {min}..={max}{gap}{unit}")
                } else if min == f64::MIN_POSITIVE {
                    write!(f, "{what} {value}{gap}{unit} is not above 0{gap}{unit}")
                } else {
                    write!(f, "{what} {value}{gap}{unit} is below {min}{gap}{unit}")
                }
            }
            Self::LengthMismatch { what, expected, got } => {
                write!(f, "{what} has {got} elements where the readings have {expected}")
            }
            Self::Missing { what } => write!(f, "{what} is missing"),
            Self::Blind => f.write_str(
                "the output of this bridge does not depend on the wanted quantity: its driven arms cancel each other",
            ),
            Self::Unfit { what } => f.write_str(what),
            Self::Flagged(word) => write!(f, "the reading cannot be converted: {word}"),
        }
    }
}

impl core::error::Error for Error {}

#[cfg(test)]
mod tests {
    extern crate std;
    use super::*;
    use std::string::ToString;

    #[test]
    fn ranges_read_as_words() {
        let out = |value, min, max| Error::OutOfRange { what: "resistance", value, min, max, unit: "Ω" }.to_string();
        assert_eq!(out(412.3, 18.52, 390.48), "resistance 412.3 Ω is outside 18.52..=390.48 Ω");
        assert_eq!(out(-1.5, f64::MIN_POSITIVE, f64::MAX), "resistance -1.5 Ω is not above 0 Ω");
        assert_eq!(out(-1.5, 0.0, f64::MAX), "resistance -1.5 Ω is below 0 Ω");
        assert_eq!(out(-1.5, 0.0, f64::INFINITY), "resistance -1.5 Ω is below 0 Ω");
    }
}
