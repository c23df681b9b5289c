//! Shunt calibration: which quantity does a resistor across an arm simulate, in the bridge that was really wired?

use super::{Chain, Inputs, Network, Sides};
use crate::Error;
use crate::math::{Double, Real};
use crate::signal::{Place, Shunt};

impl Chain {
    /// Returns the same chain with a shunt across one arm.
    ///
    /// # Errors
    /// `Error::Unfit` for a chain without a bridge.
    pub fn with_shunt(&self, shunt: Shunt) -> Result<Self, Error> {
        let mut chain = *self;
        match &mut chain.network {
            Network::Bridge(bridge) => bridge.shunt = Some(shunt),
            _ => return Err(Error::Unfit { what: "a shunt goes across an arm of a bridge" }),
        }
        Ok(chain)
    }

    /// Returns the quantity that a shunt simulates: what the chain reads when the shunt is connected and the true
    /// quantity is `at`, less `at`.
    ///
    /// Exact for this bridge with its leads, load and amplifier; the temperatures are those of `inputs`.
    ///
    /// - `at`: the true quantity while the shunt is connected, in the unit of the output.
    /// - `inputs`: supply and temperatures where the chain uses them; `reading` is ignored.
    ///
    /// # Errors
    /// As [`plan`](Self::plan); `Error::Flagged` where the shunt drives the reading beyond what the chain believes.
    pub fn simulated(&self, shunt: Shunt, at: f64, inputs: &Inputs) -> Result<f64, Error> {
        let reading = self.with_shunt(shunt)?.plan()?.forward(at, *inputs)?;
        let plan = self.plan()?;
        Ok(plan.one(Inputs { reading, ..*inputs }).number()? - at)
    }

    /// Returns the resistor, Ω, that simulates a quantity: the inverse of [`simulated`](Self::simulated) at a true
    /// quantity of 0.
    ///
    /// Exact: output over supply is a ratio of two lines in the shunt's conductance.
    ///
    /// # Errors
    /// As [`simulated`](Self::simulated); `Error::Unfit` when no positive resistor at this place simulates the quantity:
    /// its sign belongs to another arm.
    pub fn shunt_for(&self, arm: u8, place: Place, quantity: f64, inputs: &Inputs) -> Result<f64, Error> {
        let wanted = self.plan()?.forward(quantity, *inputs)?;
        let base = self.base_ohms(arm)?;
        let exact = |v: f64| Double::from_f64(v);
        let sides = Sides {
            supply: Some(exact(inputs.supply)),
            celsius: Some(exact(inputs.celsius)),
            lead_celsius: Some(exact(inputs.lead_celsius)),
            arm_celsius: inputs.arm_celsius.map(|t| Some(exact(t))),
        };
        let reading = |ohms: Option<f64>| -> Result<Double, Error> {
            let chain = match ohms {
                Some(ohms) => self.with_shunt(Shunt { arm, ohms, place })?,
                None => *self,
            };
            chain.map(|_, v| exact(v)).forward(exact(0.0), &sides)
        };
        // y(g) = (y₀ + b g)/(1 + d g) from three points g = 0, G, 2 G
        let (y0, y1, y2) = (reading(None)?, reading(Some(base))?, reading(Some(0.5 * base))?);
        let d = (y1 + y1 - y0 - y2) / (y2 - y1) / exact(2.0);
        let b = y1 * (exact(1.0) + d) - y0;
        let y = exact(wanted);
        let g = (y0 - y) / (y * d - b);
        let ohms = (exact(base) / g).value();
        if ohms.is_finite() && ohms > 0.0 {
            Ok(ohms)
        } else {
            Err(Error::Unfit {
                what: "no resistor across this arm simulates the quantity: try an adjacent arm, or the other sign",
            })
        }
    }

    /// Resistance of an arm, to scale shunts by.
    fn base_ohms(&self, arm: u8) -> Result<f64, Error> {
        let Network::Bridge(bridge) = &self.network else {
            return Err(Error::Unfit { what: "a shunt goes across an arm of a bridge" });
        };
        let index = usize::from(arm).wrapping_sub(1);
        bridge.resistances.get(index).map(|r| 100.0 * r).ok_or(Error::OutOfRange {
            what: "arm of the shunt",
            value: f64::from(arm),
            min: 1.0,
            max: 4.0,
            unit: "",
        })
    }
}
