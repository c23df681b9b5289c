//! Stress from strain in an isotropic, linear elastic material.

use super::rosette::PlaneStrain;
use crate::Error;
use crate::math::{Real, double_angle, sqrt};
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

/// An isotropic, linear elastic material.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(
    feature = "serde",
    derive(serde::Serialize, serde::Deserialize),
    serde(try_from = "MaterialConstants", into = "MaterialConstants")
)]
pub struct Material {
    modulus: f64,
    poisson: f64,
}

/// A material as it is written.
#[cfg(feature = "serde")]
#[derive(serde::Serialize, serde::Deserialize)]
#[serde(rename = "Material")]
struct MaterialConstants {
    modulus: f64,
    poisson: f64,
}

#[cfg(feature = "serde")]
impl TryFrom<MaterialConstants> for Material {
    type Error = Error;
    fn try_from(material: MaterialConstants) -> Result<Self, Error> {
        Self::new(material.modulus, material.poisson)
    }
}

#[cfg(feature = "serde")]
impl From<Material> for MaterialConstants {
    fn from(material: Material) -> Self {
        Self { modulus: material.modulus, poisson: material.poisson }
    }
}

/// Accepted Poisson's ratios: what is stable in three dimensions, short of both ends, where stiffness has no bound.
const POISSON: Range = Range::new("Poisson's ratio", "", -0.999, 0.499);

/// The state of stress in a plane, with the principal stress out of it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PlaneStress {
    /// Normal stress σ_x.
    pub x: f64,
    /// Normal stress σ_y.
    pub y: f64,
    /// Shear stress τ_xy.
    pub shear: f64,
    /// Normal stress out of the plane σ_z, a principal one: 0 in plane stress, ν (σ_x + σ_y) in plane strain.
    pub out_of_plane: f64,
}

impl Material {
    /// Returns the material when its constants are usable.
    ///
    /// - `modulus`: modulus of elasticity E, Pa; or in any other unit, and stresses come in that.
    /// - `poisson`: Poisson's ratio ν, −0.999..=0.499.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for a modulus that is not above zero and a Poisson's ratio outside
    /// −0.999..=0.499.
    pub fn new(modulus: f64, poisson: f64) -> Result<Self, Error> {
        positive("modulus of elasticity", "Pa", modulus)?;
        POISSON.check(poisson)?;
        Ok(Self { modulus, poisson })
    }

    /// Returns the modulus of elasticity E, Pa.
    #[must_use]
    pub const fn modulus(&self) -> f64 {
        self.modulus
    }

    /// Returns Poisson's ratio ν.
    #[must_use]
    pub const fn poisson(&self) -> f64 {
        self.poisson
    }

    /// Returns the stress that a plane state of strain has.
    ///
    /// Plane stress: `σ_x = E/(1 − ν²) (ε_x + ν ε_y)`; plane strain: `σ_x = E/((1 + ν)(1 − 2ν)) ((1 − ν) ε_x + ν ε_y)`; both:
    /// `τ = G γ`, `G = E/(2 (1 + ν))`. Principal directions of stress and strain are the same.
    ///
    /// - `strain`: plain, not microstrain; free thermal expansion is no part of it.
    /// - Returns stresses in the unit of the modulus.
    ///
    /// # Accuracy
    /// Within 1e-15 of what each stress is the sum of: the stress of the mean strain and that of half the difference
    /// (tests/plane_stress.rs).
    /// # Source
    /// Hooke's law. Check values in tests/plane_stress.rs.
    #[must_use]
    pub fn stress(&self, strain: &PlaneStrain, plane: Plane) -> PlaneStress {
        let nu = self.poisson;
        // mean and deviation have one constant each: σ_m = E/(1 − ν) ε_m or E/((1 + ν)(1 − 2ν)) ε_m, σ_d = E/(1 + ν) ε_d
        let stiffness = match plane {
            Plane::Stress => self.modulus / (1.0 - nu),
            Plane::Strain => self.modulus / ((1.0 + nu) * (1.0 - 2.0 * nu)),
        };
        let twice_shear = self.modulus / (1.0 + nu);
        let mean = stiffness * (0.5 * (strain.x + strain.y));
        let half = twice_shear * (0.5 * (strain.x - strain.y));
        let out_of_plane = match plane {
            Plane::Stress => 0.0,
            Plane::Strain => nu * (2.0 * mean),
        };
        PlaneStress { x: mean + half, y: mean - half, shear: twice_shear * (0.5 * strain.shear), out_of_plane }
    }
}

impl PlaneStress {
    /// Returns the principal stresses in the plane, the larger first, in the unit of the state.
    #[must_use]
    pub fn principal(&self) -> [f64; 2] {
        let (mean, radius) = self.circle();
        [mean + radius, mean - radius]
    }

    /// Returns normal stress and shear stress on the face whose normal lies in a direction, in the unit of the state.
    ///
    /// `σ(θ) = (σ_x + σ_y)/2 + (σ_x − σ_y)/2 cos 2θ + τ sin 2θ`, `τ(θ) = −(σ_x − σ_y)/2 sin 2θ + τ cos 2θ`
    ///
    /// - `degrees`: from x to the normal, anticlockwise, any finite number.
    #[must_use]
    pub fn along(&self, degrees: f64) -> [f64; 2] {
        let (c, s) = double_angle(degrees);
        let (c, s) = (c.value(), s.value());
        let (mean, half) = (0.5 * (self.x + self.y), 0.5 * (self.x - self.y));
        [mean + half * c + self.shear * s, self.shear * c - half * s]
    }

    /// Returns the equivalent stress of von Mises, in the unit of the state.
    ///
    /// `σ_v = √{[(σ_x − σ_y)² + (σ_y − σ_z)² + (σ_z − σ_x)²]/2 + 3 τ²}`: from the components, so that a stress that is nearly
    /// equal in all directions keeps its digits.
    #[must_use]
    pub fn von_mises(&self) -> f64 {
        let (d, e, f) = (self.x - self.y, self.y - self.out_of_plane, self.out_of_plane - self.x);
        sqrt(0.5 * (d * d + e * e + f * f) + 3.0 * (self.shear * self.shear))
    }

    /// Returns the equivalent stress of Tresca, in the unit of the state: the largest difference of two principal stresses,
    /// of which the one out of the plane is one.
    #[must_use]
    pub fn tresca(&self) -> f64 {
        let (mean, radius) = self.circle();
        // σ₁ − σ₂ = 2 r;  the farther of σ₁, σ₂ from σ_z is |σ_m − σ_z| + r away
        let away = (mean - self.out_of_plane).abs() + radius;
        // written so that NaN stays NaN
        if away < 2.0 * radius { 2.0 * radius } else { away }
    }

    /// Centre and radius of Mohr's circle.
    fn circle(&self) -> (f64, f64) {
        (0.5 * (self.x + self.y), libm::hypot(0.5 * (self.x - self.y), self.shear))
    }
}
