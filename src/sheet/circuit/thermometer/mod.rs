//! Thermometers and their circuits.

use std::format;
use std::vec::Vec;

mod sensors;

use super::{Pieces, Reader, THERMOCOUPLE, THERMOMETER};
use crate::chain::{Chain, Element, Network, Reading, SelfHeating, Signal, Supply};
use crate::measurement::{Paired, Pairing, Side};
use crate::sheet::node::{Section, Value};
use crate::sheet::recording;
use crate::sheet::unit::{Kind, Unit};
use crate::signal::{Around, Divider, FullScale, Side as DividerSide};

/// What stands between a thermometer and its reading.
struct Wiring {
    network: Network,
    supply: Supply,
    input: Option<usize>,
    around: Around,
    /// A current that is stated for its heat alone.
    amperes: Option<f64>,
}

/// Keys of `circuit` that say what stands beside the thermometer, not how it is read.
const BESIDE: [&str; 4] = ["parallel", "series", "leakage", "current"];

impl<'a> Reader<'a, '_> {
    pub(super) fn thermometer_chain(&mut self, unit: Option<Unit>) -> Option<Pieces> {
        let s = self.s.clone();
        let sensor = self.sensor()?;
        if matches!(sensor.element, Element::Thermocouple(_)) {
            return self.thermocouple_chain(sensor, unit?);
        }
        let reading = self.signal(unit?, THERMOMETER)?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        let wiring = self.wiring(reading, sensor.nominal)?;
        if s.has("zero") {
            let entry = s.entry("zero")?;
            self.say(entry.key_span.clone(), "a thermometer has no zero");
            return None;
        }
        match &wiring.network {
            Network::Bridge(_) => {
                self.needs_supply("bridge", reading, converter.as_ref(), &amplifier, &wiring.supply)?
            }
            Network::Divider { .. } | Network::Reference { .. } => {
                self.needs_supply("circuit", reading, converter.as_ref(), &amplifier, &wiring.supply)?;
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
        let self_heating = self.self_heating(&wiring)?;
        let mut sides: [Option<Side>; 6] = Default::default();
        let lead_warmth = self.lead_warmth(&mut sides[1])?;
        let paired = self.paired(reading, &wiring)?;
        let Wiring { network, supply, input, around, .. } = wiring;
        let plain = Chain::new(network, sensor.element);
        let chain = Chain { reading, converter, amplifier, supply, lead_warmth, around, self_heating, ..plain };
        Some(Pieces { supply: input, sides, tolerance: sensor.tolerance, paired, ..Pieces::of(chain) })
    }

    fn thermocouple_chain(&mut self, sensor: sensors::Sensor, unit: Unit) -> Option<Pieces> {
        let s = self.s.clone();
        let reading = self.signal(unit, THERMOCOUPLE)?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        for key in ["circuit", "bridge", "leads", "zero", "self_heating"] {
            if let Some(entry) = s.table.peek(key) {
                self.say(entry.key_span.clone(), format!("a thermocouple has no {key}: it is read as its own voltage"));
                return None;
            }
        }
        if converter.as_ref().is_some_and(|c| c.full_scale == FullScale::Supply) {
            let entry = s.entry("converter")?;
            self.say(entry.key_span.clone(), "a thermocouple needs a converter whose full scale is in volts");
            return None;
        }
        let plain = Chain::new(Network::Emf, sensor.element);
        let chain = Chain { reading, converter, amplifier, temperature: sensor.temperature, ..plain };
        let mut sides: [Option<Side>; 6] = Default::default();
        sides[0] = sensor.side;
        Some(Pieces { sides, tolerance: sensor.tolerance, ..Pieces::of(chain) })
    }

    /// Second columns: of the current reversed, or of a tap.
    fn paired(&mut self, reading: Reading, wiring: &Wiring) -> Option<[Option<Paired>; 2]> {
        let s = self.s.clone();
        let Some(entry) = s.table.peek("circuit") else { return Some([None; 2]) };
        let section = s.section("circuit")?;
        let hows: Vec<(&str, Pairing)> = [("reversed", Pairing::Reversed), ("tap", Pairing::Tap)]
            .into_iter()
            .filter(|(key, _)| section.has(key))
            .collect();
        let (key, how) = match hows.as_slice() {
            [] => return Some([None; 2]),
            [one] => *one,
            _ => {
                self.say(entry.key_span.clone(), "circuit has both reversed and tap; it is one or the other");
                return None;
            }
        };
        let resistor = matches!(wiring.network, Network::Resistance { .. } | Network::Reference { .. });
        if reading.signal != Signal::Volts || !resistor {
            let entry = section.entry(key)?;
            self.say(
                entry.key_span.clone(),
                format!("circuit.{key} is a second voltage beside that of a thermometer at a known current or in series with a reference"),
            );
            return None;
        }
        if how == Pairing::Tap && s.has("leads") {
            let entry = s.entry("leads")?;
            self.say(entry.key_span.clone(), "circuit.tap takes off two equal leads already: leave leads out");
            return None;
        }
        let column = |this: &mut Self, section: &Section<'a>| {
            let column = recording::columns(section, key)?.into_iter().next()?;
            Some(Paired { input: this.input(column), how })
        };
        let first = column(self, &section)?;
        // a reversed current reverses the voltage of the reference too
        let second = match section.table.peek("supply").map(|e| &e.node.value) {
            Some(Value::Table(_)) if how == Pairing::Reversed => {
                let table = section.section("supply")?;
                if !table.has("reversed") {
                    table.lack("reversed", "the column of the same voltage with the current reversed");
                    return None;
                }
                Some(column(self, &table)?)
            }
            _ => None,
        };
        Some([Some(first), second])
    }

    fn wiring(&mut self, reading: Reading, nominal: f64) -> Option<Wiring> {
        let s = self.s.clone();
        let beside = |around, amperes, (network, supply, input)| Wiring { network, supply, input, around, amperes };
        match (s.has("circuit"), s.has("bridge")) {
            (true, true) => {
                let section = s.section("circuit")?;
                if section.table.entries.iter().any(|e| !matches!(e.key.as_str(), "parallel" | "series" | "leakage")) {
                    self.say(section.span, "a channel has a circuit or a bridge, not both");
                    return None;
                }
                let around = self.around(&section)?;
                Some(beside(around, None, self.thermometer_bridge(nominal)?))
            }
            (false, true) => Some(beside(Around::NONE, None, self.thermometer_bridge(nominal)?)),
            (true, false) => {
                let section = s.section("circuit")?;
                let around = self.around(&section)?;
                if reading.signal != Signal::Ohms {
                    return Some(beside(around, None, self.thermometer_circuit(&section)?));
                }
                let entries = &section.table.entries;
                if let Some(entry) = entries.iter().find(|e| !BESIDE.contains(&e.key.as_str())) {
                    self.say(
                        entry.key_span.clone(),
                        format!("circuit.{} turns volts into ohms, but reads is in ohms already", entry.key),
                    );
                    return None;
                }
                let amperes = match section.has("current") {
                    true if !s.has("self_heating") => {
                        let entry = section.entry("current")?;
                        self.say(
                            entry.key_span.clone(),
                            "circuit.current turns volts into ohms, but reads is in ohms already; it counts with self_heating alone",
                        );
                        return None;
                    }
                    true => Some(self.positive(&section, "current", Kind::Amperes)?),
                    false => None,
                };
                Some(beside(around, amperes, self.ohms()?))
            }
            (false, false) => {
                if reading.signal != Signal::Ohms {
                    s.lack("circuit", "volts become ohms only through a circuit, as in { divider = \"10 kohm\", sensor = \"low\", supply = \"3.3 V\" } or { current = \"1 mA\" }");
                    return None;
                }
                Some(beside(Around::NONE, None, self.ohms()?))
            }
        }
    }

    /// An instrument that reads ohms.
    fn ohms(&mut self) -> Option<(Network, Supply, Option<usize>)> {
        let leads = self.leads(false)?;
        if leads.is_none() {
            self.assume("leads: none, the reading is the element's resistance");
        }
        Some((Network::Resistance { leads: leads.map(|(l, _)| l) }, Supply::None, None))
    }

    fn thermometer_bridge(&mut self, nominal: f64) -> Option<(Network, Supply, Option<usize>)> {
        let (bridge, supply, input) = self.bridge(Some(nominal))?;
        Some((Network::Bridge(bridge), supply, input))
    }

    /// Resistors beside the thermometer.
    fn around(&mut self, section: &Section<'a>) -> Option<Around> {
        let mut one = |key: &str| match section.has(key) {
            true => self.positive(section, key, Kind::Ohms).map(Some),
            false => Some(None),
        };
        Some(Around { parallel: one("parallel")?, leakage: one("leakage")?, series: one("series")? })
    }

    fn self_heating(&mut self, wiring: &Wiring) -> Option<Option<SelfHeating>> {
        let s = self.s.clone();
        if !s.has("self_heating") {
            return Some(None);
        }
        let kelvin_per_watt = self.positive(&s, "self_heating", Kind::KelvinsPerWatt)?;
        let amperes = wiring.amperes;
        if amperes.is_none() && wiring.supply == Supply::None {
            let entry = s.entry("self_heating")?;
            self.say(
                entry.key_span.clone(),
                "self_heating needs the current that does it, as in circuit = { current = \"1 mA\" }, or the supply of the circuit",
            );
            return None;
        }
        Some(Some(SelfHeating { kelvin_per_watt, amperes }))
    }

    fn thermometer_circuit(&mut self, section: &Section<'a>) -> Option<(Network, Supply, Option<usize>)> {
        let leads = self.leads(false)?.map(|(leads, _)| leads);
        if leads.is_none() && !section.has("tap") {
            self.assume("leads: none, no wire has a resistance");
        }
        let ways: Vec<&str> = ["divider", "current", "reference"].into_iter().filter(|k| section.has(k)).collect();
        match ways.as_slice() {
            ["divider"] => {
                let fixed = self.positive(section, "divider", Kind::Ohms);
                if !section.has("sensor") {
                    section.lack(
                        "sensor",
                        "\"low\" when the sensor goes from the node to ground, \"high\" when it goes to the supply",
                    );
                }
                let sensor = section.choice("sensor", &[("low", DividerSide::Low), ("high", DividerSide::High)]);
                let input_resistance = if section.has("input_resistance") {
                    Some(self.positive(section, "input_resistance", Kind::Ohms)?)
                } else {
                    None
                };
                let (supply, input) = self.supply(section, "supply", Kind::Volts)?;
                let divider = Divider { fixed: fixed?, sensor: sensor?, input_resistance };
                Some((Network::Divider { divider, leads }, supply, input))
            }
            ["current"] => {
                let (supply, input) = self.supply(section, "current", Kind::Amperes)?;
                Some((Network::Resistance { leads }, supply, input))
            }
            ["reference"] => {
                let ohms = self.positive(section, "reference", Kind::Ohms)?;
                let (supply, input) = self.supply(section, "supply", Kind::Volts)?;
                Some((Network::Reference { ohms, leads }, supply, input))
            }
            _ => {
                self.say(
                    section.span.clone(),
                    "circuit is { divider, sensor, supply }, { current }, or { reference, supply }: a resistor in series and the voltage across it",
                );
                None
            }
        }
    }
}
