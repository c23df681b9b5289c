#![doc = include_str!("../README.md")]
#![no_std]
#![cfg_attr(not(test), deny(clippy::unwrap_used, clippy::expect_used, clippy::panic, clippy::indexing_slicing))]

#[cfg(feature = "std")]
extern crate std;

mod error;
mod math;
mod parameter;
mod range;
mod word;

#[cfg(feature = "capi")]
pub mod capi;
pub mod chain;
#[cfg(feature = "files")]
pub mod check;
pub mod curve;
#[cfg(feature = "files")]
pub mod evidence;
#[cfg(feature = "std")]
pub mod fit;
pub mod image;
#[cfg(feature = "std")]
pub mod measurement;
pub mod metal;
#[cfg(feature = "std")]
pub mod montecarlo;
pub mod platinum;
pub mod quantity;
pub mod signal;
pub mod strain;
pub mod thermistor;
pub mod thermocouple;
pub mod uncertainty;

#[cfg(feature = "files")]
pub mod recording;
#[cfg(feature = "files")]
pub mod sheet;

/// The crate of units whose quantities the typed faces take and return.
pub use uom;

pub use error::Error;
pub use math::distribution;
pub use quantity::Strain;
pub use range::Range;
