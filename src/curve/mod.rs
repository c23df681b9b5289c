//! A chain condensed to a small table, with a proven bound of its error.
//!
//! `build` fits piecewise polynomials to one chain whose side inputs are fixed, and proves for every piece how far its
//! results can be from those of the chain; [`eval`] runs the tables, without allocation and without panic; `text` writes
//! them as CSV, as C and as Rust. `build` and `text` need the feature `std`.

#[cfg(feature = "std")]
pub mod build;
#[cfg(feature = "std")]
mod ends;
#[cfg(feature = "std")]
mod error;
pub mod eval;
#[cfg(feature = "std")]
mod fit;
#[cfg(feature = "std")]
mod prove;
#[cfg(feature = "std")]
mod table;
#[cfg(feature = "std")]
pub mod text;

#[cfg(feature = "std")]
pub use crate::math::{Interval, Jet};
