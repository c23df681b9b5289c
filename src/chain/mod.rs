//! One reading ⇄ one quantity.

mod word;

pub use word::Word;
