//! Strain: the gauge's law, what temperature does to it, and its zero.

mod gauge;
mod thermal_output;
mod zero;

pub use gauge::Gauge;
pub use thermal_output::{Expansion, ThermalOutput};
pub use zero::{Zero, ZeroMeaning, ZeroReading};

/// Returns the stress of a uniaxial state, σ = E e, Pa, from modulus in Pa and plain strain.
#[inline]
pub fn uniaxial_stress<R: crate::math::Real>(modulus_pascals: R, strain: R) -> R {
    modulus_pascals * strain
}
