//! Transverse sensitivity: a grid also answers to the strain across it.

use crate::Error;
use crate::math::Real;
use crate::parameter::Parameter;
use crate::range::Range;

/// Poisson's ratio of the beam on which gauge factors are measured (ASTM E251; Micro-Measurements TN-509).
pub const CALIBRATION_POISSON: f64 = 0.285;

/// Transverse sensitivity K of a single grid, at a known ratio of the strain across it to the strain along it.
///
/// # Source
/// ASTM E251 and VDI/VDE 2635 part 1 for the quantity (from memory), Micro-Measurements TN-509 for the correction.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Transverse<R = f64> {
    /// K, as a plain number: 0.4 % is 0.004.
    pub sensitivity: R,
    /// Strain across the grid over strain along it; −ν in a uniaxial state.
    pub strain_ratio: R,
}

/// Accepted transverse sensitivities: real grids stay far below.
const SENSITIVITY: Range = Range::new("transverse sensitivity", "", -0.5, 0.5);

impl<R: Real> Transverse<R> {
    /// Returns what the indicated strain is multiplied by to get the strain along the grid.
    ///
    /// `e = ê (1 − ν₀ K)/(1 + K · ratio)`, ν₀ = 0.285; 1 where the ratio is −ν₀, as on the beam of the gauge factor.
    ///
    /// - Returns a plain number; not finite where the grid sees nothing, 1 + K · ratio = 0.
    ///
    /// # Source
    /// Micro-Measurements TN-509; check values in tests/transverse.rs.
    #[must_use]
    pub fn factor(&self) -> R {
        let one = R::from_f64(1.0);
        (one - R::from_f64(CALIBRATION_POISSON) * self.sensitivity) / (one + self.sensitivity * self.strain_ratio)
    }

    pub(crate) fn check(&self) -> Result<(), Error> {
        check_sensitivity(self.sensitivity.value())?;
        crate::signal::finite("strain ratio", self.strain_ratio)?;
        let divisor = 1.0 + self.sensitivity.value() * self.strain_ratio.value();
        Range::new("1 + K times the strain ratio", "", 1e-3, f64::MAX).check(divisor).map(drop)
    }

    pub(crate) fn map<S: Real>(&self, f: &mut impl FnMut(Parameter, R) -> S) -> Transverse<S> {
        Transverse {
            sensitivity: f(Parameter::TransverseSensitivity, self.sensitivity),
            strain_ratio: f(Parameter::StrainRatio, self.strain_ratio),
        }
    }
}

pub(super) fn check_sensitivity(k: f64) -> Result<(), Error> {
    SENSITIVITY.check(k).map(drop)
}
