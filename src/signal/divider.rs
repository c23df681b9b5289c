//! A sensor and a fixed resistor across a supply; the reading is the node between the two.

use super::positive;
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;

/// Where the sensor sits.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Side {
    /// From the node to ground.
    Low,
    /// From the supply to the node.
    High,
}

/// A voltage divider.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Divider<R = f64> {
    /// The fixed resistor, Ω.
    pub fixed: R,
    /// Where the sensor sits.
    pub sensor: Side,
    /// Resistance from the node to ground of whatever reads it, Ω; `None` = no load.
    pub input_resistance: Option<R>,
}

impl<R: Real> Divider<R> {
    /// Returns node/supply = (n₀ + n₁ R) / (d₀ + d₁ R) as `[n₀, n₁]`, `[d₀, d₁]` for a sensor path of R Ω.
    pub(crate) fn moebius(&self) -> ([R; 2], [R; 2]) {
        let (zero, one) = (R::from_f64(0.0), R::from_f64(1.0));
        let f = self.fixed;
        // conductance of the load
        let g = self.input_resistance.map_or(zero, |r| one / r);
        match self.sensor {
            // node = R / (R + R_f + R R_f g)
            Side::Low => ([zero, one], [f, one + f * g]),
            // node = R_f / (R_f + R + R R_f g)
            Side::High => ([f, zero], [f, one + f * g]),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        positive("fixed resistor of the divider", "ohm", self.fixed)?;
        self.input_resistance.map_or(Ok(()), |r| positive("input resistance", "ohm", r))
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Divider<S> {
        Divider {
            fixed: f(Parameter::DividerResistor, self.fixed),
            sensor: self.sensor,
            input_resistance: self.input_resistance.map(|r| f(Parameter::InputResistance, r)),
        }
    }
}
