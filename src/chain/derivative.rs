//! Derivatives of a result with respect to everything that went in.

use super::{Chain, Inputs, Parameter, Sides};
use crate::Error;
use crate::math::Dual;

/// What the result changes with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
#[non_exhaustive]
pub enum Derivative {
    /// The reading, in its unit.
    Reading,
    /// The supply that comes with the reading, in its unit.
    Supply,
    /// The temperature that comes with the reading, K.
    Temperature,
    /// The temperature of the leads that comes with the reading, K.
    LeadTemperature,
    /// The temperature of arm 1..=4 that comes with the reading, K.
    ArmTemperature(u8),
    /// A parameter of the chain, in the unit that its documentation states.
    Parameter(Parameter),
}

impl Chain {
    /// Gives `f` the derivative of the result with respect to every input and parameter, at one state.
    ///
    /// Taken from the forward chain over dual numbers: with reading = f(q, p), ∂q/∂p = −(∂f/∂p)/(∂f/∂q). A parameter
    /// that stands in several places of the circuit is visited once with its whole effect.
    ///
    /// - `quantity`: the result, in the unit of the output.
    /// - `inputs`: supply and temperature where the chain uses them; `reading` is ignored.
    ///
    /// # Errors
    /// As [`Chain::forward`]; `Error::Blind` where the reading does not depend on the quantity.
    pub fn derivatives(&self, quantity: f64, inputs: &Inputs, f: impl FnMut(Derivative, f64)) -> Result<(), Error> {
        self.derivatives_of(quantity, inputs, |_| true, f)
    }

    /// The same for those inputs and parameters alone that are wanted: each costs one pass through the chain.
    ///
    /// # Errors
    /// As [`derivatives`](Self::derivatives).
    pub fn derivatives_of(
        &self,
        quantity: f64,
        inputs: &Inputs,
        wanted: impl Fn(Derivative) -> bool,
        mut f: impl FnMut(Derivative, f64),
    ) -> Result<(), Error> {
        let sides = Sides {
            supply: Some(Dual::constant(inputs.supply)),
            celsius: Some(Dual::constant(inputs.celsius)),
            lead_celsius: Some(Dual::constant(inputs.lead_celsius)),
            arm_celsius: inputs.arm_celsius.map(|t| Some(Dual::constant(t))),
        };
        let still = self.map(|_, v| Dual::constant(v));
        let slope = still.forward(Dual::variable(quantity), &sides)?.slope;
        if slope == 0.0 || !slope.is_finite() {
            return Err(Error::Blind);
        }
        let q = Dual::constant(quantity);
        f(Derivative::Reading, 1.0 / slope);
        let mut side = |which, sides: &Sides<Dual>| {
            if wanted(which) { still.forward(q, sides).map(|moved| f(which, -moved.slope / slope)) } else { Ok(()) }
        };
        if self.needs_supply_column() {
            side(Derivative::Supply, &Sides { supply: Some(Dual::variable(inputs.supply)), ..sides })?;
        }
        if self.needs_temperature() && matches!(self.temperature, super::Temperature::Column) {
            side(Derivative::Temperature, &Sides { celsius: Some(Dual::variable(inputs.celsius)), ..sides })?;
        }
        if self.needs_lead_temperature() {
            let lead_celsius = Some(Dual::variable(inputs.lead_celsius));
            side(Derivative::LeadTemperature, &Sides { lead_celsius, ..sides })?;
        }
        for (i, needed) in self.needs_arm_temperatures().into_iter().enumerate() {
            if needed {
                let mut arm_celsius = sides.arm_celsius;
                for (slot, t) in arm_celsius.iter_mut().zip(inputs.arm_celsius).skip(i).take(1) {
                    *slot = Some(Dual::variable(t));
                }
                side(Derivative::ArmTemperature(i as u8 + 1), &Sides { arm_celsius, ..sides })?;
            }
        }
        // one pass for each parameter, seeded by its place in the order of `map`
        let (mut count, mut asked) = (0_usize, 0_u128);
        self.map(|parameter, v| {
            // beyond 128 parameters all are computed
            if count < 128 && wanted(Derivative::Parameter(parameter)) {
                asked |= 1 << count;
            }
            count += 1;
            v
        });
        for seed in (0..count).filter(|n| *n >= 128 || asked >> n & 1 == 1) {
            let (mut place, mut which) = (0_usize, None);
            let seeded = self.map(|parameter, v| {
                let here = place == seed;
                place += 1;
                if here {
                    which = Some(parameter);
                    Dual::variable(v)
                } else {
                    Dual::constant(v)
                }
            });
            if let Some(parameter) = which.filter(|p| wanted(Derivative::Parameter(*p))) {
                let moved = seeded.forward(q, &sides)?.slope;
                f(Derivative::Parameter(parameter), -moved / slope);
            }
        }
        Ok(())
    }

    /// Returns the derivative of the result with respect to one input or parameter; 0 for one that the chain lacks.
    ///
    /// # Errors
    /// As [`derivatives`](Self::derivatives).
    pub fn derivative(&self, wanted: Derivative, quantity: f64, inputs: &Inputs) -> Result<f64, Error> {
        let mut found = 0.0;
        self.derivatives(quantity, inputs, |which, value| {
            if which == wanted {
                found = value;
            }
        })?;
        Ok(found)
    }
}
