//! What a broken lead looks like.

use super::{Chain, Element, Inputs, Network, Sides};
use crate::Error;
use crate::signal::{Conductor, Each, Leads, Wires};

/// A conductor that is broken, Ω: far above anything in a circuit, far below where its square would overflow.
const BROKEN_OHMS: f64 = 1e15;

/// How near a reading must come to that of a broken lead, as a share of the way between both leads' readings.
const NEAR: f64 = 0.02;

impl Chain {
    /// Returns the reading with one lead of a three-wire bridge broken: a reading of its own for leads 1 and 2, each of which is
    /// in series with an arm. The third, in series with the output, leaves the input of the instrument floating: it has none.
    ///
    /// - `lead`: 1 or 2, in the order of the sheet: to arm 1, to arm 2.
    /// - `inputs`: supply and temperature where the chain uses them; `reading` is ignored.
    ///
    /// # Errors
    /// `Error::Unfit` for a chain without three wires to a bridge or another lead; as [`Chain::forward`] otherwise.
    pub fn reading_with_broken_lead(&self, lead: u8, inputs: &Inputs) -> Result<f64, Error> {
        let unfit = Err(Error::Unfit { what: "only leads 1 and 2 of a three-wire bridge have a reading of their own" });
        let Network::Bridge(mut bridge) = self.network else { return unfit };
        let Some(Leads { wires: Wires::Three, each }) = bridge.leads else { return unfit };
        let [mut one, mut two, three] = match each {
            Each::Same(c) => [c; 3],
            Each::Own(own) => own,
        };
        match lead {
            1 => one = Conductor::Ohms(BROKEN_OHMS),
            2 => two = Conductor::Ohms(BROKEN_OHMS),
            _ => return unfit,
        }
        bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Own([one, two, three]) });
        let mut broken = Self { network: Network::Bridge(bridge), ..*self };
        // what a strain or temperature adds is nothing beside a break, and a zero cannot be read through one
        broken.self_heating = None;
        if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut broken.element {
            zero.reading = None;
        }
        let middle = self.element.range_celsius().map_or(0.0, |[low, high]| 0.5 * (low + high));
        let quantity = if self.element.is_thermometer() {
            let (scale, offset) = self.output.scale::<f64>();
            scale * middle + offset
        } else {
            0.0
        };
        broken.forward(
            quantity,
            &Sides {
                supply: Some(inputs.supply),
                celsius: Some(inputs.celsius),
                lead_celsius: Some(inputs.lead_celsius),
                arm_celsius: inputs.arm_celsius.map(Some),
            },
        )
    }

    /// Returns which lead of a three-wire bridge is broken where a reading shows it: 1 or 2. The third has no reading of its
    /// own, and neither has any lead of an instrument that reads ohms.
    #[must_use]
    pub fn broken_lead(&self, inputs: &Inputs) -> Option<u8> {
        let [one, two] = [1, 2].map(|lead| self.reading_with_broken_lead(lead, inputs));
        let (one, two) = (one.ok()?, two.ok()?);
        let near = |at: f64| (inputs.reading - at).abs() <= NEAR * (one - two).abs();
        match (near(one), near(two)) {
            (true, false) => Some(1),
            (false, true) => Some(2),
            _ => None,
        }
    }
}
