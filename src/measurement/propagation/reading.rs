//! One chain on the way to the result.

use std::vec::Vec;

use crate::Error;
use crate::chain::{Chain, Derivative, Inputs, Output, Parameter, Plan};
use crate::measurement::Tolerance;

/// Where the error of a cause goes in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Target {
    Reading,
    Supply,
    Parameter(Parameter),
}

/// A cause, where it goes in, and by how much per unit of its error.
#[derive(Clone, Copy, Debug)]
pub(super) struct Link {
    pub(super) cause: usize,
    pub(super) to: Target,
    pub(super) factor: f64,
}

/// Where the temperature of another step goes in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Place {
    Gauge,
    Leads,
    Arm(u8),
    Zero(Parameter),
}

/// A temperature that another step gives.
#[derive(Clone, Copy, Debug)]
pub(super) struct Child {
    pub(super) node: usize,
    /// °C = scale · value + offset.
    pub(super) to_celsius: (f64, f64),
    pub(super) to: Place,
}

/// An error of the result by the tolerance class of its sensor, with a cause that is ±1.
#[derive(Clone, Copy, Debug)]
pub(super) struct Spread {
    pub(super) cause: usize,
    pub(super) limits: Tolerance,
}

#[derive(Clone, Debug)]
pub(super) struct ReadingNode {
    pub(super) chain: Chain,
    pub(super) plan: Plan,
    pub(super) inputs: Inputs,
    pub(super) links: Vec<Link>,
    pub(super) children: Vec<Child>,
    pub(super) spread: Option<Spread>,
}

impl ReadingNode {
    /// The chain and what comes with it when inputs are off; `None` for a chain that cannot be lowered then.
    fn at(&self, off: &[f64], values: &[f64]) -> Option<(Chain, Plan, Inputs)> {
        let by = |cause: usize| off.get(cause).copied().unwrap_or(0.0);
        let celsius = |child: &Child| {
            let (scale, offset) = child.to_celsius;
            scale * values.get(child.node).copied().unwrap_or(f64::NAN) + offset
        };
        let mut inputs = self.inputs;
        let mut changed = false;
        for link in &self.links {
            let by = link.factor * by(link.cause);
            match link.to {
                Target::Reading => inputs.reading += by,
                Target::Supply => inputs.supply += by,
                Target::Parameter(_) => changed |= by != 0.0,
            }
        }
        for child in &self.children {
            match child.to {
                Place::Gauge => inputs.celsius = celsius(child),
                Place::Leads => inputs.lead_celsius = celsius(child),
                Place::Arm(n) => {
                    for slot in inputs.arm_celsius.iter_mut().skip(usize::from(n).saturating_sub(1)).take(1) {
                        *slot = celsius(child);
                    }
                }
                Place::Zero(_) => changed |= off.iter().any(|by| *by != 0.0),
            }
        }
        if !changed {
            return Some((self.chain, self.plan, inputs));
        }
        let chain = self.chain.map(|parameter, value| {
            let own = self.links.iter().filter(|l| l.to == Target::Parameter(parameter));
            let moved = value + own.map(|l| l.factor * by(l.cause)).sum::<f64>();
            let child = self.children.iter().find(|c| c.to == Place::Zero(parameter));
            child.map_or(moved, celsius)
        });
        let plan = chain.plan().ok()?;
        Some((chain, plan, inputs))
    }

    pub(super) fn moved(&self, off: &[f64], values: &[f64]) -> f64 {
        let Some((_, plan, inputs)) = self.at(off, values) else { return f64::NAN };
        let value = plan.one(inputs).value;
        let by = |s: &Spread| {
            self.spread_at(s, value).map_or(f64::NAN, |width| width * off.get(s.cause).copied().unwrap_or(0.0))
        };
        value + self.spread.as_ref().map_or(0.0, by)
    }

    /// The cause, the range of the class and the value, °C, where the value lies beyond the class.
    pub(super) fn beyond_class(&self, off: &[f64], values: &[f64]) -> Option<(usize, [f64; 2], f64)> {
        let spread = self.spread.as_ref()?;
        let (_, plan, inputs) = self.at(off, values)?;
        let value = plan.one(inputs).value;
        let (scale, offset) = self.scale();
        let beyond = value.is_finite() && self.spread_at(spread, value).is_err();
        beyond.then(|| (spread.cause, spread.limits.range_celsius(), (value - offset) / scale))
    }

    /// Half-width of the tolerance at a result, in its unit; the class must reach that far.
    fn spread_at(&self, spread: &Spread, value: f64) -> Result<f64, Error> {
        let (scale, offset) = self.scale();
        Ok(scale * spread.limits.kelvin_at_celsius((value - offset) / scale)?)
    }

    /// The result as scale · °C + offset.
    const fn scale(&self) -> (f64, f64) {
        match self.chain.output {
            Output::Kelvin => (1.0, 273.15),
            Output::Fahrenheit => (1.8, 32.0),
            _ => (1.0, 0.0),
        }
    }

    pub(super) fn gradient(
        &self,
        off: &[f64],
        values: &[f64],
        gradients: &[Vec<f64>],
        own: &mut [f64],
    ) -> Result<f64, Error> {
        let (chain, plan, inputs) = self.at(off, values).ok_or(Error::Blind)?;
        let value = plan.one(inputs).number()?;
        let wanted = |which| {
            let (target, place) = goes_in(which);
            self.links.iter().any(|l| Some(l.to) == target) || self.children.iter().any(|c| Some(c.to) == place)
        };
        chain.derivatives_of(value, &inputs, wanted, |which, slope| {
            let (target, place) = goes_in(which);
            for link in self.links.iter().filter(|l| Some(l.to) == target) {
                if let Some(slot) = own.get_mut(link.cause) {
                    *slot += slope * link.factor;
                }
            }
            for child in self.children.iter().filter(|c| Some(c.to) == place) {
                super::add(own, gradients.get(child.node), slope * child.to_celsius.0);
            }
        })?;
        let Some(spread) = self.spread else { return Ok(value) };
        // what is off by a share of the temperature grows with it a little: the slope of the width over 1 mK
        let by = off.get(spread.cause).copied().unwrap_or(0.0);
        let width = self.spread_at(&spread, value)?;
        let (scale, offset) = self.scale();
        let grown = 1.0 + by * spread.limits.slope_at_celsius((value - offset) / scale);
        for slot in own.iter_mut() {
            *slot *= grown;
        }
        if let Some(slot) = own.get_mut(spread.cause) {
            *slot += width;
        }
        Ok(value + width * by)
    }
}

/// Where a derivative finds its causes and its temperature.
const fn goes_in(which: Derivative) -> (Option<Target>, Option<Place>) {
    match which {
        Derivative::Reading => (Some(Target::Reading), None),
        Derivative::Supply => (Some(Target::Supply), None),
        Derivative::Temperature => (None, Some(Place::Gauge)),
        Derivative::LeadTemperature => (None, Some(Place::Leads)),
        Derivative::ArmTemperature(n) => (None, Some(Place::Arm(n))),
        Derivative::Parameter(p) => (Some(Target::Parameter(p)), Some(Place::Zero(p))),
    }
}
