//! One row of readings through a measurement, and what each channel is there.
#![allow(dead_code, reason = "every test file uses its own part of this")]

use ohmwright::chain::Word;
use ohmwright::measurement::{Column, Engine, Measurement, Propagation, State};

/// The states of all channels for one reading of every input column, in the order of the columns.
pub fn of_row(measurement: &Measurement, readings: &[f64]) -> Vec<Option<State>> {
    let mut engine = Engine::new(measurement).unwrap();
    let columns = readings.iter().map(|v| Column { values: vec![*v], words: vec![Word::Good] }).collect();
    engine.push(vec![0.0], columns, ());
    engine.end();
    let block = engine.pop().unwrap();
    (0..measurement.channels.len()).map(|channel| block.state(measurement, channel, 0)).collect()
}

/// What a channel is made of at one row.
pub fn propagation(measurement: &Measurement, readings: &[f64], channel: &str) -> Propagation {
    let states = of_row(measurement, readings);
    Propagation::new(measurement, &states, measurement.position(channel).unwrap()).unwrap()
}

/// The standard contribution of a cause.
#[track_caller]
pub fn contribution(propagation: &Propagation, name: &str) -> f64 {
    let parts = propagation.contributions().unwrap();
    let all: Vec<&str> = propagation.causes().iter().map(|c| c.name.as_str()).collect();
    let place = all.iter().position(|n| *n == name).unwrap_or_else(|| panic!("{name} is none of {all:?}"));
    parts[place].signed()
}

/// Channels of every kind, nearly all of their keys uncertain.
pub const BENCH: &str = r#"
[common.strain]
reads = "mV/V"
uncertainty = "0.2 uV/V (k=2)"
gauge = { resistance = "350 ohm ± 0.3 %", gauge_factor = "2.08 ± 0.5 %", slope = "1.0 %/100K ± 10 %", reference = "24 degC" }
bridge = { arms = ["e", "0", "0", "0"], input_resistance = "100 kohm ± 5 %" }
leads = { wires = 3, each = "2.6 ohm ± 2 %", temperature = "air", coefficient = "0.00393 /K ± 2 %" }
thermal_output = { coefficients = [-24.0, "1.90 ± 0.05", -0.0400, 2.50e-4], in = "degC", gauge_factor = 2.0, scatter = "0.25 um/m/K" }
expansion = { specimen = "11.7e-6/K ± 3 %", data = "12.1e-6/K" }
temperature = "deck"
zero = { at = "0.0312 mV/V", temperature = "14 degC", lead_temperature = "10 degC ± 1 K" }
shared = ["gauge.gauge_factor", "bridge"]

[channel.a]
like = "strain"
column = "a"

[channel.b]
like = "strain"
column = "b"

[channel.c]
like = "strain"
column = "c"
transverse = { sensitivity = "1.0 % ± 0.2 %", strain_ratio = "-0.285 ± 0.01" }

[channel.deck]
column = "deck"
reads = "ohm"
platinum = { standard = "IEC 60751", r0 = "100 ohm ± 0.05 ohm", class = "A" }
leads = { wires = 2, each = "0.35 ohm ± 0.05 ohm" }
uncertainty = "5 mohm (standard)"

[channel.air]
column = "air"
reads = "V"
thermistor = { r25 = "10 kohm ± 1 %", beta = "3610 K ± 0.5 %" }
circuit = { divider = "12 kohm ± 0.1 %", sensor = "low", supply = "2.048 V ± 0.05 %" }
resolution = "1 mV"

[channel.gradient]
combine = { deck = 1, air = -1 }

[channel.bend]
combine = { a = "0.5 ± 0.01", b = "-0.5 ± 0.01" }

[channel.stress]
of = "c"
output = "MPa"
material = { modulus = "205 GPa ± 2 %" }

[channel.hanger]
column = "code"
reads = "count"
converter = { bits = 24, full_scale = "±2.5 V ± 0.02 V", coding = "signed" }
amplifier = { difference = { input = ["1.5 kohm ± 0.1 %", "1.5 kohm ± 0.1 %"], feedback = ["330 kohm ± 0.1 %", "330 kohm ± 0.1 %"], open_loop_gain = "1e5 ± 50 %" }, offset = "1 mV ± 1 mV" }
gauge = { resistance = "350 ohm", gauge_factor = "2.11 ± 1 %" }
bridge = { arms = ["e", "-nu e", "e", "-nu e"], poisson = "0.285 ± 0.01", supply = { column = "v", reads = "V", uncertainty = "2 mV" }, resistances = ["350 ohm ± 0.1 %", "350.1 ohm ± 0.1 %", "349.9 ohm ± 0.1 %", "350.05 ohm ± 0.1 %"], supply_leads = "1.2 ohm ± 0.1 ohm", signal_leads = ["0.8 ohm ± 0.1 ohm", "0.9 ohm ± 0.1 ohm"] }

[channel.twist]
column = "twist"
reads = "mV/V"
output = "shear microstrain"
gauge = { resistance = "350 ohm", gauge_factor = "2.05 ± 1 %" }
bridge = { arms = ["e", "-e", "e", "-e"] }

[channel.torque]
of = "twist"
load = "torsion"
section = { diameter = "50 mm ± 0.05 mm", bore = "20 mm ± 0.1 mm" }
material = { modulus = "205 GPa ± 2 %", poisson = "0.29 ± 0.01" }

[channel.cell]
column = "cell"
reads = "mV/V"
output = "kN"
transducer = { rated = "2.0137 mV/V ± 0.05 %", capacity = "50 kN ± 0.1 %" }
zero = { at = "0.0100 mV/V ± 0.0004 mV/V" }
resolution = "0.1 uV/V"

[channel.hot]
column = "hot"
reads = "mV"
thermocouple = { type = "K", reference = "deck", class = "1" }
uncertainty = "3 uV (triangular)"

[rosette.R]
grids = { a = "a", b = "b", c = "twin" }
angles = ["0 deg ± 1 deg", "45 deg ± 1 deg", "90 deg ± 1 deg"]
transverse = ["0.4 % ± 0.1 %", "0.6 % ± 0.1 %", "0.4 % ± 0.1 %"]
material = { modulus = "205 GPa ± 2 %", poisson = "0.29 ± 0.01" }
give = ["principal-max", "principal-min", "direction", "shear-max", "strain-x", "shear-xy", "strain 30 deg", "stress-max", "stress-min", "stress-x", "shear-stress-xy", "stress 30 deg", "von-mises", "tresca"]

[channel.twin]
like = "strain"
column = "twin"
"#;
