//! The head of a file, from which its shape is found.

use std::{format, io::Read, vec::Vec};

use crate::recording::{RecordingError, records::LONGEST};
use crate::sheet::Layout;

/// How much of a file is looked at before its first row is read.
const HEAD: usize = 64 << 10;
/// How much of it when stated lines, or long ones, lie further down. One line alone may be longer.
const HEAD_AT_MOST: usize = 4 << 20;

/// Reads enough of a file to find its shape; true when that is all of it.
pub(super) fn read_head(
    source: &mut impl Read,
    file: &str,
    layout: &Layout,
    live: bool,
) -> Result<(Vec<u8>, bool), RecordingError> {
    let stated = layout.header_end().max(layout.first_line.unwrap_or(0));
    let (bytes, lines) = match (live, layout.first_line) {
        (true, Some(first)) => (0, first.max(stated)),
        (true, None) => (0, stated.saturating_add(16)),
        (false, _) => (HEAD, stated.saturating_add(3)),
    };
    let mut head = std::vec![0; HEAD];
    let (mut filled, mut ends, mut last) = (0, 0u64, b' ');
    loop {
        if ends > 0 && (filled >= bytes && ends >= lines || filled >= HEAD_AT_MOST) {
            break;
        }
        if filled == head.len() {
            if filled >= LONGEST {
                let reason = format!("the line is longer than {} MiB", LONGEST >> 20);
                return Err(RecordingError::TooLong { file: file.into(), line: 1, reason });
            }
            head.resize((2 * filled).min(LONGEST), 0);
        }
        let free = head.get_mut(filled..).unwrap_or_default();
        match source.read(free) {
            Ok(0) => {
                head.truncate(filled);
                return Ok((head, true));
            }
            Ok(count) => {
                let new = free.get(..count).unwrap_or(free);
                for &byte in new {
                    // Whether a carriage return ends the line by itself shows in the next byte.
                    ends += u64::from(byte == b'\n' || last == b'\r');
                    last = byte;
                }
                filled = (filled + count).min(head.len());
            }
            Err(error) if error.kind() == std::io::ErrorKind::Interrupted => {}
            Err(error) => return Err(RecordingError::from_io(file, "read", &error)),
        }
    }
    head.truncate(filled);
    Ok((head, false))
}

/// Refuses a file that is mostly bytes which are no text.
pub(super) fn check_text(head: &[u8], file: &str) -> Result<(), RecordingError> {
    let refuse = |reason: &str| Err(RecordingError::NotText { file: file.into(), reason: reason.into() });
    let control = |b: &u8| (*b < b' ' && !matches!(b, b'\t' | b'\n' | b'\r' | 0x0b | 0x0c | 0x1a)) || *b == 0x7f;
    let controls = head.iter().filter(|b| control(b)).count();
    let broken: usize = head.utf8_chunks().map(|c| c.invalid().len()).sum();
    // A few damaged bytes are words in their cells. Compressed and binary data has a share of more than a half.
    let (bytes, junk) = (head.len(), controls + broken);
    if junk >= 16 && 5 * junk > bytes {
        if 5 * head.iter().filter(|b| **b == 0).count() > 2 * bytes {
            return refuse(
                "every second byte is zero, as in UTF-16 without a byte-order mark: state encoding = \"utf-16\"",
            );
        }
        return refuse(&format!("{} % of its first {bytes} bytes are no characters", 100 * junk / bytes.max(1)));
    }
    Ok(())
}
