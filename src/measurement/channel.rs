//! What one channel is made of.

use std::boxed::Box;
use std::string::{String, ToString};
use std::vec::Vec;

use super::MeasurementError;
use super::again::{Again, ZeroPlace};
use super::paired::Paired;
use super::rosette::RosetteSource;
use super::shunt_step::ShuntStep;
use super::side::Side;
use super::tolerance::Tolerance;
use super::uncertain::Stated;
use crate::Error;
use crate::chain::{Chain, Element};
use crate::strain::{Loading, Material, Section, ZeroMeaning};

/// A column of a recording as a sheet refers to it.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum ColumnRef {
    /// By the text in the line of names, without blanks around it.
    Name(String),
    /// By its number, counted from 1.
    Number(usize),
}

impl From<&str> for ColumnRef {
    fn from(name: &str) -> Self {
        Self::Name(name.into())
    }
}

impl From<usize> for ColumnRef {
    fn from(number: usize) -> Self {
        Self::Number(number)
    }
}

impl core::fmt::Display for ColumnRef {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        match self {
            Self::Name(name) => f.write_str(name),
            Self::Number(number) => write!(f, "{number}"),
        }
    }
}

/// A moment: as the sheet writes it, and on the time scale of the recording once that is known.
#[derive(Clone, Debug)]
pub struct Moment {
    /// As written.
    pub text: String,
    /// Seconds on the recording's scale; NaN until [`Measurement::place_moments`](super::Measurement::place_moments).
    pub seconds: f64,
    /// Where it is written, as `file:line:column`; empty where nobody knows.
    pub place: String,
}

impl Moment {
    /// Returns a moment whose place is not known yet.
    #[must_use]
    pub fn unplaced(text: &str) -> Self {
        Self::stated(text, String::new())
    }

    /// Returns a moment that is written here (`file:line:column`), and whose place in time is not known yet.
    #[must_use]
    pub fn stated(text: &str, place: String) -> Self {
        Self { text: text.to_string(), seconds: f64::NAN, place }
    }
}

impl PartialEq for Moment {
    /// Compares bits, so that an unplaced moment equals itself; where it is written does not matter.
    fn eq(&self, other: &Self) -> bool {
        self.text == other.text && self.seconds.to_bits() == other.seconds.to_bits()
    }
}

/// Where the zero of a segment comes from.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum ZeroSource {
    /// It stands in the chain.
    Stated,
    /// Mean over the first rows of the recording.
    Rows(u64),
    /// Mean over the first rows from a moment on: that of the change which states it.
    RowsFrom {
        /// The moment.
        from: Moment,
        /// Number of rows.
        rows: u64,
    },
    /// Mean over a stretch of time, both ends included.
    Window {
        /// First moment.
        from: Moment,
        /// Last moment.
        to: Moment,
    },
}

/// The chain of a channel from one moment on.
#[derive(Clone, Debug, PartialEq)]
pub struct Segment {
    /// First moment; `None` = from the start.
    pub from: Option<Moment>,
    /// The chain.
    pub chain: Chain,
    /// Where its zero comes from.
    pub zero: ZeroSource,
    /// The other recording that it is read from, as the sheet names it; `None` = this recording.
    pub zero_file: Option<String>,
    /// Where it was read, once it was.
    pub zero_place: Option<ZeroPlace>,
    /// A second zero.
    pub again: Option<Again>,
    /// Whether the sheet states the temperature at zero, so that the mean over the window does not replace it.
    pub zero_temperature_stated: bool,
    /// Unit of the readings, as a sheet writes it.
    pub reads: String,
    /// Which input is the reading.
    pub reading: usize,
    /// The second column of the reading.
    pub paired: Option<Paired>,
    /// Which input is the supply.
    pub supply: Option<usize>,
    /// The second column of the supply.
    pub supply_paired: Option<Paired>,
    /// Which channel is the temperature of the gauge.
    pub temperature: Option<Side>,
    /// Which channel is the temperature of the leads.
    pub lead_temperature: Option<Side>,
    /// Which channels are the temperatures of arms 1-4 that have their own.
    pub arm_temperatures: [Option<Side>; 4],
    /// A shunt that was connected during the recording.
    pub shunt: Option<ShuntStep>,
    /// Whether the sheet states the resistances of the arms, rather than leaving them to the gauge's.
    pub arms_stated: bool,
    /// Uncertainties of the keys of the chain.
    pub stated: Vec<Stated>,
    /// What one unit of the readings is in the library's unit: 1e-3 for mV.
    pub reading_size: f64,
    /// Tolerance class that the sensor was bought by.
    pub tolerance: Option<ToleranceClass>,
    /// Coefficients whose errors go together, as a fit gives them.
    pub covariances: Vec<Covariance>,
    /// How the readings scattered while the zero was taken; `None` where it is no mean.
    pub zero_scatter: Option<Scatter>,
}

/// The tolerance class of a sensor as the sheet states it.
#[derive(Clone, Debug, PartialEq)]
pub struct ToleranceClass {
    /// The key that states it.
    pub key: String,
    /// As the sheet writes it.
    pub text: String,
    /// What the sensor may be off by.
    pub limits: Tolerance,
}

/// Errors of fitted coefficients: each is a sum of the same independent unit errors.
#[derive(Clone, Debug, PartialEq)]
pub struct Covariance {
    /// The key that states it.
    pub key: String,
    /// Keys of the coefficients.
    pub keys: Vec<String>,
    /// A lower triangular root of the covariance matrix, row by row.
    pub root: Vec<Vec<f64>>,
    /// Degrees of freedom of the fit; infinite where none are stated.
    pub degrees_of_freedom: f64,
}

impl Covariance {
    /// Returns the errors that a covariance matrix stands for.
    ///
    /// - `matrix`: symmetric, as many rows and columns as there are keys.
    ///
    /// # Errors
    /// `Error::Unfit` for a matrix that is none of errors: not square, not symmetric, or with a negative variance.
    pub fn new(key: &str, keys: Vec<String>, matrix: &[Vec<f64>], degrees_of_freedom: f64) -> Result<Self, Error> {
        let wrong = Error::Unfit { what: "a covariance is a symmetric matrix without negative variances" };
        let count = keys.len();
        let at = |i: usize, j: usize| matrix.get(i).and_then(|row| row.get(j)).copied().unwrap_or(f64::NAN);
        let mut root = std::vec![std::vec![0.0; count]; count];
        for i in 0..count {
            for j in 0..=i {
                let scale = crate::math::sqrt((at(i, i) * at(j, j)).abs());
                let asymmetric = (at(i, j) - at(j, i)).abs();
                // NaN is no covariance
                if !(asymmetric <= 1e-9 * scale && at(i, j).abs() <= (1.0 + 1e-9) * scale) {
                    return Err(wrong);
                }
                let known = |i: usize, k: usize| root.get(i).and_then(|row| row.get(k)).copied().unwrap_or(0.0);
                let sum: f64 = (0..j).map(|k| known(i, k) * known(j, k)).sum();
                let rest = at(i, j) - sum;
                let value = if i == j {
                    // what is left by rounding of a singular matrix is nothing
                    if rest < -1e-9 * at(i, i) {
                        return Err(wrong);
                    }
                    crate::math::sqrt(rest.max(0.0))
                } else if known(j, j) > 0.0 {
                    rest / known(j, j)
                } else {
                    0.0
                };
                if let Some(slot) = root.get_mut(i).and_then(|row| row.get_mut(j)) {
                    *slot = value;
                }
            }
        }
        if matrix.len() != count || matrix.iter().any(|row| row.len() != count) {
            return Err(wrong);
        }
        Ok(Self { key: key.to_string(), keys, root, degrees_of_freedom })
    }
}

/// How readings scattered about their mean.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scatter {
    /// Standard deviation of a single one, as output over supply.
    pub ratio: f64,
    /// How many there were, at least two.
    pub rows: u64,
}

impl Segment {
    pub(super) fn starts_at(&self) -> f64 {
        self.from.as_ref().map_or(f64::NEG_INFINITY, |m| m.seconds)
    }

    /// The inputs that it reads.
    pub fn inputs(&self) -> impl Iterator<Item = usize> {
        let second = |paired: Option<Paired>| paired.map(|p| p.input);
        [Some(self.reading), second(self.paired), self.supply, second(self.supply_paired)].into_iter().flatten()
    }

    /// The side channels: of the gauge, of the leads, of arms 1-4.
    #[must_use]
    pub fn sides(&self) -> [Option<&Side>; 6] {
        let [a, b, c, d] = &self.arm_temperatures;
        [&self.temperature, &self.lead_temperature, a, b, c, d].map(Option::as_ref)
    }

    /// Sets the zero reading as output over supply, and the temperatures where none is stated.
    ///
    /// - `celsius`: mean temperature of the gauge, of the leads, of arms 1-4.
    pub(super) fn set_zero(&mut self, ratio: f64, celsius: [Option<f64>; 6], scatter: Option<Scatter>) {
        self.zero_scatter = scatter;
        if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut self.chain.element {
            zero.reading = Some(crate::strain::ZeroReading::Ratio(ratio));
            let [gauge, leads, arms @ ..] = celsius;
            if !self.zero_temperature_stated {
                zero.celsius = gauge.or(zero.celsius);
            }
            zero.lead_celsius = zero.lead_celsius.or(leads);
            for (slot, arm) in zero.arm_celsius.iter_mut().zip(arms) {
                *slot = slot.or(arm);
            }
        }
        self.zero = ZeroSource::Stated;
    }

    /// The same segment with a zero that merely lets every reading through, to find the one that counts.
    pub(crate) fn provisional(&self) -> Chain {
        let mut chain = self.chain;
        if let Element::Gauge { zero, .. } | Element::Transducer { zero, .. } = &mut chain.element {
            zero.reading = None;
            zero.meaning = ZeroMeaning::Strain;
            zero.celsius = zero.celsius.or(Some(20.0));
            zero.arm_celsius = zero.arm_celsius.map(|t| t.or(Some(20.0)));
        }
        chain
    }
}

/// What a channel is computed from.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum Source {
    /// Readings of the recording, one chain after another in time.
    Reading(Vec<Segment>),
    /// A weighted sum of other channels.
    Combination(Vec<(usize, f64)>),
    /// A strain channel times a factor: uniaxial stress, or the load of a bar.
    Stress {
        /// The strain channel.
        of: usize,
        /// The load of a bar that is computed; `None` = uniaxial stress.
        loading: Option<Loading>,
        /// Section and material of the bar; `None` = uniaxial stress.
        bar: Option<(Section, Material)>,
        /// Modulus in units of the output per unit of the strain channel.
        factor: f64,
    },
    /// One result of a rosette.
    Rosette(Box<RosetteSource>),
}

/// One channel.
#[derive(Clone, Debug, PartialEq)]
pub struct Channel {
    /// Its name.
    pub name: String,
    /// Unit of its values, as printed.
    pub unit: String,
    /// Digits behind the point; `None` = shortest that read back exactly.
    pub decimals: Option<u8>,
    /// Whether it appears in results.
    pub show: bool,
    /// What it is computed from.
    pub source: Source,
    /// Uncertainties of keys that are not the chain's: the modulus.
    pub stated: Vec<Stated>,
    /// Keys whose error it shares with all channels that share them.
    pub shared: Vec<String>,
}

impl Channel {
    /// Returns the segments of a channel that reads the recording.
    #[must_use]
    pub fn segments(&self) -> Option<&Vec<Segment>> {
        match &self.source {
            Source::Reading(segments) => Some(segments),
            Source::Combination(_) | Source::Stress { .. } | Source::Rosette(_) => None,
        }
    }

    pub(super) fn segments_mut(&mut self) -> Option<&mut Vec<Segment>> {
        match &mut self.source {
            Source::Reading(segments) => Some(segments),
            Source::Combination(_) | Source::Stress { .. } | Source::Rosette(_) => None,
        }
    }

    /// Channels that must be computed before this one.
    pub(super) fn feeders(&self) -> Vec<usize> {
        match &self.source {
            Source::Reading(segments) => {
                segments.iter().flat_map(Segment::sides).flatten().map(|t| t.channel).collect()
            }
            Source::Combination(terms) => terms.iter().map(|(channel, _)| *channel).collect(),
            Source::Stress { of, .. } => std::vec![*of],
            Source::Rosette(rosette) => rosette.feeders(),
        }
    }
}

/// Returns an order in which every channel comes after those that feed it.
pub(super) fn in_order(channels: &[Channel]) -> Result<Vec<usize>, MeasurementError> {
    let mut order: Vec<usize> = Vec::with_capacity(channels.len());
    let mut waiting: Vec<usize> = (0..channels.len()).collect();
    while !waiting.is_empty() {
        let (ready, rest): (Vec<usize>, Vec<usize>) = waiting
            .iter()
            .copied()
            .partition(|i| channels.get(*i).is_some_and(|c| c.feeders().iter().all(|f| order.contains(f))));
        if ready.is_empty() {
            let channel = rest.first().and_then(|i| channels.get(*i)).map_or_else(String::new, |c| c.name.clone());
            return Err(MeasurementError::Circle { channel });
        }
        order.extend(ready);
        waiting = rest;
    }
    let late = late(channels, &order);
    for channel in channels {
        let Source::Reading(segments) = &channel.source else { continue };
        for side in segments.iter().flat_map(Segment::sides).flatten() {
            if late.get(side.channel) == Some(&true) {
                let side = channels.get(side.channel).map_or_else(String::new, |c| c.name.clone());
                return Err(MeasurementError::LateSide { channel: channel.name.clone(), side });
            }
        }
    }
    Ok(order)
}

/// Which channels wait for a side channel's next sample, themselves or through those that feed them.
pub(super) fn late(channels: &[Channel], order: &[usize]) -> Vec<bool> {
    let mut late = std::vec![false; channels.len()];
    for &i in order {
        let Some(channel) = channels.get(i) else { continue };
        let own = channel.segments().is_some_and(|s| s.iter().any(|s| s.sides().iter().any(Option::is_some)));
        let fed = channel.feeders().iter().any(|f| late.get(*f) == Some(&true));
        if let Some(flag) = late.get_mut(i) {
            *flag = own || fed;
        }
    }
    late
}
