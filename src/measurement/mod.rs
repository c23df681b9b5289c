//! Channels that feed one another, over blocks of rows.
//!
//! A [`Measurement`] knows what each channel is made of; an [`Engine`] runs it over a recording in blocks, holding back
//! just the rows that wait for the next sample of a side channel; a [`ZeroPass`] finds the zeros that are means over
//! rows or a time window.

mod again;
mod channel;
mod engine;
mod every;
mod paired;
mod propagation;
mod rosette;
mod shunt_step;
mod side;
mod statistics;
mod tolerance;
mod uncertain;
mod zero_pass;

use std::string::String;
use std::vec::Vec;

pub use again::{Again, AgainPass, AgainWindow, Drift, Returned, ZeroPlace};
pub use channel::{Channel, ColumnRef, Covariance, Moment, Scatter, Segment, Source, ToleranceClass, ZeroSource};
pub use engine::{Converted, Engine};
pub use every::EveryReading;
pub use paired::{Paired, Pairing};
pub use propagation::{Budget, Cause, Improvement, Propagation, State};
pub use rosette::{Give, Grids, RosetteSource};
pub use shunt_step::{ShuntDoubt, ShuntStep, ShuntVerdict, ShuntWatch};
pub use side::{Between, Side};
pub use statistics::Statistics;
pub use tolerance::Tolerance;
pub use uncertain::Stated;
pub use zero_pass::{ZeroPass, Zeros, ZerosElsewhere};

/// What a sheet states of an uncertainty.
pub use crate::uncertainty::Uncertainty;

use crate::chain::Word;

/// One column of numbers with a word for each; NaN where the word has no number.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Column {
    /// The values.
    pub values: Vec<f64>,
    /// What is to be said of each.
    pub words: Vec<Word>,
}

impl Column {
    /// Returns a column of so many rows without numbers.
    #[must_use]
    pub fn missing(rows: usize) -> Self {
        Self { values: std::vec![f64::NAN; rows], words: std::vec![Word::Missing; rows] }
    }
}

/// Why a measurement cannot be run.
#[derive(Clone, Debug, PartialEq)]
#[non_exhaustive]
pub enum MeasurementError {
    /// A chain cannot be lowered.
    Chain {
        /// Name of the channel.
        channel: String,
        /// What is wrong.
        error: crate::Error,
    },
    /// Channels feed each other in a circle.
    Circle {
        /// Name of a channel in the circle.
        channel: String,
    },
    /// The temperature channel is interpolated itself.
    LateSide {
        /// Name of the channel that asks for it.
        channel: String,
        /// Name of the temperature channel.
        side: String,
    },
    /// No row of the zero window can be converted.
    NoZero {
        /// Name of the channel.
        channel: String,
        /// The window in words.
        window: String,
        /// Why its rows cannot be converted.
        reasons: String,
        /// Where the window is written, as `file:line:column`, if the recording has no row in it; otherwise empty.
        place: String,
    },
    /// Rows of the zero window lie within the shunt step of the channel.
    ShuntedZero {
        /// Name of the channel.
        channel: String,
        /// The window in words.
        window: String,
        /// How many of its rows.
        rows: u64,
        /// The step in words, from its first moment to its last.
        step: String,
        /// Where the step is written, as `file:line:column`; empty where nobody knows.
        place: String,
    },
    /// The second zero of a channel cannot be used.
    Again {
        /// Name of the channel.
        channel: String,
        /// Why, in words.
        reason: String,
        /// Where its window is written, as `file:line:column`, if the recording has no row in it; otherwise empty.
        place: String,
    },
    /// Two moments of a sheet are the wrong way round: of two changes, or of the ends of a window.
    Order {
        /// Name of the channel.
        channel: String,
        /// The moment that is stated first.
        first: String,
        /// The moment that is stated after it.
        second: String,
        /// Where that is written, as `file:line:column`; empty where nobody knows.
        place: String,
    },
}

impl MeasurementError {
    /// Returns where the sheet states what is wrong, as `file:line:column`, where that is known to be one place.
    #[must_use]
    pub fn place(&self) -> Option<&str> {
        match self {
            Self::NoZero { place, .. }
            | Self::ShuntedZero { place, .. }
            | Self::Again { place, .. }
            | Self::Order { place, .. } => Some(place.as_str()).filter(|place| !place.is_empty()),
            Self::Chain { .. } | Self::Circle { .. } | Self::LateSide { .. } => None,
        }
    }
}

impl core::fmt::Display for MeasurementError {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        match self {
            Self::Chain { channel, error } => write!(f, "channel '{channel}': {error}"),
            Self::Circle { channel } => write!(f, "channel '{channel}' depends on itself"),
            Self::LateSide { channel, side } => {
                write!(
                    f,
                    "channel '{channel}' takes its temperature from '{side}', which itself waits for a temperature"
                )
            }
            Self::NoZero { channel, window, reasons, .. } => {
                write!(f, "channel '{channel}': no zero, since no reading in {window} can be converted ({reasons})")
            }
            Self::ShuntedZero { channel, window, rows, step, .. } => write!(
                f,
                "channel '{channel}': {rows} of the rows that its zero is read from, {window}, lie within its shunt step {step}; a zero is read without the shunt"
            ),
            Self::Again { channel, reason, .. } => write!(f, "channel '{channel}': {reason}"),
            Self::Order { channel, first, second, .. } => {
                write!(f, "channel '{channel}': '{second}' must come after '{first}'")
            }
        }
    }
}

impl core::error::Error for MeasurementError {}

/// All channels of a sheet, in its order.
#[derive(Clone, Debug, PartialEq)]
pub struct Measurement {
    /// Title of the sheet; empty when it has none.
    pub title: String,
    /// Recording columns that the channels read, each once.
    pub inputs: Vec<ColumnRef>,
    /// The channels, in the order of the sheet.
    pub channels: Vec<Channel>,
    /// Order in which to compute them.
    order: Vec<usize>,
}

impl Measurement {
    /// Returns a measurement of these channels.
    ///
    /// # Errors
    /// `MeasurementError::Circle` or `MeasurementError::LateSide` for channels that cannot be put in order.
    pub fn new(title: String, inputs: Vec<ColumnRef>, channels: Vec<Channel>) -> Result<Self, MeasurementError> {
        let order = channel::in_order(&channels)?;
        Ok(Self { title, inputs, channels, order })
    }

    /// Returns the channel of this name.
    #[must_use]
    pub fn position(&self, name: &str) -> Option<usize> {
        self.channels.iter().position(|c| c.name == name)
    }

    /// Gives every moment of the sheet (`from`, `to`) its place on the time scale of a recording.
    ///
    /// # Errors
    /// What `place` returns for the first moment it refuses.
    pub fn place_moments<E>(&mut self, mut place: impl FnMut(&Moment) -> Result<f64, E>) -> Result<(), E> {
        for segment in self.channels.iter_mut().filter_map(Channel::segments_mut).flatten() {
            if let Some(from) = &mut segment.from {
                from.seconds = place(from)?;
            }
            match &mut segment.zero {
                ZeroSource::Window { from, to } => {
                    from.seconds = place(from)?;
                    to.seconds = place(to)?;
                }
                ZeroSource::RowsFrom { from, .. } => from.seconds = place(from)?,
                ZeroSource::Stated | ZeroSource::Rows(_) => {}
            }
            if let Some(Again { window: AgainWindow::Window { from, to }, .. }) = &mut segment.again {
                from.seconds = place(from)?;
                to.seconds = place(to)?;
            }
            if let Some(step) = &mut segment.shunt {
                step.from.seconds = place(&step.from)?;
                step.to.seconds = place(&step.to)?;
            }
        }
        Ok(())
    }

    /// Checks that changes follow one another and that windows do not end before they begin.
    ///
    /// # Errors
    /// `MeasurementError::Order` for the first two moments that do not.
    pub fn check_moments(&self) -> Result<(), MeasurementError> {
        for channel in &self.channels {
            let segments = channel.segments().map_or(&[][..], Vec::as_slice);
            let froms: Vec<&Moment> = segments.iter().filter_map(|s| s.from.as_ref()).collect();
            let changes = froms.iter().zip(froms.iter().skip(1)).map(|(a, b)| (*a, *b, a.seconds >= b.seconds));
            let windows = segments.iter().filter_map(|s| match &s.zero {
                ZeroSource::Window { from, to } => Some((from, to, from.seconds > to.seconds)),
                _ => None,
            });
            let second = segments.iter().filter_map(|s| match &s.again {
                Some(Again { window: AgainWindow::Window { from, to }, .. }) => {
                    Some((from, to, from.seconds > to.seconds))
                }
                _ => None,
            });
            let windows = windows.chain(second);
            let shunts = segments.iter().filter_map(|s| s.shunt.as_ref());
            let shunts = shunts.map(|step| (&step.from, &step.to, step.from.seconds >= step.to.seconds));
            if let Some((first, second, _)) = changes.chain(windows).chain(shunts).find(|(.., wrong)| *wrong) {
                return Err(MeasurementError::Order {
                    channel: channel.name.clone(),
                    first: first.text.clone(),
                    second: second.text.clone(),
                    place: second.place.clone(),
                });
            }
        }
        Ok(())
    }

    /// Returns whether some zero is a mean over rows or a time window that has yet to be read.
    #[must_use]
    pub fn needs_zero_pass(&self) -> bool {
        self.channels.iter().filter_map(Channel::segments).flatten().any(|s| s.zero != ZeroSource::Stated)
    }

    /// Returns the other recordings that zeros have yet to be read from, each once.
    #[must_use]
    pub fn zero_files(&self) -> Vec<String> {
        let mut out = Vec::new();
        for segment in self.channels.iter().filter_map(Channel::segments).flatten() {
            if let Some(file) =
                segment.zero_file.as_ref().filter(|f| segment.zero != ZeroSource::Stated && !out.contains(*f))
            {
                out.push(file.clone());
            }
        }
        out
    }

    /// Returns whether some channel needs the time of each row.
    #[must_use]
    pub fn needs_time(&self) -> bool {
        self.channels.iter().filter_map(Channel::segments).flatten().any(|s| {
            s.from.is_some()
                || s.shunt.is_some()
                || matches!(s.zero, ZeroSource::Window { .. } if s.zero_file.is_none())
                || s.again.as_ref().is_some_and(|again| {
                    matches!(again.window, AgainWindow::Window { .. }) || again.drift == Some(Drift::Time)
                })
                || s.sides().iter().any(Option::is_some)
        })
    }
}
