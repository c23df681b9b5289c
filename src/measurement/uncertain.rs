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
    /// Of readings, what grows with them: of the same form, as a share of the reading. Both parts are added as they are.
    pub share: Option<Uncertainty>,
}

impl Stated {
    /// Returns the uncertainty where the reading, in the same unit, is this.
    #[must_use]
    pub fn at(&self, reading: f64) -> Uncertainty {
        let Some(share) = self.share else { return self.uncertainty };
        let (fixed, grown) = (self.uncertainty.standard(), share.times(reading));
        if fixed > 0.0 { self.uncertainty.times(1.0 + grown.standard() / fixed) } else { grown }
    }
}
