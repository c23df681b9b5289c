//! Trials, and what is read off them.

use std::thread;
use std::vec::Vec;

use super::deviate;
use crate::Error;
use crate::uncertainty::{Interval, Uncertainty, decimals};

/// Results of all trials.
#[derive(Clone, Debug, PartialEq)]
pub struct Run {
    /// In rising order.
    sorted: Vec<f64>,
    mean: f64,
    standard: f64,
    lost: usize,
}

/// Runs a model so many times, its inputs off by draws from their distributions.
///
/// - `trials`: at least 2; 10⁶ often give two digits of a 95 % interval (JCGM 101:2008, 7.2.2).
/// - `threads`: how many work at a time, 0 for as many as there are processors. The figures do not depend on it.
/// - `seed`: another one gives another set of draws.
/// - `inputs`: their uncertainties, independent of each other.
/// - `model`: gets by how much each input is off and returns the result; NaN for a trial that gives none.
///
/// # Errors
/// `Error::OutOfRange` for fewer than 2 trials; `Error::Blind` where hardly a trial gives a result.
/// # Example
/// ```
/// use ohmwright::montecarlo::simulate;
/// use ohmwright::uncertainty::Uncertainty;
///
/// // JCGM 101:2008, 9.2.3: the sum of four rectangular inputs of standard uncertainty 1: 95 % within ±3.88
/// let inputs = [Uncertainty::Rectangular { half_width: 3f64.sqrt() }; 4];
/// let run = simulate(200_000, 0, 1, &inputs, |off| off.iter().sum())?;
/// let [low, high] = run.symmetric(0.95);
/// assert!((low + 3.88).abs() < 0.03 && (high - 3.88).abs() < 0.03);
/// # Ok::<(), ohmwright::Error>(())
/// ```
pub fn simulate(
    trials: usize,
    threads: usize,
    seed: u64,
    inputs: &[Uncertainty],
    model: impl Fn(&[f64]) -> f64 + Sync,
) -> Result<Run, Error> {
    if trials < 2 {
        return Err(Error::OutOfRange {
            what: "number of trials",
            value: trials as f64,
            min: 2.0,
            max: f64::INFINITY,
            unit: "",
        });
    }
    let threads = match threads {
        0 => thread::available_parallelism().map_or(1, core::num::NonZero::get),
        n => n,
    };
    let mut values = std::vec![f64::NAN; trials];
    let share = trials.div_ceil(threads.min(trials));
    thread::scope(|scope| {
        for (place, part) in values.chunks_mut(share).enumerate() {
            let model = &model;
            scope.spawn(move || {
                let mut off = std::vec![0.0; inputs.len()];
                for (value, trial) in part.iter_mut().zip((place * share) as u64..) {
                    for ((off, input), number) in off.iter_mut().zip(inputs).zip(0..) {
                        *off = deviate(input, seed, trial, number);
                    }
                    *value = model(&off);
                }
            });
        }
    });
    Run::of(values)
}

impl Run {
    /// Sums are taken in the order of the trials.
    fn of(mut values: Vec<f64>) -> Result<Self, Error> {
        let trials = values.len();
        values.retain(|v| v.is_finite());
        let count = values.len();
        if count < 2 {
            return Err(Error::Blind);
        }
        let n = count as f64;
        let mean = values.iter().sum::<f64>() / n;
        let squares: f64 = values.iter().map(|v| (v - mean) * (v - mean)).sum();
        let standard = crate::math::sqrt(squares / (n - 1.0));
        values.sort_by(f64::total_cmp);
        Ok(Self { sorted: values, mean, standard, lost: trials - count })
    }

    /// Returns the mean of the results: the estimate (JCGM 101:2008, (16)).
    #[must_use]
    pub const fn mean(&self) -> f64 {
        self.mean
    }

    /// Returns the standard deviation of the results: the standard uncertainty (JCGM 101:2008, (17)).
    #[must_use]
    pub const fn standard(&self) -> f64 {
        self.standard
    }

    /// Returns the number of trials that gave a result.
    #[must_use]
    pub const fn count(&self) -> usize {
        self.sorted.len()
    }

    /// Returns the number of trials that gave none.
    #[must_use]
    pub const fn lost(&self) -> usize {
        self.lost
    }

    /// How many results an interval of this probability spans (JCGM 101:2008, 7.7.2).
    fn span(&self, probability: f64) -> usize {
        let count = self.sorted.len();
        (libm::floor(probability * count as f64 + 0.5).max(0.0) as usize).min(count.saturating_sub(1))
    }

    fn at(&self, place: usize) -> f64 {
        self.sorted.get(place).copied().unwrap_or(f64::NAN)
    }

    /// Returns the interval with as much probability below as above it.
    ///
    /// # Source
    /// JCGM 101:2008, 7.7.2.
    #[must_use]
    pub fn symmetric(&self, probability: f64) -> [f64; 2] {
        let (count, span) = (self.sorted.len(), self.span(probability));
        // y_(r) and y_(r + q), r = (M − q)/2 rounded up at a half, counted from 1
        let first = (count - span).div_ceil(2).max(1) - 1;
        [self.at(first), self.at(first + span)]
    }

    /// Returns the shortest interval with this probability; of equally short ones the lowest.
    ///
    /// # Source
    /// JCGM 101:2008, 7.7.4.
    #[must_use]
    pub fn shortest(&self, probability: f64) -> [f64; 2] {
        let span = self.span(probability);
        let mut best = [self.at(0), self.at(span)];
        for (low, high) in self.sorted.iter().zip(self.sorted.iter().skip(span)) {
            if high - low < best[1] - best[0] {
                best = [*low, *high];
            }
        }
        best
    }

    /// Returns the share of all trials whose result lies within limits; a trial without a result does not.
    ///
    /// # Source
    /// JCGM 106:2012, 7.1: the probability that the quantity conforms, here by counting.
    #[must_use]
    pub fn within(&self, limits: Interval) -> f64 {
        let below = self.sorted.partition_point(|v| *v < limits.low);
        let upto = self.sorted.partition_point(|v| *v <= limits.high);
        upto.saturating_sub(below) as f64 / (self.sorted.len() + self.lost) as f64
    }

    /// Returns whether an interval of the first-order kind agrees with these trials to the digits that are printed.
    ///
    /// - `estimate`, `expanded`: y and U of the first-order evaluation.
    /// - `standard`: its standard uncertainty, whose second significant digit sets the tolerance.
    ///
    /// # Source
    /// JCGM 101:2008, 8.1 and 7.9.2: δ is half a unit of the second significant digit of u(y), and both ends of the interval
    /// must agree within it.
    #[must_use]
    pub fn validate(&self, estimate: f64, standard: f64, expanded: f64, probability: f64) -> Validation {
        let [low, high] = self.symmetric(probability);
        let tolerance = decimals(standard).map_or(0.0, |places| 0.5 * libm::pow(10.0, -f64::from(places)));
        Validation { low: (estimate - expanded - low).abs(), high: (estimate + expanded - high).abs(), tolerance }
    }
}

/// How far the ends of a first-order interval are from those of the trials.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Validation {
    /// d_low.
    pub low: f64,
    /// d_high.
    pub high: f64,
    /// Numerical tolerance δ.
    pub tolerance: f64,
}

impl Validation {
    /// Returns whether both are within the tolerance.
    #[must_use]
    pub fn holds(&self) -> bool {
        self.low <= self.tolerance && self.high <= self.tolerance
    }
}
