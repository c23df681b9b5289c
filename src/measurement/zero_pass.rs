//! Zeros that are means over rows or a time window: output over supply, never strain(reading − zero reading).

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::engine::in_force;
use super::{Channel, Column, Engine, Measurement, MeasurementError, Scatter, Source, ZeroPlace, ZeroSource};
use crate::chain::{Inputs, Temperature, Word};

#[derive(Clone, Copy, Default)]
struct Sums {
    rows: u64,
    ratio: f64,
    /// Mean so far and sum of squares about it.
    mean: f64,
    squares: f64,
    /// Of the gauge, of the leads, of arms 1-4.
    celsius: [f64; 6],
    /// Rows of the window, also those without a number.
    seen: u64,
    /// Rows with each word, by its number.
    words: [u64; Word::ALL.len()],
    /// Rows without a temperature that the conversion needs.
    cold: u64,
    /// Rows within the shunt step of the channel.
    shunted: u64,
    /// Time and temperature of the gauge in the rows that have them, and how many have.
    place: [(f64, u64); 2],
    /// Last row that counted, from 0.
    last_row: u64,
}

/// Reads the rows that zeros are taken from, before the conversion proper.
pub struct ZeroPass<'m> {
    measurement: &'m Measurement,
    engine: Engine<'m, ()>,
    /// For each channel, for each segment.
    sums: Vec<Vec<Sums>>,
    row: u64,
    latest: f64,
}

impl<'m> ZeroPass<'m> {
    /// Returns a pass for the zeros that this measurement still needs.
    ///
    /// # Errors
    /// `MeasurementError::Chain` for a chain that cannot be lowered.
    pub fn new(measurement: &'m Measurement) -> Result<Self, MeasurementError> {
        let sums =
            measurement.channels.iter().map(|c| std::vec![Sums::default(); c.segments().map_or(0, Vec::len)]).collect();
        Ok(Self { measurement, engine: Engine::provisional(measurement)?, sums, row: 0, latest: f64::NEG_INFINITY })
    }

    /// Takes the next block, as [`Engine::push`].
    pub fn push(&mut self, seconds: Vec<f64>, inputs: Vec<Column>) {
        self.engine.push(seconds, inputs, ());
        self.drain();
    }

    /// Returns whether no later row can matter.
    #[must_use]
    pub fn is_done(&self) -> bool {
        let segments = self.measurement.channels.iter().map(Channel::segments);
        let each = segments.zip(&self.sums).flat_map(|(segments, sums)| segments.into_iter().flatten().zip(sums));
        each.into_iter().all(|(s, sum)| match &s.zero {
            ZeroSource::Stated => true,
            ZeroSource::Rows(rows) => self.row >= *rows,
            ZeroSource::RowsFrom { rows, .. } => sum.seen >= *rows,
            ZeroSource::Window { to, .. } => self.latest > to.seconds,
        })
    }

    /// Returns the zeros: for each channel and segment the mean of output over supply, the mean temperature and the
    /// number of rows.
    ///
    /// # Errors
    /// `MeasurementError::NoZero` for a window without a single reading that can be converted.
    pub fn finish(mut self) -> Result<Zeros, MeasurementError> {
        self.engine.end();
        self.drain();
        let mut found = Vec::new();
        for (i, (channel, sums)) in self.measurement.channels.iter().zip(&self.sums).enumerate() {
            for (k, (segment, sum)) in channel.segments().into_iter().flatten().zip(sums).enumerate() {
                if segment.zero == ZeroSource::Stated {
                    continue;
                }
                let mut steps = channel.segments().into_iter().flatten().filter_map(|s| s.shunt.as_ref());
                if let Some(step) = steps.next_back().filter(|_| sum.shunted > 0) {
                    return Err(MeasurementError::ShuntedZero {
                        channel: channel.name.clone(),
                        window: in_words(&segment.zero),
                        rows: sum.shunted,
                        step: format!("from {} to {}", step.from.text, step.to.text),
                        place: step.from.place.clone(),
                    });
                }
                if sum.rows == 0 {
                    return Err(MeasurementError::NoZero {
                        channel: channel.name.clone(),
                        window: in_words(&segment.zero),
                        reasons: sum.reasons(),
                        place: match &segment.zero {
                            ZeroSource::Window { from, .. } | ZeroSource::RowsFrom { from, .. } if sum.seen == 0 => {
                                from.place.clone()
                            }
                            _ => String::new(),
                        },
                    });
                }
                let rows = sum.rows as f64;
                let mut celsius = [None; 6];
                for ((slot, sum), side) in celsius.iter_mut().zip(sum.celsius).zip(segment.sides()) {
                    *slot = side.map(|_| sum / rows).filter(|t| t.is_finite());
                }
                if let Temperature::Fixed(t) = segment.chain.temperature {
                    celsius[0] = Some(t);
                }
                found.push(Zero {
                    channel: i,
                    segment: k,
                    ratio: sum.ratio / rows,
                    scatter: sum.scatter(),
                    celsius,
                    rows: sum.rows,
                    seen: sum.seen,
                    place: sum.place(),
                });
            }
        }
        Ok(Zeros(found))
    }

    fn drain(&mut self) {
        while let Some(block) = self.engine.pop() {
            let rows = block.rows();
            for (i, channel) in self.measurement.channels.iter().enumerate() {
                let Some(segments) = channel.segments() else { continue };
                let (Some(result), Some(temperatures), Some(sums)) =
                    (block.results.get(i), block.temperatures.get(i), self.sums.get_mut(i))
                else {
                    continue;
                };
                for row in 0..rows {
                    let time = block.seconds.get(row).copied().unwrap_or(f64::NAN);
                    let at = |column: &Column| column.values.get(row).copied().unwrap_or(f64::NAN);
                    for (k, segment) in segments.iter().enumerate() {
                        let inside = match &segment.zero {
                            ZeroSource::Stated => false,
                            ZeroSource::Rows(n) => self.row + (row as u64) < *n,
                            ZeroSource::RowsFrom { from, rows } => {
                                from.seconds <= time && sums.get(k).is_some_and(|s| s.seen < *rows)
                            }
                            ZeroSource::Window { from, to } => from.seconds <= time && time <= to.seconds,
                        };
                        let Some(sum) = sums.get_mut(k).filter(|_| inside) else { continue };
                        sum.seen += 1;
                        let mut steps = segments.iter().filter_map(|s| s.shunt.as_ref());
                        sum.shunted += u64::from(steps.any(|s| s.from.seconds <= time && time <= s.to.seconds));
                        let sides = temperatures.iter().zip(segment.sides());
                        if sides.into_iter().any(|(t, side)| side.is_some() && at(t).is_nan()) {
                            sum.cold += 1;
                        }
                        let word = result.words.get(row).copied().unwrap_or(Word::Missing);
                        if let Some(count) = sum.words.get_mut(word as usize) {
                            *count += 1;
                        }
                        if !result.values.get(row).is_some_and(|v| v.is_finite()) {
                            continue;
                        }
                        // the circuit in force at this row gives output over supply
                        let held = block.held.get(row).copied().unwrap_or(f64::NEG_INFINITY);
                        let force = segments.get(in_force(segments, held)).unwrap_or(segment);
                        let inputs = Inputs {
                            reading: block.inputs.get(force.reading).map_or(f64::NAN, at),
                            supply: force.supply.and_then(|s| block.inputs.get(s)).map_or(1.0, at),
                            ..Inputs::default()
                        };
                        let Ok(ratio) = force.chain.network_output(&inputs) else { continue };
                        sum.rows += 1;
                        sum.ratio += ratio;
                        sum.last_row = self.row + row as u64;
                        let own = temperatures.first().map_or(f64::NAN, at);
                        for (place, at) in sum.place.iter_mut().zip([time, own]).filter(|(_, at)| at.is_finite()) {
                            *place = (place.0 + at, place.1 + 1);
                        }
                        // squares about the mean so far, without cancellation
                        let from_mean = ratio - sum.mean;
                        sum.mean += from_mean / sum.rows as f64;
                        sum.squares += from_mean * (ratio - sum.mean);
                        for (sum, column) in sum.celsius.iter_mut().zip(temperatures) {
                            *sum += at(column);
                        }
                    }
                }
            }
            self.row += rows as u64;
            self.latest = block.seconds.iter().copied().filter(|t| t.is_finite()).fold(self.latest, f64::max);
        }
    }
}

impl Sums {
    /// How the readings scattered.
    fn scatter(&self) -> Option<Scatter> {
        let freedom = self.rows.checked_sub(1).filter(|n| *n > 0)?;
        Some(Scatter { ratio: crate::math::sqrt(self.squares / freedom as f64), rows: self.rows })
    }

    /// Where the readings were.
    fn place(&self) -> ZeroPlace {
        let [seconds, celsius] = self.place.map(|(sum, count)| if count == 0 { f64::NAN } else { sum / count as f64 });
        ZeroPlace { seconds, celsius, last_row: Some(self.last_row) }
    }

    /// Why none of the rows can be converted.
    fn reasons(&self) -> String {
        if self.seen == 0 {
            return "the recording has no row there".to_string();
        }
        if self.cold == self.seen {
            return format!("{} rows, all without the temperature that the conversion needs", self.seen);
        }
        let counts = Word::ALL.iter().zip(self.words).filter(|(_, n)| *n > 0);
        let words: Vec<String> = counts.map(|(word, n)| format!("{n} {word}")).collect();
        words.join(", ")
    }
}

fn in_words(zero: &ZeroSource) -> String {
    match zero {
        ZeroSource::Stated => "the stated zero".to_string(),
        ZeroSource::Rows(rows) => format!("the first {rows} rows"),
        ZeroSource::RowsFrom { from, rows } => format!("the first {rows} rows from {} on", from.text),
        ZeroSource::Window { from, to } => format!("the window from {} to {}", from.text, to.text),
    }
}

struct Zero {
    channel: usize,
    segment: usize,
    ratio: f64,
    scatter: Option<Scatter>,
    celsius: [Option<f64>; 6],
    rows: u64,
    seen: u64,
    place: ZeroPlace,
}

/// Zeros that a pass has found.
pub struct Zeros(Vec<Zero>);

/// The channels whose zero comes from another recording, each with one of its stretches alone.
pub struct ZerosElsewhere {
    /// Which stretch.
    segment: usize,
    /// Those channels.
    pub measurement: Measurement,
    /// Which of the input columns they and their temperatures need.
    pub needed: Vec<bool>,
}

impl ZerosElsewhere {
    /// Returns what reads the zeros of this file: one for each stretch that takes one from there.
    #[must_use]
    pub fn of(measurement: &Measurement, file: &str) -> Vec<Self> {
        let most = measurement.channels.iter().filter_map(Channel::segments).map(Vec::len).max().unwrap_or(0);
        let mut out = Vec::new();
        for segment in 0..most {
            let mut own = measurement.clone();
            let mut open = Vec::new();
            for (i, channel) in own.channels.iter_mut().enumerate() {
                let Some(segments) = channel.segments_mut() else { continue };
                let at = segment.min(segments.len().saturating_sub(1));
                // a zero that a change goes on with was read by the circuit before it
                let same = |i: &usize| {
                    let zero = |i: usize| segments.get(i).map(|s| (&s.zero, &s.zero_file));
                    (*i..=at).all(|k| zero(k) == zero(at))
                };
                let read_by = (0..=at).find(same).unwrap_or(at);
                let Some(mut one) = segments.get(read_by).cloned() else { continue };
                one.from = None;
                one.shunt = None;
                one.again = None;
                if at == segment && one.zero != ZeroSource::Stated && one.zero_file.as_deref() == Some(file) {
                    open.push(i);
                } else {
                    one.zero = ZeroSource::Stated;
                }
                *segments = std::vec![one];
            }
            if open.is_empty() {
                continue;
            }
            let mut needed = std::vec![false; own.inputs.len()];
            let mut seen = std::vec![false; own.channels.len()];
            while let Some(i) = open.pop() {
                let (Some(channel), Some(flag)) = (own.channels.get(i), seen.get_mut(i)) else { continue };
                if core::mem::replace(flag, true) {
                    continue;
                }
                open.extend(channel.feeders());
                if let Source::Reading(segments) = &channel.source {
                    for input in segments.iter().flat_map(|s| s.inputs()) {
                        needed.get_mut(input).into_iter().for_each(|n| *n = true);
                    }
                }
            }
            out.push(Self { segment, measurement: own, needed });
        }
        out
    }

    /// Writes the zeros that were found into the whole measurement; returns a line of words for each.
    pub fn settle(&self, zeros: Zeros, file: &str, whole: &mut Measurement) -> Vec<String> {
        let found = zeros.0.into_iter().map(|zero| Zero {
            segment: self.segment,
            place: ZeroPlace { seconds: f64::NAN, last_row: None, ..zero.place },
            ..zero
        });
        Zeros(found.collect()).write(whole, &format!(" of {file}"))
    }
}

impl Zeros {
    /// Writes the zeros into the chains of the measurement that they were found for; returns a line of words for each.
    pub fn settle(&self, measurement: &mut Measurement) -> Vec<String> {
        self.write(measurement, "")
    }

    fn write(&self, measurement: &mut Measurement, of: &str) -> Vec<String> {
        let mut said = Vec::new();
        for zero in &self.0 {
            let Some(channel) = measurement.channels.get_mut(zero.channel) else { continue };
            let name = channel.name.clone();
            let Some(segment) = channel.segments_mut().and_then(|s| s.get_mut(zero.segment)) else { continue };
            let window = in_words(&segment.zero);
            let short = match segment.zero {
                ZeroSource::Rows(wanted) | ZeroSource::RowsFrom { rows: wanted, .. } if zero.seen < wanted => {
                    format!(", of which the recording has only {}", zero.seen)
                }
                _ => String::new(),
            };
            let readings = if zero.rows == 1 { "reading" } else { "readings" };
            let mut at = String::new();
            let [gauge, leads, arms @ ..] = zero.celsius;
            let arms = arms.iter().zip(1..).map(|(t, n)| (*t, format!(", arm {n} at")));
            let places = [(gauge, ", at".to_string()), (leads, ", leads at".to_string())];
            for (t, place) in places.into_iter().chain(arms) {
                if let Some(t) = t {
                    at.push_str(&format!("{place} {t:.3} °C"));
                }
            }
            said.push(format!(
                "{name}: zero {:.6} mV/V, mean of {} {readings} in {window}{of}{short}{at}",
                // no sign before a zero
                (zero.ratio * 1e9).round() / 1e6 + 0.0,
                zero.rows
            ));
            segment.set_zero(zero.ratio, zero.celsius, zero.scatter);
            segment.zero_place = Some(zero.place);
        }
        said
    }
}
