//! Shafts and beams: from surface strain to axial force, bending moment and torque.

use super::Material;
use crate::Error;
use crate::signal::{not_negative, positive};

/// Cross-section of a prismatic bar, dimensions in m.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Section {
    /// A round bar or tube.
    Round {
        /// Outer diameter, m.
        diameter: f64,
        /// Diameter of the bore, m; 0 for a solid bar.
        bore: f64,
    },
    /// A rectangular bar, bent about the axis along its width.
    Rectangular {
        /// Width, m.
        width: f64,
        /// Height in the plane of bending, m.
        height: f64,
    },
    /// Any section of this area, for axial force alone.
    Area {
        /// Area, m².
        area: f64,
    },
}

/// What loads the bar.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Loading {
    /// Axial force, from the axial strain.
    Axial,
    /// Bending moment, from the bending strain at the outer fibre.
    Bending,
    /// Torque, from the shear strain γ at the surface.
    Torsion,
}

impl Section {
    /// Checks the dimensions.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a dimension that is not above zero; `Error::Unfit` for a bore that is not
    /// smaller than the diameter.
    pub fn check(&self) -> Result<(), Error> {
        match *self {
            Self::Round { diameter, bore } => {
                positive("diameter", "m", diameter)?;
                not_negative("bore", "m", bore)?;
                if bore < diameter {
                    Ok(())
                } else {
                    Err(Error::Unfit { what: "the bore must be smaller than the diameter" })
                }
            }
            Self::Rectangular { width, height } => {
                positive("width", "m", width)?;
                positive("height", "m", height)
            }
            Self::Area { area } => positive("area", "m2", area),
        }
    }

    /// Returns the load per unit of strain: N for axial force per plain strain, N·m for a bending moment per plain strain
    /// at the outer fibre, N·m for a torque per plain shear strain γ at the surface.
    ///
    /// N = E e A; M = E e W with W = π (d⁴ − b⁴)/(32 d) or w h²/6; T = G γ W_p with G = E/2(1 + ν) and
    /// W_p = π (d⁴ − b⁴)/(16 d).
    ///
    /// # Errors
    /// As [`check`](Self::check); `Error::Unfit` for a loading that needs another section: the torsion of a rectangle is not
    /// covered, and an area alone does not bend.
    /// # Source
    /// Elementary strength of materials; the sections checked by hand in tests/sections.rs.
    pub fn load_per_strain(&self, loading: Loading, material: &Material) -> Result<f64, Error> {
        self.check()?;
        let e = material.modulus();
        // d⁴ − b⁴ as a product: no cancellation in a thin tube
        let fourth = |d: f64, b: f64| (d - b) * (d + b) * (d * d + b * b);
        let pi = core::f64::consts::PI;
        match (*self, loading) {
            (Self::Round { diameter: d, bore: b }, Loading::Axial) => Ok(e * (pi / 4.0) * ((d - b) * (d + b))),
            (Self::Round { diameter: d, bore: b }, Loading::Bending) => Ok(e * pi * fourth(d, b) / (32.0 * d)),
            (Self::Round { diameter: d, bore: b }, Loading::Torsion) => {
                let g = e / (2.0 * (1.0 + material.poisson()));
                Ok(g * pi * fourth(d, b) / (16.0 * d))
            }
            (Self::Rectangular { width, height }, Loading::Axial) => Ok(e * width * height),
            (Self::Rectangular { width, height }, Loading::Bending) => Ok(e * width * height * height / 6.0),
            (Self::Area { area }, Loading::Axial) => Ok(e * area),
            (Self::Rectangular { .. }, Loading::Torsion) => {
                Err(Error::Unfit { what: "torque is computed for round sections only" })
            }
            (Self::Area { .. }, Loading::Bending | Loading::Torsion) => {
                Err(Error::Unfit { what: "an area alone gives axial force only: state the section's shape" })
            }
        }
    }
}
