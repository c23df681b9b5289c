//! What is stated of an input, and the standard uncertainty it stands for.

use crate::math::sqrt;

/// The form of the distribution that an input is given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Shape {
    /// Normal; Student's t where its degrees of freedom are finite.
    Normal,
    /// All values between two bounds are equally likely.
    Rectangular,
    /// The sum of two equal rectangular ones.
    Triangular,
    /// U-shaped: what a sine takes at a random moment.
    Arcsine,
}

impl Shape {
    /// Returns its name.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Normal => "normal",
            Self::Rectangular => "rectangular",
            Self::Triangular => "triangular",
            Self::Arcsine => "arcsine",
        }
    }

    /// Returns half-width over standard deviation; 1 for a normal one, which has no bounds.
    ///
    /// # Source
    /// JCGM 100:2008 4.3.7 (rectangular, √3) and 4.3.9 (triangular, √6); JCGM 101:2008 6.4.6.4 (arcsine, √2).
    #[must_use]
    pub fn divisor(self) -> f64 {
        match self {
            Self::Normal => 1.0,
            Self::Rectangular => sqrt(3.0),
            Self::Triangular => sqrt(6.0),
            Self::Arcsine => sqrt(2.0),
        }
    }
}

/// A stated uncertainty of one value, in the unit of the value.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Uncertainty {
    /// All values within ± the half-width are equally likely.
    Rectangular {
        /// Half-width.
        half_width: f64,
    },
    /// Values near the middle of ± the half-width are likelier, on a triangle.
    Triangular {
        /// Half-width.
        half_width: f64,
    },
    /// Values near the ends of ± the half-width are likelier, as of a sine.
    Arcsine {
        /// Half-width.
        half_width: f64,
    },
    /// An expanded uncertainty with its coverage factor, normal.
    Expanded {
        /// Expanded uncertainty U.
        expanded: f64,
        /// Coverage factor k.
        coverage_factor: f64,
    },
    /// A standard uncertainty, normal.
    Standard {
        /// Standard uncertainty u.
        standard: f64,
    },
    /// A standard uncertainty that is itself known from few observations only.
    Estimated {
        /// Standard uncertainty u.
        standard: f64,
        /// Its degrees of freedom ν.
        degrees_of_freedom: f64,
        /// Form of the distribution.
        shape: Shape,
    },
}

impl Uncertainty {
    /// Returns the standard uncertainty u.
    ///
    /// u = a/√3 rectangular, a/√6 triangular, a/√2 arcsine; U/k expanded.
    ///
    /// # Source
    /// JCGM 100:2008 4.3.3, 4.3.7, 4.3.9; JCGM 101:2008 6.4.6.
    /// # Example
    /// ```
    /// use ohmwright::uncertainty::Uncertainty;
    ///
    /// // JCGM 100:2008 4.3.7, example: within ±0.4e-6 /°C of 16.52e-6 /°C, u = 0.23e-6 /°C
    /// let alpha = Uncertainty::Rectangular { half_width: 0.40e-6 };
    /// assert!((alpha.standard() - 0.23e-6).abs() <= 0.005e-6);
    /// ```
    #[must_use]
    pub fn standard(&self) -> f64 {
        match *self {
            Self::Rectangular { half_width } => half_width / Shape::Rectangular.divisor(),
            Self::Triangular { half_width } => half_width / Shape::Triangular.divisor(),
            Self::Arcsine { half_width } => half_width / Shape::Arcsine.divisor(),
            Self::Expanded { expanded, coverage_factor } => expanded / coverage_factor,
            Self::Standard { standard } | Self::Estimated { standard, .. } => standard,
        }
    }

    /// Returns the degrees of freedom ν; infinite where nothing else is stated (JCGM 100:2008 G.4.3).
    #[must_use]
    pub const fn degrees_of_freedom(&self) -> f64 {
        match *self {
            Self::Estimated { degrees_of_freedom, .. } => degrees_of_freedom,
            _ => f64::INFINITY,
        }
    }

    /// Returns the form of the distribution.
    #[must_use]
    pub const fn shape(&self) -> Shape {
        match *self {
            Self::Rectangular { .. } => Shape::Rectangular,
            Self::Triangular { .. } => Shape::Triangular,
            Self::Arcsine { .. } => Shape::Arcsine,
            Self::Expanded { .. } | Self::Standard { .. } => Shape::Normal,
            Self::Estimated { shape, .. } => shape,
        }
    }

    /// Returns the same with degrees of freedom.
    #[must_use]
    pub fn with_degrees_of_freedom(&self, degrees_of_freedom: f64) -> Self {
        Self::Estimated { standard: self.standard(), degrees_of_freedom, shape: self.shape() }
    }

    /// Returns the same, everything `factor` times as large.
    #[must_use]
    pub fn times(&self, factor: f64) -> Self {
        let factor = factor.abs();
        match *self {
            Self::Rectangular { half_width } => Self::Rectangular { half_width: half_width * factor },
            Self::Triangular { half_width } => Self::Triangular { half_width: half_width * factor },
            Self::Arcsine { half_width } => Self::Arcsine { half_width: half_width * factor },
            Self::Expanded { expanded, coverage_factor } => {
                Self::Expanded { expanded: expanded * factor, coverage_factor }
            }
            Self::Standard { standard } => Self::Standard { standard: standard * factor },
            Self::Estimated { standard, degrees_of_freedom, shape } => {
                Self::Estimated { standard: standard * factor, degrees_of_freedom, shape }
            }
        }
    }

    /// Returns what so many equal steps of a display or converter leave unknown: a rectangular half-step.
    ///
    /// # Source
    /// JCGM 100:2008 F.2.2.1: u = 0.29 δx for a step δx.
    #[must_use]
    pub fn of_resolution(step: f64) -> Self {
        Self::Rectangular { half_width: 0.5 * step.abs() }
    }
}
