//! Recordings and results in columns: Parquet and Arrow files.
//!
//! A file of columns is read as the text that it would be, with every digit, so that there is one way from a cell to a number;
//! results are written in batches, with units, the sheet and its words beside the columns.

mod damage;
mod metadata;
mod read;
mod write;

use std::path::Path;

pub use read::{layout_of_columns, text_of};
pub use write::{ColumnarWriter, Made, Width};

/// A file of columns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Columnar {
    /// Apache Parquet.
    Parquet,
    /// Apache Arrow, its file or its stream format.
    Arrow,
}

impl Columnar {
    /// Returns what a file is by the ending of its name; `None` for anything else.
    #[must_use]
    pub fn from_path(path: &Path) -> Option<Self> {
        let ending = path.extension()?.to_str()?;
        match ending {
            _ if ending.eq_ignore_ascii_case("parquet") => Some(Self::Parquet),
            _ if ending.eq_ignore_ascii_case("arrow") || ending.eq_ignore_ascii_case("arrows") => Some(Self::Arrow),
            _ => None,
        }
    }
}
