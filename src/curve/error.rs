//! Why there is no table.

/// Why there is no table.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Error {
    /// The chain itself is refused.
    Chain(crate::Error),
    /// The tolerance is no number above 0.
    Tolerance(f64),
    /// The degree is not 1, 2 or 3.
    Degree(u8),
    /// No reading in the wanted range has a result.
    Empty,
    /// The results of this chain have no end.
    Endless,
    /// An end of the range is no result of this chain.
    End {
        /// The end.
        result: f64,
    },
    /// Readings of this chain do not fit into the numbers of the table.
    Readings,
    /// The bound cannot be proven at this tolerance.
    TooTight {
        /// What was asked for.
        tolerance: f64,
        /// A reading about which it cannot be had.
        reading: f64,
        /// A tolerance that can be had; `None` where none was found.
        tightest: Option<f64>,
    },
    /// The table would have too many pieces.
    TooLong {
        /// Most pieces.
        most: usize,
        /// What was asked for.
        tolerance: f64,
        /// A tolerance that can be had; `None` where none was found.
        tightest: Option<f64>,
    },
}

impl core::fmt::Display for Error {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        let had = |f: &mut core::fmt::Formatter<'_>, tightest: &Option<f64>| match tightest {
            Some(t) => write!(f, "; {t} can be had"),
            None => Ok(()),
        };
        match self {
            Self::Chain(e) => e.fmt(f),
            Self::Tolerance(t) => write!(f, "tolerance {t} is not above 0"),
            Self::Degree(d) => write!(f, "degree {d} is outside 1..=3"),
            Self::Empty => f.write_str("no reading in this range has a result"),
            Self::Endless => f.write_str("the results of this chain have no end: state the range"),
            Self::End { result } => write!(f, "no reading of this chain stands for {result}"),
            Self::Readings => {
                f.write_str("the readings of this chain do not fit into the numbers of the table (codes up to 30 bits)")
            }
            Self::TooTight { tolerance, reading, tightest } => {
                write!(f, "a tolerance of {tolerance} cannot be proven (about reading {reading})")?;
                had(f, tightest)
            }
            Self::TooLong { most, tolerance, tightest } => {
                write!(f, "a tolerance of {tolerance} needs more than {most} pieces")?;
                had(f, tightest)
            }
        }
    }
}

impl core::error::Error for Error {}

impl From<crate::Error> for Error {
    fn from(e: crate::Error) -> Self {
        Self::Chain(e)
    }
}
