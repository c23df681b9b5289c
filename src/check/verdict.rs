//! One channel: how far apart, whether that is rounding, and what explains it.

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use super::explain::{self, Found, explain, name, trends};
use super::figures::Figures;
use super::mistake::Clues;
use super::model::{Model, Pick, Sample};
use super::pass::{AllFigures, Target};
use super::robust::{line, median, range};
use super::store::{Gathered, Store};
use crate::chain::{Inputs, Signal};
use crate::math::sqrt;
use crate::measurement::{Measurement, Propagation, State};
use crate::sheet::Reported;
use crate::uncertainty::Coverage;

/// Rows that explanations are tried on.
const SAMPLE: usize = 1500;
/// Rows furthest apart that are always among them: fewer than an explanation may leave.
const WORST: usize = 8;
/// Rows that uncertainties are computed at.
const WEIGHED: usize = 24;
/// Stretches that are told one by one.
const STRETCHES: usize = 8;
/// Least rows, and least span in steps of rounding, for an agreement that says something.
const LEAST_ROWS: u64 = 10;
const LEAST_STEPS: f64 = 20.0;

/// What is to be said of delivered results.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Verdict {
    /// They differ by no more than rounding and the tolerance of the sheet.
    Agrees,
    /// One mistake, or two together, make them to within rounding.
    Explained,
    /// They differ, and no mistake that is known here makes them.
    Unexplained,
    /// There are too few rows, or they span too little.
    CannotTell,
}

impl Verdict {
    /// Returns the verdict as it is printed.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Agrees => "agrees",
            Self::Explained => "explained",
            Self::Unexplained => "unexplained",
            Self::CannotTell => "cannot tell",
        }
    }
}

/// Successive rows that differ by more than they should.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Stretch {
    /// First row, from 1.
    pub from: u64,
    /// Last row.
    pub to: u64,
    /// Largest difference in it, in the unit of the channel.
    pub largest: f64,
}

/// One explanation.
#[derive(Clone, Debug, PartialEq)]
pub struct Explanation {
    /// The mistake; two together are joined by `+`.
    pub id: String,
    /// Its parameters.
    pub parameters: Vec<(String, f64)>,
    /// Which variant, in words; empty where there is one alone.
    pub note: String,
    /// Root of the mean square of what it leaves, in the unit of the channel.
    pub residual: f64,
    /// Mistakes whose predictions differ from this one's by less than rounding, over these data.
    pub tie: Vec<String>,
    /// The same with their parameters, in words.
    pub tied: Vec<String>,
}

/// What was found of one channel.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Checked {
    /// Its name.
    pub name: String,
    /// Its unit.
    pub unit: String,
    /// Header of the delivered column.
    pub column: String,
    /// The verdict.
    pub verdict: Verdict,
    /// Whether the difference exceeds our expanded uncertainty (k = 2) somewhere, as far as the sheet states it.
    pub material: bool,
    /// Rows with a number on both sides.
    pub rows: u64,
    /// Rows with a number on our side alone, and on theirs alone.
    pub alone: [u64; 2],
    /// Largest difference, theirs less ours, and its row.
    pub largest_difference: f64,
    /// The row of the largest difference, from 1.
    pub largest_row: u64,
    /// theirs = slope · ours + offset, by medians; `None` where ours have no span.
    pub slope: Option<f64>,
    /// The offset of that line.
    pub offset: Option<f64>,
    /// Step of the delivered figures, typical; 0 = not rounded.
    pub step: f64,
    /// Our expanded uncertainty (k = 2), the least of those computed; `None` where the sheet states none.
    pub uncertainty: Option<f64>,
    /// Largest |E_n| where they state an uncertainty.
    pub normalised_error: Option<f64>,
    /// What else the difference follows, with the part of it that does.
    pub trends: Vec<(String, f64)>,
    /// Rows beyond rounding: of the difference, or of what the first explanation leaves.
    pub beyond: u64,
    /// The first stretches of such rows.
    pub stretches: Vec<Stretch>,
    /// Explanations, best first.
    pub explanations: Vec<Explanation>,
    /// What would settle it, in words.
    pub settle: String,
}

/// What was found of a delivery.
#[derive(Clone, Debug)]
#[non_exhaustive]
pub struct Report {
    /// Title of the sheet.
    pub file: String,
    /// Rows of the recording.
    pub rows: u64,
    /// A line for each zero that was a mean.
    pub zeros: Vec<String>,
    /// What is to be said of the file.
    pub remarks: Vec<String>,
    /// The channels, in the order of the sheet.
    pub channels: Vec<Checked>,
}

/// Rows that stand out, found in the first reading.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Extremes {
    low: Option<(f64, u64)>,
    high: Option<(f64, u64)>,
    apart: Option<(f64, u64)>,
}

impl Extremes {
    pub(super) fn add(&mut self, own: &[f64], theirs: &[f64], first: u64) {
        for ((own, theirs), row) in own.iter().zip(theirs).zip(first..) {
            if !(own.is_finite() && theirs.is_finite()) {
                continue;
            }
            if self.low.is_none_or(|(v, _)| *own < v) {
                self.low = Some((*own, row));
            }
            if self.high.is_none_or(|(v, _)| *own > v) {
                self.high = Some((*own, row));
            }
            let apart = (theirs - own).abs();
            if self.apart.is_none_or(|(v, _)| apart > v) {
                self.apart = Some((apart, row));
            }
        }
    }

    pub(super) fn rows(&self) -> impl Iterator<Item = u64> {
        [self.low, self.high, self.apart].into_iter().flatten().map(|(_, row)| row)
    }
}

/// Counts over rows.
#[derive(Clone, Debug, Default)]
struct Counts {
    rows: u64,
    alone: [u64; 2],
    largest: f64,
    largest_row: u64,
    beyond: u64,
    stretches: Vec<Stretch>,
    low: f64,
    high: f64,
}

/// One channel on its way to a verdict.
pub(super) struct Channel<'a> {
    measurement: &'a Measurement,
    target: &'a Target,
    delivered: usize,
    stated: Option<&'a Reported>,
    inputs: &'a [usize],
    figures: Figures,
    base: Model,
    /// Half steps of readings, supplies and temperatures, for each part.
    sizes: Vec<[f64; 3]>,
    sample: Sample,
    /// Over the differences.
    plain: Option<Counts>,
    /// Over what the explanation leaves.
    left: Option<Counts>,
    best: Option<Model>,
    /// What an estimate adds to the rounding that the explanation may leave.
    slack: f64,
    out: Checked,
}

impl<'a> Channel<'a> {
    pub(super) fn new(
        measurement: &'a Measurement,
        store: &Store,
        delivered: usize,
        target: &'a Target,
        stated: Option<&'a Reported>,
        figures: &AllFigures,
        inputs: &'a [usize],
    ) -> Option<Self> {
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
            largest_difference: 0.0,
            largest_row: 0,
            slope: None,
            offset: None,
            step: 0.0,
            uncertainty: None,
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
            figures: figures.theirs.get(delivered).copied().unwrap_or_default(),
            base,
            sizes,
            sample: Sample::default(),
            plain: None,
            left: None,
            best: None,
            slack: 1.0,
            out,
        };
        channel.sample = channel.sample_of(store, &channel.spread(store));
        Some(channel)
    }

    /// Rows spread over time and over values.
    fn spread(&self, store: &Store) -> Vec<usize> {
        let both = |i: &usize| self.pair(store, *i).is_some();
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
    fn pair(&self, store: &Store, position: usize) -> Option<(f64, f64)> {
        let own = *store.results.get(self.target.channel)?.get(position)?;
        let theirs = *store.theirs.get(self.delivered)?.get(position)?;
        (own.is_finite() && theirs.is_finite()).then_some((own, theirs))
    }

    /// Half a step of a delivered value, with the tolerance of the sheet.
    fn half(&self, theirs: f64) -> f64 {
        let printed = (theirs - self.target.offset) / self.target.scale;
        let step = self.figures.step(printed) * self.target.scale.abs();
        let rounding = (0.5 * step).max(1e-9 * theirs.abs()).max(1e-300);
        rounding * (1.0 + 1e-6) + self.stated.map_or(0.0, |s| s.tolerance)
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
        for (a, b) in own.into_iter().flatten().zip(theirs.into_iter().flatten()) {
            alone[0] += u64::from(a.is_finite() && !b.is_finite());
            alone[1] += u64::from(!a.is_finite() && b.is_finite());
        }
        let value = |p: usize| self.pair(store, p).unwrap_or((f64::NAN, f64::NAN));
        let mut sample: Option<Sample> = None;
        let expected: Vec<f64> = match &self.best {
            Some(model) => {
                let made = self.sample_of(store, &positions);
                let values = model.values(self.measurement, store, &made, self.delivered);
                sample = Some(made);
                values.unwrap_or_default()
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
                Some(sample) => sample.tolerance.get(k).copied().unwrap_or(0.0),
                None => rough.get(k).copied().unwrap_or(0.0),
            };
            if d.abs() > slack * tolerance {
                counts.beyond += 1;
                let room = counts.stretches.len() <= STRETCHES;
                match counts.stretches.last_mut() {
                    Some(last) if last.to + 1 >= row => {
                        last.to = row;
                        if d.abs() > last.largest.abs() {
                            last.largest = d;
                        }
                    }
                    _ if room => {
                        counts.stretches.push(Stretch { from: row, to: row, largest: d });
                    }
                    _ => {}
                }
            }
        }
    }

    /// Comes to a verdict.
    pub(super) fn judge(&mut self, store: &Store) {
        let counts = self.plain.clone().unwrap_or_default();
        let sample = &self.sample;
        let step =
            2.0 * median(&sample.half.iter().map(|h| h - self.stated.map_or(0.0, |s| s.tolerance)).collect::<Vec<_>>());
        let found_line = line(&sample.own, &sample.theirs);
        self.out.step = if self.figures.step(1.0) > 0.0 { step } else { 0.0 };
        (self.out.slope, self.out.offset) = (found_line.map(|l| l.0), found_line.map(|l| l.1));
        let span = counts.high - counts.low;
        let little = counts.rows < LEAST_ROWS || span.is_nan() || span < LEAST_STEPS * step;
        if counts.rows == 0 || (counts.beyond == 0 && little) || (counts.rows < 3) {
            self.out.verdict = Verdict::CannotTell;
            self.out.settle = self.settling(store, &counts, step);
            return;
        }
        if counts.beyond == 0 {
            self.out.verdict = Verdict::Agrees;
            return;
        }
        let first = self.base.parts.first();
        let celsius = first.and_then(|p| store.celsius.get(p.channel)).map_or(&[][..], |c| c[0].as_slice());
        let at = |column: &[f64]| -> Vec<f64> {
            if column.is_empty() {
                return Vec::new();
            }
            sample.positions.iter().map(|p| column.get(*p).copied().unwrap_or(f64::NAN)).collect()
        };
        self.out.trends = trends(sample, &at(celsius), &at(&store.seconds));
        let clues = Clues {
            measurement: self.measurement,
            channel: self.target.channel,
            unit: &self.out.unit,
            store,
            sample,
            delivered: self.delivered,
            columns: self.inputs,
            line: None,
        };
        let found = explain(&self.base, &clues);
        let explanations: Vec<Explanation> =
            found.groups.iter().map(|(best, tied)| self.in_words(&found, best, tied)).collect();
        let best = if found.explained { found.groups.first().map(|(best, _)| best.clone()) } else { None };
        self.slack = best.as_ref().map_or(1.0, |b| explain::slack(b.values.len(), sample.own.len()));
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
        self.out.explanations = explanations;
        self.out.material = true;
        self.weigh(store);
        if self.best.is_none() {
            self.out.settle = if 50 * counts.beyond <= counts.rows {
                "look at what happened in these rows, and ask whether they were edited".into()
            } else {
                "ask for the constants and the formula that were used, and for one row worked by hand".into()
            };
        }
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

    /// Compares the difference with our uncertainty, and with theirs.
    fn weigh(&mut self, store: &Store) {
        let mut positions: Vec<usize> = self.sample.thinned(WEIGHED).positions;
        let worst = self.plain.as_ref().map(|c| c.largest_row);
        positions.extend(worst.and_then(|row| store.row.iter().position(|r| *r == row)));
        let theirs = self.stated.and_then(|s| s.uncertainty).map(|u| 2.0 * u.standard());
        let (mut least, mut material, mut weighed) = (f64::INFINITY, false, false);
        let mut error = 0.0f64;
        for position in positions {
            let Some((own, delivered)) = self.pair(store, position) else { continue };
            let d = (delivered - own).abs();
            let expanded = self.expanded(store, position);
            if let Some(u) = expanded {
                weighed = true;
                least = least.min(u);
                material |= d > u;
            }
            if let Some(theirs) = theirs {
                // E_n = |d|/√(U₁² + U₂²)
                let u = expanded.unwrap_or(0.0);
                error = error.max(d / sqrt(u * u + theirs * theirs));
            }
        }
        self.out.material = material || !weighed;
        self.out.uncertainty = weighed.then_some(least);
        self.out.normalised_error = theirs.map(|_| error);
    }

    /// Our expanded uncertainty (k = 2) at a row; `None` where the sheet states none.
    fn expanded(&self, store: &Store, position: usize) -> Option<f64> {
        let at = [Some(position)];
        let state = |channel: usize| -> Option<State> {
            let rows = Gathered::take(store, self.measurement, channel, &at, None);
            let first = |c: &Vec<f64>| c.first().copied().unwrap_or(0.0);
            let [celsius, lead, arms @ ..] = rows.celsius.each_ref().map(first);
            Some(State {
                value: *rows.own.first()?,
                inputs: Inputs {
                    reading: first(&rows.readings),
                    supply: first(&rows.supplies),
                    celsius,
                    lead_celsius: lead,
                    arm_celsius: arms,
                },
                segment: rows.segment.first().copied().unwrap_or(0),
            })
        };
        let states: Vec<Option<State>> = (0..self.measurement.channels.len()).map(state).collect();
        let propagation = Propagation::new(self.measurement, &states, self.target.channel).ok()?;
        let expanded = propagation.combined().ok()?.expanded(Coverage::Factor(2.0)).ok()?.expanded;
        (expanded > 0.0).then_some(expanded)
    }

    /// The reading that would settle it.
    fn settling(&self, store: &Store, counts: &Counts, step: f64) -> String {
        let why = if counts.rows < 3 {
            format!("{} with a number on both sides", rows_in_words(counts.rows))
        } else {
            format!(
                "{} that span {} {}",
                rows_in_words(counts.rows),
                super::words::figure(round_to(counts.high - counts.low, 3)),
                self.out.unit
            )
        };
        let middle = if counts.rows > 0 { 0.5 * (counts.low + counts.high) } else { 0.0 };
        let far = match self.out.unit.as_str() {
            _ if step > 0.0 && counts.rows > 0 => 50.0 * LEAST_STEPS * step,
            "microstrain" => 1000.0,
            "degC" | "K" | "degF" => 50.0,
            _ => 1.0,
        };
        // where an error of one part in a thousand would show, as far as the channel reaches
        let reading = [1.0, 0.3, 0.1, 0.03].into_iter().find_map(|share| {
            let wanted = round_to(middle + share * far, 2);
            let chain = self.base.first().filter(|_| self.base.parts.len() == 1 && self.base.steps.is_empty())?;
            let at = self.sample.positions.first().map(|p| [Some(*p)]);
            let rows = at
                .map(|at| Gathered::take(store, self.measurement, self.target.channel, &at, None))
                .unwrap_or_default();
            let first = |c: &Vec<f64>| c.first().copied().unwrap_or(20.0);
            let [celsius, lead, arms @ ..] = rows.celsius.each_ref().map(first);
            let supply = rows.supplies.first().copied().unwrap_or(1.0);
            let inputs = Inputs { reading: 0.0, supply, celsius, lead_celsius: lead, arm_celsius: arms };
            let reading = chain.plan().ok()?.forward(wanted, inputs).ok()?;
            let unit = self.measurement.channels.get(self.target.channel)?.segments()?.first()?.reads.clone();
            Some(format!(
                "; what they make of a reading of {} {unit} would settle it: it should be {} {}",
                super::words::figure(round_to(reading, 6)),
                super::words::figure(wanted),
                self.out.unit
            ))
        });
        format!("{why}{}", reading.unwrap_or_else(|| "; readings over a wider span would settle it".into()))
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
        self.out
    }
}

pub(super) fn rows_in_words(rows: u64) -> String {
    match rows {
        0 => "no rows".to_string(),
        1 => "one row".to_string(),
        n => format!("{n} rows"),
    }
}

/// A number with so many significant digits.
fn round_to(value: f64, digits: usize) -> f64 {
    format!("{value:.*e}", digits - 1).parse().unwrap_or(value)
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
