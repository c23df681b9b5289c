//! One channel alone: its chain with the side inputs that were typed.

use std::io::Write;

use ohmwright::chain::{Chain, Element, Inputs, Network, Plan, Temperature};
use ohmwright::measurement::{Paired, Pairing, Source, ZeroSource};
use ohmwright::sheet::Sheet;
use ohmwright::strain::Transducer;

use crate::args::With;
use crate::failure::Failure;

/// What can be typed of a zero.
const ZERO_INPUTS: [&str; 3] = ["zero", "zero_temperature", "zero_lead_temperature"];

/// Before the name of a temperature channel: what it was at zero.
const ZERO_OF: &str = "zero_temperature.";

/// A channel that can be computed from one reading.
pub(crate) struct Alone {
    /// The channel whose readings are typed.
    pub(crate) read: usize,
    /// Its chain, with what was typed beside it.
    pub(crate) chain: Chain,
    /// The plan of its chain.
    pub(crate) plan: Plan,
    /// Supply and temperature.
    pub(crate) inputs: Inputs,
    /// What its result is multiplied by: a stress channel's modulus.
    pub(crate) factor: f64,
    /// The name of the channel that was asked for.
    name: String,
    /// Unit of the channel that reads.
    unit: String,
    /// What was assumed or left aside.
    pub(crate) notes: Vec<String>,
    /// What each typed reading is taken together with: the reading of a second column, in the unit of the first.
    pair: Option<(Pairing, f64)>,
}

/// Returns the channels that one reading gives.
pub(crate) fn from_one_reading(sheet: &Sheet) -> Vec<&str> {
    let channels = &sheet.measurement.channels;
    let reads = |i: usize| channels.get(i).is_some_and(|c| c.segments().is_some());
    let alone = channels.iter().enumerate().filter(|(i, channel)| match &channel.source {
        Source::Stress { of, .. } => reads(*of),
        _ => reads(*i),
    });
    alone.map(|(_, channel)| channel.name.as_str()).collect()
}

/// Returns the index of a channel that one reading gives.
pub(crate) fn single(sheet: &Sheet, name: &str) -> Result<usize, Failure> {
    sheet.measurement.position(name).ok_or_else(|| {
        if sheet.rosette(name).is_some() {
            return Failure::error(format!(
                "'{name}' is a rosette, which no single reading gives: compute its grids one by one, or go forwards from all of the state by expect SHEET {name} LARGER SMALLER DIRECTION"
            ));
        }
        let known = from_one_reading(sheet);
        let near = ohmwright::sheet::nearest(name, known.iter().copied());
        let near = near.map_or_else(String::new, |n| format!("; did you mean '{n}'?"));
        Failure::error(format!("there is no channel '{name}'; those that one reading gives are {}{near}", known.join(", ")))
    })
}

/// Returns the index of a channel by its name.
pub(crate) fn channel(sheet: &Sheet, name: &str) -> Result<usize, Failure> {
    sheet.channel(name).map_err(Failure::error)
}

/// Returns whether a word of `--with` means something for this channel.
pub(crate) fn takes(sheet: &Sheet, channel: usize, word: &str) -> bool {
    let name = word.split_once('=').map_or(word, |(name, _)| name).trim();
    let measurement = &sheet.measurement;
    let segments = measurement.channels.get(channel).and_then(|c| c.segments());
    segments.and_then(|segments| segments.first()).is_some_and(|segment| {
        let column = segment.supply.and_then(|s| measurement.inputs.get(s)).map(ToString::to_string);
        let zeroed = matches!(segment.chain.element, Element::Gauge { .. } | Element::Transducer { .. });
        segment.sides().iter().flatten().any(|side| side.name == name)
            || column.as_deref() == Some(name)
            || (zeroed && matches!(name, "zero" | "zero_temperature"))
            || name.strip_prefix(ZERO_OF).is_some_and(|of| segment.sides().iter().flatten().any(|side| side.name == of))
    })
}

/// Prints what was assumed, on standard error, where nobody has to read it.
pub(crate) fn tell(line: &str) {
    let _ = writeln!(std::io::stderr(), "{line}");
}

impl Alone {
    /// Takes a channel out of its sheet, whose reading is what its columns make together.
    pub(crate) fn new(sheet: &Sheet, channel: usize, with: &With) -> Result<Self, Failure> {
        Self::taken(sheet, channel, with, false)
    }

    /// The same where a second column of the reading can be typed beside it.
    pub(crate) fn of_columns(sheet: &Sheet, channel: usize, with: &With) -> Result<Self, Failure> {
        Self::taken(sheet, channel, with, true)
    }

    /// Reads what was typed as the reading of the channel, together with that of the second column.
    pub(crate) fn reading(&self, sheet: &Sheet, text: &str) -> Result<f64, Failure> {
        let reading = sheet.reading(self.read, text).map_err(Failure::error)?;
        Ok(self.pair.map_or(reading, |(how, second)| how.together(reading, second)))
    }

    fn taken(sheet: &Sheet, channel: usize, with: &With, columns: bool) -> Result<Self, Failure> {
        let name = |word: &str| word.split_once('=').map_or(word, |(name, _)| name).trim().to_string();
        for (i, word) in with.with.iter().enumerate() {
            if with.with.iter().take(i).any(|earlier| name(earlier) == name(word)) {
                return Err(Failure::error(format!("--with {word}: '{}' was given before", name(word))));
            }
        }
        let measurement = &sheet.measurement;
        let (read, factor) = match measurement.channels.get(channel).map(|c| &c.source) {
            Some(Source::Stress { of, factor, .. }) => (*of, *factor),
            Some(Source::Rosette(_)) => {
                let name = measurement.channels.get(channel).map_or("", |c| c.name.as_str());
                let rosette = name.split_once(' ').map_or(name, |(rosette, _)| rosette);
                return Err(Failure::error(format!(
                    "channel '{name}' combines several grids: compute them one by one, or go forwards from all of the state by expect SHEET {rosette} LARGER SMALLER DIRECTION"
                )));
            }
            Some(Source::Combination(_)) => {
                let name = measurement.channels.get(channel).map_or("", |c| c.name.as_str());
                return Err(Failure::error(format!(
                    "channel '{name}' combines several channels: compute them one by one"
                )));
            }
            _ => (channel, 1.0),
        };
        let own = measurement.channels.get(read).ok_or_else(|| Failure::error("there is no such channel"))?;
        let Some(segments) = own.segments() else {
            return Err(Failure::error(format!(
                "channel '{}' is computed from other channels: give readings to those",
                own.name
            )));
        };
        let segment = segments.first().ok_or_else(|| Failure::error("the channel reads nothing"))?;
        let zero_typed = with.with.iter().any(|w| w.starts_with("zero="));
        let mut notes: Vec<String> = sheet
            .assumed
            .get(read)
            .into_iter()
            .flatten()
            .filter(|line| !(zero_typed && line.starts_with("zero:")))
            .map(|line| format!("assumed {line}"))
            .collect();
        if segments.len() > 1 {
            notes.push(format!("channel '{}' changes in time: these are its first keys", own.name));
        }
        if segment.again.as_ref().is_some_and(|again| again.drift.is_some()) {
            notes.push(format!("channel '{}': the drift that a recording shows is not taken off here", own.name));
        }
        let mut chain: Chain = segment.chain;
        let mut inputs = Inputs { reading: 0.0, supply: f64::NAN, celsius: f64::NAN, ..Inputs::default() };
        let column = segment.supply.and_then(|s| measurement.inputs.get(s)).map(ToString::to_string);
        let second = |paired: Option<Paired>| {
            let paired = paired.filter(|_| columns)?;
            Some((paired.how, measurement.inputs.get(paired.input)?.to_string()))
        };
        let (second, second_supply) = (second(segment.paired), second(segment.supply_paired));
        let (mut pair, mut supply_pair) = (None, None);
        // temperatures of the gauge, of the leads, of arms 1-4: one channel may be several of them
        let sides: Vec<Option<&str>> = segment.sides().iter().map(|s| s.map(|s| s.name.as_str())).collect();
        let mut typed = [f64::NAN; 6];
        let zeroed = matches!(chain.element, Element::Gauge { .. } | Element::Transducer { .. });
        for word in &with.with {
            let (name, value) = word
                .split_once('=')
                .ok_or_else(|| Failure::error(format!("--with {word}: expected NAME=VALUE, as in deck=21degC")))?;
            let (name, value) = (name.trim(), value.trim());
            let wrong = |e: String| Failure::error(format!("--with {name}: {e}"));
            // a bare number is in °C, which the sheet must not contradict
            let celsius = |of: &[Option<&str>]| {
                let own = |side: &str| measurement.channels.iter().find(|c| c.name == side);
                let other = of.iter().flatten().filter_map(|side| own(side)).find(|c| c.unit != "degC");
                match other.filter(|_| value.parse::<f64>().is_ok()) {
                    Some(c) => Err(wrong(format!(
                        "value '{value}' has no unit, and channel '{}' is in {}: say which, as in {value}{}",
                        c.name, c.unit, c.unit
                    ))),
                    None => Sheet::temperature(value).map_err(wrong),
                }
            };
            if ZERO_INPUTS.contains(&name) && !zeroed {
                return Err(Failure::error(format!("--with {name}: channel '{}' has no bridge with a zero", own.name)));
            }
            if name == "zero" {
                let reading = sheet.zero(read, value).map_err(wrong)?;
                set_zero(&mut chain, |z| z.reading = Some(reading));
            } else if name == "zero_temperature" {
                let t = celsius(&sides)?;
                // of the gauge, and of arms that have their own
                let follows = chain.arm_temperatures.map(|own| own == Temperature::Column);
                set_zero(&mut chain, |z| {
                    z.celsius = Some(t);
                    for (slot, _) in z.arm_celsius.iter_mut().zip(follows).filter(|(_, follows)| *follows) {
                        *slot = Some(t);
                    }
                });
            } else if let Some(of) = name.strip_prefix(ZERO_OF).filter(|of| sides.contains(&Some(*of))) {
                let t = celsius(&[Some(of)])?;
                set_zero(&mut chain, |z| {
                    let slots = [&mut z.celsius, &mut z.lead_celsius].into_iter().chain(&mut z.arm_celsius);
                    for (slot, _) in slots.zip(&sides).filter(|(_, side)| **side == Some(of)) {
                        *slot = Some(t);
                    }
                });
            } else if name == "zero_lead_temperature" {
                let t = celsius(sides.get(1..2).unwrap_or_default())?;
                set_zero(&mut chain, |z| z.lead_celsius = Some(t));
            } else if sides.contains(&Some(name)) {
                let t = celsius(&[Some(name)])?;
                for (slot, _) in typed.iter_mut().zip(&sides).filter(|(_, side)| **side == Some(name)) {
                    *slot = t;
                }
            } else if Some(name) == column.as_deref() {
                inputs.supply = Sheet::supply(&chain, value).map_err(wrong)?;
            } else if let Some((how, _)) = second.as_ref().filter(|(_, column)| column == name) {
                pair = Some((*how, sheet.reading(read, value).map_err(wrong)?));
            } else if let Some((how, _)) = second_supply.as_ref().filter(|(_, column)| column == name) {
                supply_pair = Some((*how, Sheet::supply(&chain, value).map_err(wrong)?));
            } else {
                let mut known: Vec<&str> = Vec::new();
                let zero = ZERO_INPUTS.into_iter().filter(|_| zeroed);
                let zero = zero.filter(|name| *name != "zero_lead_temperature" || chain.lead_warmth.is_some());
                let seconds = [&second, &second_supply].into_iter().flatten().map(|(_, column)| column.as_str());
                for name in sides.iter().flatten().copied().chain(column.as_deref()).chain(seconds).chain(zero) {
                    if !known.contains(&name) {
                        known.push(name);
                    }
                }
                let each: Vec<String> =
                    match known.iter().filter(|name| sides.contains(&Some(**name))).collect::<Vec<_>>() {
                        several if zeroed && several.len() > 1 => {
                            several.iter().map(|name| format!("{ZERO_OF}{name}")).collect()
                        }
                        _ => Vec::new(),
                    };
                known.extend(each.iter().map(String::as_str));
                let known = if known.is_empty() { "none".to_string() } else { known.join(", ") };
                return Err(Failure::error(format!(
                    "--with {name}: channel '{}' has no such side input; it has {known}",
                    own.name
                )));
            }
        }
        if let Some(paired) = segment.paired.filter(|_| pair.is_none()) {
            let column = measurement.inputs.get(paired.input).map(ToString::to_string).unwrap_or_default();
            notes.push(match paired.how {
                Pairing::Reversed => format!("assumed reading: half of the difference to column '{column}' already"),
                _ => format!("assumed reading: twice column '{column}' less the other already"),
            });
        }
        if let Some(paired) = segment.supply_paired.filter(|_| supply_pair.is_none()) {
            let column = measurement.inputs.get(paired.input).map(ToString::to_string).unwrap_or_default();
            notes
                .push(format!("assumed voltage of the reference: half of the difference to column '{column}' already"));
        }
        if let Some((how, second)) = supply_pair {
            inputs.supply = how.together(inputs.supply, second);
        }
        if segment.zero != ZeroSource::Stated {
            let zero_given = matches!(
                &chain.element,
                Element::Gauge { zero, .. } | Element::Transducer { zero, .. } if zero.reading.is_some()
            );
            if !zero_given {
                notes.push(
                    "assumed zero: the bridge as stated is at zero, since the sheet takes it from a recording; give it by --with zero=READING"
                        .into(),
                );
            }
        }
        if let Some((Some(side), _)) = sides.iter().zip(typed).find(|(side, t)| side.is_some() && t.is_nan()) {
            return Err(Failure::error(format!(
                "channel '{}' needs a temperature: give it by --with {side}=21degC",
                own.name
            )));
        }
        let [celsius, lead_celsius, arm_celsius @ ..] = typed;
        inputs = Inputs { celsius, lead_celsius, arm_celsius, ..inputs };
        if chain.needs_supply_column() && inputs.supply.is_nan() {
            let current = matches!(chain.network, Network::Resistance { .. });
            return Err(Failure::error(format!(
                "channel '{}' needs its {}: give it by --with {}={}",
                own.name,
                if current { "current" } else { "supply" },
                column.as_deref().unwrap_or("supply"),
                supply_example(&chain, if current { 1e-3 } else { 2.5 })
            )));
        }
        let plan = chain.plan().map_err(|e| {
            Failure::error(match e {
                ohmwright::Error::Missing { what } if what.contains("temperature at zero") => {
                    format!(
                        "channel '{}' needs the temperature at zero: give it by --with zero_temperature=21degC",
                        own.name
                    )
                }
                ohmwright::Error::Missing { what } if what.contains("output over supply") => format!(
                    "--with zero: the supply of channel '{}' varies, so give output over supply, as in zero=0.03mV/V",
                    own.name
                ),
                e => format!("channel '{}': {e}", own.name),
            })
        })?;
        let name = measurement.channels.get(channel).map_or_else(String::new, |c| c.name.clone());
        Ok(Self { read, chain, plan, inputs, factor, name, unit: own.unit.clone(), notes, pair })
    }

    /// Says that a quantity has no reading here, and which have.
    ///
    /// - `shown`: the quantity as it was typed; `quantity`: in the unit of the chain.
    pub(crate) fn beyond(&self, shown: &str, quantity: f64) -> Failure {
        let name = &self.name;
        let held = match &self.chain.element {
            Element::Gauge { limit, .. } => Some((-limit * 1e6, limit * 1e6, "microstrain", 1e6)),
            Element::Transducer { law, limit, .. } => {
                let ends = match law {
                    Transducer::Certificate(k) => k.believed().map(|q| q * k.load_scale),
                    _ => [-limit, *limit],
                };
                let [a, b] = ends.map(|q| q.clamp(-limit, *limit));
                Some((a.min(b), a.max(b), self.unit.as_str(), 1.0))
            }
            element => element.range_celsius().map(|[low, high]| (low, high, "degC", 1.0)),
        };
        Failure::error(match held {
            Some((low, high, unit, scale)) if !(low..=high).contains(&(quantity * scale)) => {
                format!("value '{shown}' is beyond the range of channel '{name}': {low} to {high} {unit}")
            }
            _ => format!(
                "value '{shown}': no reading of channel '{name}' stands for it, or what stands beside it is beyond its range"
            ),
        })
    }

    /// What was assumed or left aside.
    pub(crate) fn notes(&self) -> &[String] {
        &self.notes
    }

    /// Says on standard error what was assumed.
    pub(crate) fn tell_notes(&self) {
        self.tell_new_notes(&mut Vec::new());
    }

    /// Says what was assumed and not said before.
    pub(crate) fn tell_new_notes(&self, said: &mut Vec<String>) {
        for line in &self.notes {
            if !said.contains(line) {
                tell(line);
                said.push(line.clone());
            }
        }
    }
}

/// A supply of so many volts or amperes as it may be typed, in the unit of its column.
fn supply_example(chain: &Chain, value: f64) -> String {
    let unit = Sheet::supply_unit(chain).unwrap_or_default();
    let own = Sheet::supply(chain, &format!("{value} {}", if unit.ends_with('A') { "A" } else { "V" }));
    own.map_or(unit.clone(), |own| format!("{own}{unit}"))
}

fn set_zero(chain: &mut Chain, set: impl FnOnce(&mut ohmwright::strain::Zero)) {
    if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut chain.element {
        set(zero);
    }
}
