//! Transducers: rated output or a certificate's polynomial.

use std::format;
use std::string::ToString;

use super::network::full_bridge;
use super::{Pieces, Reader};
use crate::chain::{Chain, Element, Network, Signal, Supply, Temperature};
use crate::measurement::{Side, ZeroSource};
use crate::sheet::table_of;
use crate::sheet::unit::{self, Kind, Unit};
use crate::signal::{Bridge, FullScale};
use crate::strain::{Certificate, Gauge, Transducer, ZeroMeaning};

/// Kinds of load that a transducer can measure.
pub(in crate::sheet) const LOADS: &[Kind] =
    &[Kind::Newtons, Kind::Pascals, Kind::NewtonMetres, Kind::Kilograms, Kind::Metres, Kind::Number];

/// Share of the capacity up to which a load is believed unless the sheet says otherwise: common practice, no source.
const OVERLOAD: f64 = 1.5;

/// The unit of a load with this spelling.
pub(in crate::sheet) fn load_unit(text: &str) -> Option<Unit> {
    LOADS.iter().find_map(|kind| unit::find(*kind, text))
}

impl Reader<'_, '_> {
    pub(super) fn transducer_chain(&mut self, unit: Option<Unit>) -> Option<Pieces> {
        let s = self.s.clone();
        let section = s.section("transducer")?;
        for key in ["thermal_output", "expansion", "temperature", "circuit", "transverse", "largest_strain"] {
            if let Some(entry) = s.table.peek(key) {
                self.say(entry.key_span.clone(), format!("{key} does not belong to a transducer"));
                return None;
            }
        }
        let (law, out, capacity) = match (section.has("rated"), section.has("polynomial")) {
            (true, true) => {
                self.say(section.span.clone(), "transducer has both rated and polynomial; it is one or the other");
                return None;
            }
            (false, false) => {
                section.lack("rated", "the rated output, as in \"2.0137 mV/V\", with capacity; or a polynomial");
                return None;
            }
            (true, false) => {
                let rated = self.needed(&section, "rated", Kind::VoltageRatio, "the rated output");
                if !section.has("capacity") {
                    section.lack("capacity", "the load at rated output, as in \"50 kN\"");
                    return None;
                }
                let read = self.quantity(&section, "capacity", LOADS)?;
                if read.quantity.value <= 0.0 {
                    self.not_positive(&section, "capacity", "");
                    return None;
                }
                let own = read.quantity.unit;
                let out = self.output_of_load(own)?;
                let capacity = super::in_unit(read.quantity.value, out);
                (Transducer::Rated { output: rated?, capacity }, out, capacity)
            }
            (false, true) => self.certificate(&section)?,
        };
        let limit = if s.has("largest_load") {
            let read = self.quantity(&s, "largest_load", &[out.kind])?;
            super::in_unit(read.quantity.value, out)
        } else {
            let limit = OVERLOAD * capacity;
            // a certificate believes no load beyond its own range
            if matches!(law, Transducer::Rated { .. }) {
                self.assume(format!("largest_load: {limit} {}, 150 % of the capacity", out.name));
            }
            limit
        };
        if limit.is_nan() || limit <= 0.0 {
            let entry = s.entry("largest_load")?;
            self.say(entry.node.span.clone(), "largest_load must be above zero");
            return None;
        }
        if let Some(wires) = s.section("bridge") {
            for key in ["poisson", "temperatures"] {
                if let Some(entry) = wires.table.peek(key) {
                    self.say(entry.key_span.clone(), format!("bridge.{key} does not belong to a transducer"));
                    return None;
                }
            }
            if wires.has("arms") && self.arms(&wires)? != full_bridge() {
                let entry = wires.entry("arms")?;
                self.say(
                    entry.node.span.clone(),
                    "a transducer is a full bridge, [\"e\", \"-e\", \"e\", \"-e\"]: its rated output says what its arms do together",
                );
                return None;
            }
        }
        self.arms_that_count()?;
        let mut sides: [Option<Side>; 6] = Default::default();
        let (bridge, supply, input) = if s.has("bridge") {
            self.bridge(Some(350.0))?
        } else {
            self.assume("leads: none, no wire has a resistance");
            (Bridge::equal(350.0, full_bridge()), Supply::None, None)
        };
        let lead_warmth = self.lead_warmth(&mut sides[1])?;
        if self.drifts_with_temperature() && s.has("temperature") {
            sides[0] = crate::sheet::channel::side(&s, "temperature", self.known, self.assumed)?.err();
        }
        let reading = self.signal(unit?, "transducer")?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        if s.has("bridge") {
            self.needs_supply("bridge", reading, converter.as_ref(), &amplifier, &supply)?;
        } else if reading.signal != Signal::Ratio
            && !converter.as_ref().is_some_and(|c| c.full_scale == FullScale::Supply)
        {
            s.lack("bridge", "volts need the supply they belong to, as in bridge = { supply = \"10 V\" }");
            return None;
        }
        let varies = matches!(supply, Supply::Column { .. })
            && (reading.signal == Signal::Volts
                || converter.as_ref().is_some_and(|c| c.full_scale != FullScale::Supply));
        // the zero of a transducer is read like that of a gauge without thermal output
        let (zero, source, zero_stated) =
            self.zero(unit?, &Gauge::new(1.0), &bridge, &[Temperature::None; 4], varies)?;
        if zero.meaning != ZeroMeaning::Strain {
            let entry = s.entry("zero")?;
            self.say(
                entry.key_span.clone(),
                "the zero of a transducer is its reading without load: it has no other meaning",
            );
            return None;
        }
        // with a zero the polynomial counts from there, and a constant would be taken off a second time
        if let Transducer::Certificate(k) = &law
            && (zero.reading.is_some() || source != ZeroSource::Stated)
            && k.coefficients.first().is_some_and(|c| *c != 0.0)
        {
            let entry = section.entry("polynomial")?;
            self.say(
                entry.node.span.clone(),
                "transducer.polynomial begins with what is there without load, and so does zero: write 0 for the one, or leave out the other",
            );
            return None;
        }
        let chain = Chain {
            reading,
            converter,
            amplifier,
            supply,
            lead_warmth,
            ..Chain::new(Network::Bridge(bridge), Element::Transducer { law, zero, limit })
        };
        Some(Pieces {
            zero: source,
            zero_stated,
            supply: input,
            sides,
            unit: Some(out.name.to_string()),
            ..Pieces::of(chain)
        })
    }

    /// The arms' resistances count where something acts on them: leads, a load, a shunt.
    fn arms_that_count(&self) -> Option<()> {
        let s = self.s;
        let bridge = s.table.peek("bridge").and_then(|e| table_of(&e.node.value));
        let difference =
            s.table.peek("amplifier").and_then(|e| table_of(&e.node.value)).is_some_and(|t| t.has("difference"));
        let acting = ["supply_leads", "signal_leads", "input_resistance"];
        let acting =
            acting.into_iter().find(|key| bridge.is_some_and(|b| b.has(key))).map(|key| format!("bridge.{key}"));
        let acting = acting
            .or_else(|| ["leads", "shunt"].into_iter().find(|key| s.has(key)).map(ToString::to_string))
            .or_else(|| difference.then(|| "amplifier.difference".to_string()));
        let Some(acting) = acting.filter(|_| !bridge.is_some_and(|b| b.has("resistances"))) else { return Some(()) };
        let span = s.table.peek("bridge").map_or_else(|| s.span.clone(), |e| e.key_span.clone());
        self.say(
            span,
            format!("bridge.resistances is missing: the four arms of the transducer, which {acting} acts on"),
        );
        None
    }

    /// Unit of the result: the stated output, or that of the load.
    fn output_of_load(&mut self, own: Unit) -> Option<Unit> {
        match self.s.text("output") {
            None if self.s.has("output") => None,
            None => Some(own),
            Some((text, span)) => {
                let found = unit::find(own.kind, text);
                if found.is_none() {
                    self.say(span, format!("output is '{text}'; this transducer gives {}", own.kind.expected()));
                }
                found
            }
        }
    }

    /// `polynomial = [...], in = "kN", gives = "mV/V", range = ["0 kN", "50 kN"]`, or in mV/V and giving kN.
    fn certificate(&mut self, section: &crate::sheet::node::Section<'_>) -> Option<(Transducer, Unit, f64)> {
        let read = section.quantities("polynomial", &[Kind::Number], 2, 7)?;
        let mut coefficients = [0.0; 7];
        for (i, (slot, one)) in coefficients.iter_mut().zip(&read).enumerate() {
            *slot = one.quantity.value;
            self.keep(format!("transducer.polynomial[{i}]"), one);
        }
        let unit_of = |key: &str| -> Option<Unit> {
            let Some((text, span)) = section.text(key) else {
                if !section.has(key) {
                    section.lack(key, "a unit of load or of output, as in in = \"kN\", gives = \"mV/V\"");
                }
                return None;
            };
            let found = unit::find(Kind::VoltageRatio, text).or_else(|| load_unit(text));
            if found.is_none() {
                self.say(span, format!("transducer.{key} is '{text}'; expected a unit of load or a voltage ratio"));
            }
            found
        };
        let (taken, gives) = (unit_of("in"), unit_of("gives"));
        let (taken, gives) = (taken?, gives?);
        let (load, output, gives_output) = match (taken.kind, gives.kind) {
            (Kind::VoltageRatio, Kind::VoltageRatio) => {
                self.say(
                    section.span.clone(),
                    "transducer: in and gives are both voltage ratios; one of them is the load",
                );
                return None;
            }
            (Kind::VoltageRatio, _) => (gives, taken, false),
            (_, Kind::VoltageRatio) => (taken, gives, true),
            _ => {
                self.say(section.span.clone(), "transducer: neither in nor gives is a voltage ratio such as mV/V");
                return None;
            }
        };
        if !section.has("range") {
            section.lack("range", "the loads that the certificate holds for, as in [\"0 kN\", \"50 kN\"]");
            return None;
        }
        let ends = section.quantities("range", &[load.kind], 2, 2)?;
        let ends: [f64; 2] = match ends.as_slice() {
            [a, b] => [super::in_unit(a.quantity.value, load), super::in_unit(b.quantity.value, load)],
            _ => return None,
        };
        let out = self.output_of_load(load)?;
        let load_scale = super::between(load, out);
        let certificate =
            Certificate { coefficients, gives_output, output_exponent: output.exponent, load_scale, range: ends };
        let largest = ends.iter().fold(0.0_f64, |m, e| m.max(e.abs())) * load_scale.abs();
        Some((Transducer::Certificate(certificate), out, largest))
    }
}
