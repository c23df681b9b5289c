//! The word that stands where a number cannot.

use core::fmt;

/// What is to be said of one reading.
///
/// `Good`, `Ambiguous` and `Extrapolated` come with a number; every other word stands in its place. The discriminants are
/// stable: they are what a C caller sees.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
#[non_exhaustive]
#[repr(u8)]
pub enum Word {
    /// The number can be trusted as far as its uncertainty goes.
    #[default]
    Good = 0,
    /// Nothing was recorded: blank, or a sentinel value.
    Missing = 1,
    /// The text is no number.
    Unreadable = 2,
    /// The converter or amplifier stood at an end of its range.
    Saturated = 3,
    /// The circuit is broken: no finite resistance explains the reading.
    Open = 4,
    /// The circuit is shorted: no positive resistance explains the reading.
    Short = 5,
    /// The result lies outside the law or its stated range.
    OutOfRange = 6,
    /// Two values explain the reading; the number given is the stated branch.
    Ambiguous = 7,
    /// The law was used outside its range because the sheet asked for it.
    Extrapolated = 8,
}

impl Word {
    /// Every word, in the order of its number.
    pub const ALL: [Self; 9] = [
        Self::Good,
        Self::Missing,
        Self::Unreadable,
        Self::Saturated,
        Self::Open,
        Self::Short,
        Self::OutOfRange,
        Self::Ambiguous,
        Self::Extrapolated,
    ];

    /// Returns the word as it is printed.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Good => "good",
            Self::Missing => "missing",
            Self::Unreadable => "unreadable",
            Self::Saturated => "saturated",
            Self::Open => "open",
            Self::Short => "short",
            Self::OutOfRange => "out-of-range",
            Self::Ambiguous => "ambiguous",
            Self::Extrapolated => "extrapolated",
        }
    }

    /// Returns whether a number comes with this word.
    #[must_use]
    pub const fn has_number(self) -> bool {
        matches!(self, Self::Good | Self::Ambiguous | Self::Extrapolated)
    }
}

impl fmt::Display for Word {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.as_str())
    }
}
