//! The zero of a strain channel, in its three meanings.

use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;
use crate::signal::finite;

/// What the reading at zero strain says about the circuit.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum ZeroMeaning {
    /// The gauge was strained by x₀ when the zero was taken, by bonding or dead load: strain(reading) − strain(zero),
    /// both through the exact inverse.
    #[default]
    Strain,
    /// The gauge's own resistance was off by x₀: e = (x − x₀)/(1 + x₀)/F.
    Resistance,
    /// The passive arm 2 was off.
    Completion,
}

/// The reading at zero strain.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum ZeroReading<R = f64> {
    /// As recorded, in the unit of the readings.
    AsRecorded(R),
    /// Output over supply behind converter and amplifier gain, V/V: what a mean over a window gives.
    Ratio(R),
}

/// Reading, meaning and temperature of the zero.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Zero<R = f64> {
    /// The reading; `None` = the bridge as stated, balanced or not, is at zero strain.
    pub reading: Option<ZeroReading<R>>,
    /// What it says about the circuit.
    pub meaning: ZeroMeaning,
    /// Temperature T₀ at which it was taken, °C; needed with thermal output.
    pub celsius: Option<R>,
    /// Temperature of the leads when it was taken, °C; `None` = that at which their resistance is stated, or the one
    /// value that holds for all readings.
    pub lead_celsius: Option<R>,
    /// Temperatures of arms that have their own, °C.
    pub arm_celsius: [Option<R>; 4],
}

impl<R> Default for Zero<R> {
    fn default() -> Self {
        Self {
            reading: None,
            meaning: ZeroMeaning::Strain,
            celsius: None,
            lead_celsius: None,
            arm_celsius: [const { None }; 4],
        }
    }
}

impl<R: Real> Zero<R> {
    pub(crate) fn check(&self) -> Result<(), Error> {
        match self.reading {
            Some(ZeroReading::AsRecorded(r) | ZeroReading::Ratio(r)) => finite("zero reading", r)?,
            None => {}
        }
        for t in [self.celsius, self.lead_celsius].iter().chain(&self.arm_celsius).flatten() {
            finite("temperature at zero", *t)?;
        }
        Ok(())
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Zero<S> {
        Zero {
            reading: self.reading.map(|z| match z {
                ZeroReading::AsRecorded(r) => ZeroReading::AsRecorded(f(Parameter::ZeroReading, r)),
                ZeroReading::Ratio(r) => ZeroReading::Ratio(f(Parameter::ZeroReading, r)),
            }),
            meaning: self.meaning,
            celsius: self.celsius.map(|t| f(Parameter::ZeroTemperature, t)),
            lead_celsius: self.lead_celsius.map(|t| f(Parameter::ZeroLeadTemperature, t)),
            arm_celsius: {
                let mut n = 0;
                self.arm_celsius.map(|t| {
                    n += 1;
                    t.map(|t| f(Parameter::ZeroArmTemperature(n), t))
                })
            },
        }
    }
}
