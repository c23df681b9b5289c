//! A plan the other way round: the reading that a quantity gives.

use super::Word;
use super::law::{Heating, Law};
use super::plan::{Inputs, Plan};
use super::stage::{Fault, Front, Span, Tail};
use crate::Error;
use crate::math::{MOST_STEPS, horner};

/// Steps towards the temperature of a thermometer that warms itself; a few do, unless it runs away.
const HEATING_STEPS: usize = MOST_STEPS;

impl Plan {
    /// Returns the reading that this quantity gives.
    ///
    /// - `quantity`: in the unit of the output.
    /// - `inputs`: supply and temperature where the chain uses them; `reading` is ignored.
    ///
    /// # Errors
    /// `Error::Flagged` with `OutOfRange` when the quantity lies outside what the chain believes, unless it extrapolates;
    /// `Error::NotFinite` for NaN or ±∞.
    pub fn forward(&self, quantity: f64, inputs: impl Into<Inputs>) -> Result<f64, Error> {
        if !quantity.is_finite() {
            return Err(Error::NotFinite { what: "quantity" });
        }
        let inputs = inputs.into();
        let t = inputs.celsius;
        if self.temperatures(&inputs).any(|t| !t.is_finite()) {
            return Err(Error::NotFinite { what: "temperature" });
        }
        let outside = Err(Error::Flagged(Word::OutOfRange));
        if !self.extrapolate
            && !(self.span.holds(quantity) && (!self.uses_temperature() || self.temperature_span.holds(t)))
        {
            return outside;
        }
        let v = match &self.tail {
            Tail::None => quantity,
            Tail::Affine { scale, offset } => (quantity - offset) / scale,
            Tail::Thermal { p, f: [f0, f1] } => quantity * (f0 + f1 * t) + horner(t, p),
            Tail::ThermalPoints { p, f: [f0, f1], points, scale } => {
                quantity * (f0 + f1 * t) + (horner(t, p) + scale * points.at(t))
            }
        };
        let v = match &self.heating {
            Some(heating) => match self.heated(heating, v, inputs.supply) {
                Some(v) => v,
                None => return outside,
            },
            None => v,
        };
        if !self.extrapolate && !self.law.covers().holds(v) {
            return outside;
        }
        let u = self.law.argument(v);
        let believed = match self.fault {
            Fault::Sensor { short_below, open_above } => Span { low: short_below, high: open_above }.holds(u),
            Fault::Turned { open_below, short_above } => Span { low: open_below, high: short_above }.holds(u),
            Fault::Arms(span) => span.holds(u),
            Fault::None => true,
        };
        if !believed || (!self.extrapolate && matches!(self.law, Law::None) && !self.front_span.holds(u)) {
            return outside;
        }
        // what is believed is the thermometer, without its leads
        let u = match &self.shift {
            Some(shift) if !shift.holds(shift.temperature(&inputs)) => return outside,
            Some(shift) => shift.put(shift.temperature(&inputs), u),
            None => u,
        };
        let y = match &self.front {
            Front::Moebius { n, d } => horner(u, n) / horner(u, d),
            Front::Quadratic { n, d, .. } => horner(u, n) / horner(u, d),
            Front::Quartic { n, d, .. } => horner(u, n) / horner(u, d),
            Front::Arms(arms) => {
                let (n, d) = arms.at(t);
                horner(u, &n) / horner(u, &d)
            }
            Front::Live(live) => match live.output(u, &inputs) {
                Some(y) => y,
                None => return outside,
            },
        };
        Ok(if self.divides_by_supply { y * inputs.supply - self.reading_offset } else { y })
    }

    /// The temperature of the thermometer itself where what it measures has this one: t = T + ΔT(R(t)).
    fn heated(&self, heating: &Heating, celsius: f64, supply: f64) -> Option<f64> {
        self.heated_in_steps(heating, celsius, supply).0
    }

    /// The same with the number of Newton steps that it took.
    fn heated_in_steps(&self, heating: &Heating, celsius: f64, supply: f64) -> (Option<f64>, usize) {
        let Span { low, high } = self.law.covers();
        let excess = |t: f64| t - heating.kelvin(self.law.argument(t), supply) - celsius;
        // from the side on which nothing is too warm yet: the first state that the thermometer reaches
        let mut t = celsius;
        let mut steps = 0;
        while steps < HEATING_STEPS {
            steps += 1;
            let h = 1e-6 * (1.0 + t.abs());
            let slope = (excess(t + h) - excess(t - h)) / (2.0 * h);
            let next = t - excess(t) / slope;
            let moved = (next - t).abs();
            t = next;
            if moved <= 1e-13 * (1.0 + t.abs()) {
                break;
            }
        }
        let settled = excess(t).abs() <= 1e-10 * (1.0 + t.abs());
        ((settled && (self.extrapolate || (t >= low && t <= high))).then_some(t), steps)
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use crate::chain::{Chain, Element, Network, SelfHeating, Supply};
    use crate::platinum::IEC_60751;
    use crate::signal::{Divider, Side};
    use crate::thermistor::{Beta, Law};

    #[test]
    fn steps_of_a_thermometer_that_warms_itself() {
        let beta = Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 125.0] };
        let divider = Divider { fixed: 10e3, sensor: Side::Low, input_resistance: None };
        let mut thermistor =
            Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(Law::Beta(beta)));
        thermistor.supply = Supply::Fixed(5.0);
        let mut platinum = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));
        let heat = |kelvin_per_watt, amperes| Some(SelfHeating { kelvin_per_watt, amperes });
        // 400 K/W is still air about a bead, common practice, no source; 20 mA is twenty times an ordinary current
        thermistor.self_heating = heat(400.0, None);
        platinum.self_heating = heat(400.0, Some(20e-3));
        for (what, chain, span) in [("thermistor", thermistor, [-39.0, 120.0]), ("platinum", platinum, [-199.0, 800.0])]
        {
            let plan = chain.plan().expect("a plan");
            let heating = plan.heating.expect("heat");
            let all = (0..=20_000).map(|i| {
                plan.heated_in_steps(&heating, span[0] + (span[1] - span[0]) * f64::from(i) / 20_000.0, 1.0).1
            });
            let most = all.max();
            std::println!("{what}: {most:?} steps");
            assert!(most < Some(super::HEATING_STEPS), "{what}: {most:?}");
        }
    }
}
