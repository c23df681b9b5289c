//! Strain: the gauge's law, what temperature does to it, its zero, and what becomes of strains.

mod gauge;
mod rosette;
mod section;
mod stress;
mod table;
mod thermal_output;
mod transducer;
mod transverse;
mod zero;

pub(crate) use gauge::Tau;
pub use gauge::{Gauge, ThermalPoints};
pub use rosette::{Grid, PlaneStrain, PrincipalStrains, Rosette, Tee};
pub use section::{Loading, Section};
pub use stress::{Material, Plane, PlaneStress, uniaxial_stress};
pub use table::{MOST_POINTS, Points};
pub use thermal_output::{Expansion, ThermalOutput};
pub(crate) use transducer::PlainCertificate;
pub use transducer::{Certificate, Transducer};
pub use transverse::{CALIBRATION_POISSON, Transverse};
pub use zero::{Zero, ZeroMeaning, ZeroReading};
