//! A second zero: how far a channel returned, and the drift between the two.

use std::collections::VecDeque;
use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::{Channel, Column, Engine, Measurement, MeasurementError, Moment};
use crate::chain::{Element, Word};

/// Share of the span between the two zeros by which a temperature may lie outside of it before the drift is `extrapolated`.
const BEYOND: f64 = 0.1;

/// A second stretch of a recording in which a channel should read zero again.
#[derive(Clone, Debug, PartialEq)]
pub struct Again {
    /// Where it is.
    pub window: AgainWindow,
    /// Whether the difference is taken off, and along what.
    pub drift: Option<Drift>,
    /// What was found; `None` until [`Measurement::settle_again`](super::Measurement::settle_again) or an [`AgainPass`].
    pub found: Option<Returned>,
}

/// Where the second zero is.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum AgainWindow {
    /// The last rows of the recording.
    LastRows(u64),
    /// A stretch of time, both ends included.
    Window {
        /// First moment.
        from: Moment,
        /// Last moment.
        to: Moment,
    },
}

/// Along what a drift is taken to be a straight line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Drift {
    /// Time. Before the first zero and behind the second it rests.
    Time,
    /// The channel's temperature.
    Temperature,
}

/// What a channel read at its second zero.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Returned {
    /// Mean of its results there, in its own unit: the return-to-zero difference.
    pub difference: f64,
    /// How many readings that is the mean of.
    pub rows: u64,
    /// Mean time of both zeros, s; NaN where it is not known.
    pub seconds: [f64; 2],
    /// Mean temperature at both zeros, °C; NaN where it is not known.
    pub celsius: [f64; 2],
}

/// Where the first zero was.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ZeroPlace {
    /// Mean time of its readings, s; NaN without time.
    pub seconds: f64,
    /// Mean temperature of the channel there, °C; NaN without one.
    pub celsius: f64,
    /// Its last row, from 0; `None` in another recording.
    pub last_row: Option<u64>,
}

impl Again {
    /// Returns which share of the difference is taken off at a row; NaN where what the drift goes along is not known.
    pub(crate) fn share(&self, seconds: f64, celsius: f64) -> f64 {
        let (Some(drift), Some(found)) = (self.drift, self.found) else { return 0.0 };
        let of = |[from, to]: [f64; 2], at: f64| (at - from) / (to - from);
        match drift {
            Drift::Time => of(found.seconds, seconds).clamp(0.0, 1.0),
            Drift::Temperature => of(found.celsius, celsius),
        }
    }

    /// Takes the drift off results.
    ///
    /// - `seconds`, `celsius`: time and temperature of each row; a row that lacks what the drift goes along has no result.
    pub(super) fn take_off(
        &self,
        seconds: &[f64],
        celsius: &Column,
        start: usize,
        values: &mut [f64],
        words: &mut [Word],
    ) {
        let (Some(drift), Some(found)) = (self.drift, self.found) else { return };
        for (row, (value, word)) in values.iter_mut().zip(words).enumerate().filter(|(_, (v, _))| v.is_finite()) {
            let at = |column: &[f64]| column.get(start + row).copied().unwrap_or(f64::NAN);
            let share = self.share(at(seconds), at(&celsius.values));
            if !share.is_finite() {
                let own =
                    celsius.words.get(start + row).copied().filter(|w| drift == Drift::Temperature && !w.has_number());
                (*value, *word) = (f64::NAN, own.unwrap_or(Word::Missing));
                continue;
            }
            if !(-BEYOND..=1.0 + BEYOND).contains(&share) && *word == Word::Good {
                *word = Word::Extrapolated;
            }
            *value -= found.difference * share;
        }
    }
}

#[derive(Clone, Copy)]
struct Row {
    value: f64,
    word: Word,
    seconds: f64,
    celsius: f64,
}

#[derive(Clone, Default)]
struct Sums {
    /// The last rows so far, of a window of rows.
    last: VecDeque<Row>,
    /// Index of the first row of the window.
    first_row: Option<u64>,
    seen: u64,
    rows: u64,
    value: f64,
    seconds: (f64, u64),
    celsius: (f64, u64),
    words: [u64; Word::ALL.len()],
}

impl Sums {
    fn add(&mut self, row: Row) {
        self.seen += 1;
        if let Some(count) = self.words.get_mut(row.word as usize) {
            *count += 1;
        }
        if !row.value.is_finite() {
            return;
        }
        self.rows += 1;
        self.value += row.value;
        for (sum, at) in [(&mut self.seconds, row.seconds), (&mut self.celsius, row.celsius)] {
            if at.is_finite() {
                *sum = (sum.0 + at, sum.1 + 1);
            }
        }
    }
}

fn mean((sum, count): (f64, u64)) -> f64 {
    if count == 0 { f64::NAN } else { sum / count as f64 }
}

/// Reads the rows of second zeros, once the first ones are settled.
pub struct AgainPass<'m> {
    measurement: &'m Measurement,
    engine: Engine<'m, ()>,
    /// For each channel.
    sums: Vec<Sums>,
    row: u64,
}

impl<'m> AgainPass<'m> {
    /// Returns a pass for the second zeros that this measurement still needs; its first ones are settled.
    ///
    /// # Errors
    /// `MeasurementError::Chain` for a chain that cannot be lowered.
    pub fn new(measurement: &'m Measurement) -> Result<Self, MeasurementError> {
        let sums = std::vec![Sums::default(); measurement.channels.len()];
        Ok(Self { measurement, engine: Engine::new(measurement)?, sums, row: 0 })
    }

    /// Takes the next block, as [`Engine::push`].
    pub fn push(&mut self, seconds: Vec<f64>, inputs: Vec<Column>) {
        self.engine.push(seconds, inputs, ());
        self.drain();
    }

    fn drain(&mut self) {
        while let Some(block) = self.engine.pop() {
            for (i, (channel, sums)) in self.measurement.channels.iter().zip(&mut self.sums).enumerate() {
                let Some(again) = again_of(channel) else { continue };
                let (Some(result), Some([own, ..])) = (block.results.get(i), block.temperatures.get(i)) else {
                    continue;
                };
                for row in 0..block.rows() {
                    let at = |values: &[f64]| values.get(row).copied().unwrap_or(f64::NAN);
                    let seconds = at(&block.seconds);
                    let word = result.words.get(row).copied().unwrap_or(Word::Missing);
                    let row_of = Row { value: at(&result.values), word, seconds, celsius: at(&own.values) };
                    match &again.window {
                        AgainWindow::LastRows(rows) => {
                            if sums.last.len() as u64 >= *rows {
                                sums.last.pop_front();
                            }
                            sums.last.push_back(row_of);
                        }
                        AgainWindow::Window { from, to } => {
                            if from.seconds <= seconds && seconds <= to.seconds {
                                sums.first_row.get_or_insert(self.row + row as u64);
                                sums.add(row_of);
                            }
                        }
                    }
                }
            }
            self.row += block.rows() as u64;
        }
    }

    /// Writes what was found into the measurement that the pass was made for; returns a line of words for each.
    ///
    /// # Errors
    /// `MeasurementError::Again` for a window without a reading that can be converted, one that does not follow the first
    /// zero, and a drift with nothing to go along.
    pub fn finish(mut self) -> Result<Vec<(usize, Returned)>, MeasurementError> {
        self.engine.end();
        self.drain();
        let mut out = Vec::new();
        for (i, (channel, mut sums)) in
            self.measurement.channels.iter().zip(core::mem::take(&mut self.sums)).enumerate()
        {
            let Some(again) = again_of(channel).filter(|a| a.found.is_none()) else { continue };
            let Some(segment) = channel.segments().and_then(|s| s.first()) else { continue };
            let place = match &again.window {
                AgainWindow::Window { from, .. } if sums.seen == 0 => from.place.clone(),
                _ => String::new(),
            };
            let wrong = |reason: String| MeasurementError::Again {
                channel: channel.name.clone(),
                reason,
                place: place.clone(),
            };
            if let AgainWindow::LastRows(_) = again.window {
                sums.first_row = Some(self.row - sums.last.len() as u64);
                for row in core::mem::take(&mut sums.last) {
                    sums.add(row);
                }
            }
            let window = again.window.in_words();
            if sums.rows == 0 {
                let reasons = Word::ALL.iter().zip(sums.words).filter(|(_, n)| *n > 0).map(|(w, n)| format!("{n} {w}"));
                let reasons: Vec<String> = reasons.collect();
                let reasons =
                    if sums.seen == 0 { "the recording has no row there".to_string() } else { reasons.join(", ") };
                return Err(wrong(format!(
                    "no second zero, since no reading in {window} can be converted ({reasons})"
                )));
            }
            let first = segment.zero_place;
            if let (Some(last), Some(row)) = (first.and_then(|f| f.last_row), sums.first_row)
                && row <= last
            {
                return Err(wrong(format!(
                    "the second zero, {window}, begins before the first has ended: the recording has {} rows",
                    self.row
                )));
            }
            let stated = match &segment.chain.element {
                Element::Gauge { zero, .. } | Element::Transducer { zero, .. } => {
                    zero.celsius.filter(|_| segment.zero_temperature_stated)
                }
                _ => None,
            };
            let place = first.unwrap_or(ZeroPlace { seconds: f64::NAN, celsius: f64::NAN, last_row: None });
            let found = Returned {
                difference: sums.value / sums.rows as f64,
                rows: sums.rows,
                seconds: [place.seconds, mean(sums.seconds)],
                celsius: [stated.unwrap_or(place.celsius), mean(sums.celsius)],
            };
            let (what, [from, to], unit) = match again.drift {
                None => ("", [0.0, 1.0], ""),
                Some(Drift::Time) => ("time", found.seconds, "s"),
                Some(Drift::Temperature) => ("temperature", found.celsius, "°C"),
            };
            // noise of a thermometer is no way from one zero to the other
            let least = if again.drift == Some(Drift::Temperature) { 0.1 } else { 0.0 };
            if !((to - from).abs() > least && (again.drift != Some(Drift::Time) || to > from)) {
                return Err(wrong(format!(
                    "its drift cannot be taken off along {what}, which was {} {unit} at the first zero and {} {unit} at the second",
                    figure(from),
                    figure(to)
                )));
            }
            out.push((i, found));
        }
        Ok(out)
    }
}

/// The second zero of a channel, which has one only where it does not change in time.
pub(super) fn again_of(channel: &Channel) -> Option<&Again> {
    channel.segments()?.first()?.again.as_ref()
}

/// Six digits.
fn figure(value: f64) -> String {
    if !value.is_finite() {
        return "not known".to_string();
    }
    let short: f64 = format!("{value:.5e}").parse().unwrap_or(value);
    format!("{}", short + 0.0)
}

impl AgainWindow {
    /// Returns the stretch in words.
    #[must_use]
    pub fn in_words(&self) -> String {
        match self {
            Self::LastRows(rows) => format!("the last {rows} rows"),
            Self::Window { from, to } => format!("the window from {} to {}", from.text, to.text),
        }
    }
}

impl Measurement {
    /// Writes second zeros that an [`AgainPass`] has found into the channels; returns a line of words for each.
    pub fn settle_again(&mut self, found: &[(usize, Returned)]) -> Vec<String> {
        let mut said = Vec::new();
        for (i, returned) in found {
            let Some(channel) = self.channels.get_mut(*i) else { continue };
            let (name, unit) = (channel.name.clone(), channel.unit.clone());
            let Some(again) = channel.segments_mut().and_then(|s| s.first_mut()?.again.as_mut()) else { continue };
            let readings = if returned.rows == 1 { "reading" } else { "readings" };
            let then = match again.drift {
                None => "it stays in the results".to_string(),
                Some(Drift::Time) => {
                    let [from, to] = returned.seconds;
                    format!("it is taken off in proportion to time, over {} s", figure(to - from))
                }
                Some(Drift::Temperature) => {
                    let [from, to] = returned.celsius.map(figure);
                    format!("it is taken off in proportion to temperature, from {from} °C to {to} °C")
                }
            };
            said.push(format!(
                "{name}: {} {unit} at the second zero, mean of {} {readings} in {}; {then}",
                figure(returned.difference),
                returned.rows,
                again.window.in_words()
            ));
            again.found = Some(*returned);
        }
        said
    }

    /// Returns whether some second zero has yet to be read.
    #[must_use]
    pub fn needs_again_pass(&self) -> bool {
        self.channels.iter().filter_map(again_of).any(|again| again.found.is_none())
    }
}
