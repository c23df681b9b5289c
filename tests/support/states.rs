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
