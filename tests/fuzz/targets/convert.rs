//! Any sheet over any recording, or several that are joined: converted or refused, to the same table whatever pieces the bytes
//! come in and however many rows are read together. Sheet and recordings are divided by lines of four percent signs; without one
//! the recording is a small one of our own.
#![no_main]

mod pieces;

use std::io::Read;

use libfuzzer_sys::fuzz_target;
use ohmwright::recording::{
    Block, CsvWriter, Decimal, Encoding, Layout, Options, Output, Reader, RecordingError, Rows, Separator,
    convert_joined, convert_with,
};
use ohmwright::sheet::Sheet;
use pieces::Pieces;

const RECORDING: &[u8] =
    b"time,CH01,R_deck,V_ex,load step\n0.00,0.0312,109.73,2.5,empty\n0.02,0.0313,109.74,2.5,empty\n\
    0.04,-9999,lost,2.5,\"lorry, midspan\"\n0.06,,109.8,,end\n1e3,0.5,1e9,-2.5,\n";

struct Source<'a> {
    bytes: &'a [u8],
    size: usize,
    is_file: bool,
}

impl Rows for Source<'_> {
    fn open(&mut self) -> Result<Box<dyn Read + '_>, RecordingError> {
        Ok(Box::new(Pieces { bytes: self.bytes, size: self.size }))
    }
    fn name(&self) -> &str {
        "run.csv"
    }
    fn is_file(&self) -> bool {
        self.is_file
    }
}

/// The table with the rows that were counted, or the message of the error.
fn table(sheet: &Sheet, parts: &[&[u8]], size: usize, is_file: bool) -> Result<(Vec<u8>, u64, Vec<String>), String> {
    let mut table = Vec::new();
    let mut out = CsvWriter::new(Output::to_writer(&mut table, "table"));
    let mut rows: Vec<Source> = parts.iter().map(|bytes| Source { bytes, size, is_file }).collect();
    let options = Options { rows: std::num::NonZeroUsize::new(size.min(4096)), ..Options::default() };
    let mut told = 0;
    let mut progress = |rows| told = rows;
    let (measurement, layout, keep) = (&sheet.measurement, &sheet.layout, &sheet.keep);
    let summary = match rows.as_mut_slice() {
        [only] => convert_with(measurement, layout, keep, only, &mut out, &options, &mut progress),
        several => {
            let mut parts: Vec<&mut dyn Rows> = several.iter_mut().map(|r| r as &mut dyn Rows).collect();
            convert_joined(measurement, layout, keep, &mut parts, &mut out, &options, &mut progress)
        }
    }
    .map_err(|e| e.to_string())?;
    out.finish().expect("memory takes everything");
    assert!(told <= summary.rows);
    let mut lines = summary.zeros;
    lines.extend(summary.joins);
    lines.extend(summary.remarks);
    Ok((table, summary.rows, lines))
}

/// How many rows the table has for whoever reads it; `None` where it is refused as no text.
fn rows_of(table: &[u8]) -> Option<u64> {
    let layout = Layout {
        separator: Some(Separator::Comma),
        decimal: Some(Decimal::Point),
        encoding: Some(Encoding::Utf8),
        names_line: Some(1),
        units_line: Some(0),
        comment: Some(String::new()),
        interval: Some(1.0),
        ..Layout::default()
    };
    let mut reader = Reader::new(table, "table.csv", &layout).ok()?;
    let mut block = Block::new(64);
    while reader.next_block(&mut block).expect("our own table") > 0 {}
    Some(reader.tally().rows)
}

fuzz_target!(|data: &[u8]| {
    const MARK: &[u8] = b"\n%%%%\n";
    let mut pieces = Vec::new();
    let mut rest = data;
    while let Some(at) = rest.windows(MARK.len()).position(|w| w == MARK).filter(|_| pieces.len() < 4) {
        pieces.push(&rest[..at]);
        rest = &rest[at + MARK.len()..];
    }
    pieces.push(rest);
    let text = pieces.remove(0);
    if pieces.is_empty() {
        pieces.push(RECORDING);
    }
    let Ok(text) = std::str::from_utf8(text) else { return };
    let Ok(sheet) = Sheet::read("sheet.toml", text) else { return };
    let whole = table(&sheet, &pieces, usize::MAX, true);
    assert_eq!(table(&sheet, &pieces, 1, true), whole);
    if let Ok((table, rows, _)) = &whole {
        assert!(std::str::from_utf8(table).is_ok());
        assert!(rows_of(table).is_none_or(|read| read == *rows), "{:?}", String::from_utf8_lossy(table));
    }
    let _ = table(&sheet, &pieces, 5, false);
});
