//! Derivatives of a result with respect to everything that went in.

use super::{Chain, Inputs, Parameter};
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
    pub fn derivatives(&self, quantity: f64, inputs: &Inputs, mut f: impl FnMut(Derivative, f64)) -> Result<(), Error> {
        let (supply, celsius) = (Dual::constant(inputs.supply), Dual::constant(inputs.celsius));
        let still = self.map(|_, v| Dual::constant(v));
        let slope = still.forward(Dual::variable(quantity), Some(supply), Some(celsius))?.slope;
        if slope == 0.0 || !slope.is_finite() {
            return Err(Error::Blind);
        }
        let q = Dual::constant(quantity);
        f(Derivative::Reading, 1.0 / slope);
        if self.needs_supply_column() {
            let moved = still.forward(q, Some(Dual::variable(inputs.supply)), Some(celsius))?.slope;
            f(Derivative::Supply, -moved / slope);
        }
        if self.needs_temperature() && matches!(self.temperature, super::Temperature::Column) {
            let moved = still.forward(q, Some(supply), Some(Dual::variable(inputs.celsius)))?.slope;
            f(Derivative::Temperature, -moved / slope);
        }
        // one pass for each parameter, seeded by its place in the order of `map`
        let mut count = 0_usize;
        self.map(|_, v| {
            count += 1;
            v
        });
        for wanted in 0..count {
            let (mut place, mut which) = (0_usize, None);
            let seeded = self.map(|parameter, v| {
                let here = place == wanted;
                place += 1;
                if here {
                    which = Some(parameter);
                    Dual::variable(v)
                } else {
                    Dual::constant(v)
                }
            });
            if let Some(parameter) = which {
                let moved = seeded.forward(q, Some(supply), Some(celsius))?.slope;
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
