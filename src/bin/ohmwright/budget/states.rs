//! What every channel that goes into a result is, from what was typed.

use std::io::Write;

use ohmwright::chain::Inputs;
use ohmwright::measurement::{Source, State};
use ohmwright::sheet::Sheet;

use crate::args::{Budget as Args, With};
use crate::failure::Failure;
use crate::side::{Alone, takes};

/// States of the channels that a result is made of, from what was typed.
pub(super) struct States<'a> {
    pub(super) sheet: Sheet,
    pub(super) args: &'a Args,
    pub(super) found: Vec<Option<State>>,
    /// Channels that words of `--with` can be for.
    readers: Vec<usize>,
    pub(super) notes: Vec<String>,
    /// The only channel with a reading, where `--at` names none.
    only: Option<usize>,
    used: Vec<bool>,
}

impl<'a> States<'a> {
    pub(super) fn new(sheet: &Sheet, args: &'a Args, index: usize) -> Result<Self, Failure> {
        let mut readers = Vec::new();
        reading_channels(sheet, index, &mut readers);
        let only = match readers.as_slice() {
            [only] => Some(*only),
            _ => None,
        };
        let found = vec![None; sheet.measurement.channels.len()];
        let used = vec![false; args.at.len()];
        Ok(Self { sheet: sheet.clone(), args, found, readers, notes: Vec::new(), only, used })
    }

    pub(super) fn name(&self, channel: usize) -> &str {
        self.sheet.measurement.channels.get(channel).map_or("", |c| c.name.as_str())
    }

    /// The reading that was typed for a channel.
    pub(super) fn reading(&mut self, channel: usize) -> Result<f64, Failure> {
        let name = self.name(channel).to_string();
        for (place, word) in self.args.at.iter().enumerate() {
            let text = match word.split_once('=') {
                Some((named, text)) if named.trim() == name => text,
                None if self.only == Some(channel) => word,
                _ => continue,
            };
            if let Some(used) = self.used.get_mut(place) {
                *used = true;
            }
            return self.sheet.reading(channel, text.trim()).map_err(Failure::error);
        }
        Err(Failure::error(format!("the reading of channel '{name}' is missing: give it by --at {name}=READING")))
    }

    /// Words of `--with` that mean something for a channel.
    pub(super) fn words(&self, channel: usize) -> With {
        let for_it = |word: &&String| takes(&self.sheet, channel, word);
        With { with: self.args.with.with.iter().filter(for_it).cloned().collect() }
    }

    pub(super) fn resolve(&mut self, channel: usize) -> Result<(), Failure> {
        if self.found.get(channel).is_some_and(Option::is_some) {
            return Ok(());
        }
        let source = self.sheet.measurement.channels.get(channel).map(|c| c.source.clone());
        let below: Vec<usize> = match &source {
            Some(Source::Combination(terms)) => terms.iter().map(|(c, _)| *c).collect(),
            Some(Source::Stress { of, .. }) => vec![*of],
            Some(Source::Rosette(rosette)) => rosette.each_grid().iter().map(|(c, ..)| *c).collect(),
            _ => Vec::new(),
        };
        for channel in &below {
            self.resolve(*channel)?;
        }
        if !below.is_empty() {
            return Ok(());
        }
        let reading = self.reading(channel)?;
        let alone = Alone::new(&self.sheet, channel, &self.words(channel))?;
        self.notes.extend(alone.notes().iter().cloned());
        let inputs = Inputs { reading, ..alone.inputs };
        let outcome = alone.plan.one(inputs);
        if !outcome.word.has_number() {
            return Err(Failure::error(format!("channel '{}': this reading is {}", self.name(channel), outcome.word)));
        }
        self.keep(channel, &alone, State { value: outcome.value, inputs, segment: 0 });
        // the temperatures that stand beside it
        let sides: Vec<(usize, f64)> = self
            .sheet
            .measurement
            .channels
            .get(channel)
            .and_then(|c| c.segments())
            .and_then(|s| s.first())
            .map(|s| {
                let [a, b, c, d] = inputs.arm_celsius;
                let celsius = [inputs.celsius, inputs.lead_celsius, a, b, c, d];
                let sides = s.sides().into_iter().zip(celsius);
                sides
                    .filter_map(|(side, t)| {
                        side.map(|side| (side.channel, (t - side.to_celsius.1) / side.to_celsius.0))
                    })
                    .collect()
            })
            .unwrap_or_default();
        for (side, value) in sides {
            self.side(side, value)?;
        }
        Ok(())
    }

    /// A temperature that was typed, as the reading that its channel must have had.
    pub(super) fn side(&mut self, channel: usize, value: f64) -> Result<(), Failure> {
        if self.found.get(channel).is_some_and(Option::is_some) {
            return Ok(());
        }
        if self.sheet.measurement.channels.get(channel).is_some_and(|c| c.segments().is_none()) {
            return Err(Failure::error(format!(
                "channel '{}' is a temperature that is computed from others: its uncertainty is not followed here",
                self.name(channel)
            )));
        }
        let alone = Alone::new(&self.sheet, channel, &self.words(channel))?;
        let reading = alone
            .plan
            .forward(value, alone.inputs)
            .map_err(|_| Failure::error(format!("channel '{}': no reading stands for {value}", self.name(channel))))?;
        let inputs = Inputs { reading, ..alone.inputs };
        self.readers.push(channel);
        self.keep(channel, &alone, State { value, inputs, segment: 0 });
        Ok(())
    }

    /// Keeps a state, and the chain with what was typed of its zero.
    pub(super) fn keep(&mut self, channel: usize, alone: &Alone, state: State) {
        if let Some(own) = self.sheet.measurement.channels.get_mut(channel)
            && let Source::Reading(segments) = &mut own.source
            && let Some(segment) = segments.first_mut()
        {
            segment.chain = alone.chain;
        }
        if let Some(slot) = self.found.get_mut(channel) {
            *slot = Some(state);
        }
    }

    /// A word that no channel takes is an error, as everywhere.
    pub(super) fn check_words(&self) -> Result<(), Failure> {
        for word in &self.args.with.with {
            if !self.readers.iter().any(|c| takes(&self.sheet, *c, word)) {
                let first = self.readers.first().copied().unwrap_or_default();
                // says what is wrong with it
                Alone::new(&self.sheet, first, &With { with: vec![word.clone()] })?;
            }
        }
        if let Some((word, _)) = self.args.at.iter().zip(&self.used).find(|(_, used)| !**used) {
            let names: Vec<&str> = self.readers.iter().map(|c| self.name(*c)).collect();
            return Err(Failure::error(format!(
                "--at {word}: this result is made of readings of {}: give each by NAME=READING",
                names.join(", ")
            )));
        }
        Ok(())
    }

    pub(super) fn tell_notes(&self) {
        let mut told: Vec<&str> = Vec::new();
        let mut err = std::io::stderr().lock();
        for note in &self.notes {
            if !told.contains(&note.as_str()) {
                told.push(note);
                let _ = writeln!(err, "{note}");
            }
        }
    }
}

/// The channels with readings that a result is made of.
fn reading_channels(sheet: &Sheet, channel: usize, out: &mut Vec<usize>) {
    match sheet.measurement.channels.get(channel).map(|c| &c.source) {
        Some(Source::Combination(terms)) => terms.iter().for_each(|(c, _)| reading_channels(sheet, *c, out)),
        Some(Source::Stress { of, .. }) => reading_channels(sheet, *of, out),
        Some(Source::Rosette(rosette)) => {
            rosette.each_grid().iter().for_each(|(c, ..)| reading_channels(sheet, *c, out))
        }
        _ if !out.contains(&channel) => out.push(channel),
        _ => {}
    }
}
