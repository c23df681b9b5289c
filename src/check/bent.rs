//! How far a bridge is from being straight, and zeros that are taken off before or behind that.

use super::model::{output_line, plan_of, ten, zero_ratio};
use crate::chain::{Chain, Element, Inputs, LeadWarmth, Plan, Supply, Temperature};
use crate::strain::ZeroMeaning;

/// How a bridge is said to be straight or bent.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Bend {
    Exact,
    /// In proportion to the output.
    Proportional,
    /// The term 1 − 2y with the wrong sign, y the output over supply.
    Reversed,
    /// The whole correction taken off instead of put on.
    Opposite,
    /// The correction of one gauge put on the result once more.
    Again,
    /// The difference between exact and proportional put on once more.
    Twice,
}

/// The chain of a gauge without what temperature does to it.
fn isothermal(chain: &Chain) -> Chain {
    let mut plain = *chain;
    if let Element::Gauge { gauge, zero, .. } = &mut plain.element {
        gauge.thermal_output = None;
        gauge.thermal_points = None;
        gauge.expansion = None;
        gauge.slope = 0.0;
        zero.arm_celsius = [None; 4];
    }
    plain.temperature = Temperature::None;
    plain.arm_temperatures = [Temperature::None; 4];
    plain
}

/// A bridge beside what is in proportion to its output.
pub(super) struct Bent {
    chain: Chain,
    plan: Plan,
    /// Output over supply for one unit of the result, at balance.
    slope: f64,
    zero: f64,
    /// F/F(T) = 1/(1 + s (T − T_ref)).
    gauge_slope: f64,
    reference: f64,
}

impl Bent {
    pub(super) fn new(chain: &Chain, inputs: &Inputs) -> Option<Self> {
        let plain = isothermal(chain);
        let mut balanced = plain;
        if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut balanced.element {
            zero.reading = None;
        }
        let plan = plan_of(&balanced)?;
        let one = Inputs { supply: 1.0, ..*inputs };
        let output = |q: f64| {
            let reading = plan.forward(q, one).ok()?;
            chain.network_output(&Inputs { reading, ..one }).ok()
        };
        let q = match &chain.element {
            Element::Gauge { .. } => 1e-5 * unit_of(chain),
            _ => 1e-3,
        };
        let slope = (output(q)? - output(-q)?) / (2.0 * q);
        let zero = zero_ratio(chain).map_or_else(|| output(0.0), Some)?;
        let (gauge_slope, reference) = match &chain.element {
            Element::Gauge { gauge, .. } => (gauge.slope, gauge.reference_celsius),
            _ => (0.0, 0.0),
        };
        Some(Self { chain: *chain, plan: plan_of(&plain)?, slope, zero, gauge_slope, reference })
    }

    /// What the result is more than the exact one.
    pub(super) fn difference(&self, bend: Bend, inputs: &Inputs) -> f64 {
        let exact = self.plan.one(*inputs).value;
        let Ok(y) = self.chain.network_output(inputs) else { return f64::NAN };
        let unbalance = y - self.zero;
        let straight = unbalance / self.slope;
        let wanted = match bend {
            Bend::Exact => exact,
            Bend::Proportional => straight,
            Bend::Reversed => straight / (1.0 + 2.0 * unbalance),
            Bend::Opposite => 2.0 * straight - exact,
            Bend::Again => exact / (1.0 - 2.0 * unbalance),
            Bend::Twice => 2.0 * exact - straight,
        };
        let celsius = match self.chain.temperature {
            Temperature::Fixed(t) => t,
            Temperature::Column => inputs.celsius,
            Temperature::None => self.reference,
        };
        (wanted - exact) / (1.0 + self.gauge_slope * (celsius - self.reference))
    }
}

/// What a plain strain of 1 is in the unit of the result.
fn unit_of(chain: &Chain) -> f64 {
    match chain.output {
        crate::chain::Output::Strain { exponent } => ten(i32::from(exponent)),
        crate::chain::Output::ShearStrain { exponent } => 2.0 * ten(i32::from(exponent)),
        _ => 1.0,
    }
}

/// The zero reading, as output over supply, of a gauge strained so many times as much when it was taken.
pub(super) fn zero_times(chain: &Chain, times: f64) -> Option<f64> {
    let mut plain = isothermal(chain);
    let ratio = zero_ratio(chain)?;
    let (k, m) = output_line(chain)?;
    if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut plain.element {
        zero.reading = None;
        zero.meaning = ZeroMeaning::Strain;
        // the leads as they were then
        plain.lead_warmth = match (plain.lead_warmth, zero.lead_celsius) {
            (Some(warmth), Some(t)) => Some(LeadWarmth { temperature: Temperature::Fixed(t), ..warmth }),
            (Some(LeadWarmth { temperature: Temperature::Column, .. }), None) => None,
            (warmth, _) => warmth,
        };
    }
    let inputs = |reading| Inputs { reading, supply: 1.0 / supply_unit(chain), ..Inputs::default() };
    let plan = plan_of(&plain)?;
    let value = plan.one(inputs((ratio - m) / k)).value;
    let reading = plan.forward(times * value, inputs(0.0)).ok()?;
    Some(reading * k + m)
}

pub(super) fn supply_unit(chain: &Chain) -> f64 {
    match chain.supply {
        Supply::Column { exponent } => ten(i32::from(exponent)),
        _ => 1.0,
    }
}
