//! A shunt step of the recording.

use std::format;

use super::{Reader, in_unit};
use crate::chain::{Chain, Element};
use crate::measurement::ShuntStep;
use crate::sheet::order::rising;
use crate::sheet::unit::{self, Kind};
use crate::signal::{Place, Shunt};

/// Deviation of a shunt step's ratio from 1 that is believed unless the sheet says otherwise: common practice, no source.
const TOLERANCE: f64 = 0.01;

impl Reader<'_, '_> {
    /// `shunt = { from, to, resistor, across = "arm 1", place = "gauge" | "instrument", expected, tolerance }`.
    pub(super) fn shunt(&mut self, output: &str, chain: &Chain) -> Option<Option<ShuntStep>> {
        let s = self.s.clone();
        if !s.has("shunt") {
            return Some(None);
        }
        let section = s.section("shunt")?;
        if !matches!(chain.element, Element::Gauge { .. } | Element::Transducer { .. }) {
            self.say(
                section.span.clone(),
                "a shunt goes across an arm of a bridge: this channel has no gauge or transducer",
            );
            return None;
        }
        for (key, what) in [
            ("from", "the moment from which the shunt was connected"),
            ("to", "the moment until which it was"),
            ("resistor", "its resistance"),
            ("across", "the arm, as in \"arm 1\""),
            ("place", "\"gauge\" or \"instrument\""),
        ] {
            if !section.has(key) {
                section.lack(key, what);
            }
        }
        let (from, to) = (section.text("from"), section.text("to"));
        if let (Some((from, _)), Some(to)) = (&from, &to)
            && !rising(&section, from, to.clone(), false)
        {
            return None;
        }
        let ohms = self.positive(&section, "resistor", Kind::Ohms);
        let arm = section.choice("across", &[("arm 1", 1), ("arm 2", 2), ("arm 3", 3), ("arm 4", 4)]);
        let place = section.choice("place", &[("gauge", Place::Gauge), ("instrument", Place::Instrument)]);
        let expected = if section.has("expected") {
            let own = unit::candidates(output).next()?;
            let value = in_unit(self.quantity(&section, "expected", &[own.kind])?.quantity.value, own);
            if value == 0.0 {
                let entry = section.entry("expected")?;
                self.say(entry.node.span.clone(), "shunt.expected must not be zero: a shunt makes a step");
                return None;
            }
            Some(value)
        } else {
            None
        };
        let tolerance = if section.has("tolerance") {
            let read = section.quantity("tolerance", &[Kind::Strain, Kind::Number])?.quantity.value;
            if read.is_nan() || read <= 0.0 {
                let entry = section.entry("tolerance")?;
                self.say(entry.node.span.clone(), "shunt.tolerance must be above zero");
                return None;
            }
            read
        } else {
            self.assume(format!("shunt.tolerance: {} % of the step", 100.0 * TOLERANCE));
            TOLERANCE
        };
        Some(Some(ShuntStep {
            from: section.moment(from?),
            to: section.moment(to?),
            shunt: Shunt { arm: arm?, ohms: ohms?, place: place? },
            expected,
            tolerance,
        }))
    }
}
