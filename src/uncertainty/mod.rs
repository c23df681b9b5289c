//! Uncertainty in first order: what is stated, what each input contributes, what all of it makes.
//!
//! After JCGM 100:2008 (Guide to the expression of uncertainty in measurement). Nothing here allocates or can panic.

mod chain;
mod combine;
mod conformity;
mod coverage;
mod deciding;
mod rounding;
mod second_order;
mod stated;

pub use chain::{MOST_INPUTS, of_chain};
#[cfg(feature = "std")]
pub(crate) use combine::Sum;
pub use combine::{Combined, Contribution, Family, combine, combine_correlated};
pub use conformity::{Acceptance, Conformity, Interval, conformity, conformity_by_probability};
pub use coverage::{Coverage, Expanded, Rule};
pub use rounding::{decimals, rounded};
pub use second_order::{Order, second_order};
pub use stated::{Shape, Uncertainty};
