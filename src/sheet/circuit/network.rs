//! Converter, amplifier, supply, leads and bridge.

use std::format;
use std::string::ToString;

use super::{Reader, side};
use crate::chain::{LeadWarmth, Reading, Signal, Supply, Temperature};
use crate::measurement::Side;
use crate::sheet::node::{Read, Section, Value};
use crate::sheet::unit::{self, Kind};
use crate::signal::{
    Amplifier, Arm, Bridge, COPPER_OHM_METRES, COPPER_PER_KELVIN, Coding, Conductor, Converter, Difference, Driven,
    Each, FullScale, Leads, Pair, Reference, Wires, awg_square_millimetres,
};

impl<'a> Reader<'a, '_> {
    pub(super) fn converter(&mut self, reading: Reading) -> Option<Option<Converter>> {
        let s = self.s.clone();
        let counts = reading.signal == Signal::Count;
        let Some(entry) = s.table.peek("converter") else {
            if counts {
                s.lack(
                    "converter",
                    "what the counts come from, as in { bits = 24, full_scale = \"±2.5 V\", coding = \"signed\" }",
                );
                return None;
            }
            return Some(None);
        };
        if !counts {
            self.say(entry.key_span.clone(), "converter turns counts into volts, but reads is not \"count\"");
            return None;
        }
        let section = s.section("converter")?;
        if !section.has("bits") {
            section.lack("bits", "the number of bits");
        }
        let bits = section.whole("bits", 1, 52).and_then(|n| u8::try_from(n).ok());
        let full_scale = match section.table.peek("full_scale").map(|e| &e.node.value) {
            None => {
                section.lack("full_scale", "\"supply\", or a voltage such as \"±2.5 V\"");
                None
            }
            Some(Value::Text(text)) if text == "supply" => {
                section.entry("full_scale");
                Some(FullScale::Supply)
            }
            // the supply has an uncertainty of its own, in bridge or circuit
            Some(Value::Text(text)) if text.trim_start().starts_with("supply") => {
                let entry = section.entry("full_scale")?;
                self.say(
                    entry.node.span.clone(),
                    format!(
                        "converter.full_scale is '{text}'; \"supply\" stands alone and takes no uncertainty: the full scale is the supply itself, and drops out"
                    ),
                );
                None
            }
            Some(_) => self.positive(&section, "full_scale", Kind::Volts).map(FullScale::Volts),
        };
        if !section.has("coding") {
            section.lack("coding", "\"signed\", \"offset\" or \"unsigned\"");
        }
        let coding = section.choice(
            "coding",
            &[("signed", Coding::Signed), ("offset", Coding::Offset), ("unsigned", Coding::Unsigned)],
        );
        Some(Some(Converter { bits: bits?, full_scale: full_scale?, coding: coding? }))
    }

    pub(super) fn amplifier(&mut self) -> Option<Amplifier> {
        let s = self.s.clone();
        if !s.has("amplifier") {
            return Some(Amplifier::None);
        }
        let section = s.section("amplifier")?;
        let offset = if section.has("offset") { self.value(&section, "offset", Kind::Volts)? } else { 0.0 };
        match (section.has("gain"), section.has("difference")) {
            (true, false) => Some(Amplifier::Gain { gain: self.value(&section, "gain", Kind::Number)?, offset }),
            (false, true) => {
                let circuit = section.section("difference")?;
                for key in ["input", "feedback"] {
                    if !circuit.has(key) {
                        circuit.lack(key, "two resistances, inverting side first");
                    }
                }
                let input = self.resistances::<2>(&circuit, "input");
                let feedback = self.resistances::<2>(&circuit, "feedback");
                let open_loop_gain = if circuit.has("open_loop_gain") {
                    Some(self.value(&circuit, "open_loop_gain", Kind::Number)?)
                } else {
                    None
                };
                let reference = if circuit.has("reference") {
                    circuit.choice("reference", &[("negative", Reference::Negative), ("centre", Reference::Centre)])?
                } else {
                    self.assume("amplifier: its resistors return to the negative supply");
                    Reference::Negative
                };
                if open_loop_gain.is_none() {
                    self.assume("amplifier: ideal operational amplifier (no open_loop_gain)");
                }
                Some(Amplifier::Difference {
                    circuit: Difference { input: input?, feedback: feedback?, open_loop_gain, reference },
                    offset,
                })
            }
            (true, true) => {
                self.say(section.span.clone(), "amplifier has both gain and difference; it is one or the other");
                None
            }
            (false, false) => {
                section.lack("gain", "the gain, or difference = { input = [...], feedback = [...] }");
                None
            }
        }
    }

    /// A supply as a value, or as a column with its unit.
    pub(super) fn supply(&mut self, section: &Section<'a>, key: &str, kind: Kind) -> Option<(Supply, Option<usize>)> {
        let Some(entry) = section.table.peek(key) else { return Some((Supply::None, None)) };
        if !matches!(entry.node.value, Value::Table(_)) {
            return self.positive(section, key, kind).map(|v| (Supply::Fixed(v), None));
        }
        let table = section.section(key)?;
        let input = self.column(&table)?;
        let Some((text, span)) = table.text("reads") else {
            if !table.has("reads") {
                table.lack("reads", &format!("the unit of the column: {}", kind.expected()));
            }
            return None;
        };
        let Some(unit) = unit::find(kind, text) else {
            self.say(span, format!("{}.reads is '{text}'; expected {}", table.path, kind.expected()));
            return None;
        };
        if let Some((text, span)) = table.text("uncertainty") {
            let key = table.key_path("uncertainty");
            match crate::sheet::quantity::parse_reading_uncertainty(text, kind) {
                Ok((uncertainty, share)) => {
                    let text = text.to_string();
                    self.stated.push(crate::measurement::Stated { key, value: f64::NAN, text, uncertainty, share });
                }
                Err(message) => self.say(span, format!("{key}: {message}")),
            }
        }
        Some((Supply::Column { exponent: unit.exponent }, Some(input)))
    }

    /// Volts belong to a supply; a ratio does not need one, unless an offset in volts is taken off.
    pub(super) fn needs_supply(
        &self,
        key: &str,
        reading: Reading,
        converter: Option<&Converter>,
        amplifier: &Amplifier,
        supply: &Supply,
    ) -> Option<()> {
        let s = self.s;
        let section = || {
            let entry = s.table.peek(key)?;
            let table = crate::sheet::table_of(&entry.node.value)?;
            Some(Section { table, path: key.to_string(), span: entry.key_span.clone(), findings: s.findings })
        };
        let ratio = match converter {
            Some(converter) => converter.full_scale == FullScale::Supply,
            None => reading.signal == Signal::Ratio,
        };
        if !ratio && reading.signal != Signal::Ohms && *supply == Supply::None {
            section()?
                .lack("supply", "what the volts belong to, as in \"2.5 V\" or { column = \"V_ex\", reads = \"V\" }");
            return None;
        }
        let offset = match amplifier {
            Amplifier::None => 0.0,
            Amplifier::Gain { offset, .. } | Amplifier::Difference { offset, .. } => *offset,
        };
        if ratio && offset != 0.0 && !matches!(supply, Supply::Fixed(_)) {
            section()?.lack("supply", "one voltage, since amplifier.offset is in volts and the readings are a ratio");
            return None;
        }
        Some(())
    }

    /// The leads of a sensor; `None` inside where nothing is said of wires.
    pub(super) fn leads(&mut self, bridge: bool) -> Option<Option<(Leads, Option<bool>)>> {
        let s = self.s.clone();
        if !s.has("leads") {
            return Some(None);
        }
        let section = s.section("leads")?;
        if !section.has("wires") {
            section.lack("wires", if bridge { "2 or 3" } else { "2, 3 or 4" });
            return None;
        }
        let wires = match section.whole("wires", 2, if bridge { 3 } else { 4 })? {
            2 => Wires::Two,
            3 => Wires::Three,
            _ => Wires::Four,
        };
        let balanced = section.flag("balanced");
        if balanced.is_some() && !bridge {
            self.say(section.span.clone(), "leads.balanced is for two wires to a bridge");
            return None;
        }
        let each = match section.table.peek("each").map(|e| &e.node.value) {
            Some(Value::List(_)) if !self.by_run(&section) => {
                let (low, high) = match wires {
                    Wires::Two => (2, 2),
                    Wires::Three if bridge => (3, 3),
                    _ => (2, 3),
                };
                let read = section.quantities("each", &[Kind::Ohms], low, high)?;
                for (i, one) in read.iter().enumerate() {
                    self.keep(format!("leads.each[{}]", i + 1), one);
                }
                let at = |i: usize| Conductor::Ohms(read.get(i).map_or(0.0, |r: &Read| r.quantity.value));
                Each::Own([at(0), at(1), at(2)])
            }
            // four wires leave nothing to take off; nor do three equal ones, to an instrument that reads ohms
            None if !self.by_run(&section) && (wires == Wires::Four || (wires == Wires::Three && !bridge)) => {
                Each::Same(Conductor::Ohms(0.0))
            }
            _ => Each::Same(self.conductor(&section)?),
        };
        // a material that is only common to other channels' lengths does not hurt here
        section.entry("material");
        Some(Some((Leads { wires, each }, balanced)))
    }

    /// Whether the wires are stated by their run.
    fn by_run(&self, section: &Section<'a>) -> bool {
        section.has("length") || section.has("area") || section.has("awg")
    }

    /// One conductor, one way: by its resistance, or by length and cross-section.
    fn conductor(&mut self, section: &Section<'a>) -> Option<Conductor> {
        match (section.has("each"), self.by_run(section)) {
            (true, true) => {
                self.say(section.span.clone(), "leads: give either each, or length and area");
                None
            }
            (true, false) => self.value(section, "each", Kind::Ohms).map(Conductor::Ohms),
            (false, false) => {
                section.lack("each", "the resistance of one conductor, or length and area");
                None
            }
            (false, true) => {
                let metres = self.needed(section, "length", Kind::Metres, "the one-way length");
                let square_millimetres = if section.has("awg") {
                    if section.has("area") {
                        self.say(section.span.clone(), "leads: give either area or awg");
                        return None;
                    }
                    self.wire_gauge(section)
                } else {
                    self.needed(section, "area", Kind::SquareMillimetres, "the cross-section, or awg")
                };
                let ohm_metres = if section.has("resistivity") {
                    if section.has("material") {
                        self.say(section.span.clone(), "leads: give either material or resistivity");
                        return None;
                    }
                    self.positive(section, "resistivity", Kind::OhmMetres)
                } else {
                    if section.has("material") {
                        section.choice("material", &[("copper", ())])?;
                    } else {
                        self.assume("leads.material: copper, 1/58 ohm mm2/m at 20 °C (IEC 60028)");
                    }
                    Some(COPPER_OHM_METRES)
                };
                Some(Conductor::Run {
                    metres: metres?,
                    square_millimetres: square_millimetres?,
                    ohm_metres: ohm_metres?,
                })
            }
        }
    }

    /// American wire gauge: a whole number, or "2/0" and the like.
    fn wire_gauge(&mut self, section: &Section<'a>) -> Option<f64> {
        let entry = section.entry("awg")?;
        let number = match &entry.node.value {
            Value::Number(text) => text.parse::<i8>().ok().filter(|n| *n >= 0),
            Value::Text(text) => match text.as_str() {
                "1/0" => Some(0),
                "2/0" => Some(-1),
                "3/0" => Some(-2),
                "4/0" => Some(-3),
                other => other.parse::<i8>().ok().filter(|n| *n >= 0),
            },
            _ => None,
        };
        match number.and_then(|n| awg_square_millimetres(n).ok()) {
            Some(area) => Some(area),
            None => {
                self.say(
                    entry.node.span.clone(),
                    "leads.awg: expected an American wire gauge: a whole number from 0 to 40, or \"1/0\" to \"4/0\"",
                );
                None
            }
        }
    }

    /// What temperature does to the leads, with their side channel.
    pub(super) fn lead_warmth(&mut self, place: &mut Option<Side>) -> Option<Option<LeadWarmth>> {
        let s = self.s.clone();
        if !s.has("leads") {
            return Some(None);
        }
        let section = s.section("leads")?;
        if !section.has("temperature") {
            return Some(None);
        }
        let temperature = match side(&section, "temperature", self.known, self.assumed)? {
            Ok(read) => {
                self.keep("leads.temperature".into(), &read);
                Temperature::Fixed(read.quantity.value)
            }
            Err(side) => {
                *place = Some(side);
                Temperature::Column
            }
        };
        let coefficient = if section.has("coefficient") {
            self.value(&section, "coefficient", Kind::PerKelvin)?
        } else if section.has("resistivity") {
            section.lack("coefficient", "what a kelvin does to wires of this resistivity, as in \"0.0040 /K\"");
            return None;
        } else {
            self.assume(format!("leads.coefficient: {COPPER_PER_KELVIN} /K, copper at 20 °C (IEC 60028)"));
            COPPER_PER_KELVIN
        };
        let reference_celsius = if section.has("reference") {
            let stated = self.value(&section, "reference", Kind::Celsius)?;
            if stated != 20.0 && section.has("length") && !section.has("resistivity") {
                let entry = section.entry("reference")?;
                self.say(
                    entry.node.span.clone(),
                    "the resistivity of a material is that at 20 degC: leave leads.reference out, or state resistivity",
                );
                return None;
            }
            stated
        } else {
            self.assume("leads.reference: their resistance is stated at 20 °C");
            20.0
        };
        Some(Some(LeadWarmth { coefficient, reference_celsius, temperature }))
    }

    pub(super) fn arms(&mut self, section: &Section<'a>) -> Option<[Arm; 4]> {
        let thermometer = !self.s.has("gauge") && !self.s.has("transducer");
        if !section.has("arms") {
            section.lack("arms", "four texts such as [\"e\", \"0\", \"0\", \"0\"]");
            return None;
        }
        let texts = section.texts("arms")?;
        let [a, b, c, d] = texts.as_slice() else {
            let entry = section.entry("arms")?;
            self.say(
                entry.node.span.clone(),
                format!("bridge.arms has {} entries; a bridge has four arms", texts.len()),
            );
            return None;
        };
        let arm = |(text, span): &(&str, core::ops::Range<usize>)| {
            let arm = read_arm(text).filter(|_| thermometer || text.trim() != "sensor");
            if arm.is_none() {
                let expected = if thermometer {
                    "\"sensor\" for the thermometer or \"0\" for a fixed resistor"
                } else {
                    "\"e\", \"-e\", \"nu e\", \"-nu e\", a multiple such as \"-1.0097 e\", \"dummy\" or \"0\""
                };
                self.say(span.clone(), format!("'{text}' is no arm; expected {expected}"));
            }
            arm
        };
        let arms = [arm(a), arm(b), arm(c), arm(d)];
        let [a, b, c, d] = arms;
        Some([a?, b?, c?, d?])
    }

    /// The bridge around a sensor of this resistance.
    pub(super) fn bridge(&mut self, nominal: Option<f64>) -> Option<(Bridge, Supply, Option<usize>)> {
        let s = self.s.clone();
        let section = s.section("bridge")?;
        let arms = if s.has("transducer") { Some(full_bridge()) } else { self.arms(&section) };
        let resistances = if section.has("resistances") {
            self.resistances::<4>(&section, "resistances")
        } else {
            if let Some(r) = nominal {
                let why = if s.has("gauge") {
                    "the gauge's"
                } else if s.has("transducer") {
                    "which do not count: nothing acts on them"
                } else {
                    "the thermometer's nominal one"
                };
                self.assume(format!("bridge.resistances: {r} ohm in all four arms, {why}"));
            }
            nominal.map(|r| [r; 4])
        };
        let across =
            arms.is_some_and(|arms| arms.iter().any(|a| matches!(a, Arm::Active { driven: Driven::Across, .. })));
        let poisson = if section.has("poisson") {
            self.value(&section, "poisson", Kind::Number)
        } else if across {
            section.lack("poisson", "Poisson's ratio of the specimen, since an arm is a multiple of nu e");
            None
        } else {
            Some(0.0)
        };
        let (supply, input) = self.supply(&section, "supply", Kind::Volts)?;
        // a full bridge has supply and signal leads: its wires are of one conductor, stated once
        let full = arms.is_some_and(|arms| arms.iter().skip(2).any(|a| !matches!(a, Arm::Fixed)));
        let mut run = None;
        let leads = match s.section("leads") {
            Some(leads) if full && !leads.has("wires") => {
                if leads.has("each") || self.by_run(&leads) {
                    if section.has("supply_leads") && section.has("signal_leads") {
                        self.say(
                            leads.span.clone(),
                            "leads: bridge.supply_leads and bridge.signal_leads have said what every wire is",
                        );
                        return None;
                    }
                    run = Some(Pair::Run(self.conductor(&leads)?));
                }
                leads.entry("material");
                None
            }
            _ => self.leads(true)?,
        };
        let mut balanced = false;
        if let Some((leads, stated)) = &leads {
            let arms = arms?;
            if full {
                let entry = s.entry("leads")?;
                self.say(
                    entry.key_span.clone(),
                    "leads.wires is for gauges in arms 1 and 2; a full bridge has bridge.supply_leads, bridge.signal_leads and bridge.sensed",
                );
                return None;
            }
            match leads.wires {
                Wires::Two => {
                    if matches!(arms[0], Arm::Fixed) || !matches!(arms[1], Arm::Fixed) {
                        let entry = s.entry("leads")?;
                        self.say(entry.key_span.clone(), "two wires go to one gauge in arm 1");
                        return None;
                    }
                    balanced = stated.unwrap_or_else(|| !section.has("resistances"));
                    if stated.is_none() {
                        self.assume(if balanced {
                            "leads: the bridge was balanced with them in place (balanced = true)"
                        } else {
                            "leads: arm 2 as stated, not balanced with the leads (balanced = false)"
                        });
                    }
                }
                _ => {
                    if stated.is_some() {
                        let entry = s.entry("leads")?;
                        self.say(
                            entry.key_span.clone(),
                            "leads.balanced is for two wires: three wires balance by themselves",
                        );
                        return None;
                    }
                }
            }
        }
        let pair = |this: &mut Self, key: &str| -> Option<Pair> {
            match section.table.peek(key).map(|e| &e.node.value) {
                None => Some(run.unwrap_or(Pair::none())),
                Some(Value::List(_)) => this.list::<2>(&section, key, Kind::Ohms).map(Pair::Own),
                Some(_) => this.value(&section, key, Kind::Ohms).map(Pair::Same),
            }
        };
        let supply_leads = pair(self, "supply_leads");
        let signal_leads = pair(self, "signal_leads");
        let sensed = section.flag("sensed").unwrap_or(false);
        let none = Some(Pair::none());
        if leads.is_none() && supply_leads == none && signal_leads == none {
            self.assume("leads: none, no wire has a resistance");
        }
        let input_resistance = if section.has("input_resistance") {
            Some(self.positive(&section, "input_resistance", Kind::Ohms)?)
        } else {
            None
        };
        Some((
            Bridge {
                resistances: resistances?,
                arms: arms?,
                poisson: poisson?,
                leads: leads.map(|(leads, _)| leads),
                balanced,
                supply_leads: supply_leads?,
                signal_leads: signal_leads?,
                sensed,
                input_resistance,
                shunt: None,
            },
            supply,
            input,
        ))
    }
}

/// `"e"`, `"-nu e"`, `"-1.0097 e"`, `"dummy"`, `"0"`, and `"sensor"` for a thermometer.
fn read_arm(text: &str) -> Option<Arm> {
    let text = text.trim();
    match text {
        "0" => return Some(Arm::Fixed),
        "dummy" => return Some(Arm::Dummy),
        "sensor" => return Some(Arm::Active { factor: 1.0, driven: Driven::Along }),
        _ => {}
    }
    let head = text.strip_suffix('e')?.trim_end();
    let (head, driven) = match head.strip_suffix("nu") {
        Some(rest) => (rest.trim_end(), Driven::Across),
        None => (head, Driven::Along),
    };
    let factor = match head {
        "" | "+" => 1.0,
        "-" | "−" => -1.0,
        number => number.trim_end_matches('*').trim_end().parse().ok().filter(|f: &f64| f.is_finite() && *f != 0.0)?,
    };
    Some(Arm::Active { factor, driven })
}

/// The arms of a transducer: its output over supply is the relative change of each.
pub(super) fn full_bridge() -> [Arm; 4] {
    [1.0, -1.0, 1.0, -1.0].map(|factor| Arm::Active { factor, driven: Driven::Along })
}
