//! Quantities of their own kind that the general unit system lacks.

mod strain;

pub use strain::Strain;
