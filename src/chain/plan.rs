//! The plan: a chain lowered to a few constants, and everything that runs on it.

use super::kernel;
use super::law::{Heating, Law};
#[cfg(feature = "capi")]
use super::short::Kind;
use super::short::Short;
use super::stage::{Covered, Fault, Front, Raw, Shift, Span, Tail, Uses};
use super::{Word, dispatch};
use crate::Error;

/// A chain lowered to the few constants that its readings need.
///
/// Scalar, slice, any split into blocks, with and without wide vector instructions: the same bits. Nothing here can
/// panic or allocate.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plan {
    pub(super) raw: Raw,
    pub(super) divides_by_supply: bool,
    pub(super) reading_offset: f64,
    pub(super) front: Front,
    /// What a temperature that comes with the reading adds to what the law takes.
    pub(super) shift: Option<Shift>,
    pub(super) front_span: Span,
    pub(super) fault: Fault,
    pub(super) law: Law,
    /// What the measuring current adds to a thermometer's own temperature.
    pub(super) heating: Option<Heating>,
    pub(super) tail: Tail,
    pub(super) span: Span,
    pub(super) temperature_span: Span,
    pub(super) extrapolate: bool,
    pub(super) uses: Uses,
    /// What the laws cover, where the spans above let more through because the chain extrapolates.
    pub(super) covered: Covered,
    /// What does most readings, one at a time.
    pub(super) short: Short,
}

/// One reading with what comes with it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Inputs {
    /// The reading, in the unit of the chain.
    pub reading: f64,
    /// The supply, in the unit of its column; ignored where the chain has no supply column.
    pub supply: f64,
    /// Temperature of the gauge, or of a thermocouple's reference junction, °C; ignored where the chain has no temperature column.
    pub celsius: f64,
    /// Temperature of the leads, °C; ignored where the chain does not ask for it.
    pub lead_celsius: f64,
    /// Temperatures of arms 1-4, °C; those are ignored that the chain does not ask for.
    pub arm_celsius: [f64; 4],
}

impl From<f64> for Inputs {
    fn from(reading: f64) -> Self {
        Self { reading, ..Self::default() }
    }
}

/// Readings in order, with what comes with them.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Columns<'a> {
    /// The readings, in the unit of the chain.
    pub readings: &'a [f64],
    /// The supply of each, in the unit of its column; empty where the chain has no supply column.
    pub supplies: &'a [f64],
    /// Temperature of the gauge, or of a thermocouple's reference junction, at each, °C; empty where the chain has no temperature column.
    pub celsius: &'a [f64],
    /// Temperature of the leads at each, °C; empty where the chain does not ask for it.
    pub lead_celsius: &'a [f64],
    /// Temperatures of arms 1-4 at each, °C; those are empty that the chain does not ask for.
    pub arm_celsius: [&'a [f64]; 4],
}

impl Columns<'_> {
    /// Returns one row; 0 stands in columns that are empty.
    #[inline]
    pub(super) fn row(&self, i: usize) -> Inputs {
        let at = |column: &[f64]| column.get(i).copied().unwrap_or(0.0);
        Inputs {
            reading: at(self.readings),
            supply: at(self.supplies),
            celsius: at(self.celsius),
            lead_celsius: at(self.lead_celsius),
            arm_celsius: self.arm_celsius.map(at),
        }
    }
}

/// Result of one reading: a number where the word has one, NaN otherwise.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Outcome {
    /// The result in the unit of the chain's output.
    pub value: f64,
    /// What is to be said of it.
    pub word: Word,
}

impl Outcome {
    /// Returns the number.
    ///
    /// # Errors
    /// `Error::Flagged` with the word where there is none.
    pub fn number(self) -> Result<f64, Error> {
        if self.word.has_number() { Ok(self.value) } else { Err(Error::Flagged(self.word)) }
    }
}

/// The two plainest short ways, which a caller that knows them need not look up.
#[cfg(feature = "capi")]
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Way {
    /// Any but these, or none.
    Other,
    /// One moving arm.
    Line,
    /// One gauge, its thermal output a cubic and its factor constant.
    Cubic,
}

/// What became of a slice.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[must_use]
pub struct Batch {
    /// How many readings have no number.
    pub invalid: usize,
    /// Index of the first of them.
    pub first_invalid: Option<usize>,
}

/// Rows that are carried through all stages together, so that they stay in the first-level cache.
pub(super) const BLOCK: usize = 512;

impl Plan {
    /// Returns whether every reading comes with its own temperature.
    #[must_use]
    pub const fn uses_temperature(&self) -> bool {
        self.uses.temperature
    }

    /// Returns whether every reading comes with the temperature of its leads.
    #[must_use]
    pub const fn uses_lead_temperature(&self) -> bool {
        self.uses.lead
    }

    /// Returns which arms' temperatures come with every reading.
    #[must_use]
    pub const fn uses_arm_temperatures(&self) -> [bool; 4] {
        self.uses.arms
    }

    /// Returns whether every reading comes with its own supply.
    #[must_use]
    pub const fn uses_supply(&self) -> bool {
        self.divides_by_supply
    }

    /// Converts one reading.
    #[must_use]
    #[inline]
    pub fn one(&self, inputs: impl Into<Inputs>) -> Outcome {
        let inputs = inputs.into();
        match self.short.value(&self.law, inputs.reading, inputs.celsius) {
            Some(value) => Outcome { value, word: Word::Good },
            None => self.whole(&inputs),
        }
    }

    /// Which short way one reading takes.
    #[cfg(feature = "capi")]
    pub(crate) fn way(&self) -> Way {
        match self.short.kind {
            Kind::Cubic => Way::Cubic,
            Kind::Line => Way::Line,
            _ => Way::Other,
        }
    }

    /// Converts one reading the short way, where it has one and the reading is an ordinary one; `way` is the plan's own.
    #[cfg(feature = "capi")]
    #[inline(always)]
    pub(crate) fn short(&self, way: Way, reading: f64, celsius: f64) -> Option<f64> {
        match way {
            Way::Other => self.short.value(&self.law, reading, celsius),
            Way::Line => self.short.line(reading),
            Way::Cubic => self.short.cubic(reading, celsius),
        }
    }

    /// Converts one reading through all stages.
    pub(crate) fn whole(&self, inputs: &Inputs) -> Outcome {
        let value = self.value(inputs);
        if !value.is_nan() && !self.is_watched() {
            return Outcome { value, word: Word::Good };
        }
        let word = self.word(inputs);
        Outcome { value: if word.has_number() { value } else { f64::NAN }, word }
    }

    /// Converts readings in order.
    ///
    /// - `columns`: readings and what comes with them; all slices that the chain uses have one length.
    /// - `out`: the results, of the same length; NaN where there is no number.
    /// - `words`: what is to be said of each; `None` where the NaN is enough.
    ///
    /// # Errors
    /// `Error::LengthMismatch` when the lengths differ; nothing is written then.
    pub fn slice(&self, columns: &Columns<'_>, out: &mut [f64], words: Option<&mut [Word]>) -> Result<Batch, Error> {
        let expected = columns.readings.len();
        let equal =
            |what, got| if got == expected { Ok(()) } else { Err(Error::LengthMismatch { what, expected, got }) };
        equal("the output slice", out.len())?;
        if self.uses_supply() {
            equal("the supply column", columns.supplies.len())?;
        }
        if self.uses_temperature() {
            equal("the temperature column", columns.celsius.len())?;
        }
        if self.uses.lead {
            equal("the lead temperature column", columns.lead_celsius.len())?;
        }
        for (used, column) in self.uses.arms.iter().zip(&columns.arm_celsius) {
            if *used {
                equal("an arm temperature column", column.len())?;
            }
        }
        if let Some(words) = &words {
            equal("the slice of words", words.len())?;
        }
        let mut invalid = dispatch::convert(self, columns, out);
        match words {
            Some(words) if invalid == 0 && !self.is_watched() => words.fill(Word::Good),
            Some(words) => {
                for (i, (word, value)) in words.iter_mut().zip(&mut *out).enumerate() {
                    *word = self.name(columns, i, value, &mut invalid);
                }
            }
            None if self.is_watched() => {
                for (i, value) in out.iter_mut().enumerate() {
                    self.name(columns, i, value, &mut invalid);
                }
            }
            None => {}
        }
        let first_invalid = if invalid == 0 { None } else { out.iter().position(|v| v.is_nan()) };
        Ok(Batch { invalid, first_invalid })
    }

    /// Whether something may have to be said of a number that there is.
    pub(super) const fn is_watched(&self) -> bool {
        // two temperatures share an emf in type B alone
        self.extrapolate || matches!(self.law, Law::Thermocouple(crate::thermocouple::Thermocouple::B))
    }

    /// Says what is to be said of a result, which is none where its word stands beside no number.
    fn name(&self, columns: &Columns<'_>, row: usize, value: &mut f64, invalid: &mut usize) -> Word {
        if !value.is_nan() && !self.is_watched() {
            return Word::Good;
        }
        let word = self.word(&columns.row(row));
        if !word.has_number() && !value.is_nan() {
            *value = f64::NAN;
            *invalid += 1;
        }
        word
    }

    /// The result, NaN where there is none: what a slice loop computes, for one reading.
    #[inline(always)]
    pub(super) fn value(&self, inputs: &Inputs) -> f64 {
        let mut v = kernel::enter(self, inputs.reading, inputs.supply);
        v = match &self.front {
            Front::Moebius { n, d } => kernel::moebius(n, d, v),
            Front::Quadratic { n, d, branch } => kernel::quadratic(n, d, *branch, v),
            Front::Quartic { n, d, branch } => kernel::quartic(n, d, *branch, v),
            Front::Arms(arms) => kernel::heated(arms, inputs.celsius, v),
            Front::Live(live) => live.value(v, inputs),
        };
        if let Some(shift) = &self.shift {
            v = shift.remove(shift.temperature(inputs), v);
        }
        v = kernel::mask(v, &self.front_span);
        let sensor = v;
        v = self.law.result(sensor);
        if let Some(heating) = &self.heating {
            v -= heating.kelvin(sensor, inputs.supply);
        }
        match &self.tail {
            Tail::None => {}
            Tail::Affine { scale, offset } => v = scale * v + offset,
            Tail::Thermal { p, f } => v = kernel::thermal(p, f, &self.temperature_span, inputs.celsius, v),
            Tail::ThermalPoints { p, f, points, scale } => {
                v = kernel::thermal_points(p, f, points, *scale, &self.temperature_span, inputs.celsius, v);
            }
        }
        kernel::mask(v, &self.span)
    }

    /// The temperatures that come with a reading and count.
    pub(super) fn temperatures<'a>(&'a self, inputs: &'a Inputs) -> impl Iterator<Item = f64> + 'a {
        let main = self.uses.temperature.then_some(inputs.celsius);
        let lead = self.uses.lead.then_some(inputs.lead_celsius);
        let arms = self.uses.arms.iter().zip(inputs.arm_celsius).filter(|(used, _)| **used).map(|(_, t)| t);
        main.into_iter().chain(lead).chain(arms)
    }

    /// Raw readings that pass.
    #[inline(always)]
    pub(super) fn raw_holds(&self, reading: f64) -> bool {
        self.raw.believed.holds(reading)
    }
}
