//! Resistors around a thermistor that straighten its curve.

use crate::Error;
use crate::math::Real;
use crate::signal::{not_negative, positive};

/// A resistor in parallel with the thermistor and one in series with both, either absent.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Linearising<R = f64> {
    /// Resistor in parallel with the thermistor, Ω; `None` = absent.
    pub parallel_ohms: Option<R>,
    /// Resistor in series with the thermistor and its parallel resistor, Ω; 0 = absent.
    pub series_ohms: R,
}

impl<R: Real> Linearising<R> {
    /// Resistance of the network in Ω with `ohms` for the thermistor.
    #[inline]
    pub(crate) fn network_from_ohms(&self, ohms: R) -> R {
        // R_s + R R_p/(R + R_p)
        let pair = match self.parallel_ohms {
            Some(parallel) => ohms * parallel / (ohms + parallel),
            None => ohms,
        };
        self.series_ohms + pair
    }

    /// Resistance of the thermistor in Ω with `network` for the whole: exact algebra.
    #[inline]
    pub(crate) fn ohms_from_network(&self, network: R) -> R {
        // v = N − R_s,  R = v R_p/(R_p − v)
        let pair = network - self.series_ohms;
        match self.parallel_ohms {
            Some(parallel) => pair * parallel / (parallel - pair),
            None => pair,
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        if let Some(parallel) = self.parallel_ohms {
            positive("resistor in parallel with the thermistor", "ohm", parallel)?;
        }
        not_negative("resistor in series with the thermistor", "ohm", self.series_ohms)
    }
}
