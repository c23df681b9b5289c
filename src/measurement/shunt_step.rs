//! A shunt that was connected during the recording: did the channel read what it should?

use std::string::String;
use std::vec::Vec;

use super::engine::in_force;
use super::{Channel, Converted, Measurement, Moment};
use crate::chain::Inputs;
use crate::signal::{Place, Shunt};

/// A stretch of a recording during which a shunt was connected.
#[derive(Clone, Debug, PartialEq)]
pub struct ShuntStep {
    /// First moment.
    pub from: Moment,
    /// Last moment.
    pub to: Moment,
    /// The resistor, its arm and its place.
    pub shunt: Shunt,
    /// What the step should be, in the unit of the channel; `None` = what this resistor simulates in this bridge.
    pub expected: Option<f64>,
    /// Largest believed deviation of the ratio from 1.
    pub tolerance: f64,
}

/// Why a shunt step cannot be judged although it was read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum ShuntDoubt {
    /// The recording ends before the step does.
    Ends,
    /// The readings with the shunt jump or scatter far more than those before.
    Uneven,
    /// The readings before it jump or scatter far more than those with the shunt.
    UnevenBefore,
    /// What the step is uncertain by, for the scatter of so few readings, is more than the tolerance, and explains what is
    /// read.
    Noise,
}

/// What a shunt step says of a channel.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub struct ShuntVerdict {
    /// Name of the channel.
    pub channel: String,
    /// Its unit.
    pub unit: String,
    /// Rows with and without the shunt that have a number.
    pub rows: [u64; 2],
    /// The step that was read: mean with the shunt less mean in the equally long stretch before it.
    pub read: f64,
    /// What it should be.
    pub expected: f64,
    /// What the resistor simulates in this bridge, at its place; `expected` unless the sheet states that.
    pub simulated: f64,
    /// What the resistor would simulate at the other place.
    pub other_place: f64,
    /// Standard uncertainty of the step for the scatter of its readings, in the unit of the channel; 0 where neither stretch
    /// has two of them.
    pub standard_uncertainty: f64,
    /// Why the means are not to be believed.
    pub doubt: Option<ShuntDoubt>,
    /// The step as stated.
    pub step: ShuntStep,
}

impl ShuntVerdict {
    /// Returns read over expected.
    #[must_use]
    pub fn ratio(&self) -> f64 {
        self.read / self.expected
    }

    /// Twice the standard uncertainty of the step as a share of what is expected.
    fn uncertain_share(&self) -> f64 {
        UNCERTAIN * self.standard_uncertainty / self.expected.abs()
    }

    /// Whether the scatter of the readings decides what the ratio is: it is wider than the tolerance, and no deviation beyond
    /// both stands out.
    fn is_noise(&self) -> bool {
        let uncertain = self.uncertain_share();
        uncertain > self.step.tolerance && (self.ratio() - 1.0).abs() <= self.step.tolerance + uncertain
    }

    /// Returns whether the step can be judged and the ratio lies within the tolerance.
    #[must_use]
    pub fn agrees(&self) -> bool {
        self.doubt.is_none() && (self.ratio() - 1.0).abs() <= self.step.tolerance
    }
}

impl core::fmt::Display for ShuntVerdict {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        let Self {
            channel,
            unit,
            read,
            expected,
            simulated,
            other_place,
            standard_uncertainty,
            doubt,
            step,
            rows: [on, off],
        } = self;
        let Shunt { arm, ohms, place } = step.shunt;
        let place_of = |p: Place| if p == Place::Gauge { "gauge" } else { "instrument" };
        let other = if place == Place::Gauge { Place::Instrument } else { Place::Gauge };
        if *on == 0 || *off == 0 {
            let stretch = (step.from.text.as_str(), step.to.text.as_str());
            return match *on {
                0 => write!(
                    f,
                    "{channel}: the shunt step cannot be judged: no reading from {} to {} has a number",
                    stretch.0, stretch.1
                ),
                _ => write!(
                    f,
                    "{channel}: the shunt step cannot be judged: no reading in the equally long stretch before {} has a number",
                    stretch.0
                ),
            };
        }
        if let Some(doubt) = doubt {
            let (from, to) = (step.from.text.as_str(), step.to.text.as_str());
            write!(f, "{channel}: the shunt step cannot be judged: ")?;
            return match doubt {
                ShuntDoubt::Ends => write!(f, "the recording ends before {to}"),
                ShuntDoubt::Uneven => write!(
                    f,
                    "readings from {from} to {to} jump or scatter far more than those before, as they do where some are without the shunt"
                ),
                ShuntDoubt::UnevenBefore => write!(
                    f,
                    "readings in the equally long stretch before {from} jump or scatter far more than those from there on, as they do where the shunt is on already"
                ),
                ShuntDoubt::Noise => write!(
                    f,
                    "the scatter of its {on} readings and the {off} before makes the step of {} {unit} uncertain by {} {unit} (standard uncertainty), twice which is {:.2} % of the expected {} {unit} and more than the tolerance of {} %; a longer step, or a wider tolerance, can be judged",
                    Figures(*read),
                    Figures(two_digits(*standard_uncertainty)),
                    100.0 * self.uncertain_share(),
                    Figures(*expected),
                    Figures(100.0 * step.tolerance)
                ),
            };
        }
        if !expected.is_finite() {
            return write!(
                f,
                "{channel}: the shunt step cannot be judged: {ohms} ohm across arm {arm} at the {} drives this channel beyond what it believes",
                place_of(place)
            );
        }
        write!(
            f,
            "{channel}: shunt of {ohms} ohm across arm {arm} at the {}: read {} {unit}, expected {} {unit}, ratio {:.5}, {} {} %",
            place_of(place),
            Figures(*read),
            Figures(*expected),
            self.ratio(),
            if self.agrees() { "within" } else { "NOT within" },
            Figures(100.0 * step.tolerance)
        )?;
        if self.ratio().abs() < NO_STEP {
            write!(f, "; that is no step: was the shunt connected then?")?;
        } else if self.ratio() < 0.0 {
            write!(f, "; the signs differ: the shunt was across an adjacent arm, or the signal wires are crossed")?;
        } else if !self.agrees() && self.ratio() > 0.0 {
            write!(f, "; readings times {:.5} would agree", 1.0 / self.ratio())?;
        }
        if step.expected.is_some() && simulated.is_finite() {
            write!(f, "; in this bridge it simulates {} {unit}", Figures(*simulated))?;
        }
        if other_place.is_finite() {
            write!(f, "; at the {} it would simulate {} {unit}", place_of(other), Figures(*other_place))?;
            if simulated.is_finite() {
                write!(f, " ({:+.2} %)", 100.0 * (other_place / simulated - 1.0))?;
            }
        }
        Ok(())
    }
}

/// Share of the expected step below which there is none. This and the shares below: common practice, no source.
const NO_STEP: f64 = 0.05;
/// Share of the step by which two successive readings differ where the shunt comes on or goes off between them.
const JUMP: f64 = 0.5;
/// How many times the usual difference of successive readings such a jump is at least.
const ABOVE_NOISE: f64 = 8.0;
/// How many times the standard deviation of the quieter stretch is far more than it.
const SCATTER: f64 = 2.0;
/// Share of the tolerance that rows of the other kind may take up unnoticed.
const UNNOTICED: f64 = 0.1;

/// How many standard uncertainties of the step a tolerance has to be at least: about 95 % (JCGM 100:2008, G.6.6).
const UNCERTAIN: f64 = 2.0;

fn two_digits(value: f64) -> f64 {
    std::format!("{value:.1e}").parse().unwrap_or(value)
}

/// Six significant digits, trailing zeros left out.
struct Figures(f64);

impl core::fmt::Display for Figures {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        // not finite, it shows itself
        match std::format!("{:.5e}", self.0).parse::<f64>() {
            Ok(rounded) => write!(f, "{rounded}"),
            Err(_) => write!(f, "{}", self.0),
        }
    }
}

#[derive(Clone, Copy, Default)]
struct Mean {
    rows: u64,
    value: f64,
    celsius: [f64; 6],
    /// The first value, and sums of what the others differ by.
    first: f64,
    excess: f64,
    excess_squared: f64,
    /// The latest value, the sum of the squares of successive differences, and the largest of them.
    last: f64,
    steps_squared: f64,
    largest_squared: f64,
    /// Rows before that one.
    before_largest: u64,
}

impl Mean {
    fn add(&mut self, value: f64) {
        if self.rows == 0 {
            self.first = value;
        } else {
            let step = (value - self.last) * (value - self.last);
            self.steps_squared += step;
            if step > self.largest_squared {
                (self.largest_squared, self.before_largest) = (step, self.rows);
            }
        }
        self.last = value;
        self.rows += 1;
        self.value += value;
        self.excess += value - self.first;
        self.excess_squared += (value - self.first) * (value - self.first);
    }

    fn variance(&self) -> f64 {
        let rows = self.rows as f64;
        ((self.excess_squared - self.excess * self.excess / rows) / (rows - 1.0)).max(0.0)
    }

    /// Variance of the mean of as many readings, each of which scatters as these do.
    fn variance_of_mean(&self, other: &Self) -> Option<f64> {
        let own = [self, other].into_iter().find(|mean| mean.rows > 1)?;
        // u² = s²/n
        Some(own.variance() / self.rows as f64)
    }

    /// Whether one pair of successive readings differs by about the step, and the others do not; not so near an end that the
    /// rows beyond it hardly count.
    fn jumps(&self, step: f64, tolerance: f64) -> bool {
        let beyond = self.before_largest.min(self.rows - self.before_largest) as f64 / self.rows as f64;
        let others = (self.steps_squared - self.largest_squared).max(0.0) / (self.rows as f64 - 2.0).max(1.0);
        self.largest_squared > JUMP * JUMP * step * step
            && self.largest_squared > ABOVE_NOISE * ABOVE_NOISE * others
            && beyond > UNNOTICED * tolerance
    }

    /// Whether it scatters far more than the other stretch, and by enough to move its mean.
    ///
    /// Rows of the other kind, a share f of all, move the mean by f times the step and add f (1 − f) times its square to the
    /// variance.
    fn scatters(&self, other: &Self, step: f64, tolerance: f64) -> bool {
        let (own, other_variance) = (self.variance(), other.variance());
        self.rows > 2
            && other.rows > 2
            && own > SCATTER * SCATTER * other_variance
            && own - other_variance > UNNOTICED * tolerance * step * step
    }
}

/// Watches converted blocks for the shunt steps of a measurement.
pub struct ShuntWatch<'m> {
    measurement: &'m Measurement,
    /// For each step: channel, segment, mean with the shunt and before it.
    steps: Vec<(usize, usize, Mean, Mean)>,
    /// Rows with a time, the earliest and the latest of them, s.
    rows: u64,
    times: [f64; 2],
}

impl<'m> ShuntWatch<'m> {
    /// Returns a watch over the steps of this measurement.
    #[must_use]
    pub fn new(measurement: &'m Measurement) -> Self {
        let steps = measurement.channels.iter().enumerate().flat_map(|(i, channel)| {
            let segments = channel.segments().map_or(&[][..], Vec::as_slice);
            // a change goes on with the step before it: the chain in force when the shunt was connected judges it
            let own = segments
                .iter()
                .enumerate()
                .filter(|(k, s)| s.shunt.as_ref().is_some_and(|step| in_force(segments, step.from.seconds) == *k));
            own.map(move |(k, _)| (i, k, Mean::default(), Mean::default()))
        });
        Self { measurement, steps: steps.collect(), rows: 0, times: [f64::INFINITY, f64::NEG_INFINITY] }
    }

    /// Takes a converted block.
    pub fn add<P>(&mut self, block: &Converted<P>) {
        for time in block.seconds.iter().filter(|t| t.is_finite()) {
            let [earliest, latest] = self.times;
            self.times = [earliest.min(*time), latest.max(*time)];
            self.rows += 1;
        }
        for (i, k, on, off) in &mut self.steps {
            let segment = self.measurement.channels.get(*i).and_then(Channel::segments).and_then(|s| s.get(*k));
            let (Some(step), Some(column), Some(temperatures)) =
                (segment.and_then(|s| s.shunt.as_ref()), block.results.get(*i), block.temperatures.get(*i))
            else {
                continue;
            };
            let (from, to) = (step.from.seconds, step.to.seconds);
            for (row, (time, value)) in block.seconds.iter().zip(&column.values).enumerate() {
                let mean = if *time >= from && *time <= to {
                    &mut *on
                } else if *time >= from - (to - from) && *time < from {
                    &mut *off
                } else {
                    continue;
                };
                if !value.is_finite() {
                    continue;
                }
                mean.add(*value);
                for (sum, column) in mean.celsius.iter_mut().zip(temperatures) {
                    *sum += column.values.get(row).copied().unwrap_or(0.0);
                }
            }
        }
    }

    /// Returns the verdicts, in the order of the sheet.
    #[must_use]
    pub fn finish(self) -> Vec<ShuntVerdict> {
        let measurement = self.measurement;
        // a window may end anywhere before the next reading would have come
        let [earliest, latest] = self.times;
        let end = latest + (latest - earliest) / (self.rows as f64 - 1.0).max(1.0);
        let verdict = |(i, k, on, off): (usize, usize, Mean, Mean)| {
            let channel = measurement.channels.get(i)?;
            let segment = channel.segments()?.get(k)?;
            let step = segment.shunt.clone()?;
            let rest = off.value / off.rows as f64;
            let mean = |sum: f64| if on.rows > 0 { sum / on.rows as f64 } else { 0.0 };
            let [celsius, lead_celsius, arms @ ..] = on.celsius.map(mean);
            let inputs = Inputs { reading: 0.0, supply: 1.0, celsius, lead_celsius, arm_celsius: arms };
            let simulated = |place| {
                let shunt = Shunt { place, ..step.shunt };
                segment.chain.simulated(shunt, if off.rows > 0 { rest } else { 0.0 }, &inputs).unwrap_or(f64::NAN)
            };
            let other = if step.shunt.place == Place::Gauge { Place::Instrument } else { Place::Gauge };
            let here = simulated(step.shunt.place);
            let (read, expected) = (on.value / on.rows as f64 - rest, step.expected.unwrap_or(here));
            let size = if expected.is_finite() { read.abs().max(expected.abs()) } else { read.abs() };
            let uneven =
                |one: &Mean, other: &Mean| one.jumps(size, step.tolerance) || one.scatters(other, size, step.tolerance);
            let doubt = if step.to.seconds > end {
                Some(ShuntDoubt::Ends)
            } else if uneven(&on, &off) {
                Some(ShuntDoubt::Uneven)
            } else {
                uneven(&off, &on).then_some(ShuntDoubt::UnevenBefore)
            };
            // u² = s₁²/n₁ + s₂²/n₂; a stretch of a single reading scatters as the other
            let variances = [on.variance_of_mean(&off), off.variance_of_mean(&on)];
            let standard_uncertainty = match variances {
                [Some(one), Some(other)] => crate::math::sqrt(one + other),
                _ => 0.0,
            };
            let verdict = ShuntVerdict {
                channel: channel.name.clone(),
                unit: channel.unit.clone(),
                rows: [on.rows, off.rows],
                read,
                expected,
                simulated: here,
                other_place: simulated(other),
                standard_uncertainty,
                doubt,
                step,
            };
            let noise = verdict.doubt.is_none() && verdict.is_noise();
            Some(ShuntVerdict { doubt: if noise { Some(ShuntDoubt::Noise) } else { verdict.doubt }, ..verdict })
        };
        self.steps.into_iter().filter_map(verdict).collect()
    }
}
