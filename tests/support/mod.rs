//! What several test files share: readers of the tables and of the oracle, and the report of residuals.
//!
//! ```text
//! mod support;
//! let table = support::table::Table::read("data/temperature/pt100_iec60751_table_10C.csv");
//! let mut report = support::report::Report::new("IEC 60751");
//! for row in table.rows() {
//!     let want = row.number("accepted_ohm");
//!     report.check("ohms", row.at(), row.text("t_C"), want, computed, row.half_digit("accepted_ohm"));
//! }
//! report.finish();
//! ```
#![allow(dead_code, reason = "every test file uses its own part of this")]

pub mod big;
pub mod chains;
pub mod oracle;
pub mod report;
#[cfg(feature = "std")]
pub mod states;
pub mod table;
pub mod twofold;

/// Reads a file of the package.
pub fn read(path: &str) -> String {
    let full = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(path);
    std::fs::read_to_string(&full).unwrap_or_else(|e| panic!("{path}: {e}"))
}
