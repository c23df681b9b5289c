#![doc = include_str!("../README.md")]
#![no_std]
#![cfg_attr(
    not(test),
    deny(clippy::unwrap_used, clippy::expect_used, clippy::panic, clippy::indexing_slicing)
)]

#[cfg(feature = "std")]
extern crate std;

mod error;
mod range;

pub mod chain;
#[cfg(feature = "files")]
pub mod recording;

pub use error::Error;
pub use range::Range;
