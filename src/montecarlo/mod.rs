//! Propagation of distributions by drawing from them, after JCGM 101:2008.
//!
//! Every draw is a function of seed, trial and input alone, so that the figures are the same bits for any number of threads.

mod draw;
mod philox;
mod run;

pub use draw::deviate;
pub use philox::philox4x32;
pub use run::{Run, Validation, simulate};
