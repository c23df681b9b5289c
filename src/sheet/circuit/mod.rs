//! One channel's keys into its chain.

use std::collections::BTreeMap;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

mod gauge;
mod network;
mod shunt;
mod thermometer;
mod transducer;
mod typed;
mod zero;

pub(super) use transducer::{LOADS, load_unit};
pub(super) use typed::{
    sheet_of_words, supply_unit, typed_difference, typed_reading, typed_result, typed_supply, typed_zero,
};

use super::channel::{Known, side, side_of_text};
use super::node::{Read, Section, Value};
use super::{nearest, recording, table_of};
use crate::chain::{Chain, Element, Limit, Network, Output, Reading, Signal, Word};
use crate::measurement::{Channel, ColumnRef, Covariance, Paired, Segment, Side, Stated, ToleranceClass, ZeroSource};
use crate::sheet::unit::{self, Kind, Unit};
use crate::uncertainty::Uncertainty;

/// A chain as read from a sheet.
pub(in crate::sheet) struct Circuit {
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
    Kind::Newtons,
    Kind::NewtonMetres,
    Kind::Kilograms,
    Kind::Metres,
    Kind::Degrees,
    Kind::Number,
];

/// Keys that name a sensor.
const SENSORS: [&str; 6] = ["gauge", "transducer", "platinum", "metal", "thermistor", "thermocouple"];

/// What a channel with a gauge is called in messages.
const GAUGE: &str = "strain gauge bridge";

/// What a channel with a thermometer is called in messages.
const THERMOMETER: &str = "thermometer";

/// What a channel with a thermocouple is called in messages.
const THERMOCOUPLE: &str = "thermocouple";

/// Temperatures for which a beta thermistor is used unless the sheet says otherwise, °C: common practice, no source.
const BETA_RANGE: [f64; 2] = [-50.0, 150.0];

/// The pieces of one segment that depend on the sensor.
struct Pieces {
    chain: Chain,
    zero: ZeroSource,
    zero_stated: bool,
    /// Which input is the supply.
    supply: Option<usize>,
    /// Unit of the result where the sensor's keys say it.
    unit: Option<String>,
    /// Side channels: of the gauge, of the leads, of arms 1-4.
    sides: [Option<Side>; 6],
    /// Tolerance class of the sensor.
    tolerance: Option<ToleranceClass>,
    /// Second columns of reading and supply.
    paired: [Option<Paired>; 2],
}

impl Pieces {
    /// A chain that needs nothing else.
    fn of(chain: Chain) -> Self {
        Self {
            chain,
            zero: ZeroSource::Stated,
            zero_stated: false,
            supply: None,
            unit: None,
            sides: Default::default(),
            tolerance: None,
            paired: [None; 2],
        }
    }
}

struct Reader<'a, 'b> {
    s: &'b Section<'a>,
    known: &'b BTreeMap<&'a str, Known>,
    inputs: &'b mut Vec<ColumnRef>,
    assumed: &'b mut Vec<String>,
    stated: Vec<Stated>,
}

impl Circuit {
    /// Reads the chain of a channel; what is wrong has been said where this is `None`.
    pub(in crate::sheet) fn read<'a>(
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
            self.stated.push(Stated {
                key,
                value: read.quantity.value,
                text: read.text.clone(),
                uncertainty,
                share: None,
            });
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
        let sensors: Vec<&str> = SENSORS.into_iter().filter(|k| s.has(k)).collect();
        if let [_, second, ..] = sensors.as_slice()
            && let Some(entry) = s.entry(second)
        {
            self.say(
                entry.key_span.clone(),
                format!("a channel has one sensor, and this one has {}", sensors.join(" and ")),
            );
            return None;
        }
        let pieces = match sensors.first() {
            Some(&"gauge") => self.gauge_chain(unit)?,
            Some(&"transducer") => self.transducer_chain(unit)?,
            Some(_) => self.thermometer_chain(unit)?,
            None => {
                for key in ["bridge", "circuit", "leads", "converter", "amplifier", "zero", "self_heating"] {
                    if let Some(entry) = s.table.peek(key) {
                        self.say(
                            entry.key_span.clone(),
                            format!("{key} needs a sensor: this channel has no {}", SENSORS.join(", ")),
                        );
                    }
                }
                Pieces::of(self.direct_chain(unit?)?)
            }
        };
        let Pieces { chain, zero, zero_stated, supply, unit: own_unit, sides, tolerance, paired } = pieces;
        let [paired, supply_paired] = paired;
        let [temperature, lead_temperature, arm_temperatures @ ..] = sides;
        let (unit_name, output) = match own_unit {
            Some(name) => (name, Output::AsRead),
            None => self.output(&chain, unit?)?,
        };
        let (zero_file, again) = self.second_zero(&zero, temperature.as_ref())?;
        let mut chain = Chain { output, extrapolate: s.flag("extrapolate").unwrap_or(false), ..chain };
        self.limits(&mut chain, unit?)?;
        let shunt = self.shunt(&unit_name, &chain)?;
        if let Some((text, span)) = s.text("uncertainty") {
            let unit = unit?;
            match crate::sheet::quantity::parse_reading_uncertainty(text, unit.kind) {
                Ok((uncertainty, share)) => {
                    let text = text.to_string();
                    self.stated.push(Stated { key: "uncertainty".into(), value: f64::NAN, text, uncertainty, share });
                }
                Err(message) => self.say(span, format!("uncertainty: {message}")),
            }
        }
        if let Some((text, span)) = s.text("resolution") {
            // a step, as "0.1 uV/V": the reading is within half of it
            match crate::sheet::quantity::parse_uncertainty(text, unit?.kind) {
                Ok(Uncertainty::Rectangular { half_width: step }) if step > 0.0 => self.stated.push(Stated {
                    key: "resolution".into(),
                    value: f64::NAN,
                    text: text.to_string(),
                    uncertainty: Uncertainty::of_resolution(step),
                    share: None,
                }),
                Ok(_) => self.say(span, "resolution is the step between two readings, above zero, as in \"0.1 uV/V\""),
                Err(message) => self.say(span, format!("resolution: {message}")),
            }
        }
        let covariances = self.covariances()?;
        Some(Circuit {
            unit: unit_name,
            segment: Segment {
                from: None,
                chain,
                zero,
                zero_temperature_stated: zero_stated,
                zero_file,
                zero_place: None,
                again,
                reads: unit?.name.to_string(),
                reading: reading?,
                paired,
                supply,
                supply_paired,
                temperature,
                lead_temperature,
                arm_temperatures,
                shunt,
                tolerance,
                arms_stated: s
                    .table
                    .peek("bridge")
                    .and_then(|e| crate::sheet::table_of(&e.node.value))
                    .is_some_and(|bridge| bridge.has("resistances")),
                stated: core::mem::take(&mut self.stated),
                reading_size: by_unit(unit?),
                covariances,
                zero_scatter: None,
            },
        })
    }

    /// `covariance` of fitted coefficients, beside them.
    fn covariances(&mut self) -> Option<Vec<Covariance>> {
        let mut out = Vec::new();
        for table in ["platinum", "thermistor", "transducer", "thermal_output"] {
            let has =
                |key: &str| self.s.table.peek(table).and_then(|e| table_of(&e.node.value)).is_some_and(|t| t.has(key));
            if !has("covariance") {
                continue;
            }
            let s = self.s.clone();
            let section = s.section(table)?;
            let count = |key: &str| match section.table.peek(key).map(|e| &e.node.value) {
                Some(Value::List(list)) => list.len(),
                _ => 0,
            };
            let listed = |key: &str, first: usize, named: &str| -> Vec<String> {
                (0..count(key)).map(|i| format!("{table}.{named}[{}]", i + first)).collect()
            };
            let mut keys: Vec<String> = ["r0", "a", "b", "c", "alpha", "delta", "beta", "triple_point"]
                .into_iter()
                .filter(|key| table == "platinum" && section.has(key))
                .map(|key| format!("{table}.{key}"))
                .collect();
            keys.extend(listed("deviation", 1, "deviation"));
            keys.extend(listed("steinhart_hart", 1, "steinhart_hart"));
            keys.extend(listed("ratio_terms", 1, "terms"));
            keys.extend(listed("reciprocal_terms", 1, "terms"));
            keys.extend(listed("polynomial", 0, "polynomial"));
            keys.extend(listed("coefficients", 0, "coefficients"));
            let span = section.entry("covariance")?.node.span.clone();
            let rows = section.rows("covariance", keys.len())?;
            let freedom =
                if section.has("dof") { self.positive(&section, "dof", Kind::Number)? } else { f64::INFINITY };
            if let Some(twice) = self.stated.iter().find(|s| keys.contains(&s.key)) {
                self.say(span, format!("{} has an uncertainty of its own beside {table}.covariance", twice.key));
                return None;
            }
            match Covariance::new(&format!("{table}.covariance"), keys, &rows, freedom) {
                Ok(covariance) => out.push(covariance),
                Err(error) => {
                    self.say(span, format!("{table}.covariance: {error}"));
                    return None;
                }
            }
        }
        Some(out)
    }

    /// Unit of the result.
    fn output(&mut self, chain: &Chain, reads: Unit) -> Option<(String, Output)> {
        let s = self.s.clone();
        let kinds: &[Kind] = match chain.element {
            Element::Gauge { .. } => &[Kind::Strain, Kind::ShearStrain],
            Element::Direct { .. } | Element::Transducer { .. } => {
                return Some((self.direct_output(reads)?.name.to_string(), Output::AsRead));
            }
            _ => &[Kind::Celsius],
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
            Kind::ShearStrain => {
                self.assume("output: e in bridge.arms is the normal strain along the grids, 45° from the axis of shear; the result is γ = 2 e");
                Output::ShearStrain { exponent: -unit.exponent }
            }
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
            Kind::VoltageRatio if sensor != THERMOCOUPLE => Signal::Ratio,
            Kind::Ohms if sensor == THERMOMETER => Signal::Ohms,
            Kind::Count => Signal::Count,
            _ => {
                let entry = self.s.entry("reads")?;
                let more = match sensor {
                    THERMOMETER => ", a voltage ratio, ohms",
                    THERMOCOUPLE => "",
                    _ => ", a voltage ratio",
                };
                self.say(
                    entry.node.span.clone(),
                    format!("reads is '{}', but a {sensor} is read in volts{more} or counts", unit.name),
                );
                return None;
            }
        };
        Some(Reading { signal, exponent: unit.exponent })
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

/// What one of this unit is in the library's unit.
fn by_unit(unit: Unit) -> f64 {
    let power: f64 = format!("1e{}", unit.exponent).parse().unwrap_or(1.0);
    power * unit.factor
}

/// Factor from one unit to another of its kind.
fn between(from: Unit, to: Unit) -> f64 {
    crate::sheet::channel::between(&from, &to)
}

/// A value in the library's unit as a number of this unit.
fn in_unit(value: f64, unit: Unit) -> f64 {
    let plain = (value - unit.offset) / unit.factor;
    let power: f64 = format!("1e{}", unit.exponent.unsigned_abs()).parse().unwrap_or(1.0);
    if unit.exponent < 0 { plain * power } else { plain / power }
}

/// The unit of a channel's readings; `None` for a channel that reads no column.
pub(in crate::sheet) fn channel_unit(channel: &Channel) -> Option<String> {
    Some(channel.segments()?.first()?.reads.clone())
}

pub(in crate::sheet) fn unit_name(kind: Kind, exponent: i8) -> Option<String> {
    unit::spellings(Some(kind))
        .into_iter()
        .find(|name| unit::find(kind, name).is_some_and(|u| u.exponent == exponent))
        .map(ToString::to_string)
}
