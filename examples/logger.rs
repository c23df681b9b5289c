//! A worked logger on a footbridge: codes come in one by one into rings, are converted there, and leave as a table.
//!
//! ```text
//! cargo run --example logger
//! ```
//!
//! The library is built without features: no std, no allocation, no panic. The channels are those of tests/capi/logger.toml, and
//! the table is the one that tests/capi/logger.c writes from an image of that sheet; here they are stated in code. Codes are
//! made up where a converter would be read. Only `main` needs an operating system, to print.

use std::io::{self, Write};

use ohmwright::Error;
use ohmwright::chain::{Chain, Element, Inputs, Network, Outcome, Plan, Reading, Signal, Supply, Temperature, Word};
use ohmwright::platinum::IEC_60751;
use ohmwright::signal::{Bridge, Coding, Conductor, Converter, Divider, Each, FullScale, Leads, Side, Wires};
use ohmwright::strain::Gauge;
use ohmwright::thermistor::{Beta, Law};
use ohmwright::thermocouple::Thermocouple;

const CHANNELS: usize = 4;
const NAMES: [&str; CHANNELS] = ["girder", "deck", "box", "flue"];
const SAMPLES: usize = 200;

/// The last readings of one channel.
struct Ring<const N: usize> {
    readings: [f64; N],
    next: usize,
}

impl<const N: usize> Ring<N> {
    const fn new() -> Self {
        Self { readings: [0.0; N], next: 0 }
    }

    fn put(&mut self, reading: f64) {
        if let Some(slot) = self.readings.get_mut(self.next) {
            *slot = reading;
        }
        self.next = (self.next + 1) % N;
    }

    fn newest(&self) -> f64 {
        self.readings.get((self.next + N - 1) % N).copied().unwrap_or(f64::NAN)
    }
}

/// What was wired; lowered once, at start.
fn plans() -> Result<[Plan; CHANNELS], Error> {
    let counts = Reading { signal: Signal::Count, exponent: 0 };

    // one 350 Ω gauge on three wires at a 24-bit converter of ±40 mV, supplied with 2.5 V
    let mut bridge = Bridge::one_gauge(350.0);
    bridge.leads = Some(Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(1.8)) });
    let girder = Chain {
        reading: counts,
        converter: Some(Converter { bits: 24, full_scale: FullScale::Volts(0.04), coding: Coding::Signed }),
        supply: Supply::Fixed(2.5),
        ..Chain::strain(bridge, Gauge::new(2.08))
    };

    // a platinum thermometer on four wires, its resistance as an instrument gives it
    let deck = Chain::new(Network::Resistance { leads: None }, Element::Platinum(IEC_60751));

    // a thermistor in a divider at a 12-bit converter that has the divider's supply as its reference
    let divider = Divider { fixed: 10e3, sensor: Side::Low, input_resistance: None };
    let beta = Beta { r25_ohms: 10e3, beta_kelvin: 3950.0, range_celsius: [-40.0, 85.0] };
    let cabinet = Chain {
        reading: counts,
        converter: Some(Converter { bits: 12, full_scale: FullScale::Supply, coding: Coding::Unsigned }),
        ..Chain::new(Network::Divider { divider, leads: None }, Element::Thermistor(Law::Beta(beta)))
    };

    // a type K thermocouple in mV, its reference junction in the box
    let flue = Chain {
        reading: Reading { signal: Signal::Volts, exponent: -3 },
        temperature: Temperature::Column,
        ..Chain::new(Network::Emf, Element::Thermocouple(Thermocouple::K))
    };

    Ok([girder.plan()?, deck.plan()?, cabinet.plan()?, flue.plan()?])
}

/// What the converters would give: a slow wave on the gauge, a warming deck, a box, a flue; sample 150 saturates.
fn sample(channel: usize, n: usize) -> f64 {
    match channel {
        0 if n == 150 => 8_388_607.0,
        0 => ((n % 40) as f64 - 20.0) * 4000.0,
        1 => 107.0 + 0.01 * n as f64,
        2 => 2048.0 - n as f64,
        _ => 3.0 + 0.02 * n as f64,
    }
}

/// Converts the newest sample of every channel; the flue takes its reference junction from the box.
fn convert(plans: &[Plan; CHANNELS], rings: &[Ring<64>; CHANNELS]) -> [Outcome; CHANNELS] {
    let mut out = [Outcome { value: f64::NAN, word: Word::Missing }; CHANNELS];
    let mut junction = f64::NAN;
    for (channel, ((plan, ring), outcome)) in plans.iter().zip(rings).zip(&mut out).enumerate() {
        *outcome = plan.one(Inputs { reading: ring.newest(), celsius: junction, ..Inputs::default() });
        if channel == 2 {
            junction = outcome.value;
        }
    }
    out
}

fn main() -> io::Result<()> {
    let plans = plans().map_err(io::Error::other)?;
    let mut rings = [const { Ring::<64>::new() }; CHANNELS];
    let mut table = io::stdout().lock();
    writeln!(table, "{},flags", NAMES.join(","))?;
    for n in 0..SAMPLES {
        for (channel, ring) in rings.iter_mut().enumerate() {
            ring.put(sample(channel, n));
        }
        let row = convert(&plans, &rings);
        for outcome in row {
            // a word is not a value: the cell stays empty
            match outcome.word {
                Word::Good => write!(table, "{:.3},", outcome.value)?,
                _ => write!(table, ",")?,
            }
        }
        for (name, outcome) in NAMES.iter().zip(row).filter(|(_, outcome)| outcome.word != Word::Good) {
            write!(table, "{name}:{} ", outcome.word.as_str())?;
        }
        writeln!(table)?;
    }
    Ok(())
}
