//! Uncertainties as the sheet states them.

use std::string::String;

/// A stated uncertainty of one value, in the unit of the value.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
pub enum Uncertainty {
    /// All values within ± the half-width are equally likely.
    Rectangular {
        /// Half-width.
        half_width: f64,
    },
    /// An expanded uncertainty with its coverage factor, normal.
    Expanded {
        /// Expanded uncertainty U.
        expanded: f64,
        /// Coverage factor k.
        coverage_factor: f64,
    },
    /// A standard uncertainty, from digits in brackets, normal.
    Standard {
        /// Standard uncertainty u.
        standard: f64,
    },
}

/// The uncertainty of one key of a channel.
#[derive(Clone, Debug, PartialEq)]
pub struct Stated {
    /// The key, as `gauge.gauge_factor`.
    pub key: String,
    /// Its value, in the unit that the library uses.
    pub value: f64,
    /// As the sheet writes it.
    pub text: String,
    /// Its uncertainty, in the same unit.
    pub uncertainty: Uncertainty,
}
