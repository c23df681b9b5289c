//! Rosettes: the plane state of strain from grids at any angles, each with its own transverse sensitivity.

use super::transverse::{CALIBRATION_POISSON, check_sensitivity};
use crate::Error;
use crate::math::{Double, Real, cos_sin_degrees, sqrt};
use crate::signal::finite;

/// One grid of a rosette.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Grid {
    /// Angle from x, anticlockwise, degrees.
    pub degrees: f64,
    /// Transverse sensitivity K of the grid, a plain number.
    pub sensitivity: f64,
}

/// The state of strain in a plane.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PlaneStrain {
    /// Normal strain along x.
    pub x: f64,
    /// Normal strain along y.
    pub y: f64,
    /// Engineering shear strain γ_xy.
    pub shear: f64,
}

/// Principal strains and their direction.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PrincipalStrains {
    /// The larger.
    pub larger: f64,
    /// The smaller.
    pub smaller: f64,
    /// Largest engineering shear strain in the plane, their difference.
    pub shear: f64,
    /// From x to the larger principal strain, anticlockwise, in (−90°, 90°]; `None` where all directions are principal.
    pub degrees: Option<f64>,
}

impl PlaneStrain {
    /// Returns the normal strain in a direction, degrees from x.
    #[must_use]
    pub fn along(&self, degrees: f64) -> f64 {
        // e(θ) = (ε_x + ε_y)/2 + (ε_x − ε_y)/2 cos 2θ + γ/2 sin 2θ
        let (c, s) = cos_sin_degrees(2.0 * degrees);
        0.5 * (self.x + self.y) + 0.5 * (self.x - self.y) * c + 0.5 * self.shear * s
    }

    /// Returns the principal strains.
    ///
    /// All directions count as principal where the strains differ by no more than the rounding of what they came from:
    /// 1e-12 of the larger.
    #[must_use]
    pub fn principal(&self) -> PrincipalStrains {
        let mean = 0.5 * (self.x + self.y);
        let (q, s) = (0.5 * (self.x - self.y), 0.5 * self.shear);
        // ε₁,₂ = (ε_x + ε_y)/2 ± √[((ε_x − ε_y)/2)² + (γ/2)²]
        let radius = sqrt(q * q + s * s);
        let degrees = if radius <= 1e-12 * mean.abs() {
            None
        } else {
            // tan 2θ = γ/(ε_x − ε_y); the larger one lies at ½ atan2
            let half = 0.5 * (libm::atan2(s, q) * (180.0 / core::f64::consts::PI));
            // (−90°, 90°]
            Some(if half <= -90.0 { 90.0 } else { half })
        };
        PrincipalStrains { larger: mean + radius, smaller: mean - radius, shear: 2.0 * radius, degrees }
    }
}

/// Three grids lowered to the linear map from indicated strains to the plane state.
///
/// ê_i (1 − ν₀ K_i) = e(θ_i) + K_i e(θ_i + 90°), ν₀ = 0.285, solved exactly for any three angles.
///
/// # Source
/// Micro-Measurements TN-509 and TN-515 (definitions); the linear system is solved here for any angles.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(
    feature = "serde",
    derive(serde::Serialize, serde::Deserialize),
    serde(try_from = "[Grid; 3]", into = "[Grid; 3]")
)]
pub struct Rosette {
    grids: [Grid; 3],
    /// Rows give (mean, half difference, half shear) of the plane state for the three indicated strains.
    inverse: [[f64; 3]; 3],
}

impl Rosette {
    /// Returns a rosette of three grids.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for an angle or sensitivity that is no usable number, `Error::Unfit` for
    /// grids that do not determine the state of strain: two of them parallel, modulo 180°.
    pub fn new(grids: [Grid; 3]) -> Result<Self, Error> {
        for grid in &grids {
            finite("angle of a grid", grid.degrees)?;
            check_sensitivity(grid.sensitivity)?;
        }
        let one = Double::from_f64(1.0);
        // row i: (1 + K) p + (1 − K) (q cos 2θ + s sin 2θ) = ê (1 − ν₀ K)
        let rows = grids.map(|g| {
            let (c, s) = cos_sin_degrees(2.0 * g.degrees);
            let k = Double::from_f64(g.sensitivity);
            let across = one - k;
            [one + k, across * Double::from_f64(c), across * Double::from_f64(s)]
        });
        let [a, b, c] = rows;
        let cross = |u: [Double; 3], v: [Double; 3]| {
            [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]]
        };
        let (bc, ca, ab) = (cross(b, c), cross(c, a), cross(a, b));
        let det = a[0] * bc[0] + a[1] * bc[1] + a[2] * bc[2];
        if det.value().abs() < 1e-6 {
            return Err(Error::Unfit { what: "the grids of a rosette must point in three different directions" });
        }
        // columns of the inverse, each times (1 − ν₀ K) of its grid
        let scale =
            grids.map(|g| (one - Double::from_f64(CALIBRATION_POISSON) * Double::from_f64(g.sensitivity)) / det);
        let row = |i: [Double; 3]| [(i[0] * scale[0]).value(), (i[1] * scale[1]).value(), (i[2] * scale[2]).value()];
        let inverse = [row([bc[0], ca[0], ab[0]]), row([bc[1], ca[1], ab[1]]), row([bc[2], ca[2], ab[2]])];
        Ok(Self { grids, inverse })
    }

    /// Returns the grids.
    #[must_use]
    pub const fn grids(&self) -> &[Grid; 3] {
        &self.grids
    }

    /// Returns the plane state of strain for the strains that the grids indicate, in the unit of the indicated strains.
    #[must_use]
    pub fn state(&self, indicated: [f64; 3]) -> PlaneStrain {
        let [a, b, c] = indicated;
        let [p, q, s] = self.inverse.map(|r| r[0] * a + r[1] * b + r[2] * c);
        PlaneStrain { x: p + q, y: p - q, shear: 2.0 * s }
    }

    /// Returns what a grid indicates in a state of strain: the forward direction, for any grid.
    #[must_use]
    pub fn indicated(grid: &Grid, state: &PlaneStrain) -> f64 {
        // ê = [e(θ) + K e(θ + 90°)]/(1 − ν₀ K)
        let k = grid.sensitivity;
        (state.along(grid.degrees) + k * state.along(grid.degrees + 90.0)) / (1.0 - CALIBRATION_POISSON * k)
    }
}

impl TryFrom<[Grid; 3]> for Rosette {
    type Error = Error;
    fn try_from(grids: [Grid; 3]) -> Result<Self, Error> {
        Self::new(grids)
    }
}

impl From<Rosette> for [Grid; 3] {
    fn from(rosette: Rosette) -> Self {
        rosette.grids
    }
}

/// Two grids at right angles along the principal directions.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tee {
    degrees: f64,
    k: [f64; 2],
}

impl Tee {
    /// Returns a tee: the first grid, and the sensitivity of the second, at right angles to it.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for an angle or sensitivity that is no usable number.
    pub fn new(first: Grid, second_sensitivity: f64) -> Result<Self, Error> {
        finite("angle of a grid", first.degrees)?;
        check_sensitivity(first.sensitivity)?;
        check_sensitivity(second_sensitivity)?;
        Ok(Self { degrees: first.degrees, k: [first.sensitivity, second_sensitivity] })
    }

    /// Returns the strains along the two grids for the strains that they indicate.
    #[must_use]
    pub fn strains(&self, indicated: [f64; 2]) -> [f64; 2] {
        let [k1, k2] = self.k;
        // ê₁ (1 − ν₀ K₁) = e₁ + K₁ e₂,  ê₂ (1 − ν₀ K₂) = e₂ + K₂ e₁
        let [b1, b2] =
            [indicated[0] * (1.0 - CALIBRATION_POISSON * k1), indicated[1] * (1.0 - CALIBRATION_POISSON * k2)];
        let det = 1.0 - k1 * k2;
        [(b1 - k1 * b2) / det, (b2 - k2 * b1) / det]
    }

    /// Returns the plane state of strain, taking the grids' directions as the principal ones.
    #[must_use]
    pub fn state(&self, indicated: [f64; 2]) -> PlaneStrain {
        let [along, across] = self.strains(indicated);
        let (c, s) = cos_sin_degrees(2.0 * self.degrees);
        let (p, r) = (0.5 * (along + across), 0.5 * (along - across));
        PlaneStrain { x: p + r * c, y: p - r * c, shear: 2.0 * r * s }
    }
}
