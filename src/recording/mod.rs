//! Recordings: text in, text out.
//!
//! A recording is a table in a text file: perhaps some lines about the run, perhaps a line of names and one of units, then one
//! row per reading. [`Reader`] turns it into columns of numbers, block by block and in constant memory, with a
//! [`Word`](crate::chain::Word) beside every cell; what the [`Layout`] does not state is found from the head of the file and
//! can be inspected as [`Findings`]. [`Output`] and [`CsvWriter`] write results that appear whole or not at all.
//!
//! None of these knows what the columns mean; [`convert()`] brings a recording and the channels of a sheet together.
//!
//! ```
//! use ohmwright::chain::Word;
//! use ohmwright::recording::{Block, ColumnRef, Layout, Reader};
//!
//! let text = "time;CH01;CH02\ns;mV/V;ohm\n0,00;0,0312;109,73\n0,02;-9999;lost\n";
//! let layout = Layout { missing: vec!["-9999".into()], ..Layout::default() };
//! let mut reader = Reader::new(text.as_bytes(), "run3.csv", &layout)?;
//! assert_eq!(reader.names(), ["time", "CH01", "CH02"]);
//! assert_eq!(reader.findings().to_string().lines().next(), Some("separator ';', decimal ',' (found)"));
//!
//! let wanted = [reader.find(&"CH01".into())?, reader.find(&ColumnRef::Number(3))?];
//! reader.select(&wanted, &[])?;
//! let mut block = Block::new(4096);
//! assert_eq!(reader.next_block(&mut block)?, 2);
//! assert_eq!(block.columns[0].values[0], 0.0312);
//! assert_eq!(block.columns[0].words, [Word::Good, Word::Missing]);
//! assert_eq!(block.columns[1].words, [Word::Good, Word::Unreadable]);
//! assert_eq!(block.seconds, [0.0, 0.02]);
//! assert_eq!(reader.next_block(&mut block)?, 0);
//!
//! let wrong = reader.find(&"CH3".into()).unwrap_err();
//! assert_eq!(wrong.to_string(), "run3.csv:1: value 'CH3': no column has this name; the nearest is 'CH01'");
//! # Ok::<(), ohmwright::recording::RecordingError>(())
//! ```

mod cell;
mod characters;
#[cfg(feature = "parquet")]
pub mod columnar;
mod convert;
mod detect;
mod error;
mod findings;
mod fingerprint;
mod moment;
mod output;
mod packed;
mod reader;
mod records;
mod start;
mod text;
mod trace;
mod undo;

pub(crate) use convert::prepare;
pub use convert::{
    ConvertError, OpenRows, Options, Rows, Summary, convert, convert_joined, convert_with, reader_of,
    settle_zero_files, settle_zeros,
};
pub use error::RecordingError;
pub use findings::{Findings, LineEnd, Origin, TimeScale};
pub use fingerprint::{Fingerprint, Taking};
pub use output::{CsvWriter, Digits, Head, HeadKind, NumberText, Output, ResultTable};
pub use packed::unpacked;
pub use reader::{Block, CellAt, ColumnTally, Reader, Tally};
pub use start::start;
pub use text::Texts;
pub use trace::{Asked, Trace, TracedChannel, Used};
pub use undo::{Undone, layout_of_results};

pub use crate::measurement::{Column, ColumnRef};
pub use crate::sheet::{Decimal, Encoding, Layout, Separator};
