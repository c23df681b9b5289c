//! Running a measurement over blocks of rows.

use std::collections::VecDeque;
use std::vec::Vec;

use super::channel::late;
use super::paired::Paired;
use super::side::{Ahead, Behind, Between, Sample, samples};
use super::{Channel, Column, Measurement, MeasurementError, Segment, Side, Source, State};
use crate::chain::{Columns, Inputs, Plan, Word};

/// A block of rows with everything computed.
#[derive(Clone, Debug)]
pub struct Converted<P> {
    /// Time of each row, s; empty where the recording has none.
    pub seconds: Vec<f64>,
    /// The recording columns that the channels read.
    pub inputs: Vec<Column>,
    /// The channels, in the order of the sheet.
    pub results: Vec<Column>,
    /// For each channel, rows that merely rest between two samples; empty for a channel with none.
    pub excused: Vec<Vec<bool>>,
    /// For each channel, the temperatures that were used, °C: of the gauge, of the leads, of arms 1-4; empty where one is
    /// not used.
    pub temperatures: Vec<[Column; 6]>,
    /// Whatever the caller sent along.
    pub payload: P,
    /// Time of each row, or that of the last row that has one; empty where no channel changes in time.
    pub(super) held: Vec<f64>,
}

impl<P> Converted<P> {
    /// Returns how many rows the block has.
    #[must_use]
    pub fn rows(&self) -> usize {
        self.inputs.first().map_or(self.seconds.len(), |c| c.values.len())
    }
}

impl<P> Converted<P> {
    /// Returns what a channel is at a row; `None` where it has no number there.
    #[must_use]
    pub fn state(&self, measurement: &Measurement, channel: usize, row: usize) -> Option<State> {
        let at = |column: &Column| column.values.get(row).copied().unwrap_or(f64::NAN);
        let value = self.results.get(channel).map(at).filter(|v| v.is_finite())?;
        let Some(segments) = measurement.channels.get(channel)?.segments() else {
            return Some(State { value, inputs: Inputs::default(), segment: 0 });
        };
        let held = self.held.get(row).copied().unwrap_or(f64::NEG_INFINITY);
        let segment = if segments.len() > 1 { in_force(segments, held) } else { 0 };
        let own = segments.get(segment)?;
        let [celsius, lead_celsius, a, b, c, d] = self.temperatures.get(channel)?.each_ref().map(at);
        let together = |first: Option<usize>, second: Option<Paired>| {
            let value = |input: usize| self.inputs.get(input).map_or(f64::NAN, at);
            let first = first.map_or(f64::NAN, value);
            second.map_or(first, |Paired { input, how }| how.together(first, value(input)))
        };
        let inputs = Inputs {
            reading: together(Some(own.reading), own.paired),
            supply: together(own.supply, own.supply_paired),
            celsius,
            lead_celsius,
            arm_celsius: [a, b, c, d],
        };
        Some(State { value, inputs, segment })
    }
}

/// One place where a side channel is used.
struct Track {
    side: Side,
    /// What lies before the oldest waiting block.
    before: Option<Behind>,
}

/// Runs a measurement block by block; blocks come out in the order they went in, once all their rows can be computed.
pub struct Engine<'m, P> {
    measurement: &'m Measurement,
    plans: Vec<Vec<Plan>>,
    late: Vec<bool>,
    tracks: Vec<Track>,
    waiting: VecDeque<Converted<P>>,
    ended: bool,
    /// Whether some channel changes in time.
    changes: bool,
    /// Time of the last row that has one.
    clock: f64,
    scratch: Scratch,
}

#[derive(Default)]
struct Scratch {
    readings: Vec<f64>,
    words: Vec<Word>,
}

impl<'m, P> Engine<'m, P> {
    /// Returns an engine for this measurement.
    ///
    /// # Errors
    /// `MeasurementError::Chain` for a chain that cannot be lowered.
    pub fn new(measurement: &'m Measurement) -> Result<Self, MeasurementError> {
        Self::with(measurement, |segment| segment.chain)
    }

    /// The same with zeros that merely let every reading through.
    pub(super) fn provisional(measurement: &'m Measurement) -> Result<Self, MeasurementError> {
        Self::with(measurement, Segment::provisional)
    }

    fn with(
        measurement: &'m Measurement,
        chain: impl Fn(&Segment) -> crate::chain::Chain,
    ) -> Result<Self, MeasurementError> {
        let mut plans = Vec::with_capacity(measurement.channels.len());
        let mut tracks: Vec<Track> = Vec::new();
        for channel in &measurement.channels {
            let mut own = Vec::new();
            for segment in channel.segments().into_iter().flatten() {
                let plan = chain(segment)
                    .plan()
                    .map_err(|error| MeasurementError::Chain { channel: channel.name.clone(), error })?;
                own.push(plan);
                for side in segment.sides().into_iter().flatten() {
                    if !tracks.iter().any(|t| t.side == *side) {
                        tracks.push(Track { side: side.clone(), before: None });
                    }
                }
            }
            plans.push(own);
        }
        Ok(Self {
            measurement,
            plans,
            late: late(&measurement.channels, &measurement.order),
            tracks,
            waiting: VecDeque::new(),
            ended: false,
            changes: measurement.channels.iter().filter_map(Channel::segments).any(|s| s.len() > 1),
            clock: f64::NEG_INFINITY,
            scratch: Scratch::default(),
        })
    }

    /// Takes the next block: time of each row (empty where there is none), and the input columns in their order.
    pub fn push(&mut self, seconds: Vec<f64>, inputs: Vec<Column>, payload: P) {
        let channels = self.measurement.channels.len();
        let mut held = Vec::new();
        if self.changes {
            // a row without a time keeps what is in force
            held.extend(seconds.iter().map(|t| {
                self.clock = if t.is_finite() { *t } else { self.clock };
                self.clock
            }));
        }
        let mut block = Converted {
            seconds,
            inputs,
            results: std::vec![Column::default(); channels],
            excused: std::vec![Vec::new(); channels],
            temperatures: std::vec![Default::default(); channels],
            payload,
            held,
        };
        self.compute(&mut block, false);
        self.waiting.push_back(block);
    }

    /// Says that no block follows.
    pub fn end(&mut self) {
        self.ended = true;
    }

    /// Returns how many rows wait for a later sample.
    #[must_use]
    pub fn waiting_rows(&self) -> usize {
        self.waiting.iter().map(Converted::rows).sum()
    }

    /// Returns the next block whose rows can all be computed.
    pub fn pop(&mut self) -> Option<Converted<P>> {
        if !self.ended && !self.tracks.iter().all(|track| self.settled(track)) {
            return None;
        }
        let mut block = self.waiting.pop_front()?;
        let rows = block.rows();
        let mut sides = Vec::with_capacity(self.tracks.len());
        for track in &mut self.tracks {
            let id = track.side.channel;
            let after = ahead(&self.waiting, id);
            let (Some(own), Some(excused)) = (block.results.get(id), block.excused.get_mut(id)) else { continue };
            excused.resize(rows, false);
            sides.push(track.side.at_rows(&block.seconds, own, track.before, after, excused));
            track.before = Behind::after(track.before, &block.seconds, own);
        }
        for (i, channel) in self.measurement.channels.iter().enumerate() {
            if let (Some(segments), Some(slot)) = (channel.segments(), block.temperatures.get_mut(i)) {
                *slot = temperatures(&self.tracks, &sides, segments, &block.held, rows);
            }
        }
        self.compute(&mut block, true);
        // a sum or stress of a slow channel rests where the channel rests
        for &i in &self.measurement.order {
            if let Some(channel) = self.measurement.channels.get(i) {
                inherit_rest(channel, i, &mut block);
            }
        }
        Some(block)
    }

    /// Whether every row of the oldest block has the sample that follows it, or can do without.
    fn settled(&self, track: &Track) -> bool {
        let Some(oldest) = self.waiting.front() else { return false };
        let id = track.side.channel;
        let Some(own) = oldest.results.get(id) else { return true };
        let last_here = samples(&oldest.seconds, own).next_back();
        let ends_in_sample =
            own.values.last().is_some_and(|v| v.is_finite()) && oldest.seconds.last().is_some_and(|t| t.is_finite());
        if track.side.between == Between::Last || ends_in_sample {
            return true;
        }
        let Some(known) = last_here.or(track.before.map(|b| b.sample)) else {
            // nothing to draw a line from: these rows are missing whatever follows
            return true;
        };
        let mut later = self.waiting.iter().skip(1);
        later.any(|block| {
            let sampled = block.results.get(id).is_some_and(|c| samples(&block.seconds, c).next().is_some());
            let newest = block.seconds.iter().rev().find(|t| t.is_finite());
            sampled || newest.is_some_and(|t| *t - known.seconds > track.side.longest_gap)
        })
    }

    /// Computes the channels that can be computed at once, or those that had to wait.
    fn compute(&mut self, block: &mut Converted<P>, waited: bool) {
        for &i in &self.measurement.order {
            if self.late.get(i) != Some(&waited) {
                continue;
            }
            let (Some(channel), Some(plans)) = (self.measurement.channels.get(i), self.plans.get(i)) else { continue };
            let column = match &channel.source {
                Source::Reading(segments) => {
                    let empty = Default::default();
                    let celsius = block.temperatures.get(i).unwrap_or(&empty);
                    read(segments, plans, block, celsius, &mut self.scratch)
                }
                Source::Combination(terms) => combine(terms, &block.results, block.rows()),
                Source::Stress { of, factor, .. } => combine(&[(*of, *factor)], &block.results, block.rows()),
                Source::Rosette(rosette) => rosette.compute(&block.results, block.rows()),
            };
            if let Some(slot) = block.results.get_mut(i) {
                *slot = column;
            }
        }
    }
}

fn inherit_rest<P>(channel: &Channel, i: usize, block: &mut Converted<P>) {
    let feeders: Vec<usize> = match &channel.source {
        Source::Reading(_) => return,
        Source::Combination(terms) => terms.iter().map(|(c, _)| *c).collect(),
        Source::Stress { of, .. } => std::vec![*of],
        Source::Rosette(rosette) => rosette.feeders(),
    };
    let mut excused = std::vec![false; block.rows()];
    for feeder in feeders {
        let rest = block.excused.get(feeder).map_or(&[][..], Vec::as_slice);
        excused.iter_mut().zip(rest).for_each(|(flag, rests)| *flag |= *rests);
    }
    if excused.contains(&true)
        && let Some(slot) = block.excused.get_mut(i)
    {
        *slot = excused;
    }
}

/// The next sample of a channel in these blocks.
fn ahead<P>(blocks: &VecDeque<Converted<P>>, id: usize) -> Option<Ahead> {
    let mut latest = f64::NEG_INFINITY;
    for block in blocks {
        let column = block.results.get(id)?;
        for (t, v) in block.seconds.iter().zip(&column.values).filter(|(t, _)| t.is_finite()) {
            latest = latest.max(*t);
            if v.is_finite() {
                return Some(Ahead { sample: Sample { seconds: *t, value: *v }, latest });
            }
        }
    }
    None
}

/// Which segment is in force at each row, as stretches of equal index.
fn stretches(segments: &[Segment], held: &[f64], rows: usize) -> Vec<(usize, usize, usize)> {
    if segments.len() == 1 {
        return std::vec![(0, 0, rows)];
    }
    let mut out: Vec<(usize, usize, usize)> = Vec::new();
    for row in 0..rows {
        let time = held.get(row).copied().unwrap_or(f64::NEG_INFINITY);
        let index = in_force(segments, time);
        match out.last_mut() {
            Some((same, _, end)) if *same == index => *end = row + 1,
            _ => out.push((index, row, row + 1)),
        }
    }
    out
}

/// The last segment that has begun.
pub(super) fn in_force(segments: &[Segment], time: f64) -> usize {
    segments.iter().rposition(|s| s.starts_at() <= time).unwrap_or(0)
}

fn temperatures(tracks: &[Track], sides: &[Column], segments: &[Segment], held: &[f64], rows: usize) -> [Column; 6] {
    let mut all: [Column; 6] = Default::default();
    for (index, start, end) in stretches(segments, held, rows) {
        let Some(segment) = segments.get(index) else { continue };
        for (out, side) in all.iter_mut().zip(segment.sides()) {
            let place = side.and_then(|side| tracks.iter().position(|t| t.side == *side));
            let Some(column) = place.and_then(|k| sides.get(k)) else { continue };
            if out.values.is_empty() {
                *out = Column::missing(rows);
            }
            copy(&mut out.values, &column.values, start, end);
            copy(&mut out.words, &column.words, start, end);
        }
    }
    all
}

fn copy<T: Copy>(to: &mut [T], from: &[T], start: usize, end: usize) {
    if let (Some(to), Some(from)) = (to.get_mut(start..end), from.get(start..end)) {
        to.copy_from_slice(from);
    }
}

/// Readings through the chain of the segment in force.
fn read<P>(
    segments: &[Segment],
    plans: &[Plan],
    block: &Converted<P>,
    temperatures: &[Column; 6],
    scratch: &mut Scratch,
) -> Column {
    let rows = block.rows();
    let mut out = Column::missing(rows);
    for (index, start, end) in stretches(segments, &block.held, rows) {
        let (Some(segment), Some(plan)) = (segments.get(index), plans.get(index)) else { continue };
        let Some(reading) = block.inputs.get(segment.reading) else { continue };
        let supply = segment.supply.and_then(|s| block.inputs.get(s));
        let part = |column: &Column| -> (Vec<f64>, Vec<Word>) {
            (
                column.values.get(start..end).unwrap_or(&[]).to_vec(),
                column.words.get(start..end).unwrap_or(&[]).to_vec(),
            )
        };
        let paired = |first: &mut (Vec<f64>, Vec<Word>), paired: Option<Paired>| {
            if let Some(Paired { input, how }) = paired {
                how.put(first, &block.inputs.get(input).map(part).unwrap_or_default());
            }
        };
        let mut first = part(reading);
        paired(&mut first, segment.paired);
        let (readings, reading_words) = first;
        // a supply that the chain does not divide by does not count
        let mut first = supply.filter(|_| plan.uses_supply()).map(part).unwrap_or_default();
        paired(&mut first, segment.supply_paired.filter(|_| plan.uses_supply()));
        let (supplies, supply_words) = first;
        let [a1, a2, a3, a4] = plan.uses_arm_temperatures();
        let uses = [plan.uses_temperature(), plan.uses_lead_temperature(), a1, a2, a3, a4];
        let mut parts: [(Vec<f64>, Vec<Word>); 6] = Default::default();
        for ((slot, column), used) in parts.iter_mut().zip(temperatures).zip(uses) {
            if used {
                *slot = part(column);
            }
        }
        let [gauge, leads, arm1, arm2, arm3, arm4] = &parts;
        scratch.readings.clear();
        scratch.readings.resize(end - start, f64::NAN);
        scratch.words.clear();
        scratch.words.resize(end - start, Word::Good);
        let columns = Columns {
            readings: &readings,
            supplies: &supplies,
            celsius: &gauge.0,
            lead_celsius: &leads.0,
            arm_celsius: [&arm1.0, &arm2.0, &arm3.0, &arm4.0],
        };
        if plan.slice(&columns, &mut scratch.readings, Some(&mut scratch.words)).is_err() {
            // a side column that is not there at all: the rows stay missing
            continue;
        }
        // what the text said of an input goes before what the chain says of its NaN; the reading's own word, also that
        // of an end code or a limit, goes before those of supply and temperature
        let others = parts.iter().map(|(_, words)| (words, false));
        for (words, own) in others.chain([(&supply_words, false), (&reading_words, true)]) {
            for ((word, value), input) in scratch.words.iter_mut().zip(&mut scratch.readings).zip(words) {
                if !input.has_number() && (own || *word == Word::Missing) {
                    (*word, *value) = (*input, f64::NAN);
                } else if input.has_number() && *input != Word::Good && *word == Word::Good {
                    *word = *input;
                }
            }
        }
        if let Some(again) = &segment.again {
            let [own, ..] = temperatures;
            again.take_off(&block.seconds, own, start, &mut scratch.readings, &mut scratch.words);
        }
        if let Some(to) = out.values.get_mut(start..end) {
            to.copy_from_slice(&scratch.readings);
        }
        if let Some(to) = out.words.get_mut(start..end) {
            to.copy_from_slice(&scratch.words);
        }
    }
    out
}

/// Σ weight · channel in the order of the sheet; the first word that is not good stands for the sum.
fn combine(terms: &[(usize, f64)], results: &[Column], rows: usize) -> Column {
    let mut out = Column { values: std::vec![0.0; rows], words: std::vec![Word::Good; rows] };
    for (channel, weight) in terms {
        let Some(column) = results.get(*channel) else { return Column::missing(rows) };
        for ((value, word), (v, w)) in
            out.values.iter_mut().zip(&mut out.words).zip(column.values.iter().zip(&column.words))
        {
            *value += weight * v;
            if *word == Word::Good || (word.has_number() && !w.has_number()) {
                *word = *w;
            }
        }
    }
    for (value, word) in out.values.iter_mut().zip(&out.words) {
        if !word.has_number() {
            *value = f64::NAN;
        }
    }
    out
}
