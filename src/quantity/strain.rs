//! Strain: a ratio of lengths that must not be mixed with other ratios.

use core::fmt;
use core::ops::{Add, Div, Mul, Neg, Sub};

use uom::si::f64::{Pressure, Ratio};
use uom::si::ratio::ratio;

/// Strain, the relative change of length; positive in tension.
///
/// A type of its own, so that a strain, a voltage ratio and a relative change of resistance cannot be mixed.
///
/// ```
/// use ohmwright::Strain;
/// use uom::si::{f64::Pressure, pressure::{gigapascal, megapascal}};
///
/// let stress = Pressure::new::<gigapascal>(205.0) * Strain::from_microstrain(1000.0);
/// assert!((stress.get::<megapascal>() - 205.0).abs() < 1e-12);
/// ```
#[derive(Clone, Copy, Debug, Default, PartialEq, PartialOrd)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize), serde(transparent))]
pub struct Strain(f64);

impl Strain {
    /// No strain.
    pub const ZERO: Self = Self(0.0);

    /// Returns the strain from its plain value, m/m.
    #[must_use]
    pub const fn from_strain(strain: f64) -> Self {
        Self(strain)
    }

    /// Returns the strain from microstrain, µm/m.
    #[must_use]
    pub const fn from_microstrain(microstrain: f64) -> Self {
        Self(microstrain / 1e6)
    }

    /// Returns the strain from percent.
    #[must_use]
    pub const fn from_percent(percent: f64) -> Self {
        Self(percent / 1e2)
    }

    /// Returns the plain value, m/m.
    #[must_use]
    pub const fn strain(self) -> f64 {
        self.0
    }

    /// Returns the value in microstrain, µm/m.
    #[must_use]
    pub const fn microstrain(self) -> f64 {
        self.0 * 1e6
    }

    /// Returns the value in percent.
    #[must_use]
    pub const fn percent(self) -> f64 {
        self.0 * 1e2
    }
}

impl From<Strain> for Ratio {
    fn from(strain: Strain) -> Self {
        Self::new::<ratio>(strain.0)
    }
}

impl From<Ratio> for Strain {
    fn from(value: Ratio) -> Self {
        Self(value.get::<ratio>())
    }
}

impl Add for Strain {
    type Output = Self;
    fn add(self, o: Self) -> Self {
        Self(self.0 + o.0)
    }
}

impl Sub for Strain {
    type Output = Self;
    fn sub(self, o: Self) -> Self {
        Self(self.0 - o.0)
    }
}

impl Neg for Strain {
    type Output = Self;
    fn neg(self) -> Self {
        Self(-self.0)
    }
}

impl Mul<f64> for Strain {
    type Output = Self;
    fn mul(self, factor: f64) -> Self {
        Self(self.0 * factor)
    }
}

impl Div<f64> for Strain {
    type Output = Self;
    fn div(self, divisor: f64) -> Self {
        Self(self.0 / divisor)
    }
}

impl Mul<Strain> for Pressure {
    type Output = Self;
    fn mul(self, strain: Strain) -> Self {
        self * strain.0
    }
}

impl Mul<Pressure> for Strain {
    type Output = Pressure;
    fn mul(self, modulus: Pressure) -> Pressure {
        modulus * self.0
    }
}

impl fmt::Display for Strain {
    /// Prints in microstrain with its unit; precision applies to the number.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.microstrain().fmt(f)?;
        f.write_str(" µm/m")
    }
}
