//! One channel's keys into its chain.

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::channel::{Known, side};
use super::node::{Read, Section, Value};
use super::unit::{self, Kind, Unit};
use super::{Sheet, nearest, recording};
use crate::chain::{Chain, Element, Limit, Network, Output, Reading, STRAIN_LIMIT, Signal, Supply, Temperature, Word};
use crate::measurement::{Channel, ColumnRef, Moment, Segment, Side, Source, Stated, ZeroSource};
use crate::platinum::{self, IEC_60751};
use crate::signal::{
    Amplifier, Arm, Bridge, COPPER_OHM_METRES, Coding, Conductor, Converter, Difference, Divider, Driven, Each,
    FullScale, Leads, Pair, Reference, Side as DividerSide, Wires,
};
use crate::strain::{Expansion, Gauge, ThermalOutput, Zero, ZeroMeaning, ZeroReading};
use crate::thermistor::{Beta, Law, SteinhartHart};

/// A chain as read from a sheet.
pub(super) struct Circuit {
    pub(super) unit: String,
    pub(super) segment: Segment,
}

/// Kinds of unit that a recording may hold.
const READABLE: &[Kind] = &[
    Kind::Volts,
    Kind::VoltageRatio,
    Kind::Ohms,
    Kind::Count,
    Kind::Amperes,
    Kind::Strain,
    Kind::ShearStrain,
    Kind::Celsius,
    Kind::Pascals,
    Kind::Number,
];

/// What a channel with a gauge is called in messages.
const GAUGE: &str = "strain gauge bridge";

/// Temperatures for which a beta thermistor is used unless the sheet says otherwise, °C: common practice, no source.
const BETA_RANGE: [f64; 2] = [-50.0, 150.0];

struct Reader<'a, 'b> {
    s: &'b Section<'a>,
    known: &'b BTreeMap<&'a str, Known>,
    inputs: &'b mut Vec<ColumnRef>,
    assumed: &'b mut Vec<String>,
    stated: Vec<Stated>,
}

impl Circuit {
    /// Reads the chain of a channel; what is wrong has been said where this is `None`.
    pub(super) fn read<'a>(
        s: &Section<'a>,
        known: &BTreeMap<&'a str, Known>,
        inputs: &mut Vec<ColumnRef>,
        assumed: &mut Vec<String>,
    ) -> Option<Self> {
        let before = s.findings.count();
        let mut reader = Reader { s, known, inputs, assumed, stated: Vec::new() };
        let circuit = reader.circuit();
        if s.findings.count() > before { None } else { circuit }
    }
}

impl<'a> Reader<'a, '_> {
    fn say(&self, span: core::ops::Range<usize>, message: impl Into<String>) {
        self.s.say(span, message);
    }

    fn assume(&mut self, words: impl Into<String>) {
        self.assumed.push(words.into());
    }

    /// A quantity whose uncertainty, if stated, is kept under its key.
    fn quantity(&mut self, section: &Section<'a>, key: &str, kinds: &[Kind]) -> Option<Read> {
        let read = section.quantity(key, kinds)?;
        self.keep(section.key_path(key), &read);
        Some(read)
    }

    fn value(&mut self, section: &Section<'a>, key: &str, kind: Kind) -> Option<f64> {
        self.quantity(section, key, &[kind]).map(|q| q.quantity.value)
    }

    /// A value that must be above zero.
    fn positive(&mut self, section: &Section<'a>, key: &str, kind: Kind) -> Option<f64> {
        let value = self.value(section, key, kind)?;
        if value > 0.0 {
            return Some(value);
        }
        self.not_positive(section, key, "");
        None
    }

    fn not_positive(&self, section: &Section<'a>, key: &str, index: &str) {
        if let Some(entry) = section.entry(key) {
            let path = section.key_path(key);
            self.say(entry.node.span.clone(), format!("{path}{index} must be above zero"));
        }
    }

    /// So many resistances above zero.
    fn resistances<const N: usize>(&mut self, section: &Section<'a>, key: &str) -> Option<[f64; N]> {
        let all = self.list::<N>(section, key, Kind::Ohms)?;
        match all.iter().position(|r| *r <= 0.0) {
            None => Some(all),
            Some(at) => {
                self.not_positive(section, key, &format!("[{}]", at + 1));
                None
            }
        }
    }

    /// The same for a key that must be there.
    fn needed(&mut self, section: &Section<'a>, key: &str, kind: Kind, what: &str) -> Option<f64> {
        if !section.has(key) {
            section.lack(key, &format!("{what}: {}", kind.expected()));
            return None;
        }
        match kind {
            Kind::Ohms | Kind::SquareMillimetres => self.positive(section, key, kind),
            _ => self.value(section, key, kind),
        }
    }

    fn keep(&mut self, key: String, read: &Read) {
        if let Some(uncertainty) = read.quantity.uncertainty {
            self.stated.push(Stated { key, value: read.quantity.value, text: read.text.clone(), uncertainty });
        }
    }

    fn list<const N: usize>(&mut self, section: &Section<'a>, key: &str, kind: Kind) -> Option<[f64; N]> {
        let read = section.quantities(key, &[kind], N, N)?;
        for (i, one) in read.iter().enumerate() {
            self.keep(format!("{}[{}]", section.key_path(key), i + 1), one);
        }
        let mut out = [0.0; N];
        for (slot, one) in out.iter_mut().zip(&read) {
            *slot = one.quantity.value;
        }
        Some(out)
    }

    fn input(&mut self, column: ColumnRef) -> usize {
        if let Some(at) = self.inputs.iter().position(|c| *c == column) {
            return at;
        }
        self.inputs.push(column);
        self.inputs.len() - 1
    }

    fn column(&mut self, section: &Section<'a>) -> Option<usize> {
        if !section.has("column") {
            section.lack("column", "the header, or the number from 1, of the column of the recording");
            return None;
        }
        let entry = section.entry("column")?;
        if matches!(entry.node.value, Value::List(_)) {
            self.say(entry.node.span.clone(), "column is a list; a channel reads one column");
            return None;
        }
        let column = recording::columns(section, "column")?.into_iter().next()?;
        Some(self.input(column))
    }

    fn reading_unit(&mut self) -> Option<Unit> {
        let Some((text, span)) = self.s.text("reads") else {
            if !self.s.has("reads") {
                self.s.lack("reads", "the unit of the recorded numbers, as in reads = \"mV/V\"");
            }
            return None;
        };
        if let Some(unit) = READABLE.iter().find_map(|kind| unit::find(*kind, text)) {
            return Some(unit);
        }
        let near = nearest(&unit::plain(text), READABLE.iter().flat_map(|k| unit::spellings(Some(*k))))
            .map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
        self.say(span, format!("reads = '{text}' is no unit that a recording can have{near}"));
        None
    }

    fn circuit(&mut self) -> Option<Circuit> {
        let s = self.s.clone();
        let reading = self.column(&s);
        let unit = self.reading_unit();
        let sensors: Vec<&str> = ["gauge", "platinum", "thermistor"].into_iter().filter(|k| s.has(k)).collect();
        if let [_, second, ..] = sensors.as_slice()
            && let Some(entry) = s.entry(second)
        {
            self.say(
                entry.key_span.clone(),
                format!("a channel has one sensor, and this one has {}", sensors.join(" and ")),
            );
            return None;
        }
        let (chain, zero, zero_stated, side, supply) = match sensors.first() {
            Some(&"gauge") => self.gauge_chain(unit)?,
            Some(_) => {
                let (chain, supply) = self.thermometer_chain(unit)?;
                (chain, ZeroSource::Stated, false, None, supply)
            }
            None => {
                for key in ["bridge", "circuit", "leads", "converter", "amplifier", "zero"] {
                    if let Some(entry) = s.table.peek(key) {
                        self.say(
                            entry.key_span.clone(),
                            format!("{key} needs a sensor: this channel has no gauge, platinum or thermistor"),
                        );
                    }
                }
                (self.direct_chain(unit?)?, ZeroSource::Stated, false, None, None)
            }
        };
        let (unit_name, output) = self.output(&chain, unit?)?;
        let mut chain = Chain { output, extrapolate: s.flag("extrapolate").unwrap_or(false), ..chain };
        self.limits(&mut chain, unit?)?;
        if let Some((text, span)) = s.text("uncertainty") {
            let unit = unit?;
            match super::quantity::parse_uncertainty(text, unit.kind) {
                Ok(uncertainty) => {
                    let text = text.to_string();
                    self.stated.push(Stated { key: "uncertainty".into(), value: f64::NAN, text, uncertainty });
                }
                Err(message) => self.say(span, format!("uncertainty: {message}")),
            }
        }
        Some(Circuit {
            unit: unit_name,
            segment: Segment {
                from: None,
                chain,
                zero,
                zero_temperature_stated: zero_stated,
                reads: unit?.name.to_string(),
                reading: reading?,
                supply,
                temperature: side,
                lead_temperature: None,
                arm_temperatures: Default::default(),
                stated: core::mem::take(&mut self.stated),
            },
        })
    }

    /// Unit of the result.
    fn output(&mut self, chain: &Chain, reads: Unit) -> Option<(String, Output)> {
        let s = self.s.clone();
        let kinds: &[Kind] = match chain.element {
            Element::Gauge { .. } => &[Kind::Strain, Kind::ShearStrain],
            Element::Platinum(_) | Element::Thermistor(_) => &[Kind::Celsius],
            Element::Direct { .. } | Element::Transducer { .. } => {
                return Some((self.direct_output(reads)?.name.to_string(), Output::AsRead));
            }
        };
        let unit = match s.text("output") {
            None if s.has("output") => return None,
            None => {
                let name = if kinds.contains(&Kind::Celsius) { "degC" } else { "microstrain" };
                self.assume(format!("output: {name}"));
                unit::find(*kinds.first()?, name)?
            }
            Some((text, span)) => match kinds.iter().find_map(|kind| unit::find(*kind, text)) {
                Some(unit) => unit,
                None => {
                    let spellings = kinds.iter().flat_map(|k| unit::spellings(Some(*k)));
                    let near = nearest(&unit::plain(text), spellings)
                        .map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
                    let expected: Vec<&str> = kinds.iter().map(|k| k.expected()).collect();
                    self.say(span, format!("output is '{text}'; this sensor gives {}{near}", expected.join(" or ")));
                    return None;
                }
            },
        };
        let output = match unit.kind {
            Kind::Strain => Output::Strain { exponent: -unit.exponent },
            Kind::ShearStrain => Output::ShearStrain { exponent: -unit.exponent },
            _ if unit.name == "K" => Output::Kelvin,
            _ if unit.name == "degF" => Output::Fahrenheit,
            _ => Output::Celsius,
        };
        Some((unit.name.to_string(), output))
    }

    fn direct_output(&mut self, reads: Unit) -> Option<Unit> {
        match self.s.text("output") {
            None => Some(reads),
            Some((text, span)) => {
                let found = unit::find(reads.kind, text);
                if found.is_none() {
                    self.say(
                        span,
                        format!(
                            "output is '{text}', but the readings are {} and no sensor turns them into something else",
                            reads.kind.expected()
                        ),
                    );
                }
                found
            }
        }
    }

    /// A reading that is the quantity: one scale and offset between two units.
    fn direct_chain(&mut self, reads: Unit) -> Option<Chain> {
        let output = self.direct_output(reads)?;
        let power = i32::from(reads.exponent) - i32::from(output.exponent);
        let ten: f64 = format!("1e{power}").parse().ok()?;
        let (scale, offset) = if reads == output {
            (1.0, 0.0)
        } else {
            (ten * reads.factor / output.factor, (reads.offset - output.offset) / output.factor)
        };
        let mut chain = Chain::new(Network::Direct, Element::Direct { scale, offset });
        chain.reading = Reading { signal: Signal::Quantity, exponent: 0 };
        Some(chain)
    }

    fn signal(&mut self, unit: Unit, sensor: &str) -> Option<Reading> {
        let signal = match unit.kind {
            Kind::Volts => Signal::Volts,
            Kind::VoltageRatio => Signal::Ratio,
            Kind::Ohms if sensor != GAUGE => Signal::Ohms,
            Kind::Count => Signal::Count,
            _ => {
                let entry = self.s.entry("reads")?;
                let ohms = if sensor == GAUGE { "" } else { ", ohms" };
                self.say(
                    entry.node.span.clone(),
                    format!(
                        "reads is '{}', but a {sensor} is read in volts, a voltage ratio{ohms} or counts",
                        unit.name
                    ),
                );
                return None;
            }
        };
        Some(Reading { signal, exponent: unit.exponent })
    }

    fn converter(&mut self, reading: Reading) -> Option<Option<Converter>> {
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

    fn amplifier(&mut self) -> Option<Amplifier> {
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

    /// `supply` as a value, or as a column with its unit.
    fn supply(&mut self, section: &Section<'a>, kind: Kind) -> Option<(Supply, Option<usize>)> {
        let Some(entry) = section.table.peek("supply") else { return Some((Supply::None, None)) };
        if !matches!(entry.node.value, Value::Table(_)) {
            return self.positive(section, "supply", kind).map(|v| (Supply::Fixed(v), None));
        }
        let table = section.section("supply")?;
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
        Some((Supply::Column { exponent: unit.exponent }, Some(input)))
    }

    /// Volts belong to a supply; a ratio does not need one, unless an offset in volts is taken off.
    fn needs_supply(
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
            let table = super::table_of(&entry.node.value)?;
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

    fn leads(&mut self, bridge: bool) -> Option<Option<(Leads, Option<bool>)>> {
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
        let by_run = section.has("length") || section.has("area");
        let each = match (section.table.peek("each").map(|e| &e.node.value), by_run) {
            (Some(_), true) => {
                self.say(section.span.clone(), "leads: give either each, or length and area");
                return None;
            }
            (Some(Value::List(_)), false) => {
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
            (Some(_), false) => Each::Same(Conductor::Ohms(self.value(&section, "each", Kind::Ohms)?)),
            (None, true) => {
                let metres = self.needed(&section, "length", Kind::Metres, "the one-way length");
                let square_millimetres = self.needed(&section, "area", Kind::SquareMillimetres, "the cross-section");
                let ohm_metres = if section.has("resistivity") {
                    if section.has("material") {
                        self.say(section.span.clone(), "leads: give either material or resistivity");
                        return None;
                    }
                    self.positive(&section, "resistivity", Kind::OhmMetres)
                } else {
                    if section.has("material") {
                        section.choice("material", &[("copper", ())])?;
                    } else {
                        self.assume("leads.material: copper, 1/58 ohm mm2/m at 20 °C (IEC 60028)");
                    }
                    Some(COPPER_OHM_METRES)
                };
                Each::Same(Conductor::Run {
                    metres: metres?,
                    square_millimetres: square_millimetres?,
                    ohm_metres: ohm_metres?,
                })
            }
            (None, false) if wires == Wires::Four => Each::Same(Conductor::Ohms(0.0)),
            (None, false) => {
                section.lack("each", "the resistance of one conductor, or length and area");
                return None;
            }
        };
        // a material that is only common to other channels' lengths does not hurt here
        section.entry("material");
        Some(Some((Leads { wires, each }, balanced)))
    }

    fn arms(&mut self, section: &Section<'a>) -> Option<[Arm; 4]> {
        let thermometer = !self.s.has("gauge");
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
    fn bridge(&mut self, nominal: Option<f64>) -> Option<(Bridge, Supply, Option<usize>)> {
        let s = self.s.clone();
        let section = s.section("bridge")?;
        let arms = self.arms(&section);
        let resistances = if section.has("resistances") {
            self.resistances::<4>(&section, "resistances")
        } else {
            if let Some(r) = nominal {
                let whose = if s.has("gauge") { "the gauge's" } else { "the thermometer's nominal one" };
                self.assume(format!("bridge.resistances: {r} ohm in all four arms, {whose}"));
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
        let (supply, input) = self.supply(&section, Kind::Volts)?;
        let leads = self.leads(true)?;
        let mut balanced = false;
        if let Some((leads, stated)) = &leads {
            let arms = arms?;
            if arms.iter().skip(2).any(|a| !matches!(a, Arm::Fixed)) {
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
                None => Some(Pair::none()),
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

    #[allow(clippy::type_complexity, reason = "the pieces of one segment, taken apart at once")]
    fn gauge_chain(&mut self, unit: Option<Unit>) -> Option<(Chain, ZeroSource, bool, Option<Side>, Option<usize>)> {
        let s = self.s.clone();
        let section = s.section("gauge")?;
        let nominal = self.needed(&section, "resistance", Kind::Ohms, "the gauge's resistance");
        let factor = self.needed(&section, "gauge_factor", Kind::Number, "the gauge factor");
        let slope = if section.has("slope") { self.value(&section, "slope", Kind::PerKelvin)? } else { 0.0 };
        let reference_celsius = if section.has("reference") {
            self.value(&section, "reference", Kind::Celsius)?
        } else {
            if slope != 0.0 {
                self.assume("gauge.reference: 24 °C, at which gauge factors are commonly stated");
            }
            24.0
        };
        if !s.has("bridge") {
            s.lack("bridge", "how the gauges are wired, as in bridge = { arms = [\"e\", \"0\", \"0\", \"0\"] }");
            return None;
        }
        if let Some(entry) = s.table.peek("circuit") {
            self.say(entry.key_span.clone(), "strain gauges are read through a bridge, not a circuit");
            return None;
        }
        let (bridge, supply, supply_input) = self.bridge(nominal)?;
        let thermal_output = self.thermal_output()?;
        let expansion = self.expansion()?;
        let gauge = Gauge { slope, reference_celsius, thermal_output, expansion, ..Gauge::new(factor?) };
        let mut temperature = Temperature::None;
        let mut found = None;
        if s.has("temperature") {
            match side(&s, self.known, self.assumed)? {
                Ok(read) => {
                    self.keep("temperature".into(), &read);
                    temperature = Temperature::Fixed(read.quantity.value);
                }
                // a gauge that does not feel temperature waits for no sample
                Err(_) if !gauge.needs_temperature() => {}
                Err(side) => {
                    temperature = Temperature::Column;
                    found = Some(side);
                }
            }
        } else if gauge.needs_temperature() {
            s.lack(
                "temperature",
                "the gauge's slope, thermal output or expansion needs it: a channel, or a value such as \"21 degC\"",
            );
            return None;
        }
        let reading = self.signal(unit?, GAUGE)?;
        let converter = self.converter(reading)?;
        let amplifier = self.amplifier()?;
        self.needs_supply("bridge", reading, converter.as_ref(), &amplifier, &supply)?;
        let varies = matches!(supply, Supply::Column { .. })
            && (reading.signal == Signal::Volts
                || converter.as_ref().is_some_and(|c| c.full_scale != FullScale::Supply));
        let (zero, source, zero_stated) = self.zero(unit?, &gauge, varies)?;
        let limit = if s.has("largest_strain") {
            let limit = self.quantity(&s, "largest_strain", &[Kind::Strain, Kind::Number])?.quantity.value;
            if limit.is_nan() || limit <= 0.0 || limit > 1.0 {
                let entry = s.entry("largest_strain")?;
                self.say(entry.node.span.clone(), "largest_strain must be above zero and at most 100 %");
                return None;
            }
            limit
        } else {
            STRAIN_LIMIT
        };
        let chain = Chain {
            reading,
            converter,
            amplifier,
            supply,
            temperature,
            ..Chain::new(Network::Bridge(bridge), Element::Gauge { gauge, zero, limit })
        };
        Some((chain, source, zero_stated, found, supply_input))
    }

    fn thermal_output(&mut self) -> Option<Option<ThermalOutput>> {
        let s = self.s.clone();
        if !s.has("thermal_output") {
            return Some(None);
        }
        let section = s.section("thermal_output")?;
        if !section.has("coefficients") {
            section.lack("coefficients", "the polynomial of the gauge package, lowest power first, in microstrain");
            return None;
        }
        let read = section.quantities("coefficients", &[Kind::Number], 1, 7)?;
        let mut coefficients = [0.0; 7];
        for (i, (slot, one)) in coefficients.iter_mut().zip(&read).enumerate() {
            *slot = one.quantity.value;
            self.keep(format!("thermal_output.coefficients[{i}]"), one);
        }
        let fahrenheit = if section.has("in") {
            section.choice("in", &[("degC", false), ("°C", false), ("degF", true), ("°F", true)])?
        } else {
            self.assume("thermal_output: polynomial in degC");
            false
        };
        let gauge_factor = if section.has("gauge_factor") {
            self.value(&section, "gauge_factor", Kind::Number)?
        } else {
            self.assume("thermal_output: taken with a gauge factor of 2.0");
            2.0
        };
        let range_celsius = if section.has("range") {
            self.range(&section)?
        } else {
            self.assume("thermal_output: no range stated, used at every temperature");
            [f64::NEG_INFINITY, f64::INFINITY]
        };
        Some(Some(ThermalOutput { coefficients, fahrenheit, gauge_factor, range_celsius }))
    }

    fn range(&mut self, section: &Section<'a>) -> Option<[f64; 2]> {
        let [low, high] = self.list::<2>(section, "range", Kind::Celsius)?;
        if low >= high {
            let entry = section.entry("range")?;
            self.say(entry.node.span.clone(), format!("{} must run from low to high", section.key_path("range")));
            return None;
        }
        Some([low, high])
    }

    fn expansion(&mut self) -> Option<Option<Expansion>> {
        let s = self.s.clone();
        if !s.has("expansion") {
            return Some(None);
        }
        let section = s.section("expansion")?;
        let specimen = self.needed(&section, "specimen", Kind::PerKelvin, "thermal expansion of the specimen");
        let data = self.needed(&section, "data", Kind::PerKelvin, "thermal expansion that the gauge data are for");
        Some(Some(Expansion { specimen: specimen?, data: data? }))
    }

    fn zero(&mut self, unit: Unit, gauge: &Gauge, varies: bool) -> Option<(Zero, ZeroSource, bool)> {
        let s = self.s.clone();
        if !s.has("zero") {
            if gauge.has_thermal() {
                s.lack("zero", "thermal output counts from the temperature at zero, as in zero = { at = \"0 mV/V\", temperature = \"21 degC\" }");
                return None;
            }
            self.assume("zero: the bridge as stated is at zero strain");
            return Some((Zero::default(), ZeroSource::Stated, false));
        }
        let section = s.section("zero")?;
        let words = [
            ("strain", ZeroMeaning::Strain),
            ("resistance", ZeroMeaning::Resistance),
            ("completion", ZeroMeaning::Completion),
        ];
        let mut meaning = ZeroMeaning::Strain;
        let mut window_from = None;
        if let Some((text, span)) = section.text("from") {
            match words.iter().find(|(word, _)| *word == text) {
                Some((_, found)) => meaning = *found,
                None if section.has("to") => window_from = Some(text),
                None => {
                    self.say(
                        span,
                        format!("zero.from is '{text}'; expected \"strain\", \"resistance\" or \"completion\", or a moment with zero.to beside it"),
                    );
                    return None;
                }
            }
        }
        if section.has("meaning") {
            meaning = section.choice("meaning", &words)?;
        }
        let celsius =
            if section.has("temperature") { Some(self.value(&section, "temperature", Kind::Celsius)?) } else { None };
        let to = section.text("to");
        let (reading, source) = match (section.has("at"), section.has("rows"), window_from, to) {
            (true, false, None, None) => {
                let kinds = [unit.kind, Kind::VoltageRatio];
                let read =
                    self.quantity(&section, "at", if unit.kind == Kind::VoltageRatio { &kinds[..1] } else { &kinds })?;
                if varies && read.quantity.unit.kind != Kind::VoltageRatio {
                    let entry = section.entry("at")?;
                    self.say(
                        entry.node.span.clone(),
                        "zero.at must be output over supply, as in \"0.03 mV/V\", since the supply varies from row to row",
                    );
                    return None;
                }
                let reading = if read.quantity.unit.kind == unit.kind {
                    ZeroReading::AsRecorded(in_unit(read.quantity.value, unit))
                } else {
                    ZeroReading::Ratio(read.quantity.value)
                };
                (Some(reading), ZeroSource::Stated)
            }
            (false, true, None, None) => (None, ZeroSource::Rows(section.whole("rows", 1, u64::MAX)?)),
            (false, false, Some(from), Some((to, _))) => {
                (None, ZeroSource::Window { from: Moment::unplaced(from), to: Moment::unplaced(to) })
            }
            (false, false, None, None) if celsius.is_some() => (None, ZeroSource::Stated),
            _ => {
                self.say(
                    section.span.clone(),
                    "zero has one of: at = a reading; rows = a number of first rows; from and to = a stretch of time; or a temperature alone",
                );
                return None;
            }
        };
        if gauge.has_thermal() && celsius.is_none() && source == ZeroSource::Stated {
            section
                .lack("temperature", "the temperature at which the zero was taken, which thermal output counts from");
            return None;
        }
        Some((Zero { reading, meaning, celsius, ..Zero::default() }, source, celsius.is_some()))
    }

    fn platinum(&mut self) -> Option<platinum::Coefficients> {
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

    fn thermistor(&mut self) -> Option<Law> {
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

    fn thermometer_chain(&mut self, unit: Option<Unit>) -> Option<(Chain, Option<usize>)> {
        let s = self.s.clone();
        let (element, nominal) = if s.has("platinum") {
            let curve = self.platinum()?;
            (Element::Platinum(curve), curve.r0_ohms)
        } else {
            let law = self.thermistor()?;
            (Element::Thermistor(law), law.ohms_from_celsius(25.0))
        };
        let reading = self.signal(unit?, "thermometer")?;
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
        Some((Chain { reading, converter, amplifier, supply, ..Chain::new(network, element) }, input))
    }

    fn thermometer_circuit(&mut self) -> Option<(Network, Supply, Option<usize>)> {
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

    fn limits(&mut self, chain: &mut Chain, unit: Unit) -> Option<()> {
        let s = self.s.clone();
        if !s.has("limits") {
            return Some(());
        }
        let section = s.section("limits")?;
        let words = [
            ("short", Word::Short),
            ("open", Word::Open),
            ("saturated", Word::Saturated),
            ("out-of-range", Word::OutOfRange),
            ("missing", Word::Missing),
        ];
        let limit = |value: &str, word: &str| -> Option<Option<Limit>> {
            if !section.has(value) {
                if section.has(word) {
                    section.lack(value, &format!("limits.{word} says what a reading beyond it means"));
                }
                return Some(None);
            }
            let at = section.quantity(value, &[unit.kind])?.quantity.value;
            let word = if section.has(word) { section.choice(word, &words)? } else { Word::OutOfRange };
            Some(Some(Limit { at: in_unit(at, unit), word }))
        };
        chain.low_limit = limit("low", "below")?;
        chain.high_limit = limit("high", "above")?;
        if let (Some(low), Some(high)) = (chain.low_limit, chain.high_limit)
            && low.at >= high.at
        {
            self.say(section.span.clone(), "limits.low must be below limits.high");
            return None;
        }
        for (limit, key) in [(chain.low_limit, "below"), (chain.high_limit, "above")] {
            if limit.is_some() && !section.has(key) {
                self.assume(format!("limits.{key}: out-of-range"));
            }
        }
        if chain.low_limit.is_none() && chain.high_limit.is_none() && self.s.findings.count() == 0 {
            self.say(section.span.clone(), "limits has neither low nor high");
            return None;
        }
        Some(())
    }
}

/// A value in the library's unit as a number of this unit.
fn in_unit(value: f64, unit: Unit) -> f64 {
    let plain = (value - unit.offset) / unit.factor;
    let power: f64 = format!("1e{}", unit.exponent.unsigned_abs()).parse().unwrap_or(1.0);
    if unit.exponent < 0 { plain * power } else { plain / power }
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

/// The unit of a channel's readings; `None` for a channel that reads no column.
pub(super) fn channel_unit(channel: &Channel) -> Option<String> {
    Some(channel.segments()?.first()?.reads.clone())
}

pub(super) fn unit_name(kind: Kind, exponent: i8) -> Option<String> {
    unit::spellings(Some(kind))
        .into_iter()
        .find(|name| unit::find(kind, name).is_some_and(|u| u.exponent == exponent))
        .map(ToString::to_string)
}

/// A typed reading: with a unit of the same kind, or a bare number in the channel's own.
pub(super) fn typed_reading(sheet: &Sheet, channel: usize, text: &str) -> Result<f64, String> {
    let channel = sheet.measurement.channels.get(channel).ok_or("there is no such channel")?;
    if channel.segments().is_none() {
        return Err(format!("channel '{}' reads no column: give readings to the channels it is made of", channel.name));
    }
    if let Some(number) = super::quantity::bare_number(text) {
        return Ok(number);
    }
    let own = channel_unit(channel).ok_or("the channel reads no column")?;
    let found =
        READABLE.iter().find_map(|kind| unit::find(*kind, &own)).ok_or("the unit of the readings is unknown")?;
    super::quantity::parse(text, &[found.kind]).map(|q| in_unit(q.value, found))
}

/// A typed zero: a reading, or output over supply where that is another unit.
pub(super) fn typed_zero(sheet: &Sheet, channel: usize, text: &str) -> Result<ZeroReading, String> {
    match super::quantity::parse(text, &[Kind::VoltageRatio]) {
        Ok(ratio) if super::quantity::bare_number(text).is_none() => Ok(ZeroReading::Ratio(ratio.value)),
        _ => typed_reading(sheet, channel, text).map(ZeroReading::AsRecorded),
    }
}

/// A typed supply: with a unit, or a bare number in that of the column.
pub(super) fn typed_supply(chain: &Chain, text: &str) -> Result<f64, String> {
    if let Some(number) = super::quantity::bare_number(text) {
        return Ok(number);
    }
    let Supply::Column { exponent } = chain.supply else { return Err("the supply is no column".to_string()) };
    let column = Unit { name: "", kind: Kind::Volts, exponent, factor: 1.0, offset: 0.0 };
    super::quantity::parse(text, &[Kind::Volts]).map(|q| in_unit(q.value, column))
}

/// A typed result: with a unit of the same kind, or a bare number in the channel's own.
pub(super) fn typed_result(sheet: &Sheet, channel: usize, text: &str) -> Result<f64, String> {
    let channel = sheet.measurement.channels.get(channel).ok_or("there is no such channel")?;
    if let Some(number) = super::quantity::bare_number(text) {
        return Ok(number);
    }
    let kinds = if matches!(channel.source, Source::Combination(_)) && channel.unit == "K" {
        std::vec![Kind::Kelvins]
    } else {
        READABLE.to_vec()
    };
    let own =
        kinds.iter().find_map(|kind| unit::find(*kind, &channel.unit)).ok_or("the unit of the channel is unknown")?;
    super::quantity::parse(text, &[own.kind]).map(|q| in_unit(q.value, own))
}

/// Makes a sheet with one channel, `value`, of a typed reading and `key=value` words.
pub(super) fn sheet_of_words(reading: &str, words: &[String]) -> Result<String, String> {
    let mut out = String::from("[channel.value]\ncolumn = 1\n");
    let mut has_reads = false;
    for word in words {
        let (key, value) = word
            .split_once('=')
            .ok_or_else(|| format!("'{word}': expected key=value, as in platinum.r0=\"100 ohm\""))?;
        let (key, value) = (key.trim(), value.trim());
        let key_is_plain = !key.is_empty() && key.chars().all(|c| c.is_ascii_alphanumeric() || c == '.' || c == '_');
        if !key_is_plain {
            return Err(format!("'{word}': '{key}' is no key of a sheet"));
        }
        has_reads |= key == "reads";
        // numbers, lists, tables, flags and quoted text stand as they are; anything else is text
        let as_is = value.parse::<f64>().is_ok()
            || value.starts_with(['[', '{', '"', '\''])
            || value == "true"
            || value == "false";
        if as_is {
            out.push_str(&format!("{key} = {value}\n"));
        } else {
            out.push_str(&format!("{key} = {}\n", toml::Value::String(value.to_string())));
        }
    }
    if !has_reads {
        let unit = super::quantity::parse(reading, READABLE).map_err(|e| format!("{e} (or say reads=...)"))?.unit;
        if unit.name.is_empty() {
            return Err(format!("value '{reading}' has no unit: write it behind the number, as in \"109.73 ohm\""));
        }
        out.push_str(&format!("reads = {}\n", toml::Value::String(unit.name.to_string())));
    }
    Ok(out)
}
