//! Rosettes: the plane state of strain from grids at any angles, each with its own transverse sensitivity.
//!
//! Strains here are in any one unit, in and out: plain, microstrain or per cent. Angles are degrees, anticlockwise from x.

use super::transverse::{CALIBRATION_POISSON, check_sensitivity};
use crate::Error;
use crate::math::{Double, Real, double_angle};
use crate::signal::finite;

/// One grid of a rosette.
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct Grid {
    /// Angle from x, anticlockwise, degrees; any number of turns.
    pub degrees: f64,
    /// Transverse sensitivity K of the grid, a plain number: 0.4 % is 0.004.
    pub sensitivity: f64,
}

/// The state of strain in a plane.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PlaneStrain {
    /// Normal strain ε_x.
    pub x: f64,
    /// Normal strain ε_y.
    pub y: f64,
    /// Engineering shear strain γ_xy, twice the shear component of the tensor.
    pub shear: f64,
}

/// Principal strains and their direction.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
#[cfg_attr(feature = "serde", derive(serde::Serialize, serde::Deserialize))]
pub struct PrincipalStrains {
    /// The larger, ε₁.
    pub larger: f64,
    /// The smaller, ε₂.
    pub smaller: f64,
    /// Largest engineering shear strain in the plane, γ_max = ε₁ − ε₂.
    pub shear: f64,
    /// From x to the larger principal strain, anticlockwise, degrees in (−90°, 90°]; `None` where there is no such
    /// direction: all are principal, or the state is no number.
    pub degrees: Option<f64>,
}

impl PrincipalStrains {
    /// Returns the plane state of strain, the inverse of [`PlaneStrain::principal`].
    ///
    /// `ε_x,y = mean ± r cos 2θ`, `γ_xy = 2 r sin 2θ`, with mean and half difference r of the principal strains; `shear` is
    /// not read. Without a direction the larger one is taken along x, which does not matter where they are equal.
    ///
    /// - Returns the state in the unit of the principal strains; NaN for what is no number.
    ///
    /// # Source
    /// Mohr's circle, as for [`PlaneStrain::principal`].
    #[must_use]
    pub fn state(&self) -> PlaneStrain {
        let (mean, radius) = (0.5 * (self.larger + self.smaller), 0.5 * (self.larger - self.smaller));
        let (cos, sin) = double_angle(self.degrees.unwrap_or(0.0));
        let (along, half_shear) = (radius * cos.value(), radius * sin.value());
        PlaneStrain { x: mean + along, y: mean - along, shear: 2.0 * half_shear }
    }
}

/// Below this share of the mean strain a difference of principal strains is the rounding of what the state came from.
const EQUAL_BIAXIAL: f64 = 1e-12;

impl PlaneStrain {
    /// Returns the normal strain in a direction.
    ///
    /// `ε(θ) = ε_x cos² θ + ε_y sin² θ + γ_xy/2 sin 2θ`, so that 0° gives ε_x and 90° gives ε_y as they are.
    ///
    /// - `degrees`: the direction from x, anticlockwise, any finite number.
    /// - Returns the strain in the unit of the state; NaN for a direction or a state that is no number.
    ///
    /// For a grid with transverse sensitivity this is the strain along it, corrected.
    #[must_use]
    pub fn along(&self, degrees: f64) -> f64 {
        let [cos2, sin2, half_twice] = direction(degrees);
        self.x * cos2 + self.y * sin2 + self.shear * half_twice
    }

    /// Returns the principal strains.
    ///
    /// `ε₁,₂ = (ε_x + ε_y)/2 ± √[((ε_x − ε_y)/2)² + (γ_xy/2)²]`, `tan 2θ = γ_xy/(ε_x − ε_y)` in the quadrant that belongs to
    /// the larger one.
    ///
    /// - Returns strains in the unit of the state. The direction is `None` where the principal strains differ by no more
    ///   than 2e-12 of their mean: rounding alone makes such differences.
    ///
    /// # Accuracy
    /// Within 4e-16 of the sum |mean| + |half difference|; direction within 1e-12° of what the state as given has
    /// (tests/rosettes.rs).
    /// # Source
    /// Micro-Measurements TN-515; Mohr's circle. Check values in tests/rosettes.rs.
    #[must_use]
    pub fn principal(&self) -> PrincipalStrains {
        let (mean, q, s) = (self.mean(), self.half_difference(), 0.5 * self.shear);
        let radius = libm::hypot(q, s);
        let degrees = if radius > EQUAL_BIAXIAL * mean.abs() {
            // half of atan2, whose −180° (only −0 or what rounds to it gives that) is the same direction as +180°
            let half = 0.5 * (libm::atan2(s, q) * (180.0 / core::f64::consts::PI));
            Some(if half <= -90.0 { 90.0 } else { half })
        } else {
            None
        };
        PrincipalStrains { larger: mean + radius, smaller: mean - radius, shear: 2.0 * radius, degrees }
    }

    fn mean(&self) -> f64 {
        0.5 * (self.x + self.y)
    }

    fn half_difference(&self) -> f64 {
        0.5 * (self.x - self.y)
    }
}

/// Three grids lowered to the linear map from indicated strains to the plane state.
///
/// `ê_i (1 − ν₀ K_i) = ε(θ_i) + K_i ε(θ_i + 90°)`, ν₀ = 0.285, for any three directions and three sensitivities. The system
/// is solved in twice the working precision, once; every coefficient of the map is the nearest double.
///
/// # Source
/// Micro-Measurements TN-509 (transverse sensitivity) and TN-515 (rosettes) for the definitions, ASTM E251 for ν₀.
/// # Example
/// ```
/// use ohmwright::strain::{Grid, Rosette};
///
/// // a delta rosette with K = 2 % in every grid; its published first grid is 1036.6 microstrain
/// let rosette = Rosette::new([0.0, 60.0, 120.0].map(|degrees| Grid { degrees, sensitivity: 0.02 }))?;
/// let state = rosette.state([1018.0, 224.0, -1527.0]);
/// assert!((state.along(0.0) - 1036.6).abs() <= 0.05);
///
/// // two directions, 180° apart twice, determine nothing
/// assert!(Rosette::new([0.0, 90.0, 180.0].map(|degrees| Grid { degrees, sensitivity: 0.0 })).is_err());
/// # Ok::<(), ohmwright::Error>(())
/// ```
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(
    feature = "serde",
    derive(serde::Serialize, serde::Deserialize),
    serde(try_from = "[Grid; 3]", into = "[Grid; 3]")
)]
pub struct Rosette {
    grids: [Grid; 3],
    /// Rows give ε_x, ε_y and γ_xy for the three indicated strains.
    inverse: [[f64; 3]; 3],
}

/// Grids closer than this to parallel, degrees, are parallel but for a slip: nobody knows their angles that well.
const APART: f64 = 0.1;
/// Largest accepted magnification of an error in one grid. Unequal sensitivities can make narrow grids blind to a state.
const MAGNIFICATION: f64 = 1e6;

impl Rosette {
    /// Returns a rosette of three grids.
    ///
    /// - `grids`: their angles, any finite number of degrees, and their sensitivities, each in −0.5..=0.5.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for an angle or sensitivity that is no usable number, `Error::Unfit` for
    /// grids that do not determine the state of strain: two of them less than 0.1° from parallel, modulo 180°, or narrow ones
    /// whose sensitivities would let an error in one grid come out a million times as large.
    pub fn new(grids: [Grid; 3]) -> Result<Self, Error> {
        for grid in &grids {
            grid.check()?;
        }
        let [a, b, c] = grids.map(|g| g.degrees);
        if [(a, b), (b, c), (c, a)].iter().any(|(one, other)| from_parallel(*one, *other) < APART) {
            return Err(Error::Unfit { what: "the grids of a rosette must point in three different directions" });
        }
        let one = Double::from_f64(1.0);
        // row i: (1 + K) p + (1 − K) (q cos 2θ + s sin 2θ) = ê (1 − ν₀ K), with mean p, half difference q, half shear s
        let [a, b, c] = grids.map(|g| g.row());
        let cross = |u: [Double; 3], v: [Double; 3]| {
            [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]]
        };
        let columns = [cross(b, c), cross(c, a), cross(a, b)];
        let det = a[0] * columns[0][0] + a[1] * columns[0][1] + a[2] * columns[0][2];
        // a column of the inverse belongs to a grid, and takes that grid's 1 − ν₀ K
        let calibration = Double::from_f64(CALIBRATION_POISSON);
        let [da, db, dc] = grids.map(|g| (one - calibration * Double::from_f64(g.sensitivity)) / det);
        let [ca, cb, cc] = columns;
        let state =
            |[p, q, s]: [Double; 3], d: Double| [((p + q) * d).value(), ((p - q) * d).value(), ((s + s) * d).value()];
        let (ia, ib, ic) = (state(ca, da), state(cb, db), state(cc, dc));
        // a determinant of 0 leaves no finite coefficient
        if ![ia, ib, ic].iter().flatten().all(|coefficient| coefficient.abs() <= MAGNIFICATION) {
            return Err(Error::Unfit {
                what: "the grids of a rosette are too narrow for their sensitivities to determine the state of strain",
            });
        }
        let inverse = [[ia[0], ib[0], ic[0]], [ia[1], ib[1], ic[1]], [ia[2], ib[2], ic[2]]];
        Ok(Self { grids, inverse })
    }

    /// Returns the grids.
    #[must_use]
    pub const fn grids(&self) -> &[Grid; 3] {
        &self.grids
    }

    /// Returns the plane state of strain for the strains that the grids indicate.
    ///
    /// - `indicated`: of each grid in its order, ΔR/R over the package gauge factor, thermal output and zero removed.
    /// - Returns the state in the unit of the indicated strains; [`PlaneStrain::along`] gives the corrected strain along a
    ///   grid. An indicated strain that is NaN makes the whole state NaN.
    ///
    /// # Accuracy
    /// Within 4e-16 of the sum of the magnitudes of the three terms of each component (tests/rosettes.rs).
    #[must_use]
    pub fn state(&self, indicated: [f64; 3]) -> PlaneStrain {
        let [a, b, c] = indicated;
        let [x, y, shear] = self.inverse.map(|r| r[0] * a + r[1] * b + r[2] * c);
        PlaneStrain { x, y, shear }
    }

    /// Returns what a grid indicates in a state of strain: the forward direction, for any grid.
    ///
    /// `ê = [ε(θ) + K ε(θ + 90°)]/(1 − ν₀ K)`
    ///
    /// - `grid`: K other than 1/ν₀ = 3.5, or the result is infinite.
    /// - Returns the indicated strain in the unit of the state.
    #[must_use]
    pub fn indicated(grid: &Grid, state: &PlaneStrain) -> f64 {
        let [cos2, sin2, half_twice] = direction(grid.degrees);
        let k = grid.sensitivity;
        // at θ + 90° sine and cosine change places and sin 2θ its sign
        let both = state.x * (cos2 + k * sin2) + state.y * (sin2 + k * cos2) + state.shear * ((1.0 - k) * half_twice);
        both / (1.0 - CALIBRATION_POISSON * k)
    }
}

impl Grid {
    fn check(&self) -> Result<(), Error> {
        finite("angle of a grid", self.degrees)?;
        check_sensitivity(self.sensitivity)
    }

    /// What mean, half difference and half shear do to ê (1 − ν₀ K).
    fn row(&self) -> [Double; 3] {
        let (c, s) = double_angle(self.degrees);
        let (one, k) = (Double::from_f64(1.0), Double::from_f64(self.sensitivity));
        [one + k, (one - k) * c, (one - k) * s]
    }
}

/// Returns cos² θ, sin² θ and ½ sin 2θ: what ε_x, ε_y and γ_xy count for along θ, each the nearest double.
fn direction(degrees: f64) -> [f64; 3] {
    let (c, s) = double_angle(degrees);
    let (one, half) = (Double::from_f64(1.0), Double::from_f64(0.5));
    [((one + c) * half).value(), ((one - c) * half).value(), (s * half).value()]
}

/// Returns how far two directions are from parallel, degrees in 0..=90.
fn from_parallel(a: f64, b: f64) -> f64 {
    // both remainders are exact
    libm::remainder(libm::remainder(a, 180.0) - libm::remainder(b, 180.0), 180.0).abs()
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

/// Two grids at right angles, along the principal directions.
///
/// That the directions are principal is an assumption which a tee cannot check: where it does not hold, the strains along the
/// grids are still right, and the state lacks its shear strain.
///
/// # Source
/// Micro-Measurements TN-509 (definition; worked in tests/transverse.rs).
#[derive(Clone, Copy, Debug, PartialEq)]
#[cfg_attr(
    feature = "serde",
    derive(serde::Serialize, serde::Deserialize),
    serde(try_from = "TeeGrids", into = "TeeGrids")
)]
pub struct Tee {
    first: Grid,
    second_sensitivity: f64,
    /// Rows give the strains along the two grids for the two indicated strains.
    inverse: [[f64; 2]; 2],
    /// cos² θ, sin² θ and ½ sin 2θ of the first grid.
    direction: [f64; 3],
}

/// A tee as it is written.
#[cfg(feature = "serde")]
#[derive(serde::Serialize, serde::Deserialize)]
#[serde(rename = "Tee")]
struct TeeGrids {
    first: Grid,
    second_sensitivity: f64,
}

#[cfg(feature = "serde")]
impl TryFrom<TeeGrids> for Tee {
    type Error = Error;
    fn try_from(tee: TeeGrids) -> Result<Self, Error> {
        Self::new(tee.first, tee.second_sensitivity)
    }
}

#[cfg(feature = "serde")]
impl From<Tee> for TeeGrids {
    fn from(tee: Tee) -> Self {
        Self { first: tee.first, second_sensitivity: tee.second_sensitivity }
    }
}

impl Tee {
    /// Returns a tee.
    ///
    /// - `first`: the first grid, its angle any finite number of degrees.
    /// - `second_sensitivity`: K of the second grid, which lies 90° from the first.
    ///
    /// # Errors
    /// `Error::NotFinite` or `Error::OutOfRange` for an angle that is no number or a sensitivity outside −0.5..=0.5.
    pub fn new(first: Grid, second_sensitivity: f64) -> Result<Self, Error> {
        first.check()?;
        check_sensitivity(second_sensitivity)?;
        let exact = Double::from_f64;
        let (one, k1, k2) = (exact(1.0), exact(first.sensitivity), exact(second_sensitivity));
        // ê₁ (1 − ν₀ K₁) = ε₁ + K₁ ε₂,  ê₂ (1 − ν₀ K₂) = ε₂ + K₂ ε₁
        let det = one - k1 * k2;
        let d1 = (one - exact(CALIBRATION_POISSON) * k1) / det;
        let d2 = (one - exact(CALIBRATION_POISSON) * k2) / det;
        let inverse = [[d1.value(), (-k1 * d2).value()], [(-k2 * d1).value(), d2.value()]];
        Ok(Self { first, second_sensitivity, inverse, direction: direction(first.degrees) })
    }

    /// Returns the first grid.
    #[must_use]
    pub const fn first(&self) -> &Grid {
        &self.first
    }

    /// Returns the transverse sensitivity K of the second grid.
    #[must_use]
    pub const fn second_sensitivity(&self) -> f64 {
        self.second_sensitivity
    }

    /// Returns the strains along the two grids for the strains that they indicate, in the same unit.
    #[must_use]
    pub fn strains(&self, indicated: [f64; 2]) -> [f64; 2] {
        self.inverse.map(|r| r[0] * indicated[0] + r[1] * indicated[1])
    }

    /// Returns the plane state of strain, in the unit of the indicated strains, taking the grids' directions as the
    /// principal ones.
    #[must_use]
    pub fn state(&self, indicated: [f64; 2]) -> PlaneStrain {
        let [along, across] = self.strains(indicated);
        let [cos2, sin2, half_twice] = self.direction;
        PlaneStrain {
            x: along * cos2 + across * sin2,
            y: along * sin2 + across * cos2,
            shear: 2.0 * half_twice * (along - across),
        }
    }
}
