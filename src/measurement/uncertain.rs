//! Uncertainties as the sheet states them.

use std::string::String;

use crate::uncertainty::Uncertainty;

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
