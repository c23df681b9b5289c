//! Compressed recordings: gzip and Zstandard, known by their first bytes.

use std::boxed::Box;
use std::io::{self, Read};

use super::RecordingError;

/// First bytes of a member of gzip (RFC 1952, 2.3.1).
const GZIP: [u8; 2] = [0x1f, 0x8b];
/// First bytes of a Zstandard frame (RFC 8878, 3.1.1).
const ZSTANDARD: [u8; 4] = [0x28, 0xb5, 0x2f, 0xfd];

/// What was read to know what follows, and what follows.
struct Whole<R> {
    head: [u8; 4],
    from: usize,
    to: usize,
    rest: R,
}

impl<R: Read> Read for Whole<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let left = self.head.get(self.from..self.to).unwrap_or_default();
        if left.is_empty() {
            return self.rest.read(buffer);
        }
        let n = left.len().min(buffer.len());
        if let (Some(to), Some(from)) = (buffer.get_mut(..n), left.get(..n)) {
            to.copy_from_slice(from);
        }
        self.from += n;
        Ok(n)
    }
}

/// Returns the bytes of a recording, unpacked where it is compressed.
///
/// gzip (any number of members) and Zstandard (any number of frames) are known by their first bytes, whatever the file is called;
/// everything else passes as it is.
///
/// - `name`: the file as the user knows it, for messages.
///
/// # Errors
/// `Io` when the source refuses; a compressed file that is cut off or damaged gives its error when that place is read.
///
/// # Source
/// RFC 1952 (gzip), RFC 8878 (Zstandard); tests/packed.rs.
pub fn unpacked<'a>(mut source: impl Read + 'a, name: &str) -> Result<Box<dyn Read + 'a>, RecordingError> {
    let refuse = |e: &io::Error| RecordingError::from_io(name, "read", e);
    let mut head = [0u8; 4];
    let mut to = 0;
    while let Some(room) = head.get_mut(to..).filter(|room| !room.is_empty()) {
        match source.read(room) {
            Ok(0) => break,
            Ok(n) => to += n,
            Err(e) if e.kind() == io::ErrorKind::Interrupted => {}
            Err(e) => return Err(refuse(&e)),
        }
        // a pipe that has brought one line must not wait for more to see that this is text
        if !GZIP.starts_with(head.get(..to.min(2)).unwrap_or_default())
            && !ZSTANDARD.starts_with(head.get(..to).unwrap_or_default())
        {
            break;
        }
    }
    let whole = Whole { head, from: 0, to, rest: source };
    let begins = |magic: &[u8]| head.get(..to).is_some_and(|head| head.starts_with(magic));
    if begins(&GZIP) {
        return Ok(Box::new(flate2::read::MultiGzDecoder::new(whole)));
    }
    if begins(&ZSTANDARD) {
        let decoder = zstd::stream::read::Decoder::new(whole).map_err(|e| refuse(&e))?;
        return Ok(Box::new(decoder));
    }
    Ok(Box::new(whole))
}
