//! Resistance thermometers and their circuits.

use std::format;
use std::vec::Vec;

use super::{BETA_RANGE, Pieces, Reader, THERMOMETER};
use crate::chain::{Chain, Element, Network, Signal, Supply};
use crate::measurement::Side;
use crate::platinum::{self, IEC_60751};
use crate::sheet::unit::{Kind, Unit};
use crate::signal::{Divider, FullScale, Side as DividerSide};
use crate::thermistor::{Beta, Law, SteinhartHart};

impl<'a> Reader<'a, '_> {
    pub(super) fn platinum(&mut self) -> Option<platinum::Coefficients> {
        let s = self.s.clone();
        let section = s.section("platinum")?;
        let r0 = self.needed(&section, "r0", Kind::Ohms, "the resistance at 0 °C");
        let own: Vec<&str> = ["a", "b", "c"].into_iter().filter(|k| section.has(k)).collect();
        let mut curve = match (section.has("standard"), own.as_slice()) {
            (true, []) => {
                let all = [("IEC 60751", IEC_60751), ("IEC 60751:2008", IEC_60751), ("IEC 60751:2022", IEC_60751)];
                section.choice("standard", &all)?
            }
            (true, _) => {
                self.say(
                    section.span.clone(),
                    "platinum has both a standard and its own coefficients; it is one or the other",
                );
                return None;
            }
            (false, []) => {
                section.lack("standard", "as in standard = \"IEC 60751\", or the coefficients a, b and c");
                return None;
            }
            (false, _) => {
                let a = self.needed(&section, "a", Kind::Number, "coefficient A, 1/K");
                let b = self.needed(&section, "b", Kind::Number, "coefficient B, 1/K2");
                let c = if section.has("c") { self.value(&section, "c", Kind::Number) } else { Some(0.0) };
                let range_celsius = if section.has("c") { IEC_60751.range_celsius } else { [0.0, 850.0] };
                if !section.has("range") {
                    let [low, high] = range_celsius;
                    self.assume(format!("platinum: range {low} °C to {high} °C"));
                }
                platinum::Coefficients { r0_ohms: 1.0, a: a?, b: b?, c: c?, range_celsius }
            }
        };
        if section.has("range") {
            curve.range_celsius = self.range(&section)?;
        }
        if section.has("class") {
            section.choice("class", &[("AA", ()), ("A", ()), ("B", ()), ("C", ())])?;
        }
        Some(curve.with_r0(r0?))
    }

    pub(super) fn thermistor(&mut self) -> Option<Law> {
        let s = self.s.clone();
        let section = s.section("thermistor")?;
        let range = if section.has("range") { Some(self.range(&section)?) } else { None };
        match (section.has("steinhart_hart"), section.has("beta") || section.has("r25")) {
            (true, false) => {
                let [a, b, c] = self.list::<3>(&section, "steinhart_hart", Kind::Number)?;
                let Some(range_celsius) = range else {
                    section.lack(
                        "range",
                        "the temperatures that the coefficients hold for, as in [\"-40 degC\", \"125 degC\"]",
                    );
                    return None;
                };
                Some(Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius }))
            }
            (false, true) => {
                let r25 = self.needed(&section, "r25", Kind::Ohms, "the resistance at 25 °C");
                let beta = if section.has("beta") {
                    // β in kelvin, with or without the unit
                    self.quantity(&section, "beta", &[Kind::Kelvins, Kind::Number]).map(|q| q.quantity.value)
                } else {
                    section.lack("beta", "the constant β, as in \"3950 K\"");
                    None
                };
                let range_celsius = range.unwrap_or_else(|| {
                    let [low, high] = BETA_RANGE;
                    self.assume(format!("thermistor: range {low} °C to {high} °C"));
                    BETA_RANGE
                });
                Some(Law::Beta(Beta { r25_ohms: r25?, beta_kelvin: beta?, range_celsius }))
            }
            (true, true) => {
                self.say(section.span.clone(), "thermistor has both beta and steinhart_hart; it is one or the other");
                None
            }
            (false, false) => {
                section.lack("r25", "r25 and beta, or steinhart_hart = [a, b, c] and range");
                None
            }
        }
    }

    pub(super) fn thermometer_chain(&mut self, unit: Option<Unit>) -> Option<Pieces> {
        let s = self.s.clone();
        let (element, nominal) = if s.has("platinum") {
            let curve = self.platinum()?;
            (Element::Platinum(curve), curve.r0_ohms)
        } else {
            let law = self.thermistor()?;
            (Element::Thermistor(law), law.ohms_from_celsius(25.0))
        };
        let reading = self.signal(unit?, THERMOMETER)?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        let (network, supply, input) = match (s.has("circuit"), s.has("bridge")) {
            (true, true) => {
                let entry = s.entry("circuit")?;
                self.say(entry.key_span.clone(), "a channel has a circuit or a bridge, not both");
                return None;
            }
            (false, true) => {
                let (bridge, supply, input) = self.bridge(Some(nominal))?;
                (Network::Bridge(bridge), supply, input)
            }
            (true, false) => {
                if reading.signal == Signal::Ohms {
                    let entry = s.entry("circuit")?;
                    self.say(entry.key_span.clone(), "circuit turns volts into ohms, but reads is in ohms already");
                    return None;
                }
                self.thermometer_circuit()?
            }
            (false, false) => {
                if reading.signal != Signal::Ohms {
                    s.lack("circuit", "volts become ohms only through a circuit, as in { divider = \"10 kohm\", sensor = \"low\", supply = \"3.3 V\" } or { current = \"1 mA\" }");
                    return None;
                }
                let leads = self.leads(false)?;
                if leads.is_none() {
                    self.assume("leads: none, the reading is the element's resistance");
                }
                (Network::Resistance { leads: leads.map(|(l, _)| l) }, Supply::None, None)
            }
        };
        if s.has("zero") {
            let entry = s.entry("zero")?;
            self.say(entry.key_span.clone(), "a thermometer has no zero");
            return None;
        }
        match &network {
            Network::Bridge(_) => self.needs_supply("bridge", reading, converter.as_ref(), &amplifier, &supply)?,
            Network::Divider { .. } => {
                self.needs_supply("circuit", reading, converter.as_ref(), &amplifier, &supply)?;
            }
            Network::Resistance { .. } if reading.signal != Signal::Ohms => {
                let ratio = reading.signal == Signal::Ratio
                    || converter.as_ref().is_some_and(|c| c.full_scale == FullScale::Supply);
                if ratio {
                    let entry = s.entry("circuit")?;
                    self.say(
                        entry.key_span.clone(),
                        "circuit.current needs readings in volts: a ratio to a supply says nothing of the current",
                    );
                    return None;
                }
            }
            _ => {}
        }
        let mut sides: [Option<Side>; 6] = Default::default();
        let lead_warmth = self.lead_warmth(&mut sides[1])?;
        let chain = Chain { reading, converter, amplifier, supply, lead_warmth, ..Chain::new(network, element) };
        Some(Pieces { supply: input, sides, ..Pieces::of(chain) })
    }

    pub(super) fn thermometer_circuit(&mut self) -> Option<(Network, Supply, Option<usize>)> {
        let s = self.s.clone();
        let section = s.section("circuit")?;
        let leads = self.leads(false)?.map(|(leads, _)| leads);
        if leads.is_none() {
            self.assume("leads: none, no wire has a resistance");
        }
        match (section.has("divider"), section.has("current")) {
            (true, false) => {
                let fixed = self.positive(&section, "divider", Kind::Ohms);
                if !section.has("sensor") {
                    section.lack(
                        "sensor",
                        "\"low\" when the sensor goes from the node to ground, \"high\" when it goes to the supply",
                    );
                }
                let sensor = section.choice("sensor", &[("low", DividerSide::Low), ("high", DividerSide::High)]);
                let input_resistance = if section.has("input_resistance") {
                    Some(self.positive(&section, "input_resistance", Kind::Ohms)?)
                } else {
                    None
                };
                let (supply, input) = self.supply(&section, Kind::Volts)?;
                let divider = Divider { fixed: fixed?, sensor: sensor?, input_resistance };
                Some((Network::Divider { divider, leads }, supply, input))
            }
            (false, true) => {
                let current = self.positive(&section, "current", Kind::Amperes)?;
                Some((Network::Resistance { leads }, Supply::Fixed(current), None))
            }
            _ => {
                self.say(section.span.clone(), "circuit is { divider, sensor, supply } or { current }");
                None
            }
        }
    }
}
