//! Side channels: a slow thermometer beside fast strain.

use std::string::String;
use std::vec::Vec;

use super::Column;
use crate::chain::Word;

/// What holds between two samples.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum Between {
    /// The straight line from one to the next.
    Line,
    /// The last one: for live use, since it does not wait.
    Last,
}

/// A channel whose value is needed at every row of another.
#[derive(Clone, Debug, PartialEq)]
pub struct Side {
    /// The channel.
    pub channel: usize,
    /// What holds between its samples.
    pub between: Between,
    /// Longest time between two samples that is bridged, s.
    pub longest_gap: f64,
    /// What its values are multiplied by and what is then added to get °C.
    pub to_celsius: (f64, f64),
    /// Its name, for messages.
    pub name: String,
}

/// A sample in time.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Sample {
    pub(super) seconds: f64,
    pub(super) value: f64,
}

/// Samples of a column that can be used.
pub(super) fn samples<'a>(seconds: &'a [f64], column: &'a Column) -> impl DoubleEndedIterator<Item = Sample> + 'a {
    seconds
        .iter()
        .zip(&column.values)
        .filter(|(t, v)| t.is_finite() && v.is_finite())
        .map(|(t, v)| Sample { seconds: *t, value: *v })
}

/// The next sample, and the latest time on the way to it, itself included.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Ahead {
    pub(super) sample: Sample,
    pub(super) latest: f64,
}

/// The sample before, and the latest time since.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Behind {
    pub(super) sample: Sample,
    pub(super) latest: f64,
}

impl Behind {
    /// What is behind once these rows have passed.
    pub(super) fn after(before: Option<Self>, seconds: &[f64], column: &Column) -> Option<Self> {
        seconds.iter().zip(&column.values).filter(|(t, _)| t.is_finite()).fold(before, |behind, (t, v)| {
            if v.is_finite() {
                return Some(Self { sample: Sample { seconds: *t, value: *v }, latest: *t });
            }
            behind.map(|b| Self { latest: b.latest.max(*t), ..b })
        })
    }
}

impl Side {
    /// Returns the side channel at every row: its own sample where there is one, otherwise what holds between the
    /// samples around. `excused` is set where the channel merely rests between two samples.
    ///
    /// A line is drawn only where no row between its two samples is later than `longest_gap` after the first: that can
    /// be told without waiting for the second, so it does not depend on how the recording is split into blocks.
    pub(super) fn at_rows(
        &self,
        seconds: &[f64],
        own: &Column,
        before: Option<Behind>,
        after: Option<Ahead>,
        excused: &mut [bool],
    ) -> Column {
        let rows = own.values.len();
        let time_at = |i: usize| seconds.get(i).copied().filter(|t| t.is_finite());
        // the next sample at or after each row, from the end
        let mut next: Vec<Option<Ahead>> = std::vec![after; rows];
        let mut coming = after;
        for (slot, (i, v)) in next.iter_mut().rev().zip(own.values.iter().enumerate().rev()) {
            if let Some(t) = time_at(i) {
                coming = if v.is_finite() {
                    Some(Ahead { sample: Sample { seconds: t, value: *v }, latest: t })
                } else {
                    coming.map(|c| Ahead { latest: c.latest.max(t), ..c })
                };
            }
            *slot = coming;
        }
        let mut out = Column::missing(rows);
        let mut last = before;
        let (scale, offset) = self.to_celsius;
        for i in 0..rows {
            let value = own.values.get(i).copied().unwrap_or(f64::NAN);
            let word = own.words.get(i).copied().unwrap_or(Word::Missing);
            if let Some(t) = time_at(i) {
                last = if value.is_finite() {
                    Some(Behind { sample: Sample { seconds: t, value }, latest: t })
                } else {
                    last.map(|b| Behind { latest: b.latest.max(t), ..b })
                };
            }
            let found = if value.is_finite() {
                Some(value)
            } else {
                time_at(i).zip(last).and_then(|(t, last)| self.bridge(t, &last, next.get(i).copied().flatten()))
            };
            let (Some(v), Some(w)) = (out.values.get_mut(i), out.words.get_mut(i)) else { continue };
            match found {
                Some(found) => {
                    *v = scale * found + offset;
                    *w = if value.is_finite() { word } else { Word::Good };
                    if word == Word::Missing
                        && let Some(flag) = excused.get_mut(i)
                    {
                        *flag = true;
                    }
                }
                None => *w = if word.has_number() { Word::Missing } else { word },
            }
        }
        out
    }

    fn bridge(&self, time: f64, last: &Behind, next: Option<Ahead>) -> Option<f64> {
        let a = last.sample;
        match self.between {
            Between::Last => (time - a.seconds <= self.longest_gap).then_some(a.value),
            Between::Line => {
                let next = next?;
                let b = next.sample;
                let bridged = last.latest.max(next.latest) - a.seconds <= self.longest_gap;
                if !bridged || a.seconds >= b.seconds || !(a.seconds..=b.seconds).contains(&time) {
                    return None;
                }
                // v = a + (b − a)(t − t_a)/(t_b − t_a)
                Some(a.value + (b.value - a.value) * ((time - a.seconds) / (b.seconds - a.seconds)))
            }
        }
    }
}
