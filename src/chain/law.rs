//! The sensor's law as a plan runs it: from resistance (emf, output of a transducer) to the quantity and back.

use super::stage::Span;
use crate::platinum::Inverse;
use crate::platinum::its90::Deviation;
use crate::strain::PlainCertificate;
use crate::thermocouple::Thermocouple;
use crate::{metal, thermistor};

/// From resistance to temperature, or what else a sensor's law says.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub(super) enum Law {
    /// The front's unknown is the result.
    None,
    Platinum(Inverse),
    /// A standard platinum thermometer of ITS-90.
    Standard {
        triple_point_ohms: f64,
        deviation: Deviation,
    },
    Metal(metal::Law),
    Thermistor(thermistor::Law),
    /// Emf in mV to temperature.
    Thermocouple(Thermocouple),
    /// A transducer's polynomial between output and load, in its own units.
    Certificate(PlainCertificate),
}

impl Law {
    /// What the law gives; the caller has checked the range.
    #[inline(always)]
    pub(super) fn result(&self, v: f64) -> f64 {
        match self {
            Self::None => v,
            Self::Platinum(k) => k.celsius_from_ohms(v),
            Self::Standard { triple_point_ohms, deviation } => deviation.celsius_from_ratio(v / triple_point_ohms),
            Self::Metal(k) => k.celsius_from_ohms(v),
            Self::Thermistor(k) => k.celsius_from_ohms(v),
            Self::Thermocouple(k) => k.function().celsius_from_millivolts(v),
            Self::Certificate(k) if k.gives_output => k.inverse(v),
            Self::Certificate(k) => k.polynomial(v),
        }
    }

    /// What has this result.
    pub(super) fn argument(&self, result: f64) -> f64 {
        match self {
            Self::None => result,
            Self::Platinum(k) => k.law().ohms_from_celsius(result),
            Self::Standard { triple_point_ohms, deviation } => triple_point_ohms * deviation.ratio_from_celsius(result),
            Self::Metal(k) => k.ohms_from_celsius(result),
            Self::Thermistor(k) => k.ohms_from_celsius(result),
            Self::Thermocouple(k) => k.function().millivolts_from_celsius(result),
            Self::Certificate(k) if k.gives_output => k.polynomial(result),
            Self::Certificate(k) => k.inverse(result),
        }
    }

    /// Results that the law covers.
    pub(super) fn covers(&self) -> Span {
        let [low, high] = match self {
            Self::None => return Span::ALL,
            Self::Platinum(k) => k.law().range_celsius,
            Self::Standard { deviation, .. } => deviation.range_celsius(),
            Self::Metal(k) => k.range_celsius(),
            Self::Thermistor(k) => k.range_celsius(),
            Self::Thermocouple(k) => {
                let range = k.celsius_range();
                [range.min, range.max]
            }
            Self::Certificate(k) => k.range,
        };
        Span { low, high }
    }

    /// Arguments that the law covers; `None` for a transducer's, which its network knows.
    pub(super) fn arguments(&self) -> Span {
        let (low, high) = match self {
            Self::None | Self::Certificate(_) => return Span::ALL,
            Self::Thermocouple(k) => {
                let range = k.millivolts_range();
                (range.min, range.max)
            }
            _ => {
                let Span { low, high } = self.covers();
                let (a, b) = (self.argument(low), self.argument(high));
                (a.min(b), a.max(b))
            }
        };
        Span { low, high }
    }

    /// Whether two results have this argument.
    #[inline]
    pub(super) fn is_ambiguous(&self, v: f64) -> bool {
        matches!(self, Self::Thermocouple(k) if k.is_ambiguous(v))
    }
}

/// What a thermometer is warmer than what it measures, through the current that reads it: ΔT = g s² R/(b + c R)², s the
/// supply that comes with the reading.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Heating {
    /// g, K/W times the square of a current or of a voltage.
    pub(super) gain: f64,
    pub(super) line: [f64; 2],
    pub(super) by_supply: bool,
}

impl Heating {
    /// ΔT in K at a resistance.
    #[inline(always)]
    pub(super) fn kelvin(&self, ohms: f64, supply: f64) -> f64 {
        let [b, c] = self.line;
        let through = if self.by_supply { supply } else { 1.0 } / (b + c * ohms);
        self.gain * (through * through) * ohms
    }
}
