//! Strain: the gauge's law, what temperature does to it, its zero, and what becomes of strains.

mod gauge;
mod rosette;
mod stress;
mod thermal_output;
mod transverse;
mod zero;

pub use gauge::Gauge;
pub use rosette::{Grid, PlaneStrain, PrincipalStrains, Rosette, Tee};
pub use stress::{Material, Plane, PlaneStress, uniaxial_stress};
pub use thermal_output::{Expansion, ThermalOutput};
pub use transverse::{CALIBRATION_POISSON, Transverse};
pub use zero::{Zero, ZeroMeaning, ZeroReading};
