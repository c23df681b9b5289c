//! The plan: a chain lowered to a few constants, and everything that runs on it.

use super::kernel;
use super::law::{Heating, Law};
use super::live::{Live, State, turned};
use super::polynomial::Warm;
use super::{Word, dispatch};
use crate::Error;
use crate::math::horner;
use crate::strain::{Points, Tau};
use crate::thermocouple::Function;

/// A closed stretch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Span {
    pub(super) low: f64,
    pub(super) high: f64,
}

impl Span {
    /// Every finite number: an infinite one is no result and no temperature.
    pub(super) const ALL: Self = Self { low: f64::MIN, high: f64::MAX };

    #[inline(always)]
    pub(super) fn holds(&self, x: f64) -> bool {
        // one `&` of two comparisons: no branch in a slice loop
        (x >= self.low) & (x <= self.high)
    }

    pub(super) fn both(self, o: Self) -> Self {
        Self { low: self.low.max(o.low), high: self.high.min(o.high) }
    }

    /// The same stretch of x where this one is of `shift + scale x`.
    pub(super) fn through(self, shift: f64, scale: f64) -> Self {
        let (a, b) = ((self.low - shift) / scale, (self.high - shift) / scale);
        Self { low: a.min(b), high: a.max(b) }
    }
}

/// A reading that is not believed beyond one value.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Limit {
    /// Last believed reading, in the unit of the readings.
    pub at: f64,
    /// What a reading beyond it means.
    #[cfg_attr(feature = "serde", serde(with = "word_text"))]
    pub word: Word,
}

#[cfg(feature = "serde")]
mod word_text {
    use super::Word;
    use serde::{Deserialize, Deserializer, Serializer, de::Error};

    pub(super) fn serialize<S: Serializer>(word: &Word, s: S) -> Result<S::Ok, S::Error> {
        s.serialize_str(word.as_str())
    }

    pub(super) fn deserialize<'a, D: Deserializer<'a>>(d: D) -> Result<Word, D::Error> {
        let text = <&str>::deserialize(d)?;
        Word::ALL.into_iter().find(|w| w.as_str() == text).ok_or_else(|| D::Error::custom("unknown word"))
    }
}

/// What is believed of the raw reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Raw {
    /// End codes of the converter; ±∞ without one. At or beyond them the reading is saturated.
    ends: Span,
    low: Option<Limit>,
    high: Option<Limit>,
    /// All of it as one closed stretch.
    believed: Span,
}

impl Raw {
    pub(super) fn new(ends: Span, low: Option<Limit>, high: Option<Limit>, circuit: bool) -> Self {
        let inside = Span { low: ends.low.next_up(), high: ends.high.next_down() };
        let sane = Span { low: -kernel::ABSURD, high: kernel::ABSURD };
        let inside = if circuit { inside.both(sane) } else { inside };
        let limits = Span { low: low.map_or(f64::NEG_INFINITY, |l| l.at), high: high.map_or(f64::INFINITY, |l| l.at) };
        Self { ends, low, high, believed: inside.both(limits) }
    }
}

/// What it means when the network's unknown leaves its believed stretch.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Fault {
    /// It is a resistance, or the relative change of one arm that rises (or falls) with it.
    Sensor { short_below: f64, open_above: f64 },
    /// The same with the sense turned.
    Turned { open_below: f64, short_above: f64 },
    /// Several arms move: beyond these some arm has no believable resistance.
    Arms(Span),
    /// There is no circuit.
    None,
}

/// From reading to the network's unknown (or to the result itself where the tail is folded in).
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub(super) enum Front {
    /// y = (n₀ + n₁ u)/(d₀ + d₁ u).
    Moebius { n: [f64; 2], d: [f64; 2] },
    /// Second degree.
    Quadratic { n: [f64; 3], d: [f64; 3], branch: f64 },
    /// Up to fourth degree.
    Quartic { n: [f64; 5], d: [f64; 5], branch: f64 },
    /// Arms that move with strain and temperature differently.
    Arms(Heated),
    /// Leads or arms with temperatures of their own.
    Live(Live),
}

/// Degree of a ratio of polynomials, rounded up to one that there is a loop for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Degree {
    First,
    Second,
    Fourth,
}

/// A network whose polynomials in u change with the temperature, reading by reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Heated {
    pub(super) n: Warm,
    pub(super) d: Warm,
    pub(super) tau: Tau,
    pub(super) tau_at_zero: f64,
    pub(super) branch: f64,
    pub(super) degree: Degree,
}

impl Heated {
    /// τ at this temperature, °C.
    #[inline(always)]
    pub(super) fn tau_at(&self, celsius: f64) -> f64 {
        self.tau.at(celsius) - self.tau_at_zero
    }

    /// Numerator and denominator at this τ.
    #[inline(always)]
    pub(super) fn at_tau(&self, tau: f64) -> ([f64; 5], [f64; 5]) {
        (self.n.at(tau), self.d.at(tau))
    }

    /// Numerator and denominator at this temperature, °C.
    #[inline(always)]
    pub(super) fn at(&self, celsius: f64) -> ([f64; 5], [f64; 5]) {
        self.at_tau(self.tau_at(celsius))
    }
}

/// How leads follow their temperature: factor = 1 + α (T − T_ref).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Warmth {
    pub(super) coefficient: f64,
    pub(super) reference: f64,
}

impl Warmth {
    /// Whether leads at this temperature still have a resistance.
    #[inline(always)]
    pub(super) fn holds(&self, celsius: f64) -> bool {
        1.0 + self.coefficient * (celsius - self.reference) > 0.0
    }
}

/// What the leads of a thermometer add at their temperature, Ω: a + b T.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Excess {
    pub(super) line: [f64; 2],
    pub(super) warmth: Warmth,
}

impl Excess {
    #[inline(always)]
    pub(super) fn at(&self, celsius: f64) -> f64 {
        let [a, b] = self.line;
        a + b * celsius
    }
}

/// What comes off (or on) between the network and the law, by a temperature that comes with the reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Shift {
    /// Leads of a thermometer; what is left of the whole path is the sensor by R = (N q₀ − p₀)/(p₁ − N q₁).
    Leads { excess: Excess, p: [f64; 2], q: [f64; 2] },
    /// The reference junction of a thermocouple.
    Junction(&'static Function),
}

impl Shift {
    /// The temperature of this row that it goes by, °C.
    #[inline(always)]
    pub(super) fn temperature(&self, inputs: &Inputs) -> f64 {
        match self {
            Self::Leads { .. } => inputs.lead_celsius,
            Self::Junction(_) => inputs.celsius,
        }
    }

    /// What the law takes for what the network gives.
    #[inline(always)]
    pub(super) fn remove(&self, celsius: f64, v: f64) -> f64 {
        match self {
            Self::Leads { excess, p, q } => {
                let path = kernel::without_excess(excess, celsius, v);
                (path * q[0] - p[0]) / (p[1] - path * q[1])
            }
            // E(t) = E + E(t reference)
            Self::Junction(f) => kernel::mask_by(f.holds(celsius), v + f.millivolts_from_celsius(celsius)),
        }
    }

    /// What the network gives for what the law takes.
    pub(super) fn put(&self, celsius: f64, v: f64) -> f64 {
        match self {
            Self::Leads { excess, p, q } => (p[0] + p[1] * v) / (q[0] + q[1] * v) + excess.at(celsius),
            Self::Junction(f) => v - f.millivolts_from_celsius(celsius),
        }
    }

    /// Whether it can be told at this temperature.
    #[inline(always)]
    pub(super) fn holds(&self, celsius: f64) -> bool {
        match self {
            Self::Leads { excess, .. } => excess.warmth.holds(celsius),
            Self::Junction(f) => f.holds(celsius),
        }
    }
}

/// The last step.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub(super) enum Tail {
    None,
    /// q = scale · v + offset.
    Affine {
        scale: f64,
        offset: f64,
    },
    /// q = (v − p(T))/(f₀ + f₁ T).
    Thermal {
        p: [f64; 7],
        f: [f64; 2],
    },
    /// The same with a table of points: p(T) + scale · table(T).
    ThermalPoints {
        p: [f64; 7],
        f: [f64; 2],
        points: Points,
        scale: f64,
    },
}

/// What comes with every reading besides the supply.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Uses {
    pub(super) temperature: bool,
    pub(super) lead: bool,
    pub(super) arms: [bool; 4],
}

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
}

/// The stretches that are covered by the laws and limits as stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Covered {
    pub(super) front: Span,
    pub(super) result: Span,
    pub(super) temperature: Span,
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

/// What became of a slice.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[must_use]
pub struct Batch {
    /// How many readings have no number.
    pub invalid: usize,
    /// Index of the first of them.
    pub first_invalid: Option<usize>,
}

/// Steps towards the temperature of a thermometer that warms itself; a few do, unless it runs away.
const HEATING_STEPS: usize = 32;

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
    pub fn one(&self, inputs: impl Into<Inputs>) -> Outcome {
        let inputs = inputs.into();
        let value = self.value(&inputs);
        let word = if value.is_nan() || self.is_watched() { self.word(&inputs) } else { Word::Good };
        Outcome { value, word }
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
        let invalid = dispatch::convert(self, columns, out);
        let first_invalid = if invalid == 0 { None } else { out.iter().position(|v| v.is_nan()) };
        if let Some(words) = words {
            if invalid == 0 && !self.is_watched() {
                words.fill(Word::Good);
            } else {
                self.name(columns, out, words);
            }
        }
        Ok(Batch { invalid, first_invalid })
    }

    /// Whether something may have to be said of a number that there is.
    const fn is_watched(&self) -> bool {
        // two temperatures share an emf in type B alone
        self.extrapolate || matches!(self.law, Law::Thermocouple(crate::thermocouple::Thermocouple::B))
    }

    /// Says what is to be said of each result.
    fn name(&self, columns: &Columns<'_>, out: &[f64], words: &mut [Word]) {
        for (i, (word, value)) in words.iter_mut().zip(out).enumerate() {
            *word = Word::Good;
            if value.is_nan() || self.is_watched() {
                *word = self.word(&columns.row(i));
            }
        }
    }

    /// Returns the reading that this quantity gives.
    ///
    /// - `quantity`: in the unit of the output.
    /// - `inputs`: supply and temperature where the chain uses them; `reading` is ignored.
    ///
    /// # Errors
    /// `Error::Flagged` with `OutOfRange` when the quantity lies outside what the chain believes, unless it extrapolates;
    /// `Error::NotFinite` for NaN or ±∞.
    pub fn forward(&self, quantity: f64, inputs: impl Into<Inputs>) -> Result<f64, Error> {
        if !quantity.is_finite() {
            return Err(Error::NotFinite { what: "quantity" });
        }
        let inputs = inputs.into();
        let t = inputs.celsius;
        if self.temperatures(&inputs).any(|t| !t.is_finite()) {
            return Err(Error::NotFinite { what: "temperature" });
        }
        let outside = Err(Error::Flagged(Word::OutOfRange));
        if !self.extrapolate
            && !(self.span.holds(quantity) && (!self.uses_temperature() || self.temperature_span.holds(t)))
        {
            return outside;
        }
        let v = match &self.tail {
            Tail::None => quantity,
            Tail::Affine { scale, offset } => (quantity - offset) / scale,
            Tail::Thermal { p, f: [f0, f1] } => quantity * (f0 + f1 * t) + horner(t, p),
            Tail::ThermalPoints { p, f: [f0, f1], points, scale } => {
                quantity * (f0 + f1 * t) + (horner(t, p) + scale * points.at(t))
            }
        };
        let v = match &self.heating {
            Some(heating) => match self.heated(heating, v, inputs.supply) {
                Some(v) => v,
                None => return outside,
            },
            None => v,
        };
        if !self.extrapolate && !self.law.covers().holds(v) {
            return outside;
        }
        let u = self.law.argument(v);
        let believed = match self.fault {
            Fault::Sensor { short_below, open_above } => Span { low: short_below, high: open_above }.holds(u),
            Fault::Turned { open_below, short_above } => Span { low: open_below, high: short_above }.holds(u),
            Fault::Arms(span) => span.holds(u),
            Fault::None => true,
        };
        if !believed || (!self.extrapolate && matches!(self.law, Law::None) && !self.front_span.holds(u)) {
            return outside;
        }
        // what is believed is the thermometer, without its leads
        let u = match &self.shift {
            Some(shift) if !shift.holds(shift.temperature(&inputs)) => return outside,
            Some(shift) => shift.put(shift.temperature(&inputs), u),
            None => u,
        };
        let y = match &self.front {
            Front::Moebius { n, d } => horner(u, n) / horner(u, d),
            Front::Quadratic { n, d, .. } => horner(u, n) / horner(u, d),
            Front::Quartic { n, d, .. } => horner(u, n) / horner(u, d),
            Front::Arms(arms) => {
                let (n, d) = arms.at(t);
                horner(u, &n) / horner(u, &d)
            }
            Front::Live(live) => match live.output(u, &inputs) {
                Some(y) => y,
                None => return outside,
            },
        };
        Ok(if self.divides_by_supply { y * inputs.supply - self.reading_offset } else { y })
    }

    /// The result, NaN where there is none: what a slice loop computes, for one reading.
    #[inline(always)]
    fn value(&self, inputs: &Inputs) -> f64 {
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

    /// The temperature of the thermometer itself where what it measures has this one: t = T + ΔT(R(t)).
    fn heated(&self, heating: &Heating, celsius: f64, supply: f64) -> Option<f64> {
        let Span { low, high } = self.law.covers();
        let excess = |t: f64| t - heating.kelvin(self.law.argument(t), supply) - celsius;
        // from the side on which nothing is too warm yet: the first state that the thermometer reaches
        let mut t = celsius;
        for _ in 0..HEATING_STEPS {
            let h = 1e-6 * (1.0 + t.abs());
            let slope = (excess(t + h) - excess(t - h)) / (2.0 * h);
            let next = t - excess(t) / slope;
            let moved = (next - t).abs();
            t = next;
            if moved <= 1e-13 * (1.0 + t.abs()) {
                break;
            }
        }
        let settled = excess(t).abs() <= 1e-10 * (1.0 + t.abs());
        (settled && (self.extrapolate || (t >= low && t <= high))).then_some(t)
    }

    /// Whether the laws of a live bridge cover the temperatures of this reading.
    fn covers_arms(&self, live: &Live, inputs: &Inputs) -> bool {
        let arms = self.uses.arms.iter().zip(inputs.arm_celsius).all(|(used, t)| !used || live.covers.holds(t));
        arms && (!self.uses.temperature || live.covers.holds(inputs.celsius))
    }

    /// Whether leads are leads, and a reference junction one, at the temperature of this reading.
    fn has_leads(&self, inputs: &Inputs) -> bool {
        let warmth = match &self.front {
            Front::Live(live) => live.warmth,
            _ => None,
        };
        warmth.is_none_or(|w| w.holds(inputs.lead_celsius))
            && self.shift.as_ref().is_none_or(|s| s.holds(s.temperature(inputs)))
    }

    /// The word of a reading that has no believed result in a bridge with several driven arms.
    fn of_arms(&self, inputs: &Inputs, stretch: &Span, y: f64) -> Word {
        let (n, d) = match &self.front {
            Front::Moebius { .. } => return Word::Open,
            Front::Quadratic { n: [n0, n1, n2], d: [d0, d1, d2], .. } => {
                ([*n0, *n1, *n2, 0.0, 0.0], [*d0, *d1, *d2, 0.0, 0.0])
            }
            Front::Quartic { n, d, .. } => (*n, *d),
            Front::Arms(arms) => arms.at(inputs.celsius),
            Front::Live(live) => {
                let state = live.at(inputs);
                (state.n, state.d)
            }
        };
        if turned(&n, &d, stretch, y) { Word::OutOfRange } else { Word::Open }
    }

    /// The temperatures that come with a reading and count.
    fn temperatures<'a>(&'a self, inputs: &'a Inputs) -> impl Iterator<Item = f64> + 'a {
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

    /// Why there is no number, or what is to be said of the number there is.
    #[cold]
    fn word(&self, inputs: &Inputs) -> Word {
        let r = inputs.reading;
        if r.is_nan() {
            return Word::Missing;
        }
        if r <= self.raw.ends.low || r >= self.raw.ends.high {
            return Word::Saturated;
        }
        if let Some(limit) = self.raw.low.filter(|l| r < l.at) {
            return limit.word;
        }
        if let Some(limit) = self.raw.high.filter(|l| r > l.at) {
            return limit.word;
        }
        if (self.uses_supply() && inputs.supply.is_nan()) || self.temperatures(inputs).any(f64::is_nan) {
            return Word::Missing;
        }
        if (self.uses_supply() && inputs.supply.is_infinite()) || self.temperatures(inputs).any(f64::is_infinite) {
            return Word::Saturated;
        }
        if self.uses_supply() && inputs.supply == 0.0 {
            return Word::OutOfRange;
        }
        if matches!(self.front, Front::Arms(_)) && !self.temperature_span.holds(inputs.celsius) {
            // nothing can be said of the arms at a temperature that the laws do not cover
            return Word::OutOfRange;
        }
        if !self.has_leads(inputs) {
            return Word::OutOfRange;
        }
        let y = kernel::enter(self, r, inputs.supply);
        let past_pole = |[n0, n1]: [f64; 2], [d0, d1]: [f64; 2]| {
            let here = n1 - d1 * y;
            let home = (n1 * d0 - n0 * d1) / d0;
            here == 0.0 || (here < 0.0) != (home < 0.0)
        };
        let beyond = match &self.front {
            Front::Moebius { n, d } => past_pole(*n, *d),
            Front::Arms(arms) if arms.degree == Degree::First => {
                let ([n0, n1, ..], [d0, d1, ..]) = arms.at(inputs.celsius);
                past_pole([n0, n1], [d0, d1])
            }
            _ => false,
        };
        if beyond {
            // more than infinite
            return if matches!(self.fault, Fault::None) { Word::OutOfRange } else { Word::Open };
        }
        let u = match &self.front {
            Front::Moebius { n, d } => kernel::moebius(n, d, y),
            Front::Quadratic { n, d, branch } => kernel::quadratic(n, d, *branch, y),
            Front::Quartic { n, d, branch } => kernel::quartic(n, d, *branch, y),
            Front::Arms(arms) => kernel::heated(arms, inputs.celsius, y),
            Front::Live(live) => {
                if !self.covers_arms(live, inputs) {
                    return Word::OutOfRange;
                }
                let state = live.at(inputs);
                let value = live.solve(&state, y);
                let ([low, high], [least, most]) = (live.believed, state.multiples(value));
                if value.is_nan() || least < low || most > high {
                    let (State { n: [n0, n1, ..], d: [d0, d1, ..], .. }, first) =
                        (&state, live.degree == Degree::First);
                    return match live.single() {
                        _ if first && past_pole([*n0, *n1], [*d0, *d1]) => Word::Open,
                        true if least < low => Word::Short,
                        true => Word::Open,
                        false => self.of_arms(inputs, &state.stretch(live.believed), y),
                    };
                }
                value
            }
        };
        let u = match &self.shift {
            Some(shift) => shift.remove(shift.temperature(inputs), u),
            None => u,
        };
        match self.fault {
            Fault::Sensor { short_below, .. } if u < short_below => return Word::Short,
            Fault::Sensor { open_above, .. } if u.is_nan() || u > open_above => return Word::Open,
            Fault::Turned { open_below, .. } if u.is_nan() || u < open_below => return Word::Open,
            Fault::Turned { short_above, .. } if u > short_above => return Word::Short,
            Fault::Arms(span) if !span.holds(u) => return self.of_arms(inputs, &span, y),
            _ => {}
        }
        let value = self.value(inputs);
        if value.is_nan() {
            return Word::OutOfRange;
        }
        let inside = self.covered.front.holds(u)
            && self
                .uses
                .arms
                .iter()
                .zip(inputs.arm_celsius)
                .all(|(used, t)| !used || self.covered.temperature.holds(t))
            && self.covered.result.holds(value)
            && (!self.uses_temperature() || self.covered.temperature.holds(inputs.celsius));
        match inside {
            false => Word::Extrapolated,
            true if self.law.is_ambiguous(u) => Word::Ambiguous,
            true => Word::Good,
        }
    }
}
