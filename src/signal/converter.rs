//! Analogue-to-digital converter: codes to volts, or to a share of the supply.

use super::positive;
use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;
use crate::range::Range;

/// How the code is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Coding {
    /// Bipolar, two's complement: −2^(N−1) ..= 2^(N−1) − 1.
    Signed,
    /// Bipolar, offset binary: 0 ..= 2^N − 1 with zero volts at 2^(N−1).
    Offset,
    /// Unipolar: 0 ..= 2^N − 1 with zero volts at 0.
    Unsigned,
}

/// What the full scale refers to.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum FullScale<R = f64> {
    /// The bridge supply itself: the code is a ratio.
    Supply,
    /// A voltage, V.
    Volts(R),
}

/// A converter of `bits` bits: V = code · FS / 2^(N−1) when bipolar, code · FS / 2^N when unipolar.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Converter<R = f64> {
    /// Number of bits, 1..=52.
    pub bits: u8,
    /// Full scale.
    pub full_scale: FullScale<R>,
    /// Coding.
    pub coding: Coding,
}

impl<R: Real> Converter<R> {
    /// Code that stands for zero volts.
    pub(crate) fn zero_code(&self) -> f64 {
        if self.coding == Coding::Offset { self.half_range() } else { 0.0 }
    }

    /// 2^(N−1).
    fn half_range(&self) -> f64 {
        (1u64 << (self.bits.clamp(1, 52) - 1)) as f64
    }

    /// Codes per full scale.
    pub(crate) fn codes(&self) -> f64 {
        match self.coding {
            Coding::Signed | Coding::Offset => self.half_range(),
            Coding::Unsigned => 2.0 * self.half_range(),
        }
    }

    /// Lowest and highest code: a reading there says only that the signal is at or beyond it.
    pub(crate) fn end_codes(&self) -> (f64, f64) {
        let half = self.half_range();
        match self.coding {
            Coding::Signed => (-half, half - 1.0),
            Coding::Offset | Coding::Unsigned => (0.0, 2.0 * half - 1.0),
        }
    }

    /// Full scale in volts, or 1 of the supply.
    pub(crate) fn full_scale(&self) -> R {
        match self.full_scale {
            FullScale::Supply => R::from_f64(1.0),
            FullScale::Volts(v) => v,
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        Range::new("converter bits", "", 1.0, 52.0).check(f64::from(self.bits))?;
        positive("converter full scale", "V", self.full_scale())
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Converter<S> {
        Converter {
            bits: self.bits,
            full_scale: match self.full_scale {
                FullScale::Supply => FullScale::Supply,
                FullScale::Volts(v) => FullScale::Volts(f(Parameter::FullScale, v)),
            },
            coding: self.coding,
        }
    }
}
