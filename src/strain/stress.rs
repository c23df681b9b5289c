//! Stress from strain in an isotropic, linear elastic material.

use super::rosette::PlaneStrain;
use crate::Error;
use crate::math::{Real, cos_sin_degrees, sqrt};
use crate::range::Range;
use crate::signal::positive;

/// Returns the stress of a uniaxial state, σ = E e, Pa, from modulus in Pa and plain strain.
#[inline]
pub fn uniaxial_stress<R: Real>(modulus_pascals: R, strain: R) -> R {
    modulus_pascals * strain
}

/// What is zero out of the plane.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
#[non_exhaustive]
pub enum Plane {
    /// The stress: a free surface.
    #[default]
    Stress,
    /// The strain: a long body.
    Strain,
}

/// An isotropic material.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Material {
    /// Modulus of elasticity E; stresses come in its unit.
    pub modulus: f64,
    /// Poisson's ratio ν, above −1 and below ½.
    pub poisson: f64,
}

/// The state of stress in a plane, with the principal stress out of it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PlaneStress {
    /// Normal stress along x.
    pub x: f64,
    /// Normal stress along y.
    pub y: f64,
    /// Shear stress τ_xy.
    pub shear: f64,
    /// Normal stress out of the plane: 0 in plane stress, ν (σ_x + σ_y) in plane strain.
    pub out_of_plane: f64,
}

impl Material {
    /// Returns the material when its constants are usable.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a modulus that is not above zero and a Poisson's ratio outside
    /// −0.999..=0.499.
    pub fn new(modulus: f64, poisson: f64) -> Result<Self, Error> {
        positive("modulus of elasticity", "Pa", modulus)?;
        Range::new("Poisson's ratio", "", -0.999, 0.499).check(poisson)?;
        Ok(Self { modulus, poisson })
    }

    /// Returns the stress that a plane state of strain has.
    ///
    /// Plane stress: σ_x = E/(1 − ν²)(ε_x + ν ε_y), τ = G γ, G = E/2(1 + ν). Plane strain:
    /// σ_x = E/((1 + ν)(1 − 2ν)) ((1 − ν) ε_x + ν ε_y).
    #[must_use]
    pub fn stress(&self, strain: &PlaneStrain, plane: Plane) -> PlaneStress {
        let nu = self.poisson;
        // mean and deviation have one constant each: σ_m = B ε_m, σ_d = E/(1 + ν) ε_d
        let bulk = match plane {
            Plane::Stress => self.modulus / (1.0 - nu),
            Plane::Strain => self.modulus / ((1.0 + nu) * (1.0 - 2.0 * nu)),
        };
        let shear = self.modulus / (1.0 + nu);
        let mean = bulk * (0.5 * (strain.x + strain.y));
        let half = shear * (0.5 * (strain.x - strain.y));
        let out_of_plane = match plane {
            Plane::Stress => 0.0,
            Plane::Strain => nu * (2.0 * mean),
        };
        PlaneStress { x: mean + half, y: mean - half, shear: shear * (0.5 * strain.shear), out_of_plane }
    }
}

impl PlaneStress {
    /// Returns the principal stresses in the plane, the larger first.
    #[must_use]
    pub fn principal(&self) -> [f64; 2] {
        let mean = 0.5 * (self.x + self.y);
        let half = 0.5 * (self.x - self.y);
        let radius = sqrt(half * half + self.shear * self.shear);
        [mean + radius, mean - radius]
    }

    /// Returns normal stress and shear stress on the face whose normal lies at this angle from x, degrees.
    #[must_use]
    pub fn along(&self, degrees: f64) -> [f64; 2] {
        // σ(θ) = (σ_x + σ_y)/2 + (σ_x − σ_y)/2 cos 2θ + τ sin 2θ;  τ(θ) = −(σ_x − σ_y)/2 sin 2θ + τ cos 2θ
        let (c, s) = cos_sin_degrees(2.0 * degrees);
        let (mean, half) = (0.5 * (self.x + self.y), 0.5 * (self.x - self.y));
        [mean + half * c + self.shear * s, self.shear * c - half * s]
    }

    /// Returns the equivalent stress of von Mises.
    #[must_use]
    pub fn von_mises(&self) -> f64 {
        let [a, b] = self.principal();
        let c = self.out_of_plane;
        // σ_v = √{[(σ₁ − σ₂)² + (σ₂ − σ₃)² + (σ₃ − σ₁)²]/2}
        let (d, e, f) = (a - b, b - c, c - a);
        sqrt(0.5 * (d * d + e * e + f * f))
    }

    /// Returns the equivalent stress of Tresca: the largest difference of two principal stresses.
    #[must_use]
    pub fn tresca(&self) -> f64 {
        let [a, b] = self.principal();
        let c = self.out_of_plane;
        (a - b).abs().max((b - c).abs()).max((c - a).abs())
    }
}
