//! Why a reading has no number, asked after the fact and off the fast way.

use super::Word;
use super::kernel;
use super::live::{Live, State, turned};
use super::plan::{Inputs, Plan};
use super::stage::{Degree, Fault, Front, Span};

impl Plan {
    /// Whether the laws of a live bridge cover the temperatures of this reading.
    fn covers_arms(&self, live: &Live, inputs: &Inputs) -> bool {
        let arms = self.uses.arms.iter().zip(inputs.arm_celsius).all(|(used, t)| !used || live.covers.holds(t));
        arms && (!self.uses.temperature || live.covers.holds(inputs.celsius))
    }

    /// Whether leads are leads, and a reference junction one, at the temperature of this reading.
    fn has_leads(&self, inputs: &Inputs) -> bool {
        let warmth = match &self.front {
            Front::Live(live) => live.warmth,
            _ => None,
        };
        warmth.is_none_or(|w| w.holds(inputs.lead_celsius))
            && self.shift.as_ref().is_none_or(|s| s.holds(s.temperature(inputs)))
    }

    /// The word of a reading that has no believed result in a bridge with several driven arms.
    fn of_arms(&self, inputs: &Inputs, stretch: &Span, y: f64) -> Word {
        let (n, d) = match &self.front {
            Front::Moebius { .. } => return Word::Open,
            Front::Quadratic { n: [n0, n1, n2], d: [d0, d1, d2], .. } => {
                ([*n0, *n1, *n2, 0.0, 0.0], [*d0, *d1, *d2, 0.0, 0.0])
            }
            Front::Quartic { n, d, .. } => (*n, *d),
            Front::Arms(arms) => arms.at(inputs.celsius),
            Front::Live(live) => {
                let state = live.at(inputs);
                (state.n, state.d)
            }
        };
        if turned(&n, &d, stretch, y) { Word::OutOfRange } else { Word::Open }
    }

    /// Why there is no number, or what is to be said of the number there is.
    #[cold]
    pub(super) fn word(&self, inputs: &Inputs) -> Word {
        let r = inputs.reading;
        if r.is_nan() {
            return Word::Missing;
        }
        if r <= self.raw.ends.low || r >= self.raw.ends.high {
            return Word::Saturated;
        }
        if let Some(limit) = self.raw.low.filter(|l| r < l.at) {
            return limit.word;
        }
        if let Some(limit) = self.raw.high.filter(|l| r > l.at) {
            return limit.word;
        }
        if (self.uses_supply() && inputs.supply.is_nan()) || self.temperatures(inputs).any(f64::is_nan) {
            return Word::Missing;
        }
        if (self.uses_supply() && inputs.supply.is_infinite()) || self.temperatures(inputs).any(f64::is_infinite) {
            return Word::Saturated;
        }
        if self.uses_supply() && inputs.supply == 0.0 {
            return Word::OutOfRange;
        }
        if matches!(self.front, Front::Arms(_)) && !self.temperature_span.holds(inputs.celsius) {
            // nothing can be said of the arms at a temperature that the laws do not cover
            return Word::OutOfRange;
        }
        if !self.has_leads(inputs) {
            return Word::OutOfRange;
        }
        let y = kernel::enter(self, r, inputs.supply);
        let past_pole = |[n0, n1]: [f64; 2], [d0, d1]: [f64; 2]| {
            let here = n1 - d1 * y;
            let home = (n1 * d0 - n0 * d1) / d0;
            here == 0.0 || (here < 0.0) != (home < 0.0)
        };
        let beyond = match &self.front {
            Front::Moebius { n, d } => past_pole(*n, *d),
            Front::Arms(arms) if arms.degree == Degree::First => {
                let ([n0, n1, ..], [d0, d1, ..]) = arms.at(inputs.celsius);
                past_pole([n0, n1], [d0, d1])
            }
            _ => false,
        };
        if beyond {
            // more than infinite
            return if matches!(self.fault, Fault::None) { Word::OutOfRange } else { Word::Open };
        }
        let u = match &self.front {
            Front::Moebius { n, d } => kernel::moebius(n, d, y),
            Front::Quadratic { n, d, branch } => kernel::quadratic(n, d, *branch, y),
            Front::Quartic { n, d, branch } => kernel::quartic(n, d, *branch, y),
            Front::Arms(arms) => kernel::heated(arms, inputs.celsius, y),
            Front::Live(live) => {
                if !self.covers_arms(live, inputs) {
                    return Word::OutOfRange;
                }
                let state = live.at(inputs);
                let value = live.solve(&state, y);
                let ([low, high], [least, most]) = (live.believed, state.multiples(value));
                if value.is_nan() || least < low || most > high {
                    let (State { n: [n0, n1, ..], d: [d0, d1, ..], .. }, first) =
                        (&state, live.degree == Degree::First);
                    return match live.single() {
                        _ if first && past_pole([*n0, *n1], [*d0, *d1]) => Word::Open,
                        true if least < low => Word::Short,
                        true => Word::Open,
                        false => self.of_arms(inputs, &state.stretch(live.believed), y),
                    };
                }
                value
            }
        };
        let u = match &self.shift {
            Some(shift) => shift.remove(shift.temperature(inputs), u),
            None => u,
        };
        match self.fault {
            Fault::Sensor { short_below, .. } if u < short_below => return Word::Short,
            Fault::Sensor { open_above, .. } if u.is_nan() || u > open_above => return Word::Open,
            Fault::Turned { open_below, .. } if u.is_nan() || u < open_below => return Word::Open,
            Fault::Turned { short_above, .. } if u > short_above => return Word::Short,
            Fault::Arms(span) if !span.holds(u) => return self.of_arms(inputs, &span, y),
            _ => {}
        }
        let value = self.value(inputs);
        if value.is_nan() {
            return Word::OutOfRange;
        }
        let inside = self.covered.front.holds(u)
            && self
                .uses
                .arms
                .iter()
                .zip(inputs.arm_celsius)
                .all(|(used, t)| !used || self.covered.temperature.holds(t))
            && self.covered.result.holds(value)
            && (!self.uses_temperature() || self.covered.temperature.holds(inputs.celsius));
        match inside {
            false => Word::Extrapolated,
            true if self.law.is_ambiguous(u) => Word::Ambiguous,
            true => Word::Good,
        }
    }
}
