//! Any bytes as a file of columns, Parquet where they end as such a file does and otherwise Arrow: read to the end as text and
//! through the reader, or refused; the same text whatever pieces it is taken in.
#![no_main]

use std::fs::File;
use std::io::{Read, Seek, Write};
use std::sync::{LazyLock, Mutex};

use libfuzzer_sys::fuzz_target;
use ohmwright::recording::columnar::{Columnar, layout_of_columns, text_of};
use ohmwright::recording::{Block, Layout, Reader, RecordingError};

/// Where the reading of a file ends that has rows without end, bytes of its text.
const ENOUGH: u64 = 1 << 20;

static FILE: LazyLock<Mutex<File>> = LazyLock::new(|| Mutex::new(tempfile::tempfile().expect("a place for a file")));

/// A file that holds these bytes.
fn file(bytes: &[u8]) -> File {
    let mut file = FILE.lock().expect("one thread");
    file.set_len(0).and_then(|()| file.rewind()).and_then(|()| file.write_all(bytes)).expect("a file for the bytes");
    file.rewind().and_then(|()| file.try_clone()).expect("a file for the bytes")
}

fn open(bytes: &[u8]) -> Result<impl Read, RecordingError> {
    let kind = if bytes.ends_with(b"PAR1") { Columnar::Parquet } else { Columnar::Arrow };
    text_of(file(bytes), kind, "run").map(|text| text.take(ENOUGH))
}

/// The text with what it ended in.
fn text(bytes: &[u8], into: usize) -> Result<(Vec<u8>, Option<String>), String> {
    let mut source = open(bytes).map_err(|e| e.to_string())?;
    let (mut text, mut buffer) = (Vec::new(), vec![0; into]);
    loop {
        match source.read(&mut buffer) {
            Ok(0) => return Ok((text, None)),
            Ok(n) => text.extend(&buffer[..n]),
            Err(e) => return Ok((text, Some(e.to_string()))),
        }
    }
}

fuzz_target!(|bytes: &[u8]| {
    let whole = text(bytes, 1 << 16);
    if let Ok((text, end)) = &whole {
        let cut = text.len() as u64 == ENOUGH;
        assert!(cut || std::str::from_utf8(text).is_ok(), "{text:?}");
        assert!(cut || text.ends_with(b"\n"));
        assert!(end.as_ref().is_none_or(|e| !e.is_empty()));
    }
    assert_eq!(text(bytes, 7), whole);
    let Ok(source) = open(bytes) else { return };
    let Ok(mut reader) = Reader::new(source, "run", &layout_of_columns(&Layout::default())) else { return };
    let columns: Vec<usize> = (0..reader.names().len().min(12)).collect();
    reader.select(&columns, &columns).expect("the columns are there");
    let mut block = Block::new(512);
    while let Ok(rows) = reader.next_block(&mut block) {
        if rows == 0 {
            break;
        }
        assert!(block.columns.iter().all(|c| c.values.len() == rows && c.words.len() == rows));
    }
});
