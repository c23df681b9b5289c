//! Every published form of a thermistor's curve behind one face.

use super::{Beta, ICE_KELVIN, Law, Linearising, LogarithmOfRatio, Points, ReciprocalOfTemperature};
use super::{celsius_from_ohms_beta, celsius_from_ohms_steinhart_hart};
use crate::Error;
use crate::math::{Real, exp, ln};
use crate::range::Range;
use crate::signal::{finite, positive};

/// A curve of a thermistor.
#[derive(Clone, Copy, Debug, PartialEq)]
#[non_exhaustive]
#[allow(clippy::large_enum_variant, reason = "plain data of one size, with no allocator to box it")]
pub enum Curve<R = f64> {
    /// Two or three constants.
    Law(Law<R>),
    /// Four terms, resistance from temperature.
    LogarithmOfRatio(LogarithmOfRatio<R>),
    /// Four terms, temperature from resistance.
    ReciprocalOfTemperature(ReciprocalOfTemperature<R>),
    /// Points.
    Points(Points<R>),
}

impl<R: Real> Curve<R> {
    /// Returns the lowest and highest temperature of the curve, °C.
    #[must_use]
    pub fn range_celsius(&self) -> [f64; 2] {
        match self {
            Self::Law(k) => k.range_celsius(),
            Self::LogarithmOfRatio(k) => k.range_celsius,
            Self::ReciprocalOfTemperature(k) => k.range_celsius,
            Self::Points(k) => k.range_celsius(),
        }
    }

    /// Resistance in Ω at `t` °C; the caller has checked the range.
    pub(crate) fn ohms_from_celsius(&self, t: R) -> R {
        match self {
            Self::Law(k) => k.ohms_from_celsius(t),
            Self::LogarithmOfRatio(k) => k.ohms_from_celsius(t),
            Self::ReciprocalOfTemperature(k) => k.ohms_from_celsius(t),
            Self::Points(k) => k.ohms_from_celsius(t),
        }
    }
}

impl Curve {
    /// Temperature in °C at `ohms`; the caller has checked the range.
    pub(crate) fn celsius_from_ohms(&self, ohms: f64) -> f64 {
        match self {
            Self::Law(Law::Beta(k)) => celsius_from_ohms_beta(k, ohms),
            Self::Law(Law::SteinhartHart(k)) => celsius_from_ohms_steinhart_hart(k, ohms),
            Self::LogarithmOfRatio(k) => k.celsius_from_ohms(ohms),
            Self::ReciprocalOfTemperature(k) => k.celsius_from_ohms(ohms),
            Self::Points(k) => k.celsius_from_ohms(ohms),
        }
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        let constants = match self {
            Self::Law(k) => return k.check(),
            Self::Points(_) => None,
            Self::LogarithmOfRatio(k) => Some((k.reference_ohms, [k.a, k.b, k.c, k.d])),
            Self::ReciprocalOfTemperature(k) => Some((k.reference_ohms, [k.a, k.b, k.c, k.d])),
        };
        if let Some((reference, terms)) = constants {
            positive("resistance to which the ratio refers", "ohm", reference)?;
            for k in terms {
                finite("coefficient of the thermistor", k)?;
            }
        }
        let [low, high] = self.range_celsius();
        Range::new("lowest temperature of the thermistor", "°C", -273.0, 1000.0).check(low)?;
        Range::new("highest temperature of the thermistor", "°C", low, 1000.0).check(high)?;
        // the resistance must fall all over the range, and the inverse must arrive
        let mut last = f64::INFINITY;
        for step in 0..=128 {
            let t = low + (high - low) * f64::from(step) / 128.0;
            let ohms = self.ohms_from_celsius(t);
            positive("resistance of the thermistor in its range", "ohm", ohms)?;
            let off = (self.celsius_from_ohms(ohms) - t).abs();
            if ohms >= last || off.is_nan() || off > 1e-9 {
                return Err(Error::Unfit { what: "the thermistor's curve does not fall steadily over its range" });
            }
            last = ohms;
        }
        Ok(())
    }
}

impl Beta {
    /// Returns the law through two points (°C, Ω): β = ln(R₁/R₂)/(1/T₁ − 1/T₂).
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a temperature at or below −273 °C, a resistance that is not positive,
    /// or two points between which the resistance does not fall.
    /// # Source
    /// The definition of β; ranges of a printed table in tests/thermistor_forms.rs.
    pub fn through(first: [f64; 2], second: [f64; 2], range_celsius: [f64; 2]) -> Result<Self, Error> {
        let ([t1, r1], [t2, r2]) = (first, second);
        for (t, r) in [(t1, r1), (t2, r2)] {
            Range::new("temperature of a point", "°C", -273.0, 1000.0).check(t)?;
            positive("resistance of a point", "ohm", r)?;
        }
        let [k1, k2] = [t1, t2].map(|t| t + ICE_KELVIN);
        // 1/T₁ − 1/T₂ = (t₂ − t₁)/(T₁ T₂)
        let beta_kelvin = ln(r1 / r2) * k1 * k2 / (t2 - t1);
        positive("beta of the two points", "K", beta_kelvin)?;
        let r25_ohms = r1 * exp(beta_kelvin * (t1 - 25.0) / (298.15 * k1));
        Ok(Self { r25_ohms, beta_kelvin, range_celsius })
    }
}

/// A thermistor by any published curve, alone or with linearising resistors.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CurveThermistor {
    curve: Curve,
    linearising: Linearising,
    ohms: Range,
}

impl CurveThermistor {
    /// Returns a thermistor with this curve.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a constant that is none, `Error::Unfit` for a curve whose resistance
    /// does not fall steadily over its range.
    pub fn new(curve: Curve) -> Result<Self, Error> {
        Self::with_resistors(curve, Linearising { parallel_ohms: None, series_ohms: 0.0 })
    }

    /// Returns a thermistor between linearising resistors; resistances are then those of the whole network.
    ///
    /// # Errors
    /// As [`new`](Self::new), and for a resistor that is no positive finite number.
    pub fn with_resistors(curve: Curve, linearising: Linearising) -> Result<Self, Error> {
        curve.check()?;
        linearising.check()?;
        let [most, least] = curve.range_celsius().map(|t| linearising.network_from_ohms(curve.ohms_from_celsius(t)));
        Ok(Self { curve, linearising, ohms: Range::new("resistance", "Ω", least, most) })
    }

    /// Returns the curve.
    #[must_use]
    pub const fn curve(&self) -> &Curve {
        &self.curve
    }

    /// Returns the resistors around the thermistor.
    #[must_use]
    pub const fn linearising(&self) -> &Linearising {
        &self.linearising
    }

    /// Returns the resistances that the curve covers, Ω; of the network where there are resistors.
    #[must_use]
    pub const fn ohms_range(&self) -> Range {
        self.ohms
    }

    /// Returns the temperature in °C at a resistance in Ω.
    ///
    /// # Accuracy
    /// Within 1e-9 K of the exact curve (tests/thermistor_forms.rs); with a parallel resistor, what the rounding of the
    /// network's resistance is worth where the resistor hides the thermistor.
    /// # Errors
    /// `Error::OutOfRange` outside [`ohms_range`](Self::ohms_range); `Error::NotFinite` for NaN or ±∞.
    pub fn celsius_from_ohms(&self, ohms: f64) -> Result<f64, Error> {
        Ok(self.curve.celsius_from_ohms(self.linearising.ohms_from_network(self.ohms.check(ohms)?)))
    }

    /// Returns the resistance in Ω at a temperature in °C.
    ///
    /// # Errors
    /// `Error::OutOfRange` outside the range of the curve; `Error::NotFinite` for NaN or ±∞.
    pub fn ohms_from_celsius(&self, celsius: f64) -> Result<f64, Error> {
        let [low, high] = self.curve.range_celsius();
        let t = Range::new("temperature", "°C", low, high).check(celsius)?;
        Ok(self.linearising.network_from_ohms(self.curve.ohms_from_celsius(t)))
    }
}
