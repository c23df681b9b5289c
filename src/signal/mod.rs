//! The network: supply, arms, leads, load and amplifier, one element a file, solved exactly together.
//!
//! Everything is generic over [`Real`], so that the same equations give values, derivatives and
//! correctly rounded plans.

mod amplifier;
mod around;
mod bridge;
mod converter;
mod determinant;
mod divider;
mod leads;
mod preferred;

pub use amplifier::{Amplifier, Difference, Reference};
pub use around::Around;
pub use bridge::{Arm, Bridge, Driven, Place, Shunt};
pub(crate) use bridge::{Expansion, MOST_LEADS};
pub use converter::{Coding, Converter, FullScale};
pub use divider::{Divider, Side};
pub use leads::{COPPER_OHM_METRES, COPPER_PER_KELVIN, Conductor, Each, Leads, Pair, Wires, awg_square_millimetres};
pub use preferred::Series;

use crate::Error;
use crate::math::Real;
use crate::range::Range;

/// Returns an error unless the value is finite and above zero.
pub(crate) fn positive<R: Real>(what: &'static str, unit: &'static str, value: R) -> Result<(), Error> {
    Range::new(what, unit, f64::MIN_POSITIVE, f64::MAX).check(value.value()).map(drop)
}

/// Returns an error unless the value is finite and not below zero.
pub(crate) fn not_negative<R: Real>(what: &'static str, unit: &'static str, value: R) -> Result<(), Error> {
    Range::new(what, unit, 0.0, f64::MAX).check(value.value()).map(drop)
}

/// Returns an error unless the value is finite.
pub(crate) fn finite<R: Real>(what: &'static str, value: R) -> Result<(), Error> {
    if value.value().is_finite() { Ok(()) } else { Err(Error::NotFinite { what }) }
}
