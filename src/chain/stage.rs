//! The stages of a plan: what is believed, and the constants that each step needs.

use super::Word;
use super::kernel;
use super::live::Live;
use super::plan::Inputs;
use super::polynomial::Warm;
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

    /// The same for one reading, where branches are cheaper.
    #[inline(always)]
    #[allow(
        clippy::neg_cmp_op_on_partial_ord,
        reason = "NaN went with the first comparison, and this form loads nothing"
    )]
    pub(super) fn encloses(&self, x: f64) -> bool {
        x >= self.low && !(x > self.high)
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
    pub(super) ends: Span,
    pub(super) low: Option<Limit>,
    pub(super) high: Option<Limit>,
    /// All of it as one closed stretch.
    pub(super) believed: Span,
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

/// The stretches that are covered by the laws and limits as stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Covered {
    pub(super) front: Span,
    pub(super) result: Span,
    pub(super) temperature: Span,
}
