//! One channel: how far apart, whether that is rounding, and what explains it.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::explain::{self, Found, explain, name, trends};
use super::figures::Figures;
use super::mistake::Clues;
use super::model::{Model, Pick};
use super::pass::{AllFigures, Target};
use super::robust::{line, median, range};
use super::sample::Sample;
use super::store::Store;
use super::verdict::{Checked, Explanation, Stretch, Verdict};
use crate::chain::Signal;
use crate::measurement::Measurement;
use crate::sheet::Reported;

/// Rows that explanations are tried on.
const SAMPLE: usize = 1500;
/// Rows furthest apart that are always among them: fewer than an explanation may leave.
const WORST: usize = 8;
/// Stretches that are told one by one.
const STRETCHES: usize = 8;
/// Least rows, and least span in steps of rounding, for an agreement that says something.
pub(super) const LEAST_ROWS: u64 = 10;
pub(super) const LEAST_STEPS: f64 = 20.0;
/// What a half step is widened by, so that arithmetic does not decide.
const SLACK: f64 = 1.0 + 1e-6;
/// Least rows of a stretch in which a mistake is looked for by itself.
const LEAST_SPAN: u64 = 20;

/// Counts over rows.
#[derive(Clone, Debug, Default)]
pub(super) struct Counts {
    pub(super) rows: u64,
    pub(super) alone: [u64; 2],
    pub(super) largest: f64,
    pub(super) largest_row: u64,
    pub(super) beyond: u64,
    /// First and last row beyond rounding; 0 = none.
    pub(super) ends: [u64; 2],
    pub(super) stretches: Vec<Stretch>,
    /// Stretches with a value on their side alone.
    pub(super) alone_at: Vec<Stretch>,
    pub(super) low: f64,
    pub(super) high: f64,
}

/// One channel on its way to a verdict.
pub(super) struct Channel<'a> {
    pub(super) measurement: &'a Measurement,
    pub(super) target: &'a Target,
    pub(super) delivered: usize,
    pub(super) stated: Option<&'a Reported>,
    inputs: &'a [usize],
    /// The channel of each delivered column, and half a step of its figures.
    targets: Vec<(usize, f64)>,
    figures: Figures,
    pub(super) base: Model,
    /// Half steps of readings, supplies and temperatures, for each part.
    sizes: Vec<[f64; 3]>,
    pub(super) sample: Sample,
    /// Over the differences.
    pub(super) plain: Option<Counts>,
    /// Over what the explanation leaves.
    left: Option<Counts>,
    best: Option<Model>,
    /// Rows that the explanation is about; `None` = all.
    span: Option<(u64, u64)>,
    /// What an estimate adds to the rounding that the explanation may leave.
    slack: f64,
    /// How many times as much the explanation moves as the own value.
    scale: f64,
    pub(super) out: Checked,
}

impl<'a> Channel<'a> {
    pub(super) fn new(
        measurement: &'a Measurement,
        store: &Store,
        delivered: usize,
        targets: &'a [Target],
        stated: Option<&'a Reported>,
        figures: &AllFigures,
        inputs: &'a [usize],
    ) -> Option<Self> {
        let target = targets.get(delivered)?;
        let own = measurement.channels.get(target.channel)?;
        let base = Model::of(measurement, target.channel, store)?;
        let sizes = base.parts.iter().map(|p| sizes(measurement, store, p.channel, figures)).collect();
        let out = Checked {
            name: own.name.clone(),
            unit: own.unit.clone(),
            column: target.header.clone(),
            verdict: Verdict::CannotTell,
            material: false,
            rows: 0,
            alone: [0; 2],
            alone_at: Vec::new(),
            only_alone: false,
            largest_difference: 0.0,
            largest_row: 0,
            slope: None,
            offset: None,
            step: 0.0,
            tolerance: stated.map_or(0.0, |s| s.tolerance),
            uncertainty: None,
            share_of_uncertainty: None,
            weighed: [0; 2],
            unmoved: 0,
            normalised_error: None,
            trends: Vec::new(),
            beyond: 0,
            stretches: Vec::new(),
            explanations: Vec::new(),
            settle: String::new(),
        };
        let mut channel = Self {
            measurement,
            target,
            delivered,
            stated,
            inputs,
            targets: targets
                .iter()
                .enumerate()
                .map(|(k, t)| {
                    let middle = store.theirs.get(k).map_or(1.0, |c| median(c)) / t.scale;
                    let step = figures.theirs.get(k).map_or(0.0, |f| f.step(middle)) * t.scale.abs();
                    (t.channel, if step.is_finite() { 0.5 * step } else { 0.0 })
                })
                .collect(),
            figures: figures.theirs.get(delivered).copied().unwrap_or_default(),
            base,
            sizes,
            sample: Sample::default(),
            plain: None,
            left: None,
            best: None,
            span: None,
            slack: 1.0,
            scale: 1.0,
            out,
        };
        channel.sample = channel.sample_of(store, &channel.spread(store, None));
        Some(channel)
    }

    /// Rows spread over time and over values, of all or of a span.
    fn spread(&self, store: &Store, span: Option<(u64, u64)>) -> Vec<usize> {
        let inside =
            |i: &usize| span.is_none_or(|(from, to)| store.row.get(*i).is_some_and(|row| (from..=to).contains(row)));
        let both = |i: &usize| inside(i) && self.pair(store, *i).is_some();
        let all: Vec<usize> = (0..store.len()).filter(both).collect();
        if all.len() <= SAMPLE {
            return all;
        }
        let own = |i: &usize| self.pair(store, *i).map_or(f64::NAN, |(own, _)| own);
        let mut by_value = all.clone();
        by_value.sort_by(|a, b| own(a).total_cmp(&own(b)));
        // the same number of rows from every tenth part of the span, and as many spread over time
        let (low, high) = (by_value.first().map_or(0.0, own), by_value.last().map_or(0.0, own));
        let mut chosen: Vec<usize> = all.iter().copied().step_by((2 * all.len()).div_ceil(SAMPLE).max(1)).collect();
        let parts = 20;
        for part in 0..parts {
            let edge = |k: i32| low + (high - low) * f64::from(k) / f64::from(parts);
            let from = by_value.partition_point(|i| own(i) < edge(part));
            let to = by_value.partition_point(|i| own(i) <= edge(part + 1));
            let inside = by_value.get(from..to).unwrap_or(&[]);
            let most = SAMPLE / 2 / parts as usize;
            chosen.extend(inside.iter().copied().step_by(inside.len().div_ceil(most).max(1)));
        }
        chosen.extend([by_value.first(), by_value.last()].into_iter().flatten());
        // and the few rows that are furthest apart
        let apart = |i: &usize| self.pair(store, *i).map_or(0.0, |(own, theirs)| (theirs - own).abs());
        by_value.sort_by(|a, b| apart(b).total_cmp(&apart(a)));
        chosen.extend(by_value.iter().take(WORST));
        chosen.sort_unstable();
        chosen.dedup();
        chosen
    }

    /// Own and delivered value of a row that has both.
    pub(super) fn pair(&self, store: &Store, position: usize) -> Option<(f64, f64)> {
        let own = *store.results.get(self.target.channel)?.get(position)?;
        let theirs = *store.theirs.get(self.delivered)?.get(position)?;
        (own.is_finite() && theirs.is_finite()).then_some((own, theirs))
    }

    /// Half a step of a delivered value, with the tolerance of the sheet.
    pub(super) fn half(&self, theirs: f64) -> f64 {
        let printed = (theirs - self.target.offset) / self.target.scale;
        let step = self.figures.step(printed) * self.target.scale.abs();
        let rounding = (0.5 * step).max(1e-9 * theirs.abs()).max(1e-300);
        rounding * SLACK + self.stated.map_or(0.0, |s| s.tolerance)
    }

    fn sample_of(&self, store: &Store, positions: &[usize]) -> Sample {
        let at: Vec<Option<usize>> = positions.iter().map(|p| Some(*p)).collect();
        let parts = self.base.gather(self.measurement, store, &at);
        let (own, theirs): (Vec<f64>, Vec<f64>) =
            positions.iter().map(|p| self.pair(store, *p).unwrap_or((f64::NAN, f64::NAN))).unzip();
        let half: Vec<f64> = theirs.iter().map(|t| self.half(*t)).collect();
        let more = self.base.moved(&parts, &self.sizes).unwrap_or_else(|| std::vec![0.0; half.len()]);
        let tolerance = half.iter().zip(more).map(|(h, m)| h + m).collect();
        Sample { positions: positions.to_vec(), parts, own, theirs, half, tolerance }
    }

    pub(super) fn is_explained(&self) -> bool {
        self.best.is_some()
    }

    /// Whether what explains it needs other rows than the one at hand.
    pub(super) fn is_explained_by_rows(&self) -> bool {
        self.best.as_ref().is_some_and(|m| m.pick != Pick::Own)
    }

    /// Counts over these rows: the differences, or what the explanation leaves once there is one.
    pub(super) fn count(&mut self, store: &Store) {
        let positions: Vec<usize> = (0..store.len()).filter(|i| self.pair(store, *i).is_some()).collect();
        let (own, theirs) = (store.results.get(self.target.channel), store.theirs.get(self.delivered));
        let mut alone = [0u64; 2];
        let mut alone_at: Vec<Stretch> = Vec::new();
        for ((a, b), row) in own.into_iter().flatten().zip(theirs.into_iter().flatten()).zip(&store.row) {
            alone[0] += u64::from(a.is_finite() && !b.is_finite());
            if !a.is_finite() && b.is_finite() {
                alone[1] += 1;
                extend(&mut alone_at, *row, f64::NAN);
            }
        }
        let value = |p: usize| self.pair(store, p).unwrap_or((f64::NAN, f64::NAN));
        let mut sample: Option<Sample> = None;
        let expected: Vec<f64> = match &self.best {
            Some(model) => {
                let made = self.sample_of(store, &positions);
                let mut values = model.values(self.measurement, store, &made, self.delivered).unwrap_or_default();
                if let Some((from, to)) = self.span {
                    for (value, p) in values.iter_mut().zip(&positions) {
                        let row = store.row.get(*p).copied().unwrap_or(0);
                        if !(from..=to).contains(&row) {
                            *value = self.pair(store, *p).map_or(f64::NAN, |(own, _)| own);
                        }
                    }
                }
                sample = Some(made);
                values
            }
            None => positions.iter().map(|p| value(*p).0).collect(),
        };
        let rough: Vec<f64> = positions.iter().map(|p| self.half(value(*p).1)).collect();
        let apart = |k: usize, p: usize| value(p).1 - expected.get(k).copied().unwrap_or(f64::NAN);
        let suspicious =
            positions.iter().enumerate().any(|(k, p)| apart(k, *p).abs() > rough.get(k).copied().unwrap_or(0.0));
        if suspicious && sample.is_none() && self.sizes.iter().flatten().any(|s| *s > 0.0) {
            sample = Some(self.sample_of(store, &positions));
        }
        let slack = if self.best.is_some() { self.slack } else { 1.0 };
        let slot = if self.best.is_some() { &mut self.left } else { &mut self.plain };
        let counts =
            slot.get_or_insert_with(|| Counts { low: f64::INFINITY, high: f64::NEG_INFINITY, ..Counts::default() });
        counts.alone[0] += alone[0];
        counts.alone[1] += alone[1];
        for stretch in alone_at {
            let room = counts.alone_at.len() <= STRETCHES;
            match counts.alone_at.last_mut() {
                Some(last) if last.to + 1 >= stretch.from => last.to = stretch.to,
                _ if room => counts.alone_at.push(stretch),
                _ => {}
            }
        }
        for (k, p) in positions.iter().enumerate() {
            let own = store.results.get(self.target.channel).and_then(|c| c.get(*p)).copied().unwrap_or(f64::NAN);
            let theirs = store.theirs.get(self.delivered).and_then(|c| c.get(*p)).copied().unwrap_or(f64::NAN);
            let row = store.row.get(*p).copied().unwrap_or(0);
            let d = theirs - expected.get(k).copied().unwrap_or(f64::NAN);
            counts.rows += 1;
            (counts.low, counts.high) = (counts.low.min(own), counts.high.max(own));
            if d.is_nan() {
                continue;
            }
            if d.abs() > counts.largest.abs() || counts.largest_row == 0 {
                (counts.largest, counts.largest_row) = (d, row);
            }
            let tolerance = match &sample {
                Some(sample) => sample.allowed(k, self.scale, self.best.as_ref().map_or(0.0, |m| m.extra)),
                None => rough.get(k).copied().unwrap_or(0.0),
            };
            if d.abs() > slack * tolerance {
                counts.beyond += 1;
                counts.ends = [if counts.ends[0] == 0 { row } else { counts.ends[0] }, row];
                extend(&mut counts.stretches, row, d);
            }
        }
    }

    /// Comes to a verdict.
    pub(super) fn judge(&mut self, store: &Store) {
        let counts = self.plain.clone().unwrap_or_default();
        let step = 2.0 * self.targets.get(self.delivered).map_or(0.0, |(_, half)| *half);
        let found_line = line(&self.sample.own, &self.sample.theirs);
        self.out.step = step;
        (self.out.slope, self.out.offset) = (found_line.map(|l| l.0), found_line.map(|l| l.1));
        let span = counts.high - counts.low;
        let little = counts.rows < LEAST_ROWS || span.is_nan() || span < LEAST_STEPS * step;
        if counts.beyond == 0 && counts.alone[1] > 0 && self.judge_alone(store) {
            return;
        }
        if counts.rows == 0 || (counts.beyond == 0 && little) || (counts.rows < 3) {
            self.out.verdict = Verdict::CannotTell;
            self.out.settle = self.settling(store, &counts, step);
            return;
        }
        self.weigh(store);
        if counts.beyond == 0 {
            self.out.verdict = Verdict::Agrees;
            self.out.material = false;
            return;
        }
        let sample = &self.sample;
        let first = self.base.parts.first();
        let celsius = first.and_then(|p| store.celsius.get(p.channel)).map_or(&[][..], |c| c[0].as_slice());
        let at = |column: &[f64]| -> Vec<f64> {
            if column.is_empty() {
                return Vec::new();
            }
            sample.positions.iter().map(|p| column.get(*p).copied().unwrap_or(f64::NAN)).collect()
        };
        self.out.trends = trends(sample, &at(celsius), &at(&store.seconds));
        let mut found = explain(&self.base, &self.clues(store, sample));
        if !found.explained
            && let Some(part) = self.explain_span(store, &counts)
        {
            found = part;
        }
        let mut explanations: Vec<Explanation> =
            found.groups.iter().map(|(best, tied)| self.in_words(&found, best, tied)).collect();
        if let Some((from, to)) = self.span {
            for e in &mut explanations {
                e.parameters.push(("from row".into(), from as f64));
                e.parameters.push(("to row".into(), to as f64));
            }
        }
        let best = if found.explained { found.groups.first().map(|(best, _)| best.clone()) } else { None };
        self.scale = best.as_ref().map_or(1.0, |b| self.scale_of(&b.predicted));
        self.slack = best.as_ref().map_or(1.0, |b| explain::slack(b.values.len(), b.predicted.len()));
        self.best = best.and_then(|best| {
            let mut model = self.base.clone();
            let mut values = best.values.iter();
            for i in &best.which {
                let variant = found.variants.get(*i)?;
                let value = if variant.free.is_some() { *values.next()? } else { 0.0 };
                if !(variant.apply)(&mut model, value) {
                    return None;
                }
            }
            Some(model)
        });
        self.out.verdict = if self.best.is_some() { Verdict::Explained } else { Verdict::Unexplained };
        if let Some(first) = explanations.first_mut()
            && let Some(model) = &self.best
            && let Some((Some(more), true)) = self.look_alone(store, model)
        {
            // and beside it, where they alone have a number
            first.id = format!("{}+{}", first.id, more.id);
            first.parameters.extend(more.parameters);
            let notes: Vec<&str> =
                [first.note.as_str(), more.note.as_str()].into_iter().filter(|n| !n.is_empty()).collect();
            first.note = notes.join("; ");
        }
        self.out.explanations = explanations;
        if self.best.is_none() {
            self.out.settle = if 50 * counts.beyond <= counts.rows {
                "look at what happened in these rows, and ask whether they were edited".into()
            } else {
                "ask for the constants and the formula that were used, and for one row worked by hand".into()
            };
        }
    }

    fn scale_of(&self, predicted: &[f64]) -> f64 {
        // of a stretch alone it stays as it is
        if predicted.len() == self.sample.own.len() { self.sample.scale_of(predicted) } else { 1.0 }
    }

    fn clues<'c>(&'c self, store: &'c Store, sample: &'c Sample) -> Clues<'c> {
        Clues {
            measurement: self.measurement,
            channel: self.target.channel,
            unit: &self.out.unit,
            store,
            sample,
            delivered: self.delivered,
            columns: self.inputs,
            targets: &self.targets,
            line: None,
        }
    }

    /// Looks for a mistake that was made from the first to the last row beyond rounding, and nowhere else.
    fn explain_span(&mut self, store: &Store, counts: &Counts) -> Option<Found> {
        let [from, to] = counts.ends;
        let rows = (to + 1).saturating_sub(from);
        // nearly everywhere is everywhere; a few rows, or a few among many, make no span
        if rows < LEAST_SPAN || 20 * rows > 19 * counts.rows || 4 * counts.beyond < rows {
            return None;
        }
        let sample = self.sample_of(store, &self.spread(store, Some((from, to))));
        let found = explain(&self.base, &self.clues(store, &sample));
        if !found.explained || sample.own.len() < LEAST_SPAN as usize {
            return None;
        }
        self.span = Some((from, to));
        Some(found)
    }

    fn in_words(&self, found: &Found, best: &explain::Candidate, tied: &[explain::Candidate]) -> Explanation {
        let parameters = |c: &explain::Candidate| {
            let mut out: Vec<(String, f64)> = Vec::new();
            let mut values = c.values.iter();
            for variant in c.which.iter().filter_map(|i| found.variants.get(*i)) {
                for (name, value) in &variant.fixed {
                    out.push(((*name).to_string(), *value));
                }
                if let (Some(free), Some(value)) = (&variant.free, variant.free.as_ref().and_then(|_| values.next())) {
                    out.push((free.name.to_string(), *value));
                }
            }
            out
        };
        let note = |c: &explain::Candidate| {
            let notes: Vec<&str> = c
                .which
                .iter()
                .filter_map(|i| found.variants.get(*i))
                .map(|v| v.note.as_str())
                .filter(|n| !n.is_empty())
                .collect();
            notes.join("; ")
        };
        let ids: Vec<String> = tied.iter().map(|c| name(&found.variants, c)).collect();
        let in_words = |(c, id): (&explain::Candidate, &String)| {
            let all: Vec<String> = parameters(c)
                .iter()
                .map(|(name, value)| format!("{name} {}", super::words::short(*value, 6)))
                .collect();
            if all.is_empty() { id.clone() } else { format!("{id} ({})", all.join(", ")) }
        };
        Explanation {
            id: name(&found.variants, best),
            parameters: parameters(best),
            note: note(best),
            residual: best.residual,
            tied: tied.iter().zip(&ids).map(in_words).collect(),
            tie: ids,
        }
    }

    pub(super) fn finish(mut self) -> Checked {
        let counts = self.plain.unwrap_or_default();
        self.out.rows = counts.rows;
        self.out.alone = counts.alone;
        self.out.largest_difference = counts.largest;
        self.out.largest_row = counts.largest_row;
        let about = self.left.as_ref().unwrap_or(&counts);
        self.out.beyond = about.beyond;
        self.out.stretches = about.stretches.clone();
        self.out.alone_at = counts.alone_at.clone();
        self.out
    }
}

/// Adds a row to stretches of successive rows, as long as there is room.
fn extend(stretches: &mut Vec<Stretch>, row: u64, d: f64) {
    let room = stretches.len() <= STRETCHES;
    match stretches.last_mut() {
        Some(last) if last.to + 1 >= row => {
            last.to = row;
            if d.abs() > last.largest.abs() {
                last.largest = d;
            }
        }
        _ if room => stretches.push(Stretch { from: row, to: row, largest: d }),
        _ => {}
    }
}

/// Half steps of reading, supply and temperature of a channel, as far as their figures show.
fn sizes(measurement: &Measurement, store: &Store, channel: usize, figures: &AllFigures) -> [f64; 3] {
    let Some(segment) = measurement.channels.get(channel).and_then(|c| c.segments()).and_then(|s| s.first()) else {
        return [0.0; 3];
    };
    let half = |input: usize| -> f64 {
        let typical =
            store.inputs.get(input).map_or(0.0, |c| range(c).1.abs().min(range(c).0.abs().max(range(c).1.abs())));
        let step = figures.inputs.get(input).map_or(0.0, |f| f.step(typical));
        if step.is_finite() { 0.5 * step } else { 0.0 }
    };
    // codes are whole numbers, not rounded ones
    let reading = if segment.chain.reading.signal == Signal::Count { 0.0 } else { half(segment.reading) };
    let supply = segment.supply.map_or(0.0, half);
    let celsius = segment.temperature.as_ref().map_or(0.0, |side| {
        let own = measurement.channels.get(side.channel).and_then(|c| c.segments()).and_then(|s| s.first());
        let Some(own) = own.filter(|s| s.chain.reading.signal != Signal::Count) else { return 0.0 };
        let rows: Vec<Option<usize>> = (0..store.len()).step_by((store.len() / 16).max(1)).map(Some).collect();
        let Some(model) = Model::of(measurement, side.channel, store) else { return 0.0 };
        let parts = model.gather(measurement, store, &rows);
        let by = model.moved(&parts, &[[half(own.reading), 0.0, 0.0]]).unwrap_or_default();
        let by = median(&by);
        if by.is_finite() { by * side.to_celsius.0.abs() } else { 0.0 }
    });
    [reading, supply, celsius]
}
